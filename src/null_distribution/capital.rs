//! The capital of a bettor against the hypothesis that there is no trend.
//!
//! The newest of t readings exceeds some of the earlier ones and is exceeded by the others; their difference, divided by
//! t - 1, is an advantage x between -1 and 1, with mean 0 whatever went before. A bettor who stakes a share L of his capital on
//! each reading multiplies it by 1 + L x; the mean of several such bettors' capitals, some of whom wait before they begin,
//! is a martingale too, and the chance that it ever reaches c is at most 1/c.
//!
//! Logarithms are kept, so that no capital is too large or too small.
//!
//! Source: J. Ville (1939), *Étude critique de la notion de collectif*, Gauthier-Villars, chapter V.

/// When the bettors begin.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Starts {
    /// All of them with the second reading.
    First,
    /// A share of 1/(k(k + 1)) of them after reading k, for k = 1, 2, 3, ...; the shares add up to 1.
    Spread,
}

/// The logarithm of the capital after each reading, from the first on, where it is 0.
///
/// `advantages` holds x for each reading, that of the first being ignored; the stakes lie above 0 and below 1.
pub fn ln_capital(advantages: &[f64], stakes: &[f64], starts: Starts) -> Vec<f64> {
    let each = -(stakes.len() as f64).ln();
    let mut playing = vec![if starts == Starts::First { each } else { f64::NEG_INFINITY }; stakes.len()];
    let after = |(number, &advantage): (usize, &f64)| {
        let readings = number as f64 + 1.0;
        let waiting = match starts {
            Starts::First => f64::NEG_INFINITY,
            Starts::Spread => -readings.ln(),
        };
        if number > 0 {
            // Those who begin after k readings play from reading k + 1 on.
            let beginning = each - (readings * (readings - 1.0)).ln();
            for (ln_capital, &stake) in playing.iter_mut().zip(stakes) {
                if starts == Starts::Spread {
                    *ln_capital = ln_sum([*ln_capital, beginning]);
                }
                *ln_capital += (stake * advantage).ln_1p();
            }
        }
        ln_sum(playing.iter().copied().chain([waiting]))
    };
    advantages.iter().enumerate().map(after).collect()
}

/// The logarithm of a sum of numbers that are given by their logarithms.
pub fn ln_sum(logarithms: impl IntoIterator<Item = f64> + Clone) -> f64 {
    let largest = logarithms.clone().into_iter().fold(f64::NEG_INFINITY, f64::max);
    if largest == f64::NEG_INFINITY {
        return largest;
    }
    largest + logarithms.into_iter().map(|logarithm| (logarithm - largest).exp()).sum::<f64>().ln()
}

#[cfg(test)]
mod tests {
    use super::super::arrangements::for_each;
    use super::*;

    /// The advantage of each reading over the earlier ones, counted pair by pair.
    fn advantages(order: &[usize]) -> Vec<f64> {
        let advantage = |newest: usize| {
            let signs = order[..newest].iter().map(|&earlier| (order[newest] as f64 - earlier as f64).signum());
            signs.sum::<f64>() / (newest as f64).max(1.0)
        };
        (0..order.len()).map(advantage).collect()
    }

    /// Over all orders of up to seven readings, the capital after each reading is 1 on average, and it comes to c or more in
    /// a share of at most 1/c of them.
    #[test]
    fn the_capital_is_a_martingale() {
        for n in 2..=7 {
            for starts in [Starts::First, Starts::Spread] {
                let (mut all, mut sums, mut largest) = (0.0, vec![0.0; n], Vec::new());
                for_each(&vec![1; n], |order| {
                    let capital: Vec<f64> =
                        ln_capital(&advantages(order), &[0.1, 0.5, 0.9], starts).into_iter().map(f64::exp).collect();
                    all += 1.0;
                    sums.iter_mut().zip(&capital).for_each(|(sum, capital)| *sum += capital);
                    largest.push(capital.into_iter().fold(0.0, f64::max));
                });
                assert!(sums.iter().all(|sum| (sum / all - 1.0).abs() < 1e-12), "{n} {starts:?} {sums:?}");
                for &c in &largest {
                    let reached = largest.iter().filter(|&&other| other >= c * (1.0 - 1e-12)).count() as f64;
                    assert!(reached / all <= 1.0 / c * (1.0 + 1e-9), "{n} {starts:?} {c}");
                }
            }
        }
    }

    /// Each bettor's capital multiplied out by itself.
    #[test]
    fn agrees_with_bettors_one_by_one() {
        let x = [0.0, 1.0, -0.5, 0.2, 0.9, -1.0, 0.4];
        let stakes = [0.2, 0.7];
        let product = |stake: f64, from: usize, to: usize| x[from..=to].iter().map(|x| 1.0 + stake * x).product::<f64>();
        for (t, got) in ln_capital(&x, &stakes, Starts::First).into_iter().enumerate() {
            let expected = stakes.iter().map(|&stake| if t == 0 { 1.0 } else { product(stake, 1, t) }).sum::<f64>() / 2.0;
            assert!((got.exp() - expected).abs() < 1e-12);
        }
        for (t, got) in ln_capital(&x, &stakes, Starts::Spread).into_iter().enumerate() {
            let share = |k: usize| 1.0 / (k * (k + 1)) as f64;
            let playing: f64 = (1..=t).map(|k| share(k) * (product(0.2, k, t) + product(0.7, k, t)) / 2.0).sum();
            let waiting = 1.0 - (1..=t).map(share).sum::<f64>();
            assert!((got.exp() - playing - waiting).abs() < 1e-12, "{t}");
        }
    }
}
