//! The difference-sign test.
//!
//! Each reading is compared with the next one. Without a trend a step up is as probable as a step down; many more steps up
//! than down mean a rise. The steps are not independent (after a step up the next is more often one down), so their number is
//! not binomial: without ties it follows the Eulerian numbers, which lie much closer to the mean.
//!
//! # Choices
//! `ties=corrected` refers the number of steps up to all arrangements of these very readings, the equal ones among them; a rise
//! is judged by the steps up, a fall by the steps down, and a level step helps neither. `ties=ignored` leaves level steps out
//! and refers the steps up to the published distribution of readings without ties, as many as there are steps that are not
//! level, and one.
//!
//! # Effect
//! The share of steps up among the steps that are not level. Because the steps depend on each other, the usual interval for a
//! share would be wrong, and none is in general use.
//!
//! # When another test fits better
//! The test looks only at neighbours, so that it is blind to a slow trend under noise: a sawtooth that rises in many small steps
//! and falls in few large ones is a rise to this test. `mann-kendall` finds trends far more often. This test suits
//! readings whose neighbours are far apart against their noise.
//!
//! # Sources
//! G. H. Moore and W. A. Wallis (1943), Time series significance tests based on signs of differences, *Journal of the American
//! Statistical Association* 38, 153-164. P. A. MacMahon (1915), *Combinatory Analysis*, volume 1, section IV, chapter IV (equal
//! readings). M. G. Kendall (1973), *Time-Series*, Griffin, chapter 2.

use super::choices::TieCorrection;
use super::question::PBy;
use super::screen::UNTIED;
use super::{Card, Claim, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic};
use crate::comparison::{Order, Steps};
use crate::null_distribution::rises::{self, MOST_READINGS};
use crate::null_distribution::{Attained, By, Tails};
use crate::reading::{Series, Value};

crate::parameters! {
    /// What the difference-sign test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// Whether equal readings are allowed for in the null distribution, or level steps are left out.
        ties: TieCorrection = TieCorrection::Corrected,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
    }
}

/// The test itself.
pub struct DifferenceSigns;

impl Method for DifferenceSigns {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "difference-signs",
        title: "Difference-sign test",
        question: "Do more steps from one reading to the next go up than down, or the other way round?",
        null_hypothesis: "Every order of the readings is equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Up to 1,000 readings, with and without ties.",
        assumes: &[
            "Apart from a trend, the readings are independent and come from one distribution.",
            "Readings can be ordered; their differences need not mean anything.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "A level step is neither a rise nor a fall. The exact null distribution has the same equal readings, or level steps are left out.",
        missing: "Gaps are closed up. A step between limits such as <0.5 is level where its direction is not certain.",
        cost: "n squared within the exact range, else n",
        fits_better: &[
            ("mann-kendall", "the trend is slow against the noise between neighbours"),
            ("cox-stuart", "pairs that lie far apart in time are to be shown as evidence"),
        ],
        sources: &[
            Source {
                authors: "G. H. Moore and W. A. Wallis",
                year: 1943,
                title: "Time series significance tests based on signs of differences",
                place: "Journal of the American Statistical Association 38, 153-164",
            },
            Source {
                authors: "P. A. MacMahon",
                year: 1915,
                title: "Combinatory Analysis, volume 1",
                place: "Cambridge University Press, section IV, chapter IV",
            },
            Source { authors: "M. G. Kendall", year: 1973, title: "Time-Series", place: "Griffin, chapter 2" },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let steps = Steps::of(series);
        let (rises, falls, level) = (steps.with_sign(1), steps.with_sign(-1), steps.with_sign(0));
        if rises + falls == 0 {
            return Err(Refusal::AllTied { compared: level });
        }
        let null = Null::of(series, rises + falls, parameters.ties);
        let attained = null.attained(rises, falls, parameters.p_by)?;
        let (p, smallest) = question.judge(&attained);
        let mut facts = vec![
            Fact::new("pairs", "Steps from one reading to the next", steps.count()),
            Fact::new("rises", "Steps up", rises),
            Fact::new("falls", "Steps down", falls),
            Fact::new("ties", "Level steps", level),
            Fact::new(
                "share_of_rises",
                "Share of steps up among the steps that are not level",
                rises as f64 / (rises + falls) as f64,
            ),
            Fact::new("expected", "Steps up expected without a trend", null.mean),
            Fact::new("variance", "Variance of the steps up without a trend", null.variance),
            Fact::new(
                "z",
                "Steps up, standardised, without continuity correction",
                (null.variance > 0.0).then(|| (rises as f64 - null.mean) / null.variance.sqrt()),
            ),
        ];
        facts.extend(question.p_facts(&attained));
        let readings_used = steps.count() + 1;
        Ok(Outcome {
            statistic: Statistic { name: "T", value: rises as f64 },
            p,
            direction: Direction::of(rises as f64 - falls as f64),
            smallest_p: Some(smallest),
            readings_used,
            facts,
            cautions: cautions(series, &steps, &null),
            evidence: vec![Evidence::Pairings(steps.pairings())],
        })
    }
}

/// The number of steps up when the readings stand in random order.
struct Null {
    /// How many readings share each value; all ones without ties.
    sizes: Vec<usize>,
    /// Whether readings without ties stand in for tied ones.
    instead: bool,
    mean: f64,
    variance: f64,
}

impl Null {
    fn of(series: &Series, sloped: usize, ties: TieCorrection) -> Self {
        let values: Vec<Value> = series.present().map(|(_, value)| value).collect();
        let sizes = Order::of_values(&values).map(|order| order.sizes);
        let untied = sizes.as_ref().is_some_and(|sizes| sizes.len() == values.len());
        let (sizes, instead) = match sizes {
            Some(sizes) if untied || ties == TieCorrection::Corrected && values.len() <= MOST_READINGS => (sizes, false),
            _ => (vec![1; sloped + 1], true),
        };
        let (mean, variance) = rises::moments(&sizes);
        Null { sizes, instead, mean, variance }
    }

    fn attained(&self, rises: usize, falls: usize, p_by: PBy) -> Result<Attained, Refusal> {
        let readings = self.sizes.iter().sum();
        if !p_by.is_exact("readings", readings, MOST_READINGS)? {
            let normal = |steps: usize| {
                let most = (readings - 1) as f64 - self.mean;
                Attained::normal(steps as f64 - self.mean, (-self.mean, most), self.variance, 0.5, By::NORMAL)
            };
            let (up, down) = (normal(rises), normal(falls));
            let extremes = Tails { lower: up.extremes.upper, upper: up.extremes.upper };
            return Ok(Attained::doubled(Tails { lower: down.tails.upper, upper: up.tails.upper }, extremes, up.by));
        }
        // Read backwards, steps up become steps down, so both have the same distribution.
        let null = rises::rises(&self.sizes);
        let tails = Tails { lower: null.tails(falls as i64).upper, upper: null.tails(rises as i64).upper };
        let extreme = null.extremes().upper;
        let extremes = Tails { lower: extreme, upper: extreme };
        Ok(Attained::doubled(tails, extremes, if self.instead { UNTIED } else { By::Exact }))
    }
}

fn cautions(series: &Series, steps: &Steps, null: &Null) -> Vec<String> {
    let mut cautions = Vec::new();
    let level = steps.with_sign(0);
    if 4 * level >= steps.count() {
        cautions.push(format!("{level} of {} steps are level and speak for neither direction.", steps.count()));
    }
    if series.values.iter().any(|value| value.is_censored()) {
        cautions.push("Some readings are known only as limits; a step whose direction is not certain counts as level.".into());
    }
    if null.instead {
        cautions.push("Some readings are equal, but p refers to readings without ties; level steps were left out.".into());
    }
    cautions
}
