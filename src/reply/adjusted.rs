//! Adjusted p-values of a family in the four forms.

use super::number::number;
use super::{Answer, Presentation, Reply, csv, json, xml};
use crate::finding::Adjustment;
use crate::problem::{Problem, ProblemKind};

/// A family of p-values with their adjusted values; a blank keeps its place and does not count.
#[derive(Clone, Debug, PartialEq, serde::Serialize)]
pub struct Family {
    /// The adjustment's word.
    pub by: &'static str,
    /// How many p-values there are, blanks left out.
    pub family: usize,
    /// The p-values as sent.
    pub p: Vec<Option<f64>>,
    /// The adjusted ones, in the same order.
    pub adjusted: Vec<Option<f64>>,
}

impl Family {
    /// Adjusts a list of p-values, some of which may be blank.
    pub fn new(p: Vec<Option<f64>>, by: Adjustment) -> Self {
        let present: Vec<f64> = p.iter().flatten().copied().collect();
        let mut values = crate::finding::adjust(&present, by).into_iter();
        let adjusted = p.iter().map(|p| p.and_then(|_| values.next())).collect();
        Family { by: by.word(), family: present.len(), p, adjusted }
    }
}

/// Writes a family. `give` is a place in the list, counted from 1.
///
/// # Errors
/// `give` is no place in the list.
pub fn write(family: &Family, presentation: &Presentation) -> Result<Answer, Problem> {
    let text = |value: &Option<f64>| value.map(number).unwrap_or_default();
    let given = match presentation.give.as_deref() {
        None => None,
        Some(give) => Some(place(give, family)?),
    };
    let body = match (presentation.reply, given) {
        (Reply::Json, None) => json::write(family),
        (Reply::Json, Some(value)) => json::write(&std::collections::BTreeMap::from([("adjusted", value)])),
        (Reply::Text, None) => family.adjusted.iter().map(|value| text(value) + "\n").collect(),
        (Reply::Text, Some(value)) => text(&value),
        (Reply::Csv, None) => {
            let head = ["p", "adjusted"].map(str::to_owned);
            let rows = family.p.iter().zip(&family.adjusted).map(|(p, adjusted)| [text(p), text(adjusted)]);
            csv::lines(std::iter::once(head).chain(rows))
        }
        (Reply::Csv, Some(value)) => csv::lines([["adjusted".to_owned()], [text(&value)]]),
        (Reply::Xml, None) => {
            let mut body = String::new();
            xml::element(&mut body, "by", &[], family.by);
            xml::element(&mut body, "family", &[], &family.family.to_string());
            family.adjusted.iter().for_each(|value| xml::element(&mut body, "adjusted", &[], &text(value)));
            xml::root(&body)
        }
        (Reply::Xml, Some(value)) => xml::one("adjusted", &text(&value)),
    };
    Ok(Answer { media_type: presentation.reply.media_type(), body })
}

fn place(give: &str, family: &Family) -> Result<Option<f64>, Problem> {
    let count = family.adjusted.len();
    let index = give.trim().parse::<usize>().ok().and_then(|place| place.checked_sub(1));
    index.and_then(|index| family.adjusted.get(index)).copied().ok_or_else(|| {
        Problem::new(
            ProblemKind::Malformed,
            "give-unknown",
            format!("give: expected a place in the list, a whole number from 1 to {count}, got `{give}`"),
        )
        .at("give")
        .value(give)
    })
}
