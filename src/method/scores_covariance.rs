//! The covariance of two Kendall scores over the same moments, when there is no trend.
//!
//! With K the sum over pairs of moments of the product of the two signs, and R and R' the ranks, the covariance is
//! (K + 4 Σ R R' - n (m+1)(m'+1)) / 3, where n counts the moments and m and m' the readings that are there; a missing reading
//! has the mean rank.
//!
//! Sources: E. J. Dietz and T. J. Killeen (1981), *Journal of the American Statistical Association* 76, 169-174; R. M. Hirsch and
//! J. R. Slack (1984), A nonparametric trend test for seasonal data with serial dependence, *Water Resources Research* 20,
//! 727-732 (missing readings).

use std::cmp::Ordering;

use crate::reading::Value;

/// The covariance of the scores of two series, one reading or none for each moment, moments in time order.
pub fn covariance(first: &[Option<Value>], second: &[Option<Value>]) -> f64 {
    let n = first.len().min(second.len());
    let mut concordance = 0_i64;
    let mut products = 0.0;
    let present = |values: &[Option<Value>]| values[..n].iter().flatten().count() as f64;
    let (m, other_m) = (present(first), present(second));
    for later in 0..n {
        let (mut above, mut other_above) = (0_i64, 0_i64);
        for earlier in 0..n {
            let signs = (sign(first, earlier, later), sign(second, earlier, later));
            above += signs.0;
            other_above += signs.1;
            if earlier < later {
                concordance += signs.0 * signs.1;
            }
        }
        products += (m + 1.0 + above as f64) / 2.0 * ((other_m + 1.0 + other_above as f64) / 2.0);
    }
    (concordance as f64 + 4.0 * products - n as f64 * (m + 1.0) * (other_m + 1.0)) / 3.0
}

/// 1 where the second reading is higher, -1 where it is lower, 0 where it is neither or one is missing.
fn sign(values: &[Option<Value>], a: usize, b: usize) -> i64 {
    match (values[a], values[b]) {
        (Some(a), Some(b)) => match a.compare(b) {
            Some(Ordering::Less) => 1,
            Some(Ordering::Greater) => -1,
            _ => 0,
        },
        _ => 0,
    }
}
