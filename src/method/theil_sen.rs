//! Theil and Sen's slope: how fast do the readings rise or fall?
//!
//! The slope is the median of the slopes between all pairs of readings from different moments; a few wild readings hardly move
//! it. Its limits stand at places among the sorted slopes that follow from the null distribution of Kendall's S, and its p
//! is that of S: the chance of so many rises or falls if there is no slope.
//!
//! # Choices
//! `slope_by=repeated` takes, for each reading, the median of its slopes to all others, and then the median of those medians
//! (Siegel): up to half of the readings may be wild. It has no limits of its own. `limits_by`, `per` and `confidence`: see
//! [`super::slope`]. `dependence` says what is done in p about readings that remember their predecessors; with `variance` the
//! limits of the slope allow for them too. See [`super::dependence`].
//!
//! # Effect
//! The slope itself, with a line through the readings: `intercept` makes as many readings lie above the line as below;
//! `intercept_medians` lets it pass through the median moment and the median reading.
//!
//! # When another test fits better
//! Grades have no slope: `mann-kendall`. Readings that follow the seasons: `seasonal-kendall`.
//!
//! # Sources
//! H. Theil (1950) and P. K. Sen (1968), as cited for the slope. A. F. Siegel (1982), Robust regression using repeated medians,
//! *Biometrika* 69, 242-244.

use super::declaration::{Count, Proportion};
use super::dependence::{self, Dependence, Treatment};
use super::kendall::{EXACT, Ordered, Score};
use super::question::PBy;
use super::slope::{self, Axis, Estimate, LimitsBy, Per, Places, number, points};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::{Point, Slopes};
use crate::reading::Series;

crate::choices! {
    /// Which median of slopes is taken.
    pub enum SlopeBy {
        /// The median of the slopes between all pairs (Theil, Sen).
        Pairs = "pairs",
        /// The median over readings of the median of each one's slopes to all others (Siegel).
        Repeated = "repeated",
    }
}

crate::parameters! {
    /// What Theil and Sen's slope takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Which median of slopes is taken: of all pairs, or repeated medians.
        slope_by: SlopeBy = SlopeBy::Pairs,
        /// Over which length of time the slope is stated.
        per: Per = Per::Usual,
        /// From what the limits of the slope are found.
        limits_by: LimitsBy = LimitsBy::Best,
        /// Confidence of the limits of the slope.
        confidence: Proportion = Proportion(0.95),
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Whether the normal approximation is corrected for continuity.
        continuity: bool = true,
        /// What is done about readings that remember their predecessors: ignore, variance, prewhiten or shuffle.
        dependence: Dependence = Dependence::Ignore,
        /// For dependence=variance: the longest lag that counts; 0 for all.
        lags: Count<0, 100_000> = Count(0),
        /// For dependence=variance: whether lags count whose autocorrelation may well be chance.
        all_lags: bool = false,
        /// For dependence=shuffle: readings in a block; 0 for twice the cube root of their number.
        block: Count<0, 100_000> = Count(0),
        /// For dependence=shuffle: how many random orders are drawn.
        draws: Count<100, 1_000_000> = Count(5_000),
        /// For dependence=shuffle: the seed; the same seed gives the same orders.
        seed: Count<0, 4_294_967_295> = Count(1),
    }
}

/// The test itself.
pub struct TheilSen;

/// The most readings for repeated medians, which take all pairs.
const MOST_REPEATED: usize = 10_000;
/// Up to so many readings, the evidence is listed.
const MOST_LISTED: usize = 2_000;

impl Method for TheilSen {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "theil-sen",
        title: "Theil-Sen slope",
        question: "How fast do the readings rise or fall, and within which limits?",
        null_hypothesis: "There is no slope: every order of the readings is equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Numeric,
        least_readings: 2,
        exact: EXACT,
        assumes: &[
            "The readings lie about a straight line, independent of each other, all with one distribution about it.",
            "Differences of readings mean something.",
            "There is no season, or its effect is small beside the trend.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "Equal readings have slope 0 between them; readings at one moment have no slope. The exact limits are those for readings that all differ, and with ties hold at least the stated confidence.",
        missing: "Gaps stay gaps in time. In a slope a limit such as <0.5 counts as 0.5; in p it is compared where the order is certain.",
        cost: "n log n, plus the counting within the exact range; repeated medians: n squared",
        fits_better: &[("mann-kendall", "the readings are grades"), ("cox-stuart", "the evidence is to be shown in pairs")],
        sources: &[
            slope::SOURCES[0],
            slope::SOURCES[1],
            Source {
                authors: "A. F. Siegel",
                year: 1982,
                title: "Robust regression using repeated medians",
                place: "Biometrika 69, 242-244",
            },
        ],
        repeated_moments: true,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        if series.scale.grades().is_some() {
            let needs = "numbers whose differences mean something";
            return Err(Refusal::Scale { test: Self::CARD.title, needs, are: "graded words" });
        }
        let ordered = Ordered::of(series);
        let score = Score::of(&ordered);
        let axis = Axis::of(series, parameters.per)?;
        let points = points(series, &ordered, &axis);
        let slopes = Slopes::new(points.clone());
        if slopes.count() == 0 {
            return Err(Refusal::Because(
                "all readings stand at one moment; a slope needs readings at two moments at least".into(),
            ));
        }
        if score.rises + score.falls == 0 {
            return Err(Refusal::AllTied { compared: score.pairs() as usize });
        }
        let treated = dependence::judge(series, &ordered, &score, &parameters.treatment())?;
        let (p, smallest) = question.judge(&treated.attained);
        let estimate = match parameters.slope_by {
            SlopeBy::Pairs => {
                let Parameters { limits_by, confidence, .. } = parameters;
                let interpolated = *limits_by == LimitsBy::Interpolated;
                if let Some(variance) = treated.variance {
                    Estimate::of(&slopes, Some(Places::normal(slopes.count(), variance, confidence.0, interpolated)))
                } else {
                    let places = slope::places(&score, slopes.count(), *limits_by, confidence.0)?;
                    Estimate::of(&slopes, places)
                }
            }
            SlopeBy::Repeated => Estimate { slope: repeated_median(&points)?, low: None, high: None },
        };
        let slope = estimate.slope.ok_or_else(|| Refusal::Because("the slope is too steep to be stated as a number".into()))?;
        let unit = axis.unit(series);
        let mut facts = estimate.facts(&unit).to_vec();
        facts.extend([
            Fact::new("slopes", "Pairs of readings from different moments, each with its slope", slopes.count()),
            Fact::new(
                "intercept",
                "Level at moment 0 that leaves as many readings above the line as below",
                residual_median(&points, slope).filter(is_number),
            ),
            Fact::new(
                "intercept_medians",
                "Level at moment 0 of the line through the median moment and the median reading",
                through_medians(&points, slope).filter(is_number),
            ),
            Fact::new("s", "S: rises less falls", score.s()),
            Fact::new("tau", "Kendall's tau-b", score.tau_b()),
        ]);
        facts.extend(treated.facts);
        facts.extend(question.p_facts(&treated.attained));
        let mut cautions = treated.cautions;
        cautions.extend(score.caution_on_ties());
        if ordered.values.iter().any(|value| value.is_censored()) {
            cautions
                .push("In the slope, a limit such as <0.5 counts as 0.5; with many of them it is too flat or too steep.".into());
        }
        Ok(Outcome {
            statistic: Statistic { name: "slope", value: slope },
            p,
            direction: Direction::of(treated.s as f64),
            smallest_p: Some(smallest),
            readings_used: treated.readings,
            facts,
            evidence: (points.len() <= MOST_LISTED)
                .then(|| Evidence::Table(listed(series, &ordered, &points, slope)))
                .into_iter()
                .collect(),
            cautions,
        })
    }
}

impl Parameters {
    fn treatment(&self) -> Treatment {
        Treatment {
            dependence: self.dependence,
            lags: self.lags.0,
            all_lags: self.all_lags,
            block: self.block.0,
            draws: self.draws.0,
            seed: self.seed.0,
            p_by: self.p_by,
            continuity: self.continuity,
        }
    }
}

/// What numbers near the largest one lead to is no number.
fn is_number(value: &f64) -> bool {
    value.is_finite()
}

fn median(mut values: Vec<f64>) -> Option<f64> {
    let middle = values.len() / 2;
    if values.is_empty() {
        return None;
    }
    values.sort_unstable_by(f64::total_cmp);
    Some(if values.len() % 2 == 1 { values[middle] } else { values[middle - 1] + (values[middle] - values[middle - 1]) / 2.0 })
}

/// Siegel's repeated medians.
fn repeated_median(points: &[Point]) -> Result<Option<f64>, Refusal> {
    if points.len() > MOST_REPEATED {
        return Err(Refusal::Because(format!(
            "repeated medians take at most {MOST_REPEATED} readings; there are {}; send slope_by=pairs",
            points.len()
        )));
    }
    let slopes_of = |a: &Point| -> Vec<f64> {
        let others = points.iter().filter(|b| b.time != a.time);
        others.map(|b| (b.value - a.value) / (b.time - a.time)).collect()
    };
    Ok(median(points.iter().filter_map(|point| median(slopes_of(point))).collect()))
}

fn residual_median(points: &[Point], slope: f64) -> Option<f64> {
    median(points.iter().map(|point| point.value - slope * point.time).collect())
}

fn through_medians(points: &[Point], slope: f64) -> Option<f64> {
    let value = median(points.iter().map(|point| point.value).collect())?;
    Some(value - slope * median(points.iter().map(|point| point.time).collect())?)
}

/// Each reading beside the line.
fn listed(series: &Series, ordered: &Ordered, points: &[Point], slope: f64) -> Table {
    let columns = vec![
        Column { key: "reading", label: "Reading" },
        Column { key: "moment", label: "Its moment" },
        Column { key: "value", label: "Its value" },
        Column { key: "line", label: "The line there" },
        Column { key: "above_line", label: "Value less line" },
    ];
    let intercept = residual_median(points, slope).unwrap_or_default();
    let row = |(&index, point): (&usize, &Point)| -> Vec<Datum> {
        let line = intercept + slope * point.time;
        let above = number(series.values[index]) - line;
        let value = Datum::of_reading(series, index);
        let shown = |value: f64| Some(value).filter(is_number);
        vec![(index + 1).into(), series.moments.label(index).into(), value, shown(line).into(), shown(above).into()]
    };
    Table { caption: "Readings and the line".into(), rows: ordered.indices.iter().zip(points).map(row).collect(), columns }
}
