//! `Trend plan`: every choice that was made, to be edited and obeyed at the next annotation.

use rust_xlsxwriter::{DataValidation, Formula, Worksheet};

use super::look::{Look, height};
use super::wording::PLAN_COLUMNS;
use super::{Error, Input, fitting, page, wording};
use crate::finding::request::Wanted;
use crate::finding::{Adjustment, Word};
use crate::method::declaration::{Kind, Shape};
use crate::method::{METHODS, Seek};
use crate::workbook::plan::{Plan, PlanRow};
use crate::workbook::reference::column_letters;

const HEADING_ROW: u32 = 3;

fn words<K: Kind>() -> Vec<&'static str> {
    match K::shape() {
        Shape::Choice(words) => words.iter().map(|choice| choice.word).collect(),
        _ => Vec::new(),
    }
}

pub fn sheet(input: &Input, look: &Look) -> Result<Worksheet, Error> {
    let mut sheet = Worksheet::new();
    page(&mut sheet, &input.names.plan, HEADING_ROW)?;
    sheet.set_freeze_panes(HEADING_ROW + 1, 2)?;
    sheet.write_with_format(0, 0, wording::PLAN, &look.title)?;
    sheet.write_with_format(1, 0, wording::PLAN_TITLE, &look.subtitle)?;
    sheet.write_with_format(2, 0, wording::ADJUSTMENT, &look.subtitle)?;
    sheet.write_with_format(2, 2, input.adjustment.word(), &look.text)?;
    let adjustments = DataValidation::new().allow_list_strings(&words::<Adjustment>())?;
    sheet.add_data_validation(2, 2, 2, 2, &adjustments)?;
    for (column, (label, width, help)) in PLAN_COLUMNS.iter().enumerate() {
        sheet.set_column_width(column as u16, *width)?;
        sheet.write_with_format(HEADING_ROW, column as u16, *label, &look.heading)?;
        let prompt = DataValidation::new().allow_any_value().set_input_title(*label)?.set_input_message(*help)?;
        sheet.add_data_validation(HEADING_ROW, column as u16, HEADING_ROW, column as u16, &prompt)?;
    }
    let judged = input.judged.iter().map(|judged| (&judged.row, remark(judged)));
    let unjudged = input.unjudged.iter().map(|row| (row, String::new()));
    let mut row = HEADING_ROW + 1;
    for (plan_row, remark) in judged.chain(unjudged) {
        for (column, text) in cells(plan_row).into_iter().chain([remark.as_str()]).enumerate() {
            match (column, text.parse::<f64>()) {
                (9, Ok(risk)) => sheet.write_with_format(row, column as u16, risk, &look.number)?,
                _ => sheet.write_with_format(row, column as u16, fitting(text), &look.wrapped)?,
            };
        }
        let widths = PLAN_COLUMNS.map(|(_, width, _)| width);
        let wrapped: Vec<(&str, f64)> = cells(plan_row).into_iter().chain([remark.as_str()]).zip(widths).collect();
        sheet.set_row_height(row, height(&wrapped))?;
        row += 1;
    }
    let last = (row + 200).max(row);
    for (column, list) in [(0, vec!["yes", "no"]), (6, words::<Wanted>()), (7, words::<Seek>())] {
        let choice = DataValidation::new().allow_list_strings(&list)?;
        sheet.add_data_validation(HEADING_ROW + 1, column, last, column, &choice)?;
    }
    let tests = list_tests(&mut sheet, look)?;
    let choice = DataValidation::new().allow_list_formula(tests);
    sheet.add_data_validation(HEADING_ROW + 1, 8, last, 8, &choice)?;
    Ok(sheet)
}

/// Lists all tests with their questions beside the plan; the range of their names.
fn list_tests(sheet: &mut Worksheet, look: &Look) -> Result<Formula, Error> {
    const COLUMN: u16 = PLAN_COLUMNS.len() as u16 + 1;
    for (offset, (label, width)) in wording::TEST_COLUMNS.into_iter().enumerate() {
        sheet.set_column_width(COLUMN + offset as u16, width)?;
        sheet.write_with_format(HEADING_ROW, COLUMN + offset as u16, label, &look.heading)?;
    }
    let mut row = HEADING_ROW;
    for method in METHODS {
        row += 1;
        sheet.write_with_format(row, COLUMN, method.card.key, &look.text)?;
        sheet.write_with_format(row, COLUMN + 1, method.card.question, &look.text)?;
    }
    let letters = column_letters(COLUMN.into());
    Ok(Formula::new(format!("=${letters}${}:${letters}${}", HEADING_ROW + 2, row + 1)))
}

/// The cells of a row in the order of [`PLAN_COLUMNS`], the remark left out.
fn cells(row: &PlanRow) -> [&str; 12] {
    [
        &row.judge,
        &row.indicator,
        &row.cells,
        &row.moments,
        &row.names,
        &row.grades,
        &row.wanted,
        &row.seek,
        &row.test,
        &row.risk,
        &row.options,
        &row.origin,
    ]
}

/// What is to be said of a row: why it could not be judged, or what was noticed.
fn remark(judged: &crate::workbook::Judged) -> String {
    match judged.finding.conclusion.word {
        Word::Declined => judged.finding.conclusion.sentence.clone(),
        _ => judged.indicator.remarks.join(" "),
    }
}

/// Reads the sheet back from its cells as text: columns are found by their headings, blank rows do not matter.
pub fn read_back(rows: &[Vec<String>]) -> Option<Plan> {
    let is_heading = |row: &&Vec<String>| ["Indicator", "Cells", "Test"].iter().all(|label| row.iter().any(|cell| cell == label));
    let heading = rows.iter().find(is_heading)?;
    let at = rows.iter().position(|row| std::ptr::eq(row, heading))?;
    let column = |label: &str| heading.iter().position(|cell| cell == label);
    let columns: Vec<Option<usize>> = PLAN_COLUMNS.iter().map(|(label, _, _)| column(label)).collect();
    let adjustment = rows[..at]
        .iter()
        .find(|row| row.iter().any(|cell| cell == wording::ADJUSTMENT))
        .and_then(|row| row.iter().find(|cell| !cell.is_empty() && *cell != wording::ADJUSTMENT))
        .cloned()
        .unwrap_or_default();
    let mut plan = Plan { rows: Vec::new(), adjustment };
    for row in &rows[at + 1..] {
        let text = |index: usize| {
            columns[index].and_then(|column| row.get(column)).map(|cell| cell.trim().to_owned()).unwrap_or_default()
        };
        let read = PlanRow {
            judge: text(0),
            indicator: text(1),
            cells: text(2),
            moments: text(3),
            names: text(4),
            grades: text(5),
            wanted: text(6),
            seek: text(7),
            test: text(8),
            risk: text(9),
            options: text(10),
            origin: text(11),
        };
        if !read.indicator.is_empty() || !read.cells.is_empty() {
            plan.rows.push(read);
        }
    }
    Some(plan)
}
