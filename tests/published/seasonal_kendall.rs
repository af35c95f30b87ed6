//! The seasonal Kendall test, its covariances and its test of homogeneity against exact rational arithmetic; the regional
//! test against the same, its blocks being places; the partial test against the covariance formula in exact arithmetic.

use risefall::method::Evidence;
use serde_json::{Value, json};

use crate::reference::{ask, close, data, fact, file, oracle};

/// Readings round by round, with their seasons as blocks.
fn body(case: &Value, extra: Value) -> Value {
    let mut body = if case["data"]["dataset"].is_string() {
        json!({ "readings": data(case), "period": 12 })
    } else {
        let seasons = case["data"].as_array().unwrap();
        let rounds = seasons.iter().map(|season| season.as_array().unwrap().len()).max().unwrap();
        let (mut readings, mut blocks) = (Vec::new(), Vec::new());
        for round in 0..rounds {
            for (number, season) in seasons.iter().enumerate() {
                readings.push(season.get(round).cloned().unwrap_or(Value::Null));
                blocks.push(format!("season {number}"));
            }
        }
        json!({ "readings": readings, "blocks": blocks })
    };
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    body
}

#[test]
fn reference_values() {
    let mut checked = 0;
    for case in oracle("seasonal_kendall") {
        let id = case["id"].as_str().unwrap();
        let expected = &case["expected"];
        let body = |extra: Value| {
            let mut body = body(&case, extra);
            if case["data"]["set_missing_at_zero_based_index"].is_array() {
                body["readings"] = with_gaps(&case);
            }
            ask("seasonal-kendall", body).1.unwrap()
        };
        let best = body(json!({}));
        close(fact(&best, "s"), &expected["S"], 0.0, id);
        close(fact(&best, "variance"), &expected["var"], 1e-12, id);
        close(fact(&best, "slope"), &expected["slope_per_year"], 1e-12, id);
        let normal = body(json!({ "p_by": "normal" }));
        close(fact(&normal, "z"), &expected["z_cc"], 1e-12, id);
        close(normal.p.value, &expected["p_two_cc"], 1e-9, id);
        if !expected["chi2_homogeneity"].is_null() {
            close(fact(&best, "chi2_homogeneity"), &expected["chi2_homogeneity"], 1e-9, id);
            close(fact(&best, "chi2_trend"), &expected["chi2_trend"], 1e-9, id);
            close(fact(&best, "df_homogeneity"), &expected["df_homogeneity"], 0.0, id);
            close(fact(&best, "p_homogeneity"), &expected["p_homogeneity"], 1e-9, id);
            close(fact(&best, "p_trend"), &expected["p_trend"], 1e-9, id);
        }
        if !expected["var_with_covariance"].is_null() {
            let correlated = body(json!({ "between": "correlated" }));
            close(fact(&correlated, "variance"), &expected["var_with_covariance"], 1e-12, id);
            close(fact(&correlated, "z"), &expected["z_covariance_cc"], 1e-12, id);
            close(correlated.p.value, &expected["p_two_covariance_cc"], 1e-9, id);
        }
        if !expected["p_exact_two_independent_seasons"].is_null() {
            close(best.p.value, &expected["p_exact_two_independent_seasons"], 1e-11, id);
            close(fact(&best, "p_rising"), &expected["p_exact_increasing_independent_seasons"], 1e-11, id);
        }
        let Evidence::Table(table) = &best.evidence[0] else { panic!("a table") };
        let by_season: Vec<i64> = expected["S_by_season"].as_array().unwrap().iter().map(|s| s.as_i64().unwrap()).collect();
        let shown: Vec<i64> =
            table.rows.iter().map(|row| if let risefall::method::Datum::Integer(s) = row[4] { s } else { panic!() }).collect();
        assert_eq!(shown, by_season, "{id}");
        checked += 1;
    }
    assert!(checked >= 6, "only {checked} cases were found");
}

/// The data set with the gaps that the case states.
fn with_gaps(case: &Value) -> Value {
    let mut values = data(case);
    for at in case["data"]["set_missing_at_zero_based_index"].as_array().into_iter().flatten() {
        values[at.as_u64().unwrap() as usize] = Value::Null;
    }
    values
}

/// The dates of a monthly series tell its seasons: the same answer as with a period of twelve.
#[test]
fn dates_tell_the_seasons() {
    let values = file("datasets.json")["nottem"]["values"].clone();
    let moments: Vec<String> = (0..240).map(|month| format!("{}-{:02}-15", 1920 + month / 12, month % 12 + 1)).collect();
    let dated = ask("seasonal-kendall", json!({ "readings": values, "moments": moments })).1.unwrap();
    let counted = ask("seasonal-kendall", json!({ "readings": values, "period": 12 })).1.unwrap();
    assert_eq!(dated.p, counted.p);
    close(fact(&dated, "slope"), &json!(0.05), 1e-12, "slope");
    let places: Vec<String> = (0..240).map(|month| format!("place {}", month % 12)).collect();
    let years: Vec<usize> = (0..240).map(|month| 1920 + month / 12).collect();
    let regional = ask("regional-kendall", json!({ "readings": values, "blocks": places, "moments": years })).1.unwrap();
    assert_eq!((regional.p, fact(&regional, "slope")), (counted.p, fact(&counted, "slope")));
}

/// Two series of five; the covariance by hand from Dietz and Killeen's formula: K counts pairs, and ranks 1 to 5 give
/// (K + 4 Σ R R' - 5 * 36) / 3.
#[test]
fn partial_test_by_hand() {
    // Ranks of the readings 1 3 2 5 4, of the covariate 2 1 3 5 4: Σ R R' = 2 + 3 + 6 + 25 + 16 = 52.
    // Signs of the ten pairs, readings: + + + + - + + + + -, covariate: - + + + + + + + + -: K = -1+1+1+1-1+1+1+1+1+1 = 6.
    let outcome = ask("partial-kendall", json!({ "readings": [10, 30, 20, 50, 40], "covariate": [2, 1, 3, 5, 4] })).1.unwrap();
    close(fact(&outcome, "covariance"), &json!((6.0 + 4.0 * 52.0 - 180.0) / 3.0), 1e-13, "covariance");
    // S = 8 - 2 = 6, S' = 8 - 2 = 6; both variances are 5 * 4 * 15 / 18.
    let variance = 300.0_f64 / 18.0;
    let shared = 34.0 / 3.0;
    let z = (6.0 - shared / variance * 6.0) / (variance - shared * shared / variance).sqrt();
    close(outcome.statistic.value, &json!(z), 1e-12, "z");
}
