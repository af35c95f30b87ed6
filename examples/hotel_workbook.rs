//! Rebuilds the demo workbook `examples/hotel/visits.xlsx`.
//!
//! `cargo run --example hotel_workbook [FILE]`
//!
//! The Larkspur Houses, an invented group of small hotels, keep one row a week: the grade of an unannounced inspection
//! visit, complaints, waiting, laundry, energy. The truth behind the readings is known, since it is made up here:
//!
//! | column | truth |
//! | --- | --- |
//! | Breakfast grade | improves slowly |
//! | Room grade | only fluctuates |
//! | Complaints | rise: one third more after two years |
//! | Response | falls: the new rota works |
//! | Linen returned | only fluctuates |
//! | Energy | follows the seasons, no trend |
//! | New towels | begun ten weeks ago |

use rust_xlsxwriter::{
    Chart, ChartType, ConditionalFormatCell, ConditionalFormatCellRule, DataValidation, DocProperties, ExcelDateTime, Format,
    FormatBorder, Formula, Workbook, Worksheet, XlsxError,
};

const WEEKS: u32 = 104;
const FIRST_ROW: u32 = 4;
const GRADES: [&str; 4] = ["poor", "fair", "good", "very good"];

fn main() -> Result<(), XlsxError> {
    let path = std::env::args().nth(1).unwrap_or_else(|| "examples/hotel/visits.xlsx".into());
    build()?.save(&path)?;
    println!("{path} is rebuilt.");
    Ok(())
}

/// The workbook: weekly readings, a summary with formulas and a chart, and notes.
fn build() -> Result<Workbook, XlsxError> {
    let mut workbook = Workbook::new();
    let made = ExcelDateTime::from_ymd(2026, 1, 5)?;
    workbook.set_properties(
        &DocProperties::new().set_title("Weekly visits").set_author("Guest service").set_creation_datetime(&made),
    );
    workbook.push_worksheet(readings()?);
    workbook.push_worksheet(summary()?);
    workbook.push_worksheet(notes()?);
    workbook.define_name("Response", &format!("='Week data'!$E${}:$E${}", FIRST_ROW + 1, FIRST_ROW + WEEKS))?;
    Ok(workbook)
}

/// Normal deviates from a linear congruential generator (D. E. Knuth's MMIX constants) by summing twelve uniforms.
struct Noise(u64);

impl Noise {
    fn uniform(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }

    fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.uniform()).sum::<f64>() - 6.0
    }
}

fn grade(level: f64) -> &'static str {
    GRADES[(level.round().clamp(0.0, 3.0)) as usize]
}

fn readings() -> Result<Worksheet, XlsxError> {
    let title = Format::new().set_bold().set_font_size(14);
    let heading = Format::new().set_bold().set_text_wrap().set_border_bottom(FormatBorder::Thin);
    let date = Format::new().set_num_format("dd mmm yyyy");
    let one = Format::new().set_num_format("0.0");
    let percent = Format::new().set_num_format("0.0%");
    let money = Format::new().set_num_format("#,##0 \"kWh\"");
    let total = Format::new().set_italic().set_border_top(FormatBorder::Thin).set_num_format("0.0");
    let mut sheet = Worksheet::new();
    sheet.set_name("Week data")?.set_freeze_panes(FIRST_ROW, 1)?;
    sheet.write_with_format(0, 0, "Larkspur Houses: weekly inspection visits", &title)?;
    sheet.write(1, 0, "One unannounced visit a week; complaints and times from the front desk book.")?;
    let headings = [
        "Week beginning",
        "Breakfast grade",
        "Room grade",
        "Complaints (per 1000 nights)",
        "Response (min)",
        "Linen returned",
        "Energy (kWh)",
        "New towels (score)",
        "Remarks",
    ];
    for (column, label) in headings.iter().enumerate() {
        sheet.set_column_width(column as u16, 14)?;
        sheet.write_with_format(FIRST_ROW - 1, column as u16, *label, &heading)?;
    }
    sheet.set_column_width(8, 30)?;
    let start = ExcelDateTime::from_ymd(2024, 1, 1)?.to_excel();
    let mut noise = Noise(2024);
    for week in 0..WEEKS {
        let (row, t) = (FIRST_ROW + week, f64::from(week));
        sheet.write_with_format(row, 0, start + 7.0 * t, &date)?;
        let breakfast = grade(0.8 + 1.8 * t / f64::from(WEEKS) + 0.8 * noise.normal());
        let room = grade(1.8 + 0.8 * noise.normal());
        let complaints = 9.0 + 3.0 * t / f64::from(WEEKS) + 1.8 * noise.normal();
        let response = (24.0 - 7.0 * t / f64::from(WEEKS) + 3.5 * noise.normal()).max(4.0);
        let linen = (0.06 + 0.012 * noise.normal()).max(0.0);
        let season = (2.0 * std::f64::consts::PI * t / 52.0).cos();
        let energy = 4200.0 + 900.0 * season + 220.0 * noise.normal();
        if week % 29 != 17 {
            sheet.write(row, 1, breakfast)?;
            sheet.write(row, 2, room)?;
        } else {
            sheet.write(row, 8, "no visit: house closed")?;
        }
        sheet.write_with_format(row, 3, (complaints * 10.0).round() / 10.0, &one)?;
        if week == 40 {
            sheet.write(row, 4, "n/a")?;
        } else {
            sheet.write_with_format(row, 4, response.round(), &one)?;
        }
        sheet.write_with_format(row, 5, (linen * 1000.0).round() / 1000.0, &percent)?;
        sheet.write_with_format(row, 6, energy.round(), &money)?;
        if week >= WEEKS - 10 {
            sheet.write(row, 7, (3.0 + noise.normal()).round().clamp(1.0, 5.0))?;
        }
    }
    let (first, last) = (FIRST_ROW + 1, FIRST_ROW + WEEKS);
    sheet.write_with_format(last, 0, "Average", &total)?;
    for column in ["D", "E", "F", "G"] {
        let index = u16::from(column.as_bytes()[0] - b'A');
        sheet.write_formula_with_format(
            last,
            index,
            Formula::new(format!("=AVERAGE({column}{first}:{column}{last})")),
            &total,
        )?;
    }
    let choice = DataValidation::new().allow_list_strings(&GRADES)?;
    sheet.add_data_validation(FIRST_ROW, 1, last - 1, 2, &choice)?;
    let slow =
        ConditionalFormatCell::new().set_rule(ConditionalFormatCellRule::GreaterThan(30)).set_format(Format::new().set_bold());
    sheet.add_conditional_format(FIRST_ROW, 4, last - 1, 4, &slow)?;
    Ok(sheet)
}

fn summary() -> Result<Worksheet, XlsxError> {
    let bold = Format::new().set_bold();
    let mut sheet = Worksheet::new();
    sheet.set_name("Summary")?.set_column_width(0, 34)?.set_column_width(1, 14)?;
    sheet.write_with_format(0, 0, "At a glance", &bold)?;
    let last = FIRST_ROW + WEEKS;
    let lines = [
        ("Visits made", format!("=COUNTA('Week data'!B{}:B{last})", FIRST_ROW + 1)),
        ("Breakfast graded good or better", format!("=COUNTIF('Week data'!B{0}:B{last},\"*good\")", FIRST_ROW + 1)),
        ("Average response in the last 13 weeks", format!("=AVERAGE('Week data'!E{}:E{last})", last - 12)),
        ("Most complaints in a week", format!("=MAX('Week data'!D{}:D{last})", FIRST_ROW + 1)),
    ];
    for (row, (label, formula)) in lines.into_iter().enumerate() {
        sheet.write(row as u32 + 1, 0, label)?;
        sheet.write_formula(row as u32 + 1, 1, Formula::new(formula))?;
    }
    let mut chart = Chart::new(ChartType::Line);
    chart
        .add_series()
        .set_name("Complaints per 1000 nights")
        .set_categories(("Week data", FIRST_ROW, 0, last - 1, 0))
        .set_values(("Week data", FIRST_ROW, 3, last - 1, 3));
    chart.title().set_name("Complaints");
    chart.legend().set_hidden();
    sheet.insert_chart(7, 0, &chart)?;
    Ok(sheet)
}

fn notes() -> Result<Worksheet, XlsxError> {
    let mut sheet = Worksheet::new();
    sheet.set_name("Notes")?.set_column_width(0, 90)?;
    for (row, line) in [
        "Grades, from the lowest: poor, fair, good, very good.",
        "Complaints are counted per thousand guest nights, so that full and empty weeks compare.",
        "Response is the time from a guest's call to somebody at the door.",
        "Linen returned is the share of pieces that the laundry has to wash again.",
        "All houses, names and readings are invented.",
    ]
    .iter()
    .enumerate()
    {
        sheet.write(row as u32, 0, *line)?;
    }
    Ok(sheet)
}
