//! Buishand's test against published critical values and reference statistics.

use risefall::null_distribution::draws::Draws;
use risefall::null_distribution::normal_walk::{Family, LargestContrast};
use serde_json::json;

use crate::reference::{ask, close, data, fact, file, oracle, published};

/// Reference values by exact fractions and high-precision arithmetic.
#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("buishand_range") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        let result = ask("buishand-range", json!({ "readings": data(&case), "draws": 1000 })).1;
        match id {
            "buishand/const6" => assert_eq!(result.unwrap_err().code(), "all-tied"),
            // Two readings always stray equally far, so nothing can be learnt from them.
            "buishand/n2_up" => assert_eq!(result.unwrap_err().code(), "too-few-readings"),
            _ => {
                let outcome = result.unwrap();
                for (key, name) in [
                    ("mean", "mean"),
                    ("deviation", "sd_divisor_n"),
                    ("q", "Q_over_sqrt_n"),
                    ("r", "R_over_sqrt_n"),
                    ("u", "U_buishand1984"),
                ] {
                    close(fact(&outcome, key), &expected[name], 1e-11, &format!("{id} {key}"));
                }
                let split = expected["k_at_Q"].as_array().unwrap();
                assert_eq!(split.len(), 1);
                assert_eq!(fact(&outcome, "readings_before"), split[0].as_f64().unwrap(), "{id}");
                let sample = json!({ "readings": data(&case), "draws": 1000, "deviation": "sample" });
                let sample = ask("buishand-range", sample).1.unwrap();
                close(fact(&sample, "r"), &expected["R_over_sqrt_n_if_sd_divisor_n_minus_1"], 1e-11, id);
                assert_eq!(sample.p, outcome.p, "{id}: the divisor moves the statistic, not p");
            }
        }
        checked += 1;
    }
    assert!(checked >= 10, "only {checked} reference values were found");
}

/// T. A. Buishand (1982), table 1: upper 10, 5 and 1 % points of Q/√n and R/√n, from memory, and by a simulation of 200,000
/// normal series each. The chances of exceeding the simulated points are within the error of both simulations; the printed
/// ones, rounded to two decimals and from 19,999 series, lie within 0.02 of the simulated ones.
#[test]
fn critical_values() {
    let table = file("tables.json")["buishand_critical"].clone();
    let mut checked = 0;
    for (n, row) in table["simulated"].as_object().unwrap() {
        for (name, family) in [("Q", Family::PartialSums), ("R", Family::Differences)] {
            let largest = LargestContrast { family, readings: n.parse().unwrap(), one_sided: false };
            for (place, level) in [0.1, 0.05, 0.01].into_iter().enumerate() {
                let point = row[name][place].as_f64().unwrap();
                let printed = table["printed_from_memory"][name][n][place].as_f64().unwrap();
                assert!((point - printed).abs() < 0.02, "{name} {n} {level}: {point} {printed}");
                let got = largest.simulate(point, 10_000, &mut Draws::seeded(11));
                // A point with standard error 0.002 moves the chance by a hundredth of itself, the 200,000 series by another one.
                let error = got.error.hypot(level * 0.02);
                assert!((got.chance - level).abs() < 4.0 * error, "{name} {n} {level}: {got:?}");
                checked += 1;
            }
        }
    }
    assert_eq!(checked, 36);
}

/// The flow of the Nile: the test finds the same year as Pettitt's, with a p far beyond what counting draws could show.
#[test]
fn nile() {
    let case = published("pettitt", "nile_change");
    let body = |extra: serde_json::Value| {
        let mut body = json!({ "readings": data(&case) });
        body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
        body
    };
    let outcome = ask("buishand-range", body(json!({}))).1.unwrap();
    let expected = &case["recomputed"]["buishand"];
    close(outcome.statistic.value, &expected["Q_over_sqrt_n"], 1e-11, "Q");
    assert_eq!(fact(&outcome, "readings_before"), 28.0);
    let bound = ask("buishand-range", body(json!({ "p_by": "bound" }))).1.unwrap();
    assert!(outcome.p.value <= bound.p.value && outcome.p.value > bound.p.value / 5.0 && bound.p.value < 1e-7);
    assert!(fact(&outcome, "p_error") < outcome.p.value / 50.0, "the relative error stays small");
    let falling = ask("buishand-range", body(json!({ "seek": "falling" }))).1.unwrap();
    let rising = ask("buishand-range", body(json!({ "seek": "rising" }))).1.unwrap();
    assert!(falling.p.value < 1e-7 && rising.p.value > 0.5);
    let range = ask("buishand-range", body(json!({ "seek": "falling", "statistic": "r" }))).1.unwrap_err();
    assert!(range.to_string().contains("has no direction"));
}
