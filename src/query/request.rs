//! Named values turned into a series and a request.

use std::sync::Arc;

use crate::finding::Request;
use crate::finding::request::Aim;
use crate::method::declaration::{Arguments, Declared, List, Parameter, ParameterError, check_names, nearest_word};
use crate::method::{Card, METHODS, Question, Refusal, Registered, find};
use crate::problem::{Problem, ProblemKind};
use crate::reading::moment::MomentError;
use crate::reading::understand::UnorderedGrades;
use crate::reading::{Blocks, Cell, Grades, Missing, Moments, Series, Understood, understand};

crate::parameters! {
    /// The readings of a request.
    pub struct Recorded {
        /// The readings in time order, oldest first: a list separated by semicolons, tabs, newlines or commas, an array, or a range.
        readings: List = List::default(),
        /// When each reading was taken: dates, calendar periods, numbers or labels, oldest first. Positions stand in if none are sent.
        moments: List = List::default(),
        /// The place, season or person that each reading belongs to, for tests that compare within such blocks.
        blocks: List = List::default(),
        /// For readings that are words: the words in order, lowest first, such as `poor < fair < good`.
        grades: Option<Grades> = None,
        /// The indicator's name, used in replies.
        name: Option<String> = None,
        /// The unit of the readings, used in replies.
        unit: Option<String> = None,
    }
}

/// A request ready to be examined.
pub struct Asked {
    /// The readings.
    pub series: Series,
    /// What was understood of them.
    pub understood: Understood,
    /// What is asked.
    pub request: Request,
}

/// The parameters that every test shares, in groups.
pub fn shared_parameters() -> [&'static [Parameter]; 3] {
    [Recorded::LIST, Question::LIST, Aim::LIST]
}

/// The test with a given key, or a problem that names the nearest one.
pub fn method(key: &str) -> Result<&'static Registered, Problem> {
    find(key).ok_or_else(|| {
        let keys: Vec<&str> = METHODS.iter().map(|method| method.card.key).collect();
        let hint = nearest_word(key, &keys).map(|near| format!("Did you mean `{near}`? ")).unwrap_or_default();
        Problem::new(ProblemKind::NotFound, "method-unknown", format!("there is no test named `{key}`"))
            .help(format!("{hint}The tests are: {}.", keys.join(", ")))
            .value(key)
    })
}

/// Reads what was sent for a test. `also` lists further parameters that are allowed here, such as those of the reply.
pub fn read(method: &Registered, arguments: &Arguments, also: &[&'static [Parameter]]) -> Result<Asked, Problem> {
    let mut lists = shared_parameters().to_vec();
    lists.push(method.parameters);
    lists.extend(also);
    check_names(arguments, &lists)?;
    let recorded = Recorded::read(arguments)?;
    let request =
        Request { test: method.read(arguments)?, question: Question::read(arguments)?, wanted: Aim::read(arguments)?.wanted };
    let (series, understood) = series(recorded, method.card)?;
    Ok(Asked { series, understood, request })
}

fn series(recorded: Recorded, card: &Card) -> Result<(Series, Understood), Problem> {
    let readings = recorded.readings;
    let Some(cells) = readings.cells else {
        return Err(ParameterError::Absent { name: "readings", doc: "the readings in time order, oldest first" }.into());
    };
    let columns = readings.columns.max(1);
    let blocks = blocks(recorded.blocks, cells.len(), columns, card)?;
    let (values, scale, understood) = understand(&cells, recorded.grades.as_ref())?;
    if let Some(reading) = understood.missing.iter().find(|reading| reading.why == Missing::NotUnderstood) {
        let position = reading.index + 1;
        let expected = match &understood.grades {
            Some(grades) => format!("one of the grades {grades}"),
            None => "a number, a limit such as <0.5, or blank".into(),
        };
        let message = format!("readings: reading {position}, `{}`, is not understood; expected {expected}", reading.text);
        return Err(Problem::new(ProblemKind::Malformed, "reading", message)
            .help("Correct it, or leave it blank to count it as missing.")
            .at(format!("readings, position {position}"))
            .value(reading.text.clone()));
    }
    let moments = match recorded.moments.cells {
        None if columns > 1 => Moments::numbers((0..values.len()).map(|index| (index / columns + 1) as f64).collect()),
        None => Moments::positions(values.len()),
        Some(cells) => {
            let rows = values.len() / columns;
            if cells.len() != rows {
                return Err(MomentError::Count { readings: rows, moments: cells.len() }.into());
            }
            let each_row: Vec<Cell> = cells.iter().flat_map(|cell| std::iter::repeat_n(cell.clone(), columns)).collect();
            Moments::of_cells(&each_row)?
        }
    };
    moments.check_order(card.repeated_moments, blocks.as_ref())?;
    let name = recorded.name.unwrap_or_else(|| "readings".into());
    Ok((Series { name, unit: recorded.unit, scale, values, moments: Arc::new(moments), blocks }, understood))
}

/// Blocks from their own list, or from the columns of a range: one row a moment, one column a block. For a test that takes
/// several readings at a moment and no blocks, the columns are just further readings.
fn blocks(sent: List, readings: usize, columns: usize, card: &Card) -> Result<Option<Blocks>, Problem> {
    let further_readings = card.repeated_moments && !card.blocks;
    let labels: Vec<String> = match (sent.cells, columns) {
        (None, 1) => return Ok(None),
        (None, _) if further_readings => return Ok(None),
        (None, _) => (0..readings).map(|index| (index % columns + 1).to_string()).collect(),
        (Some(cells), _) if cells.len() == readings => cells.iter().map(Cell::quote).collect(),
        (Some(cells), _) if columns > 1 && cells.len() == columns => {
            (0..readings).map(|index| cells[index % columns].quote()).collect()
        }
        (Some(cells), _) => {
            let message = format!("blocks: there are {readings} readings but {} block labels", cells.len());
            return Err(Problem::new(ProblemKind::Malformed, "blocks-count", message)
                .help("Send one label for each reading, or for each column of the range.")
                .at("blocks"));
        }
    };
    if !card.blocks {
        let message = if columns > 1 {
            format!("readings: {} takes one column or one row, got a range of {columns} columns", card.title)
        } else {
            format!("blocks: {} does not compare within blocks", card.title)
        };
        return Err(Problem::new(ProblemKind::Malformed, "several-columns", message)
            .help("Send one indicator at a time, its readings in one column.")
            .at("readings"));
    }
    Ok(Some(Blocks::of_labels(labels)))
}

impl From<UnorderedGrades> for Problem {
    fn from(error: UnorderedGrades) -> Self {
        Problem::new(ProblemKind::Malformed, "grades-unordered", format!("readings: {error}")).at("grades")
    }
}

impl From<MomentError> for Problem {
    fn from(error: MomentError) -> Self {
        let (code, place) = match &error {
            MomentError::Count { .. } => ("moments-count", "moments".to_owned()),
            MomentError::Blank { position } => ("moment-blank", format!("moments, position {position}")),
            MomentError::OutOfOrder { position, .. } => ("moments-out-of-order", format!("moments, position {position}")),
            MomentError::Repeated { position, .. } => ("moments-repeated", format!("moments, position {position}")),
        };
        Problem::new(ProblemKind::Malformed, code, format!("moments: {error}")).at(place)
    }
}

impl From<Refusal> for Problem {
    fn from(refusal: Refusal) -> Self {
        let help = match refusal {
            Refusal::TooFewReadings { .. } => "Send more readings.",
            Refusal::AllTied { .. } => "Record the readings more finely, or judge them over a longer time.",
            _ => "See the test's card under /methods for what it needs.",
        };
        Problem::new(ProblemKind::Unsupported, refusal.code(), refusal.to_string()).help(help).at("readings")
    }
}
