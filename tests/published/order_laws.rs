//! Choices of the tests that compare by order, against counting every arrangement; `tests/law` counts for the usual choices.

use risefall::method::{Outcome, Refusal};
use serde_json::{Value, json};

use crate::reference::{ask, fact};

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
