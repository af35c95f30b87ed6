//! The Kendall family against all arrangements, all pairs and published critical values, each by code that is obviously right.

use risefall::null_distribution::q_multinomial::rises_less_falls;
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, published};

/// A small linear congruential generator, so that the cases are the same in every run.
struct Cases(u64);

impl Cases {
    fn below(&mut self, bound: u64) -> u64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 33) % bound
    }

    fn list(&mut self, count: usize, bound: u64) -> Vec<i64> {
        (0..count).map(|_| self.below(bound) as i64).collect()
    }
}

fn s(moments: &[i64], readings: &[i64]) -> i64 {
    let pairs = (0..readings.len()).flat_map(|later| (0..later).map(move |earlier| (earlier, later)));
    pairs.map(|(a, b)| (moments[b] - moments[a]).signum() * (readings[b] - readings[a]).signum()).sum()
}

/// S for every order of the readings.
fn all_s(moments: &[i64], readings: &mut [i64], fixed: usize, found: &mut Vec<i64>) {
    if fixed == readings.len() {
        found.push(s(moments, readings));
    }
    for other in fixed..readings.len() {
        readings.swap(fixed, other);
        all_s(moments, readings, fixed + 1, found);
        readings.swap(fixed, other);
    }
}

fn orders(moments: &[i64], readings: &[i64]) -> Vec<i64> {
    let mut found = Vec::new();
    all_s(moments, &mut readings.to_vec(), 0, &mut found);
    found
}

fn share(all: &[i64], counts: impl Fn(i64) -> bool) -> Value {
    json!(all.iter().filter(|&&s| counts(s)).count() as f64 / all.len() as f64)
}

/// Up to eight readings, ties among the readings and among the moments: exact p against all n! orders.
#[test]
fn exact_p_is_the_share_of_all_orders() {
    let (mut cases, mut checked) = (Cases(1), 0);
    for round in 0..40 {
        let n = 4 + round % 5;
        let readings = cases.list(n, 2 + round as u64 % 7);
        let mut moments = if round % 2 == 0 { (0..n as i64).collect() } else { cases.list(n, 6) };
        moments.sort_unstable();
        let observed = s(&moments, &readings);
        let all = orders(&moments, &readings);
        if all.iter().all(|&s| s == 0) {
            continue;
        }
        let body = json!({ "readings": readings, "moments": moments, "p_by": "exact" });
        let Ok(outcome) = ask("mann-kendall", body).1 else {
            assert!(observed == 0, "{moments:?} {readings:?} was refused though S is {observed}");
            continue;
        };
        let what = format!("{moments:?} {readings:?}");
        close(fact(&outcome, "s"), &json!(observed), 0.0, &what);
        close(fact(&outcome, "p_rising"), &share(&all, |s| s >= observed), 1e-12, &what);
        close(fact(&outcome, "p_falling"), &share(&all, |s| s <= observed), 1e-12, &what);
        checked += 1;
    }
    assert!(checked >= 25, "only {checked} cases were checked");
}

/// Two places with ties: the exact p of the sum of both S against all pairs of orders.
#[test]
fn regional_p_is_the_share_of_all_pairs_of_orders() {
    let (mut cases, mut checked) = (Cases(2), 0);
    let moments: Vec<i64> = (0..5).collect();
    for _ in 0..12 {
        let (a, b) = (cases.list(5, 4), cases.list(5, 9));
        let observed = s(&moments, &a) + s(&moments, &b);
        let (first, second) = (orders(&moments, &a), orders(&moments, &b));
        let sums: Vec<i64> = first.iter().flat_map(|x| second.iter().map(move |y| x + y)).collect();
        let places: Vec<&str> = [["a"; 5], ["b"; 5]].concat();
        let (readings, twice) = ([&a[..], &b[..]].concat(), [&moments[..], &moments[..]].concat());
        let body = json!({ "readings": readings, "moments": twice, "blocks": places, "p_by": "exact" });
        let Ok(outcome) = ask("regional-kendall", body).1 else { continue };
        let what = format!("{a:?} {b:?}");
        close(fact(&outcome, "s"), &json!(observed), 0.0, &what);
        close(fact(&outcome, "p_rising"), &share(&sums, |s| s >= observed), 1e-12, &what);
        close(fact(&outcome, "p_falling"), &share(&sums, |s| s <= observed), 1e-12, &what);
        checked += 1;
    }
    assert!(checked >= 8, "only {checked} cases were checked");
}

/// The slope against the median of the slopes of all pairs, ties among moments and slopes included.
#[test]
fn slope_is_the_median_of_all_slopes() {
    let mut cases = Cases(3);
    for round in 0..30 {
        let n = 6 + 7 * round;
        let readings = cases.list(n, 5 + 11 * round as u64);
        let mut moments = cases.list(n, 2 * n as u64);
        moments.sort_unstable();
        let pairs = (0..n).flat_map(|later| (0..later).map(move |earlier| (earlier, later)));
        let apart = pairs.filter(|&(a, b)| moments[a] < moments[b]);
        let mut slopes: Vec<f64> =
            apart.map(|(a, b)| (readings[b] - readings[a]) as f64 / (moments[b] - moments[a]) as f64).collect();
        slopes.sort_by(f64::total_cmp);
        let median = (slopes[(slopes.len() - 1) / 2] + slopes[slopes.len() / 2]) / 2.0;
        let outcome = ask("theil-sen", json!({ "readings": readings, "moments": moments })).1.unwrap();
        assert!((fact(&outcome, "slope") - median).abs() <= 1e-12 * median.abs().max(1e-3), "n {n}");
        close(fact(&outcome, "slopes"), &json!(slopes.len()), 0.0, &format!("n {n}"));
    }
}

/// Limits at one level tie among themselves and lie below every larger reading; at several levels only certain orders count.
/// S by hand: of the pairs of <1, 2, <3, 5 in this order, (<1, 2), (<1, 5), (2, 5) and (<3, 5) rise, the others are not certain.
#[test]
fn limits_count_where_their_order_is_certain() {
    let outcome = ask("mann-kendall", json!({ "readings": ["<1", 2, "<3", 5] })).1.unwrap();
    close(fact(&outcome, "s"), &json!(4), 0.0, "S");
    let refused = ask("mann-kendall", json!({ "readings": ["<1", 2, "<3", 5], "p_by": "exact" })).1;
    assert!(refused.is_err(), "limits at several levels have no exact null distribution");
}

/// Wisconsin Administrative Code, natural attenuation appendix, table A: S = -5, the two readings of 50 being tied.
#[test]
fn a_published_example_with_a_tie() {
    let case = published("mann_kendall", "wisconsin_table_a");
    let outcome = ask("mann-kendall", json!({ "readings": data(&case), "seek": "falling" })).1.unwrap();
    close(fact(&outcome, "s"), &case["published"]["S"], 0.0, "S");
    close(outcome.p.value, &case["recomputed"]["p_exact_decreasing"], 1e-13, "p");
}

/// The smallest S with P(S >= s) at most the risk, one-sided, by enumeration.
#[test]
fn critical_values() {
    let table = file("tables.json")["kendall_S_critical"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let null = rises_less_falls(&vec![1; n.parse().unwrap()]);
        for (risk, critical) in row.as_object().unwrap() {
            let most: f64 = risk.parse::<f64>().unwrap() * (1.0 + 1e-12);
            let smallest = null.points().map(|(s, _)| s).find(|&s| null.tails(s).upper <= most);
            assert_eq!(smallest, critical.as_i64(), "n {n}, risk {risk}");
            checked += 1;
        }
    }
    assert!(checked >= 40, "only {checked} critical values were found");
}

/// Critical values of S at a risk of 0.2, lower tail (Wisconsin Administrative Code, table B), as verified by enumeration.
#[test]
fn critical_values_of_a_regulation() {
    let table = file("tables.json")["kendall_S_alpha_0.20"]["verified"].clone();
    let mut checked = 0;
    for (n, entry) in table.as_object().unwrap() {
        let null = rises_less_falls(&vec![1; n.parse().unwrap()]);
        let lower = |key: &str| null.tails(entry[key].as_i64().unwrap()).lower;
        close(lower("critical"), &entry["p_at"], 1e-12, n);
        close(lower("next_attainable"), &entry["p_next"], 1e-12, n);
        checked += 1;
    }
    assert!(checked >= 5, "only {checked} critical values were found");
}
