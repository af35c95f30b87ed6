//! References to cells as spreadsheets write them, after ECMA-376 part 1, section 18.17.2.3: `'Week data'!B2:B53`.

use std::fmt;
use std::str::FromStr;

/// The last row and column of a sheet, counted from 0.
pub const LAST_ROW: u32 = 1_048_575;
/// The last column, `XFD`.
pub const LAST_COLUMN: u32 = 16_383;

/// A cell, row and column counted from 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct CellRef {
    /// Row from 0.
    pub row: u32,
    /// Column from 0.
    pub column: u32,
}

impl CellRef {
    /// The cell with dollar signs before column and row.
    pub fn absolute(self) -> String {
        format!("${}${}", column_letters(self.column), self.row + 1)
    }
}

impl fmt::Display for CellRef {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}{}", column_letters(self.column), self.row + 1)
    }
}

/// A rectangle of cells on a sheet.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Range {
    /// The sheet's name, unquoted.
    pub sheet: String,
    /// The upper left cell.
    pub first: CellRef,
    /// The lower right cell.
    pub last: CellRef,
}

impl Range {
    /// Part of one column.
    pub fn column(sheet: impl Into<String>, column: u32, first_row: u32, last_row: u32) -> Self {
        Range { sheet: sheet.into(), first: CellRef { row: first_row, column }, last: CellRef { row: last_row, column } }
    }

    /// Whether the range is part of one column.
    pub fn is_column(&self) -> bool {
        self.first.column == self.last.column
    }

    /// How many cells the range has.
    pub fn len(&self) -> usize {
        (self.last.row - self.first.row + 1) as usize * (self.last.column - self.first.column + 1) as usize
    }

    /// A range has at least one cell.
    pub fn is_empty(&self) -> bool {
        false
    }

    /// The range with dollar signs, sheet included, as charts and formulas use it.
    pub fn absolute(&self) -> String {
        format!("{}!{}:{}", quote_sheet(&self.sheet), self.first.absolute(), self.last.absolute())
    }
}

impl fmt::Display for Range {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}!{}", quote_sheet(&self.sheet), self.first)?;
        if self.first == self.last { Ok(()) } else { write!(f, ":{}", self.last) }
    }
}

/// What is wrong with a reference.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("`{text}` is not a reference to cells; expected something like `Ratings!B2:B53` or `'Week data'!B2:B53`")]
pub struct ReferenceError {
    /// The text as it came.
    pub text: String,
}

impl FromStr for Range {
    type Err = ReferenceError;

    /// Reads a reference with its sheet; dollar signs do not matter.
    fn from_str(text: &str) -> Result<Self, ReferenceError> {
        parse(text.trim()).ok_or_else(|| ReferenceError { text: text.to_owned() })
    }
}

fn parse(text: &str) -> Option<Range> {
    let (sheet, cells) = match text.strip_prefix('\'') {
        Some(rest) => {
            let end = closing_quote(rest)?;
            (rest[..end].replace("''", "'"), rest[end + 1..].strip_prefix('!')?)
        }
        None => {
            let (sheet, cells) = text.rsplit_once('!')?;
            (sheet.to_owned(), cells)
        }
    };
    let (first, last) = match cells.split_once(':') {
        Some((first, last)) => (cell(first)?, cell(last)?),
        None => (cell(cells)?, cell(cells)?),
    };
    let ordered = first.row <= last.row && first.column <= last.column;
    (ordered && !sheet.is_empty()).then_some(Range { sheet, first, last })
}

fn closing_quote(text: &str) -> Option<usize> {
    let mut position = 0;
    loop {
        position += text[position..].find('\'')?;
        if text[position + 1..].starts_with('\'') { position += 2 } else { return Some(position) }
    }
}

fn cell(text: &str) -> Option<CellRef> {
    let text = text.replace('$', "");
    let digits = text.find(|c: char| c.is_ascii_digit())?;
    let (letters, digits) = text.split_at(digits);
    let column = column_number(letters)?;
    let row: u32 = digits.parse().ok()?;
    (row >= 1 && row - 1 <= LAST_ROW).then(|| CellRef { row: row - 1, column })
}

/// The letters of a column counted from 0: 0 is `A`, 26 is `AA`.
pub fn column_letters(column: u32) -> String {
    let mut letters = Vec::new();
    let mut rest = column + 1;
    while rest > 0 {
        letters.push(b'A' + ((rest - 1) % 26) as u8);
        rest = (rest - 1) / 26;
    }
    letters.iter().rev().map(|&letter| letter as char).collect()
}

/// The number of a column from 0; `None` beyond `XFD`.
pub fn column_number(letters: &str) -> Option<u32> {
    if letters.is_empty() || letters.len() > 3 || !letters.bytes().all(|b| b.is_ascii_alphabetic()) {
        return None;
    }
    let number = letters.bytes().fold(0, |sum, letter| sum * 26 + u32::from(letter.to_ascii_uppercase() - b'A') + 1);
    (number - 1 <= LAST_COLUMN).then_some(number - 1)
}

/// A sheet's name as a formula needs it: in single quotes unless it is a plain word that cannot be taken for a cell.
pub fn quote_sheet(name: &str) -> String {
    let plain = name.chars().all(|c| c.is_alphanumeric() || c == '_')
        && !name.starts_with(|c: char| c.is_ascii_digit())
        && cell(name).is_none()
        && !looks_like_row_column(name);
    if plain { name.to_owned() } else { format!("'{}'", name.replace('\'', "''")) }
}

/// `R1C1`, `R`, `C` and their like name cells in the other style of reference; so do `TRUE` and `FALSE` name values.
fn looks_like_row_column(name: &str) -> bool {
    let upper = name.to_ascii_uppercase();
    let numbered = upper.starts_with(['R', 'C']) && upper.chars().all(|c| c.is_ascii_digit() || c == 'R' || c == 'C');
    numbered || upper == "TRUE" || upper == "FALSE"
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn references_are_read_and_written() {
        for text in ["Ratings!B2:B53", "'Week data'!B2:B53", "'It''s'!AA10", "'A1'!A1", "'2025'!C3:D4", "'R1C1'!A1", "Größe!A1"]
        {
            assert_eq!(text.parse::<Range>().unwrap().to_string(), text);
        }
        assert_eq!("Data!$B$2:$B$5".parse::<Range>().unwrap().to_string(), "Data!B2:B5");
        assert_eq!("Data!B2:B5".parse::<Range>().unwrap().absolute(), "Data!$B$2:$B$5");
        for text in ["", "B2:B5", "Data!", "Data!B0", "Data!XFE1", "Data!B5:B2", "'Data!B2", "Data!B2:"] {
            assert!(text.parse::<Range>().is_err(), "{text}");
        }
    }

    #[test]
    fn columns_have_letters() {
        for (number, letters) in [(0, "A"), (25, "Z"), (26, "AA"), (701, "ZZ"), (702, "AAA"), (LAST_COLUMN, "XFD")] {
            assert_eq!((column_letters(number).as_str(), column_number(letters)), (letters, Some(number)));
        }
    }
}
