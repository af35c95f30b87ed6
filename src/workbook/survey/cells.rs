//! The cells of a workbook in little memory: 8 bytes a cell, 16 a date, each text once.

use std::collections::HashMap;

use jiff::SignedDuration;
use jiff::civil::{Date, DateTime};

use crate::reading::Cell;

/// Blank cells that are kept as such within a column; a longer gap begins a new segment, so that a lone cell far below
/// costs nothing.
const LONGEST_GAP: u32 = 16;

/// All cells of a workbook.
#[derive(Default)]
pub struct Cells {
    /// The sheets in order.
    pub sheets: Vec<SheetCells>,
    /// What was noticed while reading, in whole sentences.
    pub remarks: Vec<String>,
    /// Whether dates count from 1904.
    pub date_1904: bool,
    texts: Vec<Box<str>>,
    by_text: HashMap<Box<str>, u32>,
    count: usize,
}

/// The cells of a sheet.
#[derive(Default)]
pub struct SheetCells {
    /// The sheet's name.
    pub name: String,
    columns: Vec<Vec<Segment>>,
    /// The days of dates and durations, which slots refer to.
    days: Vec<f64>,
    /// How many cells of each column are shown as percentages.
    percentages: Vec<u32>,
}

struct Segment {
    first: u32,
    cells: Vec<Slot>,
}

/// A cell in 8 bytes: a number as it is, anything else in the bits of a NaN, which no cell holds: which kind of thing it
/// is, and a number of 32 bits.
#[derive(Clone, Copy, PartialEq, Eq)]
struct Slot(u64);

impl Slot {
    const NOT_A_NUMBER: u64 = 0xFFF8 << 48;
    const EMPTY: Slot = Slot::of(1, 0);

    const fn of(kind: u64, content: u32) -> Slot {
        Slot(Slot::NOT_A_NUMBER | kind << 32 | content as u64)
    }
}

/// A cell taken out of its column.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Packed {
    Empty,
    Number(f64),
    Text(u32),
    Truth(bool),
    /// A date as the spreadsheet's serial number.
    Date(f64),
    Duration(f64),
    Error(u32),
}

impl Cells {
    /// Begins a sheet; cells are added to the sheet begun last.
    pub fn begin_sheet(&mut self, name: &str) {
        self.sheets.push(SheetCells { name: name.to_owned(), ..SheetCells::default() });
    }

    /// How many filled cells there are.
    pub fn count(&self) -> usize {
        self.count
    }

    /// The number under which a text is kept.
    pub fn keep(&mut self, text: &str) -> u32 {
        if let Some(&known) = self.by_text.get(text) {
            return known;
        }
        let number = self.texts.len() as u32;
        self.texts.push(text.into());
        self.by_text.insert(text.into(), number);
        number
    }

    /// Adds a cell; rows of a column must come in order.
    pub fn add(&mut self, row: u32, column: u32, cell: Packed) {
        let Some(sheet) = self.sheets.last_mut() else { return };
        if cell == Packed::Empty {
            return;
        }
        self.count += 1;
        let slot = sheet.slot(cell);
        let column = column as usize;
        if sheet.columns.len() <= column {
            sheet.columns.resize_with(column + 1, Vec::new);
        }
        let segments = &mut sheet.columns[column];
        if let Some(last) = segments.last_mut() {
            let next = last.first + last.cells.len() as u32;
            if row >= next && row - next <= LONGEST_GAP {
                last.cells.resize((row - last.first) as usize, Slot::EMPTY);
                last.cells.push(slot);
                return;
            }
            if row < next {
                return;
            }
        }
        segments.push(Segment { first: row, cells: vec![slot] });
    }

    /// Counts a cell of the sheet begun last as one that is shown as a percentage.
    pub fn note_percentage(&mut self, column: u32) {
        let Some(sheet) = self.sheets.last_mut() else { return };
        let column = column as usize;
        if sheet.percentages.len() <= column {
            sheet.percentages.resize(column + 1, 0);
        }
        sheet.percentages[column] += 1;
    }

    /// A sheet by name, upper and lower case not told apart.
    pub fn sheet(&self, name: &str) -> Option<&SheetCells> {
        self.sheets.iter().find(|sheet| sheet.name == name).or_else(|| {
            let lower = name.to_lowercase();
            self.sheets.iter().find(|sheet| sheet.name.to_lowercase() == lower)
        })
    }

    /// A cell unpacked.
    pub fn unpack(&self, cell: Packed) -> Cell {
        match cell {
            Packed::Empty => Cell::Empty,
            Packed::Number(number) => Cell::Number(number),
            Packed::Text(text) => Cell::text(self.text(text)),
            Packed::Truth(truth) => Cell::Truth(truth),
            Packed::Duration(days) => Cell::Duration(days),
            Packed::Error(text) => Cell::Error(self.text(text).to_owned()),
            Packed::Date(serial) => match self.date(serial) {
                Some(date) => Cell::Date(date),
                None => Cell::Number(serial),
            },
        }
    }

    /// A text by its number.
    pub fn text(&self, number: u32) -> &str {
        self.texts.get(number as usize).map_or("", |text| text)
    }

    /// The date of a serial number: days since the end of 1899, or since the start of 1904.
    ///
    /// In the 1900 system the 29th of February 1900, which never was, has number 60; dates before it are one day on.
    fn date(&self, serial: f64) -> Option<DateTime> {
        let base = if self.date_1904 { Date::constant(1904, 1, 1) } else { Date::constant(1899, 12, 30) };
        let shift = if !self.date_1904 && serial < 60.0 { 1.0 } else { 0.0 };
        let seconds = ((serial + shift) * 86_400.0).round();
        if !(0.0..3e11).contains(&seconds) {
            return None;
        }
        base.to_datetime(jiff::civil::Time::midnight()).checked_add(SignedDuration::from_secs(seconds as i64)).ok()
    }

    /// A cell of a sheet.
    pub fn cell(&self, sheet: &SheetCells, row: u32, column: u32) -> Cell {
        self.unpack(sheet.get(row, column))
    }

    /// The filled cells of a sheet with row and column, column by column.
    pub fn all<'a>(&'a self, sheet: &'a SheetCells) -> impl Iterator<Item = (u32, u32, Cell)> + 'a {
        let columns =
            (0..sheet.width()).flat_map(|column| sheet.filled(column, 0, u32::MAX).map(move |(row, cell)| (row, column, cell)));
        columns.map(|(row, column, cell)| (row, column, self.unpack(cell)))
    }

    /// All rows of a sheet as text, from its first row to its last.
    pub fn texts_of(&self, name: &str) -> Vec<Vec<String>> {
        let Some(sheet) = self.sheet(name) else { return Vec::new() };
        let columns = sheet.width();
        let rows = (0..columns).filter_map(|column| sheet.last_row(column)).max().map_or(0, |last| last + 1);
        (0..rows).map(|row| (0..columns).map(|column| self.cell(sheet, row, column).quote()).collect()).collect()
    }
}

impl SheetCells {
    fn slot(&mut self, cell: Packed) -> Slot {
        match cell {
            Packed::Number(number) if number.is_nan() => Slot::EMPTY,
            Packed::Number(number) => Slot(number.to_bits()),
            Packed::Empty => Slot::EMPTY,
            Packed::Text(text) => Slot::of(2, text),
            Packed::Truth(truth) => Slot::of(3, truth.into()),
            Packed::Error(text) => Slot::of(4, text),
            Packed::Date(days) => Slot::of(5, self.keep_days(days)),
            Packed::Duration(days) => Slot::of(6, self.keep_days(days)),
        }
    }

    fn keep_days(&mut self, days: f64) -> u32 {
        self.days.push(days);
        self.days.len() as u32 - 1
    }

    fn packed(&self, slot: Slot) -> Packed {
        if slot.0 & Slot::NOT_A_NUMBER != Slot::NOT_A_NUMBER {
            return Packed::Number(f64::from_bits(slot.0));
        }
        let content = slot.0 as u32;
        let days = || self.days.get(content as usize).copied().unwrap_or_default();
        match (slot.0 >> 32) & 0xFF {
            2 => Packed::Text(content),
            3 => Packed::Truth(content == 1),
            4 => Packed::Error(content),
            5 => Packed::Date(days()),
            6 => Packed::Duration(days()),
            _ => Packed::Empty,
        }
    }

    /// How many columns there are, blank ones in between included.
    pub fn width(&self) -> u32 {
        self.columns.len() as u32
    }

    /// How many cells of a column are shown as percentages.
    pub fn percentages(&self, column: u32) -> usize {
        self.percentages.get(column as usize).map_or(0, |count| *count as usize)
    }

    /// A cell; empty where there is none.
    pub fn get(&self, row: u32, column: u32) -> Packed {
        let Some(segments) = self.columns.get(column as usize) else { return Packed::Empty };
        let after = segments.partition_point(|segment| segment.first <= row);
        let Some(segment) = after.checked_sub(1).map(|index| &segments[index]) else { return Packed::Empty };
        segment.cells.get((row - segment.first) as usize).map_or(Packed::Empty, |slot| self.packed(*slot))
    }

    /// The last filled row of a column.
    pub fn last_row(&self, column: u32) -> Option<u32> {
        let last = self.columns.get(column as usize)?.last()?;
        Some(last.first + last.cells.len() as u32 - 1)
    }

    /// The filled cells of a column within rows, from top to bottom.
    pub fn filled(&self, column: u32, first: u32, last: u32) -> impl Iterator<Item = (u32, Packed)> + '_ {
        let segments = self.columns.get(column as usize).map(Vec::as_slice).unwrap_or_default();
        let from = segments.partition_point(|segment| segment.first + segment.cells.len() as u32 <= first);
        segments[from..].iter().take_while(move |segment| segment.first <= last).flat_map(move |segment| {
            let skip = first.saturating_sub(segment.first) as usize;
            let cells =
                segment.cells.iter().enumerate().skip(skip).map(|(at, &slot)| (segment.first + at as u32, self.packed(slot)));
            cells.take_while(move |(row, _)| *row <= last).filter(|(_, cell)| *cell != Packed::Empty)
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_cell_comes_back_from_its_eight_bytes() {
        let mut cells = Cells::default();
        cells.begin_sheet("S");
        let word = cells.keep("word");
        let all = [
            Packed::Number(-0.5),
            Packed::Number(f64::NEG_INFINITY),
            Packed::Number(-f64::MAX),
            Packed::Text(word),
            Packed::Truth(true),
            Packed::Truth(false),
            Packed::Error(u32::MAX),
            Packed::Date(45_000.25),
            Packed::Duration(-1.5),
            Packed::Date(45_001.0),
        ];
        for (row, cell) in (0..).zip(all) {
            cells.add(row, 0, cell);
        }
        let sheet = cells.sheet("S").unwrap();
        assert_eq!(sheet.filled(0, 0, 100).map(|(_, cell)| cell).collect::<Vec<_>>(), all);
        assert_eq!(size_of::<Slot>(), 8);
    }

    #[test]
    fn lone_cells_far_away_cost_nothing() {
        let mut cells = Cells::default();
        cells.begin_sheet("S");
        cells.add(0, 0, Packed::Number(1.0));
        cells.add(3, 0, Packed::Number(2.0));
        cells.add(1_048_575, 0, Packed::Number(3.0));
        cells.add(5, 16_383, Packed::Truth(true));
        let sheet = cells.sheet("s").unwrap();
        assert_eq!(sheet.columns[0].iter().map(|segment| segment.cells.len()).sum::<usize>(), 5);
        assert_eq!((sheet.get(3, 0), sheet.get(2, 0), sheet.get(9, 0)), (Packed::Number(2.0), Packed::Empty, Packed::Empty));
        assert_eq!(sheet.filled(0, 1, 2_000_000).map(|(row, _)| row).collect::<Vec<_>>(), [3, 1_048_575]);
    }

    /// ECMA-376 part 1, section 18.17.4.1: serial 1 is 1900-01-01, 39448 is 2008-01-01; with 1904 dates, 0 is 1904-01-01.
    #[test]
    fn serial_numbers_are_dates() {
        let date = |date_1904, serial| {
            let cells = Cells { date_1904, ..Cells::default() };
            cells.date(serial).unwrap().to_string()
        };
        assert_eq!(date(false, 1.0), "1900-01-01T00:00:00");
        assert_eq!(date(false, 61.0), "1900-03-01T00:00:00");
        assert_eq!(date(false, 39448.5), "2008-01-01T12:00:00");
        assert_eq!(date(true, 0.0), "1904-01-01T00:00:00");
    }
}
