//! Making an indicator of a column's cells in time order.

use super::moments::Timeline;
use super::view::View;
use crate::reading::understand::MissingReading;
use crate::reading::{Cell, Grades, Missing, Scale, Series, Understood, Value, understand};
use crate::workbook::indicator::Indicator;
use crate::workbook::reference::CellRef;

/// What an indicator is called.
#[derive(Clone, Debug, Default)]
pub struct Named {
    /// Its name.
    pub name: String,
    /// Its unit, where one is stated.
    pub unit: Option<String>,
    /// The cell that names it.
    pub cell: Option<CellRef>,
}

/// Makes an indicator. With grades each reading must be one of them; without, readings are numbers or the grades of a
/// usual scale. Words in no known order have no value until the grades are stated, and that is said.
pub fn indicator(view: View<'_>, column: u32, timeline: &Timeline, named: Named, grades: Option<&Grades>) -> Indicator {
    let rows = &timeline.rows;
    let cells: Vec<Cell> = (0..rows.len()).map(|index| view.cell(rows.row(index), column)).collect();
    let mut remarks = timeline.remarks.clone();
    let (values, scale, mut understood) = understand(&cells, grades).unwrap_or_else(|unordered| {
        let sentence = unordered.to_string();
        remarks.push(format!("{}{} into the plan.", sentence[..1].to_uppercase(), &sentence[1..]));
        words_without_order(&cells)
    });
    let mut unit = named.unit;
    let durations = cells.iter().filter(|cell| matches!(cell, Cell::Duration(_))).count();
    if durations > 0 && durations * 2 > cells.len() {
        if unit.as_deref().is_some_and(|unit| !unit.starts_with("day")) {
            remarks.push("Times are kept in days, as the cells hold them, whatever unit the heading states.".to_owned());
        }
        unit = Some("days".to_owned());
    }
    let shown_as_percentages = view.sheet.percentages(column);
    if shown_as_percentages * 2 > cells.len() && scale == Scale::Numeric {
        understood.percentages = understood.percentages.max(shown_as_percentages.min(cells.len()));
    }
    if understood.percentages > 0 && unit.as_deref().is_some_and(|unit| unit.starts_with('%')) {
        unit = None;
        remarks.push("The percentages are kept as fractions: 12 % is 0.12.".to_owned());
    }
    match understood.text_numbers {
        0 => {}
        1 => remarks.push("1 reading is a number written as text.".to_owned()),
        count => remarks.push(format!("{count} readings are numbers written as text.")),
    }
    if understood.grades_assumed {
        let grades = understood.grades.as_ref().map(ToString::to_string).unwrap_or_default();
        remarks.push(format!("The order of the grades was assumed: {grades}."));
    }
    let is_text = |index: usize| matches!(cells[index], Cell::Text(_)) && scale == Scale::Numeric && !values[index].is_missing();
    let as_text = (0..cells.len()).filter(|&index| is_text(index)).map(|index| index as u32).collect();
    let place = timeline.place(&view.sheet.name, column, named.cell);
    let series = Series { name: named.name, unit, scale, values, moments: timeline.moments.clone(), blocks: None };
    Indicator { series, understood, place, as_text, remarks }
}

/// Words whose order nobody stated: no reading has a value until the grades are given.
fn words_without_order(cells: &[Cell]) -> (Vec<Value>, Scale, Understood) {
    let missing = cells.iter().enumerate().map(|(index, cell)| {
        let why = if cell.is_empty() { Missing::Blank } else { Missing::NotUnderstood };
        MissingReading { index, why, text: cell.quote() }
    });
    let understood = Understood { readings: cells.len(), missing: missing.collect(), ..Understood::default() };
    (vec![Value::Missing(Missing::NotUnderstood); cells.len()], Scale::Numeric, understood)
}
