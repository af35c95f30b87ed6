//! The way of a workbook through survey, judging, rendering and graft.
//!
//! The original is only ever read. The copy is written to a temporary file beside its target and renamed when whole.

use std::fs::File;
use std::io::{BufReader, BufWriter, Cursor, Read, Seek};
use std::path::Path;

use jiff::civil::DateTime;

use super::graft::{self, Limits, Workbook};
use super::indicator::{Indicator, Judged};
use super::judge::{cells_as_found, draft, judge, together};
use super::log::LogRow;
use super::package_kind::PackageKind;
use super::plan::{Plan, PlanRow};
use super::render::{self, SheetNames};
use super::settings::Settings;
use super::survey::{self, Cells, Format, Survey};
use crate::finding::{Adjustment, Word};
use crate::method::declaration::{Argument, Kind};
use crate::problem::{Problem, ProblemKind};

/// What is being done.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stage {
    Reading,
    Judging,
    Writing,
}

/// How far it has come.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Step {
    /// The stage.
    pub stage: Stage,
    /// Parts of the stage that are done.
    pub done: u64,
    /// Parts of the stage in all.
    pub total: u64,
}

/// What was concluded of one indicator.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    /// The indicator's name.
    pub indicator: String,
    /// Its cells, as a reference.
    pub cells: String,
    /// The conclusion's word.
    pub word: Word,
    /// The conclusion's sentence.
    pub sentence: String,
    /// The p-value, if there is one.
    pub p: Option<f64>,
    /// The p-value adjusted for the indicators judged together.
    pub p_adjusted: Option<f64>,
    /// Whether a trend was shown in the direction that is not wanted.
    pub needs_attention: bool,
}

/// What was made.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Annotated {
    /// One row an indicator, in the order of the workbook.
    pub conclusions: Vec<Row>,
    /// What a person should know of the copy, in whole sentences.
    pub notes: Vec<String>,
    /// What was noticed while looking for indicators, in whole sentences.
    pub remarks: Vec<String>,
    /// What kind of package the copy is.
    pub kind: PackageKind,
}

/// Annotates a workbook: reads `input`, writes `output`, which must be another file.
///
/// # Errors
/// The file cannot be read or written, or may not be annotated; nothing is written then.
pub fn annotate(
    input: &Path,
    output: &Path,
    settings: &Settings,
    made_on: DateTime,
    progress: &mut dyn FnMut(Step),
) -> Result<Annotated, Problem> {
    check_paths(input, output)?;
    let format = survey::format(input)?;
    let mut annotated = Annotated::default();
    if format == Format::Package {
        let book = Workbook::open(BufReader::new(File::open(input).map_err(graft::Error::from)?), Limits::default())?;
        annotated.kind = book.package_kind();
        check_allowed(&book, settings, &mut annotated.notes)?;
        let earlier: Vec<String> = book.earlier_sheets().iter().map(|sheet| sheet.name.clone()).collect();
        let named = |is: fn(&str) -> bool| earlier.iter().find(|name| is(name)).cloned();
        let (plan, log) = (named(SheetNames::is_plan), named(SheetNames::is_log));
        let read = |name: &String| Some(name) == plan.as_ref() || Some(name) == log.as_ref();
        let skip: Vec<String> = earlier.iter().filter(|name| !read(name)).cloned().collect();
        let mut cells = read_and_verify(input, &skip, progress, &mut annotated.notes)?;
        let kept = Kept {
            plan: plan.and_then(|name| render::read_back(&take_sheet(&mut cells, &name))),
            log: log.map(|name| render::read_log(&take_sheet(&mut cells, &name))).unwrap_or_default(),
        };
        let dates_from_1904 = book.dates_from_1904();
        write(book, cells, kept, dates_from_1904, settings, made_on, output, annotated, progress)
    } else {
        let cells = read_cells(input, format, &[], progress, &mut annotated.notes)?;
        annotated.notes.push("The file is not of a form that sheets can be added to; the copy is a new workbook with its values and the new sheets.".into());
        let sheets =
            cells.sheets.iter().map(|sheet| (sheet.name.as_str(), Box::new(cells.all(sheet)) as Box<dyn Iterator<Item = _>>));
        let values = render::values_only(sheets)?;
        let book = Workbook::open(Cursor::new(values), Limits::default())?;
        write(book, cells, Kept::default(), false, settings, made_on, output, annotated, progress)
    }
}

/// Writes the workbook without the sheets that were made by Risefall.
pub fn remove(input: &Path, output: &Path) -> Result<(), Problem> {
    check_paths(input, output)?;
    let book = Workbook::open(BufReader::new(File::open(input).map_err(graft::Error::from)?), Limits::default())?;
    into_place(output, |file| book.remove(file))
}

fn check_paths(input: &Path, output: &Path) -> Result<(), Problem> {
    if !input.is_file() {
        let message = format!("there is no file {}", input.display());
        return Err(Problem::new(ProblemKind::NotFound, "workbook-absent", message).help("Check the path."));
    }
    let same = output.exists() && same_file(input, output);
    if same || input == output {
        let message = format!("the copy must not take the place of the original, {}", input.display());
        return Err(Problem::new(ProblemKind::Malformed, "output", message).help("State another path for the copy."));
    }
    Ok(())
}

fn same_file(a: &Path, b: &Path) -> bool {
    matches!((a.canonicalize(), b.canonicalize()), (Ok(a), Ok(b)) if a == b)
}

fn check_allowed<R: Read + Seek>(book: &Workbook<R>, settings: &Settings, notes: &mut Vec<String>) -> Result<(), Problem> {
    if book.is_protected() && !settings.annotating.allow_protected {
        return Err(graft::Error::Protected.into());
    }
    if book.is_signed() {
        if !settings.annotating.allow_signed {
            return Err(graft::Error::Signed.into());
        }
        notes.push("The digital signature of the original does not hold for the copy.".into());
    }
    Ok(())
}

/// Reads the cells while a second thread sees to it that no part is damaged.
fn read_and_verify(
    input: &Path,
    skip: &[String],
    progress: &mut dyn FnMut(Step),
    notes: &mut Vec<String>,
) -> Result<Cells, Problem> {
    std::thread::scope(|scope| {
        let verified = scope.spawn(|| graft::verify(BufReader::new(File::open(input)?)));
        let cells = read_cells(input, Format::Package, skip, progress, notes);
        verified.join().unwrap_or_else(|_| Err(graft::Error::Damaged("its parts cannot be unpacked".into())))?;
        cells
    })
}

/// Reads the cells; a workbook whose cells cannot be read is still given its sheets, which then say so.
fn read_cells(
    input: &Path,
    format: Format,
    skip: &[String],
    progress: &mut dyn FnMut(Step),
    notes: &mut Vec<String>,
) -> Result<Cells, Problem> {
    let step = |done, total| Step { stage: Stage::Reading, done, total };
    match survey::read(input, format, skip, &mut |done, total| progress(step(done, total))) {
        Ok(cells) => Ok(cells),
        Err(error @ survey::Error::Unreadable(_)) if format == Format::Package => {
            let sentence = format!("No reading could be taken from it: {error}.");
            notes.push(sentence.clone());
            let mut none = Cells::default();
            none.remarks.push(sentence);
            Ok(none)
        }
        Err(error) => Err(error.into()),
    }
}

/// What an earlier annotation left to be read.
#[derive(Default)]
struct Kept {
    plan: Option<Plan>,
    log: Vec<LogRow>,
}

/// Takes a sheet of ours out of the cells, as text.
fn take_sheet(cells: &mut Cells, name: &str) -> Vec<Vec<String>> {
    let rows = cells.texts_of(name);
    cells.sheets.retain(|sheet| sheet.name != name);
    rows
}

#[allow(clippy::too_many_arguments, reason = "the last steps need what all earlier ones found")]
fn write<R: Read + Seek>(
    book: Workbook<R>,
    cells: Cells,
    Kept { plan, log }: Kept,
    date_1904: bool,
    settings: &Settings,
    made_on: DateTime,
    output: &Path,
    mut annotated: Annotated,
    progress: &mut dyn FnMut(Step),
) -> Result<Annotated, Problem> {
    let Survey { indicators, remarks } = survey::survey(&cells);
    let adjustment = adjustment(settings, plan.as_ref());
    let Chosen { rows, unjudged } = choose(&cells, indicators, plan, settings);
    drop(cells);
    let total = rows.len() as u64;
    let mut judged: Vec<Judged> = Vec::with_capacity(rows.len());
    for (done, (indicator, row)) in rows.into_iter().enumerate() {
        progress(Step { stage: Stage::Judging, done: done as u64, total });
        judged.push(judge(indicator, row));
    }
    together(&mut judged, adjustment);
    let users: Vec<String> = book.sheets().iter().map(|sheet| sheet.name.clone()).collect();
    let names = SheetNames::beside(&users);
    let donor = render::render(&render::Input {
        judged: &judged,
        adjustment,
        names: &names,
        remarks: &remarks,
        unjudged: &unjudged,
        earlier_log: &log,
        date_1904,
        made_on,
    })?;
    annotated.remarks = remarks;
    annotated.conclusions = judged.iter().map(row).collect();
    drop(judged);
    let graft_plan = graft::Plan { donor: &donor.bytes, sheets: &donor.sheets };
    into_place(output, |file| {
        book.graft(&graft_plan, file, &mut |done, total| progress(Step { stage: Stage::Writing, done, total }))
    })?;
    Ok(annotated)
}

/// The adjustment that the plan states, else that of the request.
fn adjustment(settings: &Settings, plan: Option<&Plan>) -> Adjustment {
    let stated = plan.and_then(|plan| Adjustment::read(&Argument::Text(plan.adjustment.clone())));
    stated.unwrap_or(settings.annotating.adjust)
}

struct Chosen {
    rows: Vec<(Indicator, PlanRow)>,
    unjudged: Vec<PlanRow>,
}

/// Which indicators are judged, and by which rows: those of the plan first, then what was found beside them.
fn choose(cells: &Cells, indicators: Vec<Indicator>, plan: Option<Plan>, settings: &Settings) -> Chosen {
    let mut chosen = Chosen { rows: Vec::new(), unjudged: Vec::new() };
    let mut found: Vec<Option<Indicator>> = indicators.into_iter().map(Some).collect();
    for row in plan.map(|plan| plan.rows).unwrap_or_default() {
        let matched = found.iter().position(|indicator| indicator.as_ref().is_some_and(|indicator| is_row_of(&row, indicator)));
        let grown = matched.and_then(|at| found[at].take());
        if row.judge.trim().eq_ignore_ascii_case("no") {
            chosen.unjudged.push(row);
            continue;
        }
        let (indicator, row) = from_row(cells, row, grown, settings);
        chosen.rows.push((indicator, row));
    }
    for indicator in found.into_iter().flatten() {
        let row = draft(&indicator, &settings.defaults);
        chosen.rows.push((indicator, row));
    }
    chosen
}

/// Whether a found indicator is the one of a row: the same column of the same sheet from the same row on, and in a long
/// table the same name.
fn is_row_of(row: &PlanRow, indicator: &Indicator) -> bool {
    let Ok(stated) = row.cells.parse::<super::Range>() else { return false };
    let Some(range) = indicator.place.range() else { return false };
    let same_place = stated.sheet == range.sheet && stated.first == range.first && stated.is_column();
    same_place && (row.names.trim().is_empty() || row.indicator.trim() == indicator.series.name)
}

/// The indicator that a row states. Where the cells are still those that were found, readings added since are taken in.
fn from_row(cells: &Cells, mut row: PlanRow, mut found: Option<Indicator>, settings: &Settings) -> (Indicator, PlanRow) {
    if let Some(mut indicator) = found.take_if(|_| cells_as_found(&row)) {
        let fresh = draft(&indicator, &settings.defaults);
        let as_drafted = row.grades == fresh.grades;
        row = PlanRow { cells: fresh.cells, moments: fresh.moments, names: fresh.names, origin: fresh.origin, ..row };
        if as_drafted {
            indicator.series.name.clone_from(&row.indicator);
            return (indicator, row);
        }
        found = Some(indicator);
    }
    match survey::indicator_at(cells, &row) {
        Ok(mut indicator) => {
            if let Some(found) = found {
                indicator.series.unit = indicator.series.unit.take().or_else(|| found.series.unit.clone());
                indicator.place.header = found.place.header;
            }
            (indicator, row)
        }
        Err(error) => (Indicator::absent(&row, error.to_string()), row),
    }
}

fn row(judged: &Judged) -> Row {
    let finding = &judged.finding;
    Row {
        indicator: judged.indicator.series.name.clone(),
        cells: judged.row.cells.clone(),
        word: finding.conclusion.word,
        sentence: finding.conclusion.sentence.clone(),
        p: finding.result.as_ref().ok().map(|outcome| outcome.p.value),
        p_adjusted: finding.adjusted.map(|adjusted| adjusted.p),
        needs_attention: finding.needs_attention(),
    }
}

/// Writes to a temporary file beside the target, and renames it when it is whole.
fn into_place(output: &Path, write: impl FnOnce(&mut BufWriter<File>) -> Result<(), graft::Error>) -> Result<(), Problem> {
    let folder = output.parent().filter(|folder| !folder.as_os_str().is_empty()).unwrap_or(Path::new("."));
    let failed = |error: std::io::Error| {
        let message = format!("{} cannot be written: {error}", output.display());
        Problem::new(ProblemKind::Broken, "workbook-write", message).help("Check the folder, its permissions and the free space.")
    };
    let temporary = tempfile::Builder::new().prefix(".risefall-").tempfile_in(folder).map_err(failed)?;
    let mut file = BufWriter::with_capacity(1 << 20, temporary.reopen().map_err(failed)?);
    write(&mut file)?;
    let file = file.into_inner().map_err(|error| failed(error.into_error()))?;
    file.sync_all().map_err(failed)?;
    temporary.persist(output).map_err(|error| failed(error.error))?;
    Ok(())
}
