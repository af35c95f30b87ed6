//! The hypergeometric distribution: how many of one kind are among those drawn.

use super::binomial::Binomial;

/// The chance that exactly `count` of `drawn` members, taken at random from `of_kind` of one kind and `others`, are of
/// that kind; `drawn` is at most `of_kind + others`.
///
/// It is a ratio of three binomial terms, each of full relative accuracy (C. Loader 2000, *Fast and Accurate Computation
/// of Binomial Probabilities*, section 4).
pub fn mass(count: u64, of_kind: u64, others: u64, drawn: u64) -> f64 {
    if count > of_kind || count > drawn || drawn - count > others {
        return 0.0;
    }
    let all = of_kind + others;
    if drawn == 0 || drawn == all {
        return 1.0;
    }
    let share = drawn as f64 / all as f64;
    let term = |trials: u64, hits: u64| Binomial::new(trials, share).mass(hits);
    term(of_kind, count) * term(others, drawn - count) / term(all, drawn)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Pascal's triangle in 128-bit integers is exact.
    #[test]
    fn agrees_with_integer_counts() {
        let mut choose = vec![vec![1_u128]];
        for n in 1..=60 {
            let row = (0..=n).map(|k| if k == 0 || k == n { 1 } else { choose[n - 1][k - 1] + choose[n - 1][k] }).collect();
            choose.push(row);
        }
        for (of_kind, others) in [(1, 1), (5, 9), (20, 3), (30, 30), (0, 4), (17, 43)] {
            for drawn in 0..=of_kind + others {
                for count in 0..=drawn.min(of_kind) {
                    let expected = if drawn - count > others {
                        0.0
                    } else {
                        choose[of_kind][count] as f64 * choose[others][drawn - count] as f64
                            / choose[of_kind + others][drawn] as f64
                    };
                    let got = mass(count as u64, of_kind as u64, others as u64, drawn as u64);
                    assert!(
                        (got - expected).abs() <= 1e-13 * expected,
                        "{count} {of_kind} {others} {drawn}: {got:e} {expected:e}"
                    );
                }
            }
        }
    }
}
