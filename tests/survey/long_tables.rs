//! Tables of one row a reading, the indicator's name beside it.

use risefall::workbook::indicator::Rows as Order;

use crate::helpers::{Put, Rows, book, check, marked, row};

#[test]
fn a_moment_a_name_and_a_value() {
    let names = ["Complaints", "Returns", "Late deliveries"];
    let mut rows: Rows = vec![row!["Week", "Indicator", "Value", "Entered by"]];
    for week in 1..=10_i32 {
        for (index, name) in (0..).zip(names) {
            rows.push(row![format!("2025-W{week:02}"), name, 20 + week * (index + 3) % 7, "Okafor"]);
        }
    }
    let survey = check(
        &book("Log", rows),
        &[
            marked("Complaints", "Log!C2:C29", "Log!A2:A29", 10, 0, ""),
            marked("Returns", "Log!C3:C30", "Log!A3:A30", 10, 0, ""),
            marked("Late deliveries", "Log!C4:C31", "Log!A4:A31", 10, 0, ""),
        ],
    );
    let returns = &survey.indicators[1].place;
    assert_eq!(returns.rows, Order::Listed((0..10).map(|week| 2 + week * 3).collect()));
    assert_eq!(returns.header.unwrap().to_string(), "B3");
    assert_eq!(returns.names_range().unwrap().to_string(), "Log!B3:B30");
    assert_eq!(survey.indicators[0].series.moments.label(9), "2025-W10");
}

#[test]
fn several_values_a_row_and_the_newest_on_top() {
    let mut rows: Rows = vec![row!["Date", "Ward", "Falls", "Rating"]];
    for day in (1..=8_u8).rev() {
        for (index, ward) in ["Birch", "Cedar"].into_iter().enumerate() {
            let rating = ["low", "medium", "high"][(day as usize + index) % 3];
            rows.push(vec![Put::Date(2025, 6, day), ward.into(), (i32::from(day) * 5 % 4).into(), rating.into()]);
        }
    }
    let survey = check(
        &book("Wards", rows),
        &[
            marked("Birch: Falls", "Wards!C2:C16", "Wards!A2:A16", 8, 0, ""),
            marked("Birch: Rating", "Wards!D2:D16", "Wards!A2:A16", 8, 0, ""),
            marked("Cedar: Falls", "Wards!C3:C17", "Wards!A3:A17", 8, 0, ""),
            marked("Cedar: Rating", "Wards!D3:D17", "Wards!A3:A17", 8, 0, ""),
        ],
    );
    assert_eq!(survey.indicators[2].series.moments.label(0), "2025-06-01");
    assert_eq!(survey.indicators[2].place.rows.row(0), 16);
}

#[test]
fn a_list_of_events_is_not_a_long_table() {
    // Many customers, few orders each, no common moments: one series of orders, not one a customer.
    let mut rows: Rows = vec![row!["Date", "Customer", "Amount"]];
    for index in 0..60_i32 {
        let day = 1 + index / 3;
        rows.push(vec![
            Put::Date(2025, 1, day as u8),
            format!("Customer {}", (index * 7) % 23).into(),
            (40 + index * 13 % 29).into(),
        ]);
    }
    check(&book("Orders", rows), &[marked("Amount", "Orders!C2:C61", "Orders!A2:A61", 60, 0, "")]);
}
