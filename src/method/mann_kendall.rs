//! Mann and Kendall's test: do later readings tend to be higher, or lower, than earlier ones?
//!
//! Every reading is compared with every earlier one. S is the number of pairs that rise less the number that fall. Without a
//! trend every order of the readings is equally probable, and the exact p counts them, ties among the readings included.
//! The median slope, where differences mean something, tells how fast.
//!
//! # Choices
//! `p_by` picks the exact or the normal form; `continuity` moves S by 1 towards 0 in the normal form. `dependence` says what
//! is done about readings that remember their predecessors; see [`super::dependence`]. `per` says over what time the slope
//! is stated, and `limits_by` from what its limits are found; see [`super::slope`].
//!
//! # Effect
//! tau-b, between -1 and 1: the rises less the falls, as a share of the pairs that could differ. The median slope with
//! its limits.
//!
//! # Evidence
//! For each reading, how many earlier ones it exceeds and how many exceed it; up to 2,000 readings.
//!
//! # When another test fits better
//! Readings that follow the seasons: `seasonal-kendall`. A few readings that are to be shown in pairs: `cox-stuart`. A step
//! rather than a drift: `pettitt`.
//!
//! # Sources
//! H. B. Mann (1945), Nonparametric tests against trend, *Econometrica* 13, 245-259. M. G. Kendall (1975), *Rank
//! Correlation Methods*, 4th ed., chapters 1, 4 and 5. P. K. Sen (1968), as cited for the slope.

use super::declaration::{Count, Proportion};
use super::dependence::{self, Dependence, Treatment};
use super::kendall::{EXACT, MISSING, Ordered, Score, standardised};
use super::question::PBy;
use super::slope::{self, Axis, Estimate, LimitsBy, Per, points};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::Slopes;
use crate::comparison::order::earlier_lower_and_higher;
use crate::reading::Series;

crate::parameters! {
    /// What Mann and Kendall's test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Whether the normal approximation is corrected for continuity.
        continuity: bool = true,
        /// What is done about readings that remember their predecessors: ignore, variance, prewhiten or shuffle.
        dependence: Dependence = Dependence::Ignore,
        /// For dependence=variance: the longest lag that counts; 0 for all.
        lags: Count<0, 100_000> = Count(0),
        /// For dependence=variance: whether lags count whose autocorrelation may well be chance.
        all_lags: bool = false,
        /// For dependence=shuffle: readings in a block; 0 for twice the cube root of their number.
        block: Count<0, 100_000> = Count(0),
        /// For dependence=shuffle: how many random orders are drawn.
        draws: Count<100, 1_000_000> = Count(5_000),
        /// For dependence=shuffle: the seed; the same seed gives the same orders.
        seed: Count<0, 4_294_967_295> = Count(1),
        /// Over which length of time the slope is stated.
        per: Per = Per::Usual,
        /// From what the limits of the slope are found.
        limits_by: LimitsBy = LimitsBy::Best,
        /// Confidence of the limits of the slope.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct MannKendall;

/// Up to so many readings, the evidence is listed.
const MOST_LISTED: usize = 2_000;
/// Up to so many readings, the slope is attached; `theil-sen` gives it for more.
const MOST_WITH_SLOPE: usize = 20_000;

impl Method for MannKendall {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "mann-kendall",
        title: "Mann-Kendall test for trend",
        question: "Do later readings tend to be higher, or lower, than earlier ones?",
        null_hypothesis: "Every order of the readings is equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: EXACT,
        assumes: &[
            "Apart from a trend, the readings are independent and come from one distribution; dependence between neighbours can be allowed for.",
            "Readings can be ordered; for the slope, their differences mean something.",
            "There is no season, or its effect is small beside the trend.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "A tied pair counts neither as a rise nor as a fall; the exact null distribution and the variance have the same ties.",
        missing: MISSING,
        cost: "n log n, plus the counting within the exact range",
        fits_better: &[
            ("cox-stuart", "the evidence is to be shown in pairs, one for each two readings"),
            ("jonckheere-terpstra", "each moment has a sample of its own"),
            ("pettitt", "a step is looked for rather than a drift"),
        ],
        sources: &[
            Source {
                authors: "H. B. Mann",
                year: 1945,
                title: "Nonparametric tests against trend",
                place: "Econometrica 13, 245-259",
            },
            Source {
                authors: "M. G. Kendall",
                year: 1975,
                title: "Rank Correlation Methods, 4th edition",
                place: "Griffin, chapters 1, 4 and 5",
            },
            slope::SOURCES[0],
            dependence::SOURCES[0],
            dependence::SOURCES[1],
        ],
        repeated_moments: true,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let ordered = Ordered::of(series);
        let score = Score::of(&ordered);
        if score.moment_sizes.len() < 2 {
            return Err(Refusal::Because(
                "all readings stand at one moment; a trend needs readings at two moments at least".into(),
            ));
        }
        if score.rises + score.falls == 0 {
            return Err(Refusal::AllTied { compared: score.pairs() as usize });
        }
        let treated = dependence::judge(series, &ordered, &score, &parameters.treatment())?;
        let (p, smallest) = question.judge(&treated.attained);
        let mut facts = vec![
            Fact::new("s", "S: rises less falls", score.s()),
            Fact::new("rises", "Pairs that rise", score.rises),
            Fact::new("falls", "Pairs that fall", score.falls),
            Fact::new("ties", "Tied pairs", score.pairs() - score.rises - score.falls),
            Fact::new("tau", "Kendall's tau-b", score.tau_b()),
            Fact::new("variance", "Variance of S without a trend", score.variance()),
            Fact::new("z", "S, standardised", standardised(score.s(), score.variance(), parameters.continuity)),
        ];
        facts.extend(treated.facts);
        facts.extend(question.p_facts(&treated.attained));
        let mut cautions = treated.cautions;
        if series.scale.grades().is_none() && score.readings() <= MOST_WITH_SLOPE {
            let axis = Axis::of(series, parameters.per)?;
            let slopes = Slopes::new(points(series, &ordered, &axis));
            let places = slope::places(&score, slopes.count(), parameters.limits_by, parameters.confidence.0)?;
            facts.extend(Estimate::of(&slopes, places).facts(&axis.unit(series)));
            if ordered.values.iter().any(|value| value.is_censored()) {
                cautions.push(
                    "In the slope, a limit such as <0.5 counts as 0.5; with many of them it is too flat or too steep.".into(),
                );
            }
        }
        cautions.extend(score.caution_on_ties());
        Ok(Outcome {
            statistic: Statistic { name: "S", value: treated.s as f64 },
            p,
            direction: Direction::of(treated.s as f64),
            smallest_p: Some(smallest),
            readings_used: treated.readings,
            facts,
            evidence: (score.readings() <= MOST_LISTED).then(|| Evidence::Table(listed(series, &ordered))).into_iter().collect(),
            cautions,
        })
    }
}

impl Parameters {
    fn treatment(&self) -> Treatment {
        Treatment {
            dependence: self.dependence,
            lags: self.lags.0,
            all_lags: self.all_lags,
            block: self.block.0,
            draws: self.draws.0,
            seed: self.seed.0,
            p_by: self.p_by,
            continuity: self.continuity,
        }
    }
}

/// For each reading, the earlier ones that it exceeds and that exceed it.
fn listed(series: &Series, ordered: &Ordered) -> Table {
    let columns = vec![
        Column { key: "reading", label: "Reading" },
        Column { key: "moment", label: "Its moment" },
        Column { key: "value", label: "Its value" },
        Column { key: "earlier_lower", label: "Earlier readings that are lower" },
        Column { key: "earlier_higher", label: "Earlier readings that are higher" },
        Column { key: "part", label: "Its part in S" },
    ];
    let parts = earlier_lower_and_higher(&ordered.values, &ordered.moment_sizes);
    let row = |(&index, (lower, higher)): (&usize, (u64, u64))| -> Vec<Datum> {
        vec![
            (index + 1).into(),
            series.moments.label(index).into(),
            Datum::of_reading(series, index),
            lower.into(),
            higher.into(),
            (lower as i64 - higher as i64).into(),
        ]
    };
    Table {
        caption: "Each reading and the earlier ones".into(),
        rows: ordered.indices.iter().zip(parts).map(row).collect(),
        columns,
    }
}
