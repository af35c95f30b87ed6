//! The test of runs above and below the median.
//!
//! Each reading lies above the median of all, below it, or on it. Neighbours on the same side form a run. Few runs mean that
//! high readings stand together and low ones too: the level drifts or moves in waves. Many runs mean that high and low
//! readings take turns. Given how many lie on each side, all orders are equally probable without a pattern, and the
//! number of runs has a known distribution, whatever the readings' own distribution is.
//!
//! # What is sought
//! A rise and a fall both give few runs, and the runs do not tell which. With `seek=rising` or `seek=falling` only few runs
//! count; with `seek=either`, `toward` decides: `smooth` is few runs, `alternating` is many. What is claimed is that the
//! order is not random, not that the readings rise or fall.
//!
//! # Choices
//! `on_median` decides about readings equal to the median: left out (the usual rule, after which as many lie above as below), or
//! counted on one side, as some programs do. `two_sided=probability` adds up all numbers of runs as improbable as the observed
//! one; this differs from doubling where unequally many readings lie above and below.
//!
//! # Effect
//! No effect size is in general use. Shown are the number of runs expected of a random order, the standardised difference
//! z, and the longest run. No interval is known that would not need a model of the pattern.
//!
//! # When another test fits better
//! A trend is found far more often by `mann-kendall`, and told by its direction. A pattern finer than two sides is found
//! more often by `rank-von-neumann`.
//!
//! # Sources
//! A. Wald and J. Wolfowitz (1940), On a test whether two samples are from the same population, *Annals of Mathematical
//! Statistics* 11, 147-162, section 4. F. S. Swed and C. Eisenhart (1943), Tables for testing randomness of grouping in a
//! sequence of alternatives, *Annals of Mathematical Statistics* 14, 66-87. NIST/SEMATECH e-Handbook, section 1.3.5.13.

use std::cmp::Ordering;

use super::question::PBy;
use super::screen::{Toward, TwoSided, attained, judge};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::median::median;
use crate::comparison::runs::{Run, runs};
use crate::null_distribution::runs_of_two;
use crate::null_distribution::{Attained, By};
use crate::reading::{Series, Value};

crate::choices! {
    /// What becomes of readings equal to the median.
    pub enum OnMedian {
        /// They are left out.
        Drop = "drop",
        /// They count as lying above.
        Above = "above",
        /// They count as lying below.
        Below = "below",
    }
}

crate::parameters! {
    /// What the test of runs about the median takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which order counts as evidence with seek=either: smooth (few runs), alternating (many runs), or either.
        toward: Toward = Toward::Either,
        /// What becomes of readings equal to the median.
        on_median: OnMedian = OnMedian::Drop,
        /// What counts as at least as extreme when few and many runs both count.
        two_sided: TwoSided = TwoSided::Doubled,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
    }
}

/// The test itself.
pub struct RunsAboutMedian;

/// The most readings for which every number of runs is weighed; beyond them the normal approximation differs in no digit shown.
pub const MOST_READINGS: usize = 100_000;

impl Method for RunsAboutMedian {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "runs-about-median",
        title: "Test of runs above and below the median",
        question: "Do readings above the median stand together, and those below it too, or do they take turns?",
        null_hypothesis: "Every order of the readings above and below the median is equally probable.",
        claim: Claim::Pattern,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Up to 100,000 readings off the median.",
        assumes: &[
            "Apart from a pattern in time, the readings are independent and come from one distribution.",
            "Readings can be ordered; their differences need not mean anything.",
            "Seek, toward and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal readings lie on the same side. Readings equal to the median are left out, or counted above or below.",
        missing: "Gaps are closed up. Limits such as <0.5 lie below the median where that is certain, and count as equal to it where it is not; the median itself must not depend on them.",
        cost: "n log n",
        fits_better: &[
            ("mann-kendall", "the question is whether the readings rise or fall"),
            ("rank-von-neumann", "neighbours may resemble each other in more than their side"),
        ],
        sources: &[
            Source {
                authors: "A. Wald and J. Wolfowitz",
                year: 1940,
                title: "On a test whether two samples are from the same population",
                place: "Annals of Mathematical Statistics 11, 147-162, section 4",
            },
            Source {
                authors: "F. S. Swed and C. Eisenhart",
                year: 1943,
                title: "Tables for testing randomness of grouping in a sequence of alternatives",
                place: "Annals of Mathematical Statistics 14, 66-87",
            },
            Source {
                authors: "NIST/SEMATECH",
                year: 2012,
                title: "e-Handbook of Statistical Methods",
                place: "section 1.3.5.13",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let sides = Sides::of(series, parameters.on_median)?;
        let runs = runs(sides.list.iter().map(|&(index, above)| (index, index, above)));
        let (above, below) = (sides.count(true), sides.count(false));
        let (mean, variance) = runs_of_two::moments(above, below);
        let deviation = runs.len() as f64 - mean;
        let attained = if parameters.p_by.is_exact("readings off the median", sides.list.len(), MOST_READINGS)? {
            attained(&runs_of_two::runs(above, below), runs.len() as i64, parameters.two_sided)
        } else {
            let most = (2 * above.min(below) + u64::from(above != below)) as f64;
            Attained::normal(deviation, (2.0 - mean, most - mean), variance, 0.5, By::NORMAL)
        };
        let (p, smallest, p_facts) = judge(question, parameters.toward, &attained)?;
        let mut facts = vec![
            Fact::new("median", "Median", Datum::of_level(series, sides.median)),
            Fact::new("above", "Readings above the median", above),
            Fact::new("below", "Readings below the median", below),
            Fact::new("on_median", "Readings equal to the median", sides.on_median),
            Fact::new("runs", "Runs", runs.len()),
            Fact::new("longest_run", "Readings in the longest run", runs.iter().map(|run| run.length).max()),
            Fact::new("expected", "Runs expected of a random order", mean),
            Fact::new("variance", "Variance of the runs of a random order", variance),
            Fact::new(
                "z",
                "Runs, standardised, without continuity correction",
                (variance > 0.0).then(|| deviation / variance.sqrt()),
            ),
        ];
        facts.extend(p_facts);
        Ok(Outcome {
            statistic: Statistic { name: "R", value: runs.len() as f64 },
            p,
            direction: Direction::Neither,
            smallest_p: Some(smallest),
            readings_used: sides.list.len(),
            facts,
            evidence: vec![Evidence::Table(table(&runs, series))],
            cautions: cautions(&sides, series, parameters),
        })
    }
}

/// On which side of the median each reading lies.
struct Sides {
    median: f64,
    /// Index of the reading, and whether it counts as lying above.
    list: Vec<(usize, bool)>,
    on_median: usize,
    uncertain: usize,
}

impl Sides {
    fn of(series: &Series, rule: OnMedian) -> Result<Self, Refusal> {
        let Some(median) = median(series.present().map(|(_, value)| value)) else {
            return Err(Refusal::Because(
                "the median depends on readings known only as limits, so sides cannot be told; judge the share of readings beyond the limit instead".into(),
            ));
        };
        let mut sides = Sides { median, list: Vec::new(), on_median: 0, uncertain: 0 };
        for (index, value) in series.present() {
            let above = match value.compare(Value::Number(median)) {
                Some(Ordering::Greater) => true,
                Some(Ordering::Less) => false,
                _ => {
                    sides.on_median += 1;
                    sides.uncertain += usize::from(value.is_censored());
                    match rule {
                        OnMedian::Drop => continue,
                        OnMedian::Above => true,
                        OnMedian::Below => false,
                    }
                }
            };
            sides.list.push((index, above));
        }
        if sides.on_median == series.count_present() {
            return Err(Refusal::AllTied { compared: sides.on_median });
        }
        if sides.count(true) == 0 || sides.count(false) == 0 {
            return Err(Refusal::Because(format!(
                "all {} readings that are counted lie on one side of the median, because {} are equal to it; there is no order to judge",
                sides.list.len(),
                sides.on_median
            )));
        }
        Ok(sides)
    }

    fn count(&self, above: bool) -> u64 {
        self.list.iter().filter(|(_, side)| *side == above).count() as u64
    }
}

fn table(runs: &[Run<bool>], series: &Series) -> Table {
    let columns = vec![
        Column { key: "run", label: "Run" },
        Column { key: "side", label: "Side of the median" },
        Column { key: "first", label: "First reading" },
        Column { key: "first_moment", label: "Its moment" },
        Column { key: "last", label: "Last reading" },
        Column { key: "last_moment", label: "Its moment" },
        Column { key: "length", label: "Readings" },
    ];
    let row = |(place, run): (usize, &Run<bool>)| -> Vec<Datum> {
        vec![
            (place + 1).into(),
            if run.kind { "above" } else { "below" }.into(),
            (run.first + 1).into(),
            series.moments.label(run.first).into(),
            (run.last + 1).into(),
            series.moments.label(run.last).into(),
            run.length.into(),
        ]
    };
    Table { caption: "Runs above and below the median".into(), rows: runs.iter().enumerate().map(row).collect(), columns }
}

fn cautions(sides: &Sides, series: &Series, parameters: &Parameters) -> Vec<String> {
    let mut cautions = Vec::new();
    if 4 * sides.on_median >= series.count_present() {
        let treatment = match parameters.on_median {
            OnMedian::Drop => "they were left out",
            OnMedian::Above => "they were counted as lying above it",
            OnMedian::Below => "they were counted as lying below it",
        };
        let present = series.count_present();
        cautions.push(format!("{} of {present} readings are equal to the median; {treatment}.", sides.on_median));
    }
    if sides.uncertain > 0 {
        cautions.push(format!(
            "{} readings are known only as limits that leave their side of the median open; they count as equal to it.",
            sides.uncertain
        ));
    }
    cautions
}
