//! `risefall annotate`: a workbook goes in, its annotated copy comes out.

use std::path::{Path, PathBuf};

use clap::Args;

use super::progress::Bar;
use super::{Exit, table};
use crate::finding::sentence::number;
use crate::method::declaration::{Argument, Arguments};
use crate::problem::{Problem, ProblemKind};
use crate::workbook::annotate::{Annotated, annotate, remove};
use crate::workbook::package_kind::PackageKind;
use crate::workbook::settings::Settings;

/// Gives a workbook back with new sheets of conclusions, statistics, pairings and charts.
#[derive(Args)]
pub struct Annotate {
    /// The workbook: .xlsx, .xlsm, .xltx, .xltm, .xls, .xlsb, .ods, .csv or .tsv. It is never written to.
    workbook: PathBuf,
    /// Where the annotated copy goes; beside the workbook, with `-trends` behind its name, if not stated.
    #[arg(short, long)]
    output: Option<PathBuf>,
    /// The test for indicators that the plan sheet says nothing else about [default: cox-stuart].
    #[arg(long)]
    test: Option<String>,
    /// The change that counts as evidence: either, rising or falling [default: either].
    #[arg(long)]
    seek: Option<String>,
    /// The accepted chance of claiming a trend where there is none [default: 0.05].
    #[arg(long)]
    risk: Option<String>,
    /// The direction that is good: higher, lower or neither [default: neither].
    #[arg(long)]
    wanted: Option<String>,
    /// How p-values are adjusted for indicators judged together [default: holm].
    #[arg(long)]
    adjust: Option<String>,
    /// A parameter of the test, such as ties=split; may be given several times.
    #[arg(long = "set", value_name = "NAME=VALUE")]
    set: Vec<String>,
    /// Annotate although the workbook's structure is protected.
    #[arg(long)]
    allow_protected: bool,
    /// Annotate although a digital signature becomes void by it.
    #[arg(long)]
    allow_signed: bool,
    /// Take the Trend sheets out again instead.
    #[arg(long)]
    remove: bool,
    /// Print nothing but problems.
    #[arg(short, long)]
    quiet: bool,
}

impl Annotate {
    pub fn run(self) -> Result<Exit, Problem> {
        let output = self.output.clone().unwrap_or_else(|| beside(&self.workbook, self.remove));
        if self.remove {
            remove(&self.workbook, &output)?;
            if !self.quiet {
                println!("The copy without the Trend sheets is {}.", output.display());
            }
            return Ok(Exit::Done);
        }
        let settings = Settings::read(&self.arguments()?)?;
        let mut bar = Bar::new(self.quiet);
        let now = jiff::ZonedDateTime::now().datetime();
        let annotated = annotate(&self.workbook, &output, &settings, now, &mut |step| bar.show(step));
        bar.finish();
        let annotated = annotated?;
        if !self.quiet {
            print!("{}", summary(&annotated, &output));
        }
        Ok(if annotated.conclusions.iter().any(|row| row.needs_attention) { Exit::Attention } else { Exit::Done })
    }

    fn arguments(&self) -> Result<Arguments, Problem> {
        let mut arguments = Arguments::default();
        let named = [
            ("test", &self.test),
            ("seek", &self.seek),
            ("risk", &self.risk),
            ("wanted", &self.wanted),
            ("adjust", &self.adjust),
        ];
        for (name, value) in named {
            if let Some(value) = value {
                arguments.push(name, Argument::Text(value.clone()));
            }
        }
        for (name, allowed) in [("allow_protected", self.allow_protected), ("allow_signed", self.allow_signed)] {
            if allowed {
                arguments.push(name, Argument::Truth(true));
            }
        }
        for pair in &self.set {
            let Some((name, value)) = pair.split_once('=') else {
                return Err(Problem::new(
                    ProblemKind::Malformed,
                    "option",
                    format!("--set {pair}: expected NAME=VALUE, such as ties=split"),
                ));
            };
            arguments.push(name.trim(), Argument::Text(value.trim().to_owned()));
        }
        Ok(arguments)
    }
}

/// `visits.xlsx` becomes `visits-trends.xlsx`; what is not an OOXML workbook comes back as one.
fn beside(workbook: &Path, remove: bool) -> PathBuf {
    let stem = workbook.file_stem().unwrap_or_default().to_string_lossy();
    let extension = workbook.extension().map(|extension| extension.to_string_lossy().to_lowercase());
    let kept = PackageKind::ALL
        .map(PackageKind::ending)
        .into_iter()
        .find(|ending| extension.as_deref() == Some(ending))
        .unwrap_or("xlsx");
    let suffix = if remove { "plain" } else { "trends" };
    workbook.with_file_name(format!("{stem}-{suffix}.{kept}"))
}

/// The conclusions as a short table.
fn summary(annotated: &Annotated, output: &Path) -> String {
    let mut text = String::new();
    let rows: Vec<Vec<String>> = annotated
        .conclusions
        .iter()
        .map(|row| {
            let attention = if row.needs_attention { " (not wanted)" } else { "" };
            let p = |p: Option<f64>| p.map(number).unwrap_or_default();
            vec![
                table::cut(&row.indicator, 40),
                row.cells.clone(),
                format!("{}{attention}", row.word),
                p(row.p),
                p(row.p_adjusted),
            ]
        })
        .collect();
    if rows.is_empty() {
        text.push_str("No indicator was found to judge; the sheet Trend conclusions says what was looked for.\n");
    } else {
        text.push_str(&table::lay_out(&["Indicator", "Cells", "Conclusion", "p", "p adjusted"], &rows));
    }
    for note in &annotated.notes {
        text.push_str(&format!("\n{note}\n"));
    }
    text.push_str(&format!("\nThe annotated copy is {}.\n", output.display()));
    text
}
