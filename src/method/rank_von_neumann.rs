//! The rank version of von Neumann's ratio test for randomness.
//!
//! The readings are replaced by their ranks. NM is the sum of squared steps from each rank to the next; divided by the sum of
//! squares about the mean rank it is RVN, which is 2 on average in a random order. A small ratio means that neighbours
//! resemble each other: the readings drift, move in waves, or remember their predecessor. A large one means that they
//! alternate.
//!
//! # What is sought
//! A rise and a fall both give a small ratio, and the ratio does not tell which. With `seek=rising` or `seek=falling` only a
//! small ratio counts; with `seek=either`, `toward` decides: `smooth` is a small ratio, `alternating` is a large one. What is
//! claimed is that the order is not random, not that the readings rise or fall.
//!
//! # Choices
//! `p_by=beta` takes the symmetric beta distribution on 0 to 4 with the variance of RVN, as the paper advises for more than 10
//! readings; `p_by=normal` the normal distribution with mean 2 and that variance, without a continuity correction. `best` is
//! exact where that is feasible, else beta. `ties=corrected` refers the exact p to all arrangements of these very ranks, and
//! takes their variance for the approximations; `ties=ignored` takes the variance for ranks without ties, as the paper does
//! (4(n-2)(5n²-2n-9) / (5n(n+1)(n-1)²); the simpler 20/(5n+7) is not used).
//!
//! # Effect
//! 1 - RVN/2 estimates the correlation between the ranks of neighbours, from about -1 (alternating) over 0 (random) to nearly 1
//! (smooth). No interval for it is in general use.
//!
//! # When another test fits better
//! `mann-kendall` or `spearman` if the question is a trend. A finding here is a reason to judge a trend by a method that allows
//! for dependence between neighbours.
//!
//! # Sources
//! R. Bartels (1982), The rank version of von Neumann's ratio test for randomness, *Journal of the American Statistical
//! Association* 77, 40-46, sections 2 and 3. J. von Neumann (1941), Distribution of the ratio of the mean square successive
//! difference to the variance, *Annals of Mathematical Statistics* 12, 367-395. A. Wald and J. Wolfowitz (1943), An exact test
//! for randomness in the non-parametric case based on serial correlation, *Annals of Mathematical Statistics* 14, 378-388
//! (moments over all arrangements, from which the variance with ties follows).

use super::choices::TieCorrection;
use super::screen::{Toward, TwoSided, UNTIED, attained, judge};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::midranks::{Classes, classes, doubled_midranks};
use crate::null_distribution::rank_steps::{self, MOST_PRODUCTS};
use crate::null_distribution::{Attained, By, Tails, beta, normal};
use crate::reading::{Series, Value};

crate::choices! {
    /// Which form of the p-value is wanted.
    pub enum PBy {
        /// Exact where feasible, else the beta approximation; the reply says which.
        Best = "best",
        /// Exact, or a refusal that states the largest size.
        Exact = "exact",
        /// The symmetric beta distribution on 0 to 4 with the variance of the ratio.
        Beta = "beta",
        /// The normal distribution with mean 2 and the variance of the ratio, without continuity correction.
        Normal = "normal",
    }
}

crate::parameters! {
    /// What the rank version of von Neumann's test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which order counts as evidence with seek=either: smooth (a small ratio), alternating (a large one), or either.
        toward: Toward = Toward::Either,
        /// Whether equal readings are allowed for in the null distribution.
        ties: TieCorrection = TieCorrection::Corrected,
        /// What counts as at least as extreme when small and large ratios both count.
        two_sided: TwoSided = TwoSided::Doubled,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
    }
}

/// The test itself.
pub struct RankVonNeumann;

const BETA: By = By::Approximation("beta");
const NORMAL: By = By::Approximation("normal");

impl Method for RankVonNeumann {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "rank-von-neumann",
        title: "Rank version of von Neumann's ratio test",
        question: "Do neighbouring readings resemble each other, or differ, more than readings in random order?",
        null_hypothesis: "Every order of the readings is equally probable.",
        claim: Claim::Pattern,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Up to 12 readings without ties. With ties: up to 100 million products of chances, such as 30 readings in three grades.",
        assumes: &[
            "Apart from a pattern in time, the readings are independent and come from one distribution.",
            "Readings can be ordered; their differences need not mean anything.",
            "Seek, toward and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal readings share the mean of their ranks. The null distribution has the same equal ranks, or none.",
        missing: "Gaps are closed up. A limit such as <0.5 is ranked by the readings to which its order is certain, and counts half for each of the others.",
        cost: "n log n beyond the exact range",
        fits_better: &[
            ("mann-kendall", "the question is whether the readings rise or fall"),
            ("runs-about-median", "runs are to be shown as evidence"),
        ],
        sources: &[
            Source {
                authors: "R. Bartels",
                year: 1982,
                title: "The rank version of von Neumann's ratio test for randomness",
                place: "Journal of the American Statistical Association 77, 40-46, sections 2 and 3",
            },
            Source {
                authors: "J. von Neumann",
                year: 1941,
                title: "Distribution of the ratio of the mean square successive difference to the variance",
                place: "Annals of Mathematical Statistics 12, 367-395",
            },
            Source {
                authors: "A. Wald and J. Wolfowitz",
                year: 1943,
                title: "An exact test for randomness in the non-parametric case based on serial correlation",
                place: "Annals of Mathematical Statistics 14, 378-388",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let ranked = Ranked::of(series)?;
        let variance = ranked.variance(parameters.ties);
        let attained = ranked.attained(variance, parameters)?;
        let (p, smallest, p_facts) = judge(question, parameters.toward, &attained)?;
        let ratio = ranked.ratio();
        let mut facts = vec![
            Fact::new("squared_steps", "NM: sum of squared steps between ranks", ranked.squared_steps as f64 / 4.0),
            Fact::new("spread", "Sum of squares of the ranks about their mean", ranked.spread / 4.0),
            Fact::new("neighbour_correlation", "Correlation between the ranks of neighbours, 1 - RVN/2", 1.0 - ratio / 2.0),
            Fact::new("expected", "RVN expected of a random order", 2.0),
            Fact::new("variance", "Variance of RVN in a random order", variance),
            Fact::new("z", "RVN, standardised", (variance > 0.0).then(|| (ratio - 2.0) / variance.sqrt())),
        ];
        facts.extend(p_facts);
        Ok(Outcome {
            statistic: Statistic { name: "RVN", value: ratio },
            p,
            direction: Direction::Neither,
            smallest_p: Some(smallest),
            readings_used: ranked.indices.len(),
            facts,
            evidence: vec![Evidence::Table(ranked.table(series))],
            cautions: ranked.cautions(series, attained.by),
        })
    }
}

/// The readings' ranks, all doubled, so that they are whole numbers; sums of their squares are four times too large.
struct Ranked {
    indices: Vec<usize>,
    ranks: Vec<u64>,
    classes: Classes,
    squared_steps: u64,
    spread: f64,
    fourth_powers: f64,
}

impl Ranked {
    fn of(series: &Series) -> Result<Self, Refusal> {
        let (indices, values): (Vec<usize>, Vec<Value>) = series.present().unzip();
        let ranks = doubled_midranks(&values);
        let classes = classes(&ranks);
        if classes.len() < 2 {
            return Err(Refusal::AllTied { compared: ranks.len() });
        }
        let mean = (ranks.len() + 1) as f64;
        let powers = |power: i32| ranks.iter().map(|&rank| (rank as f64 - mean).powi(power)).sum();
        let (spread, fourth_powers) = (powers(2), powers(4));
        let squared_steps = ranks.windows(2).map(|pair| pair[0].abs_diff(pair[1]).pow(2)).sum();
        Ok(Ranked { indices, ranks, classes, squared_steps, spread, fourth_powers })
    }

    fn ratio(&self) -> f64 {
        self.squared_steps as f64 / self.spread
    }

    fn is_tied(&self) -> bool {
        self.classes.len() < self.ranks.len()
    }

    /// The variance of the ratio over all arrangements of the ranks, or over those of as many ranks without ties.
    fn variance(&self, ties: TieCorrection) -> f64 {
        let n = self.ranks.len() as f64;
        match ties {
            TieCorrection::Corrected => {
                (4.0 * n - 6.0) / (n * (n - 1.0)) - 2.0 * self.fourth_powers / ((n - 1.0) * self.spread * self.spread)
            }
            TieCorrection::Ignored => 4.0 * (n - 2.0) * (5.0 * n * n - 2.0 * n - 9.0) / (5.0 * n * (n + 1.0) * (n - 1.0).powi(2)),
        }
    }

    fn attained(&self, variance: f64, parameters: &Parameters) -> Result<Attained, Refusal> {
        let ignored = parameters.ties == TieCorrection::Ignored && self.is_tied();
        let untied: Classes = (1..=self.ranks.len() as u64).map(|rank| (2 * rank, 1)).collect();
        let classes = if ignored { &untied } else { &self.classes };
        let effort = rank_steps::effort(classes);
        let feasible = effort <= MOST_PRODUCTS;
        match parameters.p_by {
            PBy::Exact if !feasible => {
                let millions = |products: f64| (products / 1e6).min(1e15).ceil() as usize;
                let what = "million products of chances (12 readings without ties)";
                Err(Refusal::BeyondExact { what, have: millions(effort), most: millions(MOST_PRODUCTS) })
            }
            PBy::Best | PBy::Exact if feasible => {
                let null = rank_steps::sum_of_squared_steps(classes);
                let attained = attained(&null, self.squared_steps as i64, parameters.two_sided);
                Ok(Attained { by: if ignored { UNTIED } else { By::Exact }, ..attained })
            }
            PBy::Normal => Ok(self.approximate(NORMAL, |ratio| {
                let z = (ratio - 2.0) / variance.sqrt();
                Tails { lower: normal::lower_tail(z), upper: normal::upper_tail(z) }
            })),
            _ => Ok(self.approximate(BETA, |ratio| {
                let shape = (4.0 / variance - 1.0) / 2.0;
                let (low, high) = (ratio / 4.0, 1.0 - ratio / 4.0);
                Tails { lower: beta::lower_tail(shape, shape, low, high), upper: beta::upper_tail(shape, shape, low, high) }
            })),
        }
    }

    /// Tails by an approximation, those of the smoothest and of the liveliest order among them.
    fn approximate(&self, by: By, tails: impl Fn(f64) -> Tails) -> Attained {
        let (smoothest, liveliest) = rank_steps::extremes(&self.ranks);
        let extremes =
            Tails { lower: tails(smoothest as f64 / self.spread).lower, upper: tails(liveliest as f64 / self.spread).upper };
        Attained::doubled(tails(self.ratio()), extremes, by)
    }

    fn table(&self, series: &Series) -> Table {
        let columns = vec![
            Column { key: "reading", label: "Reading" },
            Column { key: "moment", label: "Its moment" },
            Column { key: "value", label: "Its value" },
            Column { key: "rank", label: "Rank" },
            Column { key: "step", label: "Step from the rank before" },
            Column { key: "squared", label: "Step squared" },
        ];
        let row = |place: usize| -> Vec<Datum> {
            let (index, rank) = (self.indices[place], self.ranks[place] as f64 / 2.0);
            let step = (place > 0).then(|| rank - self.ranks[place - 1] as f64 / 2.0);
            vec![
                (index + 1).into(),
                series.moments.label(index).into(),
                Datum::of_reading(series, index),
                rank.into(),
                step.into(),
                step.map(|step| step * step).into(),
            ]
        };
        Table { caption: "Ranks and their steps".into(), rows: (0..self.ranks.len()).map(row).collect(), columns }
    }

    fn cautions(&self, series: &Series, by: By) -> Vec<String> {
        let mut cautions = Vec::new();
        if 2 * self.classes.len() <= self.ranks.len() && by != By::Exact {
            cautions.push(format!(
                "{} readings take only {} different ranks; the approximation is rough, and its p should be taken as such.",
                self.ranks.len(),
                self.classes.len()
            ));
        }
        if series.values.iter().any(|value| value.is_censored()) {
            cautions.push(
                "Some readings are known only as limits; each counts half for readings to which its order is not certain.".into(),
            );
        }
        cautions
    }
}
