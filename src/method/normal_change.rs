//! What the two tests for a change of level among normal readings have in common: readings, choices and p.

use super::declaration::Count;
use super::{Fact, Question, Refusal, Seek};
use crate::null_distribution::draws::{Draws, MOST_DRAWN};
use crate::null_distribution::normal_walk::{Family, LargestContrast, Simulated, partial_sums};
use crate::null_distribution::{By, Probability};
use crate::reading::{Series, Value};

crate::choices! {
    /// Which form of the p-value is wanted.
    pub enum PBy {
        /// The simulation.
        Best = "best",
        /// A seeded simulation of normal readings, as many as there are; its standard error is stated.
        Simulated = "simulated",
        /// An upper bound without randomness: the sum of the chances of each moment; close to p when p is small.
        Bound = "bound",
    }
}

crate::choices! {
    /// By what the sum of squares about the mean is divided.
    pub enum Deviation {
        /// By n.
        Population = "population",
        /// By n - 1.
        Sample = "sample",
    }
}

impl Deviation {
    /// The divisor for n readings.
    pub fn divisor(self, readings: usize) -> f64 {
        match self {
            Deviation::Population => readings as f64,
            Deviation::Sample => readings as f64 - 1.0,
        }
    }
}

/// How many draws a simulation makes.
pub type DrawCount = Count<1_000, 1_000_000>;

/// The seed of a simulation.
pub type Seed = Count<0, 4_294_967_295>;

const SIMULATED: By = By::Approximation("seeded simulation of normal readings");
const BOUND: By = By::Approximation("upper bound for normal readings");

/// The readings as numbers, and their walk.
pub struct Walk {
    /// Indices of the readings used, in time order.
    pub indices: Vec<usize>,
    /// Their mean.
    pub mean: f64,
    /// The root of their sum of squares about the mean.
    pub length: f64,
    /// The sums of the first 1, 2, ... deviations from the mean, divided by `length`; the sum of all is left out.
    pub sums: Vec<f64>,
}

impl Walk {
    /// The walk of a series.
    ///
    /// # Errors
    /// The readings are words or limits, or do not differ.
    pub fn of(series: &Series, test: &'static str) -> Result<Self, Refusal> {
        if series.scale.grades().is_some() {
            return Err(Refusal::Scale { test, needs: "numbers whose differences mean something", are: "graded words" });
        }
        let (indices, values): (Vec<usize>, Vec<Value>) = series.present().unzip();
        let numbers: Vec<f64> = values.iter().filter_map(|value| value.number()).collect();
        if numbers.len() < values.len() {
            return Err(Refusal::Because(format!(
                "{} readings are known only as limits, and this test needs their values; pettitt compares by order alone",
                values.len() - numbers.len()
            )));
        }
        let (Some(lowest), Some(highest)) = (numbers.iter().copied().reduce(f64::min), numbers.iter().copied().reduce(f64::max))
        else {
            return Err(Refusal::TooFewReadings { have: 0, need: 3 });
        };
        if lowest == highest {
            return Err(Refusal::AllTied { compared: numbers.len() });
        }
        // Scaled to about 1, so that no square overflows or vanishes.
        let (middle, scale) = (lowest / 2.0 + highest / 2.0, highest / 2.0 - lowest / 2.0);
        let scaled: Vec<f64> = numbers.iter().map(|number| (number - middle) / scale).collect();
        let mean = scaled.iter().sum::<f64>() / scaled.len() as f64;
        let deviations: Vec<f64> = scaled.iter().map(|number| number - mean).collect();
        let length = deviations.iter().map(|deviation| deviation * deviation).sum::<f64>().sqrt();
        // A sum that is 0 but for rounding is 0: which side of 0 it lies on must not matter.
        let rounding = 1e-14 * numbers.len() as f64;
        let clean = |sum: f64| if sum.abs() < rounding { 0.0 } else { sum };
        let sums = partial_sums(&deviations).into_iter().map(|sum| clean(sum / length)).collect();
        Ok(Walk { indices, mean: middle + scale * mean, length: scale * length, sums })
    }

    /// How many readings are used.
    pub fn readings(&self) -> usize {
        self.indices.len()
    }
}

/// How p is to be got.
pub struct How {
    /// Which form of p.
    pub p_by: PBy,
    /// How many draws.
    pub draws: DrawCount,
    /// Which draws.
    pub seed: Seed,
}

/// The sizes that the largest contrast has to reach: towards a higher level, towards a lower one, to either side.
#[derive(Clone, Copy, Debug)]
pub struct Sizes {
    /// Towards a higher level.
    pub rising: f64,
    /// Towards a lower level.
    pub falling: f64,
    /// To either side.
    pub either: f64,
}

impl Sizes {
    /// The largest contrasts of a list of them, each negative where the level rose.
    pub fn of(contrasts: &[f64]) -> Self {
        let rising = contrasts.iter().fold(0.0, |largest, contrast| f64::max(largest, -contrast));
        let falling = contrasts.iter().fold(0.0, |largest, contrast| f64::max(largest, *contrast));
        Sizes { rising, falling, either: rising.max(falling) }
    }
}

/// The p-value for what is sought, and the facts that state it.
///
/// # Errors
/// The simulation would take too long.
pub fn judge(
    question: &Question,
    family: Family,
    readings: usize,
    sizes: Sizes,
    how: &How,
) -> Result<(Probability, Vec<Fact>), Refusal> {
    let simulated = how.p_by != PBy::Bound;
    if simulated && f64::from(how.draws.0) * readings as f64 > MOST_DRAWN {
        return Err(Refusal::Because(format!(
            "{} draws of {readings} readings are more than the {MOST_DRAWN:e} readings that one simulation may take; send fewer draws or p_by=bound",
            how.draws.0
        )));
    }
    let chance = |size: f64, one_sided: bool| {
        let largest = LargestContrast { family, readings, one_sided };
        let found = if simulated {
            largest.simulate(size, how.draws.0, &mut Draws::seeded(how.seed.0.into()))
        } else {
            Simulated { chance: largest.upper_bound(size), error: 0.0 }
        };
        Simulated { chance: found.chance.clamp(f64::MIN_POSITIVE, 1.0), ..found }
    };
    let one_sided = |size: f64| (family != Family::Differences).then(|| chance(size, true));
    let (rising, falling, either) = (one_sided(sizes.rising), one_sided(sizes.falling), chance(sizes.either, false));
    let sought = match question.seek {
        Seek::Either => Some(either),
        Seek::Rising => rising,
        Seek::Falling => falling,
    };
    let Some(sought) = sought else {
        return Err(Refusal::Because(format!(
            "the range R has no direction, so seek={} cannot be judged by it; ask for statistic=q or seek=either",
            question.seek.word()
        )));
    };
    let value = |found: Option<Simulated>| found.map(|found| found.chance);
    let mut facts = vec![
        Fact::new("p_rising", "p if only a change to a higher level had been sought", value(rising)),
        Fact::new("p_falling", "p if only a change to a lower level had been sought", value(falling)),
        Fact::new("p_either", "p for a change in either direction", either.chance),
    ];
    if simulated {
        facts.push(Fact::new("p_error", "Standard error of p from the simulation", sought.error));
    }
    Ok((Probability { value: sought.chance, by: if simulated { SIMULATED } else { BOUND } }, facts))
}

/// The mean of readings that are numbers.
pub fn mean(values: &[Value]) -> Option<f64> {
    let numbers: Vec<f64> = values.iter().filter_map(|value| value.number()).collect();
    (!numbers.is_empty()).then(|| numbers.iter().sum::<f64>() / numbers.len() as f64).filter(|mean| mean.is_finite())
}
