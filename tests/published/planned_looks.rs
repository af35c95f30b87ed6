//! Kendall's S at planned looks against counting all orders, and its boundaries against those of a normal process.

use risefall::method::planned_looks::Spending;
use risefall::method::{Datum, Evidence, Outcome, Refusal};
use risefall::null_distribution::score_path::{Boundary, Sides};
use serde_json::{Value, json};

use crate::reference::{ask, fact};

fn judge(body: Value) -> Result<Outcome, Refusal> {
    ask("planned-looks", body).1
}

fn rows(outcome: &Outcome) -> &[Vec<Datum>] {
    let Evidence::Table(table) = &outcome.evidence[0] else { panic!("no table") };
    &table.rows
}

/// The numbers of a column, with nothing where there is none.
fn column(outcome: &Outcome, key: &str) -> Vec<Option<f64>> {
    let Evidence::Table(table) = &outcome.evidence[0] else { panic!("no table") };
    let place = table.columns.iter().position(|column| column.key == key).unwrap();
    let number = |row: &Vec<Datum>| match row[place] {
        Datum::Integer(integer) => Some(integer as f64),
        Datum::Number(number) => Some(number),
        _ => None,
    };
    table.rows.iter().map(number).collect()
}

fn text(outcome: &Outcome, key: &str) -> Option<Datum> {
    outcome.facts.iter().find(|fact| fact.key == key).map(|fact| fact.value.clone())
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

/// Over all orders: a claim is made exactly where S, counted pair by pair, crossed the boundary that the reply shows; the share
/// of claims is the risk that the reply says is spent; and p is at most any value in at most that share of all orders.
#[test]
fn claims_are_counted_over_all_orders() {
    for (n, first, every, seek, spending) in [
        (5, 2, 1, "rising", "pocock"),
        (6, 3, 2, "either", "pocock"),
        (6, 2, 1, "falling", "o-brien-fleming"),
        (7, 3, 1, "either", "o-brien-fleming"),
        (8, 4, 1, "rising", "pocock"),
    ] {
        let risk = 0.15;
        let (mut all, mut claims, mut spent, mut p_values) = (0.0, 0.0, 0.0, Vec::new());
        orders(n, &mut |order| {
            let outcome = judge(json!({
                "readings": order, "horizon": n, "first_look": first, "every": every, "seek": seek, "risk": risk,
                "spending": spending
            }))
            .unwrap();
            let s = |readings: usize| -> f64 {
                let pairs = (0..readings).flat_map(|later| (0..later).map(move |earlier| (earlier, later)));
                pairs.map(|(earlier, later)| f64::from(order[later]) - f64::from(order[earlier])).map(f64::signum).sum()
            };
            let looks = column(&outcome, "readings");
            let (lower, upper) = (column(&outcome, "lower"), column(&outcome, "upper"));
            let crossed = (0..looks.len()).any(|look| {
                let s = s(looks[look].unwrap() as usize);
                assert_eq!(column(&outcome, "s")[look], Some(s));
                upper[look].is_some_and(|upper| s >= upper) || lower[look].is_some_and(|lower| s <= lower)
            });
            assert_eq!(crossed, outcome.p.value <= risk, "{order:?}: {}", outcome.p.value);
            assert_eq!(crossed, text(&outcome, "first_claim") != Some(Datum::Nothing), "{order:?}");
            all += 1.0;
            claims += f64::from(u8::from(crossed));
            spent = fact(&outcome, "spent");
            p_values.push(outcome.p.value);
        });
        let what = format!("{n} {first} {every} {seek} {spending}");
        assert!((claims / all - spent).abs() < 1e-12 && spent <= risk && claims > 0.0, "{what}: {claims} of {all}, {spent}");
        p_values.sort_by(f64::total_cmp);
        for (number, p) in p_values.iter().enumerate() {
            assert!((number as f64 + 1.0) / all <= p * (1.0 + 1e-9), "{what}: {} of {all} have p up to {p}", number + 1);
            let last = p_values.get(number + 1).is_none_or(|next| next > &(p * (1.0 + 1e-9)));
            if last && *p <= risk {
                assert!(((number as f64 + 1.0) / all - p).abs() < 1e-12, "{what}: p = {p} is attained exactly");
            }
        }
    }
}

/// Boundaries of a process of independent normal steps at five looks with equal information between them, one-sided 2.5 %,
/// by the recursion of P. Armitage, C. K. McPherson and B. C. Rowe (1969), *Journal of the Royal Statistical Society A* 132,
/// 235-244, integrated with NumPy. S of some hundred readings is such a process, nearly.
#[test]
fn boundaries_are_near_those_of_a_normal_process() {
    let looks = [234, 295, 337, 371, 400];
    for (spending, normal) in
        [(Spending::OBrienFleming, [4.877, 3.357, 2.680, 2.290, 2.031]), (Spending::Pocock, [2.438, 2.427, 2.410, 2.397, 2.386])]
    {
        let boundary = Boundary::spending(&looks, Sides::One, |information| spending.allowance(0.025, information, Sides::One));
        for (look, expected) in boundary.looks().iter().zip(normal) {
            let n = look.readings as f64;
            let deviation = (n * (n - 1.0) * (2.0 * n + 5.0) / 18.0).sqrt();
            let z = (look.least.unwrap() as f64 - 1.0) / deviation;
            assert!((z - expected).abs() < 0.01 * expected, "{spending:?} {look:?}: {z} and {expected}");
        }
    }
}

/// What may be spent, by the formulas of Lan and DeMets, at the shares of information that the looks have.
#[test]
fn the_risk_is_spent_as_stated() {
    for (spending, seek, sides) in [
        ("o-brien-fleming", "rising", 1.0),
        ("pocock", "falling", 1.0),
        ("o-brien-fleming", "either", 2.0),
        ("pocock", "either", 2.0),
    ] {
        let readings: Vec<usize> = (0..104).map(|week| week * 37 % 101).collect();
        let outcome = judge(json!({ "readings": readings, "spending": spending, "seek": seek })).unwrap();
        let variance = |n: f64| n * (n - 1.0) * (2.0 * n + 5.0) / 18.0;
        let spent = column(&outcome, "spent");
        for (look, spent) in column(&outcome, "readings").iter().zip(&spent) {
            let information = variance(look.unwrap()) / variance(104.0);
            let allowed = match spending {
                "pocock" => 0.05 * (1.0 + (std::f64::consts::E - 1.0) * information).ln(),
                // The chance that a normal number lies further out than z / sqrt(t), z being 1.959964 or 2.241403.
                _ => {
                    let z: f64 = if sides == 1.0 { 1.959963984540054 } else { 2.241402727604947 };
                    sides * 2.0 * risefall::null_distribution::normal::upper_tail(z / information.sqrt())
                }
            };
            assert!(spent.unwrap() <= allowed * (1.0 + 1e-9), "{spending} {seek} {look:?}: {spent:?} {allowed}");
        }
        let last = spent.last().unwrap().unwrap();
        assert!(last <= 0.05 && last > 0.049, "{spending} {seek}: {last}");
        assert!((fact(&outcome, "left") - (0.05 - last)).abs() < 1e-15);
    }
}

/// With one look only, the test is Kendall's.
#[test]
fn one_look_is_a_single_test() {
    let readings = [12, 15, 11, 14, 18, 16, 13, 19, 17, 21, 20, 22];
    for seek in ["rising", "falling"] {
        let single = ask("mann-kendall", json!({ "readings": readings, "seek": seek })).1.unwrap().p.value;
        let body = json!({ "readings": readings, "seek": seek, "horizon": 12, "first_look": 12 });
        let planned = judge(body).unwrap();
        assert_eq!(rows(&planned).len(), 1);
        assert!((planned.p.value - single).abs() < 1e-12 * single || seek == "falling" && planned.p.value > 0.05);
    }
}

/// Equal readings drawn apart: over all orders of six readings with ties and 500 seeds, claims are made as often as the
/// reply says that risk is spent, within four standard errors, and S after each reading has Kendall's variance.
#[test]
fn drawing_apart_spends_the_same_risk() {
    let mut arrangements = std::collections::BTreeSet::new();
    orders(6, &mut |order| {
        arrangements.insert(order.iter().map(|&place| [1, 1, 1, 2, 2, 3][place as usize - 1]).collect::<Vec<u32>>());
    });
    assert_eq!(arrangements.len(), 60);
    let (mut all, mut claims, mut spent, mut squares) = (0.0, 0.0, 0.0, [0.0; 5]);
    for order in &arrangements {
        for seed in 0..500 {
            let body = json!({
                "readings": order, "horizon": 6, "first_look": 2, "seek": "rising", "risk": 0.2, "spending": "pocock", "seed": seed
            });
            let outcome = judge(body).unwrap();
            all += 1.0;
            claims += f64::from(u8::from(outcome.p.value <= 0.2));
            spent = fact(&outcome, "spent");
            squares.iter_mut().zip(column(&outcome, "s")).for_each(|(sum, s)| *sum += s.unwrap().powi(2));
        }
    }
    let error = (spent * (1.0 - spent) / all).sqrt();
    assert!((claims / all - spent).abs() < 4.0 * error, "{} {spent} {error}", claims / all);
    for (n, sum) in (2..).zip(squares) {
        let variance = f64::from(n * (n - 1) * (2 * n + 5)) / 18.0;
        assert!((sum / all / variance - 1.0).abs() < 4.0 * (2.0_f64 / all).sqrt(), "{n}: {} {variance}", sum / all);
    }
}

fn grades(weeks: u64) -> Vec<u64> {
    (0..weeks).map(|week| (week * week * 7 % 11 + week / 9) % 5 + week / 12).collect()
}

/// What was seen and claimed at an earlier look stays as it was, ties among the readings included, and p never rises.
#[test]
fn earlier_looks_stay_as_they_were() {
    for ties in ["seeded", "against"] {
        let readings = grades(60);
        let judge = |weeks: usize| judge(json!({ "readings": readings[..weeks], "horizon": 60, "ties": ties })).unwrap();
        let whole = judge(60);
        let mut p = 1.0;
        for weeks in 10..60 {
            let early = judge(weeks);
            let looks = weeks - 9;
            assert_eq!(column(&early, "s")[..looks], column(&whole, "s")[..looks], "{ties} {weeks}");
            assert!(column(&early, "s")[looks..].iter().all(Option::is_none));
            assert_eq!(column(&early, "upper"), column(&whole, "upper"));
            assert!(early.p.value <= p, "{ties} {weeks}: {} after {p}", early.p.value);
            p = early.p.value;
        }
        assert!(p < 0.05 && whole.p.value <= p, "{ties} {p}");
    }
}

/// Ties that count against the direction claim nothing that a draw would not claim, whatever it draws.
#[test]
fn against_is_on_the_safe_side() {
    let readings = grades(40);
    for seek in ["rising", "falling", "either"] {
        let ask = |ties: &str, seed: u32| {
            judge(json!({ "readings": readings, "horizon": 40, "ties": ties, "seed": seed, "seek": seek })).unwrap()
        };
        let against = ask("against", 1);
        assert_ne!(against.p.by.to_string(), "exact");
        let mut different = false;
        for seed in 0..20 {
            let seeded = ask("seeded", seed);
            assert!(seeded.p.value <= against.p.value, "{seek} {seed}: {} {}", seeded.p.value, against.p.value);
            different |= seeded.statistic.value != ask("seeded", seed + 1).statistic.value;
        }
        assert!(different, "the seed decides");
    }
}

/// Turning all readings upside down turns a rise into a fall.
#[test]
fn upside_down() {
    let readings: Vec<i32> = (0..50).map(|week| week * 31 % 53 + week).collect();
    let turned: Vec<i32> = readings.iter().map(|reading| -reading).collect();
    let p = |readings: &[i32], seek: &str| judge(json!({ "readings": readings, "horizon": 60, "seek": seek })).unwrap().p.value;
    assert_eq!(p(&readings, "rising"), p(&turned, "falling"));
    assert_eq!(p(&readings, "either"), p(&turned, "either"));
    assert!(p(&readings, "rising") < 0.05);
}

#[test]
fn before_between_and_beyond_the_looks() {
    let readings: Vec<u32> = (0..30).map(|week| week * 7 % 31).collect();
    let few = judge(json!({ "readings": readings[..9] })).unwrap_err();
    assert_eq!(few, Refusal::TooFewReadings { have: 9, need: 10 });
    let wrong = judge(json!({ "readings": readings, "horizon": 20, "first_look": 21 })).unwrap_err();
    assert!(wrong.to_string().contains("the horizon is 20"), "{wrong}");
    let between = judge(json!({ "readings": readings[..17], "horizon": 30, "every": 5 })).unwrap();
    assert_eq!((between.readings_used, column(&between, "readings").len()), (15, 5));
    assert!(between.cautions.iter().any(|caution| caution.contains("as of reading 15")), "{:?}", between.cautions);
    let beyond = judge(json!({ "readings": readings, "horizon": 24 })).unwrap();
    let within = judge(json!({ "readings": readings[..24], "horizon": 24 })).unwrap();
    assert_eq!((beyond.readings_used, beyond.p.value), (24, within.p.value));
    assert!(beyond.cautions.iter().any(|caution| caution.contains("6 later readings are not judged")), "{:?}", beyond.cautions);
}

#[test]
fn limits_at_several_levels_count_against() {
    let readings = json!(["<2", 1, 3, "<0.5", 4, 0.7, 5, 6, ">4", 7, 8, 9]);
    let refused = judge(json!({ "readings": readings, "horizon": 12 })).unwrap_err();
    assert!(refused.to_string().contains("ties=against"), "{refused}");
    assert!(judge(json!({ "readings": readings, "horizon": 12, "ties": "against" })).is_ok());
}
