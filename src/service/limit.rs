//! What the service keeps to, so that no request can take the machine away from the person who sits at it.

use std::time::Duration;

use crate::method::declaration::{Argument, Arguments};
use crate::problem::{Problem, ProblemKind};

/// Every limit, each with its unit.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Limits {
    /// Bytes of a body of readings. A million readings of ten characters fit.
    pub body: usize,
    /// Bytes of an uploaded workbook. The largest that a spreadsheet program opens with comfort are about half of this.
    pub upload: u64,
    /// Readings in one request. The evidence of this many takes some 60 MB while it is written.
    pub readings: usize,
    /// Readings that are judged where the request arrived. Handing over to another thread costs about as much as judging
    /// this many, and no test takes longer than a few milliseconds for them.
    pub inline_readings: usize,
    /// Requests computed at once beside the small ones. More would only take turns on the cores.
    pub computing: usize,
    /// Requests that wait for a place; the next one is told to come again.
    pub waiting: usize,
    /// How long a request waits for a place. A spreadsheet gives up on a cell after about half a minute.
    pub patience: Duration,
    /// How long the head of a request may take to arrive.
    pub head_time: Duration,
    /// How long a body of readings may take to arrive.
    pub body_time: Duration,
    /// How long a workbook may take to arrive; on loopback even the largest takes seconds.
    pub upload_time: Duration,
    /// How long an idle connection is kept for its next request. A recalculation sends them in one go.
    pub keep_alive: Duration,
    /// Connections at once, for each worker.
    pub connections: usize,
    /// How long requests under way may take to finish when the service is stopped, in whole seconds.
    pub shutdown: Duration,
}

impl Default for Limits {
    fn default() -> Self {
        Limits {
            body: 16 << 20,
            upload: 256 << 20,
            readings: 200_000,
            inline_readings: 256,
            computing: 2,
            waiting: 64,
            patience: Duration::from_secs(20),
            head_time: Duration::from_secs(5),
            body_time: Duration::from_secs(20),
            upload_time: Duration::from_secs(120),
            keep_alive: Duration::from_secs(30),
            connections: 512,
            shutdown: Duration::from_secs(10),
        }
    }
}

impl Limits {
    /// Refuses lists that are longer than can be answered.
    pub fn check_readings(&self, arguments: &Arguments) -> Result<(), Problem> {
        let longest =
            arguments.names().filter_map(|name| Some((name, cells(arguments.get(name)?)))).max_by_key(|&(_, cells)| cells);
        match longest {
            Some((name, cells)) if cells > self.readings => Err(Problem::new(
                ProblemKind::TooLarge,
                "too-many-readings",
                format!("{name}: {cells} values are more than the {} that one request may hold", self.readings),
            )
            .help("Judge a coarser series, such as weekly instead of hourly values.")
            .at(name)),
            _ => Ok(()),
        }
    }
}

/// How many cells an argument holds at most.
pub fn cells(argument: &Argument) -> usize {
    match argument {
        Argument::Text(text) => 1 + separators(text.as_bytes()),
        Argument::Cells(rows) => rows.iter().map(Vec::len).sum(),
        Argument::Number(_) | Argument::Truth(_) => 1,
    }
}

/// How many characters of a text may separate readings.
pub fn separators(text: &[u8]) -> usize {
    text.iter().filter(|byte| matches!(byte, b',' | b';' | b'\n' | b'\t')).count()
}
