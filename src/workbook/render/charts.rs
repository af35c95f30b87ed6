//! `Trend charts`: for each indicator a chart on the user's own cells.
//!
//! Words and rows that do not lie one below the other cannot be drawn directly; for those, cells beside the charts refer
//! to the user's cells and the chart draws them.

use std::collections::BTreeMap;

use rust_xlsxwriter::{
    Chart, ChartAxisDateUnitType, ChartFont, ChartFormat, ChartLegendPosition, ChartLine, ChartMarker, ChartMarkerType,
    ChartRange, ChartType, Color, Format, Formula, Worksheet,
};

use super::look::Look;
use super::{Error, Input, fitting, live, page, serial, wording};
use crate::reading::moment::MomentKind;
use crate::reading::{Missing, Value};
use crate::workbook::indicator::{Judged, Rows};
use crate::workbook::reference::{CellRef, Range, column_letters, quote_sheet};

/// The most charts that are drawn.
const MOST_CHARTS: usize = 60;
/// The most readings of one indicator, and in all, that are kept with the charts; longer ones are drawn when opened.
const MOST_KEPT_OF_ONE: usize = 2_000;
const MOST_KEPT: usize = 50_000;
/// Rows that a chart takes.
const ROWS_A_CHART: u32 = 16;
/// The column where cells for charts begin, out of the way of the charts.
const HELPER_COLUMN: u16 = 30;
const INK: Color = Color::RGB(0x3A_3F_45);
const GRID: Color = Color::RGB(0xD8_DB_DF);

/// The chart sheet, and the placeholders that carry the user's sheet names.
pub fn sheets(input: &Input, look: &Look) -> Result<(Worksheet, Vec<Worksheet>), Error> {
    let mut sheet = Worksheet::new();
    page(&mut sheet, &input.names.charts, 0)?;
    sheet.set_freeze_panes(1, 0)?;
    sheet.set_row_height(0, 24)?;
    sheet.write_with_format(0, 0, wording::CHARTS, &look.title)?;
    let mut placeholders = BTreeMap::new();
    let mut kept = 0;
    for (place, judged) in input.judged.iter().take(MOST_CHARTS).enumerate() {
        let series = &judged.indicator.series;
        if series.count_present() < 2 {
            continue;
        }
        let (left, top) = ((place % 2) as u16 * 8, 2 + (place / 2) as u32 * ROWS_A_CHART);
        let direct = can_be_drawn_directly(judged);
        let keep = series.len() <= MOST_KEPT_OF_ONE && kept + series.len() <= MOST_KEPT;
        let chart = if direct {
            let placeholder = placeholders.entry(judged.indicator.place.sheet.clone()).or_insert_with(Worksheet::new);
            if keep {
                kept += series.len();
                keep_readings(placeholder, input, judged)?;
            }
            let range = judged.indicator.place.range();
            let moments = judged.indicator.place.moments_range();
            match range {
                Some(range) if keep => draw(judged, &remembered(&range), moments.as_ref().map(remembered)),
                Some(range) => draw(judged, &unremembered(&range), moments.as_ref().map(unremembered)),
                None => continue,
            }
        } else if keep {
            kept += series.len();
            let column = HELPER_COLUMN + 3 * place as u16;
            write_helpers(&mut sheet, input, look, judged, column)?;
            let last = series.len() as u32 + 1;
            let helpers = |column| ChartRange::new_from_range(&input.names.charts, 2, column, last, column);
            draw(judged, &helpers(column + 1), Some(helpers(column)))
        } else {
            continue;
        };
        sheet.insert_chart(top, left, &chart)?;
    }
    let drawn = input.judged.len().min(MOST_CHARTS) as u32;
    // A page holds two charts side by side and two below each other; none is cut by the end of a page.
    let pages = drawn.div_ceil(4);
    sheet.set_print_scale(80);
    let breaks: Vec<u32> = (1..pages).map(|page| 2 + page * 2 * ROWS_A_CHART).collect();
    if !breaks.is_empty() {
        sheet.set_page_breaks(&breaks)?;
    }
    sheet.set_print_area(0, 0, 2 + drawn.div_ceil(2) * ROWS_A_CHART, 15)?;
    if input.judged.len() > MOST_CHARTS {
        sheet.write_with_format(
            1,
            0,
            format!("The first {MOST_CHARTS} of {} indicators are drawn.", input.judged.len()),
            &look.subtitle,
        )?;
    }
    let sheets = placeholders.into_iter().map(|(name, mut sheet)| sheet.set_name(&name).map(|_| ()).map(|()| sheet));
    Ok((sheet, sheets.collect::<Result<_, _>>()?))
}

/// Whether a chart may draw the user's cells as they are: numbers or blank, one below the other. Words would be drawn as 0.
fn can_be_drawn_directly(judged: &Judged) -> bool {
    let Judged { indicator, .. } = judged;
    indicator.series.scale.grades().is_none()
        && !matches!(indicator.place.rows, Rows::Listed(_))
        && indicator.as_text.is_empty()
        && indicator.understood.missing.iter().all(|reading| reading.why == Missing::Blank)
}

/// A range whose cells are remembered in the chart, so that it can be shown before anything is computed.
fn remembered(range: &Range) -> ChartRange {
    let Range { sheet, first, last } = range;
    ChartRange::new_from_range(sheet, first.row, first.column as u16, last.row, last.column as u16)
}

/// A range in brackets, which the writing library takes as it is: a long series is not remembered in the chart cell by cell. The
/// graft takes the brackets off.
fn unremembered(range: &Range) -> ChartRange {
    let Range { sheet, first, last } = range;
    let cell = |cell: &CellRef| format!("${}${}", column_letters(cell.column), cell.row + 1);
    ChartRange::new_from_string(&format!("=({}!{}:{})", quote_sheet(sheet), cell(first), cell(last)))
}

fn draw(judged: &Judged, values: &ChartRange, moments: Option<ChartRange>) -> Chart {
    let series = &judged.indicator.series;
    let mut chart = Chart::new(ChartType::Line);
    let line = ChartLine::new().set_color(INK).set_width(1.25).clone();
    let mut dot = ChartFormat::new()
        .set_solid_fill(rust_xlsxwriter::ChartSolidFill::new().set_color(INK))
        .set_line(ChartLine::new().set_color(INK))
        .clone();
    let marker = ChartMarker::new()
        .set_type(ChartMarkerType::Circle)
        .set_size(if series.len() > 120 { 2 } else { 4 })
        .set_format(&mut dot)
        .clone();
    let drawn = chart.add_series();
    let has_moments = moments.is_some();
    drawn.set_values(values);
    if let Some(moments) = &moments {
        drawn.set_categories(moments);
    }
    drawn.set_name(fitting(&series.name).as_str()).set_format(ChartFormat::new().set_line(&line)).set_marker(&marker);
    let unit = series.unit.as_ref().map(|unit| format!(" ({unit})")).unwrap_or_default();
    let title = format!("{}{unit}: {}", series.name, judged.finding.conclusion.word);
    let font = |size: u32| ChartFont::new().set_size(f64::from(size)).set_color(INK).clone();
    let title: String = title.chars().take(250).collect();
    chart.title().set_name(title.as_str()).set_font(&font(12).set_bold().clone());
    chart.legend().set_hidden().set_position(ChartLegendPosition::Bottom);
    chart.set_width(500).set_height(300);
    let axis = chart.x_axis();
    axis.set_font(&font(9));
    if series.moments.kind() == MomentKind::Date && !series.moments.has_labels() && has_moments {
        axis.set_date_axis(true).set_num_format("yyyy-mm-dd").set_major_unit_date_type(ChartAxisDateUnitType::Months);
        if let Some(unit) = months_between_labels(judged) {
            axis.set_major_unit(unit);
        }
    }
    if matches!(judged.indicator.place.rows, Rows::Up { .. }) && series.moments.kind() != MomentKind::Date {
        axis.set_reverse();
    }
    let axis = chart.y_axis();
    axis.set_font(&font(9)).set_major_gridlines_line(ChartLine::new().set_color(GRID).set_width(0.5));
    if let Some(grades) = series.scale.grades() {
        let words: Vec<String> = grades.words().iter().enumerate().map(|(place, word)| format!("{} {word}", place + 1)).collect();
        axis.set_min(1)
            .set_max(grades.words().len() as f64)
            .set_major_unit(1)
            .set_name(fitting(&words.join(", ")).as_str())
            .set_name_font(&font(8));
    }
    chart
}

/// Months between labels on a date axis, so that at most a dozen stand there.
fn months_between_labels(judged: &Judged) -> Option<f64> {
    let moments = &judged.indicator.series.moments;
    let days = moments.axis(moments.len().checked_sub(1)?) - moments.axis(0);
    let months = (days.abs() / 30.4 / 10.0).ceil();
    (months >= 1.0 && days.abs() > 100.0).then_some(months)
}

/// Puts the readings and moments at their cells on a placeholder, so that the chart knows them.
fn keep_readings(sheet: &mut Worksheet, input: &Input, judged: &Judged) -> Result<(), Error> {
    let indicator = &judged.indicator;
    let date = Format::new().set_num_format("yyyy-mm-dd");
    for (index, value) in indicator.series.values.iter().enumerate() {
        let cell = indicator.place.cell(index);
        if let Value::Number(number) = value {
            sheet.write(cell.row, cell.column as u16, *number)?;
        }
        let Some(column) = indicator.place.moments else { continue };
        let moments = &indicator.series.moments;
        match moments.kind() {
            MomentKind::Date if !moments.has_labels() => {
                sheet.write_with_format(cell.row, column as u16, serial(input, moments.axis(index)), &date)?
            }
            MomentKind::Number if !moments.has_labels() => sheet.write(cell.row, column as u16, moments.axis(index))?,
            _ => sheet.write(cell.row, column as u16, fitting(&moments.label(index)))?,
        };
    }
    Ok(())
}

/// Writes moments and readings in time order beside the charts, live where the cells allow it.
fn write_helpers(sheet: &mut Worksheet, input: &Input, look: &Look, judged: &Judged, column: u16) -> Result<(), Error> {
    let indicator = &judged.indicator;
    let series = &indicator.series;
    sheet.write_with_format(1, column + 1, fitting(&series.name), &look.small)?;
    for (index, value) in series.values.iter().enumerate() {
        let row = 2 + index as u32;
        match (series.moments.kind(), indicator.place.moments) {
            (MomentKind::Date, Some(moments)) if !series.moments.has_labels() => {
                let formula = Formula::new(live::reference(indicator, index, moments))
                    .set_result(serial(input, series.moments.axis(index)).to_string());
                sheet.write_with_format(row, column, formula, &look.date)?;
            }
            (MomentKind::Date | MomentKind::Label, _) => {
                sheet.write_with_format(row, column, fitting(&series.moments.label(index)), &look.text)?;
            }
            _ if series.moments.has_labels() => {
                sheet.write_with_format(row, column, fitting(&series.moments.label(index)), &look.text)?;
            }
            _ => {
                sheet.write_with_format(row, column, series.moments.axis(index), &look.number)?;
            }
        }
        let Value::Number(number) = value else { continue };
        let is_text = indicator.as_text.binary_search(&(index as u32)).is_ok();
        let reference = live::reference(indicator, index, indicator.place.column);
        match series.scale.grades() {
            Some(grades) => {
                let formula = live::grade_place(reference.trim_start_matches('='), grades);
                sheet.write_with_format(row, column + 1, Formula::new(formula).set_result(number.to_string()), &look.number)?;
            }
            None if is_text => {
                sheet.write_with_format(row, column + 1, *number, &look.number)?;
            }
            None => {
                sheet.write_with_format(row, column + 1, Formula::new(reference).set_result(number.to_string()), &look.number)?;
            }
        }
    }
    Ok(())
}
