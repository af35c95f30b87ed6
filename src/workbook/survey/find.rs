//! The indicators of a workbook: one a column of a table, or one a name and column in a long table.

use std::collections::HashMap;

use super::cells::Cells;
use super::column::{Role, role};
use super::indicator::{Named, indicator};
use super::kind::Kinds;
use super::long::groups;
use super::moments::{Companion, Timeline};
use super::rows::{Labels, RowsAre, readings, rows_are, without_rows_to_come};
use super::table::{Column, Table, tables};
use super::view::{Mostly, View};
use super::words;
use crate::reading::Missing;
use crate::workbook::indicator::{Indicator, Rows};
use crate::workbook::reference::column_letters;

/// What was found in a workbook.
#[derive(Default)]
pub struct Survey {
    /// The indicators, sheet by sheet, from left to right.
    pub indicators: Vec<Indicator>,
    /// What was looked at and why something was left out, in whole sentences.
    pub remarks: Vec<String>,
}

/// Finds the indicators of a workbook.
pub fn survey(cells: &Cells) -> Survey {
    let mut survey = Survey { remarks: cells.remarks.clone(), ..Survey::default() };
    let kinds = Kinds::default();
    for sheet in &cells.sheets {
        let view = View { cells, sheet, kinds: &kinds };
        let before = survey.indicators.len();
        let tables = tables(view);
        for (index, table) in tables.iter().enumerate() {
            let beside = tables[..index].iter().rev().find(|left| stands_beside(left, table));
            look_at(view, table, beside, &mut survey);
        }
        if survey.indicators.len() == before {
            let seen = if tables.is_empty() { "no table of readings was found" } else { "its tables hold no column of readings" };
            survey.remarks.push(format!("Nothing to judge on the sheet {}: {seen}.", sheet.name));
        }
    }
    tell_apart(&mut survey.indicators);
    survey
}

/// Whether a table stands to the left of another, in the same rows, with only blank columns between them.
fn stands_beside(left: &Table, right: &Table) -> bool {
    let (Some(end), Some(start)) = (left.columns.last(), right.columns.first()) else { return false };
    end.column < start.column && left.rows.0 == right.rows.0 && left.rows.1 >= right.rows.1
}

fn look_at(view: View<'_>, table: &Table, beside: Option<&Table>, survey: &mut Survey) {
    let sheet = &view.sheet.name;
    if table.is_across() {
        survey.remarks.push(format!(
            "{} has its moments side by side; put one row a moment and one column an indicator to have it judged.",
            of_rows(table, sheet)
        ));
        return;
    }
    let moments = match rows_are(view, table) {
        RowsAre::Moments(column) => Some(column),
        RowsAre::Things(column) => {
            if table.columns.iter().any(|column| column.look.mostly() == Mostly::Numbers) {
                let first = view.cell(table.rows.0, column).quote();
                survey.remarks.push(format!(
                    "{} names things (`{first}` is the first), not moments, so nothing in it was taken as readings over time.",
                    of_rows(table, sheet)
                ));
            }
            return;
        }
        // A blank column in between does not take the moments away.
        RowsAre::Positions => beside.and_then(|left| match rows_are(view, left) {
            RowsAre::Moments(column) => Some(column),
            _ => None,
        }),
    };
    let mut found = readings(view, Labels::of(table, moments), table.rows);
    let companion = moments.and_then(|column| Companion::of(view, column, &found.rows));
    let times: Vec<u32> = moments.into_iter().chain(companion.map(Companion::column)).collect();
    let mut columns: Vec<&Column> = Vec::new();
    let mut left_out: Vec<(u32, String)> = Vec::new();
    for (index, column) in table.columns.iter().enumerate().filter(|(_, column)| !times.contains(&column.column)) {
        let why = match role(view, column, &found.rows, moments.is_some(), index == 0) {
            Role::Readings if column.look.present() < 2 => "it has fewer than two readings",
            Role::Readings => {
                columns.push(column);
                continue;
            }
            Role::LeftOut(Some(why)) => why,
            Role::LeftOut(None) => continue,
        };
        left_out.push((column.column, format!("{} was left out: {why}.", of_column(column, sheet))));
    }
    let numbers: Vec<u32> = columns.iter().map(|column| column.column).collect();
    let no_names: Vec<u32> = times.iter().chain(&numbers).copied().collect();
    let long = moments.and_then(|_| groups(view, table, &times, &no_names, &found.rows));
    let names = long.as_ref().map(|(names, _)| *names);
    let said = left_out.into_iter().filter(|(column, _)| Some(*column) != names);
    found.remarks.extend(said.map(|(_, remark)| remark));
    let timeline = if long.is_none() { Some(Timeline::of(view, moments, found.rows.clone())) } else { None };
    if let Some(named) = names_its_rows(view, table, timeline.as_ref()) {
        survey.remarks.push(format!(
            "{} was left out: column {} names each of its rows, and their dates are in no order.",
            of_rows(table, sheet),
            column_letters(named)
        ));
        return;
    }
    let before = found.rows.len();
    without_rows_to_come(view, &numbers, &mut found);
    let whole = before == found.rows.len();
    let sums: Vec<(u32, String)> = columns.iter().filter_map(|column| sum_of(view, column, &numbers, &found.rows)).collect();
    let first_new = survey.indicators.len();
    match (long, timeline) {
        (Some((names, groups)), _) => {
            let names = table.column(names).map(|column| column.heading.name.as_str()).unwrap_or_default();
            for group in groups {
                let rows = group.rows.into_iter().filter(|row| found.rows.binary_search(row).is_ok()).collect();
                let timeline = Timeline::of(view, moments, rows);
                for column in &columns {
                    let named = in_group(&group.name, names, column, columns.len());
                    let made = indicator(view, column.column, &timeline, Named { cell: Some(group.cell), ..named }, None);
                    if has_readings(&made) {
                        survey.indicators.push(made);
                    }
                }
            }
        }
        (None, timeline) => {
            let timeline = match timeline.filter(|_| whole) {
                Some(timeline) => timeline,
                None => Timeline::of(view, moments, found.rows),
            };
            let several_parts = matches!(timeline.rows, Rows::Listed(_));
            for column in &columns {
                let heading = &column.heading;
                let name = match heading.name.as_str() {
                    "" => format!("{sheet} column {}", column_letters(column.column)),
                    name => name.to_owned(),
                };
                // Listed rows with the cell of a name are those of a long table.
                let cell = heading.cell.filter(|_| !several_parts);
                let named = Named { name, unit: heading.unit.clone(), cell };
                let made = indicator(view, column.column, &timeline, named, None);
                if has_readings(&made) {
                    survey.indicators.push(made);
                } else {
                    found.remarks.push(format!("{} was left out: it has fewer than two readings.", of_column(column, sheet)));
                }
            }
        }
    }
    for made in &mut survey.indicators[first_new..] {
        let sum = sums.iter().find(|(column, _)| *column == made.place.column);
        made.remarks.extend(sum.map(|(_, remark)| remark.clone()));
    }
    survey.remarks.append(&mut found.remarks);
}

/// Whether there are two readings at least, be they words whose order is still to be stated.
fn has_readings(made: &Indicator) -> bool {
    let words = made.understood.missing.iter().filter(|reading| reading.why == Missing::NotUnderstood).count();
    made.series.count_present() + words >= 2
}

/// What an indicator of a long table is called: by its name alone, if its column says no more than that there are values.
fn in_group(name: &str, names: &str, column: &Column, columns: usize) -> Named {
    let heading = &column.heading;
    let by_name_alone = columns == 1 && (words::names_values(&heading.name) || words::names_indicators(names));
    let (short, own_unit) = super::unit::split_unit(name);
    if by_name_alone {
        Named { name: short, unit: own_unit.or_else(|| heading.unit.clone()), cell: None }
    } else {
        Named { name: format!("{name}: {}", heading.name), unit: heading.unit.clone(), cell: None }
    }
}

/// The column whose words tell the rows of a table apart, if its dates are in no order: a list of houses or machines.
fn names_its_rows(view: View<'_>, table: &Table, timeline: Option<&Timeline>) -> Option<u32> {
    let timeline = timeline?;
    timeline.column.filter(|_| timeline.moments.check_order(true, None).is_err())?;
    let rows = table.rows.1 - table.rows.0 + 1;
    let mut columns = table.columns.iter().filter(|column| Some(column.column) != timeline.column);
    let names = columns.find(|column| {
        let words = column.look.mostly() == Mostly::Words && column.look.filled() == rows;
        words && super::long::distinct(view, column.column, table.rows.0..=table.rows.1) == rows as usize
    });
    names.map(|column| column.column)
}

/// Of a column headed as a total, which columns it adds up.
fn sum_of(view: View<'_>, column: &Column, columns: &[u32], rows: &[u32]) -> Option<(u32, String)> {
    let parts: Vec<u32> = columns.iter().copied().take_while(|&part| part < column.column).collect();
    let (&first, &last) = (parts.first()?, parts.last()?);
    if first == last || !words::names_total(&column.heading.name) {
        return None;
    }
    let adds_up = |&row: &u32| {
        let sum: f64 = parts.iter().filter_map(|&part| view.number(row, part)).sum();
        view.number(row, column.column).is_some_and(|total| (total - sum).abs() <= 1e-9 * total.abs().max(1.0))
    };
    let (first, last) = (column_letters(first), column_letters(last));
    let remark = format!("It is the sum of columns {first} to {last}, so its trend follows from theirs.");
    rows.iter().all(adds_up).then_some((column.column, remark))
}

/// A column as a person names it.
fn of_column(column: &Column, sheet: &str) -> String {
    let heading = match column.heading.name.as_str() {
        "" => "without a heading".to_owned(),
        name => format!("`{name}`"),
    };
    format!("Column {} of the sheet {sheet}, {heading},", column_letters(column.column))
}

/// A table as a person names it.
fn of_rows(table: &Table, sheet: &str) -> String {
    format!("The table in rows {} to {} of the sheet {sheet}", table.rows.0 + 1, table.rows.1 + 1)
}

/// Indicators of the same name get their sheet's name added, and on the same sheet the place of their first reading. Those
/// of long tables keep the names that stand in the cells.
fn tell_apart(indicators: &mut [Indicator]) {
    for with_sheet in [true, false] {
        let mut same: HashMap<String, Vec<usize>> = HashMap::new();
        for (index, indicator) in indicators.iter().enumerate() {
            same.entry(indicator.series.name.to_lowercase()).or_default().push(index);
        }
        for same in same.into_values().filter(|same| same.len() > 1) {
            let one_sheet = same.iter().all(|&index| indicators[index].place.sheet == indicators[same[0]].place.sheet);
            for index in same {
                let made = &mut indicators[index];
                if made.place.names_range().is_some() || made.series.is_empty() {
                    continue;
                }
                let addition = match with_sheet && !one_sheet {
                    true => made.place.sheet.clone(),
                    false => made.place.cell(0).to_string(),
                };
                made.series.name = format!("{} ({addition})", made.series.name);
            }
        }
    }
}
