//! What stands above a table's columns: names in one row or several, units, groups over several columns.

use super::cells::Packed;
use super::table::{Block, is_year};
use super::unit::{is_unit, split_unit};
use super::view::View;
use crate::workbook::reference::CellRef;

/// A heading has at most so many rows.
const MOST_ROWS: usize = 4;
/// A text longer than this is a note, not a name.
const LONGEST_NAME: usize = 120;

/// What stands above a column.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Heading {
    /// The column's name, upper rows first; empty if nothing stands there.
    pub name: String,
    /// The unit, where one is stated.
    pub unit: Option<String>,
    /// The lowest cell of the name.
    pub cell: Option<CellRef>,
    /// Whether the lowest cell is itself a moment: a date, a month, a year.
    pub is_moment: bool,
}

fn text(view: View<'_>, row: u32, column: u32) -> String {
    view.cell(row, column).quote().split_whitespace().collect::<Vec<_>>().join(" ")
}

/// Whether a text above a table is a note, or the label of a field such as `Kept by:`, rather than a heading.
fn is_note(text: &str) -> bool {
    text.len() > LONGEST_NAME || text.ends_with(':') || text.starts_with('*')
}

/// The rows above the readings that head them, from the top. A row with a single text at the left above a wider table is a title, and
/// one with more numbers than words belongs to something else.
pub fn heading_rows(view: View<'_>, block: Block, first: u32) -> Vec<u32> {
    let mut rows = Vec::new();
    let single_column = block.left == block.right;
    for row in (block.top..first).rev() {
        let columns = || block.left..=block.right;
        let filled: Vec<u32> = columns().filter(|&column| view.get(row, column) != Packed::Empty).collect();
        if filled.is_empty() && rows.is_empty() {
            continue;
        }
        let title = filled.len() < 2 && filled.first().is_none_or(|&column| column == block.left) && !single_column;
        let note = filled.iter().any(|&column| view.text(row, column).is_some_and(is_note));
        let data = filled.iter().filter(|&&column| view.kind(row, column).is_data()).count();
        if title || note || data * 2 > filled.len() && !rows.is_empty() {
            break;
        }
        rows.insert(0, row);
        if single_column || rows.len() == MOST_ROWS {
            break;
        }
    }
    rows
}

/// The heading of each column. A text over several columns stands in its first one only: it is carried to the right over
/// columns with a name of their own, and if such names repeat from group to group, over those alone.
pub fn headings(view: View<'_>, block: Block, mut rows: Vec<u32>) -> Vec<(u32, Heading)> {
    let columns: Vec<u32> = (block.left..=block.right).collect();
    let units = match rows[..] {
        [.., _, last] if holds_units(view, &columns, last) => rows.pop(),
        _ => None,
    };
    let lowest: Vec<String> =
        columns.iter().map(|&column| rows.last().map_or(String::new(), |&row| text(view, row, column))).collect();
    let repeats = |name: &String| !name.is_empty() && lowest.iter().filter(|other| *other == name).count() > 1;
    let some_repeat = lowest.iter().any(repeats);
    let headings = columns.iter().zip(&lowest).map(|(&column, name)| {
        let carries = if some_repeat { repeats(name) } else { !name.is_empty() };
        let mut parts: Vec<String> = Vec::new();
        let mut cell = None;
        for &row in &rows {
            let own = text(view, row, column);
            let part = if !own.is_empty() {
                cell = Some(CellRef { row, column });
                own
            } else if carries && Some(&row) != rows.last() {
                carried(view, block, row, column)
            } else {
                continue;
            };
            if !part.is_empty() && parts.last() != Some(&part) {
                parts.push(part);
            }
        }
        let (name, unit) = split_unit(&parts.join(": "));
        let below = units.map(|row| text(view, row, column)).filter(|unit| !unit.is_empty());
        let unit = unit.or_else(|| below.map(|unit| unit.trim_matches(['(', ')', '[', ']', ' ']).to_owned()));
        let is_moment = cell.is_some_and(|cell| match view.get(cell.row, cell.column) {
            Packed::Number(number) => is_year(number),
            other => view.kind_of(other).is_moment(),
        });
        (column, Heading { name, unit, cell, is_moment })
    });
    headings.collect()
}

/// The nearest text to the left in the same row.
fn carried(view: View<'_>, block: Block, row: u32, column: u32) -> String {
    (block.left..column).rev().map(|column| text(view, row, column)).find(|text| !text.is_empty()).unwrap_or_default()
}

/// Whether a row holds nothing but units, one column without any aside.
fn holds_units(view: View<'_>, columns: &[u32], row: u32) -> bool {
    let texts = columns.iter().map(|&column| text(view, row, column));
    let (units, others): (Vec<String>, Vec<String>) = texts.filter(|text| !text.is_empty()).partition(|text| {
        let bare = text.trim_matches(['(', ')', '[', ']', ' ']);
        text.starts_with('[') && text.ends_with(']') || is_unit(bare)
    });
    !units.is_empty() && others.len() <= usize::from(units.len() > 1)
}
