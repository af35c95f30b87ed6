//! The test of runs up and down.
//!
//! A run up goes from a reading over higher and higher ones until the first fall; a run down goes the other way. Few runs
//! mean that the readings keep their course over several steps: they are smooth, as in a drift or a slow wave. Many runs mean
//! that they turn nearly at every step: they alternate. Every run but the last ends in a turning point, so without level
//! steps this test and `turning-points` always agree; here the runs themselves are the evidence.
//!
//! # What is sought
//! A rise and a fall both give few runs, and the number of runs does not tell which. With `seek=rising` or
//! `seek=falling` only few runs count; with `seek=either`, `toward` decides: `smooth` is few runs, `alternating` is many.
//! What is claimed is that the order is not random, not that the readings rise or fall.
//!
//! # Choices
//! `equal` decides about equal neighbours: taken as one reading (the usual rule), so that a level stretch belongs to the run it
//! stands in, or counted strictly, so that a level step ends a run. `ties=corrected` refers p to all arrangements of these very
//! readings, which is exact with any ties. `ties=ignored` refers it to the published distribution of readings without ties, as
//! many as are left after equal neighbours are taken as one; with many ties that is far off, since readings of few different
//! values turn more often.
//!
//! # Effect
//! No effect size is in general use. Shown are the number of runs expected of a random order, the standardised difference
//! z, and the longest run.
//!
//! # When another test fits better
//! A slow trend hardly changes the number of runs up and down: `mann-kendall` finds it, this test does not. Waves that are
//! long against the noise between neighbours are found by `runs-about-median` or `rank-von-neumann`.
//!
//! # Sources
//! W. A. Wallis and G. H. Moore (1941), A significance test for time series analysis, *Journal of the American Statistical
//! Association* 36, 401-409. H. Levene and J. Wolfowitz (1944), The covariance matrix of runs up and down, *Annals of
//! Mathematical Statistics* 15, 58-69. D. André (1884), Étude sur les maxima, minima et séquences des permutations, *Annales
//! scientifiques de l'École Normale Supérieure* (3) 1, 121-134 (the exact distribution).

use super::choices::TieCorrection;
use super::question::PBy;
use super::screen::{Toward, TwoSided, judge};
use super::turning::{Equal, TurnNull};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::{Run, Steps};
use crate::null_distribution::turns::Counted;
use crate::reading::Series;

crate::parameters! {
    /// What the test of runs up and down takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which order counts as evidence with seek=either: smooth (few runs), alternating (many runs), or either.
        toward: Toward = Toward::Either,
        /// What becomes of equal neighbours: taken as one reading, or counted strictly, so that a level step ends a run.
        equal: Equal = Equal::Collapse,
        /// Whether equal readings are allowed for in the null distribution.
        ties: TieCorrection = TieCorrection::Corrected,
        /// What counts as at least as extreme when few and many runs both count.
        two_sided: TwoSided = TwoSided::Doubled,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
    }
}

/// The test itself.
pub struct RunsUpDown;

impl Method for RunsUpDown {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "runs-up-down",
        title: "Test of runs up and down",
        question: "Do the readings keep their course over several steps, or turn at nearly every step?",
        null_hypothesis: "Every order of the readings is equally probable.",
        claim: Claim::Pattern,
        scale: ScaleNeeded::Ordered,
        least_readings: 3,
        exact: "Up to 2,000 readings without ties. With ties: up to 500 million products of chances, such as 300 readings of 150 values, or 200 readings in three grades; fewer with equal=strict.",
        assumes: &[
            "Apart from a pattern in time, the readings are independent and come from one distribution.",
            "Readings can be ordered; their differences need not mean anything.",
            "Seek, toward and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal neighbours are taken as one reading, or end a run. The exact null distribution has the same equal readings, or none.",
        missing: "Gaps are closed up. A step between limits such as <0.5 is level where its direction is not certain.",
        cost: "n squared without ties, n cubed with ties",
        fits_better: &[
            ("mann-kendall", "the question is whether the readings rise or fall"),
            ("runs-about-median", "waves may be longer than a few readings"),
            ("turning-points", "the peaks and troughs themselves are wanted"),
        ],
        sources: &[
            Source {
                authors: "W. A. Wallis and G. H. Moore",
                year: 1941,
                title: "A significance test for time series analysis",
                place: "Journal of the American Statistical Association 36, 401-409",
            },
            Source {
                authors: "H. Levene and J. Wolfowitz",
                year: 1944,
                title: "The covariance matrix of runs up and down",
                place: "Annals of Mathematical Statistics 15, 58-69",
            },
            Source {
                authors: "D. André",
                year: 1884,
                title: "Étude sur les maxima, minima et séquences des permutations",
                place: "Annales scientifiques de l'École Normale Supérieure (3) 1, 121-134",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let steps = Steps::of(series);
        let level = steps.with_sign(0);
        if level == steps.count() {
            return Err(Refusal::AllTied { compared: level });
        }
        let (counted, runs) = match parameters.equal {
            Equal::Collapse => (Counted::Turns, steps.runs(false)),
            Equal::Strict => (Counted::UnbrokenRuns, steps.runs(true)),
        };
        let null = TurnNull::of(series, &steps, counted, parameters.ties);
        let attained = null.attained(runs.len() - 1, parameters.p_by, parameters.two_sided)?;
        let (p, smallest, p_facts) = judge(question, parameters.toward, &attained)?;
        let mut facts = vec![
            Fact::new("steps_up", "Steps up", steps.with_sign(1)),
            Fact::new("steps_down", "Steps down", steps.with_sign(-1)),
            Fact::new("level_steps", "Level steps between equal neighbours", level),
            Fact::new("counted", "Readings, equal neighbours taken as one", steps.count() - level + 1),
            Fact::new("runs", "Runs up and down", runs.len()),
            Fact::new("longest_run", "Steps in the longest run", runs.iter().map(|run| run.length).max()),
            Fact::new("expected", "Runs expected of a random order", null.mean + 1.0),
            Fact::new("variance", "Variance of the runs of a random order", null.variance),
            Fact::new("z", "Runs, standardised, without continuity correction", null.standardised(runs.len() - 1)),
        ];
        facts.extend(p_facts);
        Ok(Outcome {
            statistic: Statistic { name: "R", value: runs.len() as f64 },
            p,
            direction: Direction::Neither,
            smallest_p: Some(smallest),
            readings_used: steps.count() + 1,
            facts,
            evidence: vec![Evidence::Table(table(&runs, series))],
            cautions: null.cautions(series, &steps, parameters.equal),
        })
    }
}

fn table(runs: &[Run<i8>], series: &Series) -> Table {
    let columns = vec![
        Column { key: "run", label: "Run" },
        Column { key: "course", label: "Course" },
        Column { key: "first", label: "From reading" },
        Column { key: "first_moment", label: "Its moment" },
        Column { key: "first_value", label: "Its value" },
        Column { key: "last", label: "To reading" },
        Column { key: "last_moment", label: "Its moment" },
        Column { key: "last_value", label: "Its value" },
        Column { key: "steps", label: "Steps" },
    ];
    let row = |(place, run): (usize, &Run<i8>)| -> Vec<Datum> {
        vec![
            (place + 1).into(),
            if run.kind > 0 { "up" } else { "down" }.into(),
            (run.first + 1).into(),
            series.moments.label(run.first).into(),
            Datum::of_reading(series, run.first),
            (run.last + 1).into(),
            series.moments.label(run.last).into(),
            Datum::of_reading(series, run.last),
            run.length.into(),
        ]
    };
    Table { caption: "Runs up and down".into(), rows: runs.iter().enumerate().map(row).collect(), columns }
}
