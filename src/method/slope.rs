//! What the tests that report a slope have in common: the time axis, the unit of a slope, and the limits of the median slope.
//!
//! The slope is the median of the slopes between all pairs of readings from different moments (Theil 1950, Sen 1968). Taking
//! a slope off the readings leaves S with as many rises as there are steeper slopes and as many falls as there are flatter
//! ones, so the null distribution of S tells at which places among the sorted slopes the limits stand.
//!
//! # Sources
//! H. Theil (1950), A rank-invariant method of linear and polynomial regression analysis, *Proceedings of the Royal
//! Netherlands Academy of Sciences* 53, 386-392, 521-525, 1397-1412. P. K. Sen (1968), *Journal of the American Statistical
//! Association* 63, 1379-1389, section 5. R. O. Gilbert (1987), *Statistical Methods for Environmental Pollution Monitoring*,
//! section 16.5 (limits at places between two slopes). M. Hollander and D. A. Wolfe (1999), *Nonparametric Statistical
//! Methods*, 2nd ed., section 9.3 (limits from the exact null distribution).

use super::kendall::{Ordered, Score};
use super::{Fact, Refusal, Source};
use crate::comparison::{Point, Slopes};
use crate::null_distribution::ordered_table::MOST_PRODUCTS;
use crate::null_distribution::{Lattice, normal};
use crate::reading::moment::MomentKind;
use crate::reading::{Series, Value};

/// The mean Gregorian year in days.
pub const DAYS_A_YEAR: f64 = 365.2425;

crate::choices! {
    /// Over which length of time the slope is stated.
    pub enum Per {
        /// A year where the moments are dates, else one step of the moments: the next reading, or 1 where they are numbers.
        Usual = "usual",
        /// One day; the moments must be dates.
        Day = "day",
        /// Seven days; the moments must be dates.
        Week = "week",
        /// The twelfth part of a year; the moments must be dates.
        Month = "month",
        /// A year of 365.2425 days; the moments must be dates.
        Year = "year",
        /// One step of the moments: the next reading, 1 where they are numbers, the usual distance where they are dates.
        Step = "step",
    }
}

crate::choices! {
    /// From what the limits of the slope are found.
    pub enum LimitsBy {
        /// From the exact null distribution of S where feasible, else from the normal one.
        Best = "best",
        /// From the exact null distribution of S for readings that all differ, or a refusal.
        Exact = "exact",
        /// From the normal distribution with the variance of S, at whole places further out.
        Normal = "normal",
        /// The same, at places between two slopes, as Gilbert has it.
        Interpolated = "interpolated",
    }
}

/// Where the slope's methods were published.
pub const SOURCES: [Source; 2] = [
    Source {
        authors: "P. K. Sen",
        year: 1968,
        title: "Estimates of the regression coefficient based on Kendall's tau",
        place: "Journal of the American Statistical Association 63, 1379-1389",
    },
    Source {
        authors: "H. Theil",
        year: 1950,
        title: "A rank-invariant method of linear and polynomial regression analysis",
        place: "Proceedings of the Royal Netherlands Academy of Sciences 53, 386-392, 521-525, 1397-1412",
    },
];

/// A time axis on which slopes are stated: how many units of the moments make one, and what it is called.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// Units of the moments' own axis in one unit of this one.
    pub length: f64,
    /// What stands behind the unit of the readings, such as `a year`.
    pub words: &'static str,
}

impl Axis {
    /// The axis that was asked for.
    ///
    /// # Errors
    /// A length of time is asked for where the moments are no dates.
    pub fn of(series: &Series, per: Per) -> Result<Self, Refusal> {
        let kind = series.moments.kind();
        let dated = |length, words| match kind {
            MomentKind::Date => Ok(Axis { length, words }),
            _ => Err(Refusal::Because(format!(
                "the slope can be stated per {} only where the moments are dates; send dates, or per=step",
                per.word()
            ))),
        };
        match per {
            Per::Day => dated(1.0, "a day"),
            Per::Week => dated(7.0, "a week"),
            Per::Month => dated(DAYS_A_YEAR / 12.0, "a month"),
            Per::Year => dated(DAYS_A_YEAR, "a year"),
            Per::Usual if kind == MomentKind::Date => dated(DAYS_A_YEAR, "a year"),
            Per::Step if kind == MomentKind::Date => dated(usual_distance(series), "from one reading to the next"),
            Per::Usual | Per::Step if kind == MomentKind::Number => Ok(Axis { length: 1.0, words: "for each 1 of the moments" }),
            Per::Usual | Per::Step => Ok(Axis { length: 1.0, words: "a reading" }),
        }
    }

    /// The unit of a slope, such as `min a year`.
    pub fn unit(&self, series: &Series) -> String {
        match &series.unit {
            Some(unit) => format!("{unit} {}", self.words),
            None => self.words.into(),
        }
    }
}

/// The median distance in days from one moment to the next.
fn usual_distance(series: &Series) -> f64 {
    let times: Vec<f64> = (0..series.len()).map(|index| series.moments.axis(index)).collect();
    let mut distances: Vec<f64> = times.windows(2).map(|pair| pair[1] - pair[0]).filter(|distance| *distance > 0.0).collect();
    distances.sort_by(f64::total_cmp);
    distances.get(distances.len() / 2).copied().unwrap_or(1.0)
}

/// The number that a value counts as in a slope: a limit counts as itself.
pub fn number(value: Value) -> f64 {
    match value {
        Value::Number(number) | Value::Below(number) | Value::Above(number) => number,
        Value::Missing(_) => f64::NAN,
    }
}

/// Readings as points on an axis.
pub fn points(series: &Series, ordered: &Ordered, axis: &Axis) -> Vec<Point> {
    let point =
        |(&index, &value): (&usize, &Value)| Point { time: series.moments.axis(index) / axis.length, value: number(value) };
    ordered.indices.iter().zip(&ordered.values).map(point).collect()
}

/// The median slope and its limits; a limit is `None` where these readings set none.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    pub slope: Option<f64>,
    pub low: Option<f64>,
    pub high: Option<f64>,
}

impl Estimate {
    /// The median of the slopes, and those at the places of the limits.
    pub fn of(slopes: &Slopes, places: Option<Places>) -> Self {
        let finite = |slope: f64| slope.is_finite().then_some(slope);
        let (low, high) = match places {
            Some(places) => (finite(at(slopes, places.low)), finite(at(slopes, places.high))),
            None => (None, None),
        };
        Estimate { slope: slopes.median().and_then(finite), low, high }
    }

    /// The facts that state it.
    pub fn facts(&self, unit: &str) -> [Fact; 3] {
        [
            Fact::new("slope", "Slope: median of the slopes between all pairs", self.slope).unit(unit),
            Fact::new("slope_low", "Slope, lower limit", self.low).unit(unit),
            Fact::new("slope_high", "Slope, upper limit", self.high).unit(unit),
        ]
    }
}

/// Places among the sorted slopes, 1 being the lowest; they may lie between two slopes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Places {
    pub low: f64,
    pub high: f64,
}

impl Places {
    /// The outermost places that the exact null distribution of S admits: a slope outside them would be given up by a two-sided
    /// test at the risk 1 - `confidence`. `None` if no slope would be.
    pub fn exact(slopes: u64, null: &Lattice, confidence: f64) -> Option<Self> {
        let risk = (1.0 - confidence) / 2.0;
        let mut tail = 0.0;
        let reached = null.points().rev().take_while(|(_, mass)| {
            tail += mass;
            tail <= risk * (1.0 + 1e-12)
        });
        let (least, _) = reached.last()?;
        let low = (slopes as f64 - least as f64) / 2.0 + 1.0;
        Some(Places { low, high: slopes as f64 + 1.0 - low })
    }

    /// The places by the normal approximation, between two slopes or rounded outwards.
    pub fn normal(slopes: u64, variance: f64, confidence: f64, interpolated: bool) -> Self {
        let reach = normal::upper_quantile((1.0 - confidence) / 2.0) * variance.sqrt();
        let low = (slopes as f64 - reach) / 2.0;
        let low = if interpolated { low } else { low.floor() };
        Places { low, high: slopes as f64 + 1.0 - low }
    }
}

/// The places of the limits in the form that is wanted; `None` if these readings set none. The exact ones are those for readings
/// that all differ; the normal ones take the variance of S.
///
/// # Errors
/// The exact limits were asked for where they cannot be counted.
pub fn places(score: &Score, slopes: u64, by: LimitsBy, confidence: f64) -> Result<Option<Places>, Refusal> {
    let feasible = score.effort_if_untied() <= MOST_PRODUCTS;
    match by {
        LimitsBy::Exact if !feasible => {
            Err(Refusal::BeyondExact { what: "readings, with limits_by=exact", have: score.readings(), most: MOST_READINGS })
        }
        LimitsBy::Best | LimitsBy::Exact if feasible => Ok(Places::exact(slopes, &score.null_if_untied(), confidence)),
        _ => Ok(Some(Places::normal(slopes, score.variance(), confidence, by == LimitsBy::Interpolated))),
    }
}

/// About how many readings without ties the exact range takes.
const MOST_READINGS: usize = 1_000;

/// The slope at a place; between two slopes, in proportion.
fn at(slopes: &Slopes, place: f64) -> f64 {
    let rank = |place: f64| if place < 1.0 { 0 } else { place as u64 };
    let share = place - place.floor();
    if share == 0.0 {
        return slopes.at_ranks(&[rank(place)])[0];
    }
    let around = slopes.at_ranks(&[rank(place.floor()), rank(place.ceil())]);
    around[0] + share * (around[1] - around[0])
}
