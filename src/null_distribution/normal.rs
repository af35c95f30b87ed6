//! The standard normal distribution, far tails included.

use statrs::function::erf;

/// The chance that a standard normal variable is at least `z`.
pub fn upper_tail(z: f64) -> f64 {
    0.5 * erf::erfc(z / std::f64::consts::SQRT_2)
}

/// The chance that a standard normal variable is at most `z`.
pub fn lower_tail(z: f64) -> f64 {
    upper_tail(-z)
}

/// The value that a standard normal variable exceeds with chance `p`, for `p` in (0, 1).
pub fn upper_quantile(p: f64) -> f64 {
    std::f64::consts::SQRT_2 * erf::erfc_inv(2.0 * p)
}

/// Both tails of an integer statistic with mean `mean` and variance `variance`, corrected for continuity by
/// `step`/2, where `step` is the distance between neighbouring values of the statistic.
pub fn corrected_tails(statistic: f64, mean: f64, variance: f64, step: f64) -> super::Tails {
    let deviation = statistic - mean;
    let sd = variance.sqrt();
    super::Tails { lower: lower_tail((deviation + step / 2.0) / sd), upper: upper_tail((deviation - step / 2.0) / sd) }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Reference values: mpmath 1.4.1 with 50 digits, `erfc(z / sqrt(2)) / 2`.
    #[test]
    fn far_tails_keep_their_digits() {
        for (z, expected) in REFERENCE_TAILS {
            let relative = (upper_tail(z) - expected).abs() / expected;
            assert!(relative < 1e-10, "z = {z}: relative error {relative:e}");
        }
    }

    include!("../../tests/reference/normal_tails.rs");
}
