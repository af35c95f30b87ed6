//! The standard normal homogeneity test for a change of level.
//!
//! T after k readings is k z₁² + (n - k) z₂², z₁ and z₂ being the means of the first k and of the other standardised readings. It
//! compares the two levels with their own accuracy, as the likelihood ratio for normal readings does, so that moments near the
//! ends have the same chance as those in the middle. T₀ is the largest of all.
//!
//! # What is sought
//! With `seek=rising` only a change to a higher level counts (moments at which the later readings are the higher ones), with
//! `seek=falling` only one to a lower level. What is claimed is a change of level, not a trend.
//!
//! # Choices of p
//! p holds for normal readings, as many as there are, whose mean and standard deviation are estimated. `simulated` draws such
//! readings from a stated seed; small p are drawn from an upper bound, so that they keep their relative accuracy however small
//! they are, and the standard error is stated. `bound` is that upper bound itself, without randomness: the sum of the chances of
//! each moment (Worsley 1979). `best` is `simulated`. Published critical values came from simulations as well; that of the 5 %
//! level lies between 5.6 for 10 and 9.2 for 100 readings. `deviation` says whether the standard deviation is divided by n - 1,
//! to which those values belong, or by n; it moves T₀, not p.
//!
//! # Effect
//! The means before and after the moment that fits best, and their difference. Because the moment was picked for its
//! difference, the difference is too large on average, and no honest interval for it is known.
//!
//! # When another test fits better
//! The test was made for the difference (or ratio) of a station to a reference of its neighbours: form that series first, if there
//! is such a reference. A steady drift also makes it claim a change: prefer `mann-kendall` for a drift. A change near the middle
//! is found more often by `buishand-range`. Readings far from normal, or graded: `pettitt`. A single wild reading at an end is
//! enough for a claim here, so look at the chart. Readings that remember their predecessor make the test claim changes that are
//! not there.
//!
//! # Sources
//! H. Alexandersson (1986), A homogeneity test applied to precipitation data, *Journal of Climatology* 6, 661-675, sections 2 and 3.
//! H. Alexandersson and A. Moberg (1997), Homogenization of Swedish temperature data, part I, *International Journal of
//! Climatology* 17, 25-34. K. J. Worsley (1979), On the likelihood ratio test for a shift in location of normal populations,
//! *Journal of the American Statistical Association* 74, 365-367.

use super::change::{Change, direction, sought};
use super::declaration::Count;
use super::normal_change::{Deviation, DrawCount, How, PBy, Seed, Sizes, Walk, judge, mean};
use super::{Card, Claim, Column, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Seek, Source, Statistic};
use crate::null_distribution::normal_walk::Family;
use crate::reading::Series;

crate::parameters! {
    /// What the standard normal homogeneity test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// By what the sum of squares is divided for the standard deviation: sample (n - 1) or population (n). It does not change p.
        deviation: Deviation = Deviation::Sample,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// How many sets of normal readings are drawn.
        draws: DrawCount = Count(10_000),
        /// The seed of the draws; the same seed gives the same p.
        seed: Seed = Count(1),
    }
}

/// The test itself.
pub struct NormalHomogeneity;

impl Method for NormalHomogeneity {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "normal-homogeneity",
        title: "Standard normal homogeneity test for a change of level",
        question: "Did the level of measured readings change at some moment, perhaps near an end, and when?",
        null_hypothesis: "The readings come from one normal distribution, independently of each other.",
        claim: Claim::Change,
        scale: ScaleNeeded::Numeric,
        least_readings: 3,
        exact: "Never: p comes from a seeded simulation with a stated error, or from an upper bound.",
        assumes: &[
            "The readings are independent of each other.",
            "They are normal; near the ends single wild readings decide.",
            "There is no drift; a steady drift is claimed as a change too.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal readings are nothing special; many of them mean that the readings are not normal.",
        missing: "Gaps are closed up. Limits such as <0.5 cannot be used.",
        cost: "n times draws; bound: n",
        fits_better: &[
            ("mann-kendall", "the readings drift rather than jump"),
            ("buishand-range", "the change is near the middle of the series, or the level changes back"),
            ("pettitt", "the readings are graded, censored or far from normal"),
        ],
        sources: &[
            Source {
                authors: "H. Alexandersson",
                year: 1986,
                title: "A homogeneity test applied to precipitation data",
                place: "Journal of Climatology 6, 661-675, sections 2 and 3",
            },
            Source {
                authors: "H. Alexandersson and A. Moberg",
                year: 1997,
                title: "Homogenization of Swedish temperature data, part I: homogeneity test for linear trends",
                place: "International Journal of Climatology 17, 25-34",
            },
            Source {
                authors: "K. J. Worsley",
                year: 1979,
                title: "On the likelihood ratio test for a shift in location of normal populations",
                place: "Journal of the American Statistical Association 74, 365-367",
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
        let walk = Walk::of(series, "normal-homogeneity")?;
        let n = walk.readings();
        // Each partial sum in its own standard deviations; T is their square times the divisor.
        let deviation_of = |length: usize| (length as f64 * (n - length) as f64 / n as f64).sqrt();
        let standardised: Vec<f64> = (1..).zip(&walk.sums).map(|(length, sum)| sum / deviation_of(length)).collect();
        let sizes = Sizes::of(&standardised);
        let how = How { p_by: parameters.p_by, draws: parameters.draws, seed: parameters.seed };
        let (p, p_facts) = judge(question, Family::Standardised, n, sizes, &how)?;
        let divisor = parameters.deviation.divisor(n);
        let change = Change::at_largest(series, &walk.indices, &sought(question.seek, &standardised));
        let size = match question.seek {
            Seek::Either => sizes.either,
            Seek::Rising => sizes.rising,
            Seek::Falling => sizes.falling,
        };
        let mut facts = vec![
            Fact::new("mean", "Mean", walk.mean),
            Fact::new("deviation", "Standard deviation", Some(walk.length / divisor.sqrt()).filter(|size| size.is_finite())),
            Fact::new("t0", "T0: largest T", divisor * size * size),
        ];
        facts.extend(change.facts("mean", mean));
        facts.extend(p_facts);
        let t: Vec<f64> = standardised.iter().map(|sum| divisor * sum * sum).collect();
        let column = Column { key: "t", label: "T after this reading" };
        Ok(Outcome {
            statistic: Statistic { name: "T0", value: divisor * size * size },
            p,
            direction: direction(sizes.rising, sizes.falling),
            smallest_p: None,
            readings_used: n,
            facts,
            evidence: vec![Evidence::Table(change.table("T after each reading", column, &t))],
            cautions: change.cautions(),
        })
    }
}
