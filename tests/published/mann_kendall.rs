//! The Mann-Kendall test against published examples and tables, enumeration and high-precision arithmetic.

use risefall::null_distribution::ordered_table::rises_less_falls;
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, oracle, published};

fn body(readings: Value, extra: Value) -> Value {
    let mut body = json!({ "readings": readings });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    body
}

/// Enumeration, dynamic programming and 50-digit arithmetic; cross-checked with SciPy and R as the file says.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("mann_kendall") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        if expected["n"].as_u64() < Some(2) || expected["varS"] == 0.0 {
            assert!(ask("mann-kendall", body(data(&case), json!({}))).1.is_err(), "{id}");
            continue;
        }
        let outcome = |extra: Value| ask("mann-kendall", body(data(&case), extra)).1.unwrap();
        let best = outcome(json!({}));
        close(fact(&best, "s"), &expected["S"], 0.0, id);
        close(fact(&best, "variance"), &expected["varS"], 1e-13, id);
        close(fact(&best, "tau"), &expected["tau_b"], 1e-13, id);
        let normal = outcome(json!({ "p_by": "normal" }));
        close(fact(&normal, "z"), &expected["z_cc"], 1e-12, id);
        close(normal.p.value, &expected["p_two_cc"], 1e-9, id);
        let plain = outcome(json!({ "p_by": "normal", "continuity": false }));
        if !expected["p_two_nocc"].is_null() {
            close(plain.p.value, &expected["p_two_nocc"], 1e-9, id);
        }
        if !expected["p_exact_two"].is_null() {
            assert_eq!(best.p.by.to_string(), "exact", "{id}");
            close(best.p.value, &expected["p_exact_two"], 1e-11, id);
            close(fact(&best, "p_rising"), &expected["p_exact_increasing"], 1e-11, id);
            close(fact(&best, "p_falling"), &expected["p_exact_decreasing"], 1e-11, id);
            checked += 1;
        }
    }
    assert!(checked >= 12, "only {checked} exact reference values were found");
}

/// US EPA QA/G-9 (2000), section 4.3.4: five readings with S = 6 have p = 0.117.
#[test]
fn a_small_published_example() {
    let case = published("mann_kendall", "epa_g9_mk_small");
    let outcome = ask("mann-kendall", body(data(&case), json!({ "seek": "rising" }))).1.unwrap();
    close(fact(&outcome, "s"), &case["published"]["S"], 0.0, "S");
    assert_eq!(format!("{:.3}", outcome.p.value), "0.117");
}

/// Hollander and Wolfe's tuna: lightness in the order of quality. They print z without continuity correction.
#[test]
fn a_published_example_without_continuity_correction() {
    let case = published("kendall", "hollander_wolfe_tuna");
    let list = |key: &str| -> Vec<f64> { case["data"][key].as_array().unwrap().iter().map(|x| x.as_f64().unwrap()).collect() };
    let mut pairs: Vec<(f64, f64)> = list("x").into_iter().zip(list("y")).collect();
    pairs.sort_by(|a, b| a.0.total_cmp(&b.0));
    let readings: Vec<f64> = pairs.iter().map(|pair| pair.1).collect();
    let plain = ask("mann-kendall", body(json!(readings), json!({ "p_by": "normal", "continuity": false }))).1.unwrap();
    assert_eq!(format!("{:.7}", fact(&plain, "tau")), "0.4444444");
    assert_eq!(format!("{:.4}", fact(&plain, "z")), "1.6681");
    assert_eq!(format!("{:.4}", plain.p.value), "0.0953");
    let exact = ask("mann-kendall", body(json!(readings), json!({}))).1.unwrap();
    close(exact.p.value, &case["recomputed"]["p_exact_two"], 1e-12, "exact p");
}

/// P(S >= s) for readings without ties, to the last digit of each entry.
#[test]
fn table_of_tails() {
    let table = file("tables.json")["kendall_S_upper_tail"]["table"].clone();
    let mut checked = 0;
    for (n, row) in table.as_object().unwrap() {
        let n: usize = n.parse().unwrap();
        let null = rises_less_falls(&vec![1; n], &vec![1; n]);
        for (s, entry) in row.as_object().unwrap() {
            let p = if entry.is_object() { &entry["p"] } else { entry };
            close(null.tails(s.parse().unwrap()).upper, p, 1e-12, &format!("n {n}, S {s}"));
            checked += 1;
        }
    }
    assert!(checked > 100, "only {checked} entries of the table were checked");
}

/// Hamed and Rao's corrected variance: ranks of the readings less the median slope, all lags or the first ones, all or only
/// those that exceed chance.
#[test]
fn variance_corrected_for_dependence() {
    let mut checked = 0;
    for case in file("kendall_autocorrelation_adjusted.json")["oracle"].as_array().unwrap() {
        let id = case["id"].as_str().unwrap();
        for (variant, expected) in case["expected"].as_object().unwrap() {
            let Some(rest) = variant.strip_prefix("ranks_of_detrended/lags_") else { continue };
            let (lags, significance) = rest.split_once("/significant_").unwrap();
            let lags = lags.parse().unwrap_or(0);
            let extra = json!({ "dependence": "variance", "lags": lags, "all_lags": significance == "None" });
            let outcome = ask("mann-kendall", body(data(case), extra)).1.unwrap();
            let what = format!("{id} {variant}");
            close(fact(&outcome, "correction"), &expected["correction"], 1e-10, &what);
            close(fact(&outcome, "variance_corrected"), &expected["var_corrected"], 1e-10, &what);
            close(outcome.p.value, &expected["p_two_cc"], 1e-9, &what);
            checked += 1;
        }
    }
    assert!(checked >= 12, "only {checked} corrected variances were checked");
}
