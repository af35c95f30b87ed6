//! Tables on a sheet: rectangles of cells, their headings, their moments, and where their readings begin and end.

use super::cells::{Cells, Packed, SheetCells};
use super::words;
use crate::reading::moment::MomentKind;
use crate::reading::{Cell, Moments, list};

/// A rectangle of cells, ends included, from 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Block {
    pub top: u32,
    pub bottom: u32,
    pub left: u32,
    pub right: u32,
}

/// A table with its headings and the rows of its readings.
pub struct Table {
    /// First and last row of the readings.
    pub rows: (u32, u32),
    /// The columns, in order.
    pub columns: Vec<Column>,
    /// The column that tells when, as an index into `columns`.
    pub moments: Option<usize>,
}

/// A column of a table.
pub struct Column {
    /// The column's number on the sheet.
    pub column: u32,
    /// The heading; empty if there is none.
    pub heading: String,
    /// The row of the heading's lowest cell.
    pub heading_row: Option<u32>,
}

/// Rows above the readings that may be headings.
const MOST_HEADING_ROWS: u32 = 3;

/// The tables of a sheet: its cells cut at blank rows and blank columns.
pub fn tables(cells: &Cells, sheet: &SheetCells) -> Vec<Table> {
    let bottom = (0..sheet.width()).filter_map(|column| sheet.last_row(column)).max();
    let Some(bottom) = bottom else { return Vec::new() };
    let whole = Block { top: 0, bottom, left: 0, right: sheet.width() - 1 };
    let mut blocks = Vec::new();
    cut(sheet, whole, &mut blocks, 0);
    let mut tables: Vec<Table> = Vec::new();
    for block in blocks {
        if let Some(table) = table(cells, sheet, block) {
            match tables.iter_mut().find(|above| goes_on(above, &table)) {
                Some(above) => above.rows.1 = table.rows.1,
                None => tables.push(table),
            }
        }
    }
    tables
}

/// Whether a table without headings is the rest of the one above, behind a blank row.
fn goes_on(above: &Table, below: &Table) -> bool {
    let same_columns = above.columns.len() == below.columns.len() && above.columns[0].column == below.columns[0].column;
    let headless = below.columns.iter().all(|column| column.heading.is_empty());
    same_columns && headless && above.moments == below.moments && below.rows.0 > above.rows.1 && below.rows.0 - above.rows.1 <= 3
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

/// Whether a cell looks like a reading or a moment rather than a heading or a note.
fn is_data(cells: &Cells, cell: Packed) -> bool {
    match cell {
        Packed::Empty => false,
        Packed::Number(_) | Packed::Date(_) | Packed::Duration(_) | Packed::Truth(_) | Packed::Error(_) => true,
        Packed::Text(_) => match cells.unpack(cell) {
            Cell::Text(text) => {
                list::number(&text).is_some()
                    || text.starts_with(['<', '>']) && list::number(&text[1..]).is_some()
                    || is_moment_text(&text)
            }
            _ => false,
        },
    }
}

fn is_moment_text(text: &str) -> bool {
    let has_digit = text.bytes().any(|byte| byte.is_ascii_digit());
    let month = crate::reading::moment::month_number(text).is_some();
    month || has_digit && Moments::of_cells(&[Cell::text(text)]).is_ok_and(|moments| moments.kind() != MomentKind::Label)
}

/// Makes a table of a block; `None` if nothing in it looks like readings.
fn table(cells: &Cells, sheet: &SheetCells, block: Block) -> Option<Table> {
    let width = block.right - block.left + 1;
    let filled = |row: u32| (block.left..=block.right).filter(|&column| sheet.get(row, column) != Packed::Empty).count();
    let data = |row: u32| (block.left..=block.right).filter(|&column| is_data(cells, sheet.get(row, column))).count();
    // The readings begin where cells that look like data go on in the row below.
    let first = (block.top..=block.bottom).take(200).find(|&row| {
        let here = data(row);
        let goes_on = row == block.bottom
            || (block.left..=block.right)
                .any(|column| is_data(cells, sheet.get(row, column)) && is_data(cells, sheet.get(row + 1, column)));
        here > 0 && 2 * here >= filled(row).min(3) && (filled(row) >= 2 || width == 1) && goes_on
    })?;
    let heading_rows = heading_rows(block, first, &filled, &data);
    let columns: Vec<Column> =
        (block.left..=block.right).map(|column| heading(cells, sheet, block, column, &heading_rows)).collect();
    let mut table = Table { rows: (first, block.bottom), columns, moments: None };
    table.moments = find_moments(cells, sheet, &table);
    table.rows.1 = last_reading(cells, sheet, &table);
    (table.rows.1 >= table.rows.0).then_some(table)
}

/// The rows right above the readings that head them: more than one cell filled, and mostly words.
fn heading_rows(block: Block, first: u32, filled: &dyn Fn(u32) -> usize, data: &dyn Fn(u32) -> usize) -> Vec<u32> {
    let mut rows = Vec::new();
    let mut row = first;
    while row > block.top && first - row < MOST_HEADING_ROWS {
        row -= 1;
        let single_column = block.left == block.right;
        let lone_title = filled(row) < 2 && !single_column;
        if lone_title || data(row) * 2 > filled(row) && !rows.is_empty() {
            break;
        }
        rows.insert(0, row);
        if single_column {
            break;
        }
    }
    rows
}

/// A column's heading: the lowest filled heading cell, behind the heading above it if that spans several columns.
fn heading(cells: &Cells, sheet: &SheetCells, block: Block, column: u32, rows: &[u32]) -> Column {
    let text = |row: u32, column: u32| cells.cell(sheet, row, column).quote();
    let own: Vec<(u32, String)> = rows.iter().map(|&row| (row, text(row, column))).filter(|(_, text)| !text.is_empty()).collect();
    let heading_row = own.last().map(|(row, _)| *row);
    let lowest = own.last().map(|(_, text)| text.clone()).unwrap_or_default();
    // A merged heading has its text in its first cell only.
    let spanning = rows.split_last().map(|(_, above)| above).unwrap_or_default().iter().rev().find_map(|&row| {
        let carried = (block.left..=column).rev().map(|column| text(row, column)).find(|text| !text.is_empty())?;
        (heading_row != Some(row)).then_some(carried)
    });
    let heading = match spanning {
        Some(above) if !lowest.is_empty() && above != lowest => format!("{above}: {lowest}"),
        _ => lowest,
    };
    Column { column, heading, heading_row }
}

/// How many readings are looked at to tell what a column holds.
const LOOKED_AT: usize = 400;

/// The first column whose cells are dates or calendar periods, or whole numbers under a heading that tells when.
fn find_moments(cells: &Cells, sheet: &SheetCells, table: &Table) -> Option<usize> {
    table.columns.iter().position(|column| {
        let looked: Vec<Cell> = sheet
            .filled(column.column, table.rows.0, table.rows.1)
            .take(LOOKED_AT)
            .map(|(_, cell)| cells.unpack(cell))
            .filter(|cell| !matches!(cell, Cell::Text(text) if words::is_summary(text)))
            .collect();
        let rows = ((table.rows.1 - table.rows.0 + 1) as usize).min(LOOKED_AT);
        if looked.len() < 2 || looked.len() * 2 < rows {
            return false;
        }
        let dates = looked.iter().filter(|cell| matches!(cell, Cell::Date(_))).count();
        if dates * 10 >= looked.len() * 9 {
            return true;
        }
        let kind_of = |cells: &[Cell]| Moments::of_cells(cells).ok().map(|moments| (moments.kind(), moments));
        let words: Vec<Cell> =
            looked.iter().filter(|cell| matches!(cell, Cell::Text(text) if is_moment_text(text))).cloned().collect();
        if words.len() * 10 >= looked.len() * 9 {
            let months = words.iter().all(|cell| crate::reading::moment::month_number(&cell.quote()).is_some());
            return months || kind_of(&words).is_some_and(|(kind, _)| kind != MomentKind::Label) && !looks_like_values(&words);
        }
        let whole = looked.iter().all(|cell| matches!(cell, Cell::Number(number) if number.fract() == 0.0));
        whole && words::is_moment_heading(&column.heading) && {
            let numbers: Vec<f64> =
                looked.iter().filter_map(|cell| if let Cell::Number(number) = cell { Some(*number) } else { None }).collect();
            numbers.windows(2).all(|pair| pair[0] <= pair[1]) || numbers.windows(2).all(|pair| pair[0] >= pair[1])
        }
    })
}

/// Text numbers such as `1,5` are values, though single ones could be read as moments.
fn looks_like_values(words: &[Cell]) -> bool {
    words.iter().all(|cell| list::number(&cell.quote()).is_some())
}

/// The last row of readings: rows that sum up, and rows at the end without a moment, are not readings.
fn last_reading(cells: &Cells, sheet: &SheetCells, table: &Table) -> u32 {
    let (first, last) = table.rows;
    let labels: Vec<u32> = table.columns.iter().take(2).map(|column| column.column).collect();
    let tail = first.max(last.saturating_sub(40));
    let is_summary = |row: u32| {
        labels.iter().any(|&column| matches!(cells.cell(sheet, row, column), Cell::Text(text) if words::is_summary(&text)))
    };
    let mut last = (tail..=last).find(|&row| is_summary(row)).map_or(last, |row| row.saturating_sub(1));
    if let Some(moments) = table.moments {
        let column = table.columns[moments].column;
        while last > first {
            match cells.cell(sheet, last, column) {
                Cell::Date(_) | Cell::Number(_) => break,
                Cell::Text(text) if is_moment_text(&text) => break,
                _ => last -= 1,
            }
        }
    } else {
        let filled = |row: u32| table.columns.iter().filter(|column| is_data(cells, sheet.get(row, column.column))).count();
        while last > first && filled(last) == 0 {
            last -= 1;
        }
    }
    last
}
