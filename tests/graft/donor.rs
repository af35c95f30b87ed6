//! A rich workbook of new sheets for the tests.

use rust_xlsxwriter::{
    Chart, ChartType, Color, ConditionalFormatCell, ConditionalFormatCellRule, DataValidation, Format, Formula, Sparkline,
    Workbook,
};

/// The sheets that the donor offers; all others are placeholders.
pub const SHEETS: [&str; 2] = ["Trend one", "Trend two"];

/// Two sheets with formats, formulas, a chart and a sparkline on the user's sheet, validations, links and names.
pub fn build(users_sheet: Option<&str>) -> Vec<u8> {
    let mut workbook = Workbook::new();
    let bold = Format::new().set_bold().set_font_name("Arial").set_font_size(12);
    let number = Format::new().set_num_format("0.00000").set_border(rust_xlsxwriter::FormatBorder::Thin);
    let date = Format::new().set_num_format("yyyy-mm-dd \"at\" hh:mm").set_background_color(Color::RGB(0xEEEEEE));
    let mut chart = Chart::new(ChartType::Line);
    if let Some(name) = users_sheet {
        chart.add_series().set_values((name, 0, 0, 9, 0));
    } else {
        chart.add_series().set_values(("Trend one", 0, 1, 9, 1));
    }
    let one = workbook.add_worksheet();
    one.set_name(SHEETS[0]).unwrap().set_freeze_panes(1, 0).unwrap().set_landscape().set_repeat_rows(0, 0).unwrap();
    one.write_with_format(0, 0, "Heading & <more>", &bold).unwrap();
    for row in 1..10_u32 {
        one.write_with_format(row, 1, f64::from(row) / 7.0, &number).unwrap();
        one.write_with_format(row, 2, 45_000.0 + f64::from(row), &date).unwrap();
        one.write(row, 3, format!("text {row}")).unwrap();
        one.write(row, 4, Formula::new(format!("B{}*2", row + 1)).set_result((f64::from(row) * 2.0 / 7.0).to_string())).unwrap();
    }
    let formatted = Format::new().set_bold().set_num_format("0.0%");
    let rule = ConditionalFormatCell::new().set_rule(ConditionalFormatCellRule::GreaterThan(0.5)).set_format(formatted);
    one.add_conditional_format(1, 1, 9, 1, &rule).unwrap();
    one.autofilter(0, 0, 9, 4).unwrap();
    one.add_sparkline(1, 6, &Sparkline::new().set_range(("Trend one", 1, 1, 9, 1))).unwrap();
    let two = workbook.add_worksheet();
    two.set_name(SHEETS[1]).unwrap();
    two.write_rich_string(0, 0, &[(&bold, "Rich "), (&Format::default(), "text")]).unwrap();
    two.write_url(1, 0, "https://example.org/").unwrap();
    two.write_url(2, 0, "internal:'Trend one'!A1").unwrap();
    two.add_data_validation(3, 0, 9, 0, &DataValidation::new().allow_list_strings(&["yes", "no"]).unwrap()).unwrap();
    two.insert_chart(4, 2, &chart).unwrap();
    if let Some(name) = users_sheet {
        let placeholder = workbook.add_worksheet();
        placeholder.set_name(name).unwrap();
        for row in 0..10_u32 {
            placeholder.write(row, 0, f64::from(row)).unwrap();
        }
    }
    workbook.save_to_buffer().unwrap()
}
