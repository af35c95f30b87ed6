//! What the Kendall tests within blocks have in common, be the blocks seasons or places.
//!
//! Readings are compared only within their block. S is the sum of the blocks' scores, its exact null distribution the convolution
//! of theirs, the blocks being independent; where they resemble each other, the covariances of their scores are added to the
//! variance and S is referred to the normal distribution. The slope is the median of the slopes within blocks.
//!
//! # Whether the blocks agree
//! The squares of the blocks' standardised scores (without continuity correction) add up to a part for the common trend, and a
//! part for the differences between blocks, which without them is chi-squared with one degree of freedom less than there are
//! blocks. If it is large, one common trend does not describe the blocks.
//!
//! # Sources
//! R. M. Hirsch, J. R. Slack and R. A. Smith (1982), Techniques of trend analysis for monthly water quality data, *Water Resources
//! Research* 18, 107-121. R. M. Hirsch and J. R. Slack (1984), A nonparametric trend test for seasonal data with serial
//! dependence, *Water Resources Research* 20, 727-732. G. van Belle and J. P. Hughes (1984), Nonparametric tests for trend
//! in water quality, *Water Resources Research* 20, 127-136.

use super::declaration::Proportion;
use super::kendall::{Ordered, Score, by_normal, is_exact, standardised};
use super::question::PBy;
use super::scores_covariance::covariance;
use super::slope::{Estimate, LimitsBy, Places, number};
use super::{Column, Datum, Direction, Evidence, Fact, Outcome, Question, Refusal, Source, Statistic, Table};
use crate::comparison::{Point, Slopes};
use crate::null_distribution::ordered_table::MOST_PRODUCTS;
use crate::null_distribution::{Attained, By, ChiSquare, Lattice};
use crate::reading::{Series, Value};

crate::choices! {
    /// Whether readings of one block tell something about those of another.
    pub enum Between {
        /// The blocks are independent of each other; p is exact where feasible.
        Independent = "independent",
        /// The blocks resemble each other, as neighbouring months or places do; p is normal, with covariances (1984).
        Correlated = "correlated",
    }
}

/// Where the tests within blocks were published.
pub const SOURCES: [Source; 3] = [
    Source {
        authors: "R. M. Hirsch, J. R. Slack and R. A. Smith",
        year: 1982,
        title: "Techniques of trend analysis for monthly water quality data",
        place: "Water Resources Research 18, 107-121",
    },
    Source {
        authors: "R. M. Hirsch and J. R. Slack",
        year: 1984,
        title: "A nonparametric trend test for seasonal data with serial dependence",
        place: "Water Resources Research 20, 727-732",
    },
    Source {
        authors: "G. van Belle and J. P. Hughes",
        year: 1984,
        title: "Nonparametric tests for trend in water quality",
        place: "Water Resources Research 20, 127-136",
    },
];

/// How the blocks are judged.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Manner {
    pub between: Between,
    pub p_by: PBy,
    pub continuity: bool,
    pub limits_by: LimitsBy,
    pub confidence: Proportion,
}

/// The readings of one block with their times on the axis that all blocks share.
struct Block {
    label: String,
    ordered: Ordered,
    times: Vec<f64>,
    score: Score,
}

impl Block {
    fn new(series: &Series, label: String, mut members: Vec<(usize, f64)>) -> Self {
        members.sort_by(|a, b| a.1.total_cmp(&b.1));
        let moment_sizes = members.chunk_by(|a, b| a.1 == b.1).map(<[_]>::len).collect();
        let indices: Vec<usize> = members.iter().map(|&(index, _)| index).collect();
        let values = indices.iter().map(|&index| series.values[index]).collect();
        let ordered = Ordered { indices, values, moment_sizes };
        let score = Score::of(&ordered);
        Block { label, ordered, times: members.into_iter().map(|(_, time)| time).collect(), score }
    }

    fn points(&self) -> Vec<Point> {
        self.times.iter().zip(&self.ordered.values).map(|(&time, &value)| Point { time, value: number(value) }).collect()
    }

    fn slope(&self) -> Option<f64> {
        Slopes::new(self.points()).median().filter(|slope| slope.is_finite())
    }
}

/// Readings that are compared within blocks.
pub struct Blocked {
    blocks: Vec<Block>,
}

/// The most moments, times pairs of blocks, for which covariances are computed.
const MOST_COVARIED: f64 = 2e9;

impl Blocked {
    /// `place` gives each reading's block and its time; `labels` names the blocks.
    ///
    /// # Errors
    /// Nothing can be compared.
    pub fn of(series: &Series, labels: &[String], place: impl Fn(usize) -> (usize, f64)) -> Result<Self, Refusal> {
        let mut members: Vec<Vec<(usize, f64)>> = vec![Vec::new(); labels.len()];
        for (index, _) in series.present() {
            let (block, time) = place(index);
            members[block].push((index, time));
        }
        let blocks: Vec<Block> =
            labels.iter().zip(members).map(|(label, members)| Block::new(series, label.clone(), members)).collect();
        let pairs: u64 = blocks.iter().map(|block| block.score.pairs()).sum();
        if pairs == 0 {
            return Err(Refusal::Because(
                "no block has readings at two moments, so nothing can be compared within blocks".into(),
            ));
        }
        if blocks.iter().all(|block| block.score.rises + block.score.falls == 0) {
            return Err(Refusal::AllTied { compared: pairs as usize });
        }
        Ok(Blocked { blocks })
    }

    fn sum(&self, of: impl Fn(&Score) -> i64) -> i64 {
        self.blocks.iter().map(|block| of(&block.score)).sum()
    }

    fn variance(&self) -> f64 {
        self.blocks.iter().map(|block| block.score.variance()).sum()
    }

    /// The variance with the covariances between all blocks.
    fn variance_with_covariances(&self) -> Result<f64, Refusal> {
        if self.blocks.iter().any(|block| block.score.moment_sizes.len() != block.score.readings()) {
            return Err(Refusal::Because(
                "covariances between blocks need at most one reading for each block and moment; keep one, such as their median, or send between=independent".into(),
            ));
        }
        let mut times: Vec<f64> = self.blocks.iter().flat_map(|block| block.times.iter().copied()).collect();
        times.sort_by(f64::total_cmp);
        times.dedup();
        if (times.len() as f64 * self.blocks.len() as f64).powi(2) > MOST_COVARIED {
            return Err(Refusal::Because(format!(
                "covariances between {} blocks at {} moments are too many to compute; send between=independent or fewer blocks",
                self.blocks.len(),
                times.len()
            )));
        }
        let rows: Vec<Vec<Option<Value>>> = self
            .blocks
            .iter()
            .map(|block| {
                let mut row = vec![None; times.len()];
                for (time, value) in block.times.iter().zip(&block.ordered.values) {
                    row[times.partition_point(|other| other < time)] = Some(*value);
                }
                row
            })
            .collect();
        let mut variance = self.variance();
        for (index, row) in rows.iter().enumerate() {
            variance += rows[..index].iter().map(|other| 2.0 * covariance(row, other)).sum::<f64>();
        }
        Ok(variance)
    }

    /// The sum of the blocks' null distributions, and how many products it takes.
    fn null_effort(&self, untied: bool) -> f64 {
        let (mut reach, mut effort) = (1.0, 0.0);
        for block in self.blocks.iter().filter(|block| block.score.pairs() > 0) {
            let values = block.score.pairs() as f64;
            effort += reach * values + if untied { block.score.effort_if_untied() } else { block.score.effort() };
            reach += values;
        }
        effort
    }

    fn null(&self, untied: bool) -> Lattice {
        let varying = self.blocks.iter().filter(|block| block.score.pairs() > 0);
        varying
            .map(|block| match untied {
                true => block.score.null_if_untied().into_owned(),
                false => block.score.null().clone(),
            })
            .reduce(|sum, next| sum.plus(&next))
            .unwrap_or_else(|| Lattice::constant(0))
    }

    fn attained(&self, manner: &Manner, variance: f64) -> Result<Attained, Refusal> {
        let s = self.sum(Score::s);
        let correlated = manner.between == Between::Correlated;
        if correlated && manner.p_by == PBy::Exact {
            return Err(Refusal::Because("there is no exact p with between=correlated; send p_by=best".into()));
        }
        if !correlated && is_exact(manner.p_by, self.null_effort(false))? {
            return Ok(Attained::exact(&self.null(false), s));
        }
        let attained = by_normal(s, self.sum(Score::most), variance, manner.continuity);
        let by = match (correlated, manner.continuity) {
            (true, true) => By::Approximation("normal, with covariances between blocks, continuity-corrected"),
            (true, false) => By::Approximation("normal, with covariances between blocks"),
            _ => attained.by,
        };
        Ok(Attained { by, ..attained })
    }

    fn places(&self, manner: &Manner, slopes: &Slopes, variance: f64) -> Result<Option<Places>, Refusal> {
        let exact = manner.between == Between::Independent && self.null_effort(true) <= MOST_PRODUCTS;
        match manner.limits_by {
            LimitsBy::Exact if !exact => Err(Refusal::Because(
                "the exact limits of the slope cannot be counted for these blocks; send limits_by=best".into(),
            )),
            LimitsBy::Best | LimitsBy::Exact if exact => Ok(Places::exact(slopes.count(), &self.null(true), manner.confidence.0)),
            by => Ok(Some(Places::normal(slopes.count(), variance, manner.confidence.0, by == LimitsBy::Interpolated))),
        }
    }

    /// Judges the blocks together. `unit` is the unit of a slope; `kind` what a block is called.
    ///
    /// # Errors
    /// What was asked for cannot be computed.
    pub fn judge(
        &self,
        series: &Series,
        question: &Question,
        manner: &Manner,
        unit: Option<&str>,
        kind: &str,
    ) -> Result<Outcome, Refusal> {
        let variance = match manner.between {
            Between::Independent => self.variance(),
            Between::Correlated => self.variance_with_covariances()?,
        };
        if variance <= 0.0 {
            return Err(Refusal::Because("the variance with covariances came out as nothing or less, so the test is not defined for these readings; send between=independent".into()));
        }
        let attained = self.attained(manner, variance)?;
        let (p, smallest) = question.judge(&attained);
        let s = self.sum(Score::s);
        let readings = self.blocks.iter().map(|block| block.score.readings()).sum();
        let mut facts = vec![
            Fact::new("blocks", "Blocks with readings", self.blocks.iter().filter(|block| block.score.readings() > 0).count()),
            Fact::new("s", "S: rises less falls within blocks", s),
            Fact::new("rises", "Pairs that rise", self.sum(|score| score.rises as i64)),
            Fact::new("falls", "Pairs that fall", self.sum(|score| score.falls as i64)),
            Fact::new("variance", "Variance of S without a trend", variance),
            Fact::new("z", "S, standardised", standardised(s, variance, manner.continuity)),
        ];
        facts.extend(question.p_facts(&attained));
        let mut cautions = Vec::new();
        match self.homogeneity() {
            Some(agreement) => {
                facts.extend(agreement.facts());
                if agreement.p <= question.risk.0 {
                    cautions.push(format!(
                        "The {kind}s do not agree (p = {}), so one trend does not describe them all; the table shows each.",
                        crate::method::kendall::short(agreement.p)
                    ));
                }
            }
            None => facts.push(Fact::new("p_homogeneity", "p for differences between blocks", None::<f64>)),
        }
        if let Some(unit) = unit {
            let slopes = Slopes::within(self.blocks.iter().map(Block::points).collect());
            facts.extend(Estimate::of(&slopes, self.places(manner, &slopes, variance)?).facts(unit));
            if series.values.iter().any(|value| value.is_censored()) {
                cautions.push(
                    "In the slope, a limit such as <0.5 counts as 0.5; with many of them it is too flat or too steep.".into(),
                );
            }
        }
        Ok(Outcome {
            statistic: Statistic { name: "S", value: s as f64 },
            p,
            direction: Direction::of(s as f64),
            smallest_p: Some(smallest),
            readings_used: readings,
            facts,
            evidence: vec![Evidence::Table(self.table(unit.is_some()))],
            cautions,
        })
    }

    fn homogeneity(&self) -> Option<Homogeneity> {
        let scores = self.blocks.iter().filter(|block| block.score.readings() > 0);
        let z: Option<Vec<f64>> = scores.map(|block| standardised(block.score.s(), block.score.variance(), false)).collect();
        let z = z.filter(|z| z.len() > 1)?;
        let m = z.len() as f64;
        let mean = z.iter().sum::<f64>() / m;
        let differences: f64 = z.iter().map(|z| (z - mean).powi(2)).sum();
        let degrees = z.len() as u64 - 1;
        Some(Homogeneity {
            trend: m * mean * mean,
            differences,
            degrees,
            p: ChiSquare::new(degrees).upper_tail(differences),
            p_trend: ChiSquare::new(1).upper_tail(m * mean * mean),
        })
    }

    fn table(&self, with_slopes: bool) -> Table {
        let mut columns = vec![
            Column { key: "block", label: "Block" },
            Column { key: "readings", label: "Readings" },
            Column { key: "rises", label: "Pairs that rise" },
            Column { key: "falls", label: "Pairs that fall" },
            Column { key: "s", label: "S" },
            Column { key: "variance", label: "Its variance" },
            Column { key: "z", label: "S, standardised" },
        ];
        if with_slopes {
            columns.push(Column { key: "slope", label: "Slope" });
        }
        let row = |block: &Block| -> Vec<Datum> {
            let score = &block.score;
            let mut row: Vec<Datum> = vec![
                block.label.clone().into(),
                score.readings().into(),
                score.rises.into(),
                score.falls.into(),
                score.s().into(),
                score.variance().into(),
                standardised(score.s(), score.variance(), false).into(),
            ];
            if with_slopes {
                row.push(block.slope().into());
            }
            row
        };
        Table { caption: "Each block".into(), rows: self.blocks.iter().map(row).collect(), columns }
    }
}

/// Whether the blocks agree.
struct Homogeneity {
    trend: f64,
    differences: f64,
    degrees: u64,
    p: f64,
    p_trend: f64,
}

impl Homogeneity {
    fn facts(&self) -> [Fact; 5] {
        [
            Fact::new("chi2_trend", "Chi-squared for the common trend", self.trend),
            Fact::new("p_trend", "p for the common trend by chi-squared", self.p_trend),
            Fact::new("chi2_homogeneity", "Chi-squared for differences between blocks", self.differences),
            Fact::new("df_homogeneity", "Its degrees of freedom", self.degrees),
            Fact::new("p_homogeneity", "p for differences between blocks", self.p),
        ]
    }
}
