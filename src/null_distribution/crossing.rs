//! Where a rising function crosses zero.

/// The crossing of a rising function: a bracket is widened from 0, to `width` first, and then halved. Infinite if there
/// is no crossing within `limit`. The relative error is about 1e-14 of the final bracket.
pub fn of_rising(width: f64, limit: f64, rising: impl Fn(f64) -> f64) -> f64 {
    let sign = if rising(0.0) < 0.0 { 1.0 } else { -1.0 };
    let mut reach = width;
    while sign * rising(sign * reach) < 0.0 {
        reach *= 2.0;
        if reach > limit {
            return sign * f64::INFINITY;
        }
    }
    let (mut near, mut far) = (0.0, reach);
    while far - near > 1e-14 * reach {
        let middle = 0.5 * (near + far);
        if sign * rising(sign * middle) < 0.0 { near = middle } else { far = middle }
    }
    sign * 0.5 * (near + far)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn crossings_are_found_on_either_side() {
        assert!((of_rising(0.1, 1e3, |x| x - 37.5) - 37.5).abs() < 1e-11);
        assert!((of_rising(0.1, 1e3, |x| x.exp() - 0.25) - 0.25f64.ln()).abs() < 1e-12);
        assert_eq!(of_rising(0.1, 1e3, |_| -1.0), f64::INFINITY);
    }
}
