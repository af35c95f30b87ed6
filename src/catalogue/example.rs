//! A small example for each test, with the answer that the test itself gives to it.

use serde_json::{Value, json};

use crate::finding::{Report, examine};
use crate::method::declaration::Arguments;
use crate::method::{Registered, ScaleNeeded};
use crate::query::{json as arguments_of, read};
use crate::reply::{Presentation, write};

/// Arguments that the test accepts, as a JSON object.
pub fn arguments(method: &Registered) -> Value {
    let readings = match method.card.scale {
        ScaleNeeded::EventTimes => json!([12, 31, 58, 66, 81, 90, 104, 111, 117, 125, 128, 133]),
        _ => json!([3, 4, 2, 5, 6, 5, 7, 8, 6, 9, 9, 10]),
    };
    let mut sent = json!({ "readings": readings });
    if method.card.repeated_moments && method.card.scale == ScaleNeeded::Ordered {
        sent["moments"] = json!([1, 1, 1, 2, 2, 2, 3, 3, 3, 4, 4, 4]);
    }
    if method.card.blocks {
        let places = ["north", "south", "east"];
        sent["blocks"] = (0..12).map(|index| places[index % 3]).collect();
    }
    if method.parameters.iter().any(|parameter| parameter.name == "trials") {
        sent["trials"] = json!([20, 20, 20, 20, 20, 20, 20, 20, 20, 20, 20, 20]);
    }
    if method.parameters.iter().any(|parameter| parameter.name == "covariate") {
        sent["covariate"] = json!([31, 30, 33, 34, 31, 36, 35, 33, 37, 34, 38, 36]);
    }
    if method.parameters.iter().any(|parameter| parameter.name == "horizon") {
        sent["horizon"] = json!(12);
    }
    sent
}

/// The same arguments as names and texts for an address.
pub fn in_address(arguments: &Value) -> Vec<(String, String)> {
    let item = |value: &Value| value.as_str().map_or_else(|| value.to_string(), str::to_owned);
    let text = |value: &Value| match value {
        Value::Array(items) => items.iter().map(item).collect::<Vec<_>>().join(";"),
        other => item(other),
    };
    arguments.as_object().into_iter().flatten().map(|(name, value)| (name.clone(), text(value))).collect()
}

/// The report on the example; `None` if the test does not accept it.
pub fn answer(method: &Registered) -> Option<Value> {
    let sent: Arguments = arguments_of::arguments(arguments(method).to_string().as_bytes()).ok()?;
    let asked = read(method, &sent, &[]).ok()?;
    let finding = examine(&asked.series, &asked.request);
    finding.result.as_ref().ok()?;
    let report = Report::new(&asked.series, &asked.understood, &finding);
    let answer = write(&report, &Presentation::default()).ok()?;
    serde_json::from_str(&answer.body).ok()
}
