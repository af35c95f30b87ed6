//! The bettor's capital against products by hand and counting all orders.

use risefall::method::{Datum, Direction, Evidence, Outcome};
use serde_json::{Value, json};

use crate::reference::{ask, fact};

fn judge(body: Value) -> Outcome {
    ask("watch", body).1.unwrap()
}

fn column(outcome: &Outcome, key: &str) -> Vec<f64> {
    let Evidence::Table(table) = &outcome.evidence[0] else { panic!("no table") };
    let place = table.columns.iter().position(|column| column.key == key).unwrap();
    let number = |row: &Vec<Datum>| match row[place] {
        Datum::Number(number) => number,
        _ => panic!("no number in {key}"),
    };
    table.rows.iter().map(number).collect()
}

fn near(got: &[f64], expected: &[f64]) {
    let all = got.iter().zip(expected).all(|(got, expected)| (got - expected).abs() < 1e-12 * expected);
    assert!(got.len() == expected.len() && all, "{got:?} {expected:?}");
}

/// Ranks 1 of 1, 2 of 2, 2 of 3 and 1 of 4: the advantages are 1, 0 and -1.
#[test]
fn by_hand() {
    let one = judge(json!({ "readings": [3, 7, 5, 1], "stakes": "0.5", "starts": "first" }));
    near(&column(&one, "rising"), &[1.0, 1.5, 1.5, 0.75]);
    near(&column(&one, "falling"), &[1.0, 0.5, 0.5, 0.75]);
    near(&column(&one, "capital"), &[1.0, 1.0, 1.0, 0.75]);
    near(&[fact(&one, "p_rising"), fact(&one, "p_falling"), one.p.value], &[1.0 / 1.5, 1.0, 1.0]);
    let two = judge(json!({ "readings": [3, 7, 5, 1], "stakes": "0.5;0.1", "starts": "first" }));
    near(&column(&two, "rising"), &[1.0, 1.3, 1.3, (0.75 + 0.99) / 2.0]);
    // Half of the bettors begin after the first reading, a sixth after the second, a twelfth after the third.
    let spread = judge(json!({ "readings": [3, 7, 5, 1], "stakes": "0.5", "starts": "spread" }));
    let last = 0.5 * 0.75 + 1.0 / 6.0 * 0.5 + 1.0 / 12.0 * 0.5 + 0.25;
    near(&column(&spread, "rising"), &[1.0, 1.25, 1.25, last]);
}

/// Visits all orders of 1 to `n`.
fn orders(n: u32, visit: &mut dyn FnMut(&[u32])) {
    fn go(list: &mut Vec<u32>, done: usize, visit: &mut dyn FnMut(&[u32])) {
        if done == list.len() {
            return visit(list);
        }
        for index in done..list.len() {
            list.swap(done, index);
            go(list, done + 1, visit);
            list.swap(done, index);
        }
    }
    go(&mut (1..=n).collect(), 0, visit);
}

/// Over all orders the capital after each reading is 1 on average, and p is at most any value in at most that share of them.
#[test]
fn the_game_is_fair_and_p_is_a_limit() {
    for (n, seek, starts) in [(5, "rising", "first"), (6, "falling", "spread"), (7, "either", "spread"), (8, "either", "first")] {
        let (mut all, mut sums, mut p_values) = (0.0, vec![0.0; n as usize], Vec::new());
        orders(n, &mut |order| {
            let outcome = judge(json!({ "readings": order, "seek": seek, "starts": starts, "stakes": "0.3;0.9" }));
            all += 1.0;
            sums.iter_mut().zip(column(&outcome, "capital")).for_each(|(sum, capital)| *sum += capital);
            p_values.push(outcome.p.value);
        });
        assert!(sums.iter().all(|sum| (sum / all - 1.0).abs() < 1e-12), "{n} {seek} {starts}: {sums:?}");
        p_values.sort_by(f64::total_cmp);
        for (number, p) in p_values.iter().enumerate() {
            assert!((number as f64 + 1.0) / all <= p * (1.0 + 1e-9), "{n} {seek} {starts}: {} of {all}, {p}", number + 1);
        }
        assert!(p_values[0] < 0.5, "{n} {seek} {starts}: some order wins");
    }
}

fn grades(weeks: u64) -> Vec<u64> {
    (0..weeks).map(|week| (week * week * 7 % 11 + week / 9) % 5 + week / 20).collect()
}

/// The capital at an earlier reading stays as it was, ties included; ties that count against the direction win no more than
/// a draw, whatever it draws.
#[test]
fn earlier_readings_stay_as_they_were() {
    let readings = grades(80);
    for ties in ["seeded", "against"] {
        let ask = |weeks: usize| judge(json!({ "readings": readings[..weeks], "ties": ties, "seek": "rising" }));
        let whole = ask(80);
        for weeks in [5, 20, 50] {
            near(&column(&ask(weeks), "capital"), &column(&whole, "capital")[..weeks]);
        }
        assert!(whole.p.value < 0.05 && whole.direction == Direction::Rising, "{ties} {}", whole.p.value);
        assert_eq!(column(&whole, "p").last(), Some(&whole.p.value));
    }
    let against = judge(json!({ "readings": readings, "ties": "against" }));
    for seed in 0..20 {
        assert!(judge(json!({ "readings": readings, "seed": seed })).p.value <= against.p.value, "{seed}");
    }
}

/// A claim stands though the series turns, and it is a claim of what was sought.
#[test]
fn a_claim_stands() {
    let readings: Vec<i32> = (0..40).chain((-100..40).rev()).collect();
    let rising = judge(json!({ "readings": readings, "seek": "rising" }));
    assert!(rising.p.value < 1e-3 && fact(&rising, "s") < 0.0 && rising.direction == Direction::Rising);
    assert!(fact(&rising, "claimed_after") < 30.0 && fact(&rising, "capital") < 1.0);
}

/// A thousand readings in ascending order multiply a stake of 0.5 by 1.5 each; of ten thousand no number holds the capital.
#[test]
fn capitals_beyond_all_numbers() {
    let ascending = |n: u32| (0..n).collect::<Vec<u32>>();
    let body = |n| json!({ "readings": ascending(n), "stakes": "0.5", "starts": "first", "seek": "rising" });
    let p = judge(body(1_000)).p.value;
    let expected = 1.5_f64.powi(-999);
    assert!((p - expected).abs() < 1e-10 * expected, "{p:e} {expected:e}");
    let far = judge(body(10_000));
    assert_eq!((far.p.value, far.statistic.value), (f64::MIN_POSITIVE, f64::MAX));
}

#[test]
fn stakes_are_checked() {
    for stakes in ["1", "0", "0.2;-0.1", "0.2;much"] {
        let refused = ask("watch", json!({ "readings": [1, 2, 3], "stakes": stakes })).1.unwrap_err();
        assert!(refused.to_string().contains("above 0 and below 1"), "{refused}");
    }
}

/// Readings in runs of five resemble their neighbours, and the reply says so.
#[test]
fn dependence_is_said() {
    let cautions = |readings: Vec<u32>| judge(json!({ "readings": readings })).cautions;
    let says_so = |cautions: Vec<String>| cautions.iter().any(|caution| caution.contains("resemble each other"));
    assert!(says_so(cautions((0..60).map(|week| week / 5 * 5 % 7 * 10 + week % 5).collect())));
    assert!(!says_so(cautions((0..60).map(|week| week * 37 % 61).collect())));
}
