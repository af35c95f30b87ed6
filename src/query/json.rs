//! JSON as macros and programs send it, turned into arguments.

use serde_json::Value;

use crate::method::declaration::{Argument, Arguments};
use crate::problem::{Problem, ProblemKind};
use crate::reading::Cell;

/// Reads a JSON object of named values.
pub fn arguments(text: &[u8]) -> Result<Arguments, Problem> {
    let value: Value = serde_json::from_slice(text).map_err(|error| {
        Problem::new(ProblemKind::Malformed, "json", format!("the body is not JSON: {error}"))
            .help("Send an object such as {\"readings\": [3, 4, 2, 5]}.")
            .at(format!("line {}, column {}", error.line(), error.column()))
    })?;
    let Value::Object(members) = value else {
        return Err(Problem::new(ProblemKind::Malformed, "json", "the body is JSON, but not an object of named values")
            .help("Send an object such as {\"readings\": [3, 4, 2, 5]}."));
    };
    members
        .into_iter()
        .filter(|(_, value)| !value.is_null())
        .map(|(name, value)| argument(&name, value).map(|value| (name, value)))
        .collect()
}

fn argument(name: &str, value: Value) -> Result<Argument, Problem> {
    Ok(match value {
        Value::Null => Argument::Text(String::new()),
        Value::Bool(truth) => Argument::Truth(truth),
        Value::Number(ref number) => Argument::Number(number.as_f64().unwrap_or(f64::NAN)),
        Value::String(text) => Argument::Text(text),
        Value::Array(items) if items.iter().any(Value::is_array) => Argument::Cells(rows(name, items)?),
        Value::Array(items) => {
            let column = items.into_iter().enumerate().map(|(i, item)| Ok(vec![cell(name, &[i], item)?]));
            Argument::Cells(column.collect::<Result<_, Problem>>()?)
        }
        Value::Object(_) => return Err(wrong_value(name, &[], "an object")),
    })
}

/// A matrix: an array of rows, each as long as the first.
fn rows(name: &str, items: Vec<Value>) -> Result<Vec<Vec<Cell>>, Problem> {
    let mut rows: Vec<Vec<Cell>> = Vec::with_capacity(items.len());
    for (r, item) in items.into_iter().enumerate() {
        let Value::Array(cells) = item else {
            return Err(wrong_value(name, &[r], "a single value among rows"));
        };
        let row: Vec<Cell> =
            cells.into_iter().enumerate().map(|(c, item)| cell(name, &[r, c], item)).collect::<Result<_, _>>()?;
        if rows.first().is_some_and(|first| first.len() != row.len()) {
            let message = format!("{name}: row {} has {} cells, the first row has {}", r + 1, row.len(), rows[0].len());
            return Err(Problem::new(ProblemKind::Malformed, "ragged-range", message).help("Send a rectangular range.").at(name));
        }
        rows.push(row);
    }
    Ok(rows)
}

fn cell(name: &str, place: &[usize], value: Value) -> Result<Cell, Problem> {
    Ok(match value {
        Value::Null => Cell::Empty,
        Value::Bool(truth) => Cell::Truth(truth),
        Value::Number(ref number) => match number.as_f64().filter(|number| number.is_finite()) {
            Some(number) => Cell::Number(number),
            None => return Err(wrong_value(name, place, "a number too large to keep")),
        },
        Value::String(text) if text.starts_with('#') && text.ends_with(['!', '?', 'A', '0']) && text.len() > 2 => {
            Cell::Error(text)
        }
        Value::String(text) => Cell::text(&text),
        Value::Array(_) => return Err(wrong_value(name, place, "an array within a row")),
        Value::Object(_) => return Err(wrong_value(name, place, "an object")),
    })
}

fn wrong_value(name: &str, place: &[usize], got: &str) -> Problem {
    let place = match place {
        [] => name.to_owned(),
        [index] => format!("{name}, item {}", index + 1),
        [row, column, ..] => format!("{name}, row {}, column {}", row + 1, column + 1),
    };
    Problem::new(
        ProblemKind::Malformed,
        "json-value",
        format!("{place}: expected a number, text, true, false or null, got {got}"),
    )
    .at(place)
}
