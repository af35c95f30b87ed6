//! Student's t distribution, for intervals around a mean.

use statrs::distribution::{ContinuousCDF, StudentsT};

/// The value that a t variable with `freedom` degrees of freedom exceeds with chance `p`, for `p` in (0, 1/2).
/// Infinite if `freedom` is not positive.
pub fn upper_quantile(freedom: f64, p: f64) -> f64 {
    StudentsT::new(0.0, 1.0, freedom).map_or(f64::INFINITY, |t| -t.inverse_cdf(p))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Reference values: SciPy 1.17.1, `t.isf(p, freedom)`.
    #[test]
    fn agrees_with_scipy() {
        for (freedom, p, expected) in [
            (1.0, 0.025, 12.706204736174705),
            (1.0, 0.005, 63.65674116287158),
            (1.0, 0.25, 1.0000000000000002),
            (2.0, 0.025, 4.302652729749464),
            (2.0, 0.005, 9.924843200918293),
            (2.0, 0.25, 0.8164965809277261),
            (9.0, 0.025, 2.2621571627982053),
            (9.0, 0.005, 3.2498355415921263),
            (9.0, 0.25, 0.7027221467513264),
            (40.0, 0.025, 2.0210753903062733),
            (40.0, 0.005, 2.7044592674331622),
            (40.0, 0.25, 0.6806727171644491),
            (500.0, 0.025, 1.9647198374673678),
            (500.0, 0.005, 2.5856978351419415),
            (500.0, 0.25, 0.6749807379659394),
        ] {
            let got = upper_quantile(freedom, p);
            assert!((got - expected).abs() < 1e-8 * expected, "{freedom} {p}: {got} {expected}");
        }
    }
}
