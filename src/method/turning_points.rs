//! The test of turning points.
//!
//! A reading above both of its neighbours is a peak, one below both a trough; together they are the turning points. A random
//! order turns at two of three inner readings. Few turning points mean a smooth order, in which the readings keep their
//! course, as in a drift or a slow wave; many mean that they alternate.
//!
//! # What is sought
//! A rise and a fall both give few turning points, and their number does not tell which. With `seek=rising` or
//! `seek=falling` only few turning points count; with `seek=either`, `toward` decides: `smooth` is few, `alternating` is
//! many. What is claimed is that the order is not random, not that the readings rise or fall.
//!
//! # Choices
//! `equal` decides about equal neighbours: taken as one reading (the usual rule), so that a level top is one peak, or counted
//! strictly, so that a level top is none. `ties=corrected` refers p to all arrangements of these very readings, which is exact
//! with any ties. `ties=ignored` refers it to the published distribution of readings without ties, as many as are left after
//! equal neighbours are taken as one; with many ties that is far off, since readings of few different values turn more often.
//!
//! # Effect
//! No effect size is in general use. Shown are the number expected of a random order and the standardised difference z.
//!
//! # When another test fits better
//! A slow trend hardly changes the number of turning points: `mann-kendall` finds it, this test does not. Waves that are
//! long against the noise between neighbours are found by `runs-about-median` or `rank-von-neumann`.
//!
//! # Sources
//! I. J. Bienaymé (1874), Sur une question de probabilités, *Bulletin de la Société Mathématique de France* 2, 153-154 (mean and
//! variance). M. G. Kendall (1973), *Time-Series*, Griffin, chapter 2. W. A. Wallis and G. H. Moore (1941), A significance test
//! for time series analysis, *Journal of the American Statistical Association* 36, 401-409.

use super::choices::TieCorrection;
use super::question::PBy;
use super::screen::{Toward, TwoSided, judge};
use super::turning::{Equal, TurnNull};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::Steps;
use crate::comparison::steps::Turn;
use crate::null_distribution::turns::Counted;
use crate::reading::Series;

crate::parameters! {
    /// What the test of turning points takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which order counts as evidence with seek=either: smooth (few turning points), alternating (many), or either.
        toward: Toward = Toward::Either,
        /// What becomes of equal neighbours: taken as one reading, or counted strictly, so that a level top is no peak.
        equal: Equal = Equal::Collapse,
        /// Whether equal readings are allowed for in the null distribution.
        ties: TieCorrection = TieCorrection::Corrected,
        /// What counts as at least as extreme when few and many turning points both count.
        two_sided: TwoSided = TwoSided::Doubled,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
    }
}

/// The test itself.
pub struct TurningPoints;

impl Method for TurningPoints {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "turning-points",
        title: "Test of turning points",
        question: "Do the readings turn more rarely, or more often, than readings in random order?",
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
        ties: "Equal neighbours are taken as one reading, or are no part of a turning point. The exact null distribution has the same equal readings, or none.",
        missing: "Gaps are closed up. A step between limits such as <0.5 is level where its direction is not certain.",
        cost: "n squared without ties, n cubed with ties",
        fits_better: &[
            ("mann-kendall", "the question is whether the readings rise or fall"),
            ("runs-about-median", "waves may be longer than a few readings"),
            ("runs-up-down", "the stretches between the turning points are wanted"),
        ],
        sources: &[
            Source {
                authors: "I. J. Bienaymé",
                year: 1874,
                title: "Sur une question de probabilités",
                place: "Bulletin de la Société Mathématique de France 2, 153-154",
            },
            Source { authors: "M. G. Kendall", year: 1973, title: "Time-Series", place: "Griffin, chapter 2" },
            Source {
                authors: "W. A. Wallis and G. H. Moore",
                year: 1941,
                title: "A significance test for time series analysis",
                place: "Journal of the American Statistical Association 36, 401-409",
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
        let (mut turns, mut counted) = (steps.turns(), Counted::Turns);
        if parameters.equal == Equal::Strict {
            turns.retain(|turn| turn.first == turn.last);
            counted = Counted::SharpTurns;
        }
        let null = TurnNull::of(series, &steps, counted, parameters.ties);
        let attained = null.attained(turns.len(), parameters.p_by, parameters.two_sided)?;
        let (p, smallest, p_facts) = judge(question, parameters.toward, &attained)?;
        let mut facts = vec![
            Fact::new("counted", "Readings, equal neighbours taken as one", steps.count() + 1 - level),
            Fact::new("level_steps", "Level steps between equal neighbours", level),
            Fact::new("turning_points", "Turning points", turns.len()),
            Fact::new("peaks", "Peaks", turns.iter().filter(|turn| turn.peak).count()),
            Fact::new("troughs", "Troughs", turns.iter().filter(|turn| !turn.peak).count()),
            Fact::new("expected", "Turning points expected of a random order", null.mean),
            Fact::new("variance", "Variance of the turning points of a random order", null.variance),
            Fact::new("z", "Turning points, standardised, without continuity correction", null.standardised(turns.len())),
        ];
        facts.extend(p_facts);
        Ok(Outcome {
            statistic: Statistic { name: "T", value: turns.len() as f64 },
            p,
            direction: Direction::Neither,
            smallest_p: Some(smallest),
            readings_used: steps.count() + 1,
            facts,
            evidence: vec![Evidence::Table(table(&turns, series))],
            cautions: null.cautions(series, &steps, parameters.equal),
        })
    }
}

fn table(turns: &[Turn], series: &Series) -> Table {
    let columns = vec![
        Column { key: "turn", label: "Turning point" },
        Column { key: "kind", label: "Kind" },
        Column { key: "first", label: "Reading" },
        Column { key: "first_moment", label: "Its moment" },
        Column { key: "first_value", label: "Its value" },
        Column { key: "last", label: "Last of equal neighbours" },
        Column { key: "last_moment", label: "Its moment" },
    ];
    let row = |(place, turn): (usize, &Turn)| -> Vec<Datum> {
        vec![
            (place + 1).into(),
            if turn.peak { "peak" } else { "trough" }.into(),
            (turn.first + 1).into(),
            series.moments.label(turn.first).into(),
            Datum::of_reading(series, turn.first),
            (turn.last + 1).into(),
            series.moments.label(turn.last).into(),
        ]
    };
    Table { caption: "Turning points".into(), rows: turns.iter().enumerate().map(row).collect(), columns }
}
