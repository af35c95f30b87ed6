//! Turning points and runs up and down against a published example, tables and enumeration.

use risefall::null_distribution::turns;
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, oracle, published};

fn body(case: &Value, extra: Value) -> Value {
    let mut body = json!({ "readings": data(case) });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    body
}

/// M. G. Kendall, *Time-Series* (1973), chapter 2, yields of barley: 35 turning points, 34.67 expected, variance 9.278.
/// The figures hold for equal neighbours taken as one and readings without ties.
#[test]
fn yields_of_barley() {
    let case = published("turning_points", "kendall_barley");
    let (_, outcome) = ask("turning-points", body(&case, json!({ "ties": "ignored" })));
    let outcome = outcome.unwrap();
    assert_eq!(outcome.statistic.value, case["published"]["turning_points"].as_f64().unwrap());
    assert!((fact(&outcome, "expected") - 34.67).abs() < 0.005 && (fact(&outcome, "variance") - 9.278).abs() < 0.0005);
    close(fact(&outcome, "p_smooth"), &case["recomputed"]["p_exact_few"], 1e-11, "few");
    close(fact(&outcome, "p_alternating"), &case["recomputed"]["p_exact_many"], 1e-11, "many");
    let (_, strict) = ask("turning-points", body(&case, json!({ "equal": "strict" })));
    assert_eq!(strict.unwrap().statistic.value, case["recomputed"]["turning_points_strict_raw"].as_f64().unwrap());
}

/// Reference values by recursion; `made_by` in the file says with what they were cross-checked. They refer tied readings to
/// the distribution of untied ones, as `ties=ignored` does.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("runs_up_down_and_turning_points") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        if id == "runs_updown/n2_up" {
            for method in ["runs-up-down", "turning-points"] {
                let refusal = ask(method, body(&case, json!({}))).1.unwrap_err();
                assert_eq!(refusal.code(), "too-few-readings", "{id}: two readings have but one order up to direction");
            }
            continue;
        }
        let outcome = |method: &str, extra: Value| ask(method, body(&case, extra)).1.unwrap();
        let runs = outcome("runs-up-down", json!({ "ties": "ignored" }));
        let turns = outcome("turning-points", json!({ "ties": "ignored" }));
        assert_eq!(fact(&runs, "counted"), expected["n_after_collapsing_equal_neighbours"].as_f64().unwrap(), "{id}");
        assert_eq!(runs.statistic.value, expected["runs_up_down"].as_f64().unwrap(), "{id}");
        assert_eq!(turns.statistic.value, expected["turning_points"].as_f64().unwrap(), "{id}");
        close(fact(&runs, "expected"), &expected["mean_runs"], 1e-12, id);
        close(fact(&turns, "expected"), &expected["mean_turning_points"], 1e-12, id);
        for outcome in [&runs, &turns] {
            close(fact(outcome, "variance"), &expected["var"], 1e-12, id);
            assert!((fact(outcome, "z") - expected["z"].as_f64().unwrap()).abs() < 1e-12, "{id}");
            close(fact(outcome, "p_smooth"), &expected["p_exact_few"], 1e-11, id);
            close(fact(outcome, "p_alternating"), &expected["p_exact_many"], 1e-11, id);
        }
        let normal = outcome("runs-up-down", json!({ "ties": "ignored", "p_by": "normal" }));
        close(normal.p.value, &expected["p_two_cc"], 1e-9, id);
        let strict = outcome("turning-points", json!({ "equal": "strict" }));
        assert_eq!(strict.statistic.value, expected["turning_points_strict_raw"].as_f64().unwrap(), "{id}");
        checked += 1;
    }
    assert!(checked >= 7, "only {checked} reference values were found");
}

/// The numbers of permutations with r runs up and down, by André's recursion in whole numbers.
#[test]
fn counts_of_permutations() {
    let table = file("tables.json")["runs_up_down"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let n: usize = n.parse().unwrap();
        let null = turns::untied(n);
        let all: f64 = (1..=n).map(|k| k as f64).product();
        for (runs, count) in row.as_object().unwrap() {
            let expected = count.as_f64().unwrap() / all;
            let got = null.mass(runs.parse::<i64>().unwrap() - 1);
            assert!((got - expected).abs() <= 1e-13 * expected, "n {n}, {runs} runs: {got:e} {expected:e}");
            checked += 1;
        }
    }
    assert!(checked > 250, "only {checked} entries of the table were checked");
}

/// Readings of two values alternate at every step once equal neighbours are taken as one, so that nothing can be learnt: p is 1
/// when ties are allowed for, where the distribution of untied readings would claim a pattern.
#[test]
fn two_values_always_alternate() {
    let readings = [0, 0, 1, 0, 0, 1, 0, 0, 0, 1, 1, 0, 1, 1, 0, 1, 1, 1, 0, 1];
    let p = |ties: &str| {
        let (_, outcome) = ask("turning-points", json!({ "readings": readings, "ties": ties, "toward": "alternating" }));
        outcome.unwrap().p.value
    };
    assert!(p("ignored") < 0.02);
    let (_, outcome) = ask("runs-about-median", json!({ "readings": readings, "toward": "alternating" }));
    assert!((p("corrected") - outcome.unwrap().p.value).abs() < 1e-12, "for two values the two tests count the same runs");
}
