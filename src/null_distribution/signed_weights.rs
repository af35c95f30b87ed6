//! The sum of the weights whose fair coin shows heads: the null distribution of a weighted sum of signs.
//!
//! Every one of the 2^m outcomes is equally probable, so the distribution is found by counting subsets: the weights
//! enter one after the other, and the chances are halved each time. All steps add positive numbers.

use super::Tails;

/// The distribution of the sum of randomly chosen weights.
#[derive(Clone, Debug)]
pub struct SignedWeights {
    /// The chance of each sum from 0 to the total.
    mass: Vec<f64>,
}

/// The most weights for which the smallest chance, 2^-m, is still an ordinary number.
pub const MOST_WEIGHTS: usize = 1_000;

impl SignedWeights {
    /// Takes at most [`MOST_WEIGHTS`] positive weights. Time and memory grow with the number and the sum of the weights.
    pub fn new(weights: &[u32]) -> Self {
        let total: usize = weights.iter().map(|&weight| weight as usize).sum();
        let mut mass = vec![0.0; total + 1];
        mass[0] = 1.0;
        let mut reached = 0;
        for &weight in weights {
            let weight = weight as usize;
            reached += weight;
            for sum in (0..=reached).rev() {
                let without = if sum + weight <= reached { mass[sum] } else { 0.0 };
                let with = if sum >= weight { mass[sum - weight] } else { 0.0 };
                mass[sum] = 0.5 * (without + with);
            }
        }
        SignedWeights { mass }
    }

    /// The total of all weights.
    pub fn total(&self) -> u64 {
        self.mass.len() as u64 - 1
    }

    /// The chance of exactly `sum`.
    pub fn mass(&self, sum: u64) -> f64 {
        self.mass.get(sum as usize).copied().unwrap_or(0.0)
    }

    /// The chance of at most `sum`.
    pub fn lower_tail(&self, sum: u64) -> f64 {
        let last = (sum as usize + 1).min(self.mass.len());
        self.mass[..last].iter().sum::<f64>().min(1.0)
    }

    /// The chance of at least `sum`.
    pub fn upper_tail(&self, sum: u64) -> f64 {
        let first = (sum as usize).min(self.mass.len());
        self.mass[first..].iter().rev().sum::<f64>().min(1.0)
    }

    /// Both tails of an observed sum.
    pub fn tails(&self, sum: u64) -> Tails {
        Tails { lower: self.lower_tail(sum), upper: self.upper_tail(sum) }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Every subset counted one by one.
    #[test]
    fn agrees_with_counting_all_subsets() {
        for weights in [vec![1], vec![5, 3, 1], vec![7, 5, 3, 1], vec![8, 6, 4, 2], vec![11, 9, 7, 3, 1], vec![2, 2, 2]] {
            let outcomes = 1_u32 << weights.len();
            let null = SignedWeights::new(&weights);
            for sum in 0..=null.total() {
                let at_least = (0..outcomes)
                    .filter(|subset| {
                        let chosen = weights.iter().enumerate().filter(|(i, _)| subset >> i & 1 == 1);
                        chosen.map(|(_, &weight)| u64::from(weight)).sum::<u64>() >= sum
                    })
                    .count();
                let expected = at_least as f64 / f64::from(outcomes);
                assert!((null.upper_tail(sum) - expected).abs() < 1e-15, "{weights:?} {sum}");
            }
        }
    }

    #[test]
    fn tails_share_the_observed_sum() {
        let null = SignedWeights::new(&[19, 17, 15, 13, 11, 9, 7, 5, 3, 1]);
        for sum in 0..=null.total() {
            assert!((null.lower_tail(sum) + null.upper_tail(sum) - null.mass(sum) - 1.0).abs() < 1e-14);
        }
    }
}
