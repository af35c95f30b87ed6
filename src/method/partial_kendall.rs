//! The partial Mann-Kendall test: is there a trend beyond what a second quantity explains?
//!
//! A river's load follows its flow, complaints follow the number of guests. Both the readings and the covariate have a
//! Kendall S with time; without a trend the two vary together, and how much is known from the ranks. The test takes from the
//! readings' S what the covariate's S leads one to expect.
//!
//! # Statistic
//! z = (S - c/v S') / √(V - c²/v), where S and V are the score of the readings and its variance, S' and v those of the covariate,
//! and c their covariance without a trend (Dietz and Killeen 1981). It is referred to the normal distribution; there is no
//! exact form.
//!
//! # When another test fits better
//! Without a second quantity: `mann-kendall`.
//!
//! # Sources
//! C. Libiseller and A. Grimvall (2002), Performance of partial Mann-Kendall tests for trend detection in the presence of
//! covariates, *Environmetrics* 13, 71-84. E. J. Dietz and T. J. Killeen (1981), A nonparametric multivariate test for
//! monotone trend with pharmaceutical applications, *Journal of the American Statistical Association* 76, 169-174.

use super::declaration::List;
use super::kendall::{Ordered, Score};
use super::scores_covariance::covariance;
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Source, Statistic,
    Table,
};
use crate::comparison::counts::beside;
use crate::null_distribution::{Attained, By};
use crate::reading::{Series, Value};

crate::parameters! {
    /// What the partial test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// The covariate: one number for each reading, in the same order.
        covariate: List = List::default(),
    }
}

/// The test itself.
pub struct PartialKendall;

/// Up to so many readings; the covariance takes all pairs.
const MOST_READINGS: usize = 20_000;

impl Method for PartialKendall {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "partial-kendall",
        title: "Partial Mann-Kendall test with a covariate",
        question: "Do the readings rise, or fall, beyond what a second quantity explains?",
        null_hypothesis: "Every order in time of the readings, each with its covariate, is equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 4,
        exact: "There is no exact form.",
        assumes: &[
            "Apart from a trend, the pairs of a reading and its covariate are independent and come from one distribution.",
            "The covariate moves the readings up or down throughout, and is not itself moved by what is looked for.",
            "There are ten readings or more (common practice).",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "A tied pair counts neither as a rise nor as a fall; variances and covariance have the same ties.",
        missing: "A reading is left out where it or its covariate is missing. Limits such as <0.5 are compared where the order is certain and tie where it is not.",
        cost: "n squared",
        fits_better: &[
            ("mann-kendall", "there is no second quantity"),
            ("seasonal-kendall", "the second quantity is the season"),
        ],
        sources: &[
            Source {
                authors: "C. Libiseller and A. Grimvall",
                year: 2002,
                title: "Performance of partial Mann-Kendall tests for trend detection in the presence of covariates",
                place: "Environmetrics 13, 71-84",
            },
            Source {
                authors: "E. J. Dietz and T. J. Killeen",
                year: 1981,
                title: "A nonparametric multivariate test for monotone trend with pharmaceutical applications",
                place: "Journal of the American Statistical Association 76, 169-174",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let Some(cells) = &parameters.covariate.cells else {
            return Err(Refusal::Because("the covariate is absent; send covariate with one number for each reading".into()));
        };
        let indices: Vec<usize> = series.present().map(|(index, _)| index).collect();
        if indices.len() > MOST_READINGS {
            return Err(Refusal::Because(format!(
                "the covariance is computed for at most {MOST_READINGS} readings; there are {}",
                indices.len()
            )));
        }
        let numbers = beside("covariate", cells, series.len(), &indices).map_err(|error| Refusal::Because(error.to_string()))?;
        let ordered = Ordered::new(series, indices);
        let beside = Ordered {
            indices: ordered.indices.clone(),
            values: numbers.into_iter().map(Value::Number).collect(),
            moment_sizes: ordered.moment_sizes.clone(),
        };
        let (own, other) = (Score::of(&ordered), Score::of(&beside));
        let both = |ordered: &Ordered| ordered.values.iter().copied().map(Some).collect::<Vec<_>>();
        let shared = covariance(&both(&ordered), &both(&beside));
        let (own_variance, other_variance) = (own.variance(), other.variance());
        if own.rises + own.falls == 0 {
            return Err(Refusal::AllTied { compared: own.pairs() as usize });
        }
        if other_variance == 0.0 {
            return Err(Refusal::Because(
                "the covariate is the same at all readings, so it explains nothing; use mann-kendall".into(),
            ));
        }
        let expected = shared / other_variance * other.s() as f64;
        let variance = own_variance - shared * shared / other_variance;
        if variance <= 1e-9 * own_variance {
            return Err(Refusal::Because(
                "the covariate puts the readings in the very order that they have, so nothing is left to judge".into(),
            ));
        }
        let excess = own.s() as f64 - expected;
        let most = own.most() as f64;
        let attained = Attained::normal(excess, (-most - expected, most - expected), variance, 0.0, By::Approximation("normal"));
        let (p, smallest) = question.judge(&attained);
        let mut facts = vec![
            Fact::new("s", "S of the readings", own.s()),
            Fact::new("s_covariate", "S of the covariate", other.s()),
            Fact::new("covariance", "Covariance of the two without a trend", shared),
            Fact::new("correlation", "Correlation of the two without a trend", shared / (own_variance * other_variance).sqrt()),
            Fact::new("expected", "S of the readings that the covariate's leads one to expect", expected),
            Fact::new("variance", "Variance of what is left", variance),
            Fact::new("z", "What is left, standardised", excess / variance.sqrt()),
        ];
        facts.extend(question.p_facts(&attained));
        let listed = listed(series, &ordered, &beside);
        Ok(Outcome {
            statistic: Statistic { name: "z", value: excess / variance.sqrt() },
            p,
            direction: Direction::of(excess / variance.sqrt()),
            smallest_p: Some(smallest),
            readings_used: own.readings(),
            facts,
            evidence: vec![Evidence::Table(listed)],
            cautions: own.caution_on_ties().into_iter().collect(),
        })
    }
}

fn listed(series: &Series, ordered: &Ordered, beside: &Ordered) -> Table {
    let columns = vec![
        Column { key: "reading", label: "Reading" },
        Column { key: "moment", label: "Its moment" },
        Column { key: "value", label: "Its value" },
        Column { key: "covariate", label: "Its covariate" },
    ];
    let row = |(&index, covariate): (&usize, &Value)| -> Vec<Datum> {
        vec![(index + 1).into(), series.moments.label(index).into(), Datum::of_reading(series, index), covariate.number().into()]
    };
    Table {
        caption: "Readings and covariate".into(),
        rows: ordered.indices.iter().zip(&beside.values).map(row).collect(),
        columns,
    }
}
