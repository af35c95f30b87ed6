//! Declared parameters as JSON Schema (draft 2020-12, the dialect of OpenAPI 3.1).

use serde_json::{Map, Value, json};

use crate::method::declaration::{Parameter, Shape};

/// Where a value stands, which decides the forms it can take.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// In the address or in a form: everything is text there.
    Address,
    /// In a JSON object: a list may be an array or a range.
    Json,
}

/// The schema of a parameter: type, range, words, default and meaning.
pub fn of(parameter: &Parameter, place: Place) -> Value {
    let mut schema = shape(&(parameter.shape)(), place);
    schema.insert("description".into(), describe(parameter).into());
    if let Some(default) = default_value(parameter) {
        schema.insert("default".into(), default);
    }
    Value::Object(schema)
}

/// The schema of an object with these parameters.
pub fn object(parameters: &[Parameter], needed: &[&str], place: Place) -> Value {
    let properties: Map<String, Value> =
        parameters.iter().map(|parameter| (parameter.name.to_owned(), of(parameter, place))).collect();
    let mut schema = json!({ "type": "object", "properties": properties, "additionalProperties": false });
    if !needed.is_empty() {
        schema["required"] = needed.iter().copied().collect();
    }
    schema
}

/// What a parameter means, followed by what each of its words means.
pub fn describe(parameter: &Parameter) -> String {
    match (parameter.shape)() {
        Shape::Choice(words) => {
            let meanings: String = words.iter().map(|choice| format!("\n- `{}`: {}", choice.word, choice.doc)).collect();
            format!("{}\n{meanings}", parameter.doc)
        }
        _ => parameter.doc.to_owned(),
    }
}

/// The default as a value of its own kind rather than as text.
pub fn default_value(parameter: &Parameter) -> Option<Value> {
    let text = (parameter.default)()?;
    Some(match (parameter.shape)() {
        Shape::Integer { .. } => text.parse::<i64>().map_or(Value::String(text), Value::from),
        Shape::Number { .. } => text.parse::<f64>().map_or(Value::String(text), Value::from),
        Shape::Flag => text.parse::<bool>().map_or(Value::String(text), Value::from),
        Shape::Choice(_) | Shape::List | Shape::Text => Value::String(text),
    })
}

fn shape(shape: &Shape, place: Place) -> Map<String, Value> {
    let schema = match shape {
        Shape::Choice(words) => json!({ "type": "string", "enum": words.iter().map(|choice| choice.word).collect::<Vec<_>>() }),
        Shape::Integer { least, most } => json!({ "type": "integer", "minimum": least, "maximum": most }),
        Shape::Number { above, below } => {
            let mut schema = json!({ "type": "number" });
            if above.is_finite() {
                schema["exclusiveMinimum"] = (*above).into();
            }
            if below.is_finite() {
                schema["exclusiveMaximum"] = (*below).into();
            }
            schema
        }
        Shape::Flag => json!({ "type": "boolean" }),
        Shape::Text => json!({ "type": "string" }),
        Shape::List if place == Place::Address => json!({ "type": "string" }),
        Shape::List => json!({ "anyOf": [
            { "type": "string", "description": "A list separated by newlines, tabs, semicolons or commas." },
            { "type": "array", "items": { "$ref": "#/components/schemas/Cell" }, "description": "One cell after the other." },
            {
                "type": "array",
                "items": { "type": "array", "items": { "$ref": "#/components/schemas/Cell" } },
                "description": "A range, row by row, as a macro sends it; all rows have the same length."
            },
        ] }),
    };
    match schema {
        Value::Object(schema) => schema,
        _ => Map::new(),
    }
}

/// The schema of one cell of a list or range.
pub fn cell() -> Value {
    json!({ "type": ["number", "string", "boolean", "null"], "description": "What a cell holds; null and blank text are missing readings." })
}

/// The schemas of the reply contract, by name.
pub fn reply() -> Vec<(&'static str, Value)> {
    let reference = |name: &str| json!({ "$ref": format!("#/components/schemas/{name}") });
    let list_of = |name: &str| json!({ "type": "array", "items": reference(name) });
    let words = ["rising", "falling", "level", "changed", "not random", "not shown", "too few", "declined"];
    let closed = |properties: Value, description: &str| {
        let needed: Vec<String> = properties.as_object().map(|map| map.keys().cloned().collect()).unwrap_or_default();
        json!({ "type": "object", "description": description, "properties": properties, "required": needed, "additionalProperties": false })
    };
    vec![
        (
            "Report",
            closed(
                json!({
                    "method": { "type": "string", "description": "The test's key." },
                    "indicator": { "type": "string", "description": "The indicator's name." },
                    "conclusion": closed(
                        json!({
                            "word": { "type": "string", "enum": words },
                            "sentence": { "type": "string", "description": "The conclusion in one or two plain sentences." },
                        }),
                        "What is concluded.",
                    ),
                    "p": { "type": ["number", "null"], "description": "The p-value for the change that was sought." },
                    "p_by": { "type": ["string", "null"], "description": "How p was got: `exact`, or the approximation's name." },
                    "statistic": { "anyOf": [
                        closed(json!({ "name": { "type": "string" }, "value": { "type": "number" } }), "The test statistic."),
                        { "type": "null" },
                    ] },
                    "facts": list_of("Fact"),
                    "evidence": list_of("Table"),
                    "cautions": { "type": "array", "items": { "type": "string" }, "description": "What to bear in mind." },
                    "understood": list_of("Fact"),
                }),
                "What the test says of the readings.",
            ),
        ),
        (
            "Fact",
            closed(
                json!({
                    "key": { "type": "string", "description": "The name by which `give` asks for it." },
                    "label": { "type": "string" },
                    "value": reference("Value"),
                    "unit": { "type": ["string", "null"] },
                }),
                "One fact.",
            ),
        ),
        (
            "Table",
            closed(
                json!({
                    "caption": { "type": "string" },
                    "columns": { "type": "array", "items": closed(
                        json!({ "key": { "type": "string" }, "label": { "type": "string" } }),
                        "A column.",
                    ) },
                    "rows": { "type": "array", "items": { "type": "array", "items": reference("Value") } },
                }),
                "A table of evidence.",
            ),
        ),
        ("Value", json!({ "type": ["number", "string", "null"], "description": "A number, words, or nothing." })),
        (
            "OneFact",
            json!({
                "type": "object",
                "description": "The one fact that `give` asked for, under its name.",
                "additionalProperties": reference("Value"),
                "minProperties": 1,
                "maxProperties": 1,
            }),
        ),
        ("Evidence", closed(json!({ "evidence": list_of("Table") }), "The tables that `give=evidence` asked for.")),
    ]
}
