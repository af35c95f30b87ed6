//! The tests for a trend in event times against published examples, tables and reference values.

use risefall::method::{Direction, Outcome, Refusal};
use risefall::null_distribution::q_multinomial::rises_less_falls;
use serde_json::{Value, json};

use crate::reference::{ask, close, fact, file, oracle, published};

fn judge(method: &str, case: &Value, extra: Value) -> Result<Outcome, Refusal> {
    let mut body = json!({ "readings": case["data"]["times"] });
    let end = [&case["parameters"]["end"], &case["data"]["end"]].into_iter().find(|end| end.is_number());
    if let Some(end) = end {
        body["end"] = end.clone();
    }
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    ask(method, body).1
}

/// What the reference file gives for a case.
fn check(case: &Value, expected: &Value) {
    let id = case["id"].as_str().unwrap();
    let laplace = judge("laplace", case, json!({ "p_by": "normal" })).unwrap();
    close(laplace.statistic.value, &expected["laplace_U"], 1e-11, id);
    close(laplace.p.value, &expected["laplace_p_two"], 1e-9, id);
    close(fact(&laplace, "p_rising"), &expected["laplace_p_increasing_rate"], 1e-9, id);
    assert_eq!(fact(&laplace, "events_used"), expected["m"].as_f64().unwrap(), "{id}");

    let handbook = judge("military-handbook", case, json!({})).unwrap();
    close(handbook.statistic.value, &expected["mil_chi2"], 1e-11, id);
    close(handbook.p.value, &expected["mil_p_two"], 1e-11, id);
    close(fact(&handbook, "p_falling"), &expected["mil_p_upper_tail_improvement"], 1e-11, id);
    close(fact(&handbook, "p_rising"), &expected["mil_p_lower_tail_deterioration"], 1e-11, id);
    close(fact(&handbook, "df"), &expected["mil_df"], 0.0, id);
    close(fact(&handbook, "shape"), &expected["mil_beta_hat_mle"], 1e-11, id);

    match judge("reverse-arrangements", case, json!({})) {
        Err(refusal) => {
            assert_eq!(expected["ties_in_gaps"], json!([case["data"]["times"].as_array().unwrap().len()]), "{id}: {refusal}");
            assert!(matches!(refusal, Refusal::AllTied { .. }));
        }
        Ok(gaps) => {
            close(gaps.statistic.value, &expected["reverse_arrangements"], 0.0, id);
            let comparisons = fact(&gaps, "reversals") + fact(&gaps, "shorter") + fact(&gaps, "tied");
            assert_eq!(comparisons, expected["max_reversals"].as_f64().unwrap());
            if !expected["rat_p_exact_improvement"].is_null() {
                close(fact(&gaps, "p_falling"), &expected["rat_p_exact_improvement"], 1e-11, id);
                close(fact(&gaps, "p_rising"), &expected["rat_p_exact_deterioration"], 1e-11, id);
                close(fact(&gaps, "expected"), &expected["rat_mean"], 1e-12, id);
                close(fact(&gaps, "variance"), &expected["rat_var"], 1e-12, id);
                close(fact(&gaps, "z"), &expected["rat_z_nocc"], 1e-9, id);
            }
        }
    }
}

/// NIST/SEMATECH e-Handbook, section 8.2.3.4: ten repairs in a test that ended at 1,500 hours.
#[test]
fn nist_repairs() {
    let case = published("event_trend", "nist_8234");
    check(&case, &case["recomputed"]);
    let printed = &case["published"];
    let handbook = judge("military-handbook", &case, json!({})).unwrap();
    assert_eq!(format!("{:.2}", handbook.statistic.value), printed["mil_chi2"].to_string());
    assert_eq!(format!("{:.3}", fact(&handbook, "p_rising")), printed["mil_percentile"].to_string());
    let gaps = judge("reverse-arrangements", &case, json!({})).unwrap();
    assert_eq!(gaps.statistic.value, printed["reversals"].as_f64().unwrap());
    close(fact(&gaps, "p_falling"), &case["recomputed"]["gaps_exact_tied"], 1e-11, "tied gaps");
    let against = judge("reverse-arrangements", &case, json!({ "ties": "against", "seek": "falling" })).unwrap();
    close(against.p.value, &case["recomputed"]["P_reversals_ge_33_no_ties"], 1e-11, "the handbook's table has no ties");
    assert_eq!(against.direction, Direction::Falling, "the repaired item improves: events come less often");
    let null = rises_less_falls(&[1; 10]);
    close(null.tails(2 * 32 - 45).upper, &case["recomputed"]["P_reversals_ge_32_no_ties"], 1e-11, "32 reversals");
}

/// H. Ascher and H. Feingold (1984): a deteriorating and an improving system; U is printed as 2.0 and -2.0.
#[test]
fn sad_and_happy_systems() {
    for (id, direction) in [("ascher_feingold_sad", Direction::Rising), ("ascher_feingold_happy", Direction::Falling)] {
        let case = published("event_trend", id);
        check(&case, &case["recomputed"]);
        let from_gaps = ask("laplace", json!({ "readings": case["data"]["gaps"], "readings_are": "gaps" })).1.unwrap();
        assert_eq!((from_gaps.statistic.value * 10.0).round() / 10.0, case["published"]["U"].as_f64().unwrap());
        assert_eq!(from_gaps.direction, direction);
    }
}

/// Reference values with 50 digits.
#[test]
fn reference_values() {
    let cases = oracle("event_trend");
    for case in &cases {
        check(case, &case["expected"]);
    }
    assert!(cases.len() >= 3);
}

/// Table of critical reversals, verified by enumeration; the e-Handbook prints 33 for 10 gaps at 5 %.
#[test]
fn table_of_critical_reversals() {
    let table = file("tables.json")["reverse_arrangement_critical"]["table"].clone();
    for (n, row) in table.as_object().unwrap() {
        let n: usize = n.parse().unwrap();
        let (null, pairs) = (rises_less_falls(&vec![1; n]), (n * (n - 1) / 2) as i64);
        for (risk, critical) in row.as_object().unwrap() {
            let risk: f64 = risk.parse().unwrap();
            let least = (0..=pairs).find(|reversals| null.tails(2 * reversals - pairs).upper <= risk);
            assert_eq!(least, critical["improvement_at_least"].as_i64(), "{n} gaps, {risk}");
        }
    }
}

/// The exact Laplace p: with a sum x of uniforms below 1 from the top, P = x^n / n!. Here six events, x = 0.88.
#[test]
fn laplace_is_exact() {
    let case = json!({ "data": { "times": [60, 75, 88, 93, 97, 99] }, "parameters": { "end": 100 } });
    let outcome = judge("laplace", &case, json!({ "seek": "rising" })).unwrap();
    close(outcome.p.value, &json!(0.88f64.powi(6) / 720.0), 1e-11, "p");
    assert_eq!(outcome.p.by.to_string(), "exact");
}

/// Growth and its limits for the same events: mpmath 1.3.0 with 30 digits, by numerical integration and root finding.
#[test]
fn growth_of_the_rate() {
    let case = json!({ "data": { "times": [60, 75, 88, 93, 97, 99] }, "parameters": { "end": 100 } });
    let outcome = judge("laplace", &case, json!({})).unwrap();
    close(fact(&outcome, "growth"), &json!(0.06764913692017184), 1e-10, "growth");
    close(fact(&outcome, "growth_low"), &json!(0.017459313897700977), 1e-9, "lower limit");
    close(fact(&outcome, "growth_high"), &json!(0.12271447146241751), 1e-9, "upper limit");
    close(fact(&outcome, "rate_ratio"), &json!(866.8913849142181), 1e-8, "ratio");
}

/// Limits of the shape for the same events: chi-square quantiles by SciPy 1.17.1 over the statistic.
#[test]
fn shape_of_the_rate() {
    let case = json!({ "data": { "times": [60, 75, 88, 93, 97, 99] }, "parameters": { "end": 100 } });
    let outcome = judge("military-handbook", &case, json!({})).unwrap();
    close(fact(&outcome, "shape_low"), &json!(2.1183847639332227), 1e-9, "lower limit");
    close(fact(&outcome, "shape_high"), &json!(11.225796542301168), 1e-9, "upper limit");
}

/// Hollander and Wolfe (1999), section 8.3, worked out pair by pair: each gap's sum of signs, their scatter, the interval.
#[test]
fn interval_of_tau() {
    let gaps: [f64; 9] = [12.0, 5.0, 9.0, 30.0, 22.0, 9.0, 41.0, 28.0, 60.0];
    let n = gaps.len();
    let sign =
        |i: usize, j: usize| if gaps[i] == gaps[j] { 0.0 } else { (gaps[j] - gaps[i]).signum() * (j as f64 - i as f64).signum() };
    let sums: Vec<f64> = (0..n).map(|i| (0..n).map(|j| sign(i, j)).sum()).collect();
    let s: f64 = sums.iter().sum::<f64>() / 2.0;
    let (pairs, ties, size) = (36.0_f64, 1.0, n as f64);
    let tau = s / (pairs * (pairs - ties)).sqrt();
    let mean = sums.iter().sum::<f64>() / size;
    let scatter: f64 = sums.iter().map(|sum| (sum - mean) * (sum - mean)).sum();
    let variance = 2.0 / (size * (size - 1.0)) * (2.0 * (size - 2.0) / (size * (size - 1.0).powi(2)) * scatter + 1.0 - tau * tau);
    let outcome = ask("reverse-arrangements", json!({ "readings": gaps, "readings_are": "gaps" })).1.unwrap();
    close(fact(&outcome, "tau"), &json!(tau), 1e-12, "tau");
    close(fact(&outcome, "tau_low"), &json!((tau - 1.959963984540054 * variance.sqrt()).max(-1.0)), 1e-9, "lower limit");
    close(fact(&outcome, "tau_high"), &json!((tau + 1.959963984540054 * variance.sqrt()).min(1.0)), 1e-9, "upper limit");
}

/// An open last gap is the end of observation.
#[test]
fn an_open_gap_ends_the_observation() {
    let open = ask("laplace", json!({ "readings": "5;35;3;>17", "readings_are": "gaps" })).1.unwrap();
    let timed = ask("laplace", json!({ "readings": [5, 40, 43], "end": 60 })).1.unwrap();
    assert_eq!(open.p, timed.p);
    let reversals = ask("reverse-arrangements", json!({ "readings": "5;35;3;>17", "readings_are": "gaps" })).1.unwrap();
    assert_eq!(fact(&reversals, "gaps"), 3.0);
}

#[test]
fn refusals() {
    let refuse = |method: &str, body: Value| ask(method, body).1.unwrap_err();
    assert_eq!(refuse("laplace", json!({ "readings": [7] })), Refusal::TooFewReadings { have: 1, need: 2 });
    assert!(refuse("laplace", json!({ "readings": [7, 3] })).to_string().contains("readings_are=gaps"));
    assert!(
        refuse("military-handbook", json!({ "readings": [0, 3, 7] })).to_string().contains("reading 1 is an event at time 0")
    );
    assert!(refuse("military-handbook", json!({ "readings": [3, 7], "end": 5 })).to_string().contains("after the end"));
    assert!(
        refuse("reverse-arrangements", json!({ "readings": "5;<3;8", "readings_are": "gaps" })).to_string().contains("limit")
    );
    let many: Vec<usize> = (1..=5_002).collect();
    assert!(matches!(refuse("laplace", json!({ "readings": many, "p_by": "exact" })), Refusal::BeyondExact { have: 5_001, .. }));
}
