//! What the rows of a table are, and which of them are readings: not its totals, not its notes, not rows without a moment.

use super::cells::Packed;
use super::course::Course;
use super::kind::Kind;
use super::long::distinct;
use super::table::{Column, Table};
use super::view::{Look, Mostly, View};
use super::words;

/// What the rows of a table are.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RowsAre {
    /// Moments, written in a column.
    Moments(u32),
    /// Readings one after the other, without moments.
    Positions,
    /// Named things, such as rooms or products: no series over time.
    Things(u32),
}

/// Finds out what the rows of a table are.
pub fn rows_are(view: View<'_>, table: &Table) -> RowsAre {
    let count = table.rows.1 - table.rows.0 + 1;
    let rows = || table.rows.0..=table.rows.1;
    let filled: Vec<&Column> = table.columns.iter().filter(|column| column.look.filled() * 2 >= count).collect();
    let most_distinct = |columns: &[&Column]| match columns {
        [] => None,
        [only] => Some(only.column),
        // The one with most different moments tells the rows apart best; the first of equals.
        several => several.iter().rev().max_by_key(|column| distinct(view, column.column, rows())).map(|column| column.column),
    };
    let dated: Vec<&Column> = filled.iter().copied().filter(|column| column.look.mostly() == Mostly::Moments).collect();
    if let Some(column) = most_distinct(&dated) {
        return RowsAre::Moments(column);
    }
    let course = |column: &Column| Course::of(view, column.column, rows().filter(|&row| fits_a_number(view, row, column.column)));
    let may_be_axis = |column: &Column| {
        let course = course(column);
        course.is_some_and(|course| {
            course.runs_one_way() || course.is_whole() && (course.is_years() || course.is_within(0.0, 366.0))
        })
    };
    let named = filled.iter().copied().filter(|column| {
        column.look.mostly() == Mostly::Numbers && words::names_moments(&column.heading.name) && may_be_axis(column)
    });
    // Years that repeat only complete the weeks, months or quarters beside them.
    let repeats_years =
        |column: &Column| course(column).is_some_and(|course| course.is_years() && course.distinct() < course.count());
    let (years, others): (Vec<&Column>, Vec<&Column>) = named.partition(|column| repeats_years(column));
    if let Some(column) = most_distinct(&others).or_else(|| most_distinct(&years)) {
        return RowsAre::Moments(column);
    }
    let Some(&first) = filled.first().filter(|_| table.columns.len() > 1) else { return RowsAre::Positions };
    match first.look.mostly() {
        Mostly::Numbers => {
            let axis = course(first).is_some_and(|course| {
                course.counts_rows()
                    || course.is_years() && course.runs_one_way() && course.count() > 1
                    || course.count() >= 5 && course.step().is_some()
            });
            if axis { RowsAre::Moments(first.column) } else { RowsAre::Positions }
        }
        Mostly::Words if words::names_moments(&first.heading.name) && !words::names_things(&first.heading.name) => {
            RowsAre::Moments(first.column)
        }
        Mostly::Words if first.look.count(Kind::Word) > 0 && distinct(view, first.column, rows()) * 10 >= count as usize * 8 => {
            RowsAre::Things(first.column)
        }
        _ => RowsAre::Positions,
    }
}

/// Labels of totals and notes below the numbers do not make their column another one.
fn fits_a_number(view: View<'_>, row: u32, column: u32) -> bool {
    matches!(view.kind(row, column), Kind::Number | Kind::NumberText)
}

/// The rows that are readings, and what is said of the others.
#[derive(Debug, Default)]
pub struct Readings {
    /// The rows, from top to bottom.
    pub rows: Vec<u32>,
    /// Why rows were left out, in whole sentences.
    pub remarks: Vec<String>,
}

/// Where readings and labels are looked for in the rows of a table.
#[derive(Clone, Copy, Debug)]
pub struct Labels {
    /// The first column that may hold a word such as `Total`.
    pub first: u32,
    /// The last one.
    pub last: u32,
    /// The column of the moments, where there is one.
    pub moments: Option<u32>,
    /// The table's first and last column.
    pub sides: (u32, u32),
}

impl Labels {
    /// The labels of a table.
    pub fn of(table: &Table, moments: Option<u32>) -> Labels {
        let first = table.columns.first().map_or(0, |column| column.column);
        let end = table.columns.last().map_or(0, |column| column.column);
        let last = moments.filter(|column| (first..=end).contains(column)).unwrap_or((first + 1).min(end));
        Labels { first, last, moments, sides: (first, end) }
    }

    /// The labels of a stated column with its moments.
    pub fn beside(column: u32, moments: Option<u32>) -> Labels {
        let at = moments.unwrap_or(column);
        Labels { first: at, last: at, moments, sides: (column, column) }
    }
}

/// Keeps the rows that are readings.
pub fn readings(view: View<'_>, labels: Labels, (first, last): (u32, u32)) -> Readings {
    let mostly = labels.moments.map(|column| (column, Look::at(view, column, (first, last))));
    let is_blank = |row: u32| (labels.sides.0..=labels.sides.1).all(|column| view.get(row, column) == Packed::Empty);
    let sheet = &view.sheet.name;
    let mut found = Readings::default();
    let mut left_out: Vec<(u32, String)> = Vec::new();
    let mut without: Vec<u32> = Vec::new();
    for row in first..=last {
        let is_moment = mostly.as_ref().is_none_or(|(column, look)| may_be_moment(look, view.kind(row, *column)));
        let label = summary_label(view, &labels, row).filter(|_| !is_moment || is_word_in_moments(view, &labels, row));
        if let Some(label) = label {
            left_out
                .push((row, format!("Row {} of the sheet {sheet}, `{label}`, sums up other rows and was left out.", row + 1)));
            continue;
        }
        match mostly {
            None if is_blank(row) => {}
            Some((column, _)) if view.kind(row, column).is_absent() => {
                if !is_blank(row) {
                    without.push(row);
                }
            }
            Some((column, _)) if !is_moment => {
                let text = view.cell(row, column).quote();
                left_out.push((row, format!("Row {} of the sheet {sheet}, `{text}`, has no moment and was left out.", row + 1)));
            }
            _ => found.rows.push(row),
        }
    }
    match without[..] {
        [] => {}
        [row] => found.remarks.push(format!("Row {} of the sheet {sheet} has no moment and was left out.", row + 1)),
        [row, ..] => found.remarks.push(format!(
            "{} rows of the sheet {sheet}, row {} the first of them, have no moment and were left out.",
            without.len(),
            row + 1
        )),
    }
    const MOST_SAID: usize = 12;
    let more = left_out.len().saturating_sub(MOST_SAID);
    found.remarks.extend(left_out.into_iter().take(MOST_SAID).map(|(_, remark)| remark));
    if more > 0 {
        found
            .remarks
            .push(format!("{more} further rows of the sheet {sheet} sum up others or have no moment and were left out."));
    }
    found
}

/// Whether a kind of cell can be a moment in a column.
fn may_be_moment(look: &Look, kind: Kind) -> bool {
    match look.mostly() {
        Mostly::Moments => kind.is_moment(),
        Mostly::Numbers => matches!(kind, Kind::Number | Kind::NumberText),
        _ => !kind.is_absent(),
    }
}

/// Whether a word stands in the column of the moments, or there is no such column.
fn is_word_in_moments(view: View<'_>, labels: &Labels, row: u32) -> bool {
    labels.moments.is_none_or(|column| view.kind(row, column) == Kind::Word)
}

/// A word such as `Total` at the beginning of a row, up to the column of its moment.
fn summary_label<'a>(view: View<'a>, labels: &Labels, row: u32) -> Option<&'a str> {
    let columns = (labels.first..=labels.last).chain(labels.moments);
    columns.filter_map(|column| view.text(row, column)).find(|text| words::is_summary(text))
}

/// Leaves out the rows at the end in which no indicator has a reading yet, and says so.
pub fn without_rows_to_come(view: View<'_>, columns: &[u32], found: &mut Readings) {
    let has_reading = |row: u32| columns.iter().any(|&column| view.get(row, column) != Packed::Empty);
    let end = found.rows.iter().rposition(|&row| has_reading(row)).map_or(0, |last| last + 1);
    if end < found.rows.len() && !columns.is_empty() {
        let (first, count) = (found.rows[end], found.rows.len() - end);
        found.rows.truncate(end);
        let sheet = &view.sheet.name;
        found.remarks.push(match count {
            1 => format!("Row {} of the sheet {sheet} has no readings yet and was left out.", first + 1),
            _ => format!("{count} rows of the sheet {sheet}, from row {} on, have no readings yet and were left out.", first + 1),
        });
    }
}
