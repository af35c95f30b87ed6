//! `Trend log`: one row a run and indicator. Earlier rows are written again as they were.

use rust_xlsxwriter::Worksheet;

use super::look::Look;
use super::wording::{LOG, LOG_COLUMNS, LOG_TITLE};
use super::{Error, Input, PROGRAM, fitting, page};
use crate::workbook::log::{COLUMNS, LogRow, row};

const HEADING_ROW: u32 = 2;
/// The filter reaches beyond the rows there are, so that the workbook part stays the same while the log grows.
const FILTERED_TO: u32 = 9_999;
/// The columns that hold numbers: readings and both p-values.
const NUMBERS: [usize; 3] = [3, 6, 7];

pub fn sheet(input: &Input, look: &Look) -> Result<Worksheet, Error> {
    let mut sheet = Worksheet::new();
    page(&mut sheet, &input.names.log, HEADING_ROW)?;
    sheet.write_with_format(0, 0, LOG, &look.title)?;
    sheet.write_with_format(1, 0, LOG_TITLE, &look.subtitle)?;
    for (column, (label, width)) in LOG_COLUMNS.iter().enumerate() {
        sheet.set_column_width(column as u16, *width)?;
        sheet.write_with_format(HEADING_ROW, column as u16, *label, &look.heading)?;
    }
    let added = input.judged.iter().map(|judged| row(judged, input.made_on, PROGRAM));
    let mut at = HEADING_ROW;
    for row in input.earlier_log.iter().cloned().chain(added) {
        at += 1;
        for (column, text) in row.iter().enumerate() {
            let number = text.parse::<f64>().ok().filter(|_| NUMBERS.contains(&column));
            match number {
                Some(number) if column == 3 => sheet.write_with_format(at, column as u16, number, &look.whole)?,
                Some(number) => sheet.write_with_format(at, column as u16, number, &look.probability)?,
                None => sheet.write_with_format(at, column as u16, fitting(text), &look.text)?,
            };
        }
    }
    sheet.autofilter(HEADING_ROW, 0, at.max(FILTERED_TO), COLUMNS as u16 - 1)?;
    Ok(sheet)
}

/// Reads the rows back from the cells as text.
pub fn read_back(rows: &[Vec<String>]) -> Vec<LogRow> {
    let is_heading = |row: &Vec<String>| LOG_COLUMNS.iter().zip(row).all(|((label, _), cell)| label == cell);
    let heading = rows.iter().position(|row| row.len() >= COLUMNS && is_heading(row));
    let below = heading.map_or(&[][..], |heading| &rows[heading + 1..]);
    let filled = below.iter().filter(|row| row.iter().any(|cell| !cell.is_empty()));
    filled.map(|row| std::array::from_fn(|column| row.get(column).cloned().unwrap_or_default())).collect()
}
