//! The binomial distribution, exact tails and the Clopper-Pearson interval.
//!
//! Terms follow C. Loader, *Fast and Accurate Computation of Binomial Probabilities* (2000): the saddle-point form keeps
//! the relative error of a term near 1e-15 even where the term itself is 1e-300. Tails are sums of positive terms.
//! Interval: C. J. Clopper and E. S. Pearson, *Biometrika* 26 (1934) 404-413.

use std::f64::consts::PI;

use super::Tails;

/// A sum of `trials` independent indicators, each 1 with chance `share`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Binomial {
    trials: u64,
    share: f64,
    rest: f64,
}

impl Binomial {
    /// `share` lies between 0 and 1.
    pub fn new(trials: u64, share: f64) -> Self {
        Binomial { trials, share, rest: 1.0 - share }
    }

    /// Fair coins.
    pub fn fair(trials: u64) -> Self {
        Binomial::new(trials, 0.5)
    }

    /// The chance of exactly `count`.
    pub fn mass(&self, count: u64) -> f64 {
        let (n, k) = (self.trials as f64, count as f64);
        if count > self.trials {
            return 0.0;
        }
        if count == 0 {
            return if self.rest < 0.5 { self.rest.powf(n) } else { (n * (-self.share).ln_1p()).exp() };
        }
        if count == self.trials {
            return self.share.powf(n);
        }
        if self.share == 0.0 || self.rest == 0.0 {
            return 0.0;
        }
        let exponent = stirling_error(n)
            - stirling_error(k)
            - stirling_error(n - k)
            - deviance(k, n * self.share)
            - deviance(n - k, n * self.rest);
        exponent.exp() * (n / (2.0 * PI * k * (n - k))).sqrt()
    }

    /// The chance of at most `count`.
    pub fn lower_tail(&self, count: u64) -> f64 {
        self.between(0, count.min(self.trials))
    }

    /// The chance of at least `count`.
    pub fn upper_tail(&self, count: u64) -> f64 {
        if count > self.trials { 0.0 } else { self.between(count, self.trials) }
    }

    /// Both tails of an observed count.
    pub fn tails(&self, count: u64) -> Tails {
        Tails { lower: self.lower_tail(count), upper: self.upper_tail(count) }
    }

    /// Sums the terms from `low` to `high`, starting at the largest of them and going outwards until nothing is added.
    fn between(&self, low: u64, high: u64) -> f64 {
        if low == 0 && high == self.trials {
            return 1.0;
        }
        let mode = (((self.trials + 1) as f64) * self.share).floor() as u64;
        let start = mode.clamp(low, high);
        let largest = self.mass(start);
        let odds = self.share / self.rest;
        let n = self.trials as f64;
        let mut sum = largest;
        let mut term = largest;
        for k in start..high {
            term *= (n - k as f64) / (k as f64 + 1.0) * odds;
            sum += term;
            if term < sum * 1e-19 {
                break;
            }
        }
        term = largest;
        for k in (low + 1..=start).rev() {
            term *= k as f64 / (n - k as f64 + 1.0) / odds;
            sum += term;
            if term < sum * 1e-19 {
                break;
            }
        }
        sum.min(1.0)
    }
}

/// An upper tail that is carried along while trials are added and the count is raised, each step a few multiplications.
/// For searching through many sizes; a single tail is better taken from [`Binomial`].
#[derive(Clone, Copy, Debug)]
pub struct CarriedTail {
    trials: f64,
    count: f64,
    share: f64,
    /// The chance of at least `count`.
    tail: f64,
    /// The chance of exactly one less.
    below: f64,
}

impl CarriedTail {
    /// The chance that all of `trials` count. `share` lies between 0 and 1, ends excluded.
    pub fn all(trials: u64, share: f64) -> Self {
        let trials = trials as f64;
        let below = trials * share.powf(trials - 1.0) * (1.0 - share);
        CarriedTail { trials, count: trials, share, tail: share.powf(trials), below }
    }

    /// The chance of at least the present count in the present number of trials.
    pub fn tail(&self) -> f64 {
        self.tail
    }

    /// One more trial, the same count.
    pub fn add_trial(&mut self) {
        self.tail += self.share * self.below;
        self.below *= (self.trials + 1.0) / (self.trials + 2.0 - self.count) * (1.0 - self.share);
        self.trials += 1.0;
    }

    /// The same trials, a count higher by one.
    pub fn raise_count(&mut self) {
        self.below *= (self.trials + 1.0 - self.count) / self.count * self.share / (1.0 - self.share);
        self.tail -= self.below;
        self.count += 1.0;
    }
}

/// The Clopper-Pearson interval for a share of `count` in `trials`, at the given confidence.
///
/// Each limit is where the observed count becomes as improbable as (1 - confidence)/2. With no trials nothing is known.
pub fn exact_interval(count: u64, trials: u64, confidence: f64) -> (f64, f64) {
    if trials == 0 {
        return (0.0, 1.0);
    }
    let tail = (1.0 - confidence) / 2.0;
    let low = if count == 0 { 0.0 } else { share_with_upper_tail(count, trials, tail) };
    let high = if count == trials { 1.0 } else { 1.0 - share_with_upper_tail(trials - count, trials, tail) };
    (low, high)
}

/// The share for which at least `count` of `trials` has chance `tail`.
///
/// The logarithm of the chance is a concave function of the logarithm of the share, so that Newton steps between the
/// logarithms lead to the solution from any start; the bracket is for where the chance is too small for a number.
fn share_with_upper_tail(count: u64, trials: u64, tail: f64) -> f64 {
    let (mut low, mut high) = (0.0, 1.0);
    let mut share = (count as f64 / trials as f64).min(1.0 - 1e-12);
    for _ in 0..200 {
        let null = Binomial::new(trials, share);
        let chance = null.upper_tail(count);
        if chance > tail {
            high = share
        } else {
            low = share
        }
        let elasticity = count as f64 * null.mass(count) / chance;
        let mut next = share * ((tail / chance).ln() / elasticity).exp();
        if !(next >= low && next <= high) {
            next = 0.5 * (low + high);
        }
        // The error after a Newton step is about the square of the step.
        if (next - share).abs() <= 1e-12 * share {
            return next;
        }
        share = next;
    }
    share
}

/// ln(gamma(n + 1)) less Stirling's formula, for whole or half n. Exact products below 16, the asymptotic series above.
pub(super) fn stirling_error(n: f64) -> f64 {
    if n < 16.0 {
        let (mut gamma, mut factor) = (if n.fract() == 0.0 { 1.0 } else { PI.sqrt() }, n);
        while factor > 0.0 {
            gamma *= factor;
            factor -= 1.0;
        }
        return gamma.ln() - (n + 0.5) * n.ln() + n - 0.5 * (2.0 * PI).ln();
    }
    let square = n * n;
    (1.0 / 12.0 - (1.0 / 360.0 - (1.0 / 1260.0 - (1.0 / 1680.0 - 1.0 / 1188.0 / square) / square) / square) / square) / n
}

/// x ln(x/m) + m - x without cancellation near x = m.
pub(super) fn deviance(x: f64, mean: f64) -> f64 {
    if (x - mean).abs() < 0.1 * (x + mean) {
        let v = (x - mean) / (x + mean);
        let mut sum = (x - mean) * v;
        let mut term = 2.0 * x * v;
        let v_square = v * v;
        for j in 1..1000 {
            term *= v_square;
            let next = sum + term / f64::from(2 * j + 1);
            if next == sum {
                break;
            }
            sum = next;
        }
        return sum;
    }
    x * (x / mean).ln() + mean - x
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Sums of Pascal's triangle in 128-bit integers are exact.
    #[test]
    fn fair_tails_agree_with_integer_counts() {
        for n in 1..=100_u64 {
            let mut row = vec![1_u128];
            for _ in 0..n {
                let mut next = vec![1_u128];
                next.extend(row.windows(2).map(|pair| pair[0] + pair[1]));
                next.push(1);
                row = next;
            }
            let scale = 2f64.powi(n as i32);
            for k in 0..=n as usize {
                let exact: u128 = row[k..].iter().sum();
                let expected = exact as f64 / scale;
                let got = Binomial::fair(n).upper_tail(k as u64);
                assert!((got - expected).abs() <= 1e-13 * expected, "n {n} k {k}: {got:e} {expected:e}");
                let mirrored = Binomial::fair(n).lower_tail(n - k as u64);
                assert!((mirrored - expected).abs() <= 1e-13 * expected);
            }
        }
    }

    #[test]
    fn limits_are_where_the_chance_is_the_stated_one() {
        for trials in [1, 2, 5, 52, 1000, 100_000] {
            for count in [1, trials / 3 + 1, trials / 2 + 1, trials] {
                for confidence in [0.5, 0.95, 0.999_999] {
                    let tail = (1.0 - confidence) / 2.0;
                    let (low, _) = exact_interval(count, trials, confidence);
                    let chance = Binomial::new(trials, low).upper_tail(count);
                    assert!((chance - tail).abs() < 1e-9 * tail, "{count} of {trials} at {confidence}: {chance} {tail}");
                }
            }
        }
    }

    #[test]
    fn a_carried_tail_agrees_with_the_one_from_scratch() {
        for share in [0.25, 0.5, 0.75] {
            let mut carried = CarriedTail::all(5, share);
            let mut count = 5;
            for trials in 5..2000 {
                if trials > 5 {
                    carried.add_trial();
                }
                if carried.tail() > 0.05 {
                    carried.raise_count();
                    count += 1;
                }
                let expected = Binomial::new(trials, share).upper_tail(count);
                assert!((carried.tail() - expected).abs() < 1e-13, "{trials} {count} {share}: {} {expected}", carried.tail());
            }
        }
    }

    include!("../../tests/reference/binomial_tails.rs");

    /// Reference values: mpmath with 60 digits, exact rational shares.
    #[test]
    fn tails_agree_with_high_precision() {
        for (n, k, share, lower, upper) in REFERENCE_BINOMIAL {
            let null = Binomial::new(n, share);
            for (got, expected) in [(null.lower_tail(k), lower), (null.upper_tail(k), upper)] {
                assert!((got - expected).abs() <= 1e-11 * expected, "n {n} k {k} share {share}: {got:e} {expected:e}");
            }
        }
    }

    /// Reference values: SciPy 1.17.1, `binomtest(k, n).proportion_ci(level, "exact")`.
    #[test]
    fn interval_agrees_with_scipy() {
        for (n, k, level, low, high) in REFERENCE_INTERVAL {
            let (got_low, got_high) = exact_interval(k, n, level);
            assert!((got_low - low).abs() < 1e-10 && (got_high - high).abs() < 1e-10, "{k}/{n}: {got_low} {got_high}");
        }
    }
}
