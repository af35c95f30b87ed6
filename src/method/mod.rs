//! The published tests, one file each.
//!
//! To add a test: write its file, add its `mod` line and its line in [`METHODS`], and a folder of published examples
//! under `tests/published`. Route, parser, help, OpenAPI, plan, sheet and page follow from the declaration.
//!
#![doc = include_str!("size.md")]

pub mod blocked_kendall;
pub mod change;
pub mod choices;
pub mod declaration;
pub mod dependence;
pub mod normal_change;
pub mod outcome;
pub mod question;
pub mod scores_covariance;
pub mod screen;
pub mod slope;
pub mod successive;
pub mod turning;

pub mod buishand_range;
pub mod cochran_armitage;
pub mod cox_stuart;
pub mod difference_signs;
pub mod jonckheere_terpstra;
pub mod kendall;
pub mod laplace;
pub mod mann_kendall;
pub mod military_handbook;
pub mod normal_homogeneity;
pub mod page;
pub mod partial_kendall;
pub mod pettitt;
pub mod planned_looks;
pub mod poisson_trend;
pub mod rank_von_neumann;
pub mod regional_kendall;
pub mod reverse_arrangements;
pub mod runs_about_median;
pub mod runs_up_down;
pub mod seasonal_kendall;
pub mod spearman;
pub mod theil_sen;
pub mod turning_points;
pub mod watch;

pub use outcome::{Column, Datum, Direction, Evidence, Fact, Outcome, Refusal, Statistic, Table};
pub use question::{Question, Seek};

use declaration::{Arguments, Declared, Parameter, ParameterError};

use crate::reading::Series;

/// Every test, in the order in which they are listed.
pub static METHODS: &[Registered] = &[
    Registered::new::<cox_stuart::CoxStuart>(),
    Registered::new::<mann_kendall::MannKendall>(),
    Registered::new::<theil_sen::TheilSen>(),
    Registered::new::<planned_looks::PlannedLooks>(),
    Registered::new::<watch::Watch>(),
    Registered::new::<seasonal_kendall::SeasonalKendall>(),
    Registered::new::<regional_kendall::RegionalKendall>(),
    Registered::new::<partial_kendall::PartialKendall>(),
    Registered::new::<jonckheere_terpstra::JonckheereTerpstra>(),
    Registered::new::<page::Page>(),
    Registered::new::<cochran_armitage::CochranArmitage>(),
    Registered::new::<poisson_trend::PoissonTrend>(),
    Registered::new::<laplace::Laplace>(),
    Registered::new::<military_handbook::MilitaryHandbook>(),
    Registered::new::<reverse_arrangements::ReverseArrangements>(),
    Registered::new::<spearman::Spearman>(),
    Registered::new::<runs_about_median::RunsAboutMedian>(),
    Registered::new::<runs_up_down::RunsUpDown>(),
    Registered::new::<turning_points::TurningPoints>(),
    Registered::new::<rank_von_neumann::RankVonNeumann>(),
    Registered::new::<difference_signs::DifferenceSigns>(),
    Registered::new::<pettitt::Pettitt>(),
    Registered::new::<buishand_range::BuishandRange>(),
    Registered::new::<normal_homogeneity::NormalHomogeneity>(),
];

/// The test with a given key.
pub fn find(key: &str) -> Option<&'static Registered> {
    METHODS.iter().find(|method| method.card.key == key)
}

/// A published test.
pub trait Method: 'static {
    /// What the test takes beyond readings, seek and risk.
    type Parameters: Declared + Send + Sync + 'static;
    /// What a person should know of the test.
    const CARD: Card;
    /// Judges a series.
    ///
    /// # Errors
    /// The test does not apply to this series, and why.
    fn judge(series: &Series, question: &Question, parameters: &Self::Parameters) -> Result<Outcome, Refusal>;
}

/// What a person should know of a test.
#[derive(Clone, Debug, PartialEq)]
pub struct Card {
    /// The name in addresses, formulas and plans, in kebab case.
    pub key: &'static str,
    /// The published name.
    pub title: &'static str,
    /// The question it answers, as a person would ask it.
    pub question: &'static str,
    /// The null hypothesis in words.
    pub null_hypothesis: &'static str,
    /// What a small p lets one claim.
    pub claim: Claim,
    /// Whether words in a stated order are enough, or numbers are needed.
    pub scale: ScaleNeeded,
    /// The fewest readings with a value that it can work with.
    pub least_readings: usize,
    /// Up to which size p is exact, in words.
    pub exact: &'static str,
    /// What is assumed.
    pub assumes: &'static [&'static str],
    /// What becomes of equal readings.
    pub ties: &'static str,
    /// What becomes of missing readings and limits such as `<0.5`.
    pub missing: &'static str,
    /// How time grows with the number n of readings, such as `n log n`.
    pub cost: &'static str,
    /// Tests that fit better, and when.
    pub fits_better: &'static [(&'static str, &'static str)],
    /// Published sources.
    pub sources: &'static [Source],
    /// Whether several readings at one moment are allowed.
    pub repeated_moments: bool,
    /// Whether readings may come in blocks, such as places, seasons or persons, and are compared within them.
    pub blocks: bool,
}

/// What a small p lets one claim.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Claim {
    /// The readings rise or fall.
    Trend,
    /// The level changed at some moment.
    Change,
    /// The order of the readings is not random.
    Pattern,
}

/// What the values must be.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ScaleNeeded {
    /// Words in a stated order are enough.
    Ordered,
    /// Differences must mean something.
    Numeric,
    /// Counts of events.
    Counts,
    /// Times of events.
    EventTimes,
}

/// A published source.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Source {
    /// Author or authors, as printed.
    pub authors: &'static str,
    /// Year of publication.
    pub year: u16,
    /// Title.
    pub title: &'static str,
    /// Journal or publisher, with the pages or section used.
    pub place: &'static str,
}

/// A test whose parameters have been read, ready to judge any series.
pub trait Judge: Send + Sync {
    /// The test's card.
    fn card(&self) -> &'static Card;
    /// Judges a series; see [`Method::judge`].
    fn judge(&self, series: &Series, question: &Question) -> Result<Outcome, Refusal>;
}

struct Configured<M: Method> {
    parameters: M::Parameters,
}

impl<M: Method> Judge for Configured<M> {
    fn card(&self) -> &'static Card {
        const { &M::CARD }
    }

    fn judge(&self, series: &Series, question: &Question) -> Result<Outcome, Refusal> {
        let have = series.count_present();
        if have < M::CARD.least_readings {
            return Err(Refusal::TooFewReadings { have, need: M::CARD.least_readings });
        }
        M::judge(series, question, &self.parameters)
    }
}

/// A test in the registry, its types erased.
pub struct Registered {
    /// The test's card.
    pub card: &'static Card,
    /// The test's own parameters.
    pub parameters: &'static [Parameter],
    read: fn(&Arguments) -> Result<Box<dyn Judge>, ParameterError>,
}

impl Registered {
    /// Registers a test.
    pub const fn new<M: Method>() -> Self {
        Registered {
            card: const { &M::CARD },
            parameters: <M::Parameters as Declared>::LIST,
            read: |arguments| Ok(Box::new(Configured::<M> { parameters: M::Parameters::read(arguments)? })),
        }
    }

    /// Reads the test's own parameters from what was sent.
    pub fn read(&self, arguments: &Arguments) -> Result<Box<dyn Judge>, ParameterError> {
        (self.read)(arguments)
    }
}
