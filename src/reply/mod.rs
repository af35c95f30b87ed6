//! A report as JSON, text, CSV or XML; one file a form.
//!
//! | `reply` | media type | the whole report | one fact (`give=p`) |
//! | --- | --- | --- | --- |
//! | `json` | `application/json` | the object of the reply contract | `{"p":0.03}` |
//! | `text` | `text/plain` | a short block of aligned lines | the bare value |
//! | `csv` | `text/csv` | one line a fact | a heading and a value |
//! | `xml` | `application/xml` | one element a fact below `risefall` | `<risefall><p>0.03</p></risefall>` |
//!
//! Numbers are written with the fewest digits that read back as the same number.

pub mod adjusted;
mod csv;
mod json;
pub mod number;
pub mod problem;
mod text;
mod xml;

use crate::finding::Report;
use crate::method::declaration::{Arguments, Declared, Kind, nearest_word};
use crate::method::{Datum, Table};
use crate::problem::{Problem, ProblemKind};

crate::choices! {
    /// The form of an answer.
    pub enum Reply {
        /// An object with every fact, the evidence and the cautions.
        Json = "json",
        /// Plain lines for people; with give, the bare value for a cell.
        Text = "text",
        /// Lines of values separated by commas.
        Csv = "csv",
        /// Elements without a namespace, so that a plain path such as /risefall/p finds them.
        Xml = "xml",
    }
}

crate::choices! {
    /// How a problem is answered.
    pub enum Fault {
        /// By an HTTP status and problem details in JSON.
        Status = "status",
        /// By status 200 and the sentence as plain text, since a cell cannot show an HTTP error.
        Text = "text",
    }
}

crate::parameters! {
    /// How the answer is to look.
    pub struct Presentation {
        /// The form of the answer: json, text, csv or xml.
        reply: Reply = Reply::Json,
        /// The name of the one fact to answer, such as p, conclusion, sentence or rises; evidence gives its tables alone.
        give: Option<String> = None,
        /// How a problem is answered: by an HTTP status, or as text that a cell can show.
        fault: Fault = Fault::Status,
    }
}

impl Presentation {
    /// As much as can be understood of what was sent, for answering a problem in the form that was asked for.
    pub fn lenient(arguments: &Arguments, usual: Reply) -> Self {
        Presentation {
            reply: arguments.get("reply").and_then(Reply::read).unwrap_or(usual),
            give: None,
            fault: arguments.get("fault").and_then(Fault::read).unwrap_or(Fault::Status),
        }
    }

    /// Whether the answer shows the tables of evidence.
    pub fn shows_evidence(&self) -> bool {
        match &self.give {
            Some(key) => key == EVIDENCE,
            None => matches!(self.reply, Reply::Json | Reply::Xml),
        }
    }

    /// Reads what was sent; `usual` is the form where none is named.
    pub fn of(arguments: &Arguments, usual: Reply) -> Result<Self, Problem> {
        let read = <Presentation as Declared>::read(arguments)?;
        Ok(if arguments.get("reply").is_none() { Presentation { reply: usual, ..read } } else { read })
    }
}

/// An answer as it goes out.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Answer {
    /// The media type of `body`.
    pub media_type: &'static str,
    /// The text, in UTF-8.
    pub body: String,
}

/// How a form writes what a report holds.
trait Form {
    /// The media type.
    fn media_type(&self) -> &'static str;
    /// The whole report.
    fn report(&self, report: &Report) -> String;
    /// One fact by its name.
    fn fact(&self, key: &str, value: &Datum) -> String;
    /// The tables of evidence alone.
    fn tables(&self, tables: &[Table]) -> String;
}

impl Reply {
    fn form(self) -> &'static dyn Form {
        match self {
            Reply::Json => &json::Json,
            Reply::Text => &text::Text,
            Reply::Csv => &csv::Csv,
            Reply::Xml => &xml::Xml,
        }
    }

    /// The media type of this form.
    pub fn media_type(self) -> &'static str {
        self.form().media_type()
    }
}

/// Writes a report, or the one fact of it that was asked for.
///
/// # Errors
/// The report has no fact of the name that was asked for.
pub fn write(report: &Report, presentation: &Presentation) -> Result<Answer, Problem> {
    let form = presentation.reply.form();
    let body = match presentation.give.as_deref() {
        None => form.report(report),
        Some(EVIDENCE) => form.tables(&report.evidence),
        Some(key) => form.fact(key, &report.fact(key).ok_or_else(|| unknown_fact(key, report))?),
    };
    Ok(Answer { media_type: form.media_type(), body })
}

/// The name by which `give` asks for the tables.
const EVIDENCE: &str = "evidence";

fn unknown_fact(key: &str, report: &Report) -> Problem {
    let mut names = report.fact_names();
    names.push(EVIDENCE);
    let hint = nearest_word(key, &names).map(|near| format!("; did you mean `{near}`?")).unwrap_or_default();
    Problem::new(ProblemKind::Malformed, "give-unknown", format!("give: this answer has no fact `{key}`{hint}"))
        .help(format!("The facts are: {}.", names.join(", ")))
        .at("give")
        .value(key)
}
