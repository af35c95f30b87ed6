//! The sheet that is added to every Monday: one row a week, one column an indicator.

use rust_xlsxwriter::{
    ConditionalFormatCell, ConditionalFormatCellRule, ConditionalFormatFormula, DataValidation, Formula, Worksheet, XlsxError,
};

use super::readings::{HOUSES, Inspection, WEEKS, Week};
use super::style::{Style, computed};

pub const NAME: &str = "Weekly readings";

/// The first row of readings, counted from 0.
pub const FIRST: u32 = 5;
/// The last row of readings.
pub const LAST: u32 = FIRST + WEEKS as u32 - 1;

/// A column of numbers: heading with unit, number format, width, and the week's reading.
pub struct Column {
    pub letter: char,
    pub heading: &'static str,
    pub format: &'static str,
    pub reading: fn(&Week) -> Option<f64>,
}

/// The columns D to L. The complaint rate is a formula on the sheet.
pub const NUMBERS: [Column; 9] = [
    Column { letter: 'D', heading: "Guest nights", format: "#,##0", reading: |week| Some(week.guest_nights.into()) },
    Column { letter: 'E', heading: "Complaints", format: "0", reading: |week| Some(week.complaints.into()) },
    Column {
        letter: 'F',
        heading: "Complaints per 1,000 guest nights",
        format: "0.00",
        reading: |week| Some(week.complaint_rate()),
    },
    Column { letter: 'G', heading: "Response to requests (min)", format: "0.0", reading: |week| Some(week.response) },
    Column { letter: 'H', heading: "Check-in wait (min)", format: "0.0", reading: |week| Some(week.check_in) },
    Column { letter: 'I', heading: "Laundry to rewash (%)", format: "0.0%", reading: |week| week.rewash },
    Column { letter: 'J', heading: "Energy (kWh per guest night)", format: "0.0", reading: |week| Some(week.energy) },
    Column { letter: 'K', heading: "Linen cost per stay (€)", format: "#,##0.00 \"€\"", reading: |week| Some(week.linen) },
    Column { letter: 'L', heading: "Breakfast score (1 to 5)", format: "0.0", reading: |week| week.breakfast },
];

const RATE: char = 'F';
const REMARKS: u16 = 12;
const WIDTHS: [f64; 13] = [15.0, 15.0, 12.0, 10.0, 11.5, 16.0, 13.0, 11.0, 11.5, 14.0, 12.5, 12.5, 30.0];

pub fn fill(sheet: &mut Worksheet, weeks: &[Week], style: &Style) -> Result<(), XlsxError> {
    for (column, width) in (0..).zip(WIDTHS) {
        sheet.set_column_width(column, width)?;
    }
    headings(sheet, style)?;
    for (row, week) in (FIRST..).zip(weeks) {
        readings(sheet, row, week, style)?;
    }
    below(sheet, weeks, style)?;
    validations(sheet)?;
    conditions(sheet, style)?;
    sheet.set_freeze_panes(FIRST, 1)?.set_repeat_rows(FIRST - 2, FIRST - 1)?;
    Ok(())
}

fn headings(sheet: &mut Worksheet, style: &Style) -> Result<(), XlsxError> {
    sheet.set_row_height(0, 26)?.write_with_format(0, 0, "Ternfield Hotels: weekly readings", &style.title)?;
    let about = "All houses together, except the inspection, which is made at one house a week. A week begins on Monday.";
    sheet.write_with_format(1, 0, about, &style.remark)?;
    for (first, last, band) in
        [(1, 2, "Inspection"), (3, 5, "Guests"), (6, 7, "Front desk"), (8, 10, "House"), (11, 11, "Kitchen")]
    {
        match first == last {
            true => sheet.write_with_format(3, first, band, &style.band)?,
            false => sheet.merge_range(3, first, 3, last, band, &style.band)?,
        };
    }
    sheet.set_row_height(4, 48)?;
    for (column, heading) in (0..).zip(["Week beginning", "House visited", "Inspection grade"]) {
        sheet.write_with_format(4, column, heading, &style.heading_left)?;
    }
    for (index, column) in (3..).zip(&NUMBERS) {
        sheet.write_with_format(4, index, column.heading, &style.heading)?;
    }
    sheet.write_with_format(4, REMARKS, "Remarks", &style.heading_left)?;
    Ok(())
}

fn readings(sheet: &mut Worksheet, row: u32, week: &Week, style: &Style) -> Result<(), XlsxError> {
    sheet.write_number_with_format(row, 0, week.monday, &style.date)?;
    sheet.write_with_format(row, 1, HOUSES[week.house].name, &style.text)?;
    match week.inspection {
        Inspection::Graded(place) => sheet.write_with_format(row, 2, super::readings::GRADES[place], &style.text)?,
        Inspection::Closed => sheet.write_with_format(row, 2, "n/a", &style.text)?,
        Inspection::None => sheet.write_blank(row, 2, &style.text)?,
    };
    for (index, column) in (3..).zip(&NUMBERS) {
        let format = style.number(column.format);
        match (column.reading)(week) {
            Some(rate) if column.letter == RATE => {
                let formula = format!("IF(D{0}=\"\",\"\",1000*E{0}/D{0})", row + 1);
                sheet.write_formula_with_format(row, index, computed(formula, rate), &format)?
            }
            Some(reading) => sheet.write_number_with_format(row, index, reading, &format)?,
            None if column.letter == 'I' => sheet.write_with_format(row, index, "n/a", &format)?,
            None => sheet.write_blank(row, index, &format)?,
        };
    }
    if !week.remark.is_empty() {
        sheet.write_with_format(row, REMARKS, week.remark, &style.remark)?;
    }
    Ok(())
}

/// The averages and totals that stand below the last week.
fn below(sheet: &mut Worksheet, weeks: &[Week], style: &Style) -> Result<(), XlsxError> {
    let (average_row, total_row) = (LAST + 1, LAST + 2);
    for column in 0..=REMARKS {
        sheet.write_blank(average_row, column, &style.label_below)?;
    }
    sheet.write_with_format(average_row, 0, "Average", &style.label_below)?;
    sheet.write_with_format(total_row, 0, "Total", &style.label_below)?;
    for column in 1..=REMARKS {
        sheet.write_blank(total_row, column, &style.label_below)?;
    }
    for (index, column) in (3..).zip(&NUMBERS) {
        let range = range(column.letter, 0, WEEKS);
        let values: Vec<f64> = weeks.iter().filter_map(column.reading).collect();
        let total: f64 = values.iter().sum();
        let averages = style.number_below(if column.format == "0" { "0.0" } else { column.format });
        let average = computed(format!("AVERAGE({range})"), total / values.len() as f64);
        sheet.write_formula_with_format(average_row, index, average, &averages)?;
        if matches!(column.letter, 'D' | 'E') {
            let sum = computed(format!("SUM({range})"), total);
            sheet.write_formula_with_format(total_row, index, sum, &style.number_below("#,##0"))?;
        }
    }
    Ok(())
}

fn validations(sheet: &mut Worksheet) -> Result<(), XlsxError> {
    let houses = DataValidation::new().allow_list_formula(Formula::new("=House_names"));
    sheet.add_data_validation(FIRST, 1, LAST, 1, &houses)?;
    let grades = DataValidation::new()
        .allow_list_strings(&["poor", "fair", "good", "very good", "n/a"])?
        .set_input_title("Inspection grade")?
        .set_input_message("From poor to very good; n/a if the house was closed; blank if no visit was made.")?;
    sheet.add_data_validation(FIRST, 2, LAST, 2, &grades)?;
    Ok(())
}

fn conditions(sheet: &mut Worksheet, style: &Style) -> Result<(), XlsxError> {
    let poor = ConditionalFormatCell::new().set_rule(ConditionalFormatCellRule::EqualTo("poor")).set_format(style.look_here());
    sheet.add_conditional_format(FIRST, 2, LAST, 2, &poor)?;
    let first = FIRST + 1;
    let slow = ConditionalFormatFormula::new()
        .set_rule(format!("AND(ISNUMBER(G{first}),G{first}>Response_target)").as_str())
        .set_format(style.look_here());
    sheet.add_conditional_format(FIRST, 6, LAST, 6, &slow)?;
    Ok(())
}

/// The cells of some weeks in a column, as seen from this sheet: `G6:G57` for the first year.
pub fn range(letter: char, from: usize, to: usize) -> String {
    let row = |week: usize| FIRST as usize + week + 1;
    format!("{letter}{}:{letter}{}", row(from), row(to - 1))
}

/// The same as seen from another sheet.
pub fn outside(letter: char, from: usize, to: usize) -> String {
    format!("'{NAME}'!{}", range(letter, from, to))
}
