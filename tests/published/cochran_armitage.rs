//! The Cochran-Armitage test against published examples and reference values.

use risefall::method::{Outcome, Refusal};
use serde_json::{Value, json};

use crate::reference::{ask, close, fact, oracle, published};

fn judge(case: &Value, extra: Value) -> Result<Outcome, Refusal> {
    let mut body = json!({
        "readings": case["data"]["events"],
        "trials": case["data"]["trials"],
        "scores": case["parameters"]["scores"],
    });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    ask("cochran-armitage", body).1
}

/// What the reference file gives for a case: score test with N and N - 1, departure, exact p.
fn check(case: &Value, expected: &Value) {
    let id = case["id"].as_str().unwrap();
    let normal = judge(case, json!({ "p_by": "normal" })).unwrap();
    close(fact(&normal, "z"), &expected["z"], 1e-9, id);
    close(fact(&normal, "chi2_trend"), &expected["chi2"], 1e-9, id);
    close(normal.p.value, &expected["p_two"], 1e-9, id);
    close(fact(&normal, "p_rising"), &expected["p_increasing"], 1e-9, id);
    close(fact(&normal, "chi2_total"), &expected["chi2_total"], 1e-9, id);
    let departure = fact(&normal, "chi2_departure") - expected["chi2_departure"].as_f64().unwrap();
    assert!(departure.abs() < 1e-12, "{id}: departure differs by {departure:e}");
    assert_eq!(fact(&normal, "df_departure"), expected["df_departure"].as_f64().unwrap());
    if !expected["p_departure"].is_null() {
        close(fact(&normal, "p_departure"), &expected["p_departure"], 1e-9, id);
    }
    let less_one = judge(case, json!({ "p_by": "normal", "divisor": "n-1" })).unwrap();
    close(fact(&less_one, "chi2_trend"), &expected["chi2_N_minus_1"], 1e-9, id);
    close(less_one.p.value, &expected["p_two_N_minus_1"], 1e-9, id);
    if !expected["p_exact_increasing"].is_null() {
        let exact = judge(case, json!({ "p_by": "exact" })).unwrap();
        close(fact(&exact, "p_rising"), &expected["p_exact_increasing"], 1e-11, id);
        close(fact(&exact, "p_falling"), &expected["p_exact_decreasing"], 1e-11, id);
        let distance = judge(case, json!({ "p_by": "exact", "two_sided": "distance" })).unwrap();
        close(distance.p.value, &expected["p_exact_two_by_distance_from_mean"], 1e-11, id);
    }
}

/// P. Armitage (1955): carriers of *Streptococcus pyogenes* by size of tonsils.
#[test]
fn tonsils() {
    let case = published("cochran_armitage", "armitage1955_tonsils");
    check(&case, &case["recomputed"]);
    let normal = judge(&case, json!({ "p_by": "normal" })).unwrap();
    assert_eq!(format!("{:.2}", fact(&normal, "chi2_trend")), "7.19");
    assert_eq!(format!("{:.2}", fact(&normal, "chi2_total")), "7.88");
}

/// D. G. Altman (1991), section 10.8: caesarean section by shoe size; the trend is downward.
#[test]
fn caesarean_sections() {
    let case = published("cochran_armitage", "altman_caesarean");
    check(&case, &case["recomputed"]);
    let normal = judge(&case, json!({ "p_by": "normal" })).unwrap();
    assert_eq!(format!("{:.2}", fact(&normal, "chi2_trend")), "8.02");
    assert_eq!(format!("{:.4}", normal.p.value), "0.0046");
}

/// Reference values: enumeration and dynamic programming with 50 digits; chi-square agrees with R's `prop.trend.test`.
#[test]
fn reference_values() {
    let cases = oracle("cochran_armitage");
    for case in &cases {
        check(case, &case["expected"]);
    }
    assert!(cases.len() >= 6);
}

/// With two moments the test is Fisher's exact test, and the odds ratio's exact interval the one that inverts it.
/// Reference values: SciPy 1.17.1, `fisher_exact` and `contingency.odds_ratio(kind="conditional")`, table [[4, 3], [1, 5]].
#[test]
fn two_moments_are_fishers_test() {
    let case = json!({ "data": { "events": [1, 4], "trials": [6, 7] }, "parameters": { "scores": [0, 1] } });
    let outcome = judge(&case, json!({ "seek": "rising" })).unwrap();
    close(outcome.p.value, &json!(FISHER.0), 1e-11, "p");
    close(fact(&outcome, "odds_ratio"), &json!(FISHER.1), 1e-6, "odds ratio");
    close(fact(&outcome, "odds_ratio_low"), &json!(FISHER.2), 1e-6, "lower limit");
    close(fact(&outcome, "odds_ratio_high"), &json!(FISHER.3), 1e-6, "upper limit");
}

const FISHER: (f64, f64, f64, f64) = (0.1794871794871795, 5.699640167949364, 0.33697750701976165, 392.48921130481426);

/// What cannot be judged is said before any work is done.
#[test]
fn refusals() {
    let refuse = |events: Value, trials: Value, extra: Value| {
        let case = json!({ "data": { "events": events, "trials": trials }, "parameters": { "scores": "" } });
        let mut body = json!({ "readings": case["data"]["events"], "trials": case["data"]["trials"] });
        body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
        ask("cochran-armitage", body).1.unwrap_err().to_string()
    };
    assert!(refuse(json!([3, 5]), json!([10, 4]), json!({})).contains("reading 2: there are 5 events among 4 trials"));
    assert!(refuse(json!([3, 1.5]), json!([10, 4]), json!({})).contains("reading 2 is 1.5"));
    assert!(refuse(json!([3, 2]), json!([10]), json!({})).contains("there are 2 readings but 1 trials"));
    assert!(refuse(json!([0, 0]), json!([10, 4]), json!({})).contains("no trial had an event"));
    let large = refuse(json!([50000, 50100]), json!([100000, 100000]), json!({ "p_by": "exact" }));
    assert!(large.contains("at most 500000000"), "{large}");
}
