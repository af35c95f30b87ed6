//! What the screens for a random order have in common.
//!
//! Such a screen counts how the readings change from one to the next. Two kinds of order are not random: *smooth*, where
//! neighbours resemble each other because the readings drift or move in waves, and *alternating*, where high and low
//! readings take turns. A screen cannot tell a rise from a fall: both are smooth, and a series and its mirror image give
//! the same statistic. So with `seek=rising` or `seek=falling` only a smooth order counts as evidence, and with
//! `seek=either` the screen's own parameter `toward` says which order counts.

use super::declaration::Kind;
use super::{Fact, Question, Refusal, Seek};
use crate::null_distribution::{Attained, By, Lattice, Probability};

crate::choices! {
    /// Which order of the readings counts as evidence when a change in either direction is sought.
    pub enum Toward {
        /// A smooth and an alternating order both count; p is two-sided.
        Either = "either",
        /// Only a smooth order counts: neighbours resemble each other, as in a drift or a slow wave; p is one-sided.
        Smooth = "smooth",
        /// Only an alternating order counts: high and low readings take turns; p is one-sided.
        Alternating = "alternating",
    }
}

crate::choices! {
    /// What counts as at least as extreme when both a smooth and an alternating order count.
    pub enum TwoSided {
        /// Twice the smaller tail, at most 1.
        Doubled = "doubled",
        /// All outcomes that are as probable as the observed one, or less. Exact p only.
        Probability = "probability",
    }
}

/// The name of an exact null distribution of untied readings that is used for tied ones.
pub const UNTIED: By = By::Approximation("exact distribution of untied readings");

/// What a statistic attains when its low values are smooth and its high ones alternating.
pub fn attained(null: &Lattice, value: i64, two_sided: TwoSided) -> Attained {
    let doubled = Attained::exact(null, value);
    match two_sided {
        TwoSided::Doubled => doubled,
        TwoSided::Probability => {
            // Equal chances may differ in their last digits, for they were added up in another order.
            let as_improbable =
                |limit: f64| null.points().map(|(_, mass)| mass).filter(|mass| *mass <= limit * (1.0 + 1e-9)).sum();
            let least = null.points().map(|(_, mass)| mass).fold(f64::INFINITY, f64::min);
            let at_most_one = |sum: f64| sum.clamp(f64::MIN_POSITIVE, 1.0);
            Attained {
                either: at_most_one(as_improbable(null.mass(value))),
                least_either: at_most_one(as_improbable(least)),
                ..doubled
            }
        }
    }
}

/// The p-value for what was asked, the smallest one that could have been attained, and the facts that state them.
///
/// # Errors
/// A trend is sought, but only an alternating order is to count.
pub fn judge(question: &Question, toward: Toward, attained: &Attained) -> Result<(Probability, f64, [Fact; 4]), Refusal> {
    let counts = match (question.seek, toward) {
        (Seek::Either, toward) => toward,
        (_, Toward::Either | Toward::Smooth) => Toward::Smooth,
        (seek, Toward::Alternating) => {
            return Err(Refusal::Because(format!(
                "a trend makes the order of the readings smooth, so seek={} and toward={} contradict each other; send seek=either with toward=alternating",
                seek.word(),
                Toward::Alternating.write().unwrap_or_default()
            )));
        }
    };
    let pick = |smooth: f64, alternating: f64, either: f64| match counts {
        Toward::Smooth => smooth,
        Toward::Alternating => alternating,
        Toward::Either => either,
    };
    let (tails, extremes) = (attained.tails, attained.extremes);
    let value = pick(tails.lower, tails.upper, attained.either).min(1.0);
    let smallest = pick(extremes.lower, extremes.upper, attained.least_either).min(1.0);
    let facts = [
        Fact::new("p_smooth", "p if only a smooth order had counted", tails.lower.min(1.0)),
        Fact::new("p_alternating", "p if only an alternating order had counted", tails.upper.min(1.0)),
        Fact::new("p_either", "p for a smooth or an alternating order", attained.either.min(1.0)),
        Fact::new("smallest_p", "Smallest p these readings could have given", smallest),
    ];
    Ok((Probability { value, by: attained.by }, smallest, facts))
}
