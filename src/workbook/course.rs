//! How fast an indicator moves and since when, beside whatever test it was judged by.
//!
//! The slope is Theil and Sen's with its limits; the moment is where Pettitt's statistic is largest. Both describe a trend that
//! was shown; neither is a test of its own here, and a moment is named only where something was shown.

use crate::finding::Finding;
use crate::method::declaration::{Argument, Arguments};
use crate::method::{Datum, Outcome, Question, find};
use crate::reading::Series;

/// The course of an indicator.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Course {
    /// How fast it moves.
    pub pace: Option<Pace>,
    /// The label of the first moment of the new level.
    pub since: Option<String>,
}

/// A slope with its limits.
#[derive(Clone, Debug, PartialEq)]
pub struct Pace {
    /// The median slope.
    pub slope: f64,
    /// Its limits, where these readings set any.
    pub limits: Option<(f64, f64)>,
    /// Its unit, such as `min a year`.
    pub unit: String,
}

/// Up to so many readings the course is followed; longer series would keep a person waiting.
const MOST_READINGS: usize = 2_000;

/// Up to so many readings the limits of the slope are exact; beyond, the normal ones hardly differ.
const MOST_WITH_EXACT_LIMITS: usize = 300;

/// The course of a series that was judged.
pub fn course(series: &Series, finding: &Finding) -> Course {
    if series.len() > MOST_READINGS || finding.result.is_err() {
        return Course::default();
    }
    let limits_by = if series.len() > MOST_WITH_EXACT_LIMITS { "normal" } else { "best" };
    let pace = judged("theil-sen", &[("p_by", "normal"), ("limits_by", limits_by)], series).and_then(|outcome| {
        let number = |key| number(&outcome, key);
        let unit = outcome.facts.iter().find(|fact| fact.key == "slope").and_then(|fact| fact.unit.clone());
        let limits = number("slope_low").zip(number("slope_high"));
        Some(Pace { slope: number("slope")?, limits, unit: unit.unwrap_or_default() })
    });
    let shown = finding.conclusion.word.shows_something();
    let since = shown.then(|| judged("pettitt", &[("p_by", "approximation")], series)).flatten();
    let since = since.and_then(|outcome| match fact(&outcome, "first_after") {
        Some(Datum::Text(label)) => Some(label.clone()),
        _ => None,
    });
    Course { pace, since }
}

fn judged(key: &str, parameters: &[(&str, &str)], series: &Series) -> Option<Outcome> {
    let arguments: Arguments = parameters.iter().map(|(name, value)| (*name, Argument::Text((*value).into()))).collect();
    find(key)?.read(&arguments).ok()?.judge(series, &Question::default()).ok()
}

fn fact<'a>(outcome: &'a Outcome, key: &str) -> Option<&'a Datum> {
    outcome.facts.iter().find(|fact| fact.key == key).map(|fact| &fact.value)
}

fn number(outcome: &Outcome, key: &str) -> Option<f64> {
    match fact(outcome, key)? {
        Datum::Number(number) => Some(*number),
        Datum::Integer(integer) => Some(*integer as f64),
        _ => None,
    }
}
