//! The report as XML without a namespace: each fact is an element right below `risefall`, named by its key.

use super::Form;
use super::number::datum;
use crate::finding::Report;
use crate::method::{Datum, Fact, Table};

pub(super) struct Xml;

impl Form for Xml {
    fn media_type(&self) -> &'static str {
        "application/xml; charset=utf-8"
    }

    fn report(&self, report: &Report) -> String {
        let mut body = String::new();
        for key in ["method", "indicator", "conclusion", "sentence", "p", "p_by"] {
            element(&mut body, key, &[], &datum(&report.fact(key).unwrap_or(Datum::Nothing)));
        }
        if let Some((name, value)) = report.statistic {
            element(&mut body, "statistic", &[("name", name)], &datum(&value.into()));
        }
        facts(&mut body, &report.facts);
        for caution in &report.cautions {
            element(&mut body, "caution", &[], caution);
        }
        body.push_str("<understood>");
        facts(&mut body, &report.understood);
        body.push_str("</understood>");
        push_tables(&mut body, &report.evidence);
        root(&body)
    }

    fn fact(&self, key: &str, value: &Datum) -> String {
        one(key, &datum(value))
    }

    fn tables(&self, tables: &[Table]) -> String {
        let mut body = String::new();
        push_tables(&mut body, tables);
        root(&body)
    }
}

/// A document with one element below the root.
pub(super) fn one(name: &str, text: &str) -> String {
    let mut body = String::new();
    element(&mut body, name, &[], text);
    root(&body)
}

/// A document around elements that are already written.
pub(super) fn root(body: &str) -> String {
    format!("<risefall>{body}</risefall>")
}

/// Appends an element. Names are our own keys; attributes and text are escaped.
pub(super) fn element(xml: &mut String, name: &str, attributes: &[(&str, &str)], text: &str) {
    xml.push('<');
    xml.push_str(name);
    for (attribute, value) in attributes {
        xml.push(' ');
        xml.push_str(attribute);
        xml.push_str("=\"");
        escape(xml, value);
        xml.push('"');
    }
    xml.push('>');
    escape(xml, text);
    xml.push_str("</");
    xml.push_str(name);
    xml.push('>');
}

fn facts(xml: &mut String, facts: &[Fact]) {
    for fact in facts {
        let unit = fact.unit.as_deref().map(|unit| ("unit", unit));
        let attributes: Vec<(&str, &str)> = std::iter::once(("label", fact.label)).chain(unit).collect();
        element(xml, fact.key, &attributes, &datum(&fact.value));
    }
}

fn push_tables(xml: &mut String, tables: &[Table]) {
    xml.push_str("<evidence>");
    for table in tables {
        xml.push_str("<table caption=\"");
        escape(xml, &table.caption);
        xml.push_str("\">");
        for row in &table.rows {
            xml.push_str("<row>");
            for (column, value) in table.columns.iter().zip(row) {
                element(xml, column.key, &[], &datum(value));
            }
            xml.push_str("</row>");
        }
        xml.push_str("</table>");
    }
    xml.push_str("</evidence>");
}

/// Escapes markup. Characters that XML 1.0 (section 2.2) does not allow become U+FFFD.
fn escape(xml: &mut String, text: &str) {
    for c in text.chars() {
        match c {
            '&' => xml.push_str("&amp;"),
            '<' => xml.push_str("&lt;"),
            '>' => xml.push_str("&gt;"),
            '"' => xml.push_str("&quot;"),
            '\t' | '\n' | '\r' => xml.push_str(&format!("&#{};", c as u32)),
            '\0'..='\u{1f}' | '\u{fffe}' | '\u{ffff}' => xml.push('\u{fffd}'),
            other => xml.push(other),
        }
    }
}
