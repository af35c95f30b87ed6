//! What must hold for every test that depends on the order of the readings alone.

use std::collections::HashMap;

use risefall::method::{Outcome, Refusal};
use serde_json::{Value, json};

use crate::reference::{ask, fact};

/// A tail, the statistic that belongs to it, and whether large values (+1) or small ones (-1) of it make that p small; both as
/// the names of facts.
type Tail = (&'static str, &'static str, f64);

/// The tests that compare by order, a form of p that is quick, and their two tails.
const BY_ORDER: &[(&str, &str, [Tail; 2])] = &[
    ("spearman", "normal", [("p_rising", "rho", 1.0), ("p_falling", "rho", -1.0)]),
    ("difference-signs", "normal", [("p_rising", "rises", 1.0), ("p_falling", "falls", 1.0)]),
    ("runs-about-median", "normal", [("p_smooth", "runs", -1.0), ("p_alternating", "runs", 1.0)]),
    ("runs-up-down", "normal", [("p_smooth", "runs", -1.0), ("p_alternating", "runs", 1.0)]),
    ("turning-points", "normal", [("p_smooth", "turning_points", -1.0), ("p_alternating", "turning_points", 1.0)]),
    ("rank-von-neumann", "normal", [("p_smooth", "squared_steps", -1.0), ("p_alternating", "squared_steps", 1.0)]),
    ("pettitt", "approximation", [("p_rising", "k_rising", 1.0), ("p_falling", "k_falling", 1.0)]),
];

fn judge(method: &str, readings: &[f64], extra: Value) -> Result<Outcome, Refusal> {
    let mut body = json!({ "readings": readings });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    ask(method, body).1
}

/// A small generator for test data (the multiplier of MINSTD).
struct Dice(u64);

impl Dice {
    fn roll(&mut self, sides: u64) -> u64 {
        self.0 = self.0 * 48_271 % 0x7fff_ffff;
        self.0 % sides
    }

    fn series(&mut self, length: usize, values: u64) -> Vec<f64> {
        (0..length).map(|_| self.roll(values) as f64).collect()
    }
}

/// All different arrangements of some readings.
fn arrangements(readings: &[f64]) -> Vec<Vec<f64>> {
    let mut sorted = readings.to_vec();
    sorted.sort_by(f64::total_cmp);
    let mut all = vec![sorted.clone()];
    loop {
        let Some(i) = (1..sorted.len()).rev().find(|&i| sorted[i - 1] < sorted[i]) else { return all };
        let j = (i..sorted.len()).rev().find(|&j| sorted[j] > sorted[i - 1]).unwrap();
        sorted.swap(i - 1, j);
        sorted[i..].reverse();
        all.push(sorted.clone());
    }
}

/// The exact p of each tail is the share of all arrangements that are at least as extreme, ties among the readings included.
#[test]
fn exact_p_is_the_share_of_all_arrangements() {
    let mut dice = Dice(20_250_301);
    let mut checked = 0;
    for (length, values) in [(4, 3), (5, 9), (6, 3), (6, 4), (7, 2), (7, 4), (6, 50)] {
        let readings = dice.series(length, values);
        if readings.iter().all(|reading| *reading == readings[0]) {
            continue;
        }
        let all = arrangements(&readings);
        for (method, quick, tails) in BY_ORDER {
            let Ok(observed) = judge(method, &readings, json!({ "p_by": "exact" })) else { continue };
            assert_eq!(observed.p.by.to_string(), "exact", "{method} {readings:?}");
            let outcomes: Vec<Outcome> = all.iter().map(|one| judge(method, one, json!({ "p_by": quick })).unwrap()).collect();
            for (p, statistic, sense) in tails {
                let limit = sense * fact(&observed, statistic);
                let reach = outcomes.iter().filter(|one| sense * fact(one, statistic) >= limit - 1e-9).count();
                let expected = reach as f64 / all.len() as f64;
                let got = fact(&observed, p);
                assert!((got - expected).abs() < 1e-12, "{method} {p} {readings:?}: {got} {expected}");
                checked += 1;
            }
        }
    }
    assert!(checked >= 80, "only {checked} tails were checked");
}

/// Pettitt's two-sided p is the share of arrangements with a K at least as large, and strict counting of turning points and of
/// runs up and down is exact as well.
#[test]
fn exact_p_of_other_choices() {
    let mut dice = Dice(77);
    for (length, values) in [(6, 3), (7, 4), (6, 30)] {
        let readings = dice.series(length, values);
        let all = arrangements(&readings);
        let share = |method: &str, extra: Value, statistic: &str, at_most: bool| {
            let observed = judge(method, &readings, extra.clone()).unwrap();
            let limit = fact(&observed, statistic);
            let reach = all.iter().filter(|one| {
                let value = fact(&judge(method, one, extra.clone()).unwrap(), statistic);
                if at_most { value <= limit } else { value >= limit }
            });
            (observed, reach.count() as f64 / all.len() as f64)
        };
        let (observed, expected) = share("pettitt", json!({}), "k", false);
        assert!((observed.p.value - expected).abs() < 1e-12, "{readings:?}");
        for (method, statistic) in [("turning-points", "turning_points"), ("runs-up-down", "runs")] {
            let (observed, expected) = share(method, json!({ "equal": "strict" }), statistic, true);
            assert!((fact(&observed, "p_smooth") - expected).abs() < 1e-12, "{method} {readings:?}");
        }
    }
}

/// Reading a series backwards swaps rising and falling, and leaves a pattern as it is.
#[test]
fn reversal() {
    let mut dice = Dice(5);
    let mut checked = 0;
    for (length, values) in [(5, 4), (9, 20), (12, 5), (40, 9), (60, 1000)] {
        let readings = dice.series(length, values);
        let backwards: Vec<f64> = readings.iter().rev().copied().collect();
        for (method, _, tails) in BY_ORDER {
            let (forth, back) = (judge(method, &readings, json!({})), judge(method, &backwards, json!({})));
            let (forth, back) = match (forth, back) {
                (Ok(forth), Ok(back)) => (forth, back),
                (forth, back) => {
                    assert_eq!(forth.unwrap_err(), back.unwrap_err(), "{method} {readings:?}");
                    continue;
                }
            };
            checked += 1;
            let [first, second] = tails.map(|(p, ..)| p);
            let (same, other) = if first == "p_rising" { (second, first) } else { (first, second) };
            for (ours, theirs) in [(first, same), (second, other)] {
                let (got, expected) = (fact(&forth, ours), fact(&back, theirs));
                assert!((got - expected).abs() <= 1e-11 * expected, "{method} {ours} {readings:?}: {got} {expected}");
            }
            assert!((forth.p.value - back.p.value).abs() <= 1e-11 * back.p.value, "{method}");
        }
    }
    assert!(checked >= 30, "only {checked} series were judged");
}

/// An increasing map, a shift among them, changes nothing but the readings themselves.
#[test]
fn increasing_maps() {
    let mut dice = Dice(6);
    let mut checked = 0;
    for (length, values) in [(7, 4), (15, 6), (50, 300)] {
        let readings = dice.series(length, values);
        for (method, ..) in BY_ORDER {
            let Ok(first) = judge(method, &readings, json!({})) else { continue };
            checked += 1;
            let maps: [fn(f64) -> f64; 3] = [|x| x - 1e6, |x| x * x * x, |x| (x + 1.0).ln()];
            for map in maps {
                let mapped: Vec<f64> = readings.iter().map(|&reading| map(reading)).collect();
                let second = judge(method, &mapped, json!({})).unwrap();
                assert_eq!((&first.p, &first.statistic), (&second.p, &second.statistic), "{method} {readings:?}");
            }
        }
    }
    assert!(checked >= 18, "only {checked} series were judged");
}

/// With seek=rising or falling a pattern screen judges a smooth order only; an alternating one contradicts a trend.
#[test]
fn a_trend_is_smooth() {
    let readings = Dice(9).series(24, 100);
    for method in ["runs-about-median", "runs-up-down", "turning-points", "rank-von-neumann"] {
        for seek in ["rising", "falling"] {
            let outcome = judge(method, &readings, json!({ "seek": seek })).unwrap();
            assert_eq!(outcome.p.value, fact(&outcome, "p_smooth"), "{method}");
            let refused = judge(method, &readings, json!({ "seek": seek, "toward": "alternating" })).unwrap_err();
            assert!(refused.to_string().contains("contradict"), "{method}");
        }
        let outcome = judge(method, &readings, json!({ "toward": "alternating" })).unwrap();
        assert_eq!(outcome.p.value, fact(&outcome, "p_alternating"), "{method}");
    }
}

/// The exact tests claim a pattern in random series of either kind at most as often as the risk allows; the approximations
/// about as often. 200 series each; the standard error of a share of 5 % is 1.5 %.
#[test]
fn size_in_random_series() {
    let mut dice = Dice(4_711);
    let mut claims: HashMap<(&str, usize, u64), u32> = HashMap::new();
    let rounds = 200;
    for (length, values) in [(8, 1_000_000), (8, 3), (10, 1_000_000), (10, 4), (40, 1_000_000), (40, 3)] {
        for _ in 0..rounds {
            let readings = dice.series(length, values);
            for (method, ..) in BY_ORDER {
                if judge(method, &readings, json!({})).is_ok_and(|outcome| outcome.p.value <= 0.05) {
                    *claims.entry((method, length, values)).or_default() += 1;
                }
            }
        }
    }
    for (case, count) in claims {
        let share = f64::from(count) / f64::from(rounds);
        assert!(share <= 0.05 + 4.0 * 0.0154, "{case:?}: {share}");
    }
}
