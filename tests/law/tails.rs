//! How the p-values of one judging stand to each other.

use risefall::method::{Claim, Registered, ScaleNeeded, Seek};
use risefall::null_distribution::By;

use crate::for_every_test;
use crate::inputs::{Input, directions, fact, forms_of_p, same};

/// Tests whose two tails belong to two statistics, and why.
const TWO_STATISTICS: [(&str, &str); 1] =
    [("difference-signs", "rises and falls are counted by themselves, level steps are neither")];

fn has_one_statistic(method: &Registered) -> bool {
    TWO_STATISTICS.iter().all(|(key, _)| *key != method.card.key)
}

/// The two tails share the observed value, so together they are at least 1; the two-sided p lies between the smaller tail
/// and 1; and what is sought picks the p-value that the facts name.
#[test]
fn tails_belong_together() {
    for_every_test(&[4, 9, 20, 32], 10, |method, input, outcome| {
        let what = format!("{}, {input:?}", method.card.key);
        assert!((0.0..=1.0).contains(&outcome.p.value), "{what}: p = {}", outcome.p.value);
        let Some((rising, falling)) = directions(outcome) else { return };
        assert!(rising + falling >= 1.0 - 1e-9 || !has_one_statistic(method), "{what}: {rising} + {falling}");
        let either = fact(outcome, "p_either").unwrap_or(outcome.p.value);
        same(outcome.p.value, either, &what);
        assert!(either <= 1.0 && either >= rising.min(falling) * (1.0 - 1e-9), "{what}: {either}");
        same(input.judge(method, Seek::Rising).unwrap().p.value, rising, &what);
        same(input.judge(method, Seek::Falling).unwrap().p.value, falling, &what);
    });
}

/// No judging can undercut the smallest p that it names.
#[test]
fn the_smallest_p_is_not_undercut() {
    for_every_test(&[3, 5, 9, 20], 20, |method, input, _| {
        for seek in [Seek::Either, Seek::Rising, Seek::Falling] {
            let outcome = input.judge(method, seek).unwrap();
            if let Some(smallest) = outcome.smallest_p {
                let (p, key) = (outcome.p.value, method.card.key);
                assert!((0.0..=1.0).contains(&smallest), "{key}: smallest p = {smallest}");
                assert!(smallest <= p * (1.0 + 1e-9), "{key}, {seek:?}, {input:?}: p = {p:e} undercuts {smallest:e}");
            }
        }
    });
}

/// Readings in ascending order are the clearest rise there is, and reach the smallest p.
#[test]
fn the_clearest_rise_reaches_the_smallest_p() {
    for_every_test(&[4, 8, 16], 10, |method, input, _| {
        if method.card.scale != ScaleNeeded::Ordered || method.card.claim != Claim::Trend || !has_one_statistic(method) {
            return;
        }
        let mut sorted: Vec<f64> = input.values.iter().filter_map(|value| value.number()).collect();
        sorted.sort_by(f64::total_cmp);
        if input.blocks.is_some() {
            sorted = input.moments.clone().unwrap();
        }
        let ascending = Input { values: Input::of_numbers(sorted).values, ..input.clone() };
        let Ok(outcome) = ascending.judge(method, Seek::Rising) else { return };
        if let (By::Exact, Some(smallest)) = (outcome.p.by, outcome.smallest_p) {
            same(outcome.p.value, smallest, &format!("{}, {ascending:?}", method.card.key));
        }
    });
}

/// Where both an exact p and an approximation exist, they do not lie far apart for forty readings without ties.
#[test]
fn approximations_are_near_the_exact_p() {
    for_every_test(&[40], 20, |method, input, outcome| {
        if directions(outcome).is_none() || outcome.p.by != By::Exact {
            return;
        }
        let exact = input.judge(method, Seek::Rising).unwrap().p.value;
        for form in forms_of_p(method) {
            let Ok(other) = input.with(method, "p_by", form).judge(method, Seek::Rising) else { continue };
            let (p, by) = (other.p.value, other.p.by);
            assert!((exact - p).abs() < 0.05 + 0.1 * exact, "{}, {input:?}: exact {exact}, {by} {p}", method.card.key);
        }
    });
}
