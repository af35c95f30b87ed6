//! Moments in the forms in which people write them.

use std::io::{Cursor, Read, Write};

use risefall::reading::moment::MomentKind;
use risefall::workbook::indicator::Rows as Order;
use rust_xlsxwriter::{Format as Look, Workbook};

use crate::helpers::{Put, Rows, book, check, marked, readings, row, says, survey};

fn with_moments(header: &str, moments: Vec<Put>) -> Vec<u8> {
    let mut rows: Rows = vec![row![header, "Score"]];
    let scores = readings(moments.len(), 50.0, 20.0);
    rows.extend(moments.into_iter().zip(scores).map(|(moment, score)| vec![moment, score.into()]));
    book("Data", rows)
}

/// A table of one indicator; its moments are found and have the expected kind and distance between the first two.
fn check_moments(header: &str, moments: Vec<Put>, kind: MomentKind, distance: f64) {
    let count = moments.len();
    let end = count + 1;
    let bytes = with_moments(header, moments.clone());
    let survey = check(&bytes, &[marked("Score", &format!("Data!B2:B{end}"), &format!("Data!A2:A{end}"), count, 0, "")]);
    let read = &survey.indicators[0].series.moments;
    assert_eq!((read.kind(), read.axis(1) - read.axis(0)), (kind, distance), "{moments:?}");
    assert!(read.check_order(false, None).is_ok(), "{moments:?}");
}

fn texts(texts: &[&str]) -> Vec<Put> {
    texts.iter().map(|&text| text.into()).collect()
}

fn numbers(numbers: impl IntoIterator<Item = i32>) -> Vec<Put> {
    numbers.into_iter().map(Put::from).collect()
}

#[test]
fn each_form_of_moment_is_found() {
    use MomentKind::{Date, Number};
    check_moments("Week", texts(&["2025-W07", "2025-W08", "2025-W09", "2025-W10"]), Date, 7.0);
    check_moments("Week", texts(&["Week 7", "Week 8", "Week 9", "Week 11"]), Number, 1.0);
    check_moments("Week", numbers(7..13), Number, 1.0);
    check_moments("Week", numbers([50, 51, 52, 1, 2, 3]), Number, 1.0);
    check_moments("Woche", texts(&["KW 7", "KW 8", "KW 9"]), Number, 1.0);
    check_moments("Month", texts(&["January", "February", "March", "April"]), Number, 1.0);
    check_moments("Month", texts(&["Okt", "Nov", "Dez", "Jan", "Feb"]), Number, 1.0);
    check_moments("Mois", texts(&["janvier", "février", "mars", "avril"]), Number, 1.0);
    check_moments("Month", texts(&["Jan-24", "Feb-24", "Mar-24"]), Date, 31.0);
    check_moments("Month", texts(&["2025-01", "2025-02", "2025-03"]), Date, 31.0);
    check_moments("Month", numbers([11, 12, 1, 2, 3]), Number, 1.0);
    check_moments("Quarter", texts(&["2024-Q1", "2024-Q2", "2024-Q3", "2024-Q4"]), Date, 91.0);
    check_moments("Quarter", texts(&["Q3 2023", "Q4 2023", "Q1 2024"]), Date, 92.0);
    check_moments("Quarter", texts(&["Q3", "Q4", "Q1", "Q2"]), Number, 1.0);
    check_moments("Year", numbers(2014..2024), Number, 1.0);
    check_moments("", numbers(1998..2006), Number, 1.0);
    check_moments("School year", texts(&["2019/20", "2020/21", "2021/22"]), Number, 1.0);
    check_moments("", texts(&["FY2021", "FY2022", "FY2023"]), Number, 1.0);
    check_moments("Date", texts(&["03.02.2025", "10.02.2025", "17.02.2025"]), Date, 7.0);
    check_moments("Date", texts(&["3.2.25", "10.2.25", "17.2.25"]), Date, 7.0);
    check_moments("Date", texts(&["05/01/2025", "12/01/2025", "05/02/2025"]), Date, 7.0);
    check_moments("Date", texts(&["3 Feb 2025", "10 Feb 2025", "17 Feb 2025"]), Date, 7.0);
    check_moments("Measured at", texts(&["2025-02-03 08:00", "2025-02-03 20:00", "2025-02-04 08:00"]), Date, 0.5);
    check_moments("", numbers(1..9), Number, 1.0);
    check_moments("Hours run", numbers((1..8).map(|step| step * 250)), Number, 250.0);
}

#[test]
fn words_under_a_header_of_moments_keep_their_order() {
    check_moments("Visit", texts(&["before", "after one week", "after a month"]), MomentKind::Label, 1.0);
}

/// ECMA-376 part 1, section 18.17.4.1: with 1904 dates, serial number 0 is 1904-01-01; so 44_229 is 2025-02-03.
#[test]
fn dates_of_the_1904_system_are_the_days_they_show() {
    let mut book = Workbook::new();
    let sheet = book.add_worksheet();
    let look = Look::new().set_num_format("yyyy-mm-dd");
    for row in 0..4 {
        sheet.write_number_with_format(row, 0, f64::from(44_229 + row * 7), &look).unwrap();
        sheet.write_number(row, 1, f64::from(row * row)).unwrap();
    }
    let package = with_1904_dates(&book.save_to_buffer().unwrap());
    let moments = &survey(&package).indicators[0].series.moments;
    assert_eq!((moments.label(0).as_str(), moments.label(3).as_str()), ("2025-02-03", "2025-02-24"));
}

/// The same package with the workbook's dates counted from 1904, as older Macintosh programs write it.
fn with_1904_dates(package: &[u8]) -> Vec<u8> {
    let mut original = zip::ZipArchive::new(Cursor::new(package)).unwrap();
    let mut copy = zip::ZipWriter::new(Cursor::new(Vec::new()));
    for index in 0..original.len() {
        let mut part = original.by_index(index).unwrap();
        let name = part.name().unwrap().into_owned();
        let mut text = String::new();
        part.read_to_string(&mut text).unwrap();
        if name == "xl/workbook.xml" {
            let edited = text.replacen("<workbookPr ", "<workbookPr date1904=\"1\" ", 1);
            assert_ne!(edited, text);
            text = edited;
        }
        copy.start_file(name, zip::write::SimpleFileOptions::default()).unwrap();
        copy.write_all(text.as_bytes()).unwrap();
    }
    copy.finish().unwrap().into_inner()
}

#[test]
fn newest_first_is_read_from_below() {
    let moments = (0..10).rev().map(|week| Put::Date(2025, 3 + week / 4, 1 + week % 4 * 7)).collect();
    let survey = check(&with_moments("Date", moments), &[marked("Score", "Data!B2:B11", "Data!A2:A11", 10, 0, "")]);
    let indicator = &survey.indicators[0];
    assert_eq!(indicator.place.rows, Order::Up { first: 10, count: 10 });
    assert_eq!(indicator.series.moments.label(0), "2025-03-01");
    assert!(says(&indicator.remarks, &["newest", "from the bottom up"]));
}

#[test]
fn unsorted_and_repeated_moments_are_said_and_kept() {
    let days = [3, 1, 2, 4, 5];
    let survey_of = |days: &[u8]| survey(&with_moments("Date", days.iter().map(|&day| Put::Date(2025, 3, day)).collect()));
    let unsorted = survey_of(&days);
    assert!(says(&unsorted.indicators[0].remarks, &["not in time order", "`2025-03-01`", "A3 of Data"]));
    assert!(unsorted.indicators[0].series.moments.check_order(true, None).is_err());
    let repeated = survey_of(&[1, 2, 2, 3, 4]);
    assert!(says(
        &repeated.indicators[0].remarks,
        &["several readings", "`2025-03-02`", "A4 of Data", "jonckheere-terpstra", "median"]
    ));
    assert!(repeated.indicators[0].series.moments.check_order(true, None).is_ok());
    assert!(repeated.indicators[0].series.moments.check_order(false, None).is_err());
}

#[test]
fn a_year_beside_a_month_completes_it() {
    let mut rows: Rows = vec![row!["Year", "Month", "Guests"]];
    for index in 0..30_i32 {
        let year: Put = if index % 12 == 0 { (2022 + index / 12).into() } else { Put::Nothing };
        let month = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"][index as usize % 12];
        rows.push(vec![year, month.into(), (900 + index * 31 % 170).into()]);
    }
    let survey = check(&book("Guests", rows), &[marked("Guests", "Guests!C2:C31", "Guests!B2:B31", 30, 0, "")]);
    let moments = &survey.indicators[0].series.moments;
    assert_eq!(moments.kind(), MomentKind::Date);
    assert_eq!(moments.date(13).unwrap().date().to_string(), "2023-02-01");
}

#[test]
fn no_moments_at_all_are_positions() {
    let mut rows: Rows = vec![row!["Torque (Nm)", "Angle"]];
    rows.extend(readings(9, 30.0, 6.0).into_iter().map(|torque| row![torque, torque * 2.5 - 4.0]));
    check(
        &book("Bolts", rows),
        &[marked("Torque (Nm)", "Bolts!A2:A10", "", 9, 0, ""), marked("Angle", "Bolts!B2:B10", "", 9, 0, "")],
    );
}

#[test]
fn rows_to_come_are_left_out() {
    let mut rows: Rows = vec![row!["Week", "Score", "Visits"]];
    for week in 1..=20_i32 {
        let reading = |number: i32| if week <= 9 { Put::from(number) } else { Put::Nothing };
        rows.push(vec![
            format!("2025-W{week:02}").into(),
            reading(40 + week % 4),
            if week == 9 { Put::Nothing } else { reading(3) },
        ]);
    }
    let survey = check(
        &book("Plan", rows),
        &[marked("Score", "Plan!B2:B10", "Plan!A2:A10", 9, 0, ""), marked("Visits", "Plan!C2:C10", "Plan!A2:A10", 9, 1, "")],
    );
    assert!(says(&survey.remarks, &["11 rows of the sheet Plan, from row 11 on", "no readings yet"]));
}

#[test]
fn subtotals_and_blank_rows_between_readings_are_left_out() {
    let mut rows: Rows = vec![row!["Month", "Sold"]];
    for year in [2023, 2024] {
        rows.extend((1..=6).map(|month| row![format!("{year}-{month:02}"), 100 + month * 7 % 5]));
        rows.push(row![format!("Total {year}"), 640]);
        rows.push(row![]);
    }
    let survey = check(&book("Shop", rows), &[marked("Sold", "Shop!B2:B15", "Shop!A2:A15", 12, 0, "")]);
    assert_eq!(survey.indicators[0].place.rows.row(6), 9);
    assert!(
        says(&survey.remarks, &["Row 8 of the sheet Shop, `Total 2023`"])
            && says(&survey.remarks, &["Row 16 of the sheet Shop, `Total 2024`"])
    );
}
