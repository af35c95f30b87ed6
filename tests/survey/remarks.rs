//! Sheets that are passed over, cells of every kind, and limits.

use risefall::reading::Value;
use rust_xlsxwriter::{Chart, ChartType, Workbook};

use crate::helpers::{Put, Rows, book, check, draw, marked, read, readings, row, says, survey};

fn scores() -> Rows {
    let mut rows: Rows = vec![row!["Week", "Score"]];
    rows.extend((1..).zip(readings(6, 20.0, 5.0)).map(|(week, score)| row![week, score]));
    rows
}

#[test]
fn hidden_and_chart_sheets_and_our_own_are_passed_over() {
    let mut book = Workbook::new();
    for (name, hidden) in [("Shown", false), ("Kept back", true), ("Trend statistics", false)] {
        let sheet = book.add_worksheet().set_name(name).unwrap();
        draw(sheet, 0, 0, &scores());
        sheet.set_hidden(hidden);
    }
    let mut chart = Chart::new(ChartType::Line);
    chart.add_series().set_values("Shown!$B$2:$B$7");
    book.add_chartsheet().set_name("Picture").unwrap().insert_chart(0, 0, &chart).unwrap();
    let bytes = book.save_to_buffer().unwrap();
    let cells = read(&bytes, &["Trend statistics".to_owned()]).unwrap();
    let survey = risefall::workbook::survey::survey(&cells);
    let names: Vec<&str> = survey.indicators.iter().map(|indicator| indicator.series.name.as_str()).collect();
    assert_eq!(names, ["Score"]);
    assert!(says(&survey.remarks, &["Kept back", "hidden"]) && says(&survey.remarks, &["Picture", "chart"]));
}

#[test]
fn each_kind_of_cell_is_read() {
    let mut rows: Rows = vec![row!["Date", "Number", "Text", "Formula", "Truth", "Span", "Percent", "Error"]];
    for day in 1..=6_u8 {
        let number = 0.1 + f64::from(day) / 3.0;
        rows.push(vec![
            Put::Date(2025, 1, day),
            number.into(),
            format!("{}", f64::from(day) / 4.0).into(),
            Put::Formula("=B2*2", "2.5"),
            Put::Truth(day % 2 == 0),
            Put::Span(f64::from(day) / 24.0),
            Put::Percent(f64::from(day) / 100.0),
            if day == 3 { Put::Formula("=1/0", "#DIV/0!") } else { f64::from(day).into() },
        ]);
    }
    let at = |letter: &str| format!("Cells!{letter}2:{letter}7");
    let survey = check(
        &book("Cells", rows),
        &[
            marked("Number", &at("B"), &at("A"), 6, 0, ""),
            marked("Text", &at("C"), &at("A"), 6, 0, ""),
            marked("Formula", &at("D"), &at("A"), 6, 0, ""),
            marked("Truth", &at("E"), &at("A"), 6, 0, ""),
            marked("Span", &at("F"), &at("A"), 6, 0, "days"),
            marked("Percent", &at("G"), &at("A"), 6, 0, ""),
            marked("Error", &at("H"), &at("A"), 6, 1, ""),
        ],
    );
    let first = |index: usize| survey.indicators[index].series.values[0];
    assert_eq!(first(0), Value::Number(0.1 + 1.0 / 3.0), "all digits are kept");
    assert_eq!((first(1), first(2), first(3)), (Value::Number(0.25), Value::Number(2.5), Value::Number(0.0)));
    assert_eq!((first(4), first(5)), (Value::Number(1.0 / 24.0), Value::Number(0.01)));
    assert_eq!(survey.indicators[5].understood.percentages, 6);
}

#[test]
fn a_cell_in_the_last_corner_costs_nothing() {
    let mut book = Workbook::new();
    let sheet = book.add_worksheet().set_name("Wide").unwrap();
    draw(sheet, 0, 0, &scores());
    sheet.write_string(1_048_575, 16_383, "the end").unwrap();
    check(&book.save_to_buffer().unwrap(), &[marked("Score", "Wide!B2:B7", "Wide!A2:A7", 6, 0, "")]);
}

#[test]
fn too_few_readings_are_said() {
    let rows = vec![row!["Week", "Score", "Late"], row![1, 20, ""], row![2, 21, ""], row![3, 24, 7]];
    let survey = check(&book("Short", rows), &[marked("Score", "Short!B2:B4", "Short!A2:A4", 3, 0, "")]);
    assert!(says(&survey.remarks, &["Column C of the sheet Short, `Late`", "fewer than two readings"]));
}

#[test]
fn rows_without_moments_are_said() {
    let rows = vec![
        row!["Week", "Score"],
        row!["2025-W01", 3],
        row!["", 4],
        row!["2025-W03", 5],
        row!["closed", 6],
        row!["2025-W05", 7],
    ];
    let survey = check(&book("Gaps", rows), &[marked("Score", "Gaps!B2:B6", "Gaps!A2:A6", 3, 0, "")]);
    assert!(
        says(&survey.remarks, &["Row 3 of the sheet Gaps", "no moment"])
            && says(&survey.remarks, &["Row 5 of the sheet Gaps", "`closed`"])
    );
}

#[test]
fn an_empty_workbook_has_no_indicator() {
    let survey = survey(&book("Empty", vec![]));
    assert!(survey.indicators.is_empty() && says(&survey.remarks, &["Nothing to judge on the sheet Empty"]));
}
