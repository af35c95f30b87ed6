//! The difference-sign test against tables and enumeration.

use risefall::null_distribution::rises;
use serde_json::json;

use crate::reference::{ask, close, data, fact, file, oracle};

/// Reference values by recursion; `made_by` in the file says with what they were cross-checked. They leave level steps out, as
/// `ties=ignored` does.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("difference_sign") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        let (_, outcome) = ask("difference-signs", json!({ "readings": data(&case), "ties": "ignored" }));
        let outcome = outcome.unwrap();
        for (key, name) in [("rises", "plus"), ("falls", "minus"), ("ties", "zero")] {
            assert_eq!(fact(&outcome, key), expected[name].as_f64().unwrap(), "{id} {key}");
        }
        for (key, name) in [("expected", "mean"), ("variance", "var")] {
            close(fact(&outcome, key), &expected[name], 1e-12, id);
        }
        assert!((fact(&outcome, "z") - expected["z"].as_f64().unwrap()).abs() < 1e-12, "{id}");
        close(fact(&outcome, "p_rising"), &expected["p_exact_increasing"], 1e-11, id);
        close(fact(&outcome, "p_falling"), &expected["p_exact_decreasing"], 1e-11, id);
        checked += 1;
    }
    assert!(checked >= 11, "only {checked} reference values were found");
}

/// The Eulerian numbers.
#[test]
fn counts_of_permutations() {
    let table = file("tables.json")["eulerian_difference_sign"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let n: usize = n.parse().unwrap();
        let null = rises::rises(&vec![1; n]);
        let all: f64 = (1..=n).map(|k| k as f64).product();
        for (rises, count) in row.as_array().unwrap().iter().enumerate() {
            let expected = count.as_f64().unwrap() / all;
            assert!((null.mass(rises as i64) - expected).abs() <= 1e-13 * expected, "n {n}, {rises} rises");
            checked += 1;
        }
    }
    assert!(checked > 200, "only {checked} entries of the table were checked");
}

/// A hundred readings that rise at every step have one order in 100!; the far tail keeps its digits.
#[test]
fn far_tail() {
    let readings: Vec<u32> = (1..=100).collect();
    let (_, outcome) = ask("difference-signs", json!({ "readings": readings, "seek": "rising" }));
    let p = outcome.unwrap().p.value;
    let expected: f64 = (1..=100).map(|k| 1.0 / f64::from(k)).product();
    assert!((p - expected).abs() <= 1e-12 * expected, "{p:e} {expected:e}");
}
