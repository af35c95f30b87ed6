//! The seasonal Kendall test: is there a trend once each season is compared only with itself?
//!
//! A January is compared with other Januaries, a Monday with other Mondays, so that the season itself makes neither rises nor
//! falls. The seasons come from the dates, from a stated period, or from labels sent as `blocks`.
//!
//! # Choices
//! `between=correlated` allows for seasons that resemble each other because readings remember their predecessors, with
//! covariances between the seasons' scores; it wants ten years or more (common practice after Hirsch and Slack). See
//! [`super::blocked_kendall`] for the rest.
//!
//! # When another test fits better
//! Without seasons: `mann-kendall`. Places instead of seasons: `regional-kendall`.

use super::blocked_kendall::{Between, Blocked, Manner, SOURCES};
use super::declaration::{Count, Proportion};
use super::kendall::MISSING;
use super::question::PBy;
use super::slope::{self, LimitsBy};
use super::{Card, Claim, Method, Outcome, Question, Refusal, ScaleNeeded};
use crate::reading::Series;
use crate::reading::moment::MomentKind;

crate::choices! {
    /// What a season is.
    pub enum Season {
        /// The blocks or the period if they are sent; else what the distance of the dates suggests: quarter, month, week or weekday.
        Usual = "usual",
        /// The twelve months of the year.
        Month = "month",
        /// The four quarters of the year.
        Quarter = "quarter",
        /// The weeks of the year by ISO 8601.
        Week = "week",
        /// The seven days of the week.
        Weekday = "weekday",
        /// The labels sent as blocks.
        Blocks = "blocks",
    }
}

crate::parameters! {
    /// What the seasonal Kendall test takes beyond readings, seek and risk.
    pub struct Parameters {
        /// What a season is: month, quarter, week or weekday of the dates, the labels sent as blocks, or the usual one.
        season: Season = Season::Usual,
        /// How many readings make one round of the seasons, missing ones counted, where there are neither dates nor blocks; 0 for none.
        period: Count<0, 10_000> = Count(0),
        /// Whether the seasons are independent of each other or correlated.
        between: Between = Between::Independent,
        /// Which form of the p-value is wanted.
        p_by: PBy = PBy::Best,
        /// Whether the normal approximation is corrected for continuity.
        continuity: bool = true,
        /// From what the limits of the slope are found.
        limits_by: LimitsBy = LimitsBy::Best,
        /// Confidence of the limits of the slope.
        confidence: Proportion = Proportion(0.95),
    }
}

/// The test itself.
pub struct SeasonalKendall;

impl Method for SeasonalKendall {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "seasonal-kendall",
        title: "Seasonal Kendall test for trend",
        question: "Do later readings tend to be higher, or lower, than earlier ones of the same season?",
        null_hypothesis: "Within each season, every order of the readings is equally probable.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 4,
        exact: "Up to 500 million products of chances, such as 40 years of months.",
        assumes: &[
            "Apart from a trend, the readings of a season are independent and come from one distribution, which may differ from that of other seasons.",
            "The seasons share one trend; the test of homogeneity looks at that.",
            "Seasons are independent of each other, or between=correlated is sent.",
            "Seek and risk were declared before looking, and the series is judged once.",
        ],
        ties: "A tied pair counts neither as a rise nor as a fall; the exact null distribution and the variance have the same ties.",
        missing: MISSING,
        cost: "n log n, plus the counting within the exact range; between=correlated: years squared times seasons squared",
        fits_better: &[
            ("mann-kendall", "there are no seasons"),
            ("regional-kendall", "the blocks are places"),
            ("cox-stuart", "the evidence is to be shown in pairs, made within blocks"),
        ],
        sources: &[SOURCES[0], SOURCES[1], SOURCES[2], slope::SOURCES[0]],
        repeated_moments: true,
        blocks: true,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let seasons = Seasons::of(series, parameters)?;
        let blocked = Blocked::of(series, &seasons.labels, |index| seasons.places[index])?;
        let unit = series.scale.grades().is_none().then(|| match &series.unit {
            Some(unit) => format!("{unit} {}", seasons.round),
            None => seasons.round.into(),
        });
        let Parameters { between, p_by, continuity, limits_by, confidence, .. } = *parameters;
        let manner = Manner { between, p_by, continuity, limits_by, confidence };
        blocked.judge(series, question, &manner, unit.as_deref(), "season")
    }
}

/// The season and the round of each reading.
struct Seasons {
    labels: Vec<String>,
    places: Vec<(usize, f64)>,
    /// What one round of the seasons is called behind a unit.
    round: &'static str,
}

const MONTHS: [&str; 12] =
    ["January", "February", "March", "April", "May", "June", "July", "August", "September", "October", "November", "December"];
const WEEKDAYS: [&str; 7] = ["Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday"];

impl Seasons {
    fn of(series: &Series, parameters: &Parameters) -> Result<Self, Refusal> {
        match parameters.season {
            Season::Usual if series.blocks.is_some() => Seasons::of_blocks(series),
            Season::Usual if parameters.period.0 > 1 => Ok(Seasons::of_period(series.len(), parameters.period.0 as usize)),
            Season::Usual => Seasons::of_dates(series, usual(series)?),
            Season::Blocks => Seasons::of_blocks(series),
            season => Seasons::of_dates(series, season),
        }
    }

    fn of_blocks(series: &Series) -> Result<Self, Refusal> {
        let Some(blocks) = &series.blocks else {
            return Err(Refusal::Because(
                "season=blocks needs the season of each reading; send blocks with one label for each reading".into(),
            ));
        };
        let mut rounds = vec![0.0; blocks.count()];
        let places = (0..series.len())
            .map(|index| {
                let block = blocks.block(index);
                rounds[block] += 1.0;
                (block, rounds[block])
            })
            .collect();
        let labels = (0..blocks.count()).map(|block| blocks.label(block).to_owned()).collect();
        Ok(Seasons { labels, places, round: "from one round of the seasons to the next" })
    }

    fn of_period(readings: usize, period: usize) -> Self {
        Seasons {
            labels: (1..=period).map(|season| format!("season {season}")).collect(),
            places: (0..readings).map(|index| (index % period, (index / period) as f64)).collect(),
            round: "from one round of the seasons to the next",
        }
    }

    fn of_dates(series: &Series, season: Season) -> Result<Self, Refusal> {
        let dates: Option<Vec<_>> = (0..series.len()).map(|index| Some(series.moments.date(index)?.date())).collect();
        let Some(dates) = dates.filter(|_| series.moments.kind() == MomentKind::Date) else {
            return Err(Refusal::Because(format!(
                "season={} needs dates as moments; send dates, a period or blocks",
                season.word()
            )));
        };
        let words = |words: &[&str]| words.iter().map(|word| (*word).to_owned()).collect();
        let year = "a year";
        Ok(match season {
            Season::Quarter => Seasons {
                labels: words(&["first quarter", "second quarter", "third quarter", "fourth quarter"]),
                places: dates.iter().map(|date| (((date.month() - 1) / 3) as usize, f64::from(date.year()))).collect(),
                round: year,
            },
            Season::Week => Seasons {
                labels: (1..=53).map(|week| format!("week {week}")).collect(),
                places: dates
                    .iter()
                    .map(|date| ((date.iso_week_date().week() - 1) as usize, f64::from(date.iso_week_date().year())))
                    .collect(),
                round: year,
            },
            Season::Weekday => Seasons {
                labels: words(&WEEKDAYS),
                places: (0..series.len())
                    .map(|index| {
                        let weekday = dates[index].weekday().to_monday_zero_offset() as usize;
                        (weekday, ((series.moments.axis(index).floor() - weekday as f64) / 7.0).round())
                    })
                    .collect(),
                round: "a week",
            },
            _ => Seasons {
                labels: words(&MONTHS),
                places: dates.iter().map(|date| ((date.month() - 1) as usize, f64::from(date.year()))).collect(),
                round: year,
            },
        })
    }
}

/// The season that the usual distance of the dates suggests.
fn usual(series: &Series) -> Result<Season, Refusal> {
    if series.moments.kind() != MomentKind::Date {
        return Err(Refusal::Because(
            "the seasons are not known; send dates as moments, a period, or blocks with the season of each reading".into(),
        ));
    }
    let days: Vec<f64> = (0..series.len()).map(|index| series.moments.axis(index)).collect();
    let mut distances: Vec<f64> = days.windows(2).map(|pair| pair[1] - pair[0]).filter(|days| *days > 0.0).collect();
    distances.sort_by(f64::total_cmp);
    Ok(match distances.get(distances.len() / 2) {
        Some(days) if *days > 100.0 => {
            return Err(Refusal::Because(
                "the readings stand more than a quarter apart, so there are no seasons to compare; use mann-kendall".into(),
            ));
        }
        Some(days) if *days > 60.0 => Season::Quarter,
        Some(days) if *days > 10.0 => Season::Month,
        Some(days) if *days > 3.0 => Season::Week,
        _ => Season::Weekday,
    })
}
