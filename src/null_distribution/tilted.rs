//! A null distribution tilted by an exponential factor: how the statistic behaves under a trend of a given strength.
//!
//! Under a tilt b the chance of a value x is proportional to its null chance times exp(b x). For events that follow a
//! log-linear trend, the conditional distribution of the score total is of this form, so that inverting its tails gives
//! an exact interval for the trend: D. R. Cox (1970), *Analysis of Binary Data*, section 4.2.

use super::{Lattice, crossing};

/// A tilt beyond which neighbouring values differ in chance by more than any number can say.
const LARGEST_TILT: f64 = 700.0;

/// A lattice whose chances can be tilted.
pub struct Tilted<'a> {
    lattice: &'a Lattice,
    log_mass: Vec<f64>,
}

impl<'a> Tilted<'a> {
    /// Prepares a null distribution.
    pub fn new(lattice: &'a Lattice) -> Self {
        Tilted { lattice, log_mass: lattice.points().map(|(_, mass)| mass.ln()).collect() }
    }

    /// The tilt under which `value` is the mean (the conditional maximum-likelihood estimate); infinite at the ends.
    pub fn estimate(&self, value: i64) -> f64 {
        if value <= self.lattice.lowest() {
            return f64::NEG_INFINITY;
        }
        if value >= self.lattice.highest() {
            return f64::INFINITY;
        }
        self.crossing(|tilt| self.mean_under(tilt, |point| (point - value) as f64))
    }

    /// The tilts at which `value` becomes as improbable as (1 - confidence)/2 on either side; infinite at the ends.
    pub fn interval(&self, value: i64, confidence: f64) -> (f64, f64) {
        let tail = (1.0 - confidence) / 2.0;
        let share = |holds: bool| f64::from(u8::from(holds));
        let low = if value <= self.lattice.lowest() {
            f64::NEG_INFINITY
        } else {
            self.crossing(|tilt| self.mean_under(tilt, |point| share(point >= value)) - tail)
        };
        let high = if value >= self.lattice.highest() {
            f64::INFINITY
        } else {
            self.crossing(|tilt| tail - self.mean_under(tilt, |point| share(point <= value)))
        };
        (low, high)
    }

    /// The mean of a function of the statistic under a tilt.
    fn mean_under(&self, tilt: f64, of: impl Fn(i64) -> f64) -> f64 {
        let exponent = |(log_mass, (point, _)): (&f64, (i64, f64))| log_mass + tilt * point as f64;
        let paired = || self.log_mass.iter().zip(self.lattice.points());
        let largest = paired().map(exponent).fold(f64::NEG_INFINITY, f64::max);
        let (mut sum, mut total) = (0.0, 0.0);
        for pair in paired() {
            let weight = (exponent(pair) - largest).exp();
            sum += weight * of(pair.1.0);
            total += weight;
        }
        sum / total
    }

    /// Where a function that rises with the tilt crosses zero.
    fn crossing(&self, rising: impl Fn(f64) -> f64) -> f64 {
        let span = (self.lattice.highest() - self.lattice.lowest()).max(1) as f64;
        crossing::of_rising(1.0 / span, LARGEST_TILT, rising)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::null_distribution::binomial::{Binomial, exact_interval};

    /// A tilted fair binomial is a binomial with share exp(b)/(1 + exp(b)), so the interval must be Clopper's and Pearson's.
    #[test]
    fn tilting_a_fair_coin_gives_the_binomial_interval() {
        for (trials, count) in [(7_u64, 7_u64), (9, 4), (26, 18), (40, 0)] {
            let fair = Lattice::new(0, 1, (0..=trials).map(|k| Binomial::fair(trials).mass(k)).collect());
            let tilted = Tilted::new(&fair);
            let share = |tilt: f64| 1.0 / (1.0 + (-tilt).exp());
            let (low, high) = tilted.interval(count as i64, 0.95);
            let (expected_low, expected_high) = exact_interval(count, trials, 0.95);
            assert!((share(low) - expected_low).abs() < 1e-10 && (share(high) - expected_high).abs() < 1e-10);
            assert!((share(tilted.estimate(count as i64)) - count as f64 / trials as f64).abs() < 1e-10);
        }
    }
}
