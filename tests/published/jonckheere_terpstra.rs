//! The Jonckheere-Terpstra test against published examples and reference values.

use risefall::method::{Outcome, Refusal};
use risefall::null_distribution::ordered_table::rises_less_falls;
use serde_json::{Value, json};

use crate::reference::{ask, close, fact, oracle, published};

/// Groups as one list of readings, with the number of its group as each reading's moment.
fn judge(groups: &Value, extra: Value) -> Result<Outcome, Refusal> {
    let (mut readings, mut moments) = (Vec::new(), Vec::new());
    for (number, group) in groups.as_array().unwrap().iter().enumerate() {
        for reading in group.as_array().unwrap() {
            readings.push(reading.clone());
            moments.push(number + 1);
        }
    }
    let mut body = json!({ "readings": readings, "moments": moments });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    ask("jonckheere-terpstra", body).1
}

/// Reference values by enumeration; z agrees with R's `cor.test` (Kendall) of value on group number.
#[test]
fn reference_values() {
    let cases = oracle("jonckheere_terpstra");
    for case in &cases {
        let (id, expected) = (case["id"].as_str().unwrap(), &case["expected"]);
        let exact = match judge(&case["data"], json!({ "p_by": "exact" })) {
            Ok(exact) => exact,
            Err(refusal) => {
                assert!(matches!(refusal, Refusal::AllTied { .. }), "{id}: {refusal}");
                assert_eq!(expected["var_ties"], 0.0, "{id}: only readings that are all equal are declined");
                continue;
            }
        };
        close(exact.statistic.value, &expected["J"], 0.0, id);
        close(fact(&exact, "rises") - fact(&exact, "falls"), &expected["S"], 0.0, id);
        close(fact(&exact, "expected"), &expected["mean"], 0.0, id);
        close(fact(&exact, "variance"), &expected["var_ties"], 1e-12, id);
        close(fact(&exact, "p_rising"), &expected["p_exact_increasing"], 1e-11, id);
        close(fact(&exact, "p_falling"), &expected["p_exact_decreasing"], 1e-11, id);
        let plain = judge(&case["data"], json!({ "p_by": "normal", "continuity": false })).unwrap();
        close(fact(&plain, "z"), &expected["z"], 1e-11, id);
        close(fact(&plain, "p_rising"), &expected["p_increasing"], 1e-9, id);
        close(plain.p.value, &expected["p_two"], 1e-9, id);
        let corrected = judge(&case["data"], json!({ "p_by": "normal", "seek": "rising" })).unwrap();
        close(corrected.p.value, &expected["p_increasing_cc"], 1e-9, id);
        let ignored = judge(&case["data"], json!({ "p_by": "normal", "continuity": false, "ties": "ignored" })).unwrap();
        close(fact(&ignored, "z"), &expected["z_no_tie_correction"], 1e-11, id);
        close(fact(&ignored, "variance"), &expected["var_no_ties"], 1e-12, id);
    }
    assert!(cases.len() >= 4);
}

/// An encyclopaedia article's worked example (three groups of four, decision: significant at 5 %).
///
/// The article's critical value of S, 36 at 5 %, is not that: by enumeration of all 34,650 arrangements the chance of
/// 36 or more is 0.0037, and the 5 % point is 24. The value 36 is the 0.5 % point. The decision is the same.
#[test]
fn three_groups_of_four() {
    let case = published("jonckheere_terpstra", "jonckheere_crit_3x4");
    let expected = &case["recomputed"];
    let null = rises_less_falls(&[4, 4, 4], &[1; 12]);
    for (key, s) in [("P_S_ge_36", 36), ("P_S_ge_24", 24), ("P_S_ge_22", 22)] {
        close(null.tails(s).upper, &expected[key], 1e-11, key);
    }
    for (risk, critical) in expected["critical_S_one_sided"].as_object().unwrap() {
        let risk: f64 = risk.parse().unwrap();
        assert_eq!((-48..=48).step_by(2).find(|&s| null.tails(s).upper <= risk), critical.as_i64(), "{risk}");
    }
    let outcome = judge(&case["data"], json!({ "seek": "rising" })).unwrap();
    close(fact(&outcome, "rises") - fact(&outcome, "falls"), &expected["S_example"], 0.0, "S");
    close(outcome.p.value, &expected["exact_p"], 1e-11, "exact p");
    close(fact(&outcome, "z"), &expected["z"], 1e-9, "z");
    assert!(outcome.p.value <= case["parameters"]["alpha"].as_f64().unwrap(), "the printed decision is: significant");
}

/// A range with one row a moment gives the same as a list with moments; blanks are left out.
#[test]
fn a_range_has_one_row_a_moment() {
    let range = json!({ "readings": [[10, 12, null, null], [11, 13, 15, 14], [16, 9, 18, ""]] });
    let outcome = ask("jonckheere-terpstra", range).1.unwrap();
    let listed = judge(&json!([[10, 12], [11, 13, 15, 14], [16, 9, 18]]), json!({})).unwrap();
    assert_eq!((outcome.p, outcome.statistic), (listed.p, listed.statistic));
}

/// Limits at two levels: J by comparing pair by pair, its variance by averaging over all arrangements.
#[test]
fn limits_at_several_levels() {
    let readings = ["<0.5", "0.3", "0.7", "<0.2", "0.9", "0.6", "1.1"];
    let moments = [1, 1, 1, 2, 2, 3, 3];
    let outcome = ask("jonckheere-terpstra", json!({ "readings": readings, "moments": moments })).1.unwrap();
    let sign = |a: usize, b: usize| -> i64 {
        let number = |index: usize| readings[index].trim_start_matches('<').parse::<f64>().unwrap();
        let limit = |index: usize| readings[index].starts_with('<');
        match (limit(a), limit(b)) {
            (false, false) => (number(b) - number(a)).total_cmp(&0.0) as i64,
            (true, false) if number(b) >= number(a) => 1,
            (false, true) if number(a) >= number(b) => -1,
            _ => 0,
        }
    };
    let s = |places: &[usize]| -> i64 {
        let pairs = (0..7).flat_map(|i| (i + 1..7).map(move |j| (i, j))).filter(|&(i, j)| moments[i] < moments[j]);
        pairs.map(|(i, j)| sign(places[i], places[j])).sum()
    };
    let mut orders = vec![vec![]];
    for _ in 0..7 {
        orders = orders
            .iter()
            .flat_map(|order: &Vec<usize>| {
                (0..7).filter(|i| !order.contains(i)).map(|i| [order.clone(), vec![i]].concat()).collect::<Vec<_>>()
            })
            .collect();
    }
    let variance = orders.iter().map(|order| s(order).pow(2) as f64).sum::<f64>() / orders.len() as f64;
    assert_eq!(fact(&outcome, "rises") - fact(&outcome, "falls"), s(&[0, 1, 2, 3, 4, 5, 6]) as f64);
    close(fact(&outcome, "variance") * 4.0, &json!(variance), 1e-12, "variance");
    assert_eq!(outcome.p.by.to_string(), "normal, continuity-corrected");
    let exact = ask("jonckheere-terpstra", json!({ "readings": readings, "moments": moments, "p_by": "exact" }));
    assert!(exact.1.unwrap_err().to_string().contains("limits at several levels"));
}

/// With two moments the share of rises is the area under the curve, and its interval DeLong's. Worked out by hand from the
/// placements of each reading.
#[test]
fn share_of_rises() {
    let (first, second) = ([1.0, 4.0, 2.0, 6.0], [5.0, 3.0, 8.0, 9.0, 4.0]);
    let score = |a: f64, b: f64| {
        if b > a {
            1.0
        } else if b == a {
            0.5
        } else {
            0.0
        }
    };
    let variance = |parts: &[f64]| {
        let mean = parts.iter().sum::<f64>() / parts.len() as f64;
        parts.iter().map(|part| (part - mean) * (part - mean)).sum::<f64>() / (parts.len() as f64 - 1.0)
    };
    let of_first: Vec<f64> = first.iter().map(|&a| second.iter().map(|&b| score(a, b)).sum::<f64>() / 5.0).collect();
    let of_second: Vec<f64> = second.iter().map(|&b| first.iter().map(|&a| score(a, b)).sum::<f64>() / 4.0).collect();
    let share = of_first.iter().sum::<f64>() / 4.0;
    let error = (variance(&of_first) / 4.0 + variance(&of_second) / 5.0).sqrt();
    let outcome = judge(&json!([first, second]), json!({})).unwrap();
    close(fact(&outcome, "share_of_rises"), &json!(share), 1e-12, "share");
    close(fact(&outcome, "share_low"), &json!(share - 1.959963984540054 * error), 1e-9, "lower limit");
    close(fact(&outcome, "share_high"), &json!((share + 1.959963984540054 * error).min(1.0)), 1e-9, "upper limit");
}

#[test]
fn beyond_the_exact_range_is_said_before_working() {
    let group = |shift: usize| (0..200).map(|i| (i * 7 + shift) % 50).collect::<Vec<_>>();
    let groups = json!([group(0), group(3), group(9)]);
    let refusal = judge(&groups, json!({ "p_by": "exact" })).unwrap_err();
    assert!(matches!(refusal, Refusal::BeyondExact { .. }), "{refusal}");
    assert_eq!(judge(&groups, json!({})).unwrap().p.by.to_string(), "normal, continuity-corrected");
}
