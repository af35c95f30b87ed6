//! The sum of n independent uniform variables on (0, 1): the null distribution of the centroid of event times.
//!
//! The density f of the sum follows the recursion f_m(x) = (x f_(m-1)(x) + (m - x) f_(m-1)(x - 1)) / (m - 1), and the
//! chance of a sum of at most x is f_(n+1)(x) + f_(n+1)(x - 1) + ... All steps add positive numbers, while the usual
//! closed form (J. O. Irwin 1927 and P. Hall 1927, *Biometrika* 19) alternates in sign and loses all digits beyond n of
//! about 20.
//!
//! Source: C. de Boor (1972), On calculating with B-splines, *Journal of Approximation Theory* 6, 50-62; the sum's
//! density is the B-spline on whole-number knots.

use super::Tails;

/// The most variables for which the distribution is worked out; time grows with their square.
pub const MOST_UNIFORMS: usize = 5_000;

/// The chance that the sum of `n` uniform variables is at most `x`.
pub fn lower_tail(n: usize, x: f64) -> f64 {
    if x <= 0.0 {
        return if n == 0 && x == 0.0 { 1.0 } else { 0.0 };
    }
    if x >= n as f64 {
        return 1.0;
    }
    let whole = x.floor() as usize;
    let rest = x - whole as f64;
    let mut density = vec![0.0; whole + 1];
    density[0] = 1.0;
    for m in 2..=n + 1 {
        for j in (0..=whole.min(m - 1)).rev() {
            let here = (rest + j as f64) * density[j];
            let before = if j > 0 { (m as f64 - rest - j as f64) * density[j - 1] } else { 0.0 };
            density[j] = (here + before) / (m - 1) as f64;
        }
    }
    density.iter().sum::<f64>().min(1.0)
}

/// Both tails of a sum `x` of `n` variables. The distance `below_top` from x to n is asked for by itself, so that it
/// keeps its digits when it is small.
pub fn tails(n: usize, x: f64, below_top: f64) -> Tails {
    Tails { lower: lower_tail(n, x), upper: lower_tail(n, below_top) }
}

#[cfg(test)]
mod tests {
    use super::*;

    include!("../../tests/reference/sum_of_uniforms.rs");

    /// Reference values: the alternating closed form in exact rational arithmetic.
    #[test]
    fn tails_agree_with_exact_rationals() {
        for (n, x, lower, upper) in REFERENCE_SUM_OF_UNIFORMS {
            let got = tails(n, x, n as f64 - x);
            for (got, expected) in [(got.lower, lower), (got.upper, upper)] {
                assert!((got - expected).abs() <= 1e-12 * expected, "{n} {x}: {got:e} {expected:e}");
            }
        }
    }

    #[test]
    fn the_ends_are_certain() {
        assert_eq!((lower_tail(3, 0.0), lower_tail(3, 3.0), lower_tail(1, 0.25)), (0.0, 1.0, 0.25));
    }
}
