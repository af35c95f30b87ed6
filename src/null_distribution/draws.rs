//! Seeded random draws. The same seed gives the same numbers on every machine and in every version.
//!
//! Source: D. Blackman and S. Vigna (2021), Scrambled linear pseudorandom number generators, *ACM Transactions on
//! Mathematical Software* 47, article 36 (the generator xoshiro256++).

use rand_xoshiro::Xoshiro256PlusPlus;
use rand_xoshiro::rand_core::{Rng, SeedableRng};

/// The most readings that may be drawn in one simulation, all repetitions together; about five seconds on one core.
pub const MOST_DRAWN: f64 = 5e8;

/// A stream of draws.
pub struct Draws {
    generator: Xoshiro256PlusPlus,
    spare_normal: Option<f64>,
}

impl Draws {
    /// The stream that belongs to a seed.
    pub fn seeded(seed: u64) -> Self {
        Draws { generator: Xoshiro256PlusPlus::seed_from_u64(seed), spare_normal: None }
    }

    /// A number from 0 to 1, 1 excluded, all multiples of 2^-53 equally probable.
    pub fn unit(&mut self) -> f64 {
        (self.generator.next_u64() >> 11) as f64 * 2f64.powi(-53)
    }

    /// A whole number below `limit`, all equally probable; `limit` is positive. After D. Lemire (2019), *ACM Transactions on
    /// Modeling and Computer Simulation* 29, article 3.
    pub fn below(&mut self, limit: u64) -> u64 {
        let uneven = limit.wrapping_neg() % limit;
        loop {
            let product = u128::from(self.generator.next_u64()) * u128::from(limit);
            if product as u64 >= uneven {
                return (product >> 64) as u64;
            }
        }
    }

    /// Puts a list in random order, all orders equally probable.
    pub fn shuffle<T>(&mut self, list: &mut [T]) {
        for last in (1..list.len()).rev() {
            list.swap(last, self.below(last as u64 + 1) as usize);
        }
    }

    /// A standard normal number, by G. Marsaglia's polar method (1964), *SIAM Review* 6, 260-264.
    pub fn normal(&mut self) -> f64 {
        if let Some(spare) = self.spare_normal.take() {
            return spare;
        }
        loop {
            let (x, y) = (2.0 * self.unit() - 1.0, 2.0 * self.unit() - 1.0);
            let square = x * x + y * y;
            if square > 0.0 && square < 1.0 {
                let scale = (-2.0 * square.ln() / square).sqrt();
                self.spare_normal = Some(y * scale);
                return x * scale;
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_same_seed_gives_the_same_numbers() {
        let numbers = |seed| {
            let mut draws = Draws::seeded(seed);
            (draws.unit(), draws.below(1000), draws.normal())
        };
        assert_eq!(numbers(7), numbers(7));
        assert_ne!(numbers(7), numbers(8));
    }

    /// Chi-squared over the 24 orders of four things: 23 degrees of freedom, standard deviation 6.8.
    #[test]
    fn all_orders_are_equally_probable() {
        let mut draws = Draws::seeded(1);
        let mut counts = std::collections::HashMap::new();
        let rounds = 48_000;
        for _ in 0..rounds {
            let mut list = [0, 1, 2, 3];
            draws.shuffle(&mut list);
            *counts.entry(list).or_insert(0.0) += 1.0;
        }
        let expected = f64::from(rounds) / 24.0;
        let chi_squared: f64 = counts.values().map(|count: &f64| (count - expected).powi(2) / expected).sum();
        assert!(counts.len() == 24 && chi_squared < 23.0 + 4.0 * 6.8, "{chi_squared}");
    }

    /// The first four moments of the normal distribution are 0, 1, 0 and 3.
    #[test]
    fn normal_numbers_have_the_moments_of_the_normal_distribution() {
        let mut draws = Draws::seeded(2);
        let rounds = 200_000;
        let mut sums = [0.0; 4];
        for _ in 0..rounds {
            let number = draws.normal();
            for (power, sum) in sums.iter_mut().enumerate() {
                *sum += number.powi(power as i32 + 1) / f64::from(rounds);
            }
        }
        for (got, (expected, deviation)) in sums.iter().zip([(0.0, 1.0), (1.0, 1.42), (0.0, 3.88), (3.0, 9.8)]) {
            assert!((got - expected).abs() < 4.0 * deviation / f64::from(rounds).sqrt(), "{got} {expected}");
        }
    }
}
