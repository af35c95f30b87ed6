//! The test of runs about the median against a published example, tables and enumeration.

use risefall::null_distribution::runs_of_two;
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, oracle, published};

/// NIST/SEMATECH e-Handbook, section 1.3.5.13, deflections LEW.DAT: Z = 2.6938 without continuity correction.
#[test]
fn beam_deflections() {
    let case = published("runs_median", "nist_runs_lew");
    let (_, outcome) = ask("runs-about-median", json!({ "readings": data(&case) }));
    let outcome = outcome.unwrap();
    let printed = case["published"]["Z"].as_f64().unwrap();
    assert!((fact(&outcome, "z") - printed).abs() < 0.5e-4);
    let recomputed = &case["recomputed"];
    assert_eq!(outcome.statistic.value, recomputed["runs"].as_f64().unwrap());
    close(outcome.p.value, &recomputed["p_exact_two_doubled"], 1e-11, "p");
    let (_, by_probability) = ask("runs-about-median", json!({ "readings": data(&case), "two_sided": "probability" }));
    close(by_probability.unwrap().p.value, &recomputed["p_exact_two_by_probability"], 1e-11, "p by probability");
}

/// Reference values by enumeration; `made_by` in the file says with what they were cross-checked.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("runs_median") {
        for (word, rule) in [("drop", "drop"), ("above", "ge"), ("below", "gt")] {
            let what = format!("{} {rule}", case["id"]);
            let expected = &case["expected"][rule];
            let body = |extra: Value| {
                let mut body = json!({ "readings": data(&case), "on_median": word });
                body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
                body
            };
            let (_, outcome) = ask("runs-about-median", body(json!({})));
            let outcome = outcome.unwrap();
            for (key, name) in [("above", "n_above"), ("below", "n_below"), ("runs", "runs")] {
                assert_eq!(fact(&outcome, key), expected[name].as_f64().unwrap(), "{what} {key}");
            }
            for (key, name) in
                [("p_smooth", "p_exact_few"), ("p_alternating", "p_exact_many"), ("p_either", "p_exact_two_doubled")]
            {
                close(fact(&outcome, key), &expected[name], 1e-11, &format!("{what} {key}"));
            }
            close(fact(&outcome, "expected"), &expected["mean"], 1e-12, &what);
            let (_, by_probability) = ask("runs-about-median", body(json!({ "two_sided": "probability" })));
            close(by_probability.unwrap().p.value, &expected["p_exact_two_by_probability"], 1e-11, &what);
            if !expected["z"].is_null() {
                close(fact(&outcome, "variance"), &expected["var"], 1e-12, &what);
                close(fact(&outcome, "z"), &expected["z"], 1e-12, &what);
                let (_, normal) = ask("runs-about-median", body(json!({ "p_by": "normal" })));
                close(normal.unwrap().p.value, &expected["p_two_cc"], 1e-9, &what);
            }
            checked += 1;
        }
    }
    assert!(checked >= 30, "only {checked} reference values were found");
}

/// Swed and Eisenhart's table of critical numbers of runs (one-sided 2.5 %), verified by enumeration. For 3 and 14 members the
/// chance of at most three runs is 17/680, which is 2.5 % exactly, up to the last digit of a sum.
#[test]
fn critical_numbers_of_runs() {
    let table = file("tables.json")["runs_two_sample_critical_0.05"]["table"].clone();
    let risk = 0.025 * (1.0 + 1e-14);
    let mut checked = 0;
    for (sizes, row) in table.as_object().unwrap() {
        let (first, second) = sizes.split_once(',').unwrap();
        let null = runs_of_two::runs(first.parse().unwrap(), second.parse().unwrap());
        let values: Vec<i64> = null.points().map(|(value, _)| value).collect();
        let few = values.iter().rev().find(|&&value| null.tails(value).lower <= risk).copied();
        let many = values.iter().find(|&&value| null.tails(value).upper <= risk).copied();
        assert_eq!((few, many), (row[0].as_i64(), row[1].as_i64()), "{sizes}");
        checked += 1;
    }
    assert!(checked >= 190, "only {checked} entries of the table were checked");
}

/// Limits below the median are on its low side; a median that depends on them cannot be used.
#[test]
fn limits_are_placed_where_that_is_certain() {
    let (_, outcome) = ask("runs-about-median", json!({ "readings": "<0.5, <0.5, 0.9, 0.8, 0.7, <0.5, 0.6" }));
    let outcome = outcome.unwrap();
    assert_eq!((fact(&outcome, "above"), fact(&outcome, "below"), fact(&outcome, "runs")), (3.0, 3.0, 3.0));
    let (_, refused) = ask("runs-about-median", json!({ "readings": "<0.5, <0.5, <0.5, 0.7, 0.6" }));
    assert!(refused.unwrap_err().to_string().starts_with("the median depends on readings known only as limits"));
}
