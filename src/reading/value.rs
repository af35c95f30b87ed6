//! One recorded value.

use std::cmp::Ordering;
use std::fmt;

/// Why a reading has no value.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Missing {
    /// The cell was empty.
    Blank,
    /// The cell said `n/a`, `-` or the like.
    NotAvailable,
    /// The cell held an error value such as `#DIV/0!`.
    ErrorValue,
    /// The cell held something that is neither a number nor one of the grades.
    NotUnderstood,
}

impl fmt::Display for Missing {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Missing::Blank => "blank",
            Missing::NotAvailable => "not available",
            Missing::ErrorValue => "error value",
            Missing::NotUnderstood => "not understood",
        })
    }
}

/// A reading's value. A grade is kept as its place in the order of grades, the lowest being 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Value {
    /// A finite number.
    Number(f64),
    /// Known only to lie below a limit, as in `<0.5`.
    Below(f64),
    /// Known only to lie above a limit, as in `>200`.
    Above(f64),
    /// No value, and why.
    Missing(Missing),
}

impl Value {
    /// The number, if the value is exactly known.
    pub fn number(self) -> Option<f64> {
        match self {
            Value::Number(number) => Some(number),
            _ => None,
        }
    }

    /// Whether there is no value.
    pub fn is_missing(self) -> bool {
        matches!(self, Value::Missing(_))
    }

    /// Whether only a limit is known.
    pub fn is_censored(self) -> bool {
        matches!(self, Value::Below(_) | Value::Above(_))
    }

    /// How this value stands to a later one: compared where the order is certain, equal where it is not.
    /// `None` if either is missing.
    ///
    /// The relation is not transitive when values are censored at different limits.
    pub fn compare(self, other: Value) -> Option<Ordering> {
        use Value::{Above, Below, Missing, Number};
        Some(match (self, other) {
            (Missing(_), _) | (_, Missing(_)) => return None,
            (Number(a), Number(b)) => a.partial_cmp(&b)?,
            (Below(a), Number(b)) if a <= b => Ordering::Less,
            (Number(a), Below(b)) if a >= b => Ordering::Greater,
            (Above(a), Number(b)) if a >= b => Ordering::Greater,
            (Number(a), Above(b)) if a <= b => Ordering::Less,
            (Below(a), Above(b)) if a <= b => Ordering::Less,
            (Above(a), Below(b)) if a >= b => Ordering::Greater,
            _ => Ordering::Equal,
        })
    }
}
