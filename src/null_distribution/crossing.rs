//! Where a rising function crosses zero.
//!
//! Source: T. R. Chandrupatla (1997), A new hybrid quadratic/bisection algorithm for finding the zero of a nonlinear function
//! without using derivatives, *Advances in Engineering Software* 28, 145-149.

/// The crossing of a rising function: a bracket is widened from 0, to `width` first, and then narrowed to about 1e-15 of
/// itself. Infinite if there is no crossing within `limit`.
pub fn of_rising(width: f64, limit: f64, rising: impl Fn(f64) -> f64) -> f64 {
    let at_zero = rising(0.0);
    let sign = if at_zero < 0.0 { 1.0 } else { -1.0 };
    let (mut near, mut far) = ((0.0, at_zero), (sign * width, rising(sign * width)));
    while sign * far.1 < 0.0 {
        if far.0.abs() * 2.0 > limit {
            return sign * f64::INFINITY;
        }
        near = far;
        far = (2.0 * far.0, rising(2.0 * far.0));
    }
    narrow(far, near, rising)
}

/// Narrows a bracket between two points, each with the function's value there.
fn narrow(mut a: (f64, f64), mut b: (f64, f64), function: impl Fn(f64) -> f64) -> f64 {
    let mut part = 0.5;
    loop {
        let x = a.0 + part * (b.0 - a.0);
        let new = (x, function(x));
        let c = if (new.1 > 0.0) == (a.1 > 0.0) {
            a
        } else {
            let c = b;
            b = a;
            c
        };
        a = new;
        let best = if a.1.abs() < b.1.abs() { a } else { b };
        let least_part = (f64::EPSILON * best.0.abs() + f64::MIN_POSITIVE) / (b.0 - a.0).abs();
        if least_part >= 0.5 || least_part.is_nan() || best.1 == 0.0 {
            return best.0;
        }
        let (xi, phi) = ((a.0 - b.0) / (c.0 - b.0), (a.1 - b.1) / (c.1 - b.1));
        part = if phi * phi < xi && (1.0 - phi) * (1.0 - phi) < 1.0 - xi {
            let along = (c.0 - a.0) / (b.0 - a.0);
            a.1 / (b.1 - a.1) * c.1 / (b.1 - c.1) + along * a.1 / (c.1 - a.1) * b.1 / (c.1 - b.1)
        } else {
            0.5
        };
        part = part.clamp(least_part, 1.0 - least_part);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn crossings_are_found_on_either_side() {
        assert!((of_rising(0.1, 1e3, |x| x - 37.5) - 37.5).abs() < 1e-11);
        assert!((of_rising(0.1, 1e3, |x| x.exp() - 0.25) - 0.25f64.ln()).abs() < 1e-12);
        assert!((of_rising(0.1, 1e3, |x| (x - 2.0).powi(3)) - 2.0).abs() < 1e-4);
        assert_eq!(of_rising(0.1, 1e3, |x| x), 0.0);
        assert_eq!(of_rising(0.1, 1e3, |_| -1.0), f64::INFINITY);
        assert_eq!(of_rising(0.1, 1e3, |_| 1.0), f64::NEG_INFINITY);
    }
}
