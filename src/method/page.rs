//! Page's test for a trend over moments at which the same places or persons are read.
//!
//! Each block, a place, a person or a season, has one reading at every moment. Readings are ranked within their block, and L
//! adds up place in time times rank. If there is no trend, all orders of the ranks within a block are equally probable,
//! independently of the other blocks, from which the exact p is counted, ties within blocks included.
//!
//! # Choices
//! `ties=corrected` refers L to all orders of ranks tied in the same way (exact), or takes the variance with its
//! correction for ties (normal). `ties=ignored` uses the null distribution of ranks without ties, as Page's table does.
//! `continuity` moves L half a step of 1 towards its mean in the normal approximation; Page does without.
//!
//! # Effect
//! The mean over the blocks of Spearman's correlation between reading and time (Page 1963, section 5), minus 1 to 1, with
//! Student's interval for a mean, the blocks being a sample.
//!
//! # When another test fits better
//! Independent readings at each moment: `jonckheere-terpstra`. Many moments with gaps in each block, or a slope wanted:
//! `seasonal-kendall`. Later against earlier readings of each block alone: `cox-stuart` with blocks.

use super::choices::TieCorrection;
use super::declaration::Proportion;
use super::question::PBy;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::ranked_blocks::{RankedBlock, RankedBlocks};
use crate::null_distribution::rank_products::{MOST_PRODUCTS, Ranks, effort, sum_of_products};
use crate::null_distribution::{Attained, By, student};
use crate::reading::Series;

crate::parameters! {
    /// What Page's test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Whether ties within blocks are allowed for: corrected or ignored.
        ties: TieCorrection = TieCorrection::Corrected,
        /// Whether the normal approximation is corrected for continuity.
        continuity: bool = true,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Confidence of the interval around the mean correlation with time.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct Page;

impl Method for Page {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "page",
        title: "Page's test for ordered moments within blocks",
        question: "With the same places or persons read at every moment, do readings rise or fall within them?",
        null_hypothesis: "Within each block all orders of the readings are equally probable, independently of the other blocks.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Up to 500 million products of chances: 15 moments in a few blocks, 12 moments in 110, 6 moments in 850, 4 moments in 3,000.",
        assumes: &[
            "Blocks are independent of each other.",
            "Within a block the readings are exchangeable apart from a trend; how high they are may differ between blocks.",
            "Readings can be ordered within a block; their differences need not mean anything.",
            "Seek and risk were declared before looking, and the readings are judged once.",
        ],
        ties: "Tied readings of a block share the mean of their ranks. The exact null distribution has the same ties; the variance is corrected for them, or they are ignored.",
        missing: "A block without a reading at some moment is left out. Limits such as <0.5 are ranked where the order is certain and share ranks where it is not.",
        cost: "the square of the number of blocks times the sixth power of the number of moments, within the exact range; else n times the number of moments",
        fits_better: &[
            ("jonckheere-terpstra", "the readings of different moments come from different places or persons"),
            ("seasonal-kendall", "blocks are seasons with many years each, or have gaps"),
            ("cox-stuart", "only earlier and later readings of each block are to be compared"),
        ],
        sources: &[
            Source {
                authors: "E. B. Page",
                year: 1963,
                title: "Ordered hypotheses for multiple treatments: a significance test for linear ranks",
                place: "Journal of the American Statistical Association 58, 216-230",
            },
            Source {
                authors: "M. Hollander and D. A. Wolfe",
                year: 1999,
                title: "Nonparametric Statistical Methods, 2nd edition",
                place: "Wiley, section 7.2",
            },
        ],
        repeated_moments: false,
        blocks: true,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let ranked = ranked(series)?;
        let doubled: i64 = ranked.blocks.iter().map(double_l).sum();
        let (n, k) = (ranked.blocks.len() as f64, ranked.moments.len() as f64);
        let mean = n * k * (k + 1.0) * (k + 1.0) / 4.0;
        let variance = variance(&ranked, parameters.ties);
        let l = doubled as f64 / 2.0;
        let attained = match exact(&ranked, doubled, parameters)? {
            Some(attained) => attained,
            None => {
                let (correction, by) = if parameters.continuity { (0.5, By::NORMAL) } else { (0.0, By::Approximation("normal")) };
                let most: i64 = ranked.blocks.iter().map(|block| double_l(&ascending(block))).sum();
                let most = match parameters.ties {
                    TieCorrection::Corrected => most as f64 / 2.0 - mean,
                    TieCorrection::Ignored => n * k * (k + 1.0) * (2.0 * k + 1.0) / 6.0 - mean,
                };
                Attained::normal(l - mean, (-most, most), variance, correction, by)
            }
        };
        let (p, smallest) = question.judge(&attained);
        let mut facts = vec![
            Fact::new("blocks", "Complete blocks", ranked.blocks.len()),
            Fact::new("moments", "Moments", ranked.moments.len()),
            Fact::new("blocks_left_out", "Blocks left out because a reading is missing", ranked.incomplete),
            Fact::new("l", "L: place in time times rank, added up", l),
            Fact::new("expected", "L expected without a trend", mean),
            Fact::new("variance", "Variance of L without a trend", variance),
            Fact::new("z", "L, standardised, without continuity correction", (l - mean) / variance.sqrt()),
        ];
        facts.extend(question.p_facts(&attained));
        facts.extend(correlation_facts(&ranked, parameters.confidence.0));
        Ok(Outcome {
            statistic: Statistic { name: "L", value: l },
            p,
            direction: Direction::of(l - mean),
            smallest_p: Some(smallest),
            readings_used: ranked.blocks.len() * ranked.moments.len(),
            facts,
            evidence: vec![Evidence::Table(by_moment(&ranked)), Evidence::Table(by_reading(&ranked, series))],
            cautions: cautions(&ranked, series, parameters),
        })
    }
}

/// The complete blocks, or why there is nothing to judge.
fn ranked(series: &Series) -> Result<RankedBlocks, Refusal> {
    let ranked = RankedBlocks::of(series).map_err(|error| Refusal::Because(error.to_string()))?;
    if ranked.moments.len() < 2 {
        return Err(Refusal::Because("all readings stand at one moment; a trend needs two moments at least".into()));
    }
    if ranked.blocks.is_empty() {
        return Err(Refusal::Because(format!("none of the {} blocks has a reading at every moment", ranked.incomplete)));
    }
    if ranked.blocks.iter().all(|block| block.double_ranks.windows(2).all(|pair| pair[0] == pair[1])) {
        let k = ranked.moments.len();
        return Err(Refusal::AllTied { compared: ranked.blocks.len() * k * (k - 1) / 2 });
    }
    Ok(ranked)
}

/// Twice the sum of place times rank.
fn double_l(block: &RankedBlock) -> i64 {
    (1..).zip(&block.double_ranks).map(|(place, &rank)| place * i64::from(rank)).sum()
}

fn ascending(block: &RankedBlock) -> RankedBlock {
    let mut sorted = block.clone();
    sorted.double_ranks.sort_unstable();
    sorted
}

/// The exact tails of L; `None` where they are not wanted or not feasible.
fn exact(ranked: &RankedBlocks, doubled: i64, parameters: &Parameters) -> Result<Option<Attained>, Refusal> {
    let untied: Ranks = (1..=ranked.moments.len() as u32).map(|rank| 2 * rank).collect();
    let mut ranks: Vec<Ranks> = match parameters.ties {
        TieCorrection::Ignored => vec![untied; ranked.blocks.len()],
        TieCorrection::Corrected => ranked.blocks.iter().map(|block| ascending(block).double_ranks).collect(),
    };
    let whole = ranks.iter().flatten().all(|rank| rank % 2 == 0);
    let unit = if whole { 2 } else { 1 };
    ranks.iter_mut().flatten().for_each(|rank| *rank /= unit);
    if !parameters.p_by.is_exact("products of chances", effort(&ranks) as usize, MOST_PRODUCTS as usize)? {
        return Ok(None);
    }
    Ok(Some(Attained::exact(&sum_of_products(&ranks).times(unit.into()), doubled)))
}

/// The variance of L over all orders within the blocks.
fn variance(ranked: &RankedBlocks, ties: TieCorrection) -> f64 {
    let k = ranked.moments.len() as f64;
    let of_places = k * (k * k - 1.0) / 12.0;
    let of_ranks = |block: &RankedBlock| match ties {
        TieCorrection::Ignored => of_places,
        TieCorrection::Corrected => {
            block.double_ranks.iter().map(|&rank| (f64::from(rank) - (k + 1.0)).powi(2)).sum::<f64>() / 4.0
        }
    };
    ranked.blocks.iter().map(|block| of_places * of_ranks(block) / (k - 1.0)).sum()
}

fn correlation_facts(ranked: &RankedBlocks, confidence: f64) -> [Fact; 3] {
    let (n, k) = (ranked.blocks.len() as f64, ranked.moments.len() as f64);
    let (mean_l, most) = (k * (k + 1.0) * (k + 1.0) / 4.0, k * (k * k - 1.0) / 12.0);
    let correlations: Vec<f64> = ranked.blocks.iter().map(|block| (double_l(block) as f64 / 2.0 - mean_l) / most).collect();
    let mean = correlations.iter().sum::<f64>() / n;
    let squares: f64 = correlations.iter().map(|correlation| (correlation - mean).powi(2)).sum();
    let reach = (squares > 1e-24 && ranked.blocks.len() > 1)
        .then(|| student::upper_quantile(n - 1.0, (1.0 - confidence) / 2.0) * (squares / (n - 1.0) / n).sqrt());
    [
        Fact::new("correlation", "Mean correlation of rank with time", mean),
        Fact::new("correlation_low", "Mean correlation, lower limit (approximate)", reach.map(|reach| (mean - reach).max(-1.0))),
        Fact::new("correlation_high", "Mean correlation, upper limit (approximate)", reach.map(|reach| (mean + reach).min(1.0))),
    ]
}

fn by_moment(ranked: &RankedBlocks) -> Table {
    let rows = ranked.moments.iter().enumerate().map(|(place, label)| -> Vec<Datum> {
        let sum = ranked.blocks.iter().map(|block| f64::from(block.double_ranks[place])).sum::<f64>() / 2.0;
        vec![(place + 1).into(), label.clone().into(), sum.into(), (sum / ranked.blocks.len() as f64).into()]
    });
    table(
        "Ranks at each moment",
        &[("place", "Place in time"), ("moment", "Moment"), ("rank_sum", "Sum of the ranks"), ("mean_rank", "Mean rank")],
        rows.collect(),
    )
}

fn by_reading(ranked: &RankedBlocks, series: &Series) -> Table {
    let rows = ranked.blocks.iter().flat_map(|block| {
        let readings = block.readings.iter().zip(&block.double_ranks).zip(&ranked.moments);
        readings.map(|((&index, &rank), moment)| -> Vec<Datum> {
            vec![block.label.clone().into(), moment.clone().into(), series.show(index).into(), (f64::from(rank) / 2.0).into()]
        })
    });
    table(
        "Readings and their ranks within each block",
        &[("block", "Block"), ("moment", "Moment"), ("reading", "Reading"), ("rank", "Rank in the block")],
        rows.collect(),
    )
}

fn table(caption: &str, columns: &[(&'static str, &'static str)], rows: Vec<Vec<Datum>>) -> Table {
    Table { caption: caption.into(), columns: columns.iter().map(|&(key, label)| Column { key, label }).collect(), rows }
}

fn cautions(ranked: &RankedBlocks, series: &Series, parameters: &Parameters) -> Vec<String> {
    let mut cautions = Vec::new();
    if ranked.incomplete > 0 {
        cautions.push(format!("{} blocks were left out because a reading is missing.", ranked.incomplete));
    }
    let tied = |block: &RankedBlock| ascending(block).double_ranks.windows(2).any(|pair| pair[0] == pair[1]);
    let with_ties = ranked.blocks.iter().filter(|block| tied(block)).count();
    if with_ties > 0 {
        let treatment = match parameters.ties {
            TieCorrection::Corrected => "the null distribution has the same ties",
            TieCorrection::Ignored => "the null distribution ignores them",
        };
        cautions.push(format!("{with_ties} of {} blocks have tied readings; {treatment}.", ranked.blocks.len()));
    }
    let censored = series.values.iter().filter(|value| value.is_censored()).count();
    if censored > 0 {
        cautions.push(format!("{censored} readings are known only as limits; those whose order is not certain share ranks."));
    }
    cautions
}
