//! The moments of rows, completed by a column beside them: a year beside a month, a time of day beside a date.

use std::collections::HashSet;
use std::sync::Arc;

use jiff::civil::DateTime;

use super::cells::Packed;
use super::kind::Kind;
use super::table::is_year;
use super::view::View;
use crate::reading::moment::cycle::{Cycle, cycle_of_word};
use crate::reading::moment::period::month_number;
use crate::reading::moment::{MomentError, MomentKind};
use crate::reading::{Cell, Moments};
use crate::workbook::indicator::{Place, Rows};
use crate::workbook::reference::{CellRef, column_letters};

/// A column that completes the moments beside it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Companion {
    /// Years, each standing for the rows below it too until the next one.
    Years { column: u32, cycle: Cycle },
    /// Times of day.
    Times { column: u32 },
}

impl Companion {
    /// Looks for a column beside the moments, left or right, that completes them. `rows` are in the order of the sheet.
    pub fn of(view: View<'_>, moments: u32, rows: &[u32]) -> Option<Companion> {
        let &first = rows.first()?;
        let beside = || [moments.checked_sub(1), moments.checked_add(1)].into_iter().flatten();
        if matches!(view.get(first, moments), Packed::Date(_)) {
            let time = |row: u32, column| matches!(view.get(row, column), Packed::Duration(days) if (0.0..1.0).contains(&days));
            let column = beside().find(|&column| rows.iter().all(|&row| time(row, column)))?;
            let dates: Option<HashSet<DateTime>> = rows.iter().map(|&row| date(view.cell(row, moments))).collect();
            return (dates?.len() < rows.len()).then_some(Companion::Times { column });
        }
        let cycle = cycle(view, moments, rows)?;
        let column = beside().find(|&column| years(view, column, rows).is_some())?;
        Some(Companion::Years { column, cycle })
    }

    /// Its column.
    pub fn column(self) -> u32 {
        match self {
            Companion::Years { column, .. } | Companion::Times { column } => column,
        }
    }

    /// What is said of it.
    pub fn remark(self) -> String {
        let what = match self {
            Companion::Years { .. } => "years",
            Companion::Times { .. } => "times of day",
        };
        format!("The moments are completed by the {what} in column {}.", column_letters(self.column()))
    }
}

fn date(cell: Cell) -> Option<DateTime> {
    match cell {
        Cell::Date(date) => Some(date),
        _ => None,
    }
}

/// Which parts of a year the moments are, if they lack the year.
fn cycle(view: View<'_>, moments: u32, rows: &[u32]) -> Option<Cycle> {
    let &first_row = rows.first()?;
    let first = view.cell(first_row, moments).quote();
    let word = first.split(|c: char| !c.is_alphabetic()).next().unwrap_or("");
    let cycle = if month_number(&first).is_some() {
        Cycle::MonthNames
    } else if word.is_empty() {
        const HIGHEST_HEADING: u32 = 4;
        let above = |row: u32| view.text(row, moments);
        let heading = (first_row.saturating_sub(HIGHEST_HEADING)..first_row).rev().find_map(above)?;
        cycle_of_word(heading.split_whitespace().next()?)?
    } else {
        cycle_of_word(word)?
    };
    rows.iter().all(|&row| part(&view.cell(row, moments), cycle).is_some()).then_some(cycle)
}

/// The number of the part of the year in a cell.
fn part(cell: &Cell, cycle: Cycle) -> Option<u32> {
    let text = cell.quote();
    if cycle == Cycle::MonthNames {
        return month_number(&text).map(|month| month.unsigned_abs().into());
    }
    let number: u32 = text.trim_start_matches(|c: char| c.is_alphabetic() || " .-#".contains(c)).parse().ok()?;
    (1..=cycle.longest()).contains(&number).then_some(number)
}

/// The year of each row; `None` if the column holds anything else.
fn years(view: View<'_>, column: u32, rows: &[u32]) -> Option<Vec<u32>> {
    let mut current = None;
    let years = rows.iter().map(|&row| {
        if view.get(row, column) != Packed::Empty {
            current = view.number(row, column).filter(|&year| is_year(year)).map(|year| year as u32);
        }
        current
    });
    years.collect()
}

/// The moments of rows as cells, completed where a column beside them does so.
fn moment_cells(view: View<'_>, moments: u32, rows: &[u32], companion: Option<Companion>) -> Vec<Cell> {
    let plain = || rows.iter().map(|&row| view.cell(row, moments));
    match companion {
        None => plain().collect(),
        Some(Companion::Times { column }) => plain().zip(rows).map(|(cell, &row)| at_time(cell, view.get(row, column))).collect(),
        Some(Companion::Years { column, cycle }) => match years(view, column, rows) {
            Some(years) => plain().zip(years).map(|(cell, year)| with_year(cell, year, cycle)).collect(),
            None => plain().collect(),
        },
    }
}

fn at_time(cell: Cell, time: Packed) -> Cell {
    match (cell, time) {
        (Cell::Date(date), Packed::Duration(days)) => {
            let seconds = jiff::SignedDuration::from_secs((days * 86_400.0).round() as i64);
            Cell::Date(date.checked_add(seconds).unwrap_or(date))
        }
        (cell, _) => cell,
    }
}

fn with_year(cell: Cell, year: u32, cycle: Cycle) -> Cell {
    let Some(number) = part(&cell, cycle) else { return cell };
    Cell::Text(match cycle {
        Cycle::Weeks => format!("{year}-W{number:02}"),
        Cycle::Quarters => format!("{year}-Q{number}"),
        Cycle::Halves => format!("{year}-H{number}"),
        Cycle::Months | Cycle::MonthNames => format!("{year}-{number:02}"),
    })
}

/// Rows in time order with their moments.
#[derive(Clone, Debug)]
pub struct Timeline {
    /// The rows, the oldest reading first.
    pub rows: Rows,
    /// The column of the moments.
    pub column: Option<u32>,
    /// One moment a row.
    pub moments: Arc<Moments>,
    /// What was noticed, in whole sentences.
    pub remarks: Vec<String>,
}

impl Timeline {
    /// Brings rows, given from top to bottom, into time order by a column of moments.
    pub fn of(view: View<'_>, column: Option<u32>, mut rows: Vec<u32>) -> Timeline {
        let Some(moments_column) = column else { return Timeline::of_positions(rows, None, Vec::new()) };
        let companion = Companion::of(view, moments_column, &rows);
        let mut remarks: Vec<String> = companion.map(Companion::remark).into_iter().collect();
        let read = match Moments::of_cells(&moment_cells(view, moments_column, &rows, companion)) {
            Ok(moments) => moments.counted_on(),
            Err(error) => {
                remarks.push(format!("Positions stand in for the moments: {error}."));
                return Timeline::of_positions(rows, column, remarks);
            }
        };
        let mut moments = read;
        if moments.kind() == MomentKind::Label
            && let Some(&row) = rows.first()
            && view.kind(row, moments_column) == Kind::Period
        {
            let label = moments.label(0);
            remarks.push(format!(
                "Moments such as `{label}` can be read in several ways; the rows were taken in the order in which they stand."
            ));
        }
        if moments.newest_first() || runs_backwards(&moments) {
            remarks.push("The newest reading stands on top; the readings were taken from the bottom up.".to_owned());
            moments = moments.reversed();
            rows.reverse();
        }
        if let Err(error) = moments.check_order(false, None) {
            remarks.push(disorder(&error, &view.sheet.name, moments_column, &rows));
        }
        Timeline { rows: in_place(rows), column, moments: Arc::new(moments), remarks }
    }

    fn of_positions(rows: Vec<u32>, column: Option<u32>, remarks: Vec<String>) -> Timeline {
        let moments = Arc::new(Moments::positions(rows.len()));
        Timeline { rows: in_place(rows), column, moments, remarks }
    }
}

/// Whether the newest row stands on top and some moments have several rows.
fn runs_backwards(moments: &Moments) -> bool {
    let axis = || (0..moments.len()).map(|index| moments.axis(index));
    let falls = || axis().zip(axis().skip(1)).map(|(above, below)| below <= above);
    moments.len() > 1 && falls().all(|falls| falls) && moments.axis(moments.len() - 1) < moments.axis(0)
}

/// What is said of moments that are out of order or occur more than once.
fn disorder(error: &MomentError, sheet: &str, column: u32, rows: &[u32]) -> String {
    let cell = |position: usize| {
        let row = position.checked_sub(1).and_then(|index| rows.get(index)).copied().unwrap_or_default();
        CellRef { row, column }
    };
    match error {
        MomentError::OutOfOrder { position, label, before } => format!(
            "The moments are not in time order: `{label}` in {} of {sheet} stands below `{before}`; sort the rows by time.",
            cell(*position)
        ),
        MomentError::Repeated { position, label } => format!(
            "There are several readings for the moment `{label}`, one of them in {} of {sheet}; ask for the test \
             jonckheere-terpstra, which takes several readings at a moment, or keep the median of each moment.",
            cell(*position)
        ),
        error => format!("The moments cannot be used: {error}."),
    }
}

/// Rows as an indicator keeps them.
fn in_place(rows: Vec<u32>) -> Rows {
    let count = rows.len() as u32;
    match rows.first() {
        Some(&first) if rows.windows(2).all(|pair| pair[0] + 1 == pair[1]) => Rows::Down { first, count },
        Some(&first) if rows.windows(2).all(|pair| pair[0] == pair[1] + 1) => Rows::Up { first, count },
        _ => Rows::Listed(rows),
    }
}

impl Timeline {
    /// Where a column's readings stand.
    pub fn place(&self, sheet: &str, column: u32, header: Option<CellRef>) -> Place {
        Place { sheet: sheet.to_owned(), column, moments: self.column, rows: self.rows.clone(), header }
    }
}
