//! The sum of squared steps from each rank to the next, when the ranks stand in random order.
//!
//! The order is built reading by reading. What is left of each rank, and the rank that came last, decide how it goes on, so
//! orders that agree in these are carried forward together. Only positive products are added.
//!
//! Source: R. Bartels (1982), The rank version of von Neumann's ratio test for randomness, *Journal of the American
//! Statistical Association* 77, 40-46, section 2.

use std::collections::{BTreeMap, VecDeque};

use super::Lattice;
use super::strip::Strip;
use crate::comparison::midranks::{Classes, unit};

/// The most products that the distribution may take; at most a third of a second on one core.
pub const MOST_PRODUCTS: f64 = 1e8;

/// About how many products [`sum_of_squared_steps`] takes.
pub fn effort(classes: &Classes) -> f64 {
    let unit = unit(classes) as f64;
    let readings: usize = classes.iter().map(|&(_, size)| size).sum();
    let range = match (classes.first(), classes.last()) {
        (Some(first), Some(last)) => (last.0 - first.0) as f64 / unit,
        _ => 0.0,
    };
    let states: f64 = classes.iter().map(|&(_, size)| (size + 1) as f64).product();
    states * (classes.len() as f64).powi(2) * (readings as f64 * range * range / 12.0 + 1.0)
}

/// The null distribution of the sum of squared steps.
pub fn sum_of_squared_steps(classes: &Classes) -> Lattice {
    let unit = unit(classes);
    let height: Vec<i64> = classes.iter().map(|&(rank, _)| (rank / unit) as i64).collect();
    let all: Vec<usize> = classes.iter().map(|&(_, size)| size).collect();
    let readings: usize = all.iter().sum();
    let mut states: BTreeMap<Vec<usize>, Vec<Strip>> = BTreeMap::new();
    for last in 0..classes.len() {
        let mut remaining = all.clone();
        remaining[last] -= 1;
        let strips = states.entry(remaining).or_insert_with(|| vec![Strip::default(); classes.len()]);
        strips[last].add(&Strip::zero(), 0, all[last] as f64 / readings as f64);
    }
    for left in (1..readings).rev() {
        let mut next: BTreeMap<Vec<usize>, Vec<Strip>> = BTreeMap::new();
        for (remaining, strips) in &states {
            for class in (0..classes.len()).filter(|&class| remaining[class] > 0) {
                let mut state = remaining.clone();
                state[class] -= 1;
                let target = &mut next.entry(state).or_insert_with(|| vec![Strip::default(); classes.len()])[class];
                for (last, strip) in strips.iter().enumerate().filter(|(_, strip)| !strip.is_empty()) {
                    let step = height[class] - height[last];
                    target.add(strip, step * step, remaining[class] as f64 / left as f64);
                }
            }
        }
        states = next;
    }
    let mut sum = Strip::default();
    for strip in states.values().flatten().filter(|strip| !strip.is_empty()) {
        sum.add(strip, 0, 1.0);
    }
    Lattice::from(sum).times((unit * unit) as i64)
}

/// The smallest and the largest sum of squared steps: of the sorted ranks, and of a zigzag that has the lowest beside the
/// highest rank in its middle and goes on, at both ends, with the rank farthest from the end.
pub fn extremes(ranks: &[u64]) -> (u64, u64) {
    let mut sorted = ranks.to_vec();
    sorted.sort_unstable();
    let smallest = sorted.windows(2).map(|pair| (pair[1] - pair[0]).pow(2)).sum();
    let mut left = VecDeque::from(sorted);
    let (Some(mut low_end), Some(mut high_end)) = (left.pop_front(), left.pop_back()) else { return (0, 0) };
    let mut largest = (high_end - low_end).pow(2);
    while !left.is_empty() {
        if let [rank] = left.make_contiguous() {
            return (smallest, largest + rank.abs_diff(low_end).max(rank.abs_diff(high_end)).pow(2));
        }
        if let (Some(lowest), Some(highest)) = (left.pop_front(), left.pop_back()) {
            largest += highest.abs_diff(low_end).pow(2) + lowest.abs_diff(high_end).pow(2);
            (low_end, high_end) = (lowest, highest);
        }
    }
    (smallest, largest)
}

#[cfg(test)]
mod tests {
    use super::super::arrangements::{for_each, sizes_to_try};
    use super::*;
    use std::collections::HashMap;

    /// All arrangements of up to seven readings, with and without equal ones, counted one by one.
    #[test]
    fn agrees_with_all_arrangements() {
        for sizes in sizes_to_try(7) {
            let mut below = 0;
            let classes: Classes = sizes
                .iter()
                .map(|&size| {
                    below += size;
                    ((2 * below + 1 - size) as u64, size)
                })
                .collect();
            let mut counts: HashMap<i64, f64> = HashMap::new();
            for_each(&sizes, |order| {
                let rank = |value: usize| classes[value].0 as i64;
                *counts.entry(order.windows(2).map(|pair| (rank(pair[1]) - rank(pair[0])).pow(2)).sum()).or_default() += 1.0;
            });
            let all: f64 = counts.values().sum();
            let null = sum_of_squared_steps(&classes);
            let total: f64 = null.points().map(|(_, mass)| mass).sum();
            assert!((total - 1.0).abs() < 1e-13);
            let ranks: Vec<u64> = classes.iter().flat_map(|&(rank, size)| std::iter::repeat_n(rank, size)).collect();
            let (smallest, largest) = extremes(&ranks);
            assert_eq!((smallest as i64, largest as i64), (null.lowest(), null.highest()), "{sizes:?}");
            for (value, count) in counts {
                assert!((null.mass(value) - count / all).abs() < 1e-14, "{sizes:?} {value}");
            }
        }
    }
}
