//! Spearman's test against tables and enumeration.

use risefall::null_distribution::Lattice;
use risefall::null_distribution::rank_products::sum_of_products;
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, oracle};

fn body(case: &Value, extra: Value) -> Value {
    let mut body = json!({ "readings": data(case) });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    body
}

/// Reference values by enumeration and high-precision arithmetic; `made_by` in the file says with what they were cross-checked.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("spearman") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        let outcome = |p_by: &str| ask("spearman", body(&case, json!({ "p_by": p_by }))).1.unwrap();
        let best = outcome("best");
        for (key, name) in [("rho", "rho"), ("squared_differences", "D"), ("t", "t"), ("z", "z")] {
            close(fact(&best, key), &expected[name], 1e-12, &format!("{id} {key}"));
        }
        if expected["p_exact_two"].is_null() {
            assert_eq!(best.p.by.to_string(), "Student's t", "{id}");
            assert_eq!(ask("spearman", body(&case, json!({ "p_by": "exact" }))).1.unwrap_err().code(), "beyond-exact");
        } else {
            close(fact(&best, "p_rising"), &expected["p_exact_increasing"], 1e-11, id);
            close(fact(&best, "p_falling"), &expected["p_exact_decreasing"], 1e-11, id);
            close(best.p.value, &expected["p_exact_two"], 1e-11, id);
        }
        let (t, z) = (outcome("t"), outcome("normal"));
        close(t.p.value, &expected["p_two_t"], 1e-9, id);
        close(z.p.value, &expected["p_two_z"], 1e-9, id);
        close(fact(&t, "p_rising"), &expected["p_increasing_t"], 1e-9, id);
        checked += 1;
    }
    assert!(checked >= 7, "only {checked} reference values were found");
}

fn untied(n: u32) -> Lattice {
    sum_of_products(&[(1..=n).map(|rank| 2 * rank).collect()])
}

/// The sum of place times doubled rank that belongs to a sum D of squared differences.
fn product_sum(n: i64, d: i64) -> i64 {
    n * (n + 1) * (2 * n + 1) / 3 - d
}

/// P(D <= d) for 3 to 9 readings, by enumeration of all permutations.
#[test]
fn table_of_tails() {
    let table = file("tables.json")["spearman_upper_tail"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let n: u32 = n.parse().unwrap();
        let null = untied(n);
        for (d, entry) in row.as_object().unwrap() {
            let value = product_sum(n.into(), d.parse().unwrap());
            close(null.tails(value).upper, &entry["p"], 1e-12, &format!("n {n}, D {d}"));
            checked += 1;
        }
    }
    assert!(checked > 100, "only {checked} entries of the table were checked");
}

/// Critical values of rho for 3 to 14 readings (J. H. Zar, *Biostatistical Analysis*, appendix B), verified by enumeration.
#[test]
fn critical_values() {
    let table = file("tables.json")["spearman_critical"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let n: u32 = n.parse().unwrap();
        let null = untied(n);
        for (risk, entry) in row.as_object().unwrap() {
            let risk: f64 = risk.parse().unwrap();
            let d = entry["D"].as_i64().unwrap();
            let upper = |d: i64| null.tails(product_sum(n.into(), d)).upper;
            close(upper(d), &entry["p"], 1e-11, &format!("n {n}, risk {risk}"));
            assert!(upper(d) <= risk * (1.0 + 1e-14) && upper(d + 2) > risk, "n {n}, risk {risk}: D {d} is the largest");
            checked += 1;
        }
    }
    assert!(checked > 45, "only {checked} entries of the table were checked");
}

/// A seeded permutation test agrees with the exact p within its stated error.
#[test]
fn permutation_agrees_with_exact() {
    let readings = [3.1, 2.9, 3.4, 3.3, 3.0, 3.6, 3.6, 3.2, 3.7, 3.5, 3.4];
    let p = |p_by: &str| {
        let (_, outcome) = ask("spearman", json!({ "readings": readings, "p_by": p_by, "seek": "rising", "draws": 100_000 }));
        outcome.unwrap()
    };
    let (exact, drawn) = (p("exact"), p("permutation"));
    assert_eq!(drawn.p.by.to_string(), "seeded permutation");
    assert!((exact.p.value - drawn.p.value).abs() < 4.0 * fact(&drawn, "p_error"));
    assert_eq!(drawn.p, p("permutation").p, "the same seed gives the same p");
}
