//! The tests explained as plain text, for the terminal and for `reply=text`.

use std::fmt::Write;

use super::card::{claim, scale};
use crate::method::declaration::{Parameter, Shape};
use crate::method::{METHODS, Registered};
use crate::query::request::shared_parameters;

/// The width that lines are kept to.
const WIDTH: usize = 96;

/// All tests, one line each.
pub fn list() -> String {
    let width = METHODS.iter().map(|method| method.card.key.len()).max().unwrap_or_default();
    METHODS.iter().map(|method| format!("{:width$}  {}\n", method.card.key, method.card.question)).collect()
}

/// Everything about one test.
pub fn of(method: &Registered) -> String {
    let card = method.card;
    let mut text = format!("{}\n{}\n\n", card.title, "=".repeat(card.title.chars().count()));
    paragraph(&mut text, "", card.question);
    let facts = [
        ("Key", card.key.to_owned()),
        ("Null hypothesis", card.null_hypothesis.to_owned()),
        ("A small p says", format!("that {}", claim(card.claim))),
        ("Readings", format!("{}; at least {}", scale(card.scale), card.least_readings)),
        ("Exact p", card.exact.to_owned()),
        ("Ties", card.ties.to_owned()),
        ("Missing", card.missing.to_owned()),
        ("Time grows as", card.cost.to_owned()),
    ];
    text.push('\n');
    for (label, value) in facts {
        paragraph(&mut text, &format!("{label:<17}"), &value);
    }
    section(&mut text, "It assumes", card.assumes.iter().map(|assumption| ("- ".to_owned(), (*assumption).to_owned())));
    section(
        &mut text,
        "Another test fits better",
        card.fits_better.iter().map(|(key, when)| (format!("{key}: "), (*when).to_owned())),
    );
    text.push_str("\nIts own parameters\n");
    parameters(&mut text, method.parameters);
    text.push_str("\nParameters of every test\n");
    parameters(&mut text, &shared_parameters().concat());
    let sources = card
        .sources
        .iter()
        .map(|source| ("- ".to_owned(), format!("{} ({}). {}. {}.", source.authors, source.year, source.title, source.place)));
    section(&mut text, "Sources", sources);
    text
}

fn section(text: &mut String, heading: &str, items: impl Iterator<Item = (String, String)>) {
    let mut items = items.peekable();
    if items.peek().is_some() {
        _ = writeln!(text, "\n{heading}");
    }
    for (mark, item) in items {
        paragraph(text, &format!("  {mark}"), &item);
    }
}

fn parameters(text: &mut String, list: &[Parameter]) {
    for parameter in list {
        let default = (parameter.default)().map(|default| format!(" [default: {default}]")).unwrap_or_default();
        let shape = (parameter.shape)();
        _ = writeln!(text, "  {} = {}{default}", parameter.name, form(&shape));
        paragraph(text, "      ", parameter.doc);
        if let Shape::Choice(words) = shape {
            let width = words.iter().map(|choice| choice.word.len()).max().unwrap_or_default();
            for choice in words {
                paragraph(text, &format!("      {:width$}  ", choice.word), choice.doc);
            }
        }
    }
}

/// The form of a parameter's values in a few words.
fn form(shape: &Shape) -> String {
    match shape {
        Shape::Choice(words) => words.iter().map(|choice| choice.word).collect::<Vec<_>>().join(" | "),
        Shape::Integer { least, most } => format!("{least} to {most}"),
        Shape::Number { above, below } if above.is_finite() && below.is_finite() => format!("between {above} and {below}"),
        Shape::Number { .. } => "number".into(),
        Shape::Flag => "true | false".into(),
        Shape::List => "list".into(),
        Shape::Text => "text".into(),
    }
}

/// Writes words in lines of at most [`WIDTH`], each line after the first indented below the first one's words.
fn paragraph(text: &mut String, mark: &str, words: &str) {
    let indent = mark.chars().count();
    let mut line = mark.to_owned();
    let mut length = indent;
    for word in words.split_whitespace() {
        let added = word.chars().count();
        if length > indent && length + 1 + added > WIDTH {
            _ = writeln!(text, "{}", line.trim_end());
            line = " ".repeat(indent);
            length = indent;
        }
        if length > indent {
            line.push(' ');
            length += 1;
        }
        line.push_str(word);
        length += added;
    }
    _ = writeln!(text, "{}", line.trim_end());
}
