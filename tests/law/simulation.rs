//! How often readings without a trend are claimed to have one: simulated, seeded.

use risefall::method::declaration::Proportion;
use risefall::method::question::Question;
use risefall::method::{Registered, Seek};
use risefall::null_distribution::By;

use crate::inputs::{Input, Ties, directions};
use crate::random::Random;

/// False claims among simulated series.
#[derive(Clone, Copy, Debug, Default)]
pub struct Size {
    /// Series simulated.
    pub series: u32,
    /// Series that the test declined to judge; they are no claims.
    pub declined: u32,
    /// Series whose p was exact.
    pub exact: u32,
    /// Series in which a change in either direction was claimed.
    pub either: u32,
    /// Series in which a rise was claimed when only a rise was sought; none for tests without direction.
    pub rising: Option<u32>,
}

impl Size {
    /// A count as a percentage of the series.
    pub fn percent(&self, count: u32) -> f64 {
        100.0 * f64::from(count) / f64::from(self.series)
    }
}

/// Judges `series` random series of `n` readings without a trend at a risk of `risk`.
pub fn simulate(method: &Registered, n: usize, ties: Ties, series: u32, risk: f64) -> Size {
    let name: u64 = method.card.key.bytes().fold(0, |sum, byte| sum * 131 % 1_000_003 + u64::from(byte));
    let mut random = Random::seeded(name * 1_000 + n as u64 * 2 + u64::from(ties == Ties::Heavy));
    let mut size = Size { series, ..Size::default() };
    let question = Question { risk: Proportion(risk), ..Question::default() };
    for _ in 0..series {
        let Ok(outcome) = Input::random(method, &mut random, n, ties).judge(method, Seek::Either) else {
            size.declined += 1;
            continue;
        };
        size.exact += u32::from(outcome.p.by == By::Exact);
        size.either += u32::from(question.allows(outcome.p.value));
        if let Some((rising, _)) = directions(&outcome) {
            *size.rising.get_or_insert(0) += u32::from(question.allows(rising));
        }
    }
    size
}
