//! Judging the indicators of a workbook by the rows of its plan.

use super::indicator::{Indicator, Judged};
use super::plan::PlanRow;
use super::reference::CellRef;
use crate::finding::request::Aim;
use crate::finding::{Adjustment, Finding, Request, examine, examine_together};
use crate::method::declaration::{Argument, Arguments, Declared, ParameterError, check_names, nearest_word};
use crate::method::{METHODS, Question, Refusal, Registered, find};
use crate::reading::Missing;

/// The test that is used where neither plan nor request names one.
pub const USUAL_TEST: &str = "cox-stuart";

/// How the origin of a row begins whose cells were found rather than stated.
const FOUND: &str = "found at ";

/// Whether the cells of a row are still those that were found, so that readings added since may be taken in.
pub fn cells_as_found(row: &PlanRow) -> bool {
    row.origin
        .strip_prefix(FOUND)
        .is_some_and(|rest| rest.split(';').next().is_some_and(|found| found.trim() == row.cells.trim()))
}

/// The first draft of an indicator's row in the plan: what was found, and the defaults of the request.
pub fn draft(indicator: &Indicator, defaults: &Arguments) -> PlanRow {
    let sent = |name: &str| defaults.get(name).map(Argument::quote);
    let question = Question::default();
    let grades = indicator.understood.grades.as_ref().map(ToString::to_string).unwrap_or_default();
    let cells = indicator.place.range().map(|range| range.to_string()).unwrap_or_default();
    let grades_origin = if indicator.understood.grades_assumed { "; order of the grades assumed" } else { "" };
    let own: Vec<String> = defaults
        .names()
        .filter(|name| !["seek", "risk", "wanted", "test", "adjust"].contains(name))
        .filter_map(|name| Some(format!("{name}={}", sent(name)?)))
        .collect();
    PlanRow {
        judge: "yes".into(),
        indicator: indicator.series.name.clone(),
        cells: cells.clone(),
        moments: indicator.place.moments_range().map(|range| range.to_string()).unwrap_or_default(),
        names: indicator.place.names_range().map(|range| range.to_string()).unwrap_or_default(),
        grades,
        wanted: sent("wanted").unwrap_or_else(|| Aim::default().wanted.word().into()),
        seek: sent("seek").unwrap_or_else(|| question.seek.word().into()),
        test: sent("test").unwrap_or_else(|| USUAL_TEST.into()),
        risk: sent("risk").unwrap_or_else(|| question.risk.0.to_string()),
        options: own.join("; "),
        origin: format!("{FOUND}{cells}{grades_origin}; the rest are defaults"),
    }
}

/// What is wrong with a row of the plan, as a whole sentence.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum RowError {
    /// No test has this name.
    #[error("there is no test `{key}`{}; the tests are {}", nearest.map(|near| format!(", did you mean `{near}`?")).unwrap_or_default(), known.join(", "))]
    Test { key: String, nearest: Option<&'static str>, known: Vec<&'static str> },
    /// A value or an option is wrong.
    #[error("{0}")]
    Parameter(#[from] ParameterError),
    /// An option is not written as `name=value`.
    #[error("the option `{0}` is not written as name=value")]
    Option(String),
}

/// Reads what a row asks for.
pub fn request(row: &PlanRow) -> Result<Request, RowError> {
    let method = test(&row.test)?;
    let mut arguments = options(&row.options)?;
    check_names(&arguments, &[method.parameters])?;
    for (name, value) in [("seek", &row.seek), ("risk", &row.risk), ("wanted", &row.wanted)] {
        if !value.trim().is_empty() {
            arguments.push(name, Argument::Text(value.trim().to_owned()));
        }
    }
    Ok(Request { test: method.read(&arguments)?, question: Question::read(&arguments)?, wanted: Aim::read(&arguments)?.wanted })
}

fn test(key: &str) -> Result<&'static Registered, RowError> {
    let key = if key.trim().is_empty() { USUAL_TEST } else { key.trim() };
    find(key).ok_or_else(|| {
        let known: Vec<&'static str> = METHODS.iter().map(|method| method.card.key).collect();
        RowError::Test { key: key.to_owned(), nearest: nearest_word(key, &known), known }
    })
}

/// A test's own parameters as a row states them; the defaults where they cannot be read.
pub fn own_parameters<P: Declared>(row: &PlanRow) -> P {
    options(&row.options).ok().and_then(|arguments| P::read(&arguments).ok()).unwrap_or_default()
}

/// `name=value; name=value` as arguments.
fn options(text: &str) -> Result<Arguments, RowError> {
    let pairs = text.split(';').map(str::trim).filter(|pair| !pair.is_empty());
    pairs
        .map(|pair| match pair.split_once('=') {
            Some((name, value)) => Ok((name.trim(), Argument::Text(value.trim().to_owned()))),
            None => Err(RowError::Option(pair.to_owned())),
        })
        .collect()
}

/// Judges one indicator by its row. A wrong row or unusable readings give a finding that declines, with the reason.
pub fn judge(indicator: Indicator, row: PlanRow) -> Judged {
    let (request, wrong) = match request(&row) {
        Ok(request) => (request, None),
        Err(error) => (usual_request(), Some(error.to_string())),
    };
    let declined =
        wrong.map(|reason| format!("the row of the plan is wrong: {reason}")).or_else(|| unusable(&indicator, &request));
    let mut finding = match declined {
        Some(reason) => Finding::declined(&request, Refusal::Because(reason)),
        None => examine(&indicator.series, &request),
    };
    if let (Ok(outcome), Some(caution)) = (&mut finding.result, not_understood(&indicator)) {
        outcome.cautions.push(caution);
    }
    Judged { indicator, row, finding }
}

/// Adjusts what was judged for being judged together.
pub fn together(judged: &mut [Judged], adjustment: Adjustment) {
    examine_together(judged.iter_mut().map(|judged| &mut judged.finding), adjustment);
}

fn usual_request() -> Request {
    let usual = PlanRow::default();
    request(&usual).unwrap_or_else(|error| unreachable!("an empty row asks for the defaults: {error}"))
}

/// Why the readings of an indicator cannot be judged in time order, if they cannot.
fn unusable(indicator: &Indicator, request: &Request) -> Option<String> {
    let series = &indicator.series;
    let understood = &indicator.understood;
    if let (true, Some(reason)) = (series.is_empty(), indicator.remarks.first()) {
        return Some(format!("the row of the plan is wrong: {reason}"));
    }
    let words = understood.missing.iter().filter(|reading| reading.why == Missing::NotUnderstood).count();
    if series.count_present() == 0 && words > 0 {
        return Some("the readings are words whose order is not stated; write the grades into the plan, lowest first, such as poor < fair < good".into());
    }
    let order = series.moments.check_order(request.test.card().repeated_moments, series.blocks.as_ref());
    order.err().map(|error| error.to_string())
}

/// A caution that names the cells whose contents were not understood.
fn not_understood(indicator: &Indicator) -> Option<String> {
    const NAMED: usize = 5;
    let unread: Vec<_> = indicator.understood.missing.iter().filter(|reading| reading.why == Missing::NotUnderstood).collect();
    let named: Vec<String> = unread
        .iter()
        .take(NAMED)
        .map(|reading| {
            let CellRef { row, column } = indicator.place.cell(reading.index);
            format!("{} `{}`", CellRef { row, column }, reading.text)
        })
        .collect();
    let more = if unread.len() > NAMED { ", ..." } else { "" };
    (!unread.is_empty())
        .then(|| format!("{} cells are not understood and count as missing: {}{more}.", unread.len(), named.join(", ")))
}
