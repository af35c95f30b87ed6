//! The number of neighbours that rise when readings stand in random order, equal readings among them.
//!
//! The readings enter group by group, from the lowest value to the highest. Copies of a new highest value are put into the
//! gaps of the order so far; a gap gains a rise unless it lies in front of all readings or inside a rise. With r rises among
//! N readings, m copies therefore add a hypergeometric number of rises: N - r gaps gain one, r + 1 gaps and the copies
//! themselves do not. Without equal readings this is the recursion of the Eulerian numbers. Only positive products are added.
//!
//! Sources: P. A. MacMahon (1915), *Combinatory Analysis*, volume 1, section IV, chapter IV (Simon Newcomb's problem).
//! G. H. Moore and W. A. Wallis (1943), Time series significance tests based on signs of differences, *Journal of the
//! American Statistical Association* 38, 153-164, section 1.

use super::{Lattice, hypergeometric};

/// The most readings for which the distribution is made; time grows with their square.
pub const MOST_READINGS: usize = 1_000;

/// The number of rises among neighbours; `sizes` says how many readings have the lowest value, the next higher, and so on.
pub fn rises(sizes: &[usize]) -> Lattice {
    let mut mass = vec![1.0];
    let mut placed = 0_usize;
    for &copies in sizes.iter().filter(|&&copies| copies > 0) {
        let mut next = vec![0.0; placed + copies.min(placed) + 1];
        for (rises, &chance) in mass.iter().enumerate().filter(|(_, chance)| **chance > 0.0) {
            let gaining = placed - rises;
            if copies == 1 {
                let all = (placed + 1) as f64;
                next[rises] += chance * (rises + 1) as f64 / all;
                next[rises + gaining.min(1)] += chance * gaining as f64 / all;
                continue;
            }
            for gained in 0..=copies.min(gaining) {
                let others = (rises + copies) as u64;
                next[rises + gained] += chance * hypergeometric::mass(gained as u64, gaining as u64, others, copies as u64);
            }
        }
        mass = next;
        placed += copies;
    }
    Lattice::new(0, 1, mass)
}

/// Mean and variance of the number of rises. Two neighbours rise with chance e2/(n(n-1)), where e2 is the number of pairs of
/// readings that differ; the variance follows from two steps that share a reading and from two that do not.
pub fn moments(sizes: &[usize]) -> (f64, f64) {
    let n = sizes.iter().sum::<usize>() as f64;
    if sizes.iter().all(|&size| size == 1) {
        return ((n - 1.0) / 2.0, if n > 1.0 { (n + 1.0) / 12.0 } else { 0.0 });
    }
    let (mut one, mut two, mut three, mut sharing) = (0.0, 0.0, 0.0, 0.0);
    for size in sizes.iter().map(|&size| size as f64) {
        three += two * size;
        two += one * size;
        one += size;
        sharing += size * (n - size) * (n - size - 1.0);
    }
    let mean = two / n;
    let neighbouring = 2.0 * three / (n * (n - 1.0));
    let apart = (two * two - two - sharing) / (n * (n - 1.0));
    (mean, mean + neighbouring + apart - mean * mean)
}

#[cfg(test)]
mod tests {
    use super::super::arrangements::{for_each, sizes_to_try};
    use super::*;

    /// All arrangements of up to eight readings, with and without equal ones, counted one by one.
    #[test]
    fn agrees_with_all_arrangements() {
        for sizes in sizes_to_try(8) {
            let mut counts = [0.0; 9];
            for_each(&sizes, |order| counts[order.windows(2).filter(|pair| pair[0] < pair[1]).count()] += 1.0);
            let all: f64 = counts.iter().sum();
            let null = rises(&sizes);
            for (value, count) in counts.iter().enumerate() {
                assert!((null.mass(value as i64) - count / all).abs() < 1e-13, "{sizes:?} {value}");
            }
            let mean = counts.iter().enumerate().map(|(value, count)| value as f64 * count / all).sum::<f64>();
            let square = counts.iter().enumerate().map(|(value, count)| (value as f64 - mean).powi(2) * count / all).sum::<f64>();
            let got = moments(&sizes);
            assert!((got.0 - mean).abs() < 1e-12 && (got.1 - square).abs() < 1e-12, "{sizes:?}: {got:?} {mean} {square}");
        }
    }
}
