//! What the two tests of turning points and of runs up and down have in common: choices and the null distribution.

use super::Refusal;
use super::choices::TieCorrection;
use super::question::PBy;
use super::screen::{TwoSided, UNTIED, attained};
use crate::comparison::{Order, Steps};
use crate::null_distribution::turns::{self, Counted};
use crate::null_distribution::{Attained, By};
use crate::reading::{Series, Value};

crate::choices! {
    /// What becomes of equal neighbours.
    pub enum Equal {
        /// They are taken as one reading.
        Collapse = "collapse",
        /// They stay: a level stretch is no turning point, and a level step ends a run.
        Strict = "strict",
    }
}

/// The number of turning points, or of runs less one, when the readings stand in random order.
pub struct TurnNull {
    /// Its mean.
    pub mean: f64,
    /// Its variance.
    pub variance: f64,
    counted: Counted,
    law: Law,
}

enum Law {
    /// That many readings without ties; they stand in for tied ones if `instead` is set.
    Untied { readings: usize, instead: bool },
    /// How many readings share each value, the lowest value first.
    Tied { sizes: Vec<usize>, readings: usize },
}

impl TurnNull {
    /// The null distribution for a series, at least one step of which is not level.
    pub fn of(series: &Series, steps: &Steps, counted: Counted, ties: TieCorrection) -> Self {
        let values: Vec<Value> = series.present().map(|(_, value)| value).collect();
        let sizes = Order::of_values(&values).map(|order| order.sizes);
        let untied = sizes.as_ref().is_some_and(|sizes| sizes.len() == values.len());
        let law = match sizes {
            Some(sizes) if ties == TieCorrection::Corrected && !untied && turns::steps(&sizes, counted) <= turns::MOST_STEPS => {
                Law::Tied { sizes, readings: values.len() }
            }
            _ => {
                let collapsed = steps.count() + 1 - steps.with_sign(0);
                Law::Untied { readings: if counted == Counted::Turns { collapsed } else { values.len() }, instead: !untied }
            }
        };
        let (mean, variance) = match &law {
            Law::Untied { readings, .. } => turns::untied_moments(*readings),
            Law::Tied { sizes, .. } => turns::tied_moments(sizes, counted),
        };
        TurnNull { mean, variance, counted, law }
    }

    /// What an observed number attains.
    ///
    /// # Errors
    /// The exact p was asked for beyond the stated size.
    pub fn attained(&self, observed: usize, p_by: PBy, two_sided: TwoSided) -> Result<Attained, Refusal> {
        let exact = match &self.law {
            Law::Untied { readings, .. } => p_by.is_exact("readings without ties", *readings, turns::MOST_UNTIED)?,
            Law::Tied { sizes, .. } => {
                let millions = |products: f64| (products / 1e6).ceil() as usize;
                let effort = millions(turns::effort(sizes, self.counted));
                p_by.is_exact("million products of chances for readings tied like these", effort, millions(turns::MOST_PRODUCTS))?
            }
        };
        if !exact {
            let (Law::Untied { readings, .. } | Law::Tied { readings, .. }) = &self.law;
            let range = (-self.mean, *readings as f64 - 2.0 - self.mean);
            return Ok(Attained::normal(observed as f64 - self.mean, range, self.variance, 0.5, By::NORMAL));
        }
        Ok(match &self.law {
            Law::Tied { sizes, .. } => attained(&turns::tied(sizes, self.counted), observed as i64, two_sided),
            Law::Untied { readings, instead } => {
                let attained = attained(&turns::untied(*readings), observed as i64, two_sided);
                Attained { by: if *instead { UNTIED } else { By::Exact }, ..attained }
            }
        })
    }

    /// The observed number less its mean, in standard deviations; `None` if it cannot vary.
    pub fn standardised(&self, observed: usize) -> Option<f64> {
        (self.variance > 0.0).then(|| (observed as f64 - self.mean) / self.variance.sqrt())
    }

    /// What to bear in mind about level steps, limits and ties.
    pub fn cautions(&self, series: &Series, steps: &Steps, equal: Equal) -> Vec<String> {
        let mut cautions = Vec::new();
        let level = steps.with_sign(0);
        if 4 * level >= steps.count() {
            let treatment = match equal {
                Equal::Collapse => "equal neighbours were taken as one reading",
                Equal::Strict => "a level step ends a run and is no part of a turning point",
            };
            cautions.push(format!("{level} of {} steps are level; {treatment}.", steps.count()));
        }
        if series.values.iter().any(|value| value.is_censored()) {
            cautions
                .push("Some readings are known only as limits; a step whose direction is not certain counts as level.".into());
        }
        if matches!(self.law, Law::Untied { instead: true, .. }) {
            cautions.push(
                "Some readings are equal, but p refers to readings without ties; readings of few different values turn more often, so p is too small for an alternating order and too large for a smooth one."
                    .into(),
            );
        }
        cautions
    }
}
