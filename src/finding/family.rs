//! Judging many indicators together: p-values adjusted for the number of looks at chance.
//!
//! Sources: S. Holm (1979), *Scandinavian Journal of Statistics* 6, 65-70; Y. Hochberg (1988), *Biometrika* 75, 800-802;
//! Y. Benjamini and Y. Hochberg (1995), *Journal of the Royal Statistical Society B* 57, 289-300;
//! Y. Benjamini and D. Yekutieli (2001), *Annals of Statistics* 29, 1165-1188.

crate::choices! {
    /// How p-values are adjusted when several indicators are judged together.
    pub enum Adjustment {
        /// Holm: the chance of any false claim stays within the risk, whatever the dependence between indicators.
        Holm = "holm",
        /// Hochberg: the same promise for independent or positively dependent indicators, a little more powerful.
        Hochberg = "hochberg",
        /// Benjamini-Hochberg: the expected share of false claims among the claims stays within the risk, for independent or positively dependent indicators.
        BenjaminiHochberg = "benjamini-hochberg",
        /// Benjamini-Yekutieli: the same promise whatever the dependence.
        BenjaminiYekutieli = "benjamini-yekutieli",
        /// No adjustment: each indicator carries the whole risk alone.
        None = "none",
    }
}

/// The adjusted p-values, in the order of the given ones.
pub fn adjust(p: &[f64], adjustment: Adjustment) -> Vec<f64> {
    let m = p.len();
    let mut order: Vec<usize> = (0..m).collect();
    order.sort_by(|&a, &b| p[a].total_cmp(&p[b]));
    let harmonic: f64 = (1..=m).map(|k| 1.0 / k as f64).sum();
    let factor = |rank: usize| match adjustment {
        Adjustment::Holm | Adjustment::Hochberg => (m - rank) as f64,
        Adjustment::BenjaminiHochberg => m as f64 / (rank + 1) as f64,
        Adjustment::BenjaminiYekutieli => m as f64 * harmonic / (rank + 1) as f64,
        Adjustment::None => 1.0,
    };
    let mut adjusted = vec![0.0; m];
    let mut running: f64 = if adjustment == Adjustment::Holm { 0.0 } else { 1.0 };
    if adjustment == Adjustment::Holm {
        for (rank, &index) in order.iter().enumerate() {
            running = running.max((factor(rank) * p[index]).min(1.0));
            adjusted[index] = running;
        }
    } else {
        for (rank, &index) in order.iter().enumerate().rev() {
            let own = (factor(rank) * p[index]).min(1.0);
            running = running.min(own);
            adjusted[index] = if adjustment == Adjustment::None { own } else { running };
        }
    }
    adjusted
}
