//! Mid-ranks, also of readings some of which are known only as limits.

use std::collections::BTreeMap;

use crate::reading::Value;

/// The different doubled ranks, ascending, and how often each occurs.
pub type Classes = Vec<(u64, usize)>;

/// Twice the mid-rank of each value, none of them missing: readings + 1 + (how many are lower) - (how many are higher).
///
/// Equal values share the mean of the ranks that they take together. A limit such as `<0.5` is lower or higher only than
/// values to which its order is certain; it counts half for each of the others, as in E. A. Gehan (1965), A generalized
/// Wilcoxon test for comparing arbitrarily singly-censored samples, *Biometrika* 52, 203-223. The ranks always add up to
/// n(n + 1)/2. Time grows with n log n.
pub fn doubled_midranks(values: &[Value]) -> Vec<u64> {
    lower_and_higher(values).into_iter().map(|(lower, higher)| (values.len() + 1 + lower - higher) as u64).collect()
}

/// For each value, how many are certainly lower and how many are certainly higher.
pub(super) fn lower_and_higher(values: &[Value]) -> Vec<(usize, usize)> {
    let mut lowest: Vec<(f64, u8)> = values.iter().map(|&value| ends(value).0).collect();
    let mut highest: Vec<(f64, u8)> = values.iter().map(|&value| ends(value).1).collect();
    lowest.sort_by(order);
    highest.sort_by(order);
    let count = |&value: &Value| {
        let (low, high) = ends(value);
        let lower = highest.partition_point(|end| order(end, &low).is_lt());
        let higher = values.len() - lowest.partition_point(|end| order(end, &high).is_le());
        (lower, higher)
    };
    values.iter().map(count).collect()
}

/// The different ranks among readings, and how often each occurs.
pub fn classes(ranks: &[u64]) -> Classes {
    let mut counts = BTreeMap::new();
    for &rank in ranks {
        *counts.entry(rank).or_insert(0) += 1;
    }
    counts.into_iter().collect()
}

/// The largest whole number that divides every difference between the ranks; 1 if there is none.
pub fn unit(classes: &Classes) -> u64 {
    fn common(a: u64, b: u64) -> u64 {
        if b == 0 { a } else { common(b, a % b) }
    }
    classes.windows(2).fold(0, |unit, pair| common(pair[1].0 - pair[0].0, unit)).max(1)
}

/// The ends of what a value may be: the number, and 0 just below it, 1 at it, 2 just above it. A value is certainly lower than
/// another one if its upper end comes before the lower end of the other.
fn ends(value: Value) -> ((f64, u8), (f64, u8)) {
    match value {
        Value::Number(number) => ((number, 1), (number, 1)),
        Value::Below(limit) => ((f64::NEG_INFINITY, 0), (limit, 0)),
        Value::Above(limit) => ((limit, 2), (f64::INFINITY, 2)),
        Value::Missing(_) => ((f64::NEG_INFINITY, 0), (f64::INFINITY, 2)),
    }
}

fn order(a: &(f64, u8), b: &(f64, u8)) -> std::cmp::Ordering {
    a.partial_cmp(b).unwrap_or(std::cmp::Ordering::Equal)
}

#[cfg(test)]
mod tests {
    use super::*;
    use Value::{Above, Below, Number};
    use std::cmp::Ordering;

    /// Each value against each other one.
    #[test]
    fn agrees_with_comparing_all() {
        let values = [
            Number(2.0),
            Below(2.0),
            Number(1.0),
            Below(0.5),
            Above(2.0),
            Number(2.0),
            Above(7.0),
            Number(0.5),
            Number(-0.0),
            Number(0.0),
            Above(-1.0),
            Number(8.0),
        ];
        let count = |value: Value, order| values.iter().filter(|other| other.compare(value) == Some(order)).count();
        let naive: Vec<u64> = values
            .iter()
            .map(|&value| (values.len() + 1 + count(value, Ordering::Less) - count(value, Ordering::Greater)) as u64)
            .collect();
        assert_eq!(doubled_midranks(&values), naive);
        assert_eq!(naive.iter().sum::<u64>(), (values.len() * (values.len() + 1)) as u64);
    }

    #[test]
    fn ties_share_the_mean_rank() {
        assert_eq!(doubled_midranks(&[Number(5.0), Number(1.0), Number(5.0), Number(9.0)]), [5, 2, 5, 8]);
    }
}
