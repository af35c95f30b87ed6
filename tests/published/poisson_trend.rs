//! The trend test for Poisson counts against reference values.

use risefall::method::{Outcome, Refusal};
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, oracle};

fn judge(case: &Value, extra: Value) -> Result<Outcome, Refusal> {
    let mut body = match case["data"]["counts"] {
        Value::Null => json!({ "readings": data(case) }),
        _ => json!({ "readings": case["data"]["counts"], "exposures": case["data"]["exposure"] }),
    };
    if case["parameters"]["scores"].is_array() {
        body["scores"] = case["parameters"]["scores"].clone();
    }
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    ask("poisson-trend", body).1
}

/// Reference values: exact arithmetic with 50 digits; chi-square is Rao's score test of R's `glm`.
#[test]
fn reference_values() {
    let cases = oracle("poisson_trend");
    for case in &cases {
        let (id, expected) = (case["id"].as_str().unwrap(), &case["expected"]);
        let outcome = judge(case, json!({ "p_by": "normal" })).unwrap();
        assert_eq!(fact(&outcome, "events"), expected["total"].as_f64().unwrap(), "{id}");
        for (key, name) in [
            ("score_excess", "score"),
            ("score_variance", "var"),
            ("z", "z"),
            ("chi2_trend", "chi2"),
            ("p_either", "p_two"),
            ("p_rising", "p_increasing"),
            ("chi2_total", "dispersion_X2"),
            ("df_total", "df_dispersion"),
        ] {
            close(fact(&outcome, key), &expected[name], 1e-9, &format!("{id} {key}"));
        }
        if !expected["p_exact_increasing"].is_null() {
            let exact = judge(case, json!({ "p_by": "exact" })).unwrap();
            close(fact(&exact, "p_rising"), &expected["p_exact_increasing"], 1e-11, id);
            close(fact(&exact, "p_falling"), &expected["p_exact_decreasing"], 1e-11, id);
        }
    }
    assert!(cases.len() >= 4);
}

/// With two moments and equal exposures the counts are a sign test, and the rate ratio's interval is Clopper's and
/// Pearson's interval of the share, as odds. Reference values: SciPy 1.17.1, `binomtest(15, 19)`.
#[test]
fn two_moments_are_a_sign_test() {
    let outcome = ask("poisson-trend", json!({ "readings": [4, 15] })).1.unwrap();
    close(outcome.p.value, &json!(BINOMIAL.0), 1e-11, "p");
    let odds = |share: f64| json!(share / (1.0 - share));
    close(fact(&outcome, "rate_ratio"), &json!(15.0 / 4.0), 1e-9, "rate ratio");
    close(fact(&outcome, "rate_ratio_low"), &odds(BINOMIAL.1), 1e-9, "lower limit");
    close(fact(&outcome, "rate_ratio_high"), &odds(BINOMIAL.2), 1e-9, "upper limit");
}

const BINOMIAL: (f64, f64, f64) = (0.0192108154296875, 0.544346918108494, 0.9394754622907643);

/// Yearly counts of great discoveries scatter too widely for Poisson counts, and that is said.
#[test]
fn scatter_is_said() {
    let case = &oracle("poisson_trend")[3];
    let outcome = judge(case, json!({})).unwrap();
    assert!(outcome.cautions.iter().any(|caution| caution.contains("times as widely")), "{:?}", outcome.cautions);
}

#[test]
fn refusals() {
    let refuse = |body: Value| ask("poisson-trend", body).1.unwrap_err().to_string();
    assert!(refuse(json!({ "readings": [0, 0, 0] })).contains("no event"));
    assert!(refuse(json!({ "readings": [3, 4], "exposures": [1, 0] })).contains("4 events over an exposure of 0"));
    assert!(refuse(json!({ "readings": [3, -4] })).contains("reading 2 is -4"));
    assert!(refuse(json!({ "readings": "3;<5;4" })).contains("reading 2 is the limit <5"));
    assert!(refuse(json!({ "readings": [30000, 40000, 5000], "p_by": "exact" })).contains("at most"));
    let irregular = json!({ "readings": [3, 4, 5], "scores": [1, 2.2360679, 3.7320508], "p_by": "exact" });
    assert!(refuse(irregular).contains("common step"));
}
