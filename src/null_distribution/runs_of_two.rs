//! The number of runs when members of two kinds stand in random order.
//!
//! The number is even exactly if the first and the last member differ in kind. Given the kinds of the two ends, the number
//! follows a hypergeometric distribution, so that each term keeps its full relative accuracy for any number of members.
//!
//! Source: A. Wald and J. Wolfowitz (1940), On a test whether two samples are from the same population, *Annals of
//! Mathematical Statistics* 11, 147-162, section 4.

use super::{Lattice, hypergeometric};

/// The number of runs among `first` members of one kind and `second` of another, at least one of each.
pub fn runs(first: u64, second: u64) -> Lattice {
    let (a, b) = (first, second);
    let ordered_pairs = (a + b) as f64 * (a + b - 1) as f64;
    let differ = 2.0 * a as f64 * b as f64 / ordered_pairs;
    let both = |kind: u64| kind as f64 * kind.saturating_sub(1) as f64 / ordered_pairs;
    let most = 2 * a.min(b) + u64::from(a != b);
    let mass = (2..=most).map(|runs| {
        let k = runs / 2;
        if runs % 2 == 0 {
            return differ * hypergeometric::mass(k - 1, a - 1, b - 1, b - 1);
        }
        let ends_of = |own: u64, other: u64| {
            if own < 2 { 0.0 } else { both(own) * hypergeometric::mass(k, own - 1, other - 1, other) }
        };
        ends_of(a, b) + ends_of(b, a)
    });
    Lattice::new(2, 1, mass.collect())
}

/// Mean and variance of the number of runs.
pub fn moments(first: u64, second: u64) -> (f64, f64) {
    let n = (first + second) as f64;
    let twice = 2.0 * first as f64 * second as f64;
    (twice / n + 1.0, twice * (twice - n) / (n * n * (n - 1.0)))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// All orders of up to twelve members, counted one by one.
    #[test]
    fn agrees_with_all_orders() {
        for n in 2..=12_u32 {
            for a in 1..n {
                let orders: Vec<u32> = (0..1_u32 << n).filter(|order| order.count_ones() == a).collect();
                let null = runs(a.into(), (n - a).into());
                let (mut mean, mut square) = (0.0, 0.0);
                for value in 2..=n {
                    let count =
                        orders.iter().filter(|&&o| ((o ^ (o >> 1)) & ((1 << (n - 1)) - 1)).count_ones() + 1 == value).count();
                    let expected = count as f64 / orders.len() as f64;
                    assert!((null.mass(value.into()) - expected).abs() <= 1e-13 * expected, "{a} of {n}: {value}");
                    mean += f64::from(value) * expected;
                    square += f64::from(value).powi(2) * expected;
                }
                let stated = moments(a.into(), (n - a).into());
                assert!((stated.0 - mean).abs() < 1e-12 && (stated.1 - (square - mean * mean)).abs() < 1e-11);
            }
        }
    }

    #[test]
    fn large_numbers_of_members_keep_a_total_of_one() {
        for (a, b) in [(1, 5_000), (5_000, 5_000), (40_000, 25_000)] {
            let total: f64 = runs(a, b).points().map(|(_, mass)| mass).sum();
            assert!((total - 1.0).abs() < 1e-11, "{a} {b}: {total}");
        }
    }
}
