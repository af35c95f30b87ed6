//! `Trend pairings`: every pair of an earlier and a later reading, live on the user's own cells.

use rust_xlsxwriter::{Formula, Worksheet};

use super::look::Look;
use super::{Error, Input, fitting, live, page, serial, wording};
use crate::comparison::{Pairing, Pairings};
use crate::method::Evidence;
use crate::reading::Value;
use crate::reading::moment::MomentKind;
use crate::workbook::indicator::{Indicator, Judged};
use crate::workbook::reference::quote_sheet;

/// The most pairs of one indicator that are listed; of the others only the counts are given.
const MOST_OF_ONE: usize = 1_000;
/// The most pairs that are listed in all.
const MOST_IN_ALL: usize = 20_000;
const HEADING_ROW: u32 = 2;

/// Where each indicator's pairs stand: first row and how many are listed.
pub struct Layout(Vec<Option<Listed>>);

/// The rows of an indicator's pairs.
#[derive(Clone, Copy)]
pub struct Listed {
    pub first_row: u32,
    pub listed: usize,
    pub all: usize,
}

impl Listed {
    /// Whether every pair is listed.
    pub fn is_whole(&self) -> bool {
        self.listed == self.all
    }
}

impl Layout {
    pub fn of(&self, index: usize) -> Option<Listed> {
        self.0[index]
    }
}

/// The pairings that a finding rests on.
pub fn pairings_of(judged: &Judged) -> Option<&Pairings> {
    judged.finding.result.as_ref().ok()?.evidence.iter().find_map(|evidence| match evidence {
        Evidence::Pairings(pairings) => Some(pairings),
        Evidence::Table(_) => None,
    })
}

/// Decides which pairs are listed, and where.
pub fn lay_out(judged: &[Judged]) -> Layout {
    let (mut next, mut left) = (HEADING_ROW + 1, MOST_IN_ALL);
    let place = |judged: &Judged| {
        let all = pairings_of(judged)?.list.len();
        let listed = if all <= MOST_OF_ONE && all <= left { all } else { 0 };
        let first_row = next;
        next += listed.max(1) as u32;
        left -= listed;
        Some(Listed { first_row, listed, all })
    };
    Layout(judged.iter().map(place).collect())
}

/// The cell references of one column for an indicator's listed pairs, such as `'Trend pairings'!$I$4:$I$30`.
pub fn column_range(input: &Input, listed: Listed, column: char) -> String {
    let (first, last) = (listed.first_row + 1, listed.first_row + listed.listed as u32);
    format!("{}!${column}${first}:${column}${last}", quote_sheet(&input.names.pairings))
}

pub fn sheet(input: &Input, look: &Look, layout: &Layout) -> Result<Worksheet, Error> {
    let mut sheet = Worksheet::new();
    page(&mut sheet, &input.names.pairings, HEADING_ROW)?;
    sheet.write_with_format(0, 0, wording::PAIRINGS, &look.title)?;
    for (column, (label, width)) in wording::PAIRING_COLUMNS.iter().enumerate() {
        sheet.set_column_width(column as u16, *width)?;
        sheet.write_with_format(HEADING_ROW, column as u16, *label, &look.heading)?;
    }
    let mut last = HEADING_ROW;
    for (index, judged) in input.judged.iter().enumerate() {
        let (Some(listed), Some(pairings)) = (layout.of(index), pairings_of(judged)) else { continue };
        let name = &judged.indicator.series.name;
        if listed.listed == 0 {
            sheet.write_with_format(listed.first_row, 0, fitting(name), &look.text)?;
            let sentence =
                format!("{} pairs; too many to list one by one, the counts are on {}", listed.all, input.names.statistics);
            sheet.write_with_format(listed.first_row, 10, sentence, &look.wrapped)?;
        }
        for (number, pairing) in pairings.list.iter().take(listed.listed).enumerate() {
            let row = listed.first_row + number as u32;
            sheet.write_with_format(row, 0, fitting(name), &look.text)?;
            sheet.write_with_format(row, 1, number as u32 + 1, &look.whole)?;
            write_pair(&mut sheet, row, input, look, &judged.indicator, pairing)?;
        }
        last = last.max(listed.first_row + listed.listed.max(1) as u32 - 1);
    }
    if last == HEADING_ROW {
        sheet.write_with_format(HEADING_ROW + 1, 0, wording::NO_PAIRINGS, &look.subtitle)?;
    } else {
        sheet.autofilter(HEADING_ROW, 0, last, 10)?;
    }
    Ok(sheet)
}

fn write_pair(
    sheet: &mut Worksheet,
    row: u32,
    input: &Input,
    look: &Look,
    indicator: &Indicator,
    pairing: &Pairing,
) -> Result<(), Error> {
    let (earlier, later) = (pairing.earlier as usize, pairing.later as usize);
    sheet.write_with_format(row, 2, pairing.earlier + 1, &look.whole)?;
    sheet.write_with_format(row, 5, pairing.later + 1, &look.whole)?;
    write_moment(sheet, row, 3, input, look, indicator, earlier)?;
    write_moment(sheet, row, 6, input, look, indicator, later)?;
    let first_limit = write_value(sheet, row, 4, look, indicator, earlier)?;
    let second_limit = write_value(sheet, row, 7, look, indicator, later)?;
    if first_limit || second_limit {
        sheet.write_with_format(row, 8, pairing.sign, &look.whole)?;
    } else {
        let excel_row = row + 1;
        let sign = live::sign(&format!("E{excel_row}"), &format!("H{excel_row}"), indicator.series.scale.grades());
        sheet.write_with_format(row, 8, Formula::new(sign).set_result(pairing.sign.to_string()), &look.whole)?;
    }
    sheet.write_with_format(row, 9, pairing.weight, &look.whole)?;
    let is_text = |index: usize| indicator.as_text.binary_search(&(index as u32)).is_ok();
    let remark = if is_text(earlier) || is_text(later) { wording::READ_AS } else { "" };
    sheet.write_with_format(row, 10, remark, &look.text)?;
    Ok(())
}

/// Writes a moment: live where the cell holds a date, else as it was read.
fn write_moment(
    sheet: &mut Worksheet,
    row: u32,
    column: u16,
    input: &Input,
    look: &Look,
    indicator: &Indicator,
    index: usize,
) -> Result<(), Error> {
    let moments = &indicator.series.moments;
    match (moments.kind(), indicator.place.moments) {
        (MomentKind::Date, Some(moments_column)) if !moments.has_labels() => {
            let formula = live::reference(indicator, index, moments_column);
            let serial = serial(input, moments.axis(index));
            sheet.write_with_format(row, column, Formula::new(formula).set_result(serial.to_string()), &look.date)?;
        }
        (MomentKind::Number, _) if !moments.has_labels() => {
            sheet.write_with_format(row, column, moments.axis(index), &look.number)?;
        }
        _ => {
            sheet.write_with_format(row, column, fitting(&moments.label(index)), &look.text)?;
        }
    }
    Ok(())
}

/// Writes a reading: live, or as it was read where the cell holds text. Tells whether it is known only as a limit.
fn write_value(
    sheet: &mut Worksheet,
    row: u32,
    column: u16,
    look: &Look,
    indicator: &Indicator,
    index: usize,
) -> Result<bool, Error> {
    let series = &indicator.series;
    let shown = series.show(index);
    let is_text = indicator.as_text.binary_search(&(index as u32)).is_ok();
    let reference = live::reference(indicator, index, indicator.place.column);
    match series.values[index] {
        Value::Number(number) if is_text => {
            sheet.write_with_format(row, column, number, &look.number)?;
        }
        Value::Number(number) if series.scale.grades().is_none() => {
            sheet.write_with_format(row, column, Formula::new(reference).set_result(number.to_string()), &look.number)?;
        }
        Value::Number(_) => {
            sheet.write_with_format(row, column, Formula::new(reference).set_result(shown), &look.number)?;
        }
        Value::Below(_) | Value::Above(_) | Value::Missing(_) => {
            sheet.write_with_format(row, column, shown, &look.text)?;
            return Ok(true);
        }
    }
    Ok(false)
}
