//! What an observed statistic attains: its tails, and the smallest tails that it could have had.

use super::{By, Lattice, Tails, normal};

/// The tails of an observed statistic beside those of the most extreme outcomes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Attained {
    /// The tails of the observed value.
    pub tails: Tails,
    /// The two-sided p.
    pub either: f64,
    /// The lower tail of the lowest value and the upper tail of the highest one.
    pub extremes: Tails,
    /// The smallest two-sided p.
    pub least_either: f64,
    /// How all of them were got.
    pub by: By,
}

impl Attained {
    /// From the exact null distribution; two-sided is twice the smaller tail. A value between two points of the
    /// distribution, as when ties are ignored, is judged on the safe side.
    pub fn exact(null: &Lattice, value: i64) -> Self {
        Attained::doubled(null.safe_tails(value), null.extremes(), By::Exact)
    }

    /// From tails that are known; two-sided is twice the smaller tail.
    ///
    /// A tail below 2.2e-308, the smallest number that is kept to full precision, is given as that number, so that no p
    /// is ever 0.
    pub fn doubled(tails: Tails, extremes: Tails, by: By) -> Self {
        let tails = Tails { lower: tails.lower.max(f64::MIN_POSITIVE), upper: tails.upper.max(f64::MIN_POSITIVE) };
        Attained { tails, either: tails.doubled(), extremes, least_either: extremes.doubled(), by }
    }

    /// From the exact null distribution; two-sided are all values at least as far from `centre`.
    pub fn by_distance(null: &Lattice, value: i64, centre: f64) -> Self {
        let slack = 1e-12 * (null.highest() - null.lowest()).max(1) as f64;
        let either = |value: i64| {
            let far = (value as f64 - centre).abs() - slack;
            null.chance_of(|point| (point as f64 - centre).abs() >= far)
        };
        let least_either = either(null.lowest()).min(either(null.highest()));
        Attained { either: either(value).max(f64::MIN_POSITIVE), least_either, ..Attained::exact(null, value) }
    }

    /// From the normal approximation: the statistic less its mean, the lowest and highest values less the mean, the
    /// variance, and half a step as the correction for continuity (0 for none).
    pub fn normal(deviation: f64, range: (f64, f64), variance: f64, correction: f64, by: By) -> Self {
        let tails = |deviation| normal::corrected_tails(deviation, 0.0, variance, 2.0 * correction);
        let extremes = Tails { lower: tails(range.0).lower, upper: tails(range.1).upper };
        Attained::doubled(tails(deviation), extremes, by)
    }
}
