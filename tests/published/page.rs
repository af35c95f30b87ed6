//! Page's test against published examples, tables and reference values.

use risefall::method::{Outcome, Refusal};
use risefall::null_distribution::rank_products::sum_of_products;
use serde_json::{Value, json};

use crate::reference::{ask, close, fact, file, oracle, published};

/// Rows are blocks here and columns are moments, so the range is turned: one row a moment, one column a block.
fn judge(blocks: &Value, extra: Value) -> Result<Outcome, Refusal> {
    let blocks: Vec<&Vec<Value>> = blocks.as_array().unwrap().iter().map(|block| block.as_array().unwrap()).collect();
    let range: Vec<Vec<Value>> =
        (0..blocks[0].len()).map(|moment| blocks.iter().map(|block| block[moment].clone()).collect()).collect();
    let mut body = json!({ "readings": range });
    body.as_object_mut().unwrap().extend(extra.as_object().unwrap().clone());
    ask("page", body).1
}

fn check(case: &Value, expected: &Value) {
    let id = case["id"].as_str().unwrap();
    let exact = judge(&case["data"], json!({ "p_by": "exact", "seek": "rising" })).unwrap();
    close(exact.statistic.value, &expected["L"], 0.0, id);
    close(fact(&exact, "blocks"), &expected["blocks"], 0.0, id);
    close(fact(&exact, "moments"), &expected["treatments"], 0.0, id);
    close(fact(&exact, "expected"), &expected["mean"], 0.0, id);
    close(fact(&exact, "variance"), &expected["var_ties"], 1e-12, id);
    close(exact.p.value, &expected["p_exact_conditional_on_ties"], 1e-11, id);
    let plain = judge(&case["data"], json!({ "p_by": "normal", "continuity": false, "seek": "rising" })).unwrap();
    close(fact(&plain, "z"), &expected["z"], 1e-11, id);
    close(plain.p.value, &expected["p_increasing"], 1e-9, id);
    let ignored = json!({ "p_by": "normal", "continuity": false, "ties": "ignored", "seek": "rising" });
    let ignored = judge(&case["data"], ignored).unwrap();
    close(fact(&ignored, "variance"), &expected["var_no_ties"], 1e-12, id);
    close(fact(&ignored, "z"), &expected["z_no_tie_correction"], 1e-11, id);
    close(ignored.p.value, &expected["p_increasing_no_tie_correction"], 1e-9, id);
    if !expected["scipy_exact_untied_null"].is_null() {
        let untied = judge(&case["data"], json!({ "ties": "ignored", "seek": "rising" })).unwrap();
        close(untied.p.value, &expected["scipy_exact_untied_null"], 1e-11, id);
    }
}

/// SciPy's documentation of `page_trend_test`: ten students, three teaching methods.
///
/// The documented exact p, 0.00182, takes the null distribution of ranks without ties (`ties=ignored`); conditional on the
/// ties that there are it is 0.00038.
#[test]
fn teaching_methods() {
    let case = published("page_L", "scipy_doc_page");
    check(&case, &case["recomputed"]);
    let untied = judge(&case["data"], json!({ "ties": "ignored", "seek": "rising" })).unwrap();
    close(untied.statistic.value, &case["published"]["L"], 0.0, "L");
    close(untied.p.value, &case["published"]["p_exact_untied_null"], 1e-11, "exact p as documented");
    let normal = json!({ "ties": "ignored", "seek": "rising", "p_by": "normal", "continuity": false });
    let normal = judge(&case["data"], normal).unwrap();
    close(normal.p.value, &case["published"]["p_normal_no_tie_correction"], 1e-9, "normal p as documented");
}

/// Reference values by enumeration; SciPy's `page_trend_test` agrees where there are no ties.
#[test]
fn reference_values() {
    let cases = oracle("page_L");
    for case in &cases {
        check(case, &case["expected"]);
    }
    assert!(cases.len() >= 4);
}

/// Page's table of critical values, verified by exact convolution.
#[test]
fn table_of_critical_values() {
    let table = file("tables.json")["page_L_critical"].clone();
    let mut checked = 0;
    for (size, row) in table["table"].as_object().unwrap() {
        let numbers: Vec<u32> = size.split(['=', ',']).filter_map(|part| part.parse().ok()).collect();
        let (k, n) = (numbers[0], numbers[1]);
        let null = sum_of_products(&vec![(1..=k).collect(); n as usize]);
        for (risk, critical) in row.as_object().unwrap() {
            let risk: f64 = risk.parse().unwrap();
            let least = (null.lowest()..=null.highest()).find(|&l| null.tails(l).upper <= risk);
            assert_eq!(least, critical.as_i64(), "{size}, {risk}");
            checked += 1;
        }
    }
    assert!(checked > 100, "only {checked} entries of the table were checked");
    for (n, printed) in table["printed_from_memory_k3_005"].as_object().unwrap() {
        assert_eq!(&table["table"][format!("k=3,n={n}")]["0.05"], printed);
    }
}

/// Long lists with block labels, in any order of blocks, give the same as a range.
#[test]
fn long_lists_are_the_same_as_ranges() {
    let range = judge(&json!([[1.5, 2.5, 2.0, 4.0], [3.1, 2.9, 3.5, 3.6], [0.2, 0.4, 0.9, 0.7]]), json!({})).unwrap();
    let list = json!({
        "readings": [1.5, 2.5, 2.0, 4.0, 3.1, 2.9, 3.5, 3.6, 0.2, 0.4, 0.9, 0.7],
        "moments": [2001, 2002, 2003, 2004, 2001, 2002, 2003, 2004, 2001, 2002, 2003, 2004],
        "blocks": ["a", "a", "a", "a", "b", "b", "b", "b", "c", "c", "c", "c"],
    });
    let listed = ask("page", list).1.unwrap();
    assert_eq!((range.p, range.statistic), (listed.p, listed.statistic));
}

/// Mean correlation and its interval, from Spearman correlations worked out block by block and SciPy's t quantile.
#[test]
fn mean_correlation() {
    let outcome = judge(&json!([[1, 2, 3, 4], [2, 1, 4, 3], [1, 3, 2, 4]]), json!({})).unwrap();
    let correlations = [1.0, 0.6, 0.8];
    let mean = 0.8;
    let error = (correlations.iter().map(|c: &f64| (c - mean).powi(2)).sum::<f64>() / 2.0 / 3.0).sqrt();
    close(fact(&outcome, "correlation"), &json!(mean), 1e-12, "mean");
    close(fact(&outcome, "correlation_low"), &json!(mean - 4.302652729696142 * error), 1e-8, "lower limit");
    close(fact(&outcome, "correlation_high"), &json!(1.0), 0.0, "the upper limit is cut off at 1");
}

#[test]
fn refusals() {
    let refuse = |body: Value| ask("page", body).1.unwrap_err().to_string();
    assert!(refuse(json!({ "readings": [1, 2, 3] })).contains("in no blocks"));
    assert!(refuse(json!({ "readings": [[1, null], [null, 2]] })).contains("none of the 2 blocks"));
    assert!(refuse(json!({ "readings": [[1, 2], [1, 2]] })).contains("all 2 comparisons are ties"));
    let wide: Vec<Vec<u32>> = (0..40_u32).map(|moment| (0..5).map(|block| moment * 7 % 41 + block).collect()).collect();
    assert!(refuse(json!({ "readings": wide, "p_by": "exact" })).contains("at most 500000000"));
}
