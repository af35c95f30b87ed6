//! `Trend conclusions`: one row an indicator, what needs attention on top.

use rust_xlsxwriter::{Formula, Sparkline, Url, Worksheet};

use super::look::{Look, height};
use super::statistics::Family;
use super::{Error, Input, PROGRAM, fitting, page, wording};
use crate::finding::Word;
use crate::finding::sentence::{number, percent};
use crate::workbook::course::{Course, Pace, course};
use crate::workbook::indicator::{Judged, Rows};
use crate::workbook::reference::quote_sheet;

const HEADING_ROW: u32 = 3;
const LAST: u16 = wording::CONCLUSION_COLUMNS.len() as u16 - 1;

pub fn sheet(input: &Input, look: &Look, family: &Family) -> Result<Worksheet, Error> {
    let mut sheet = Worksheet::new();
    page(&mut sheet, &input.names.conclusions, HEADING_ROW)?;
    sheet.write_with_format(0, 0, wording::CONCLUSIONS, &look.title)?;
    sheet.write_with_format(1, 0, summary(input), &look.subtitle)?;
    for (column, (label, width)) in wording::CONCLUSION_COLUMNS.iter().enumerate() {
        sheet.set_column_width(column as u16, *width)?;
        sheet.write_with_format(HEADING_ROW, column as u16, *label, &look.heading)?;
    }
    let mut order: Vec<usize> = (0..input.judged.len()).collect();
    order.sort_by_key(|&index| rank(&input.judged[index]));
    for (place, &index) in order.iter().enumerate() {
        let member = family.members.iter().find(|member| member.index == index);
        write_row(
            &mut sheet,
            HEADING_ROW + 1 + place as u32,
            input,
            look,
            &input.judged[index],
            member.map(|member| member.row),
        )?;
    }
    let mut row = HEADING_ROW + 1 + order.len() as u32;
    if order.is_empty() {
        sheet.write_with_format(row, 0, wording::NOTHING_FOUND, &look.title)?;
        sheet.merge_range(row + 1, 0, row + 1, LAST, wording::LOOKED_FOR, &look.small)?;
        row += 2;
    } else {
        sheet.autofilter(HEADING_ROW, 0, row - 1, LAST)?;
    }
    write_notes(&mut sheet, row + 1, input, look)?;
    Ok(sheet)
}

/// What needs attention first, then what was shown, then the rest.
fn rank(judged: &Judged) -> u8 {
    match judged.finding.conclusion.word {
        _ if judged.finding.needs_attention() => 0,
        Word::Rising | Word::Falling | Word::Changed | Word::NotRandom | Word::Level => 1,
        Word::NotShown => 2,
        Word::TooFew => 3,
        Word::Declined => 4,
    }
}

fn summary(input: &Input) -> String {
    let count = input.judged.len();
    let attention = input.judged.iter().filter(|judged| judged.finding.needs_attention()).count();
    let indicators = if count == 1 { "1 indicator".to_owned() } else { format!("{count} indicators") };
    let made = input.made_on.strftime("%Y-%m-%d %H:%M");
    let attention = match attention {
        0 => "none shows a trend in a direction that is not wanted".to_owned(),
        1 => "1 shows a trend in the direction that is not wanted".to_owned(),
        more => format!("{more} show a trend in the direction that is not wanted"),
    };
    format!("{indicators}; {attention}. Made by {PROGRAM} on {made}.")
}

fn write_row(
    sheet: &mut Worksheet,
    row: u32,
    input: &Input,
    look: &Look,
    judged: &Judged,
    p_row: Option<u32>,
) -> Result<(), Error> {
    let finding = &judged.finding;
    let attention = finding.needs_attention();
    let words = if attention { &look.strong } else { &look.wrapped };
    let series = &judged.indicator.series;
    sheet.write_with_format(row, 0, fitting(&series.name), words)?;
    sheet.write_with_format(row, 1, finding.conclusion.word.as_str(), words)?;
    let wanted = match finding.wanted.welcomes(finding.conclusion.word.direction()) {
        Some(true) => wording::WANTED,
        Some(false) => wording::UNWANTED,
        None => "",
    };
    sheet.write_with_format(row, 2, wanted, words)?;
    sheet.write_with_format(row, 3, fitting(&finding.conclusion.sentence), &look.wrapped)?;
    for (column, letter, value) in [
        (4, 'C', finding.result.as_ref().ok().map(|outcome| outcome.p.value)),
        (5, 'E', finding.adjusted.map(|adjusted| adjusted.p)),
    ] {
        match (p_row, value) {
            (Some(p_row), Some(value)) => {
                let formula = format!("={}!${letter}${}", quote_sheet(&input.names.statistics), p_row + 1);
                sheet.write_with_format(row, column, Formula::new(formula).set_result(value.to_string()), &look.probability)?
            }
            _ => sheet.write_with_format(row, column, "", &look.text)?,
        };
    }
    sheet.write_with_format(row, 6, series.len() as u32, &look.whole)?;
    sheet.write_with_format(row, 7, judged.indicator.understood.missing.len() as u32, &look.whole)?;
    sheet.write_with_format(row, 8, "", &look.text)?;
    if let Some(range) = judged
        .indicator
        .place
        .range()
        .filter(|_| !matches!(judged.indicator.place.rows, Rows::Listed(_)) && series.scale.grades().is_none())
    {
        let reversed = matches!(judged.indicator.place.rows, Rows::Up { .. });
        let column = range.first.column as u16;
        let spark = Sparkline::new()
            .set_range((range.sheet.as_str(), range.first.row, column, range.last.row, column))
            .set_sparkline_color(rust_xlsxwriter::Color::RGB(0x3A_3F_45))
            .show_markers(false)
            .set_right_to_left(reversed);
        sheet.add_sparkline(row, 8, &spark)?;
    }
    let course = course(series, finding);
    let fast = how_fast(&course);
    sheet.write_with_format(row, 9, &fast, &look.wrapped)?;
    sheet.write_with_format(row, 10, course.since.unwrap_or_default(), &look.wrapped)?;
    let mut cautions = judged.indicator.remarks.clone();
    if let Ok(outcome) = &finding.result {
        cautions.extend(outcome.cautions.iter().cloned());
    }
    let cautions = fitting(&cautions.join(" "));
    sheet.write_with_format(row, 11, &cautions, &look.wrapped)?;
    let cells = judged.indicator.place.range().map(|range| range.to_string()).unwrap_or_default();
    let width = |column: usize| wording::CONCLUSION_COLUMNS[column].1;
    let wrapped = [
        (series.name.as_str(), width(0)),
        (finding.conclusion.sentence.as_str(), width(3)),
        (fast.as_str(), width(9)),
        (cautions.as_str(), width(11)),
        (cells.as_str(), width(12)),
    ];
    sheet.set_row_height(row, height(&wrapped))?;
    match judged.indicator.place.range() {
        Some(range) => {
            let shown = range.to_string();
            sheet.write_url_with_format(row, LAST, Url::new(format!("internal:{shown}")).set_text(shown), &look.link)?
        }
        None => sheet.write_with_format(row, LAST, "", &look.text)?,
    };
    Ok(())
}

/// The slope with its limits and unit, such as `0.041 (0.022 to 0.060) min a year`.
fn how_fast(course: &Course) -> String {
    match &course.pace {
        None => String::new(),
        Some(Pace { slope, limits: None, unit }) => format!("{} {unit}", number(*slope)),
        Some(Pace { slope, limits: Some((low, high)), unit }) => {
            format!("{} ({} {} {}) {unit}", number(*slope), number(*low), wording::TO, number(*high))
        }
    }
}

fn write_notes(sheet: &mut Worksheet, mut row: u32, input: &Input, look: &Look) -> Result<(), Error> {
    let mut note = |sheet: &mut Worksheet, text: &str, lines: f64| -> Result<(), Error> {
        sheet.merge_range(row, 0, row, LAST, &fitting(text), &look.small)?;
        sheet.set_row_height(row, 13.0 * lines)?;
        row += 1;
        Ok(())
    };
    let risks: Vec<f64> = input.judged.iter().map(|judged| judged.finding.question.risk.0).collect();
    if let Some(first) = risks.first().filter(|first| risks.iter().all(|risk| risk == *first)) {
        note(sheet, &format!("Accepted risk of claiming a trend where there is none: {}.", percent(*first)), 1.0)?;
    }
    for (word, meaning) in wording::WORDS {
        note(sheet, &format!("{word}: {meaning}"), 1.0)?;
    }
    note(sheet, wording::CAUTION, 1.0)?;
    if !input.remarks.is_empty() {
        note(sheet, wording::NOTES, 1.0)?;
    }
    const LINE: usize = 190;
    for remark in input.remarks {
        note(sheet, remark, remark.chars().count().div_ceil(LINE) as f64)?;
    }
    Ok(())
}
