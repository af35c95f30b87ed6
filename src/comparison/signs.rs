//! Signs of the differences among things, summed up as the variance of Kendall's S needs them.
//!
//! Source: H. E. Daniels (1944), The relation between measures of correlation in the universe of sample permutations,
//! *Biometrika* 33, 129-135.

use std::cmp::Ordering;

use crate::reading::Value;

/// Sums over the signs of all differences among n things, such as readings or moments.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Signs {
    /// Ordered pairs that differ.
    pub differing: f64,
    /// The sum over all things of the square of (how many are below it, less how many are above it).
    squared_sums: f64,
    count: f64,
}

impl Signs {
    /// Of things of which `sizes` tells how many share each place in an order, the lowest place first.
    pub fn of_sizes(sizes: &[usize]) -> Self {
        let n: usize = sizes.iter().sum();
        let mut below = 0;
        let mut signs = Signs { differing: 0.0, squared_sums: 0.0, count: n as f64 };
        for &size in sizes {
            let above = n - below - size;
            signs.differing += size as f64 * (n - size) as f64;
            signs.squared_sums += size as f64 * (below as f64 - above as f64).powi(2);
            below += size;
        }
        signs
    }

    /// Of readings, pair by pair: for limits such as `<0.5` that do not fall into one order.
    pub fn of_values(values: &[Value]) -> Self {
        let mut signs = Signs { differing: 0.0, squared_sums: 0.0, count: values.len() as f64 };
        for value in values {
            let (mut sum, mut differing) = (0.0, 0.0);
            for other in values {
                match value.compare(*other) {
                    Some(Ordering::Less) => (sum, differing) = (sum - 1.0, differing + 1.0),
                    Some(Ordering::Greater) => (sum, differing) = (sum + 1.0, differing + 1.0),
                    _ => {}
                }
            }
            signs.differing += differing;
            signs.squared_sums += sum * sum;
        }
        signs
    }

    /// The sum over ordered triples i, j, k of the product of the signs of (i, j) and (i, k).
    fn triples(&self) -> f64 {
        self.squared_sums - self.differing
    }

    /// The variance of S, the sum over pairs of the products of their signs here and there, when the things there are put in
    /// random order.
    pub fn variance_with(&self, other: &Signs) -> f64 {
        let n = self.count;
        if n < 2.0 {
            return 0.0;
        }
        let by_triples = if n > 2.0 { self.triples() * other.triples() / (n * (n - 1.0) * (n - 2.0)) } else { 0.0 };
        by_triples + self.differing * other.differing / (2.0 * n * (n - 1.0))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// M. G. Kendall (1975), *Rank Correlation Methods*, 4th ed., section 4.2: n(n-1)(2n+5)/18, and with ties of t readings
    /// t(t-1)(2t+5)/18 less for each.
    #[test]
    fn the_variance_is_kendalls() {
        let term = |n: f64| n * (n - 1.0) * (2.0 * n + 5.0) / 18.0;
        let untied = Signs::of_sizes(&[1; 10]);
        assert!((untied.variance_with(&untied) - term(10.0)).abs() < 1e-12);
        let tied = Signs::of_sizes(&[3, 1, 2, 4]);
        assert!((tied.variance_with(&untied) - (term(10.0) - term(3.0) - term(2.0) - term(4.0))).abs() < 1e-12);
        let values = [1.0, 1.0, 1.0, 2.0, 3.0, 3.0, 4.0, 4.0, 4.0, 4.0].map(Value::Number);
        assert_eq!(Signs::of_values(&values), tied);
    }
}
