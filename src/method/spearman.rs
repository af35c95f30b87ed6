//! Spearman's rank correlation with time, as a test for trend.
//!
//! Each reading has a place in time, 1 to n, and a rank among the readings. The coefficient rho is the correlation between the
//! two: 1 if every reading is higher than all before it, -1 if every one is lower, near 0 without a trend. Without a trend
//! every arrangement of the ranks is equally probable, which gives the exact distribution of the sum of place times rank, and
//! so of rho and of D, the sum of squared differences between rank and place.
//!
//! # Choices of p
//! `exact` counts all arrangements of these very ranks, ties among them. `t` refers t = rho √((n-2)/(1-rho²)) to Student's t
//! with n - 2 degrees of freedom, `normal` refers rho √(n-1) to the normal distribution; both without continuity
//! correction. `permutation` puts the ranks in random order again and again, seeded, and counts the shares of orders at least as
//! extreme, the observed one among them. `best` is exact where that is feasible, else `t`. If every reading is higher than all
//! before it, or every one lower, t is infinite, and p is the exact chance of that order.
//!
//! # Effect
//! rho, with an interval by R. Fisher's transformation and the standard error √((1 + rho²/2)/(n-3)) of Bonett and Wright. It
//! holds for pairs drawn at random; for readings in time order it is a guide to how far rho may be trusted.
//!
//! # When another test fits better
//! `mann-kendall` finds nearly the same trends, has a slope and an interval that belong to it, and is exact for far longer
//! series. `cox-stuart` shows its evidence in pairs.
//!
//! # Sources
//! C. Spearman (1904), The proof and measurement of association between two things, *American Journal of Psychology* 15,
//! 72-101. H. E. Daniels (1950), Rank correlation and population models, *Journal of the Royal Statistical Society B* 12,
//! 171-191 (as a test for trend). M. G. Kendall and J. D. Gibbons (1990), *Rank Correlation Methods*, 5th ed., chapters 4 and 5.
//! D. G. Bonett and T. A. Wright (2000), Sample size requirements for estimating Pearson, Kendall and Spearman correlations,
//! *Psychometrika* 65, 23-28.

use super::declaration::{Count, Proportion};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::midranks::{classes, doubled_midranks, unit};
use crate::null_distribution::draws::{Draws, MOST_DRAWN};
use crate::null_distribution::rank_products;
use crate::null_distribution::{Attained, By, Tails, beta, normal};
use crate::reading::{Series, Value};

crate::choices! {
    /// Which form of the p-value is wanted.
    pub enum PBy {
        /// Exact where feasible, else Student's t; the reply says which.
        Best = "best",
        /// Exact, or a refusal that states the largest size.
        Exact = "exact",
        /// The share of random orders that are at least as extreme; `draws` and `seed` say how many and which.
        Permutation = "permutation",
        /// Student's t with n - 2 degrees of freedom.
        T = "t",
        /// The normal distribution with variance 1/(n - 1).
        Normal = "normal",
    }
}

crate::parameters! {
    /// What Spearman's test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// For p_by=permutation: how many random orders are drawn.
        draws: Count<1_000, 1_000_000> = Count(20_000),
        /// For p_by=permutation: the seed; the same seed gives the same orders.
        seed: Count<0, 4_294_967_295> = Count(1),
        /// Confidence of the interval around rho.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct Spearman;

/// The most products of chances that are counted for an exact p; about a sixth of a second on one core.
const MOST_PRODUCTS: f64 = 1e8;

impl Method for Spearman {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "spearman",
        title: "Spearman's rank correlation with time",
        question: "Do the ranks of the readings go up, or down, with time?",
        null_hypothesis: "Every order of the readings is equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 3,
        exact: "Up to 100 million products of chances: 14 readings without ties, or 40 readings in three grades.",
        assumes: &[
            "Apart from a trend, the readings are independent and come from one distribution.",
            "Readings can be ordered; their differences need not mean anything.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal readings share the mean of their ranks; the exact null distribution has the same ties.",
        missing: "Gaps are closed up. A limit such as <0.5 is ranked by the readings to which its order is certain, and counts half for each of the others.",
        cost: "n log n beyond the exact range; permutation: draws times n",
        fits_better: &[
            ("mann-kendall", "a slope is wanted, or an exact p for a longer series"),
            ("cox-stuart", "pairs are to be shown as evidence"),
        ],
        sources: &[
            Source {
                authors: "C. Spearman",
                year: 1904,
                title: "The proof and measurement of association between two things",
                place: "American Journal of Psychology 15, 72-101",
            },
            Source {
                authors: "H. E. Daniels",
                year: 1950,
                title: "Rank correlation and population models",
                place: "Journal of the Royal Statistical Society B 12, 171-191",
            },
            Source {
                authors: "M. G. Kendall and J. D. Gibbons",
                year: 1990,
                title: "Rank Correlation Methods, 5th edition",
                place: "Arnold, chapters 4 and 5",
            },
            Source {
                authors: "D. G. Bonett and T. A. Wright",
                year: 2000,
                title: "Sample size requirements for estimating Pearson, Kendall and Spearman correlations",
                place: "Psychometrika 65, 23-28",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let ranked = Ranked::of(series)?;
        let attained = ranked.attained(parameters)?;
        let (p, smallest) = question.judge(&attained);
        let (n, rho) = (ranked.ranks.len() as f64, ranked.rho());
        let (low, high) = interval(rho, n, parameters.confidence.0);
        let mut facts = vec![
            Fact::new("rho", "Rank correlation with time", rho),
            Fact::new("rho_low", "Rank correlation, lower limit", low),
            Fact::new("rho_high", "Rank correlation, upper limit", high),
            Fact::new(
                "squared_differences",
                "D: sum of squared differences between rank and place",
                ranked.squared_differences(),
            ),
            Fact::new("t", "rho as Student's t", (rho.abs() < 1.0).then(|| student(rho, n))),
            Fact::new("z", "rho, standardised", rho * (n - 1.0).sqrt()),
        ];
        facts.extend(question.p_facts(&attained));
        if attained.by == PERMUTATION {
            facts.push(Fact::new(
                "p_error",
                "Standard error of p",
                (p.value * (1.0 - p.value) / f64::from(parameters.draws.0)).sqrt(),
            ));
        }
        Ok(Outcome {
            statistic: Statistic { name: "rho", value: rho },
            p,
            direction: Direction::of(rho),
            smallest_p: Some(smallest),
            readings_used: ranked.ranks.len(),
            facts,
            evidence: vec![Evidence::Table(ranked.table(series))],
            cautions: cautions(series),
        })
    }
}

const PERMUTATION: By = By::Approximation("seeded permutation");

/// The readings' ranks, doubled so that they are whole numbers.
struct Ranked {
    indices: Vec<usize>,
    ranks: Vec<u32>,
    sorted: Vec<u32>,
    /// What all ranks are multiples of, counted from the lowest one.
    unit: u32,
    /// Sum of squares of the doubled ranks about their mean.
    spread: f64,
}

impl Ranked {
    fn of(series: &Series) -> Result<Self, Refusal> {
        let (indices, values): (Vec<usize>, Vec<Value>) = series.present().unzip();
        let ranks = doubled_midranks(&values);
        let unit = unit(&classes(&ranks)) as u32;
        let ranks: Vec<u32> = ranks.into_iter().map(|rank| rank as u32).collect();
        let mut sorted = ranks.clone();
        sorted.sort_unstable();
        let mean = (ranks.len() + 1) as f64;
        let spread: f64 = ranks.iter().map(|&rank| (f64::from(rank) - mean).powi(2)).sum();
        if spread == 0.0 {
            return Err(Refusal::AllTied { compared: ranks.len() });
        }
        Ok(Ranked { indices, ranks, sorted, unit, spread })
    }

    fn sum_of_products(&self) -> i64 {
        sum_of_products(&self.ranks)
    }

    fn rho(&self) -> f64 {
        self.correlation(self.sum_of_products())
    }

    /// The correlation that belongs to a sum of place times doubled rank.
    fn correlation(&self, sum: i64) -> f64 {
        let n = self.ranks.len() as f64;
        let excess = sum as f64 - n * (n + 1.0).powi(2) / 2.0;
        let places = n * (n * n - 1.0) / 12.0;
        (excess / (places * self.spread).sqrt()).clamp(-1.0, 1.0)
    }

    fn squared_differences(&self) -> f64 {
        let difference = |(index, &rank): (usize, &u32)| f64::from(rank) / 2.0 - (index + 1) as f64;
        self.ranks.iter().enumerate().map(|pair| difference(pair).powi(2)).sum()
    }

    /// The chance of the one order that is sorted.
    fn chance_of_sorted(&self) -> f64 {
        let (mut chance, mut copies) = (1.0_f64, 0.0);
        for (index, rank) in self.sorted.iter().enumerate() {
            copies = if index > 0 && self.sorted[index - 1] == *rank { copies + 1.0 } else { 1.0 };
            chance *= copies / (index + 1) as f64;
        }
        chance.max(f64::MIN_POSITIVE)
    }

    fn attained(&self, parameters: &Parameters) -> Result<Attained, Refusal> {
        let scaled = |ranks: &[u32]| ranks.iter().map(|rank| (rank - self.sorted[0]) / self.unit).collect::<Vec<u32>>();
        let blocks = [scaled(&self.sorted)];
        let effort = rank_products::effort(&blocks);
        let feasible = effort <= MOST_PRODUCTS;
        let n = self.ranks.len() as f64;
        match parameters.p_by {
            PBy::Exact if !feasible => {
                let millions = |products: f64| (products / 1e6).min(1e15).ceil() as usize;
                let what = "million products of chances (14 readings without ties)";
                Err(Refusal::BeyondExact { what, have: millions(effort), most: millions(MOST_PRODUCTS) })
            }
            PBy::Best | PBy::Exact if feasible => {
                Ok(Attained::exact(&rank_products::sum_of_products(&blocks), sum_of_products(&scaled(&self.ranks))))
            }
            PBy::Permutation => self.permuted(parameters),
            PBy::Normal => Ok(self.approximated(By::Approximation("normal"), |rho| normal::upper_tail(rho * (n - 1.0).sqrt()))),
            _ => {
                Ok(self.approximated(By::Approximation("Student's t"), |rho| beta::student_upper_tail(n - 2.0, student(rho, n))))
            }
        }
    }

    /// Tails by an approximation for the chance of a coefficient at least as high; a perfect correlation has its exact chance.
    fn approximated(&self, by: By, upper_tail: impl Fn(f64) -> f64) -> Attained {
        let tail = |rho: f64| if rho >= 1.0 { self.chance_of_sorted() } else { upper_tail(rho) };
        let (rho, highest) = (self.rho(), self.correlation(sum_of_products(&self.sorted)));
        let extremes = Tails { lower: tail(highest), upper: tail(highest) };
        Attained::doubled(Tails { lower: tail(-rho), upper: tail(rho) }, extremes, by)
    }

    fn permuted(&self, parameters: &Parameters) -> Result<Attained, Refusal> {
        let rounds = f64::from(parameters.draws.0);
        if rounds * self.ranks.len() as f64 > MOST_DRAWN {
            return Err(Refusal::Because(format!(
                "{} draws of {} readings are more than the {MOST_DRAWN:e} readings that one simulation may take; send fewer draws",
                parameters.draws.0,
                self.ranks.len()
            )));
        }
        let (mut draws, mut ranks, observed) =
            (Draws::seeded(parameters.seed.0.into()), self.ranks.clone(), self.sum_of_products());
        let (mut low, mut high) = (1.0, 1.0);
        for _ in 0..parameters.draws.0 {
            draws.shuffle(&mut ranks);
            let sum = sum_of_products(&ranks);
            low += f64::from(u8::from(sum <= observed));
            high += f64::from(u8::from(sum >= observed));
        }
        let least = 1.0 / (rounds + 1.0);
        let extremes = Tails { lower: least, upper: least };
        Ok(Attained::doubled(Tails { lower: low * least, upper: high * least }, extremes, PERMUTATION))
    }

    fn table(&self, series: &Series) -> Table {
        let columns = vec![
            Column { key: "reading", label: "Reading" },
            Column { key: "moment", label: "Its moment" },
            Column { key: "value", label: "Its value" },
            Column { key: "place", label: "Place in time" },
            Column { key: "rank", label: "Rank" },
            Column { key: "squared_difference", label: "Difference squared" },
        ];
        let row = |place: usize| -> Vec<Datum> {
            let (index, rank) = (self.indices[place], f64::from(self.ranks[place]) / 2.0);
            vec![
                (index + 1).into(),
                series.moments.label(index).into(),
                Datum::of_reading(series, index),
                (place + 1).into(),
                rank.into(),
                (rank - (place + 1) as f64).powi(2).into(),
            ]
        };
        Table { caption: "Ranks and places in time".into(), rows: (0..self.ranks.len()).map(row).collect(), columns }
    }
}

fn sum_of_products(ranks: &[u32]) -> i64 {
    ranks.iter().enumerate().map(|(index, &rank)| (index as i64 + 1) * i64::from(rank)).sum()
}

fn student(rho: f64, n: f64) -> f64 {
    rho * ((n - 2.0) / ((1.0 - rho) * (1.0 + rho))).sqrt()
}

/// The limits of rho, or none for three readings or a perfect correlation.
fn interval(rho: f64, n: f64, confidence: f64) -> (Option<f64>, Option<f64>) {
    if n <= 3.0 || rho.abs() >= 1.0 {
        return (None, None);
    }
    let error = ((1.0 + rho * rho / 2.0) / (n - 3.0)).sqrt() * normal::upper_quantile((1.0 - confidence) / 2.0);
    (Some((rho.atanh() - error).tanh()), Some((rho.atanh() + error).tanh()))
}

fn cautions(series: &Series) -> Vec<String> {
    let mut cautions = Vec::new();
    if series.values.iter().any(|value| value.is_censored()) {
        cautions.push(
            "Some readings are known only as limits; each counts half for readings to which its order is not certain.".into(),
        );
    }
    cautions
}
