//! Rises less falls between ordered groups when nothing else is tied: Kendall's S with ties on one side, and
//! Jonckheere's and Terpstra's J for readings that all differ.
//!
//! The number of rises among all pairs from different groups has the q-multinomial coefficient of the group sizes as
//! its generating function. It is built group by group: the rises between a new group and all earlier ones follow the
//! Mann-Whitney distribution, which for a group of one is uniform. Only positive numbers are added.
//!
//! Sources: M. G. Kendall (1975), *Rank Correlation Methods*, 4th ed., chapter 5; T. J. Terpstra (1952), *Indagationes
//! Mathematicae* 14, 327-333; H. B. Mann and D. R. Whitney (1947), *Annals of Mathematical Statistics* 18, 50-60.

use super::Lattice;
use super::lattice::convolve;

/// The most additions that the distribution may take; less than a second on one core.
pub const MOST_ADDITIONS: f64 = 5e8;

/// How many additions [`rises_less_falls`] takes, about.
pub fn effort(sizes: &[usize]) -> f64 {
    let mut sorted = sizes.to_vec();
    sorted.sort_unstable_by(|a, b| b.cmp(a));
    let (mut before, mut pairs, mut effort) = (0.0, 0.0, 0.0);
    for size in sorted {
        let size = size as f64;
        effort +=
            if size == 1.0 { 3.0 * (pairs + before) } else { (before * size).powi(2) / 2.0 + before * size * (pairs + 1.0) };
        pairs += before * size;
        before += size;
    }
    effort
}

/// The null distribution of rises less falls between groups of the given sizes, from all pairs falling to all rising.
pub fn rises_less_falls(sizes: &[usize]) -> Lattice {
    let mut sorted: Vec<usize> = sizes.iter().copied().filter(|&size| size > 0).collect();
    sorted.sort_unstable_by(|a, b| b.cmp(a));
    let tied = sorted.partition_point(|&size| size > 1);
    let mut before = 0;
    let mut rises = vec![1.0];
    for &size in &sorted[..tied] {
        rises = if before == 0 { rises } else { convolve(&rises, &mann_whitney(before, size)) };
        before += size;
    }
    let rises = plus_uniforms(rises, before, sorted.len() - tied);
    let pairs = rises.len() as i64 - 1;
    Lattice::new(-pairs, 2, rises)
}

/// The chances of each sum of a count and independent uniform ones: one below `before` + 1, one below `before` + 2, and so on, `more`
/// of them. Chances are the same from both ends, so only the lower half is carried along.
fn plus_uniforms(chances: Vec<f64>, before: usize, more: usize) -> Vec<f64> {
    let mut highest = chances.len() - 1;
    let mut half = chances;
    half.truncate(highest / 2 + 1);
    let (mut sums, mut to_end) = (Vec::new(), Vec::new());
    for width in before + 1..=before + more {
        let lowest_half = (highest + width - 1) / 2 + 1;
        for place in half.len()..lowest_half.min(highest + 1) {
            half.push(half[highest - place]);
        }
        half.resize(lowest_half, 0.0);
        add_windows(&half, width, &mut sums, &mut to_end);
        std::mem::swap(&mut half, &mut sums);
        highest += width - 1;
    }
    for place in half.len()..=highest {
        half.push(half[highest - place]);
    }
    half
}

/// The chances of the sums from 0 to `sums` - 1 of a count and an independent uniform one from 0 to `width` - 1.
pub fn first_sums_with_uniform(chances: &[f64], width: usize, sums: usize) -> Vec<f64> {
    let mut first = chances[..sums.min(chances.len())].to_vec();
    first.resize(sums, 0.0);
    let mut means = Vec::new();
    add_windows(&first, width, &mut means, &mut Vec::new());
    means
}

/// Chances below this count as none: they are not kept to full precision, and arithmetic with such numbers is very slow.
const LEAST_CHANCE: f64 = f64::MIN_POSITIVE;

/// The mean over each window of `width` chances that ends at a place; before the first chance there is nothing.
///
/// Each window is the end of one block of `width` chances and the start of the next, so nothing is ever subtracted.
fn add_windows(chances: &[f64], width: usize, means: &mut Vec<f64>, to_end: &mut Vec<f64>) {
    means.clear();
    means.resize(chances.len(), 0.0);
    to_end.clear();
    to_end.resize(width + 1, 0.0);
    let share = 1.0 / width as f64;
    for (block, means) in chances.chunks(width).zip(means.chunks_mut(width)) {
        let mut from_start = 0.0;
        for ((mean, chance), before) in means.iter_mut().zip(block).zip(&to_end[1..]) {
            from_start += chance;
            let value = (from_start + before) * share;
            *mean = if value < LEAST_CHANCE { 0.0 } else { value };
        }
        let mut sum = 0.0;
        for (to_end, chance) in to_end.iter_mut().zip(block).rev() {
            sum += chance;
            *to_end = sum;
        }
    }
}

/// The chance of each number of rises from a group of `first` to a group of `second` readings.
///
/// The highest reading belongs to either group with a chance that is its share, and what is left is a smaller case.
pub fn mann_whitney(first: usize, second: usize) -> Vec<f64> {
    let (long, short) = (first.max(second), first.min(second));
    let mut by_short: Vec<Vec<f64>> = vec![vec![1.0]; short + 1];
    for a in 1..=long {
        for b in 1..=short {
            let (smaller, rest) = by_short.split_at_mut(b);
            let (smaller, chances) = (&smaller[b - 1], &mut rest[0]);
            let reached = chances.len();
            chances.resize(a * b + 1, 0.0);
            chances.copy_within(..reached, b);
            chances[..b].fill(0.0);
            let (from_long, from_short) = (a as f64 / (a + b) as f64, b as f64 / (a + b) as f64);
            let (shared, beyond) = chances.split_at_mut(smaller.len());
            shared.iter_mut().zip(smaller).for_each(|(chance, less)| *chance = from_long * *chance + from_short * less);
            beyond.iter_mut().for_each(|chance| *chance *= from_long);
        }
    }
    by_short.swap_remove(short)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// All arrangements of the group numbers, counted one by one.
    fn enumerate(sizes: &[usize]) -> Vec<(i64, f64)> {
        fn place(left: &mut [usize], placed: &mut Vec<usize>, counts: &mut std::collections::BTreeMap<i64, f64>) {
            if left.iter().all(|&count| count == 0) {
                let pairs = (0..placed.len()).flat_map(|i| (i + 1..placed.len()).map(move |j| (i, j)));
                let s = pairs.map(|(i, j)| (placed[j] as i64 - placed[i] as i64).signum()).sum();
                *counts.entry(s).or_default() += 1.0;
                return;
            }
            for group in 0..left.len() {
                if left[group] > 0 {
                    left[group] -= 1;
                    placed.push(group);
                    place(left, placed, counts);
                    placed.pop();
                    left[group] += 1;
                }
            }
        }
        let mut counts = std::collections::BTreeMap::new();
        place(&mut sizes.to_vec(), &mut Vec::new(), &mut counts);
        let all: f64 = counts.values().sum();
        counts.into_iter().map(|(s, count)| (s, count / all)).collect()
    }

    #[test]
    fn agrees_with_all_arrangements() {
        for sizes in
            [vec![1], vec![3], vec![1, 1], vec![2, 1], vec![1, 1, 1, 1, 1, 1], vec![3, 2, 4], vec![2, 2, 1, 1, 2], vec![5, 4]]
        {
            let null = rises_less_falls(&sizes);
            for (s, chance) in enumerate(&sizes) {
                assert!((null.mass(s) - chance).abs() <= 1e-14 * chance, "{sizes:?} {s}");
            }
            assert!((null.tails(null.highest()).lower - 1.0).abs() < 1e-13);
        }
    }

    /// The most extreme arrangement is one of n!/(n1! n2! ...).
    #[test]
    fn far_tails_keep_their_digits() {
        let null = rises_less_falls(&[30, 30, 30, 1, 1]);
        let expected: f64 =
            (1..=92_u32).map(|i| f64::from(i).recip()).product::<f64>() * (1..=30_u32).map(f64::from).product::<f64>().powi(3);
        assert!((null.extremes().upper - expected).abs() <= 1e-12 * expected);
        assert_eq!(null.extremes().lower, null.extremes().upper);
    }
}
