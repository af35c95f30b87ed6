//! What the tests of Kendall's family do about readings that remember their predecessors.
//!
//! Readings above the mean followed by readings above the mean drift for a while without any trend, so that S varies more than
//! its null distribution says and an ordinary test cries wolf. Three published remedies may be chosen; none is exact.
//!
//! - `variance`: the variance of S is multiplied by 1 + 2/(n(n-1)(n-2)) times the sum over lags i of (n-i)(n-i-1)(n-i-2) r(i),
//!   r(i) being the autocorrelation of the ranks of what is left when the median slope is taken off (Hamed and Rao 1998). Only
//!   lags whose r(i) exceeds 1.96/√n count, as published; `all_lags` takes them all.
//! - `prewhiten`: the median slope is taken off, r(1) times the reading before is taken off each reading, and the slope is put
//!   back (Yue and others 2002, trend-free prewhitening); S is that of the n - 1 readings that are left. If r(1) lies
//!   within (-1 ± 1.96 √(n-2))/(n-1), the readings stay as they are.
//! - `shuffle`: the readings are cut into blocks that keep their order inside, and the blocks are put in random order, seeded,
//!   from a random place on; p is the share of such orders at least as extreme, the observed one among them. Blocks of
//!   twice the cube root of n readings are common practice, not a theorem.
//!
//! # Sources
//! K. H. Hamed and A. R. Rao (1998), A modified Mann-Kendall trend test for autocorrelated data, *Journal of Hydrology* 204,
//! 182-196. S. Yue, P. Pilon, B. Phinney and G. Cavadias (2002), The influence of autocorrelation on the ability to detect
//! trend in hydrological series, *Hydrological Processes* 16, 1807-1829. H. R. Künsch (1989), The jackknife and the bootstrap
//! for general stationary observations, *Annals of Statistics* 17, 1217-1241 (blocks).

use super::kendall::{Ordered, Score, by_normal};
use super::question::PBy;
use super::slope::{Axis, Per, number, points};
use super::{Fact, Refusal, Source};
use crate::comparison::midranks::doubled_midranks;
use crate::comparison::{Slopes, rises};
use crate::null_distribution::draws::{Draws, MOST_DRAWN};
use crate::null_distribution::{Attained, By, Tails, normal};
use crate::reading::{Series, Value};

crate::choices! {
    /// What is done about readings that remember their predecessors.
    pub enum Dependence {
        /// Nothing: the readings are taken to be independent; a caution says if they do not look it.
        Ignore = "ignore",
        /// The variance of S is corrected for the autocorrelation of the ranks (Hamed and Rao 1998).
        Variance = "variance",
        /// What each reading owes to the one before is taken off, the trend left in (Yue and others 2002).
        Prewhiten = "prewhiten",
        /// S is compared with that of seeded random orders of blocks of readings.
        Shuffle = "shuffle",
    }
}

/// How the dependence is treated.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Treatment {
    pub dependence: Dependence,
    /// For `variance`: the longest lag; 0 for all.
    pub lags: u32,
    /// For `variance`: whether lags count whose autocorrelation may well be chance.
    pub all_lags: bool,
    /// For `shuffle`: the length of a block; 0 for twice the cube root of the number of readings.
    pub block: u32,
    /// For `shuffle`: how many random orders, and the seed.
    pub draws: u32,
    pub seed: u32,
    pub p_by: PBy,
    pub continuity: bool,
}

/// Where the remedies were published.
pub const SOURCES: [Source; 2] = [
    Source {
        authors: "K. H. Hamed and A. R. Rao",
        year: 1998,
        title: "A modified Mann-Kendall trend test for autocorrelated data",
        place: "Journal of Hydrology 204, 182-196",
    },
    Source {
        authors: "S. Yue, P. Pilon, B. Phinney and G. Cavadias",
        year: 2002,
        title: "The influence of autocorrelation on the ability to detect trend in hydrological series",
        place: "Hydrological Processes 16, 1807-1829",
    },
];

/// The most readings for which dependence is looked for when it is to be ignored.
const MOST_LOOKED_AT: usize = 20_000;

/// What S attains under a treatment, with the facts and cautions that belong to it.
pub struct Treated {
    pub attained: Attained,
    pub facts: Vec<Fact>,
    pub cautions: Vec<String>,
    /// The readings that are left, where some are lost.
    pub readings: usize,
    /// S, which differs from that of the readings as they stand only after prewhitening.
    pub s: i64,
    /// The variance of S that the treatment comes to, where it has one.
    pub variance: Option<f64>,
}

/// Judges S under a treatment.
///
/// # Errors
/// The treatment does not apply to these readings, or an exact p cannot be counted.
pub fn judge(series: &Series, ordered: &Ordered, score: &Score, treatment: &Treatment) -> Result<Treated, Refusal> {
    let plain = |attained, facts, cautions| Treated {
        attained,
        facts,
        cautions,
        readings: score.readings(),
        s: score.s(),
        variance: None,
    };
    let n = score.readings();
    if treatment.dependence != Dependence::Ignore {
        check(series, ordered, score)?;
    }
    match treatment.dependence {
        Dependence::Ignore => {
            let attained = score.attained(treatment.p_by, treatment.continuity)?;
            let r1 = of_neighbours(series, ordered, score)?;
            let fact = Fact::new("r1", "Autocorrelation of neighbouring readings, the slope taken off", r1);
            Ok(plain(attained, vec![fact], r1.and_then(|r1| caution(r1, n, ALLOWED_FOR)).into_iter().collect()))
        }
        Dependence::Variance => {
            refuse_exact(treatment, "the corrected variance")?;
            let correlations = ranks_autocorrelation(series, ordered)?;
            let factor = variance_factor(&correlations, n, treatment);
            if factor <= 0.0 {
                return Err(Refusal::Because(format!(
                    "the correction of the variance came out as {factor:.4}, which is not positive, so the corrected test is not defined for these readings; ask for other lags, or dependence=shuffle"
                )));
            }
            let variance = score.variance() * factor;
            let by = if treatment.continuity {
                "normal, variance corrected for dependence, continuity-corrected"
            } else {
                "normal, variance corrected for dependence"
            };
            let attained =
                Attained { by: By::Approximation(by), ..by_normal(score.s(), score.most(), variance, treatment.continuity) };
            let facts = vec![
                Fact::new("r1", "Autocorrelation of neighbouring readings, the slope taken off", correlations.first().copied()),
                Fact::new("correction", "Factor by which dependence multiplies the variance", factor),
                Fact::new("variance_corrected", "Variance of S, corrected for dependence", variance),
            ];
            Ok(Treated { variance: Some(variance), ..plain(attained, facts, Vec::new()) })
        }
        Dependence::Prewhiten => prewhitened(series, ordered, score, treatment),
        Dependence::Shuffle => shuffled(ordered, score, treatment, &plain),
    }
}

fn check(series: &Series, ordered: &Ordered, score: &Score) -> Result<(), Refusal> {
    if score.moment_sizes.len() != score.readings() {
        return Err(Refusal::Because(
            "dependence is allowed for only where there is one reading at each moment; send dependence=ignore".into(),
        ));
    }
    if score.readings() < 4 {
        return Err(Refusal::TooFewReadings { have: score.readings(), need: 4 });
    }
    if series.scale.grades().is_some() || ordered.values.iter().any(|value| value.is_censored()) {
        return Err(Refusal::Because(
            "dependence is measured after the slope is taken off, which needs numbers; grades and limits such as <0.5 have none; send dependence=ignore".into(),
        ));
    }
    Ok(())
}

fn refuse_exact(treatment: &Treatment, what: &str) -> Result<(), Refusal> {
    match treatment.p_by {
        PBy::Exact => Err(Refusal::Because(format!("with {what} there is no exact p; send p_by=best"))),
        _ => Ok(()),
    }
}

/// The readings with the median slope taken off, and that slope for each step of the axis.
fn detrended(series: &Series, ordered: &Ordered) -> Result<(Vec<f64>, Vec<f64>, f64), Refusal> {
    let points = points(series, ordered, &Axis::of(series, Per::Step)?);
    let slope = Slopes::new(points.clone()).median().unwrap_or(0.0);
    let left = points.iter().map(|point| point.value - slope * point.time).collect();
    Ok((left, points.iter().map(|point| point.time).collect(), slope))
}

/// The autocorrelations of the ranks of what is left when the median slope is taken off, from lag 1 on.
fn ranks_autocorrelation(series: &Series, ordered: &Ordered) -> Result<Vec<f64>, Refusal> {
    let (left, ..) = detrended(series, ordered)?;
    // Residuals that differ by rounding alone are equal: the ranks of steps of one slope must tie.
    let reach = left.iter().fold(0.0_f64, |reach, value| reach.max(value.abs()));
    let rounded = left.iter().map(|value| Value::Number(if reach > 0.0 { (value / reach * 1e12).round() } else { 0.0 }));
    let ranks: Vec<f64> = doubled_midranks(&rounded.collect::<Vec<_>>()).into_iter().map(|rank| rank as f64 / 2.0).collect();
    let most = if ranks.len() > 2_000 { 50 } else { ranks.len().saturating_sub(1) };
    Ok((1..=most).map(|lag| autocorrelation(&ranks, lag)).collect())
}

/// The autocorrelation at a lag, the sum of products over that of squares; 0 for what does not vary.
pub fn autocorrelation(values: &[f64], lag: usize) -> f64 {
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    let squares: f64 = values.iter().map(|value| (value - mean).powi(2)).sum();
    let products: f64 = values.iter().zip(&values[lag..]).map(|(a, b)| (a - mean) * (b - mean)).sum();
    if squares > 0.0 { products / squares } else { 0.0 }
}

/// Twice the standard error that an autocorrelation has without dependence, at 95 %.
fn chance_limit(n: usize) -> f64 {
    normal::upper_quantile(0.025) / (n as f64).sqrt()
}

fn variance_factor(correlations: &[f64], n: usize, treatment: &Treatment) -> f64 {
    let n = n as f64;
    let most = if treatment.lags == 0 { correlations.len() } else { treatment.lags as usize };
    let limit = if treatment.all_lags { 0.0 } else { chance_limit(n as usize) };
    let counted = correlations.iter().enumerate().take(most).filter(|(_, r)| r.abs() > limit);
    let sum: f64 =
        counted.map(|(index, r)| (n - index as f64 - 1.0) * (n - index as f64 - 2.0) * (n - index as f64 - 3.0) * r).sum();
    1.0 + 2.0 / (n * (n - 1.0) * (n - 2.0)) * sum
}

/// What allows for dependence in the tests that take it as a parameter.
const ALLOWED_FOR: &str = "dependence=variance, prewhiten or shuffle allows for it";

/// The autocorrelation of the ranks of neighbouring readings, the slope taken off; `None` where it is not looked at.
///
/// # Errors
/// The moments of the readings give no slope.
pub fn of_neighbours(series: &Series, ordered: &Ordered, score: &Score) -> Result<Option<f64>, Refusal> {
    let n = score.readings();
    let looked_at = n <= MOST_LOOKED_AT && n > 3 && check(series, ordered, score).is_ok();
    Ok(if looked_at { ranks_autocorrelation(series, ordered)?.first().copied() } else { None })
}

/// A caution if neighbours among `n` readings resemble each other more than chance would have it, and what to do about it.
pub fn caution(r1: f64, n: usize, what_to_do: &str) -> Option<String> {
    (r1 > chance_limit(n)).then(|| {
        format!(
            "Neighbouring readings resemble each other (autocorrelation {r1:.2} when the slope is taken off), which makes trends seem more certain than they are; {what_to_do}."
        )
    })
}

fn prewhitened(series: &Series, ordered: &Ordered, score: &Score, treatment: &Treatment) -> Result<Treated, Refusal> {
    let (left, times, slope) = detrended(series, ordered)?;
    let n = left.len() as f64;
    let r1 = autocorrelation(&left, 1);
    let reach = normal::upper_quantile(0.025) * (n - 2.0).sqrt();
    let by_chance = r1 * (n - 1.0) + 1.0 <= reach && r1 * (n - 1.0) + 1.0 >= -reach;
    let mut facts = vec![Fact::new("r1", "Autocorrelation of neighbouring readings, the slope taken off", r1)];
    if by_chance {
        facts.push(Fact::new(
            "prewhitened",
            "Whether the readings were prewhitened",
            "no, the autocorrelation may well be chance",
        ));
        let attained = score.attained(treatment.p_by, treatment.continuity)?;
        return Ok(Treated { attained, facts, cautions: Vec::new(), readings: score.readings(), s: score.s(), variance: None });
    }
    let values: Vec<Value> =
        (1..left.len()).map(|index| Value::Number(left[index] - r1 * left[index - 1] + slope * times[index])).collect();
    let whitened = Ordered { indices: ordered.indices[1..].to_vec(), moment_sizes: vec![1; values.len()], values };
    let whitened = Score::of(&whitened);
    let attained = whitened.attained(treatment.p_by, treatment.continuity)?;
    let by = match attained.by {
        By::Exact => By::Approximation("exact for the prewhitened readings"),
        _ => By::Approximation("normal for the prewhitened readings"),
    };
    facts.push(Fact::new("prewhitened", "Whether the readings were prewhitened", "yes"));
    facts.push(Fact::new("s_prewhitened", "S of the prewhitened readings", whitened.s()));
    Ok(Treated {
        attained: Attained { by, ..attained },
        facts,
        cautions: vec!["S, p and the count of readings are those of the prewhitened readings; the pairs are those of the readings as they stand.".into()],
        readings: whitened.readings(),
        s: whitened.s(),
        variance: None,
    })
}

fn shuffled(
    ordered: &Ordered,
    score: &Score,
    treatment: &Treatment,
    plain: &dyn Fn(Attained, Vec<Fact>, Vec<String>) -> Treated,
) -> Result<Treated, Refusal> {
    refuse_exact(treatment, "shuffled blocks")?;
    let values: Vec<f64> = ordered.values.iter().map(|&value| number(value)).collect();
    let n = values.len();
    let rounds = f64::from(treatment.draws);
    if rounds * n as f64 > MOST_DRAWN {
        return Err(Refusal::Because(format!(
            "{} draws of {n} readings are more than the {MOST_DRAWN:e} readings that one simulation may take; send fewer draws",
            treatment.draws
        )));
    }
    let block = match treatment.block as usize {
        0 => (2.0 * (n as f64).cbrt()).round() as usize,
        sent => sent,
    };
    let blocks = n.div_ceil(block);
    if blocks < 2 {
        return Err(Refusal::Because(format!(
            "a block of {block} readings holds all {n} readings, so there is nothing to shuffle; send a shorter block"
        )));
    }
    let mut draws = Draws::seeded(treatment.seed.into());
    let (sizes, mut order): (Vec<usize>, Vec<usize>) = (vec![1; n], (0..blocks).collect());
    let (mut low, mut high) = (1.0, 1.0);
    let mut drawn = Vec::with_capacity(n);
    for _ in 0..treatment.draws {
        let start = draws.below(n as u64) as usize;
        draws.shuffle(&mut order);
        drawn.clear();
        for &place in &order {
            drawn.extend((place * block..((place + 1) * block).min(n)).map(|index| values[(start + index) % n]));
        }
        let counted = rises::count(&sizes, drawn.clone());
        let s = counted.rises as i64 - counted.falls as i64;
        low += f64::from(u8::from(s <= score.s()));
        high += f64::from(u8::from(s >= score.s()));
    }
    let least = 1.0 / (rounds + 1.0);
    let extremes = Tails { lower: least, upper: least };
    let tails = Tails { lower: low * least, upper: high * least };
    let attained = Attained::doubled(tails, extremes, By::Approximation("seeded shuffling of blocks"));
    let p = attained.either;
    let facts = vec![
        Fact::new("block", "Readings in a block", block),
        Fact::new("p_error", "Standard error of p", (p * (1.0 - p) / rounds).sqrt()),
    ];
    Ok(plain(attained, facts, Vec::new()))
}
