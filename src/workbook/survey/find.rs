//! The indicators of a workbook: one a column of a table, or one a name in a long table.

use std::collections::HashSet;
use std::sync::Arc;

use super::cells::{Cells, Packed, SheetCells};
use super::table::{Column, Table, tables};
use super::words;
use crate::reading::{Cell, Missing, Moments, Scale, Series, Understood, Value, understand};
use crate::workbook::indicator::{Indicator, Place, Rows};
use crate::workbook::reference::CellRef;

/// What was found in a workbook.
#[derive(Default)]
pub struct Survey {
    /// The indicators, sheet by sheet, from left to right.
    pub indicators: Vec<Indicator>,
    /// What was looked at and why something was left out, in whole sentences.
    pub remarks: Vec<String>,
}

/// The most different names that a long table may have.
const MOST_NAMES: usize = 200;

/// Finds the indicators of a workbook.
pub fn survey(cells: &Cells) -> Survey {
    let mut survey = Survey { remarks: cells.remarks.clone(), ..Survey::default() };
    for sheet in &cells.sheets {
        let before = survey.indicators.len();
        let tables = tables(cells, sheet);
        for table in &tables {
            match long_form(cells, sheet, table) {
                Some((names, values)) => find_long(cells, sheet, table, names, values, &mut survey),
                None => find_wide(cells, sheet, table, &mut survey),
            }
        }
        if survey.indicators.len() == before {
            let seen = if tables.is_empty() { "no table of readings was found" } else { "its tables hold no column of readings" };
            survey.remarks.push(format!("Nothing to judge on the sheet {}: {seen}.", sheet.name));
        }
    }
    survey
}

/// What the cells of a column look like.
struct Look {
    filled: usize,
    numbers: usize,
    dates: usize,
    words: usize,
    different_words: usize,
}

fn look(cells: &Cells, sheet: &SheetCells, column: u32, rows: (u32, u32)) -> Look {
    let mut look = Look { filled: 0, numbers: 0, dates: 0, words: 0, different_words: 0 };
    let mut different = HashSet::new();
    for (_, cell) in sheet.filled(column, rows.0, rows.1) {
        look.filled += 1;
        match cell {
            Packed::Number(_) | Packed::Duration(_) | Packed::Truth(_) | Packed::Error(_) => look.numbers += 1,
            Packed::Date(_) => look.dates += 1,
            Packed::Empty => {}
            Packed::Text(text) => {
                let value = understand(&[cells.unpack(cell)], None);
                let numeric = matches!(&value, Ok((values, _, understood)) if understood.grades.is_none() && !matches!(values[0], Value::Missing(Missing::NotUnderstood)));
                if numeric {
                    look.numbers += 1;
                } else {
                    look.words += 1;
                    different.insert(text);
                }
            }
        }
    }
    look.different_words = different.len();
    look
}

/// The columns of names and of values, if a table is in long form: moment, name, value, each moment and name once.
fn long_form(cells: &Cells, sheet: &SheetCells, table: &Table) -> Option<(usize, usize)> {
    let moments = table.moments?;
    let looks: Vec<Look> = table.columns.iter().map(|column| look(cells, sheet, column.column, table.rows)).collect();
    let rows = (table.rows.1 - table.rows.0 + 1) as usize;
    let others = |index: &usize| *index != moments;
    let values: Vec<usize> = (0..looks.len())
        .filter(others)
        .filter(|&index| {
            looks[index].numbers * 10 >= looks[index].filled * 6
                && looks[index].numbers >= 2
                && !words::is_label_heading(&table.columns[index].heading)
        })
        .collect();
    let [values] = values[..] else { return None };
    let names = (0..looks.len()).filter(others).find(|&index| {
        let look = &looks[index];
        let repeated = look.different_words >= 2 && look.different_words <= MOST_NAMES && look.different_words * 2 <= rows;
        look.words == rows && repeated && !words::is_grade_heading(&table.columns[index].heading)
    })?;
    let mut seen = HashSet::new();
    let once = (table.rows.0..=table.rows.1).all(|row| {
        let moment = cells.cell(sheet, row, table.columns[moments].column).quote();
        seen.insert((moment, cells.cell(sheet, row, table.columns[names].column).quote()))
    });
    let headed = words::is_indicator_heading(&table.columns[names].heading);
    (once || headed).then_some((names, values))
}

fn find_long(cells: &Cells, sheet: &SheetCells, table: &Table, names: usize, values: usize, survey: &mut Survey) {
    let (names, values) = (&table.columns[names], &table.columns[values]);
    let mut listed: Vec<(String, Vec<u32>)> = Vec::new();
    for row in table.rows.0..=table.rows.1 {
        let name = cells.cell(sheet, row, names.column).quote();
        match listed.iter_mut().find(|(known, _)| *known == name) {
            _ if name.is_empty() => {}
            Some((_, rows)) => rows.push(row),
            None => listed.push((name, vec![row])),
        }
    }
    let moments = table.moments.map(|index| table.columns[index].column);
    let (_, unit) = words::name_and_unit(&values.heading);
    for (name, rows) in listed {
        let header = rows.first().map(|&row| CellRef { row, column: names.column });
        let (name, own_unit) = words::name_and_unit(&name);
        let place = Place { sheet: sheet.name.clone(), column: values.column, moments, rows: Rows::Listed(rows), header };
        let moments = read_moments(cells, sheet, &place);
        add(cells, sheet, place, name, own_unit.or_else(|| unit.clone()), moments, survey);
    }
}

fn find_wide(cells: &Cells, sheet: &SheetCells, table: &Table, survey: &mut Survey) {
    let count = table.rows.1 - table.rows.0 + 1;
    let moments_column = table.moments.map(|index| table.columns[index].column);
    let down = Rows::Down { first: table.rows.0, count };
    let as_place =
        |column: u32, rows: Rows| Place { sheet: sheet.name.clone(), column, moments: moments_column, rows, header: None };
    let mut moments = read_moments(cells, sheet, &as_place(0, down.clone()));
    let mut rows = down;
    if let Ok(read) = &moments
        && read.newest_first()
    {
        rows = Rows::Up { first: table.rows.1, count };
        moments = Ok(Arc::new(Moments::clone(read).reversed()));
    } else if let Ok(read) = &moments
        && let Some(named) = names_its_rows(cells, sheet, table)
        && read.check_order(true, None).is_err()
    {
        let letters = crate::workbook::reference::column_letters(named);
        let (first, last) = (table.rows.0 + 1, table.rows.1 + 1);
        survey.remarks.push(format!(
            "Rows {first} to {last} of the sheet {} were left out: column {letters} names each of them, and their dates are in no order.",
            sheet.name
        ));
        return;
    }
    for (_, column) in table.columns.iter().enumerate().filter(|(index, _)| Some(*index) != table.moments) {
        let look = look(cells, sheet, column.column, table.rows);
        match left_out(&look, column, cells, sheet, table) {
            Some(why) => {
                if let Some(why) = why {
                    let heading =
                        if column.heading.is_empty() { "without a heading".to_owned() } else { format!("`{}`", column.heading) };
                    let letters = crate::workbook::reference::column_letters(column.column);
                    survey.remarks.push(format!("Column {letters} of the sheet {}, {heading}, was left out: {why}.", sheet.name));
                }
            }
            None => {
                let (name, unit) = words::name_and_unit(&column.heading);
                let header = column.heading_row.map(|row| CellRef { row, column: column.column });
                let letters = crate::workbook::reference::column_letters(column.column);
                let name = if name.is_empty() { format!("{} column {letters}", sheet.name) } else { name };
                let place = Place { header, ..as_place(column.column, rows.clone()) };
                add(cells, sheet, place, name, unit, moments.clone(), survey);
            }
        }
    }
}

/// The column whose words tell the rows of a table apart, as in a list of houses or machines rather than of weeks.
fn names_its_rows(cells: &Cells, sheet: &SheetCells, table: &Table) -> Option<u32> {
    let rows = (table.rows.1 - table.rows.0 + 1) as usize;
    let others = table.columns.iter().enumerate().filter(|(index, _)| Some(*index) != table.moments);
    let mut columns = others.map(|(_, column)| column.column);
    columns.find(|&column| {
        let look = look(cells, sheet, column, table.rows);
        look.words == rows && look.different_words == rows
    })
}

/// Whether a column is no indicator, and the reason if it is worth saying.
fn left_out(look: &Look, column: &Column, cells: &Cells, sheet: &SheetCells, table: &Table) -> Option<Option<String>> {
    if look.filled == 0 {
        return Some(None);
    }
    if column.heading.is_empty() && table.moments.is_none() {
        return Some(Some("it has neither a heading nor dates beside it".into()));
    }
    if look.dates * 2 > look.filled {
        return Some(Some("it holds dates".into()));
    }
    if look.filled < 2 {
        return Some(Some("it has fewer than two readings".into()));
    }
    if look.numbers * 10 >= look.filled * 6 {
        if words::is_label_heading(&column.heading) || counts_rows(sheet, column, table) {
            return Some(Some("it numbers or names the rows".into()));
        }
        return None;
    }
    if look.words * 10 < look.filled * 6 {
        return Some(Some("it mixes numbers with words".into()));
    }
    let words: Vec<Cell> = sheet.filled(column.column, table.rows.0, table.rows.1).map(|(_, cell)| cells.unpack(cell)).collect();
    let usual = matches!(understand(&words, None), Ok((_, Scale::Graded(_), _)));
    let few = look.different_words <= 8 && look.different_words >= 2 && look.different_words * 3 <= look.words;
    if usual && look.different_words >= 2 || few && words::is_grade_heading(&column.heading) {
        return None;
    }
    Some(Some("it holds words; if they are grades, name the column and the grades in the plan".into()))
}

/// A first column of 1, 2, 3, ... only counts the rows.
fn counts_rows(sheet: &SheetCells, column: &Column, table: &Table) -> bool {
    let first = table.columns.first().is_some_and(|first| first.column == column.column);
    first
        && table.columns.len() > 1
        && column.heading.len() <= 3
        && sheet
            .filled(column.column, table.rows.0, table.rows.1)
            .enumerate()
            .all(|(index, (_, cell))| cell == Packed::Number(index as f64 + 1.0))
}

/// The moments at a place; why there are none if they cannot be read.
pub fn read_moments(cells: &Cells, sheet: &SheetCells, place: &Place) -> Result<Arc<Moments>, String> {
    let count = place.rows.len();
    let Some(column) = place.moments else { return Ok(Arc::new(Moments::positions(count))) };
    let read: Vec<Cell> = (0..count).map(|index| cells.cell(sheet, place.rows.row(index), column)).collect();
    match Moments::of_cells(&read) {
        Ok(moments) => Ok(Arc::new(moments)),
        Err(error) => Err(format!("{error}; positions stand in for the moments of {}", place.sheet)),
    }
}

/// Makes an indicator of the cells at a place.
pub fn indicator(
    cells: &Cells,
    sheet: &SheetCells,
    place: Place,
    (name, unit): (String, Option<String>),
    grades: Option<&crate::reading::Grades>,
    moments: Result<Arc<Moments>, String>,
) -> Indicator {
    let read: Vec<Cell> = (0..place.rows.len()).map(|index| cells.cell(sheet, place.rows.row(index), place.column)).collect();
    let (values, scale, understood) = understand(&read, grades).unwrap_or_else(|_| words_without_order(&read));
    let mut remarks = Vec::new();
    if matches!(place.rows, Rows::Up { .. }) {
        remarks.push("The newest reading stands on top; the readings were taken from the bottom up.".to_owned());
    }
    if understood.text_numbers > 0 {
        remarks.push(format!("{} readings are numbers written as text.", understood.text_numbers));
    }
    if understood.grades_assumed {
        let grades = understood.grades.as_ref().map(ToString::to_string).unwrap_or_default();
        remarks.push(format!("The order of the grades was assumed: {grades}."));
    }
    let moments = moments.unwrap_or_else(|why| {
        remarks.push(format!("{why}."));
        Arc::new(Moments::positions(values.len()))
    });
    let is_text = |index: usize| matches!(read[index], Cell::Text(_)) && scale == Scale::Numeric && !values[index].is_missing();
    let as_text = (0..read.len()).filter(|&index| is_text(index)).map(|index| index as u32).collect();
    Indicator { series: Series { name, unit, scale, values, moments, blocks: None }, understood, place, as_text, remarks }
}

/// Words whose order nobody stated: no reading has a value until the grades are given.
fn words_without_order(read: &[Cell]) -> (Vec<Value>, Scale, Understood) {
    let missing = read.iter().enumerate().map(|(index, cell)| {
        let why = if cell.is_empty() { Missing::Blank } else { Missing::NotUnderstood };
        crate::reading::understand::MissingReading { index, why, text: cell.quote() }
    });
    let understood = Understood { readings: read.len(), missing: missing.collect(), ..Understood::default() };
    (vec![Value::Missing(Missing::NotUnderstood); read.len()], Scale::Numeric, understood)
}

fn add(
    cells: &Cells,
    sheet: &SheetCells,
    place: Place,
    name: String,
    unit: Option<String>,
    moments: Result<Arc<Moments>, String>,
    survey: &mut Survey,
) {
    survey.indicators.push(indicator(cells, sheet, place, (name, unit), None, moments));
}
