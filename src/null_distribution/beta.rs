//! The beta distribution, and Student's t through it, far tails included.

use statrs::function::beta::beta_reg;

/// The chance that a beta variable with parameters `a` and `b`, both positive, is at most `x`, for `x` in [0, 1].
///
/// `rest` is 1 - `x`, given apart so that an `x` near 1 keeps its digits.
pub fn lower_tail(a: f64, b: f64, x: f64, rest: f64) -> f64 {
    if x <= 0.0 {
        return 0.0;
    }
    if rest <= 0.0 {
        return 1.0;
    }
    if x < 0.5 { beta_reg(a, b, x) } else { complement_if_large(a, b, x, rest) }
}

/// Above one half, the small tail on the other side is computed first, with `rest` as it was given.
fn complement_if_large(a: f64, b: f64, x: f64, rest: f64) -> f64 {
    if x > a / (a + b) { 1.0 - beta_reg(b, a, rest) } else { beta_reg(a, b, x) }
}

/// The chance that a beta variable is at least `x`.
pub fn upper_tail(a: f64, b: f64, x: f64, rest: f64) -> f64 {
    lower_tail(b, a, rest, x)
}

/// The chance that Student's t with `freedom` degrees of freedom is at least `t`.
pub fn student_upper_tail(freedom: f64, t: f64) -> f64 {
    let square = t * t;
    let beyond = 0.5 * lower_tail(freedom / 2.0, 0.5, freedom / (freedom + square), square / (freedom + square));
    if t >= 0.0 { beyond } else { 1.0 - beyond }
}

#[cfg(test)]
mod tests {
    use super::*;

    include!("../../tests/reference/beta_tails.rs");

    /// Reference values: mpmath 1.4.1 with 150 digits.
    #[test]
    fn far_tails_keep_their_digits() {
        for (a, b, x, lower, upper) in REFERENCE_BETA {
            for (got, expected) in [(lower_tail(a, b, x, 1.0 - x), lower), (upper_tail(a, b, x, 1.0 - x), upper)] {
                assert!((got - expected).abs() <= 1e-10 * expected, "{a} {b} {x}: {got:e} {expected:e}");
            }
        }
    }

    /// Reference values: mpmath 1.4.1; SciPy 1.17.1 `t.sf(t, freedom)` agrees.
    #[test]
    fn student_tails() {
        for (freedom, t, expected) in STUDENT {
            let got = student_upper_tail(freedom, t);
            assert!((got - expected).abs() <= 1e-10 * expected, "{freedom} {t}: {got:e} {expected:e}");
        }
    }

    const STUDENT: [(f64, f64, f64); 8] = [
        (1.0, 0.5773502691896257, 0.3333333333333333),
        (2.0, -2.8284271247461903, 0.947213595499958),
        (7.0, 3.0102239034681917, 0.009827958119259624),
        (96.0, -5.677850546815813, 0.999999927497943),
        (198.0, 1.8802881215919198, 0.03076857161128284),
        (8.0, 40.0, 8.392859439572896e-11),
        (96.0, 30.0, 7.290400685561021e-51),
        (500.0, 0.0, 0.5),
    ];
}
