//! Buishand's tests for a change of level: the adjusted partial sums and their range.
//!
//! S after k readings is the sum of their deviations from the mean of all; it starts and ends at 0. If the level rose at some
//! moment, S is lowest there; if it fell, S is highest there. Divided by the standard deviation and by √n, the largest distance
//! of S from 0 is Q, and the distance between its highest and lowest value is R.
//!
//! # Which statistic
//! Q is for one change, and most powerful for one near the middle of the series. R also answers to a level that changes and
//! changes back. R has no direction: it is judged with `seek=either` only. The moment shown is always that of Q.
//!
//! # What is sought
//! With `seek=rising` only a change to a higher level counts (the largest -S), with `seek=falling` only one to a lower level.
//! What is claimed is a change of level, not a trend.
//!
//! # Choices of p
//! p holds for normal readings, as many as there are, whose mean and standard deviation are estimated. `simulated` draws such
//! readings from a stated seed; small p are drawn from an upper bound, so that they keep their relative accuracy however small
//! they are, and the standard error is stated. `bound` is that upper bound itself, without randomness: the sum of the chances of
//! each moment. `best` is `simulated`. The published table of critical values (10 to 100 readings) came from a simulation as well.
//! `deviation` says whether the standard deviation is divided by n, as in the paper, or by n - 1; it moves Q and R, not p.
//!
//! # Effect
//! The means before and after the moment that fits best, and their difference. Because the moment was picked for its
//! difference, the difference is too large on average, and no honest interval for it is known.
//!
//! # When another test fits better
//! A steady drift also makes this test claim a change: prefer `mann-kendall` for a drift. A change near an end is found more
//! often by `normal-homogeneity`. Readings far from normal, or graded: `pettitt`. Readings that remember their predecessor make
//! the test claim changes that are not there.
//!
//! # Sources
//! T. A. Buishand (1982), Some methods for testing the homogeneity of rainfall records, *Journal of Hydrology* 58, 11-27,
//! sections 2 and 3 and table 1. T. A. Buishand (1984), Tests for detecting a shift in the mean of hydrological time series,
//! *Journal of Hydrology* 73, 51-69 (the statistic U, shown as a fact).

use super::change::{Change, direction, sought};
use super::declaration::Count;
use super::normal_change::{Deviation, DrawCount, How, PBy, Seed, Sizes, Walk, judge, mean};
use super::{Card, Claim, Column, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic};
use crate::null_distribution::normal_walk::Family;
use crate::reading::Series;

crate::choices! {
    /// Which statistic is judged.
    pub enum Which {
        /// Q, the largest distance of the partial sums from 0.
        Q = "q",
        /// R, the range of the partial sums.
        R = "r",
    }
}

crate::parameters! {
    /// What Buishand's test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which statistic is judged: q, the largest partial sum, or r, their range.
        statistic: Which = Which::Q,
        /// By what the sum of squares is divided for the standard deviation: population (n) or sample (n - 1). It does not change p.
        deviation: Deviation = Deviation::Population,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// How many sets of normal readings are drawn.
        draws: DrawCount = Count(10_000),
        /// The seed of the draws; the same seed gives the same p.
        seed: Seed = Count(1),
    }
}

/// The test itself.
pub struct BuishandRange;

impl Method for BuishandRange {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "buishand-range",
        title: "Buishand's partial sums and range test for a change of level",
        question: "Did the level of measured readings change at some moment, and when?",
        null_hypothesis: "The readings come from one normal distribution, independently of each other.",
        claim: Claim::Change,
        scale: ScaleNeeded::Numeric,
        least_readings: 3,
        exact: "Never: p comes from a seeded simulation with a stated error, or from an upper bound.",
        assumes: &[
            "The readings are independent of each other.",
            "They are about normal; the test is not very sensitive to that for more than some 20 readings.",
            "There is no drift; a steady drift is claimed as a change too.",
            "Seek, statistic and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal readings are nothing special; many of them mean that the readings are not normal.",
        missing: "Gaps are closed up. Limits such as <0.5 cannot be used.",
        cost: "n times draws; bound: n",
        fits_better: &[
            ("mann-kendall", "the readings drift rather than jump"),
            ("normal-homogeneity", "the change may be near an end of the series"),
            ("pettitt", "the readings are graded, censored or far from normal"),
        ],
        sources: &[
            Source {
                authors: "T. A. Buishand",
                year: 1982,
                title: "Some methods for testing the homogeneity of rainfall records",
                place: "Journal of Hydrology 58, 11-27, sections 2 and 3",
            },
            Source {
                authors: "T. A. Buishand",
                year: 1984,
                title: "Tests for detecting a shift in the mean of hydrological time series",
                place: "Journal of Hydrology 73, 51-69",
            },
            Source {
                authors: "A. B. Owen, Y. Maximov and M. Chertkov",
                year: 2019,
                title: "Importance sampling the union of rare events with an application to power systems analysis",
                place: "Electronic Journal of Statistics 13, 231-254",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let walk = Walk::of(series, "buishand-range")?;
        let n = walk.readings();
        let sizes = Sizes::of(&walk.sums);
        let range = sizes.rising + sizes.falling;
        let (family, judged) = match parameters.statistic {
            Which::Q => (Family::PartialSums, sizes),
            Which::R => (Family::Differences, Sizes { either: range, ..sizes }),
        };
        let how = How { p_by: parameters.p_by, draws: parameters.draws, seed: parameters.seed };
        let (p, p_facts) = judge(question, family, n, judged, &how)?;
        // In units of the standard deviation times √n.
        let unit = (parameters.deviation.divisor(n) / n as f64).sqrt();
        let change = Change::at_largest(series, &walk.indices, &sought(question.seek, &walk.sums));
        let (q, r) = (sizes.either * unit, range * unit);
        let deviation = walk.length / parameters.deviation.divisor(n).sqrt();
        let mut facts = vec![
            Fact::new("mean", "Mean", walk.mean),
            Fact::new("deviation", "Standard deviation", Some(deviation).filter(|deviation| deviation.is_finite())),
            Fact::new("q", "Q over the root of n: largest distance of the partial sums from 0", q),
            Fact::new("r", "R over the root of n: range of the partial sums", r),
            Fact::new(
                "u",
                "U of 1984: mean square of the partial sums",
                walk.sums.iter().map(|sum| sum * sum).sum::<f64>() / (n as f64 + 1.0),
            ),
        ];
        facts.extend(change.facts("mean", mean));
        facts.extend(p_facts);
        let sums: Vec<f64> = walk.sums.iter().map(|sum| sum * walk.length).collect();
        let column = Column { key: "partial_sum", label: "Sum of deviations up to this reading" };
        let (name, value) = if parameters.statistic == Which::Q { ("Q/√n", q) } else { ("R/√n", r) };
        Ok(Outcome {
            statistic: Statistic { name, value },
            p,
            direction: direction(sizes.rising, sizes.falling),
            smallest_p: None,
            readings_used: n,
            facts,
            evidence: vec![Evidence::Table(change.table("Sums of deviations from the mean", column, &sums))],
            cautions: change.cautions(),
        })
    }
}
