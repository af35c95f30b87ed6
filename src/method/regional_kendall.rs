//! The regional Kendall test: do readings rise or fall over time at many places together?
//!
//! Readings are compared only with readings of the same place, so that differences between places make neither rises nor
//! falls. The places are sent as `blocks`, one label for each reading. See [`super::blocked_kendall`].
//!
//! # Choices
//! `between=correlated` allows for places that resemble each other, as neighbours under the same weather do.
//!
//! # When another test fits better
//! One place: `mann-kendall`. Seasons: `seasonal-kendall`. The same places at every moment, each ranked over time: `page`.
//!
//! # Sources
//! D. R. Helsel and L. M. Frans (2006), Regional Kendall test for trend, *Environmental Science and Technology* 40, 4066-4073; and those
//! of [`super::blocked_kendall`].

use super::blocked_kendall::{Between, Blocked, Manner, SOURCES};
use super::declaration::Proportion;
use super::kendall::MISSING;
use super::question::PBy;
use super::slope::{Axis, LimitsBy, Per};
use super::{Card, Claim, Method, Outcome, Question, Refusal, ScaleNeeded, Source};
use crate::comparison::groups::places;
use crate::reading::Series;
use crate::reading::moment::MomentKind;

crate::parameters! {
    /// What the regional Kendall test takes beyond readings, blocks, seek and risk.
    pub struct Parameters {
        /// Whether the places are independent of each other or correlated.
        between: Between = Between::Independent,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Whether the normal approximation is corrected for continuity.
        continuity: bool = true,
        /// Over which length of time the slope is stated.
        per: Per = Per::Usual,
        /// From what the limits of the slope are found.
        limits_by: LimitsBy = LimitsBy::Best,
        /// Confidence of the limits of the slope.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct RegionalKendall;

impl Method for RegionalKendall {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "regional-kendall",
        title: "Regional Kendall test for trend",
        question: "Do later readings tend to be higher, or lower, than earlier ones of the same place, over all places?",
        null_hypothesis: "Within each place, every order of the readings is equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 4,
        exact: "Up to 500 million products of chances, such as 40 moments at 12 places.",
        assumes: &[
            "Apart from a trend, the readings of a place are independent and come from one distribution, which may differ from that of other places.",
            "The places share one trend; the test of homogeneity looks at that.",
            "Places are independent of each other, or between=correlated is sent.",
            "Seek and risk were declared before looking, and the readings are judged once.",
        ],
        ties: "A tied pair counts neither as a rise nor as a fall; the exact null distribution and the variance have the same ties.",
        missing: MISSING,
        cost: "n log n, plus the counting within the exact range; between=correlated: moments squared times places squared",
        fits_better: &[
            ("mann-kendall", "there is one place"),
            ("seasonal-kendall", "the blocks are seasons"),
            ("page", "all places were read at the same few moments"),
        ],
        sources: &[
            Source {
                authors: "D. R. Helsel and L. M. Frans",
                year: 2006,
                title: "Regional Kendall test for trend",
                place: "Environmental Science and Technology 40, 4066-4073",
            },
            SOURCES[1],
            SOURCES[2],
        ],
        repeated_moments: true,
        blocks: true,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let Some(blocks) = &series.blocks else {
            return Err(Refusal::Because("the places are not known; send blocks with the place of each reading".into()));
        };
        let axis = Axis::of(series, parameters.per)?;
        let mut counted = vec![0.0; blocks.count()];
        let times: Vec<f64> = match series.moments.kind() {
            MomentKind::Date | MomentKind::Number => {
                (0..series.len()).map(|index| series.moments.axis(index) / axis.length).collect()
            }
            MomentKind::Label => places(series).into_iter().map(|place| place as f64).collect(),
            MomentKind::Position => (0..series.len())
                .map(|index| {
                    counted[blocks.block(index)] += 1.0;
                    counted[blocks.block(index)]
                })
                .collect(),
        };
        let labels: Vec<String> = (0..blocks.count()).map(|block| blocks.label(block).to_owned()).collect();
        let blocked = Blocked::of(series, &labels, |index| (blocks.block(index), times[index]))?;
        let unit = series.scale.grades().is_none().then(|| axis.unit(series));
        let Parameters { between, p_by, continuity, limits_by, confidence, .. } = *parameters;
        let manner = Manner { between, p_by, continuity, limits_by, confidence };
        blocked.judge(series, question, &manner, unit.as_deref(), "place")
    }
}
