//! How the p-values of one judging stand to each other.

use risefall::method::{Claim, METHODS, Outcome, Registered, ScaleNeeded, Seek};
use risefall::null_distribution::By;

use crate::for_every_test;
use crate::inputs::{Input, Ties, both_tails, directions, fact, forms_of_p, same};
use crate::random::Random;

/// Tests whose two tails belong to two statistics, and why.
const TWO_STATISTICS: [(&str, &str); 3] = [
    ("difference-signs", "rises and falls are counted by themselves, level steps are neither"),
    ("planned-looks", "a path's highest and lowest reach are two statistics"),
    ("watch", "bets on rises and bets on falls have each their own capital"),
];

/// Whether chances are known only within the error of a simulation.
fn is_simulated(outcome: &Outcome) -> bool {
    matches!(outcome.p.by, By::Approximation(name) if name.contains("simulation"))
}

fn has_one_statistic(method: &Registered) -> bool {
    TWO_STATISTICS.iter().all(|(key, _)| *key != method.card.key)
}

/// The two tails share the observed value, so together they are at least 1; the two-sided p lies between the smaller tail
/// and 1; and what is sought picks the p-value that the facts name.
#[test]
fn tails_belong_together() {
    for_every_test(&[4, 9, 20, 32], 4, |method, input, outcome| {
        let what = format!("{}, {input:?}", method.card.key);
        assert!((0.0..=1.0).contains(&outcome.p.value), "{what}: p = {}", outcome.p.value);
        let Some((rising, falling)) = directions(outcome) else { return };
        let either = fact(outcome, "p_either").unwrap_or(outcome.p.value);
        same(outcome.p.value, either, &what);
        assert!(either <= 1.0 && either >= rising.min(falling) * (1.0 - 1e-9), "{what}: {either}");
        if method.card.claim == Claim::Change {
            // The largest excursions to both sides are two statistics; either of them is as probable as the two together at most.
            assert!(either <= 2.0 * rising.min(falling) * (1.0 + 1e-9) || is_simulated(outcome), "{what}: {either}");
        } else {
            assert!(rising + falling >= 1.0 - 1e-9 || !has_one_statistic(method), "{what}: {rising} + {falling}");
        }
        same(input.judge(method, Seek::Rising).unwrap().p.value, rising, &what);
        same(input.judge(method, Seek::Falling).unwrap().p.value, falling, &what);
    });
}

/// No judging can undercut the smallest p that it names.
#[test]
fn the_smallest_p_is_not_undercut() {
    for_every_test(&[3, 5, 9, 20], 8, |method, input, _| {
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
        if let (Some(_), Some(moments)) = (&input.blocks, &input.moments) {
            sorted.clone_from(moments);
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
    for_every_test(&[40], 4, |method, input, outcome| {
        if directions(outcome).is_none() || outcome.p.by != By::Exact {
            return;
        }
        let exact = input.judge(method, Seek::Rising).unwrap().p.value;
        for form in forms_of_p(method) {
            let Ok(other) = input.with(method, "p_by", form).judge(method, Seek::Rising) else { continue };
            let (p, by) = (other.p.value, other.p.by);
            // The published approximation for a change of level is coarse where readings are tied.
            let near = 0.05 + exact * if method.card.claim == Claim::Change { 0.5 } else { 0.1 };
            assert!((exact - p).abs() < near, "{}, {input:?}: exact {exact}, {by} {p}", method.card.key);
        }
    });
}

/// The chances of a value and all above it, and of all below it, add up to one: two arrangements of the same readings whose
/// statistics differ share no outcome between the upper tail of the one and the lower tail of the other, and neighbouring
/// values leave none out.
#[test]
fn tails_share_the_point_and_nothing_else() {
    for (number, method) in METHODS.iter().enumerate() {
        let mut random = Random::seeded(77 + number as u64);
        let input = Input::random(method, &mut random, 8, Ties::None);
        if matches!(method.card.scale, ScaleNeeded::Counts | ScaleNeeded::EventTimes) || !has_one_statistic(method) {
            continue;
        }
        let mut tails = Vec::new();
        for _ in 0..300 {
            let mut order: Vec<usize> = (0..input.values.len()).collect();
            random.shuffle(&mut order);
            let Ok(outcome) = input.rearranged(&order).judge(method, Seek::Either) else { continue };
            if outcome.p.by == By::Exact && method.card.claim != Claim::Change {
                tails.extend(both_tails(&outcome));
            }
        }
        tails.sort_by(|a, b| a.0.total_cmp(&b.0));
        tails.dedup_by(|a, b| a.0 - b.0 <= 1e-9);
        for pair in tails.windows(2) {
            let together = pair[0].0 + pair[1].1;
            assert!(together <= 1.0 + 1e-9, "{}: {} + {}", method.card.key, pair[0].0, pair[1].1);
        }
        let closest = tails.windows(2).map(|pair| pair[0].0 + pair[1].1).fold(0.0, f64::max);
        assert!(tails.len() < 2 || closest >= 1.0 - 1e-9, "{}: {closest}", method.card.key);
    }
}
