//! A problem as problem details (RFC 9457), or as the sentence that a cell shows.

use super::{Answer, Presentation, Reply, json, text, xml};
use crate::problem::Problem;

/// The media type of problem details.
pub const DETAILS: &str = "application/problem+json";

#[derive(serde::Serialize)]
struct Details<'a> {
    r#type: String,
    title: &'a str,
    status: u16,
    detail: &'a str,
    code: &'a str,
    #[serde(skip_serializing_if = "Option::is_none")]
    place: Option<&'a str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    value: Option<&'a str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    help: Option<&'a str>,
}

/// Problem details. `title` is the same for every problem of one code; the type is an address below `/problems/`.
pub fn details(problem: &Problem, status: u16, title: &str) -> Answer {
    let body = json::write(&Details {
        r#type: format!("/problems/{}", problem.code),
        title,
        status,
        detail: &problem.message,
        code: problem.code,
        place: problem.place.as_deref(),
        value: problem.value.as_deref(),
        help: problem.help.as_deref(),
    });
    Answer { media_type: DETAILS, body }
}

/// The sentence for `fault=text`: plain text, or the element `fault` where XML was asked for.
pub fn sentence(problem: &Problem, presentation: &Presentation) -> Answer {
    let sentence = text::one_line(&problem.to_string());
    match presentation.reply {
        Reply::Xml => Answer { media_type: Reply::Xml.media_type(), body: xml::one("fault", &sentence) },
        _ => Answer { media_type: Reply::Text.media_type(), body: sentence },
    }
}
