//! Rises less falls between ordered groups when readings are tied too: Kendall's S with ties on both sides, and
//! Jonckheere's and Terpstra's J conditional on the ties.
//!
//! Groups and distinct values make a two-way table whose margins are fixed; if there is no trend, all ways to deal the
//! readings to the groups are equally probable. The values are dealt one after the other, the lowest first. What has been
//! dealt to each group so far decides how many rises and falls the next value adds, so outcomes with the same numbers
//! dealt are carried forward together (a network recursion). Only positive products are added.
//!
//! The numbers dealt can take as many states as the product of the group sizes plus one; groups and values may be
//! exchanged, and the cheaper of the two ways is taken.
//!
//! Sources: M. G. Kendall (1975), *Rank Correlation Methods*, 4th ed., section 5.8 and chapter 4; C. R. Mehta, N. R. Patel
//! and P. Senchaudhuri (1992), Exact stratified linear rank tests for ordered categorical and binary data, *Journal of
//! Computational and Graphical Statistics* 1, 21-40.

use std::collections::BTreeMap;

use super::Lattice;
use super::q_multinomial;
use super::strip::Strip;

/// The most products that the distribution may take; less than a second on one core.
pub const MOST_PRODUCTS: f64 = 5e8;

/// The most readings, so that all binomial coefficients are ordinary numbers.
const MOST_READINGS: usize = 1_000;

/// About how many products [`rises_less_falls`] takes, at most.
pub fn effort(groups: &[usize], values: &[usize]) -> f64 {
    match one_sided(groups, values) {
        Some(sizes) => q_multinomial::effort(sizes),
        None => dealing_effort(groups, values).min(dealing_effort(values, groups)),
    }
}

/// The null distribution of rises less falls between groups of the given sizes, where the readings' distinct values, the
/// lowest first, occur as often as `values` says. Both add up to the number of readings.
pub fn rises_less_falls(groups: &[usize], values: &[usize]) -> Lattice {
    match one_sided(groups, values) {
        Some(sizes) => q_multinomial::rises_less_falls(sizes),
        None if dealing_effort(groups, values) <= dealing_effort(values, groups) => deal(groups, values),
        None => deal(values, groups),
    }
}

/// The sizes on the one side that has ties, if the other side has none.
fn one_sided<'a>(groups: &'a [usize], values: &'a [usize]) -> Option<&'a [usize]> {
    let untied = |sizes: &[usize]| sizes.iter().all(|&size| size <= 1);
    if untied(values) {
        Some(groups)
    } else if untied(groups) {
        Some(values)
    } else {
        None
    }
}

fn dealing_effort(groups: &[usize], values: &[usize]) -> f64 {
    let total: usize = groups.iter().sum();
    if total > MOST_READINGS {
        return f64::INFINITY;
    }
    let mut states = vec![0.0; total + 1];
    states[0] = 1.0;
    let mut reached = 0;
    for &size in groups {
        for sum in (0..=reached + size).rev() {
            states[sum] = (sum.saturating_sub(size)..=sum.min(reached)).map(|before| states[before]).sum();
        }
        reached += size;
    }
    let largest = groups.iter().copied().max().unwrap_or(0);
    let mut dealt = 0;
    let mut effort = 0.0;
    for &size in values {
        let layer: f64 = (dealt..=dealt + size)
            .map(|sum| states[sum] * ((dealt + size - sum).min(largest) + 1) as f64 * (sum * sum + 1) as f64)
            .sum();
        effort += layer * groups.len() as f64;
        dealt += size;
    }
    effort
}

/// Deals the values to the groups, one group after the other.
fn deal(groups: &[usize], values: &[usize]) -> Lattice {
    let choose = binomials(groups.iter().sum());
    let mut states: BTreeMap<Vec<usize>, Strip> = BTreeMap::from([(vec![0; groups.len()], Strip::zero())]);
    let mut before = 0;
    for &size in values {
        for group in 0..groups.len() {
            let mut next: BTreeMap<Vec<usize>, Strip> = BTreeMap::new();
            for (dealt, strip) in &states {
                let here = dealt.iter().sum::<usize>() - before;
                let left = size - here;
                let room = groups[group] - dealt[group];
                let room_after: usize = (group + 1..groups.len()).map(|later| groups[later] - dealt[later]).sum();
                let lower_earlier = dealt[..group].iter().sum::<usize>() - here;
                let lower_later: usize = dealt[group + 1..].iter().sum();
                let rises_each = lower_earlier as i64 - lower_later as i64;
                for count in left.saturating_sub(room_after)..=left.min(room) {
                    let chance = choose[room][count] * choose[room_after][left - count] / choose[room + room_after][left];
                    let mut state = dealt.clone();
                    state[group] += count;
                    next.entry(state).or_default().add(strip, rises_each * count as i64, chance);
                }
            }
            states = next;
        }
        before += size;
    }
    states.into_values().next().unwrap_or_else(Strip::zero).into()
}

/// Pascal's triangle down to row `n`.
fn binomials(n: usize) -> Vec<Vec<f64>> {
    let mut rows = vec![vec![1.0]];
    for row in 0..n {
        let mut next = vec![1.0];
        next.extend(rows[row].windows(2).map(|pair| pair[0] + pair[1]));
        next.push(1.0);
        rows.push(next);
    }
    rows
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Every distinct way to deal the readings to the groups, compared pair by pair.
    fn enumerate(groups: &[usize], values: &[usize]) -> BTreeMap<i64, f64> {
        let readings: Vec<usize> = values.iter().enumerate().flat_map(|(value, &size)| vec![value; size]).collect();
        fn place(readings: &[usize], left: &mut [usize], of: &mut Vec<usize>, counts: &mut BTreeMap<i64, f64>) {
            if of.len() == readings.len() {
                let n = of.len();
                let pairs = (0..n).flat_map(|i| (i + 1..n).map(move |j| (i, j)));
                let sign = |a: usize, b: usize| (b as i64 - a as i64).signum();
                let s = pairs.map(|(i, j)| sign(readings[i], readings[j]) * sign(of[i], of[j])).sum();
                *counts.entry(s).or_default() += 1.0;
                return;
            }
            for group in 0..left.len() {
                if left[group] > 0 {
                    left[group] -= 1;
                    of.push(group);
                    place(readings, left, of, counts);
                    of.pop();
                    left[group] += 1;
                }
            }
        }
        let mut counts = BTreeMap::new();
        place(&readings, &mut groups.to_vec(), &mut Vec::new(), &mut counts);
        let all: f64 = counts.values().sum();
        counts.values_mut().for_each(|count| *count /= all);
        counts
    }

    #[test]
    fn agrees_with_every_way_to_deal() {
        let cases: [(&[usize], &[usize]); 8] = [
            (&[2, 2], &[2, 2]),
            (&[3, 2, 2], &[1, 4, 2]),
            (&[1, 1, 3, 2], &[2, 1, 1, 3]),
            (&[4, 4], &[1, 3, 1, 1, 2]),
            (&[2, 3, 4], &[9]),
            (&[8], &[2, 6]),
            (&[2, 2, 2, 2], &[5, 3]),
            (&[3, 3, 3], &[1, 1, 1, 1, 1, 1, 1, 1, 1]),
        ];
        for (groups, values) in cases {
            for (null, way) in [(deal(groups, values), "groups"), (deal(values, groups), "values")] {
                let expected = enumerate(groups, values);
                for (&s, &chance) in &expected {
                    assert!((null.mass(s) - chance).abs() <= 1e-13 * chance, "{groups:?} {values:?} by {way}, S = {s}");
                }
                assert_eq!((null.lowest(), null.highest()), (*expected.keys().min().unwrap(), *expected.keys().max().unwrap()));
            }
        }
    }

    /// Without ties among the readings both recursions must agree.
    #[test]
    fn agrees_with_the_q_multinomial() {
        let groups = [4, 3, 5];
        let (dealt, counted) = (deal(&groups, &[1; 12]), q_multinomial::rises_less_falls(&groups));
        for (s, chance) in counted.points() {
            assert!((dealt.mass(s) - chance).abs() <= 1e-13 * chance);
        }
    }
}
