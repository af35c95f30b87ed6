//! The Jonckheere-Terpstra test for a trend over moments with several readings each.
//!
//! Of every two readings from different moments, the later one is higher (a rise), lower (a fall) or equal. J counts the
//! rises, half of the ties added. If there is no trend, every way to deal the readings to the moments is equally probable.
//! The exact p counts them: without ties among the readings by the q-multinomial, with ties by a recursion over the table
//! of moments and distinct values.
//!
//! # Choices
//! `ties=corrected` refers J to all ways to deal readings tied in the same way (exact), or takes the variance with its
//! corrections for ties (normal). `ties=ignored` uses the null distribution of readings without ties, as older tables do.
//! `continuity` moves J half a step towards its mean in the normal approximation.
//!
//! # Effect
//! The share of rises, J over the number of pairs: the chance that the later of two readings from different moments is the
//! higher one (ties count one half). Its interval takes the readings of each moment as a sample of their own (Sen 1960).
//!
//! # When another test fits better
//! One reading a moment: `mann-kendall`, to which this test then reduces. The same places or persons at every moment:
//! `page`. Events among trials: `cochran-armitage`.

use super::choices::TieCorrection;
use super::declaration::Proportion;
use super::question::PBy;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::{Concordance, Groups, Order, Signs};
use crate::null_distribution::ordered_table::{MOST_PRODUCTS, effort, rises_less_falls};
use crate::null_distribution::{Attained, By, normal};
use crate::reading::Series;

crate::parameters! {
    /// What the Jonckheere-Terpstra test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Whether ties are allowed for: corrected or ignored.
        ties: TieCorrection = TieCorrection::Corrected,
        /// Whether the normal approximation is corrected for continuity.
        continuity: bool = true,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Confidence of the interval around the share of rises.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct JonckheereTerpstra;

/// The most moments for which every two of them are shown against each other.
const MOST_MOMENTS_SHOWN: usize = 20;

impl Method for JonckheereTerpstra {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "jonckheere-terpstra",
        title: "Jonckheere-Terpstra test for ordered moments",
        question: "With several readings at each moment, are later readings mostly higher, or mostly lower, than earlier ones?",
        null_hypothesis: "The readings of all moments come from one distribution, so that every way to deal them to the moments is equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Up to 500 million products of chances. Without ties among the readings: 175 readings at each of two moments, 26 at each of ten. With ties in pairs: 90 at each of two moments, 28 at each of three. In three grades: 60 readings or more.",
        assumes: &[
            "The readings are independent of each other, within a moment and between moments.",
            "Readings can be ordered; their differences need not mean anything.",
            "Seek and risk were declared before looking, and the readings are judged once.",
        ],
        ties: "A tied pair counts one half. The exact null distribution has the same ties; the variance is corrected for them, or they are ignored.",
        missing: "Missing readings are left out; moments may have different numbers of readings. Limits such as <0.5 are compared where the order is certain and tie where it is not; limits at several levels leave the normal approximation only.",
        cost: "n log n, plus the counting within the exact range; n squared with limits at several levels",
        fits_better: &[
            ("mann-kendall", "there is one reading at each moment"),
            ("page", "the same places or persons are read at every moment"),
            ("cochran-armitage", "the readings are events among trials"),
        ],
        sources: &[
            Source {
                authors: "T. J. Terpstra",
                year: 1952,
                title: "The asymptotic normality and consistency of Kendall's test against trend, when ties are present in one ranking",
                place: "Indagationes Mathematicae 14, 327-333",
            },
            Source {
                authors: "A. R. Jonckheere",
                year: 1954,
                title: "A distribution-free k-sample test against ordered alternatives",
                place: "Biometrika 41, 133-145",
            },
            Source {
                authors: "M. Hollander and D. A. Wolfe",
                year: 1999,
                title: "Nonparametric Statistical Methods, 2nd edition",
                place: "Wiley, section 6.2",
            },
            Source {
                authors: "H. E. Daniels",
                year: 1944,
                title: "The relation between measures of correlation in the universe of sample permutations",
                place: "Biometrika 33, 129-135",
            },
        ],
        repeated_moments: true,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let compared = Compared::of(series)?;
        let attained = compared.attained(parameters)?;
        let (p, smallest) = question.judge(&attained);
        let (rises, falls) = (compared.concordance.rises, compared.concordance.falls);
        let (pairs, variance) = (compared.groups.pairs(), compared.variance_of_s(parameters.ties) / 4.0);
        let j = compared.j();
        let mut facts = vec![
            Fact::new("moments", "Moments", compared.groups.sizes.len()),
            Fact::new("pairs", "Pairs of readings from different moments", pairs),
            Fact::new("rises", "Pairs that rise", rises),
            Fact::new("falls", "Pairs that fall", falls),
            Fact::new("ties", "Tied pairs", pairs - rises - falls),
            Fact::new("j", "J: rises, half of the ties added", j),
            Fact::new("expected", "J expected without a trend", pairs as f64 / 2.0),
            Fact::new("variance", "Variance of J without a trend", variance),
            Fact::new("z", "J, standardised, without continuity correction", (j - pairs as f64 / 2.0) / variance.sqrt()),
        ];
        facts.extend(question.p_facts(&attained));
        facts.extend(compared.share_facts(parameters.confidence.0));
        Ok(Outcome {
            statistic: Statistic { name: "J", value: j },
            p,
            direction: Direction::of(compared.concordance.excess() as f64),
            smallest_p: Some(smallest),
            readings_used: compared.groups.of.len(),
            facts,
            evidence: compared.tables().into_iter().map(Evidence::Table).collect(),
            cautions: compared.cautions(series, parameters),
        })
    }
}

/// Readings grouped by moment and compared with each other.
struct Compared {
    groups: Groups,
    /// `None` where limits at several levels leave no order in which ties carry over.
    order: Option<Order>,
    concordance: Concordance,
}

impl Compared {
    fn of(series: &Series) -> Result<Self, Refusal> {
        let groups = Groups::by_moment(series);
        if groups.sizes.len() < 2 {
            return Err(Refusal::Because(
                "all readings stand at one moment; a trend needs readings at two moments at least".into(),
            ));
        }
        let order = Order::of_values(&groups.values);
        let concordance = match &order {
            Some(order) => Concordance::of_order(&groups, order),
            None => Concordance::of_pairs(&groups),
        };
        if concordance.rises + concordance.falls == 0 {
            return Err(Refusal::AllTied { compared: groups.pairs() as usize });
        }
        Ok(Compared { groups, order, concordance })
    }

    fn j(&self) -> f64 {
        (self.groups.pairs() as f64 + self.concordance.excess() as f64) / 2.0
    }

    fn attained(&self, parameters: &Parameters) -> Result<Attained, Refusal> {
        let excess = self.concordance.excess();
        let untied = vec![1; self.groups.of.len()];
        let values = match (&self.order, parameters.ties) {
            (_, TieCorrection::Ignored) => Some(&untied),
            (Some(order), TieCorrection::Corrected) => Some(&order.sizes),
            (None, TieCorrection::Corrected) if parameters.p_by == PBy::Exact => {
                return Err(Refusal::Because(
                    "limits at several levels leave no single order of the readings, so their null distribution cannot be counted exactly; ask for p_by=best or p_by=normal".into(),
                ));
            }
            (None, TieCorrection::Corrected) => None,
        };
        if let Some(values) = values {
            let effort = effort(&self.groups.sizes, values) as usize;
            if parameters.p_by.is_exact("products of chances", effort, MOST_PRODUCTS as usize)? {
                return Ok(Attained::exact(&rises_less_falls(&self.groups.sizes, values), excess));
            }
        }
        let most = self.most_rises_less_falls(parameters.ties) as f64;
        let (correction, by) = if parameters.continuity { (1.0, By::NORMAL) } else { (0.0, By::Approximation("normal")) };
        Ok(Attained::normal(excess as f64, (-most, most), self.variance_of_s(parameters.ties), correction, by))
    }

    /// Rises less falls if the readings stood in ascending order.
    fn most_rises_less_falls(&self, ties: TieCorrection) -> i64 {
        let Some(order) = self.order.as_ref().filter(|_| ties == TieCorrection::Corrected) else {
            return self.groups.pairs() as i64;
        };
        let mut sorted = order.clone();
        sorted.places.sort_unstable();
        Concordance::of_order(&self.groups, &sorted).excess()
    }

    /// The variance of rises less falls over all ways to deal the readings to the moments (Daniels 1944): it needs, for
    /// readings and for moments, the number of ordered pairs that differ and the sum of the squared sums of signs.
    fn variance_of_s(&self, ties: TieCorrection) -> f64 {
        let readings = match (&self.order, ties) {
            (_, TieCorrection::Ignored) => Signs::of_sizes(&vec![1; self.groups.of.len()]),
            (Some(order), TieCorrection::Corrected) => Signs::of_sizes(&order.sizes),
            (None, TieCorrection::Corrected) => Signs::of_values(&self.groups.values),
        };
        readings.variance_with(&Signs::of_sizes(&self.groups.sizes))
    }

    fn share_facts(&self, confidence: f64) -> [Fact; 3] {
        let pairs = self.groups.pairs() as f64;
        let share = self.j() / pairs;
        let reach = self
            .concordance
            .standard_error(&self.groups.sizes)
            .map(|error| normal::upper_quantile((1.0 - confidence) / 2.0) * error / pairs);
        [
            Fact::new("share_of_rises", "Share of rises among the pairs, ties counting one half", share),
            Fact::new("share_low", "Share of rises, lower limit (approximate)", reach.map(|reach| (share - reach).max(0.0))),
            Fact::new("share_high", "Share of rises, upper limit (approximate)", reach.map(|reach| (share + reach).min(1.0))),
        ]
    }

    fn tables(&self) -> Vec<Table> {
        let k = self.groups.sizes.len();
        let ranks: Option<Vec<f64>> = self.order.as_ref().map(|order| {
            let mean_ranks = order.mean_ranks();
            let mut sums = vec![0.0; k];
            for (&group, &place) in self.groups.of.iter().zip(&order.places) {
                sums[group] += mean_ranks[place];
            }
            sums.iter().zip(&self.groups.sizes).map(|(sum, &size)| sum / size as f64).collect()
        });
        let rows = (0..k).map(|group| -> Vec<Datum> {
            let rank = ranks.as_ref().and_then(|ranks| ranks.get(group).copied());
            vec![self.groups.labels[group].clone().into(), self.groups.sizes[group].into(), rank.into()]
        });
        let mut tables = vec![table(
            "Readings at each moment",
            &[("moment", "Moment"), ("readings", "Readings"), ("mean_rank", "Mean rank among all readings")],
            rows.collect(),
        )];
        if k <= MOST_MOMENTS_SHOWN {
            tables.push(table(
                "Every two moments: how their readings compare",
                &[
                    ("earlier", "Earlier moment"),
                    ("later", "Later moment"),
                    ("rises", "Pairs that rise"),
                    ("falls", "Pairs that fall"),
                    ("ties", "Tied pairs"),
                ],
                self.every_two_moments(),
            ));
        }
        tables
    }

    fn every_two_moments(&self) -> Vec<Vec<Datum>> {
        let mut starts = vec![0];
        for &size in &self.groups.sizes {
            starts.push(starts[starts.len() - 1] + size);
        }
        let k = self.groups.sizes.len();
        let two = (0..k).flat_map(|earlier| (earlier + 1..k).map(move |later| (earlier, later)));
        two.map(|(earlier, later)| {
            let values = |group: usize| self.groups.values[starts[group]..starts[group + 1]].to_vec();
            let (first, second) = (values(earlier), values(later));
            let both = Groups {
                labels: Vec::new(),
                sizes: vec![first.len(), second.len()],
                readings: Vec::new(),
                of: first.iter().map(|_| 0).chain(second.iter().map(|_| 1)).collect(),
                values: [first, second].concat(),
            };
            let compared = match Order::of_values(&both.values) {
                Some(order) => Concordance::of_order(&both, &order),
                None => Concordance::of_pairs(&both),
            };
            let labels = &self.groups.labels;
            vec![
                labels[earlier].clone().into(),
                labels[later].clone().into(),
                compared.rises.into(),
                compared.falls.into(),
                (both.pairs() - compared.rises - compared.falls).into(),
            ]
        })
        .collect()
    }

    fn cautions(&self, series: &Series, parameters: &Parameters) -> Vec<String> {
        let mut cautions = Vec::new();
        let (pairs, tied) = (self.groups.pairs(), self.groups.pairs() - self.concordance.rises - self.concordance.falls);
        if 4 * tied >= pairs {
            let treatment = match parameters.ties {
                TieCorrection::Corrected => "the null distribution has the same ties",
                TieCorrection::Ignored => "the null distribution ignores them, which is on the safe side",
            };
            cautions.push(format!("{tied} of {pairs} pairs are ties; {treatment}."));
        }
        let censored = series.values.iter().filter(|value| value.is_censored()).count();
        if censored > 0 {
            cautions
                .push(format!("{censored} readings are known only as limits; pairs whose order is not certain count as ties."));
        }
        if self.groups.sizes.iter().all(|&size| size == 1) {
            cautions.push("Every moment has one reading; the test is then that of Mann and Kendall.".into());
        }
        cautions
    }
}

fn table(caption: &str, columns: &[(&'static str, &'static str)], rows: Vec<Vec<Datum>>) -> Table {
    Table { caption: caption.into(), columns: columns.iter().map(|&(key, label)| Column { key, label }).collect(), rows }
}
