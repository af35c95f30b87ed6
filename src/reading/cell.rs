//! A cell as it arrives, before anything is made of it.

use jiff::civil::DateTime;

/// What a cell, a list item or a JSON value holds, exactly as it came.
#[derive(Clone, Debug, PartialEq)]
pub enum Cell {
    /// Nothing at all.
    Empty,
    /// A finite number. A percentage typed as a number in a workbook is its fraction.
    Number(f64),
    /// Text that has not been interpreted yet.
    Text(String),
    /// TRUE or FALSE.
    Truth(bool),
    /// A date, with the time of day if there was one.
    Date(DateTime),
    /// A span of time in days, as spreadsheets keep it.
    Duration(f64),
    /// An error value such as `#DIV/0!`.
    Error(String),
}

impl Cell {
    /// Text becomes a text cell, white space alone an empty one.
    pub fn text(text: &str) -> Cell {
        match text.trim() {
            "" => Cell::Empty,
            trimmed => Cell::Text(trimmed.to_owned()),
        }
    }

    /// Whether there is nothing in the cell.
    pub fn is_empty(&self) -> bool {
        matches!(self, Cell::Empty)
    }

    /// The cell as a person would read it, for quoting back.
    pub fn quote(&self) -> String {
        match self {
            Cell::Empty => String::new(),
            Cell::Number(number) => number.to_string(),
            Cell::Text(text) => text.clone(),
            Cell::Truth(true) => "TRUE".into(),
            Cell::Truth(false) => "FALSE".into(),
            Cell::Date(date) => super::moment::date_label(*date),
            Cell::Duration(days) => format!("{days} days"),
            Cell::Error(error) => error.clone(),
        }
    }
}
