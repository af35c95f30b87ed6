//! How many pairs of an earlier and a later reading rise and fall, in n log n steps.
//!
//! Source: W. R. Knight (1966), A computer method for calculating Kendall's tau with ungrouped data, *Journal of the American
//! Statistical Association* 61, 436-439: while the readings are sorted by merging, each reading that overtakes others
//! makes as many falls.

/// What was counted.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rises {
    /// Pairs from different moments of which the later reading is higher.
    pub rises: u64,
    /// Pairs from different moments of which the later reading is lower.
    pub falls: u64,
    /// How many readings share each value, the lowest value first.
    pub tie_sizes: Vec<usize>,
}

/// Runs up to this length are sorted by insertion before merging begins.
const SHORT: usize = 16;

/// Counts the rises and falls of readings in time order. `sizes` tells how many readings stand at each moment.
pub fn count(sizes: &[usize], mut values: Vec<f64>) -> Rises {
    let one_each = sizes.len() == values.len();
    let mut tied_within = 0;
    if !one_each {
        let mut rest = values.as_mut_slice();
        for &size in sizes {
            let (own, later) = rest.split_at_mut(size);
            own.sort_unstable_by(f64::total_cmp);
            tied_within += tied_pairs(&runs(own));
            rest = later;
        }
    }
    let falls = sort_counting(&mut values);
    let tie_sizes = runs(&values);
    let all = pairs(values.len()) - tied_pairs(sizes);
    let tied = tied_pairs(&tie_sizes) - tied_within;
    Rises { rises: all - tied - falls, falls, tie_sizes }
}

/// How many pairs n things make.
pub fn pairs(n: usize) -> u64 {
    let n = n as u64;
    n * n.saturating_sub(1) / 2
}

/// How many pairs are tied when `sizes` things share each place.
pub fn tied_pairs(sizes: &[usize]) -> u64 {
    sizes.iter().map(|&size| pairs(size)).sum()
}

/// The lengths of the runs of equal numbers.
fn runs(sorted: &[f64]) -> Vec<usize> {
    sorted.chunk_by(|a, b| a == b).map(<[f64]>::len).collect()
}

/// Sorts numbers and counts the pairs of which the first was higher.
pub fn sort_counting(numbers: &mut Vec<f64>) -> u64 {
    let mut falls = 0;
    for run in numbers.chunks_mut(SHORT) {
        for at in 1..run.len() {
            let number = run[at];
            let mut place = at;
            while place > 0 && run[place - 1] > number {
                run[place] = run[place - 1];
                place -= 1;
            }
            run[place] = number;
            falls += (at - place) as u64;
        }
    }
    let mut merged = vec![0.0; numbers.len()];
    let mut width = SHORT;
    while width < numbers.len() {
        for (from, to) in numbers.chunks(2 * width).zip(merged.chunks_mut(2 * width)) {
            falls += merge(from, width.min(from.len()), to);
        }
        std::mem::swap(numbers, &mut merged);
        width *= 2;
    }
    falls
}

/// Merges two sorted halves; counts the pairs of which the one in the first half is higher.
fn merge(from: &[f64], middle: usize, to: &mut [f64]) -> u64 {
    let (first, second) = from.split_at(middle);
    let (mut i, mut j, mut falls) = (0, 0, 0);
    // Which half comes next is as good as random, so it is computed rather than branched on.
    while i < first.len() && j < second.len() {
        let (a, b) = (first[i], second[j]);
        let from_second = b < a;
        to[i + j] = if from_second { b } else { a };
        falls += u64::from(from_second) * (first.len() - i) as u64;
        i += usize::from(!from_second);
        j += usize::from(from_second);
    }
    let place = i + j;
    to[place..place + first.len() - i].copy_from_slice(&first[i..]);
    to[place + first.len() - i..].copy_from_slice(&second[j..]);
    falls
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn agrees_with_pair_by_pair() {
        let mut state = 5_u64;
        let mut next = |limit: u64| {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            (state >> 33) % limit
        };
        for round in 0..200 {
            let sizes: Vec<usize> = (0..next(60)).map(|_| if round % 2 == 0 { 1 } else { next(4) as usize + 1 }).collect();
            let n = sizes.iter().sum();
            let values: Vec<f64> = (0..n).map(|_| next(12) as f64).collect();
            let of: Vec<usize> = sizes.iter().enumerate().flat_map(|(group, &size)| vec![group; size]).collect();
            let (mut rises, mut falls) = (0, 0);
            for (i, j) in (0..n).flat_map(|i| (i + 1..n).map(move |j| (i, j))).filter(|&(i, j)| of[i] != of[j]) {
                rises += u64::from(values[j] > values[i]);
                falls += u64::from(values[j] < values[i]);
            }
            let counted = count(&sizes, values.clone());
            assert_eq!((counted.rises, counted.falls), (rises, falls));
            assert_eq!(counted.tie_sizes.iter().sum::<usize>(), n);
        }
    }
}
