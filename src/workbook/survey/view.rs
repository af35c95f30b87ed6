//! A sheet as it is looked at while tables are found: its cells and what kind each one is.

use super::cells::{Cells, Packed, SheetCells};
use super::kind::{Kind, Kinds};
use crate::reading::Cell;
use crate::reading::list;

/// A sheet with what is needed to understand its cells.
#[derive(Clone, Copy)]
pub struct View<'a> {
    /// The workbook.
    pub cells: &'a Cells,
    /// The sheet.
    pub sheet: &'a SheetCells,
    /// The kinds of the workbook's texts.
    pub kinds: &'a Kinds,
}

impl<'a> View<'a> {
    /// A cell as it is kept; empty where there is none.
    pub fn get(self, row: u32, column: u32) -> Packed {
        self.sheet.get(row, column)
    }

    /// A cell.
    pub fn cell(self, row: u32, column: u32) -> Cell {
        self.cells.cell(self.sheet, row, column)
    }

    /// The text of a cell that holds one.
    pub fn text(self, row: u32, column: u32) -> Option<&'a str> {
        match self.get(row, column) {
            Packed::Text(text) => Some(self.cells.text(text)),
            _ => None,
        }
    }

    /// The kind of a cell.
    pub fn kind(self, row: u32, column: u32) -> Kind {
        self.kind_of(self.get(row, column))
    }

    /// The kind of a cell taken out of its column.
    pub fn kind_of(self, cell: Packed) -> Kind {
        self.kinds.of(self.cells, cell)
    }

    /// A cell as a number, if it holds one or a text that is one.
    pub fn number(self, row: u32, column: u32) -> Option<f64> {
        match self.get(row, column) {
            Packed::Number(number) => Some(number),
            Packed::Text(text) => list::number(self.cells.text(text)),
            _ => None,
        }
    }
}

/// How many cells of each kind a column has.
#[derive(Clone, Debug, Default)]
pub struct Look {
    counts: [u32; Kind::COUNT],
}

/// What most of a column is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mostly {
    /// Nothing, or only ways to say so.
    Nothing,
    /// Numbers.
    Numbers,
    /// Dates, or periods as text.
    Moments,
    /// Other text.
    Words,
    /// Numbers and words.
    Both,
}

impl Look {
    /// Counts the cells of a column from one row to another, ends included.
    pub fn at(view: View<'_>, column: u32, (first, last): (u32, u32)) -> Look {
        let mut look = Look::default();
        view.sheet.filled(column, first, last).for_each(|(_, cell)| look.counts[view.kind_of(cell) as usize] += 1);
        look
    }

    /// How many cells are of a kind.
    pub fn count(&self, kind: Kind) -> u32 {
        self.counts[kind as usize]
    }

    /// How many cells can be read as numbers.
    pub fn numbers(&self) -> u32 {
        [Kind::Number, Kind::NumberText, Kind::Truth, Kind::Duration].iter().map(|&kind| self.count(kind)).sum()
    }

    /// How many cells hold something that is not a way to say that there is nothing.
    pub fn present(&self) -> u32 {
        self.filled() - self.count(Kind::NotAvailable) - self.count(Kind::Error)
    }

    /// How many cells are filled.
    pub fn filled(&self) -> u32 {
        self.counts.iter().sum()
    }

    /// What most of the column is.
    pub fn mostly(&self) -> Mostly {
        let present = self.present();
        let moments = self.count(Kind::Date) + self.count(Kind::Period);
        let words = self.count(Kind::Word) + self.count(Kind::Code);
        if present == 0 {
            Mostly::Nothing
        } else if self.numbers() * 10 >= present * 6 {
            Mostly::Numbers
        } else if moments * 2 > present {
            Mostly::Moments
        } else if words * 10 >= present * 6 {
            Mostly::Words
        } else {
            Mostly::Both
        }
    }
}
