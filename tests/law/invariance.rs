//! What must not change p, and what must turn it round.

use risefall::method::{Claim, Direction, ScaleNeeded, Seek};

use crate::for_every_test;
use crate::inputs::{both_tails, directions, same};

/// Tests for which reversing time is not the mirror image, and why.
const NOT_MIRRORED: [(&str, &str); 3] = [
    ("military-handbook", "a power of time is not a power of the time that is left"),
    ("planned-looks", "looks are made on the way, and the way back is another way"),
    ("watch", "looks are made on the way, and the way back is another way"),
];

/// Reversing time swaps a rise and a fall; a test without direction sees the same.
#[test]
fn reversing_time_swaps_rising_and_falling() {
    for_every_test(&[5, 8, 13, 24], 8, |method, input, outcome| {
        let key = method.card.key;
        if NOT_MIRRORED.iter().any(|(name, _)| *name == key) {
            return;
        }
        let reversed = input.reversed(method).judge(method, Seek::Either).unwrap();
        same(reversed.p.value, outcome.p.value, &format!("{key}, two-sided, {input:?}"));
        if let (Claim::Pattern, Some(tails), Some(reversed_tails)) =
            (method.card.claim, both_tails(outcome), both_tails(&reversed))
        {
            same(reversed_tails.0, tails.0, &format!("{key}: smooth either way, {input:?}"));
            same(reversed_tails.1, tails.1, &format!("{key}: alternating either way, {input:?}"));
        }
        if let Some((rising, falling)) = directions(outcome) {
            let (reversed_rising, reversed_falling) = directions(&reversed).unwrap();
            same(reversed_rising, falling, &format!("{key}: a fall is a rise backwards, {input:?}"));
            same(reversed_falling, rising, &format!("{key}: a rise is a fall backwards, {input:?}"));
            let mirrored = match outcome.direction {
                Direction::Rising => Direction::Falling,
                Direction::Falling => Direction::Rising,
                Direction::Neither => Direction::Neither,
            };
            assert_eq!(reversed.direction, mirrored, "{key}, {input:?}");
        }
    });
}

/// Another zero and another unit of the readings change nothing.
#[test]
fn zero_and_unit_do_not_matter() {
    for_every_test(&[6, 11, 24], 8, |method, input, outcome| {
        let map: fn(f64) -> f64 = match method.card.scale {
            ScaleNeeded::Ordered | ScaleNeeded::Numeric => |x| 2.0 * x - 64.0,
            ScaleNeeded::EventTimes if input.settings.iter().any(|(name, _)| *name == "end") => return,
            ScaleNeeded::EventTimes => |x| 8.0 * x,
            ScaleNeeded::Counts => return,
        };
        let mapped = input.mapped(map).judge(method, Seek::Either).unwrap();
        same(mapped.p.value, outcome.p.value, &format!("{}, {input:?}", method.card.key));
        assert_eq!(mapped.direction, outcome.direction, "{}, {input:?}", method.card.key);
    });
}

/// A test for which order is enough sees nothing but order: any increasing map changes nothing.
#[test]
fn increasing_maps_do_not_matter_where_order_is_enough() {
    for_every_test(&[6, 11, 24], 8, |method, input, outcome| {
        if method.card.scale != ScaleNeeded::Ordered {
            return;
        }
        let mapped = input.mapped(|x| (x / 3.0).exp() - 50.0).judge(method, Seek::Either).unwrap();
        same(mapped.p.value, outcome.p.value, &format!("{}, {input:?}", method.card.key));
        assert_eq!(mapped.direction, outcome.direction, "{}, {input:?}", method.card.key);
    });
}
