//! Forms of tables and cells that real sheets have: one workbook each, with what a person would mark.

use risefall::reading::Value;
use risefall::reading::moment::MomentKind;
use risefall::workbook::indicator::Rows as Order;
use rust_xlsxwriter::{Format as Look, Workbook};

use crate::helpers::{Put, Rows, book, check, draw, marked, row, says};

#[test]
fn several_visits_a_week_are_said_with_what_to_do() {
    let mut rows: Rows = vec![row!["Week", "Inspector", "Cleanliness grade"]];
    for visit in 0..18_i32 {
        let grade = ["fair", "good", "poor", "good", "very good"][visit as usize % 5];
        rows.push(row![format!("2025-W{:02}", 7 + visit / 2), ["Orlow", "Banda", "Ruiz"][visit as usize * 2 % 3], grade]);
    }
    let survey = check(&book("Visits", rows), &[marked("Cleanliness grade", "Visits!C2:C19", "Visits!A2:A19", 18, 0, "")]);
    assert!(says(
        &survey.indicators[0].remarks,
        &["several readings for the moment `2025-W07`", "jonckheere-terpstra", "median"]
    ));
}

#[test]
fn currency_percentages_and_formulas_are_readings() {
    let mut book = Workbook::new();
    let sheet = book.add_worksheet().set_name("Takings").unwrap();
    draw(sheet, 0, 0, &vec![row!["Week", "Takings (€)", "Occupancy (%)", "Per room", "Paid late"]]);
    let money = Look::new().set_num_format("#,##0.00 €");
    for week in 1..=12_i32 {
        let row = week as u32;
        let cells = vec![vec![
            format!("KW {week}").into(),
            Put::Nothing,
            Put::Percent(0.6 + f64::from(week % 5) / 50.0),
            Put::Formula("=B2/C2", ["88.5", "91.25", "90"][week as usize % 3]),
            format!("{} %", 2 + week % 4).into(),
        ]];
        draw(sheet, row, 0, &cells);
        sheet.write_number_with_format(row, 1, 4_000.0 + f64::from(week * 37 % 90), &money).unwrap();
    }
    let moments = "Takings!A2:A13";
    let survey = check(
        &book.save_to_buffer().unwrap(),
        &[
            marked("Takings", "Takings!B2:B13", moments, 12, 0, "€"),
            marked("Occupancy", "Takings!C2:C13", moments, 12, 0, ""),
            marked("Per room", "Takings!D2:D13", moments, 12, 0, ""),
            marked("Paid late", "Takings!E2:E13", moments, 12, 0, ""),
        ],
    );
    assert!(says(&survey.indicators[1].remarks, &["percentages", "fractions"]));
    assert_eq!(survey.indicators[2].series.values[0], Value::Number(91.25));
    assert_eq!(survey.indicators[3].series.values[0], Value::Number(0.03));
    assert_eq!(survey.indicators[3].understood.text_numbers, 12);
}

#[test]
fn currency_written_as_text_is_read() {
    let mut rows: Rows = vec![row!["Quarter", "Fines"]];
    for (quarter, fine) in ["$1,250.00", "$980.50", "$1,010.00", "-", "$1,400.25", "$1,380.00"].iter().enumerate() {
        rows.push(row![format!("Q{} {}", quarter % 4 + 1, 2023 + quarter / 4), *fine]);
    }
    let survey = check(&book("Library", rows), &[marked("Fines", "Library!B2:B7", "Library!A2:A7", 6, 1, "")]);
    assert_eq!(survey.indicators[0].series.values[4], Value::Number(1400.25));
}

#[test]
fn a_blank_column_between_moments_and_readings_takes_nothing_away() {
    let mut rows: Rows = vec![row!["Month", "Loans", "", "Returns", "Reminders"]];
    for month in 1..=10_i32 {
        rows.push(row![format!("2024-{month:02}"), 300 + month * 11 % 40, "", 280 + month * 7 % 50, 12 + month % 5]);
    }
    let moments = "Desk!A2:A11";
    check(
        &book("Desk", rows),
        &[
            marked("Loans", "Desk!B2:B11", moments, 10, 0, ""),
            marked("Returns", "Desk!D2:D11", moments, 10, 0, ""),
            marked("Reminders", "Desk!E2:E11", moments, 10, 0, ""),
        ],
    );
}

#[test]
fn headings_parted_from_the_readings_by_a_blank_row() {
    let mut rows: Rows = vec![row!["Shift log"], row![], row!["Date", "Output (t)", "Scrap, kg"], row![]];
    for day in 1..=9_u8 {
        rows.push(vec![Put::Date(2025, 2, day), (14.0 + f64::from(day) / 10.0).into(), (30 + i32::from(day) * 5 % 8).into()]);
    }
    check(
        &book("Mill", rows),
        &[marked("Output", "Mill!B5:B13", "Mill!A5:A13", 9, 0, "t"), marked("Scrap", "Mill!C5:C13", "Mill!A5:A13", 9, 0, "kg")],
    );
}

#[test]
fn fields_and_notes_above_a_table_are_no_headings() {
    let mut rows: Rows = vec![
        row!["Kept by:", "", "Ward sister on duty", ""],
        row!["* see the guideline", "", "", "* in mmHg"],
        row!["Day", "Systolic", "Diastolic", "VisitNo"],
    ];
    rows.extend((1..=8_i32).map(|day| row![day, 130 + day * 7 % 12, 80 + day * 5 % 9, 4_101 + day * 3]));
    check(
        &book("Sheet", rows),
        &[
            marked("Systolic", "Sheet!B4:B11", "Sheet!A4:A11", 8, 0, ""),
            marked("Diastolic", "Sheet!C4:C11", "Sheet!A4:A11", 8, 0, ""),
        ],
    );
}

#[test]
fn groups_of_headings_without_repeated_names() {
    let mut rows: Rows = vec![row!["", "Rooms", "", "Restaurant", ""], row!["Week", "Sold", "Rate (€)", "Covers", "Bill (€)"]];
    for week in 7..=18_i32 {
        rows.push(row![week, 80 + week * 3 % 11, 99.5 + f64::from(week % 4), 140 + week * 5 % 21, 31.2 + f64::from(week % 3)]);
    }
    let moments = "House!A3:A14";
    check(
        &book("House", rows),
        &[
            marked("Rooms: Sold", "House!B3:B14", moments, 12, 0, ""),
            marked("Rooms: Rate", "House!C3:C14", moments, 12, 0, "€"),
            marked("Restaurant: Covers", "House!D3:D14", moments, 12, 0, ""),
            marked("Restaurant: Bill", "House!E3:E14", moments, 12, 0, "€"),
        ],
    );
}

#[test]
fn weeks_as_numbers_go_on_into_the_new_year() {
    let mut rows: Rows = vec![row!["Week", "Complaints per thousand calls"]];
    rows.extend([49, 50, 51, 52, 1, 2, 3, 4].map(|week| row![week, 2.5 + f64::from(week % 7) / 10.0]));
    let name = "Complaints per thousand calls";
    let survey = check(&book("Calls", rows), &[marked(name, "Calls!B2:B9", "Calls!A2:A9", 8, 0, "")]);
    let moments = &survey.indicators[0].series.moments;
    assert_eq!((moments.kind(), moments.axis(7) - moments.axis(0)), (MomentKind::Number, 7.0));
}

#[test]
fn readings_between_yearly_totals_are_one_series() {
    let mut rows: Rows = vec![row!["Quarter", "Outages"]];
    for year in [2022, 2023, 2024] {
        rows.extend((1..=4).map(|quarter| row![format!("Q{quarter} {year}"), 9 + quarter * year % 5]));
        rows.push(row![format!("Average {year}"), 10.5]);
    }
    let survey = check(&book("Grid", rows), &[marked("Outages", "Grid!B2:B15", "Grid!A2:A15", 12, 0, "")]);
    let place = &survey.indicators[0].place;
    assert_eq!(place.rows, Order::Listed(vec![1, 2, 3, 4, 6, 7, 8, 9, 11, 12, 13, 14]));
    assert_eq!(place.names_range(), None);
}

#[test]
fn names_that_begin_like_totals_are_names_in_a_long_table() {
    let mut rows: Rows = vec![row!["Month", "Measure", "Value"]];
    for month in 1..=6_i32 {
        rows.push(row![format!("2025-{month:02}"), "Average wait (min)", 4.5 + f64::from(month % 3)]);
        rows.push(row![format!("2025-{month:02}"), "Total calls", 900 + month * 17 % 60]);
    }
    check(
        &book("Hotline", rows),
        &[
            marked("Average wait", "Hotline!C2:C12", "Hotline!A2:A12", 6, 0, "min"),
            marked("Total calls", "Hotline!C3:C13", "Hotline!A3:A13", 6, 0, ""),
        ],
    );
}

#[test]
fn half_hourly_times_beside_dates_make_moments() {
    let mut rows: Rows = vec![row!["Date", "Time", "Pain score", "Dose (mg)"]];
    for reading in 0..12_i32 {
        rows.push(vec![
            Put::Date(2025, 9, 1 + (reading / 3) as u8),
            Put::Span(f64::from(8 + reading % 3 * 6) / 24.0),
            (7 - reading / 2 + reading % 2).into(),
            (10 + reading % 4 * 5).into(),
        ]);
    }
    let survey = check(
        &book("Ward 4", rows),
        &[
            marked("Pain score", "'Ward 4'!C2:C13", "'Ward 4'!A2:A13", 12, 0, ""),
            marked("Dose", "'Ward 4'!D2:D13", "'Ward 4'!A2:A13", 12, 0, "mg"),
        ],
    );
    assert_eq!(survey.indicators[0].series.moments.label(1), "2025-09-01 14:00");
    assert!(says(&survey.indicators[0].remarks, &["times of day in column B"]));
}

#[test]
fn years_side_by_side_are_one_series_and_so_not_taken_as_several() {
    let mut rows: Rows = vec![row!["Month", 2022, 2023, 2024]];
    for (index, month) in (0..).zip(["Jan", "Feb", "Mar", "Apr", "May", "Jun"]) {
        rows.push(row![month, 40 + index * 3, 42 + index * 5 % 7, 45 + index]);
    }
    let survey = check(&book("Rain", rows), &[]);
    assert!(says(&survey.remarks, &["rows 2 to 7 of the sheet Rain", "side by side"]));
}

#[test]
fn dates_that_can_be_read_in_two_ways_are_not_guessed() {
    let mut rows: Rows = vec![row!["Date", "Queue"]];
    rows.extend(["03/04/2025", "04/04/2025", "05/04/2025", "06/04/2025"].iter().zip(5..).map(|(date, queue)| row![*date, queue]));
    let survey = check(&book("Door", rows), &[marked("Queue", "Door!B2:B5", "Door!A2:A5", 4, 0, "")]);
    assert_eq!(survey.indicators[0].series.moments.kind(), MomentKind::Label);
    assert!(says(&survey.indicators[0].remarks, &["`03/04/2025`", "several ways"]));
}

#[test]
fn gaps_and_closed_days_keep_their_place_or_are_said() {
    let mut rows: Rows = vec![row!["Date", "Visitors", "Tours"]];
    for day in 1..=14_u8 {
        let visitors: Put = match day {
            5 => "closed".into(),
            9 => Put::Nothing,
            12 => Put::Formula("=1/0", "#DIV/0!"),
            _ => (120 + i32::from(day) * 13 % 50).into(),
        };
        rows.push(vec![Put::Date(2025, 7, day), visitors, (i32::from(day) % 4).into()]);
    }
    rows.push(row!["Note: lift repaired on the 8th"]);
    let moments = "Museum!A2:A15";
    let survey = check(
        &book("Museum", rows),
        &[marked("Visitors", "Museum!B2:B15", moments, 14, 3, ""), marked("Tours", "Museum!C2:C15", moments, 14, 0, "")],
    );
    assert_eq!(survey.indicators[0].understood.missing[0].text, "closed");
    assert!(says(&survey.remarks, &["Row 16 of the sheet Museum", "no moment"]));
}
