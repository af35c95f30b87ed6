//! Theil and Sen's slope against Sen's example, exact rational arithmetic, SciPy and the slopes computed one by one.

use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, oracle, published};

fn limits(readings: &Value, extra: Value) -> (f64, f64) {
    let mut body = json!({ "readings": readings });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    let outcome = ask("theil-sen", body).1.unwrap();
    (fact(&outcome, "slope_low"), fact(&outcome, "slope_high"))
}

/// Exact rationals and 50-digit arithmetic; slope and intercepts agree with SciPy's `theilslopes`.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("theil_sen") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        let readings = data(&case);
        if expected["slope"].is_null() {
            assert!(ask("theil-sen", json!({ "readings": readings })).1.is_err(), "{id}");
            continue;
        }
        let outcome = ask("theil-sen", json!({ "readings": readings })).1.unwrap();
        close(fact(&outcome, "slope"), &expected["slope"], 1e-12, id);
        close(fact(&outcome, "slopes"), &expected["n_slopes"], 0.0, id);
        close(fact(&outcome, "intercept"), &expected["intercept_median_residual"], 1e-12, id);
        close(fact(&outcome, "intercept_medians"), &expected["intercept_medians"], 1e-12, id);
        for (confidence, key) in [(0.95, "ci_0.95"), (0.9, "ci_0.90")] {
            for (by, name) in [("normal", "at_integer_ranks"), ("interpolated", "interpolated")] {
                let limit = &expected[key][name];
                if limit[0].is_null() || limit[1].is_null() {
                    continue;
                }
                let (low, high) = limits(&readings, json!({ "limits_by": by, "confidence": confidence }));
                close(low, &limit[0], 1e-11, &format!("{id} {key} {name} low"));
                close(high, &limit[1], 1e-11, &format!("{id} {key} {name} high"));
                checked += 1;
            }
        }
    }
    assert!(checked >= 25, "only {checked} limits were checked");
}

/// P. K. Sen (1968), numerical example: seven readings at moments 1, 2, 3, 4, 10, 12, 18; slope 4, limits 3.71 and 4.38 at 93 %.
///
/// The normal places reproduce the printed limits, the 4th and 18th of 21 slopes. The exact ones are the 5th and 17th: P(S >= 13)
/// is 0.0345 for seven readings (Kendall's table), so that 93.1 % confidence is reached one slope further in.
#[test]
fn sens_example() {
    let case = published("theil_sen", "sen1968");
    let body = |extra: Value| {
        let mut body = json!({ "readings": case["data"]["y"], "moments": case["data"]["time"] });
        body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
        ask("theil-sen", body).1.unwrap()
    };
    let exact = body(json!({ "confidence": 0.93 }));
    assert_eq!(fact(&exact, "slope"), 4.0);
    let at = |key: &str| -> Vec<f64> { case["data"][key].as_array().unwrap().iter().map(|x| x.as_f64().unwrap()).collect() };
    let (times, values) = (at("time"), at("y"));
    let pairs = (0..7).flat_map(|i| (i + 1..7).map(move |j| (i, j)));
    let mut slopes: Vec<f64> = pairs.map(|(i, j)| (values[j] - values[i]) / (times[j] - times[i])).collect();
    slopes.sort_by(f64::total_cmp);
    assert_eq!((fact(&exact, "slope_low"), fact(&exact, "slope_high")), (slopes[4], slopes[16]));
    assert_eq!((fact(&exact, "intercept"), fact(&exact, "intercept_medians")), (6.0, 4.0));
    let normal = body(json!({ "confidence": 0.93, "limits_by": "normal" }));
    assert_eq!((fact(&normal, "slope_low"), fact(&normal, "slope_high")), (26.0 / 7.0, 35.0 / 8.0));
    assert_eq!(format!("{:.2} {:.2}", 26.0 / 7.0, 35.0 / 8.0), "3.71 4.38");
}

/// Every slope outside the exact limits is given up by the exact two-sided test of the readings less that slope, every slope
/// inside is not. The readings all differ, as the limits assume.
#[test]
fn the_exact_limits_are_those_of_the_test() {
    let readings: Vec<f64> =
        (0..12).map(|i: i32| f64::from(i * i * 7 % 31) + 0.37 * f64::from(i) + 0.001 * f64::from(i * i)).collect();
    let (low, high) = limits(&json!(readings), json!({ "confidence": 0.9, "limits_by": "exact" }));
    let p = |slope: f64| {
        let left: Vec<f64> = readings.iter().enumerate().map(|(i, reading)| reading - slope * i as f64).collect();
        ask("mann-kendall", json!({ "readings": left })).1.unwrap().p.value
    };
    assert!(p(low - 1e-6) <= 0.1 && p(low + 1e-6) > 0.1);
    assert!(p(high + 1e-6) <= 0.1 && p(high - 1e-6) > 0.1);
}

/// Siegel's repeated medians, by SciPy 1.17: `siegelslopes([3, 9, 4, 12, 5, 6, 40, 8], range(1, 9))`.
#[test]
fn repeated_medians() {
    let outcome = ask("theil-sen", json!({ "readings": [3, 9, 4, 12, 5, 6, 40, 8], "slope_by": "repeated" })).1.unwrap();
    close(fact(&outcome, "slope"), &json!(SIEGEL), 1e-12, "slope");
    let dated = json!({ "readings": [1, 2, 3, 4], "moments": ["2021-01-01", "2022-01-01", "2023-01-01", "2024-01-01"] });
    let slope = fact(&ask("theil-sen", dated).1.unwrap(), "slope");
    close(slope, &json!(365.2425 / 365.0), 1e-12, "a year of 365.2425 days");
}

/// With the variance corrected for dependence, p is that of the Mann-Kendall test so treated, and the limits stand at the normal
/// places of that variance: wider, since neighbouring flows of the Nile resemble each other.
#[test]
fn limits_allow_for_dependence() {
    let nile = crate::reference::file("datasets.json")["Nile"]["values"].clone();
    let ask_for = |method: &str| ask(method, json!({ "readings": nile, "dependence": "variance" })).1.unwrap();
    let (slope, kendall) = (ask_for("theil-sen"), ask_for("mann-kendall"));
    assert_eq!(slope.p, kendall.p);
    let (low, high) = limits(&nile, json!({ "limits_by": "normal" }));
    assert!(fact(&slope, "slope_low") < low && fact(&slope, "slope_high") > high);
    let reach = 1.959_963_984_540_054 * fact(&kendall, "variance_corrected").sqrt();
    let values: Vec<f64> = nile.as_array().unwrap().iter().map(|x| x.as_f64().unwrap()).collect();
    let pairs = (0..values.len()).flat_map(|i| (i + 1..values.len()).map(move |j| (i, j)));
    let mut slopes: Vec<f64> = pairs.map(|(i, j)| (values[j] - values[i]) / (j - i) as f64).collect();
    slopes.sort_by(f64::total_cmp);
    let place = ((slopes.len() as f64 - reach) / 2.0).floor() as usize;
    assert_eq!(fact(&slope, "slope_low"), slopes[place - 1]);
    assert_eq!(fact(&slope, "slope_high"), slopes[slopes.len() - place]);
}

include!("../reference/siegel.rs");
