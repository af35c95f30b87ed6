//! Tables on a sheet: rectangles of cells, their headings, and where their readings begin.

use super::cells::{Packed, SheetCells};
use super::heading::{Heading, heading_rows, headings};
use super::kind::Kind;
use super::view::{Look, Mostly, View};

/// A rectangle of cells, ends included, from 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Block {
    pub top: u32,
    pub bottom: u32,
    pub left: u32,
    pub right: u32,
}

/// A table with its headings and the rows below them.
pub struct Table {
    /// The first and the last row below the headings.
    pub rows: (u32, u32),
    /// The columns, in order.
    pub columns: Vec<Column>,
}

/// A column of a table.
pub struct Column {
    /// The column's number on the sheet.
    pub column: u32,
    /// What stands above it.
    pub heading: Heading,
    /// What its cells hold.
    pub look: Look,
}

/// Rows of titles and notes that may stand above the readings.
const MOST_ROWS_ABOVE: usize = 200;

impl Table {
    /// A column of the table by its number on the sheet.
    pub fn column(&self, column: u32) -> Option<&Column> {
        self.columns.iter().find(|found| found.column == column)
    }

    /// The first and the last column.
    fn sides(&self) -> Option<(u32, u32)> {
        Some((self.columns.first()?.column, self.columns.last()?.column))
    }

    /// Whether nothing stands above its columns.
    fn is_headless(&self) -> bool {
        self.columns.iter().all(|column| column.heading.name.is_empty())
    }

    /// Whether most headings over numbers are moments: the readings of an indicator stand side by side.
    pub fn is_across(&self) -> bool {
        let over_numbers = self.columns.iter().filter(|column| column.look.mostly() == Mostly::Numbers);
        let (moments, others): (Vec<bool>, Vec<bool>) =
            over_numbers.map(|column| column.heading.is_moment).partition(|&moment| moment);
        moments.len() >= 3 && moments.len() > others.len()
    }
}

/// The tables of a sheet: its cells cut at blank rows and blank columns.
pub fn tables(view: View<'_>) -> Vec<Table> {
    let sheet = view.sheet;
    let bottom = (0..sheet.width()).filter_map(|column| sheet.last_row(column)).max();
    let Some(bottom) = bottom else { return Vec::new() };
    let whole = Block { top: 0, bottom, left: 0, right: sheet.width() - 1 };
    let mut blocks = Vec::new();
    cut(sheet, whole, &mut blocks, 0);
    let mut tables: Vec<Table> = Vec::new();
    let mut words_above: Option<Block> = None;
    for block in blocks {
        let Some(mut found) = table(view, block) else {
            words_above = Some(block);
            continue;
        };
        // Headings may be parted from the readings by a blank row.
        if let Some(above) = words_above.take()
            && found.is_headless()
            && above.left == block.left
            && above.right > above.left
            && (1..=2).contains(&block.top.saturating_sub(above.bottom))
        {
            found = table(view, Block { top: above.top, right: block.right.max(above.right), ..block }).unwrap_or(found);
        }
        match tables.iter_mut().find(|above| goes_on(above, &found)) {
            Some(above) => {
                above.rows.1 = found.rows.1;
                let rows = above.rows;
                above.columns.iter_mut().for_each(|column| column.look = Look::at(view, column.column, rows));
            }
            None => tables.push(found),
        }
    }
    tables
}

/// Whether a table without headings is the rest of the one above, behind a blank row.
fn goes_on(above: &Table, below: &Table) -> bool {
    let same_columns = match (above.sides(), below.sides()) {
        (Some(above), Some(below)) => above.0 == below.0 && below.1 <= above.1,
        _ => false,
    };
    same_columns && below.is_headless() && below.rows.0 > above.rows.1 && below.rows.0 - above.rows.1 <= 3
}

/// Cuts a block at blank rows and columns until nothing is blank all through.
fn cut(sheet: &SheetCells, block: Block, found: &mut Vec<Block>, depth: u32) {
    const DEEPEST: u32 = 12;
    let Some(block) = trimmed(sheet, block) else { return };
    let columns: Vec<bool> =
        (block.left..=block.right).map(|column| sheet.filled(column, block.top, block.bottom).next().is_some()).collect();
    let column_runs = runs(&columns, block.left);
    if column_runs.len() > 1 && depth < DEEPEST {
        for (left, right) in column_runs {
            cut(sheet, Block { left, right, ..block }, found, depth + 1);
        }
        return;
    }
    let mut rows = vec![false; (block.bottom - block.top + 1) as usize];
    for column in block.left..=block.right {
        for (row, _) in sheet.filled(column, block.top, block.bottom) {
            rows[(row - block.top) as usize] = true;
        }
    }
    let row_runs = runs(&rows, block.top);
    if row_runs.len() > 1 && depth < DEEPEST {
        for (top, bottom) in row_runs {
            cut(sheet, Block { top, bottom, ..block }, found, depth + 1);
        }
        return;
    }
    found.push(block);
}

fn trimmed(sheet: &SheetCells, block: Block) -> Option<Block> {
    let columns = (block.left..=block.right).filter_map(|column| {
        let mut rows = sheet.filled(column, block.top, block.bottom).map(|(row, _)| row);
        let first = rows.next()?;
        Some((column, first, rows.last().unwrap_or(first)))
    });
    columns.fold(None, |found: Option<Block>, (column, first, last)| {
        Some(match found {
            None => Block { top: first, bottom: last, left: column, right: column },
            Some(block) => Block { top: block.top.min(first), bottom: block.bottom.max(last), right: column, ..block },
        })
    })
}

/// Maximal runs of `true`, as first and last number.
fn runs(filled: &[bool], first: u32) -> Vec<(u32, u32)> {
    let mut runs: Vec<(u32, u32)> = Vec::new();
    for (at, _) in filled.iter().enumerate().filter(|(_, filled)| **filled) {
        let at = first + at as u32;
        match runs.last_mut() {
            Some((_, last)) if *last + 1 == at => *last = at,
            _ => runs.push((at, at)),
        }
    }
    runs
}

/// Makes a table of a block; `None` if nothing in it looks like readings.
fn table(view: View<'_>, block: Block) -> Option<Table> {
    let columns = || block.left..=block.right;
    let is_data = |row: u32, column: u32| view.kind(row, column).is_data();
    let filled = |row: u32| columns().filter(|&column| view.get(row, column) != Packed::Empty).count();
    let data = |row: u32| columns().filter(|&column| is_data(row, column)).count();
    // The readings begin where cells that look like data go on in the row below.
    let first = (block.top..=block.bottom).take(MOST_ROWS_ABOVE).find(|&row| {
        let here = data(row);
        let goes_on = row == block.bottom || columns().any(|column| is_data(row, column) && is_data(row + 1, column));
        let wide_enough = filled(row) >= 2 || block.left == block.right;
        here > 0 && 2 * here >= filled(row).min(3) && wide_enough && goes_on && !heads_with_moments(view, block, row)
    });
    let first = first.or_else(|| only_words(view, block))?;
    let rows = (first, block.bottom);
    let columns = headings(view, block, heading_rows(view, block, first)).into_iter().map(|(column, heading)| Column {
        column,
        heading,
        look: Look::at(view, column, rows),
    });
    Some(Table { rows, columns: columns.collect() })
}

/// A block of words alone may be one of graded readings: its first row heads it.
fn only_words(view: View<'_>, block: Block) -> Option<u32> {
    let width = block.right - block.left + 1;
    let whole = |row: u32| (block.left..=block.right).all(|column| view.kind(row, column) == Kind::Word);
    (width >= 2 && block.bottom - block.top >= 3 && whole(block.top)).then_some(block.top + 1)
}

/// Whether a row names the moments of the numbers below it, side by side.
fn heads_with_moments(view: View<'_>, block: Block, row: u32) -> bool {
    let pairs = || (block.left..=block.right).map(|column| (view.get(row, column), view.get(row + 1, column)));
    let over_number = |below: Packed| matches!(below, Packed::Number(number) if !is_year(number));
    let named = pairs().filter(|&(here, below)| {
        let year = matches!(here, Packed::Number(number) if is_year(number));
        (year || view.kind_of(here).is_moment()) && over_number(below)
    });
    let other_data = pairs().filter(|&(here, _)| view.kind_of(here).is_data()).count();
    let named = named.count();
    named >= 3 && named == other_data
}

/// Whether a number may be a year.
pub fn is_year(number: f64) -> bool {
    number.fract() == 0.0 && (1900.0..2100.0).contains(&number)
}
