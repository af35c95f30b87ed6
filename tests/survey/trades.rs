//! One workbook a trade.

use risefall::reading::{Scale, Value};
use rust_xlsxwriter::Workbook;

use crate::helpers::{Put, Rows, book, book_of, check, draw, marked, readings, row, says};

#[test]
fn a_hotel_groups_weekly_inspection_grades() {
    let grades = ["good", "fair", "good", "very good", "fair", "poor", "good", "good", "excellent", "fair", "good", "good"];
    let mut rows: Rows = vec![row!["Week", "Inspector", "Rooms", "Breakfast", "Visits", "Note"]];
    for (week, grade) in (1..).zip(grades) {
        let breakfast = if week == 4 { "" } else { grades[(week * 5) % grades.len()] };
        let note = ["lift out of order", "", "new menu", "tour group"][week % 4];
        rows.push(row![
            format!("2025-W{week:02}"),
            ["M. Orlow", "T. Banda"][week % 2],
            grade,
            breakfast,
            (week % 3 + 2) as i32,
            note
        ]);
    }
    let survey = check(
        &book("Inspections", rows),
        &[
            marked("Rooms", "Inspections!C2:C13", "Inspections!A2:A13", 12, 0, ""),
            marked("Breakfast", "Inspections!D2:D13", "Inspections!A2:A13", 12, 1, ""),
            marked("Visits", "Inspections!E2:E13", "Inspections!A2:A13", 12, 0, ""),
        ],
    );
    let rooms = &survey.indicators[0];
    assert!(rooms.understood.grades_assumed && says(&rooms.remarks, &["assumed", "poor < fair < good"]));
    assert!(matches!(rooms.series.scale, Scale::Graded(_)));
    assert_eq!(rooms.series.moments.label(6), "2025-W07");
    assert!(says(&survey.remarks, &["Column B of the sheet Inspections, `Inspector`", "left out"]));
    assert!(says(&survey.remarks, &["Column F of the sheet Inspections, `Note`", "left out"]));
}

#[test]
fn monthly_rainfall_with_limits_and_gaps() {
    let mut rows: Rows = vec![row!["Station Ehrenbach, gauge 3"], row!["Month", "Rainfall [mm]", "Nitrate, mg/l", "Observer"]];
    for (index, rain) in readings(30, 60.0, 80.0).into_iter().enumerate() {
        let month = (2022 + index as u16 / 12, index as u8 % 12 + 1);
        let nitrate: Put = match index % 5 {
            0 => "<0.5".into(),
            3 => Put::Nothing,
            _ => (0.5 + index as f64 / 20.0).into(),
        };
        let rain: Put = if index == 17 { "n/a".into() } else { rain.into() };
        rows.push(vec![Put::Date(month.0, month.1, 1), rain, nitrate, "kept by the mill".into()]);
    }
    let survey = check(
        &book("Ehrenbach", rows),
        &[
            marked("Rainfall", "Ehrenbach!B3:B32", "Ehrenbach!A3:A32", 30, 1, "mm"),
            marked("Nitrate", "Ehrenbach!C3:C32", "Ehrenbach!A3:A32", 30, 6, "mg/l"),
        ],
    );
    assert_eq!(survey.indicators[1].understood.censored, 6);
    assert_eq!(survey.indicators[1].series.values[0], Value::Below(0.5));
}

#[test]
fn a_schools_weekly_behaviour_ratings() {
    let mut rows: Rows = vec![row!["Week", "Year 7", "Year 8", "Year 9", "Merits awarded"]];
    for week in 1..=14_i32 {
        let rating = |shift: i32| ["never", "rarely", "sometimes", "often"][((week * 3 + shift) % 4) as usize];
        rows.push(row![format!("Week {week}"), rating(0), rating(1), rating(2), 20 + week * 7 % 11]);
    }
    let survey = check(
        &book("Behaviour", rows),
        &[
            marked("Year 7", "Behaviour!B2:B15", "Behaviour!A2:A15", 14, 0, ""),
            marked("Year 8", "Behaviour!C2:C15", "Behaviour!A2:A15", 14, 0, ""),
            marked("Year 9", "Behaviour!D2:D15", "Behaviour!A2:A15", 14, 0, ""),
            marked("Merits awarded", "Behaviour!E2:E15", "Behaviour!A2:A15", 14, 0, ""),
        ],
    );
    assert_eq!(survey.indicators[0].understood.grades.as_ref().unwrap().place("often"), Some(4));
}

#[test]
fn a_clinics_blood_pressures_with_notes() {
    let mut rows: Rows = vec![row!["Date", "Time", "Systolic (mmHg)", "Diastolic (mmHg)", "Pulse", "Remarks"]];
    for (day, systolic) in (1..).zip(readings(18, 138.0, 22.0)) {
        let remark = match day {
            3 => "after walking up the stairs",
            9 => "new cuff",
            14 => "tablet taken late",
            _ => "",
        };
        let pulse: Put = if day == 5 { "-".into() } else { (60 + day * 7 % 19).into() };
        rows.push(vec![
            Put::Date(2025, 4, day as u8),
            Put::Span(7.0 / 24.0 + f64::from(day) / 1440.0),
            systolic.round().into(),
            (systolic * 0.6).round().into(),
            pulse,
            remark.into(),
        ]);
    }
    check(
        &book("Readings at home", rows),
        &[
            marked("Systolic", "'Readings at home'!C2:C19", "'Readings at home'!A2:A19", 18, 0, "mmHg"),
            marked("Diastolic", "'Readings at home'!D2:D19", "'Readings at home'!A2:A19", 18, 0, "mmHg"),
            marked("Pulse", "'Readings at home'!E2:E19", "'Readings at home'!A2:A19", 18, 1, ""),
        ],
    );
}

#[test]
fn monthly_listeners_with_a_total_beside_and_totals_below() {
    let months = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];
    let mut rows: Rows = vec![row!["Month", "North FM", "Harbour Radio", "Total listeners", "Cumulative listeners"]];
    let mut running = 0.0;
    for (index, north) in readings(24, 12_400.0, 3_000.0).into_iter().enumerate() {
        let (north, harbour) = (north.round(), (8_000 + index * 137 % 900) as f64);
        running += north + harbour;
        let month = format!("{} {}", months[index % 12], 2023 + index / 12);
        rows.push(row![month, north, harbour, north + harbour, running]);
    }
    rows.push(row!["Total", 297_600.0, 201_000.0, 498_600.0]);
    rows.push(row!["Average", 12_400.0, 8_375.0, 20_775.0]);
    let survey = check(
        &book("Audience", rows),
        &[
            marked("North FM", "Audience!B2:B25", "Audience!A2:A25", 24, 0, ""),
            marked("Harbour Radio", "Audience!C2:C25", "Audience!A2:A25", 24, 0, ""),
            marked("Total listeners", "Audience!D2:D25", "Audience!A2:A25", 24, 0, ""),
        ],
    );
    assert!(says(&survey.remarks, &["Row 26 of the sheet Audience, `Total`", "sums up"]));
    assert!(says(&survey.remarks, &["Row 27 of the sheet Audience, `Average`", "sums up"]));
    assert!(says(&survey.remarks, &["`Cumulative listeners`", "running total"]));
    assert!(says(&survey.indicators[2].remarks, &["sum", "columns B to C"]));
}

#[test]
fn a_maintenance_planners_failures_by_operating_hours() {
    let mut rows: Rows = vec![row!["Failure no.", "Operating hours", "Hours since last", "Machine", "Work order"]];
    let mut hours = 0.0;
    for failure in 1..=11_i32 {
        let since = f64::from(400 - failure * 17 % 60);
        hours += since;
        rows.push(row![failure, hours, since, "Press 2", format!("WO-{:05}", 3100 + failure * 7)]);
    }
    check(
        &book("Press 2", rows),
        &[
            marked("Operating hours", "'Press 2'!B2:B12", "'Press 2'!A2:A12", 11, 0, ""),
            marked("Hours since last", "'Press 2'!C2:C12", "'Press 2'!A2:A12", 11, 0, ""),
        ],
    );
}

#[test]
fn a_call_centres_complaints_and_percentages() {
    let mut rows: Rows = vec![row![
        "Week ending",
        "Calls",
        "Complaints (per 1,000 calls)",
        "Answered in time (%)",
        "Target",
        "Change from last week"
    ]];
    for week in 0..16_i32 {
        rows.push(vec![
            Put::Date(2025, 1 + (week / 4) as u8, 3 + (week % 4 * 7) as u8),
            (2_400 + week * 61 % 300).into(),
            (3.0 + f64::from(week * 7 % 10) / 10.0).into(),
            Put::Percent(0.8 + f64::from(week * 3 % 7) / 100.0),
            Put::Percent(0.85),
            (0.1 * f64::from(week % 3 - 1)).into(),
        ]);
    }
    let survey = check(
        &book("Service level", rows),
        &[
            marked("Calls", "'Service level'!B2:B17", "'Service level'!A2:A17", 16, 0, ""),
            marked("Complaints", "'Service level'!C2:C17", "'Service level'!A2:A17", 16, 0, "per 1,000 calls"),
            marked("Answered in time", "'Service level'!D2:D17", "'Service level'!A2:A17", 16, 0, ""),
        ],
    );
    assert!(says(&survey.indicators[2].remarks, &["percentages", "fractions"]));
    assert!(says(&survey.remarks, &["`Target`", "left out"]) && says(&survey.remarks, &["`Change from last week`", "left out"]));
}

#[test]
fn two_tables_side_by_side_and_one_below() {
    let mut book = Workbook::new();
    let sheet = book.add_worksheet().set_name("Kitchen").unwrap();
    let table = |name: &str, level: f64| -> Rows {
        let days = readings(9, level, 4.0);
        let mut rows: Rows = vec![row!["Day", name]];
        rows.extend((1..).zip(days).map(|(day, value)| row![day, value]));
        rows
    };
    draw(sheet, 0, 0, &vec![row!["Cold store"]]);
    draw(sheet, 1, 0, &table("Temperature (°C)", 4.0));
    draw(sheet, 1, 3, &table("Humidity (%)", 61.0));
    draw(sheet, 13, 0, &table("Waste (kg)", 9.0));
    check(
        &book.save_to_buffer().unwrap(),
        &[
            marked("Temperature", "Kitchen!B3:B11", "Kitchen!A3:A11", 9, 0, "°C"),
            marked("Waste", "Kitchen!B15:B23", "Kitchen!A15:A23", 9, 0, "kg"),
            marked("Humidity", "Kitchen!E3:E11", "Kitchen!D3:D11", 9, 0, "%"),
        ],
    );
}

#[test]
fn a_header_of_two_rows_with_merged_groups_and_one_of_units() {
    let mut book = Workbook::new();
    let sheet = book.add_worksheet().set_name("Pool").unwrap();
    let look = rust_xlsxwriter::Format::new();
    sheet.merge_range(0, 0, 0, 5, "Pool water, season 2024", &look).unwrap();
    sheet.merge_range(1, 0, 2, 0, "Date", &look).unwrap();
    sheet.merge_range(1, 1, 1, 2, "Large pool", &look).unwrap();
    sheet.merge_range(1, 3, 1, 4, "Children's pool", &look).unwrap();
    let mut rows: Rows =
        vec![row!["", "Chlorine", "Temperature", "Chlorine", "Temperature", "Guests"], row!["", "mg/l", "°C", "mg/l", "°C", ""]];
    for day in 1..=10_u8 {
        let day_number = f64::from(day);
        rows.push(vec![
            Put::Date(2024, 6, day),
            (0.5 + day_number / 50.0).into(),
            (24.0 - day_number / 9.0).into(),
            (0.6 - day_number / 70.0).into(),
            (28.0 + day_number / 11.0).into(),
            (310 + i32::from(day) * 13 % 40).into(),
        ]);
    }
    draw(sheet, 2, 0, &rows);
    let moments = "Pool!A5:A14";
    check(
        &book.save_to_buffer().unwrap(),
        &[
            marked("Large pool: Chlorine", "Pool!B5:B14", moments, 10, 0, "mg/l"),
            marked("Large pool: Temperature", "Pool!C5:C14", moments, 10, 0, "°C"),
            marked("Children's pool: Chlorine", "Pool!D5:D14", moments, 10, 0, "mg/l"),
            marked("Children's pool: Temperature", "Pool!E5:E14", moments, 10, 0, "°C"),
            marked("Guests", "Pool!F5:F14", moments, 10, 0, ""),
        ],
    );
}

#[test]
fn notes_above_a_table_and_text_numbers_with_decimal_commas() {
    let mut rows: Rows = vec![
        row!["Weighbridge records"],
        row!["Entered by hand from the paper slips; figures before March are estimates."],
        row![],
        row!["Datum", "Altglas (t)", "Papier (t)", "Bemerkung"],
    ];
    for day in 1..=12_i32 {
        let glass = format!("{},{}", 2 + day % 3, 25 + day);
        let paper = format!("{},{}", 1_000 + day, day % 10);
        rows.push(row![format!("{:02}.03.2025", day * 2), glass, paper, if day == 4 { "Waage defekt" } else { "" }]);
    }
    let survey = check(
        &book("Wertstoffe", rows),
        &[
            marked("Altglas", "Wertstoffe!B5:B16", "Wertstoffe!A5:A16", 12, 0, "t"),
            marked("Papier", "Wertstoffe!C5:C16", "Wertstoffe!A5:A16", 12, 0, "t"),
        ],
    );
    assert_eq!(survey.indicators[0].series.values[0], Value::Number(3.26));
    assert_eq!(survey.indicators[1].series.values[0], Value::Number(1001.1));
    assert_eq!(survey.indicators[0].understood.text_numbers, 12);
}

#[test]
fn words_in_no_known_order_are_asked_about() {
    let skies = ["calm", "breezy", "stormy", "breezy", "calm", "calm", "stormy", "breezy", "calm", "breezy"];
    let mut rows: Rows = vec![row!["Date", "Sea state", "Boats out", "Harbour master"]];
    for (day, sky) in (1..).zip(skies) {
        rows.push(vec![
            Put::Date(2025, 5, day),
            sky.into(),
            (12 - i32::from(day) % 5).into(),
            ["Lund", "Ivarsen"][day as usize % 2].into(),
        ]);
    }
    let survey = check(
        &book("Harbour", rows),
        &[
            marked("Sea state", "Harbour!B2:B11", "Harbour!A2:A11", 10, 10, ""),
            marked("Boats out", "Harbour!C2:C11", "Harbour!A2:A11", 10, 0, ""),
        ],
    );
    assert!(says(&survey.indicators[0].remarks, &["`calm`, `breezy`, `stormy`", "lowest first", "plan"]));
}

#[test]
fn what_only_looks_like_an_indicator_is_left_out() {
    let mut rows: Rows =
        vec![row!["No.", "Date", "Weekday", "Ticket no.", "Phone", "Postcode", "Branch", "Closed on", "Minutes open"]];
    let weekdays = ["Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun"];
    for index in 1..=15_i32 {
        rows.push(vec![
            index.into(),
            Put::Date(2025, 2, index as u8),
            weekdays[index as usize % 7].into(),
            (40_000 + index * 37).into(),
            format!("0151 {}", 200_000 + index * 7_919 % 90_000).into(),
            format!("0{}", 4_100 + index % 4).into(),
            "Old Mill Lane".into(),
            Put::Date(2025, 3, index as u8),
            (30 + index * 11 % 17).into(),
        ]);
    }
    check(&book("Tickets", rows), &[marked("Minutes open", "Tickets!I2:I16", "Tickets!B2:B16", 15, 0, "")]);
}

#[test]
fn a_list_of_things_is_no_series() {
    let rows = vec![
        row!["Room", "Beds", "Price (€)"],
        row!["Garden", 2, 120],
        row!["Balcony", 1, 90],
        row!["Tower", 4, 210],
        row!["Attic", 2, 80],
    ];
    let survey = check(&book("Rooms", rows), &[]);
    assert!(says(&survey.remarks, &["rows 2 to 5 of the sheet Rooms", "`Garden`", "not moments"]));
}

#[test]
fn moments_side_by_side_are_said_and_not_judged() {
    let rows = vec![
        row!["Indicator", "Jan 2025", "Feb 2025", "Mar 2025", "Apr 2025"],
        row!["Visitors", 410, 395, 460, 471],
        row!["Complaints", 4, 6, 3, 5],
    ];
    let survey = check(&book("Overview", rows), &[]);
    assert!(says(&survey.remarks, &["rows 2 to 3 of the sheet Overview", "side by side"]));
}

#[test]
fn the_same_header_on_two_sheets_is_told_apart() {
    let rows = |level: f64| -> Rows {
        let mut rows: Rows = vec![row!["Week", "Score"]];
        rows.extend((1..).zip(readings(8, level, 3.0)).map(|(week, score)| row![week, score]));
        rows
    };
    check(
        &book_of(&[("East", rows(70.0)), ("West", rows(65.0))]),
        &[
            marked("Score (East)", "East!B2:B9", "East!A2:A9", 8, 0, ""),
            marked("Score (West)", "West!B2:B9", "West!A2:A9", 8, 0, ""),
        ],
    );
}
