//! A time on (0, 1) whose density grows as exp(g t): where an event falls if the event rate grows exponentially.

/// Mean and variance of the time under growth `g`; 1/2 and 1/12 without growth.
pub fn moments(g: f64) -> (f64, f64) {
    let square = g * g;
    if g.abs() < 0.05 {
        return (0.5 + g / 12.0 - g * square / 720.0, 1.0 / 12.0 - square / 240.0 + square * square / 6048.0);
    }
    let mean = if g > 0.0 { 1.0 / -(-g).exp_m1() - 1.0 / g } else { 1.0 - 1.0 / -g.exp_m1() - 1.0 / g };
    let half = (g.abs() / 2.0).sinh();
    (mean, 1.0 / square - 0.25 / (half * half))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Numerical integration of the density by Simpson's rule.
    #[test]
    fn agrees_with_integration() {
        for g in [-30.0_f64, -2.0, -0.051, -0.049, 1e-6, 0.03, 0.3, 5.0, 40.0] {
            let steps = 20_000;
            let integrate = |of: &dyn Fn(f64) -> f64| -> f64 {
                let width = 1.0 / f64::from(steps);
                let at = |i: i32| (g * (f64::from(i) * width - 1.0)).exp() * of(f64::from(i) * width);
                (0..steps / 2).map(|i| (at(2 * i) + 4.0 * at(2 * i + 1) + at(2 * i + 2)) * width / 3.0).sum()
            };
            let total = integrate(&|_| 1.0);
            let mean = integrate(&|t| t) / total;
            let variance = integrate(&|t| (t - mean).powi(2)) / total;
            let got = moments(g);
            assert!((got.0 - mean).abs() < 1e-10 && (got.1 - variance).abs() < 1e-10, "{g}: {got:?} {mean} {variance}");
        }
    }
}
