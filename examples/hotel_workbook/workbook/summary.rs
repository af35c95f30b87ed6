//! What the coordinator shows each month: one year beside the other, and two charts. Averages alone; whether a
//! difference is a trend, they do not say.

use rust_xlsxwriter::{
    Chart, ChartFont, ChartFormat, ChartLegendPosition, ChartLine, ChartLineDashType, ChartType, Format, Formula, Worksheet,
    XlsxError,
};

use super::readings::{Inspection, WEEKS, Week};
use super::style::{GREY, INK, LINE, Style, computed};
use super::weekly::{self, Column, NUMBERS, outside};

pub const NAME: &str = "Summary";

const YEAR: usize = 52;
const HEADINGS: [&str; 7] = ["Indicator", "Unit", "Wanted", "2024", "2025", "Difference", "Latest week"];

/// The rows below the inspections: column, its unit, what is wanted.
const ROWS: [(char, &str, &str); 7] = [
    ('D', "a week", "neither"),
    ('F', "per 1,000 guest nights", "lower"),
    ('G', "min", "lower"),
    ('H', "min", "lower"),
    ('I', "share", "lower"),
    ('J', "kWh per guest night", "lower"),
    ('K', "€ per stay", "lower"),
];

pub fn fill(sheet: &mut Worksheet, weeks: &[Week], style: &Style) -> Result<(), XlsxError> {
    for (column, width) in (0..).zip([34.0, 23.0, 12.0, 12.0, 12.0, 13.0, 14.0]) {
        sheet.set_column_width(column, width)?;
    }
    sheet.set_row_height(0, 26)?.write_with_format(0, 0, "Ternfield Hotels: guest service at a glance", &style.title)?;
    sheet.write_with_format(1, 0, "Recorded up to the week beginning", &style.remark)?;
    let dates = weekly::outside('A', 0, WEEKS);
    let latest = weeks.last().map_or(0, |week| week.monday);
    sheet.write_formula_with_format(1, 1, computed(format!("MAX({dates})"), latest.into()), &style.date)?;
    for (column, heading) in (0..).zip(HEADINGS) {
        let format = if column < 3 { &style.heading_left } else { &style.heading };
        sheet.write_with_format(3, column, heading, format)?;
    }
    inspections(sheet, weeks, style)?;
    for (row, (letter, unit, wanted)) in (5..).zip(ROWS) {
        if let Some(column) = NUMBERS.iter().find(|column| column.letter == letter) {
            indicator(sheet, row, column, unit, wanted, weeks, style)?;
        }
    }
    let remark = "Averages of the weeks recorded. A difference between two averages is not yet a trend.";
    sheet.write_with_format(5 + ROWS.len() as u32, 0, remark, &style.remark)?;
    charts(sheet)
}

/// The share of inspections that were good or better.
fn inspections(sheet: &mut Worksheet, weeks: &[Week], style: &Style) -> Result<(), XlsxError> {
    let years = [(0, YEAR), (YEAR, WEEKS)].map(|(from, to)| {
        let range = outside('C', from, to);
        let formula = format!("SUMPRODUCT(COUNTIF({range},{{\"good\";\"very good\"}}))/SUMPRODUCT(COUNTIF({range},Grades))");
        let graded: Vec<usize> = weeks[from..to]
            .iter()
            .filter_map(|week| match week.inspection {
                Inspection::Graded(place) => Some(place),
                _ => None,
            })
            .collect();
        (formula, graded.iter().filter(|&&place| place >= 2).count() as f64 / graded.len() as f64)
    });
    row(sheet, 4, ["Inspections graded good or better", "share", "higher"], years, "0%", style)?;
    let last = Formula::new(format!("'{}'!C{}", weekly::NAME, weekly::LAST + 1)).set_result("n/a");
    sheet.write_formula_with_format(4, 6, last, &style.word)?;
    Ok(())
}

fn indicator(
    sheet: &mut Worksheet,
    at: u32,
    column: &Column,
    unit: &str,
    wanted: &str,
    weeks: &[Week],
    style: &Style,
) -> Result<(), XlsxError> {
    let years = [(0, YEAR), (YEAR, WEEKS)].map(|(from, to)| {
        let values: Vec<f64> = weeks[from..to].iter().filter_map(column.reading).collect();
        let average = values.iter().sum::<f64>() / values.len() as f64;
        (format!("AVERAGE({})", outside(column.letter, from, to)), average)
    });
    let name = column.heading.split(" (").next().unwrap_or_default();
    row(sheet, at, [name, unit, wanted], years, column.format, style)?;
    let last = weeks.last().and_then(column.reading).unwrap_or_default();
    let formula = computed(format!("'{}'!{}{}", weekly::NAME, column.letter, weekly::LAST + 1), last);
    sheet.write_formula_with_format(at, 6, formula, &style.number(column.format))?;
    Ok(())
}

/// Three words, two years and their difference.
fn row(
    sheet: &mut Worksheet,
    at: u32,
    words: [&str; 3],
    years: [(String, f64); 2],
    code: &str,
    style: &Style,
) -> Result<(), XlsxError> {
    for (column, word) in (0..).zip(words) {
        sheet.write_with_format(at, column, word, &style.text)?;
    }
    let difference = years[1].1 - years[0].1;
    for (column, (formula, value)) in (3..).zip(years) {
        sheet.write_formula_with_format(at, column, computed(formula, value), &style.number(code))?;
    }
    let signed: Format = style.number(&format!("+{code};-{code};{code}"));
    sheet.write_formula_with_format(at, 5, computed(format!("E{0}-D{0}", at + 1), difference), &signed)?;
    Ok(())
}

fn charts(sheet: &mut Worksheet) -> Result<(), XlsxError> {
    let below = 7 + ROWS.len() as u32;
    sheet.insert_chart_with_offset(below, 0, &line_chart("Response to requests (min)", 'G', 8.0), 0, 4)?;
    sheet.insert_chart_with_offset(below, 2, &line_chart("Complaints per 1,000 guest nights", 'F', 0.0), 36, 4)?;
    Ok(())
}

/// One line over the weeks, with a straight line as spreadsheets fit it.
fn line_chart(title: &str, letter: char, least: f64) -> Chart {
    let font = || {
        let mut font = ChartFont::new();
        font.set_size(9).set_color(GREY);
        font
    };
    let mut heading = font();
    heading.set_size(11).set_color(INK).set_bold();
    let mut chart = Chart::new(ChartType::Line);
    chart.set_width(430).set_height(280);
    chart.title().set_name(title).set_font(&heading);
    chart
        .add_series()
        .set_name(title)
        .set_categories(outside('A', 0, WEEKS).as_str())
        .set_values(outside(letter, 0, WEEKS).as_str())
        .set_format(ChartFormat::new().set_line(ChartLine::new().set_color(INK).set_width(1.25)));
    chart.x_axis().set_date_axis(true).set_num_format("mmm yy").set_major_unit(4).set_font(&font());
    chart.x_axis().set_major_unit_date_type(rust_xlsxwriter::ChartAxisDateUnitType::Months);
    chart.y_axis().set_min(least).set_font(&font());
    let faint = ChartLine::new().set_color(LINE).set_width(0.5).set_dash_type(ChartLineDashType::Dash).clone();
    chart.y_axis().set_major_gridlines_line(&faint);
    chart.legend().set_position(ChartLegendPosition::Bottom).set_font(&font()).set_hidden();
    chart
}
