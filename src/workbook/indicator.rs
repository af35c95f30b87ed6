//! An indicator found in a workbook, and what was judged of it.

use super::plan::PlanRow;
use super::reference::{CellRef, Range};
use crate::finding::Finding;
use crate::reading::{Series, Understood};

/// Where an indicator's readings stand.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Place {
    /// The sheet's name.
    pub sheet: String,
    /// The column of the readings, from 0.
    pub column: u32,
    /// The column of the moments, from 0, where there is one.
    pub moments: Option<u32>,
    /// The rows of the readings, from 0, in time order: the row of reading i is `rows[i]`.
    pub rows: Rows,
    /// The cell that names the indicator, where there is one.
    pub header: Option<CellRef>,
}

/// Rows in time order.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Rows {
    /// `count` rows one below the other, the oldest on top.
    Down { first: u32, count: u32 },
    /// `count` rows one below the other, the newest on top; `first` is the row of the oldest, the lowest one.
    Up { first: u32, count: u32 },
    /// Any rows, as in a long table where several indicators alternate.
    Listed(Vec<u32>),
}

impl Rows {
    /// The row of a reading.
    pub fn row(&self, index: usize) -> u32 {
        match self {
            Rows::Down { first, .. } => first + index as u32,
            Rows::Up { first, .. } => first - index as u32,
            Rows::Listed(rows) => rows[index],
        }
    }

    /// How many readings there are.
    pub fn len(&self) -> usize {
        match self {
            Rows::Down { count, .. } | Rows::Up { count, .. } => *count as usize,
            Rows::Listed(rows) => rows.len(),
        }
    }

    /// Whether there are none.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }
}

impl Place {
    /// The cell of a reading.
    pub fn cell(&self, index: usize) -> CellRef {
        CellRef { row: self.rows.row(index), column: self.column }
    }

    /// The smallest range that holds all readings.
    pub fn range(&self) -> Option<Range> {
        self.span(self.column)
    }

    /// The smallest range that holds all moments.
    pub fn moments_range(&self) -> Option<Range> {
        self.moments.and_then(|column| self.span(column))
    }

    /// In a long table, the smallest range that holds the indicator's name in each of its rows.
    pub fn names_range(&self) -> Option<Range> {
        match self.rows {
            Rows::Listed(_) => self.span(self.header?.column),
            _ => None,
        }
    }

    fn span(&self, column: u32) -> Option<Range> {
        let last = self.rows.len().checked_sub(1)?;
        let (a, b) = match &self.rows {
            Rows::Listed(rows) => (*rows.iter().min()?, *rows.iter().max()?),
            rows => (rows.row(0), rows.row(last)),
        };
        Some(Range::column(self.sheet.clone(), column, a.min(b), a.max(b)))
    }
}

/// An indicator of a workbook.
#[derive(Clone, Debug, PartialEq)]
pub struct Indicator {
    /// Its readings in time order, name and unit included.
    pub series: Series,
    /// What was understood of the cells.
    pub understood: Understood,
    /// Where the readings stand.
    pub place: Place,
    /// The readings whose cells hold text that was read as a number or a limit, as indices in order.
    pub as_text: Vec<u32>,
    /// What was noticed while finding it, in whole sentences: reversed order, text numbers, totals left out.
    pub remarks: Vec<String>,
}

impl Indicator {
    /// Stands in for an indicator whose row of the plan leads to no readings; the reason is its remark.
    pub fn absent(row: &PlanRow, reason: String) -> Self {
        let series = Series { name: row.indicator.clone(), ..Series::of_numbers(&[]) };
        let place = Place { sheet: String::new(), column: 0, moments: None, rows: Rows::Listed(Vec::new()), header: None };
        Indicator { series, understood: Understood::default(), place, as_text: Vec::new(), remarks: vec![reason] }
    }
}

/// An indicator, the plan's row for it, and what was found.
pub struct Judged {
    /// The indicator.
    pub indicator: Indicator,
    /// The row of the plan by which it was judged.
    pub row: PlanRow,
    /// What was found.
    pub finding: Finding,
}
