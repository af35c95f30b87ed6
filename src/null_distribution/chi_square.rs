//! The chi-square distribution with a whole number of degrees of freedom, its far tails included.
//!
//! The relative error stays below 1e-12; for the upper tail with odd degrees of freedom, where the complementary error
//! function of `statrs` enters, below 1e-10.
//!
//! With v degrees of freedom, s = v/2 and y = x/2, each tail is a sum of positive terms y^a exp(-y) / gamma(a + 1): the
//! upper tail of those with a = s - 1, s - 2, ... down to 0 or 1/2 (plus erfc(sqrt y) for odd v), the lower tail of those
//! with a = s, s + 1, ... Terms are in C. Loader's saddle-point form, see [`binomial`](super::binomial).
//!
//! Source: M. Abramowitz and I. Stegun (1964), *Handbook of Mathematical Functions*, 6.5.29, 26.4.4 and 26.4.5.

use std::f64::consts::PI;

use statrs::function::erf;

use super::Tails;
use super::binomial::{deviance, stirling_error};

/// A sum of squares of independent standard normal variables.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ChiSquare {
    freedom: u64,
}

impl ChiSquare {
    /// At least one degree of freedom.
    pub fn new(freedom: u64) -> Self {
        ChiSquare { freedom: freedom.max(1) }
    }

    /// The chance of at least `x`.
    pub fn upper_tail(&self, x: f64) -> f64 {
        if x <= 0.0 {
            return 1.0;
        }
        let (y, half) = (x / 2.0, self.freedom % 2 == 1);
        let (first, last) = if half { (0.5, self.freedom as f64 / 2.0 - 1.0) } else { (0.0, self.freedom as f64 / 2.0 - 1.0) };
        let beyond = if half { erf::erfc(y.sqrt()) } else { 0.0 };
        (beyond + if last < first { 0.0 } else { between(y, first, last) }).min(1.0)
    }

    /// The chance of at most `x`.
    pub fn lower_tail(&self, x: f64) -> f64 {
        if x <= 0.0 { 0.0 } else { between(x / 2.0, self.freedom as f64 / 2.0, f64::INFINITY).min(1.0) }
    }

    /// Both tails of an observed value.
    pub fn tails(&self, x: f64) -> Tails {
        Tails { lower: self.lower_tail(x), upper: self.upper_tail(x) }
    }

    /// The value that is exceeded with chance 1 - `p`, for `p` in (0, 1).
    pub fn lower_quantile(&self, p: f64) -> f64 {
        let (mut low, mut high) = (0.0, self.freedom as f64);
        while self.lower_tail(high) < p {
            (low, high) = (high, 2.0 * high);
        }
        while high - low > 1e-15 * high {
            let middle = 0.5 * (low + high);
            if middle <= low || middle >= high {
                break;
            }
            if self.lower_tail(middle) < p { low = middle } else { high = middle }
        }
        0.5 * (low + high)
    }
}

/// The term y^a exp(-y) / gamma(a + 1), for whole or half a.
fn term(y: f64, a: f64) -> f64 {
    if a == 0.0 {
        return (-y).exp();
    }
    (-stirling_error(a) - deviance(a, y)).exp() / (2.0 * PI * a).sqrt()
}

/// The terms for a = `first`, `first` + 1, ..., `last`, from the largest outwards until nothing is added.
fn between(y: f64, first: f64, last: f64) -> f64 {
    let start = (first + (y - first).max(0.0).floor()).min(last);
    let largest = term(y, start);
    let (mut sum, mut a, mut next) = (largest, start, largest);
    while a < last {
        a += 1.0;
        next *= y / a;
        sum += next;
        if next < sum * 1e-19 {
            break;
        }
    }
    (a, next) = (start, largest);
    while a > first {
        next *= a / y;
        a -= 1.0;
        sum += next;
        if next < sum * 1e-19 {
            break;
        }
    }
    sum
}

#[cfg(test)]
mod tests {
    use super::*;

    include!("../../tests/reference/chi_square_tails.rs");

    /// Reference values: mpmath with 60 digits, regularised incomplete gamma functions.
    #[test]
    fn tails_agree_with_high_precision() {
        for (freedom, x, lower, upper) in REFERENCE_CHI_SQUARE {
            let tails = ChiSquare::new(freedom).tails(x);
            let of_upper = if freedom % 2 == 0 { 1e-12 } else { 1e-10 };
            for (got, expected, relative) in [(tails.lower, lower, 1e-12), (tails.upper, upper, of_upper)] {
                assert!((got - expected).abs() <= relative * expected, "{freedom} {x}: {got:e} {expected:e}");
            }
        }
    }

    #[test]
    fn quantiles_are_where_the_tail_is() {
        for freedom in [1, 2, 3, 7, 20, 200] {
            for p in [1e-6, 0.025, 0.5, 0.975] {
                let null = ChiSquare::new(freedom);
                assert!((null.lower_tail(null.lower_quantile(p)) - p).abs() < 1e-13);
            }
        }
    }
}
