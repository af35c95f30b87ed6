//! What a person or a program should know of the tests, as JSON.

use serde::Serialize;
use serde_json::{Map, Value, json};

use super::schema::default_value;
use crate::method::declaration::{Parameter, Shape};
use crate::method::{Card, Claim, METHODS, Registered, ScaleNeeded};
use crate::query::request::shared_parameters;

/// All tests, with the parameters that they share.
pub fn all() -> Value {
    let cards: Vec<Value> = METHODS.iter().map(|method| Value::Object(card(method))).collect();
    json!({ "methods": cards, "shared_parameters": parameters(&shared_parameters().concat()) })
}

/// One test, its own parameters first, then those that every test shares.
pub fn one(method: &Registered) -> Value {
    let mut card = card(method);
    card.insert("shared_parameters".into(), parameters(&shared_parameters().concat()));
    Value::Object(card)
}

/// What a small p lets one claim, in words.
pub fn claim(claim: Claim) -> &'static str {
    match claim {
        Claim::Trend => "the readings rise or fall",
        Claim::Change => "the level changed at some moment",
        Claim::Pattern => "the order of the readings is not random",
    }
}

/// What the values must be, in words.
pub fn scale(scale: ScaleNeeded) -> &'static str {
    match scale {
        ScaleNeeded::Ordered => "numbers, or words in a stated order",
        ScaleNeeded::Numeric => "numbers whose differences mean something",
        ScaleNeeded::Counts => "counts of events",
        ScaleNeeded::EventTimes => "times of events",
    }
}

#[derive(Serialize)]
struct View<'a> {
    key: &'a str,
    title: &'a str,
    question: &'a str,
    null_hypothesis: &'a str,
    claim: &'a str,
    scale: &'a str,
    least_readings: usize,
    exact: &'a str,
    assumes: &'a [&'a str],
    ties: &'a str,
    missing: &'a str,
    cost: &'a str,
    repeated_moments: bool,
    blocks: bool,
    fits_better: Vec<Value>,
    sources: Vec<Value>,
    parameters: Value,
}

fn card(method: &Registered) -> Map<String, Value> {
    let card: &Card = method.card;
    let view = View {
        key: card.key,
        title: card.title,
        question: card.question,
        null_hypothesis: card.null_hypothesis,
        claim: claim(card.claim),
        scale: scale(card.scale),
        least_readings: card.least_readings,
        exact: card.exact,
        assumes: card.assumes,
        ties: card.ties,
        missing: card.missing,
        cost: card.cost,
        repeated_moments: card.repeated_moments,
        blocks: card.blocks,
        fits_better: card.fits_better.iter().map(|(method, when)| json!({ "method": method, "when": when })).collect(),
        sources: card
            .sources
            .iter()
            .map(|source| json!({ "authors": source.authors, "year": source.year, "title": source.title, "place": source.place }))
            .collect(),
        parameters: parameters(method.parameters),
    };
    match serde_json::to_value(view) {
        Ok(Value::Object(card)) => card,
        _ => Map::new(),
    }
}

/// Parameters as declared: name, meaning, form and default.
pub fn parameters(list: &[Parameter]) -> Value {
    list.iter()
        .map(|parameter| {
            let mut view = Map::new();
            view.insert("name".into(), parameter.name.into());
            view.insert("doc".into(), parameter.doc.into());
            view.extend(shape(&(parameter.shape)()));
            view.insert("default".into(), default_value(parameter).unwrap_or(Value::Null));
            Value::Object(view)
        })
        .collect()
}

fn shape(shape: &Shape) -> Map<String, Value> {
    let mut view = Map::new();
    let mut say = |key: &str, value: Value| view.insert(key.into(), value);
    match shape {
        Shape::Choice(words) => {
            say("kind", "choice".into());
            say("choices", words.iter().map(|choice| json!({ "word": choice.word, "doc": choice.doc })).collect());
        }
        Shape::Integer { least, most } => {
            say("kind", "integer".into());
            say("least", (*least).into());
            say("most", (*most).into());
        }
        Shape::Number { above, below } => {
            say("kind", "number".into());
            if above.is_finite() {
                say("above", (*above).into());
            }
            if below.is_finite() {
                say("below", (*below).into());
            }
        }
        Shape::Flag => _ = say("kind", "flag".into()),
        Shape::List => _ = say("kind", "list".into()),
        Shape::Text => _ = say("kind", "text".into()),
    }
    view
}
