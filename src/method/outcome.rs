//! What a test found, before any words are made of it.

use crate::comparison::{Pairings, median};
use crate::null_distribution::Probability;
use crate::reading::{Scale, Series};

/// The direction in which a statistic points.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Direction {
    /// Later readings are higher.
    Rising,
    /// Later readings are lower.
    Falling,
    /// Neither.
    Neither,
}

impl Direction {
    /// Rising if a statistic exceeds what is expected without a trend, falling if it is below. Less than a thousand
    /// millionth of a standard deviation is rounding.
    pub fn of(standardised: f64) -> Self {
        if standardised > 1e-9 {
            Direction::Rising
        } else if standardised < -1e-9 {
            Direction::Falling
        } else {
            Direction::Neither
        }
    }
}

/// What a test found in a series.
#[derive(Clone, Debug, PartialEq)]
pub struct Outcome {
    /// The test statistic.
    pub statistic: Statistic,
    /// The p-value for the change that was sought.
    pub p: Probability,
    /// Where the statistic points, whatever was sought.
    pub direction: Direction,
    /// The smallest p that readings of this length and pattern of ties could have given, where it is known.
    pub smallest_p: Option<f64>,
    /// How many readings the statistic rests on.
    pub readings_used: usize,
    /// Further facts, in the order to show them.
    pub facts: Vec<Fact>,
    /// The evidence, to be shown to whoever asks.
    pub evidence: Vec<Evidence>,
    /// What to bear in mind, in whole sentences.
    pub cautions: Vec<String>,
}

/// A test statistic by its usual name.
#[derive(Clone, Debug, PartialEq)]
pub struct Statistic {
    /// The name, such as `T` or `S`.
    pub name: &'static str,
    /// The observed value.
    pub value: f64,
}

/// One fact by name.
#[derive(Clone, Debug, PartialEq)]
pub struct Fact {
    /// The name by which `give` asks for it, in snake case.
    pub key: &'static str,
    /// The label that people read.
    pub label: &'static str,
    /// The value.
    pub value: Datum,
    /// The unit, where there is one.
    pub unit: Option<String>,
}

impl Fact {
    /// A fact without a unit.
    pub fn new(key: &'static str, label: &'static str, value: impl Into<Datum>) -> Self {
        Fact { key, label, value: value.into(), unit: None }
    }

    /// Adds a unit.
    pub fn unit(mut self, unit: impl Into<String>) -> Self {
        self.unit = Some(unit.into());
        self
    }
}

/// A value in a fact or a table.
#[derive(Clone, Debug, PartialEq)]
pub enum Datum {
    /// There is none.
    Nothing,
    /// A count.
    Integer(i64),
    /// A number.
    Number(f64),
    /// Words.
    Text(String),
}

impl Datum {
    /// A level of a series: a number, or for grades the word or the two words that it lies between.
    pub fn of_level(series: &Series, level: f64) -> Self {
        match series.scale {
            Scale::Numeric => Datum::Number(level),
            Scale::Graded(_) => Datum::Text(median::shown(level, &series.scale)),
        }
    }

    /// A reading's value: a number, or the words for a grade or a limit.
    pub fn of_reading(series: &Series, index: usize) -> Self {
        match series.values.get(index).and_then(|value| value.number()) {
            Some(number) if series.scale.grades().is_none() => Datum::Number(number),
            _ => Datum::Text(series.show(index)),
        }
    }
}

macro_rules! datum_from {
    ($($from:ty => $make:expr),+ $(,)?) => { $(impl From<$from> for Datum {
        fn from(value: $from) -> Self {
            let make: fn($from) -> Datum = $make;
            make(value)
        }
    })+ };
}

datum_from! {
    f64 => Datum::Number,
    i64 => Datum::Integer,
    u64 => |value| Datum::Integer(value as i64),
    usize => |value| Datum::Integer(value as i64),
    u32 => |value| Datum::Integer(value.into()),
    i8 => |value| Datum::Integer(value.into()),
    String => Datum::Text,
    &str => |value| Datum::Text(value.to_owned()),
}

impl<T: Into<Datum>> From<Option<T>> for Datum {
    fn from(value: Option<T>) -> Self {
        value.map_or(Datum::Nothing, Into::into)
    }
}

/// Evidence stays typed inside and becomes a table at the edge.
#[derive(Clone, Debug, PartialEq)]
pub enum Evidence {
    /// Pairings of an earlier and a later reading.
    Pairings(Pairings),
    /// Any other table.
    Table(Table),
}

/// A table with a caption.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Table {
    /// What the table shows.
    pub caption: String,
    /// The columns from left to right.
    pub columns: Vec<Column>,
    /// The rows, each as long as `columns`.
    pub rows: Vec<Vec<Datum>>,
}

/// A table's column.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Column {
    /// The name in JSON and CSV, in snake case.
    pub key: &'static str,
    /// The heading that people read.
    pub label: &'static str,
}

/// Why a test does not apply to a series.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum Refusal {
    /// There are not enough readings to compute anything.
    #[error("there are too few readings to compare: {have} with a value, at least {need} are needed")]
    TooFewReadings { have: usize, need: usize },
    /// Nothing differs.
    #[error("all {compared} comparisons are ties: the readings that are compared do not differ, so there is nothing to judge")]
    AllTied { compared: usize },
    /// The exact p was asked for beyond the stated size.
    #[error("the exact p is computed for at most {most} {what}; there are {have}; ask for p_by=best or p_by=normal")]
    BeyondExact { what: &'static str, have: usize, most: usize },
    /// The readings are of a kind that the test cannot use.
    #[error("{test} needs {needs}; the readings are {are}")]
    Scale { test: &'static str, needs: &'static str, are: &'static str },
    /// Any other reason, as a whole sentence without a full stop.
    #[error("{0}")]
    Because(String),
}

impl Refusal {
    /// A stable code in kebab case.
    pub fn code(&self) -> &'static str {
        match self {
            Refusal::TooFewReadings { .. } => "too-few-readings",
            Refusal::AllTied { .. } => "all-tied",
            Refusal::BeyondExact { .. } => "beyond-exact",
            Refusal::Scale { .. } => "scale",
            Refusal::Because(_) => "not-applicable",
        }
    }
}
