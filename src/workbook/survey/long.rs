//! Long tables: each row holds a moment, the name of an indicator, and readings of it.

use std::collections::{HashMap, HashSet};

use super::cells::Packed;
use super::kind::Kind;
use super::table::{Column, Table};
use super::view::{Mostly, View};
use super::words;
use crate::workbook::reference::CellRef;

/// One indicator of a long table: its name, the first cell that holds it, and its rows from top to bottom.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Group {
    /// The name, as the cells have it.
    pub name: String,
    /// The first cell that holds the name.
    pub cell: CellRef,
    /// The rows of the indicator.
    pub rows: Vec<u32>,
}

/// The most different names that a long table may have.
const MOST_NAMES: usize = 200;
/// Of all pairs of a moment and a name, at least this part must be there: else the rows are events, not a table.
const LEAST_FILLED: f64 = 0.3;

/// A cell as something that can be compared.
fn key(cell: Packed) -> (u8, u64) {
    match cell {
        Packed::Empty => (0, 0),
        Packed::Number(number) => (1, number.to_bits()),
        Packed::Text(text) => (2, text.into()),
        Packed::Truth(truth) => (3, truth.into()),
        Packed::Date(days) => (4, days.to_bits()),
        Packed::Duration(days) => (5, days.to_bits()),
        Packed::Error(text) => (6, text.into()),
    }
}

/// How many different cells a column has in some rows.
pub fn distinct(view: View<'_>, column: u32, rows: impl Iterator<Item = u32>) -> usize {
    rows.map(|row| key(view.get(row, column))).collect::<HashSet<_>>().len()
}

/// The column of names and the indicators, if the table is a long one: moments repeat, and together with a name they do
/// not. `moments` are the columns that say when; `passed_over` are those that hold no names.
pub fn groups(view: View<'_>, table: &Table, moments: &[u32], passed_over: &[u32], rows: &[u32]) -> Option<(u32, Vec<Group>)> {
    let may_name = |column: &&Column| {
        let look = &column.look;
        let named = look.count(Kind::Word) + look.count(Kind::Code) + look.count(Kind::Period);
        !passed_over.contains(&column.column)
            && !words::names_recorders(&column.heading.name)
            && look.mostly() == Mostly::Words
            && named as usize * 10 >= rows.len() * 9
    };
    let mut candidates: Vec<&Column> = table.columns.iter().filter(may_name).collect();
    if candidates.is_empty() {
        return None;
    }
    let moment = |row: u32| moments.iter().map(|&column| key(view.get(row, column))).collect::<Vec<_>>();
    let mut numbers: HashMap<Vec<(u8, u64)>, usize> = HashMap::new();
    let moment_of: Vec<usize> = rows
        .iter()
        .map(|&row| {
            let next = numbers.len();
            *numbers.entry(moment(row)).or_insert(next)
        })
        .collect();
    if numbers.len() == rows.len() {
        return None;
    }
    let tells_apart = |column: &Column| {
        let name = |row: u32| key(view.get(row, column.column));
        let names: HashSet<_> = rows.iter().map(|&row| name(row)).collect();
        if names.len() > MOST_NAMES || names.len() * 2 > rows.len() {
            return false;
        }
        let pairs: HashSet<_> = moment_of.iter().zip(rows).map(|(moment, &row)| (moment, name(row))).collect();
        let filled = pairs.len() as f64 / (names.len() * numbers.len()) as f64;
        // A few readings entered twice do not make the table another one.
        let once = pairs.len() * 20 >= rows.len() * 19;
        names.len() >= 2 && filled >= LEAST_FILLED && (once || words::names_indicators(&column.heading.name))
    };
    candidates.retain(|column| tells_apart(column));
    candidates.sort_by_key(|column| !words::names_indicators(&column.heading.name));
    let column = candidates.first()?.column;
    let mut places: HashMap<u32, usize> = HashMap::new();
    let mut groups: Vec<Group> = Vec::new();
    for &row in rows {
        let Packed::Text(text) = view.get(row, column) else { continue };
        let place = *places.entry(text).or_insert_with(|| {
            groups.push(Group { name: view.cells.text(text).to_owned(), cell: CellRef { row, column }, rows: Vec::new() });
            groups.len() - 1
        });
        groups[place].rows.push(row);
    }
    Some((column, groups))
}
