//! What a cell seems to hold, seen by itself: the first thing a person takes in before reading a table.

use std::cell::RefCell;

use super::cells::{Cells, Packed};
use super::words;
use crate::reading::moment::period;
use crate::reading::{Cell, Missing, Value, understand};

/// What kind of thing a cell holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// Nothing.
    Blank,
    /// `n/a`, `-` and the like.
    NotAvailable,
    /// A number.
    Number,
    /// A number or a limit such as `<0.5`, written as text.
    NumberText,
    /// TRUE or FALSE.
    Truth,
    /// A date.
    Date,
    /// A span of time or a time of day.
    Duration,
    /// An error value.
    Error,
    /// A calendar or numbered period written as text: `2025-W07`, `Jan 2025`, `Week 7`.
    Period,
    /// Digits that name rather than count: `0151 234567`, `00042`.
    Code,
    /// Any other text.
    Word,
}

impl Kind {
    /// How many kinds there are.
    pub const COUNT: usize = Kind::Word as usize + 1;

    /// Whether a reading can be made of it as a number.
    pub fn is_number(self) -> bool {
        matches!(self, Kind::Number | Kind::NumberText | Kind::Truth | Kind::Duration)
    }

    /// Whether it says that there is no reading.
    pub fn is_absent(self) -> bool {
        matches!(self, Kind::Blank | Kind::NotAvailable | Kind::Error)
    }

    /// Whether it is a moment by its looks.
    pub fn is_moment(self) -> bool {
        matches!(self, Kind::Date | Kind::Period)
    }

    /// Whether it looks like a reading or a moment rather than a heading or a note.
    pub fn is_data(self) -> bool {
        self.is_number() || self.is_moment() || matches!(self, Kind::Error | Kind::Code)
    }
}

/// The kinds of a workbook's texts; each text is looked at once, however many cells hold it.
#[derive(Default)]
pub struct Kinds {
    of_texts: RefCell<Vec<Option<Kind>>>,
}

impl Kinds {
    /// The kind of a cell.
    pub fn of(&self, cells: &Cells, cell: Packed) -> Kind {
        match cell {
            Packed::Empty => Kind::Blank,
            Packed::Number(_) => Kind::Number,
            Packed::Truth(_) => Kind::Truth,
            Packed::Date(_) => Kind::Date,
            Packed::Duration(_) => Kind::Duration,
            Packed::Error(_) => Kind::Error,
            Packed::Text(number) => {
                let mut known = self.of_texts.borrow_mut();
                let index = number as usize;
                if known.len() <= index {
                    known.resize(index + 1, None);
                }
                *known[index].get_or_insert_with(|| kind_of_text(cells.text(number)))
            }
        }
    }
}

/// The kind of a text.
pub fn kind_of_text(text: &str) -> Kind {
    if is_code(text) {
        return Kind::Code;
    }
    if is_period(text) {
        return Kind::Period;
    }
    match understand(&[Cell::text(text)], None) {
        Ok((values, _, understood)) if understood.grades.is_none() => match values.first() {
            Some(Value::Missing(Missing::NotAvailable | Missing::Blank)) => Kind::NotAvailable,
            Some(Value::Missing(_)) | None => Kind::Word,
            Some(_) => Kind::NumberText,
        },
        _ => Kind::Word,
    }
}

/// A leading zero before further digits, or a plus sign before many, names something; so do digits in long groups.
fn is_code(text: &str) -> bool {
    let digits = text.chars().filter(char::is_ascii_digit).count();
    let only_digits_and_marks = text.chars().all(|c| c.is_ascii_digit() || " -/+()".contains(c));
    let leading_zero = text.starts_with('0') && text[1..].starts_with(|c: char| c.is_ascii_digit());
    only_digits_and_marks && (leading_zero || text.starts_with('+') && digits >= 7) && !is_period(text)
}

fn is_period(text: &str) -> bool {
    if text.len() > 40 || text.parse::<f64>().is_ok() {
        return false;
    }
    words::word_and_number(text).is_some_and(|(word, _)| words::is_moment_word(word)) || period::is_calendar_text(text)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn texts_are_told_apart() {
        for (text, kind) in [
            ("n/a", Kind::NotAvailable),
            ("none", Kind::NotAvailable),
            ("<0.5", Kind::NumberText),
            ("1,5", Kind::NumberText),
            ("12 %", Kind::NumberText),
            ("0151 234567", Kind::Code),
            ("+49 151 234567", Kind::Code),
            ("00042", Kind::Code),
            ("0.5", Kind::NumberText),
            ("0", Kind::NumberText),
            ("2025-W07", Kind::Period),
            ("Week 7", Kind::Period),
            ("Jan 2025", Kind::Period),
            ("March", Kind::Period),
            ("10.02.2025", Kind::Period),
            ("05/01/2025", Kind::Period),
            ("Q1 2025", Kind::Period),
            ("Room 101", Kind::Word),
            ("good", Kind::Word),
            ("yes", Kind::Word),
        ] {
            assert_eq!(kind_of_text(text), kind, "{text}");
        }
    }
}
