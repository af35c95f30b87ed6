//! The OpenAPI 3.1 document, made from the declarations. The paths and the problem codes are told by the service, which
//! has them; what they take and answer is told by the methods' and the replies' own declarations.

use serde_json::{Map, Value, json};

use super::schema::{self, Place};
use crate::method::declaration::{Declared, Parameter};
use crate::query::request::shared_parameters;
use crate::reply::{Presentation, Reply, problem};

/// One thing that can be asked: a path with a verb.
#[derive(Clone, Debug, Default)]
pub struct Operation {
    /// The path, with parameters of the path in braces.
    pub path: String,
    /// `get` or `post`.
    pub verb: &'static str,
    /// A unique name, for client generators.
    pub id: String,
    /// What it does, in a few words.
    pub summary: String,
    /// What else there is to know.
    pub description: String,
    /// The parameters of the path: name, schema and meaning.
    pub in_path: Vec<(&'static str, Value, &'static str)>,
    /// The parameters of the query string.
    pub parameters: Vec<Parameter>,
    /// The names of those that must be sent.
    pub needed: &'static [&'static str],
    /// What the body is, as the content map of a request body.
    pub body: Option<Value>,
    /// What the answer is, as the content map of a response.
    pub answer: Value,
    /// The headers of the answer: name and meaning.
    pub headers: Vec<(&'static str, &'static str)>,
    /// Example values for parameters, by name.
    pub examples: Vec<(String, String)>,
    /// The statuses of the problems that can be met.
    pub problems: Vec<u16>,
}

/// A problem code as the table of codes has it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ProblemCode {
    /// The stable code.
    pub code: &'static str,
    /// The HTTP status that it is answered with.
    pub status: u16,
    /// What it means, the same for every problem of this code.
    pub title: &'static str,
}

/// The whole document.
pub fn document(operations: &[Operation], codes: &[ProblemCode]) -> Value {
    let shared: Vec<Parameter> = [shared_parameters().concat(), Presentation::LIST.to_vec()].concat();
    let mut paths = Map::new();
    for operation in operations {
        let path = paths.entry(operation.path.clone()).or_insert_with(|| json!({}));
        path[operation.verb] = operation_object(operation, &shared);
    }
    json!({
        "openapi": "3.1.0",
        "info": {
            "title": "Risefall",
            "version": env!("CARGO_PKG_VERSION"),
            "summary": env!("CARGO_PKG_DESCRIPTION"),
            "description": "Readings go in, a conclusion with its evidence comes out. Every path also answers HEAD and OPTIONS, \
                without computing anything.",
            "license": { "name": "MIT OR Apache-2.0", "identifier": "MIT OR Apache-2.0" },
        },
        "servers": [{ "url": "/" }],
        "paths": paths,
        "components": {
            "schemas": schemas(&shared, codes),
            "parameters": shared.iter().map(|one| (one.name.to_owned(), query_parameter(one, false, None))).collect::<Map<_, _>>(),
            "responses": responses(codes),
        },
    })
}

/// The content map of a body of named values: a JSON object or a form.
pub fn arguments_body(parameters: &[Parameter], needed: &[&str], example: &Value) -> Map<String, Value> {
    let shared: Vec<Parameter> = [shared_parameters().concat(), Presentation::LIST.to_vec()].concat();
    let properties: Map<String, Value> = parameters
        .iter()
        .map(|parameter| match is_shared(parameter, &shared) {
            true => (parameter.name.to_owned(), json!({ "$ref": format!("#/components/schemas/parameter.{}", parameter.name) })),
            false => (parameter.name.to_owned(), schema::of(parameter, Place::Json)),
        })
        .collect();
    let mut schema = json!({ "type": "object", "properties": properties, "additionalProperties": false });
    if !needed.is_empty() {
        schema["required"] = needed.iter().copied().collect();
    }
    let mut content = Map::new();
    content.insert("application/json".into(), json!({ "schema": schema, "example": example }));
    content.insert("application/x-www-form-urlencoded".into(), json!({ "schema": schema }));
    content
}

/// The content map of an answer in the four forms; `json` is the schema of the JSON form, with an example.
pub fn answer_forms(json: Value, example: Option<Value>) -> Value {
    let mut media = json!({ "schema": json });
    if let Some(example) = example {
        media["example"] = example;
    }
    let mut content = Map::new();
    content.insert(Reply::Json.media_type().into(), media);
    for (reply, what) in [
        (Reply::Text, "Plain lines, or the bare value that `give` asked for; with `fault=text` the sentence about a problem."),
        (Reply::Csv, "Lines of comma-separated values under a line of headings."),
        (Reply::Xml, "Elements without a namespace below `risefall`; with `fault=text` the sentence about a problem in `fault`."),
    ] {
        content.insert(essence(reply.media_type()), json!({ "schema": { "type": "string", "description": what } }));
    }
    Value::Object(content)
}

/// The media type without its parameters.
fn essence(media_type: &str) -> String {
    media_type.split(';').next().unwrap_or_default().trim().to_owned()
}

fn is_shared(parameter: &Parameter, shared: &[Parameter]) -> bool {
    shared.iter().any(|one| one.name == parameter.name && one.doc == parameter.doc)
}

fn operation_object(operation: &Operation, shared: &[Parameter]) -> Value {
    let in_path = operation
        .in_path
        .iter()
        .map(|(name, schema, doc)| json!({ "name": name, "in": "path", "required": true, "description": doc, "schema": schema }));
    let in_query = operation.parameters.iter().map(|parameter| {
        let needed = operation.needed.contains(&parameter.name);
        let example = operation.examples.iter().find(|(name, _)| name == parameter.name).map(|(_, text)| text.as_str());
        match !needed && example.is_none() && is_shared(parameter, shared) {
            true => json!({ "$ref": format!("#/components/parameters/{}", parameter.name) }),
            false => query_parameter(parameter, needed, example),
        }
    });
    let parameters: Vec<Value> = in_path.chain(in_query).collect();
    let mut responses = Map::new();
    let mut success = json!({ "description": operation.summary, "content": operation.answer });
    if !operation.headers.is_empty() {
        let header = |doc: &str| json!({ "description": doc, "schema": { "type": "string" } });
        success["headers"] =
            operation.headers.iter().map(|(name, doc)| ((*name).to_owned(), header(doc))).collect::<Map<_, _>>().into();
    }
    responses.insert("200".into(), success);
    for status in &operation.problems {
        responses.insert(status.to_string(), json!({ "$ref": format!("#/components/responses/{status}") }));
    }
    let mut object = json!({
        "operationId": operation.id,
        "summary": operation.summary,
        "description": operation.description,
        "parameters": parameters,
        "responses": responses,
    });
    if let Some(content) = &operation.body {
        object["requestBody"] = json!({ "required": true, "content": content });
    }
    object
}

fn query_parameter(parameter: &Parameter, needed: bool, example: Option<&str>) -> Value {
    let mut object = json!({
        "name": parameter.name,
        "in": "query",
        "required": needed,
        "description": schema::describe(parameter),
        "schema": schema::of(parameter, Place::Address),
    });
    if let Some(example) = example {
        object["example"] = example.into();
    }
    object
}

fn schemas(shared: &[Parameter], codes: &[ProblemCode]) -> Map<String, Value> {
    let mut schemas: Map<String, Value> = schema::reply().into_iter().map(|(name, schema)| (name.to_owned(), schema)).collect();
    schemas.insert("Cell".into(), schema::cell());
    schemas.insert("Problem".into(), problem_schema(codes));
    schemas.extend(shared.iter().map(|one| (format!("parameter.{}", one.name), schema::of(one, Place::Json))));
    schemas
}

fn problem_schema(codes: &[ProblemCode]) -> Value {
    let text = |doc: &str| json!({ "type": "string", "description": doc });
    let listed: Vec<Value> = codes.iter().map(|code| json!({ "const": code.code, "title": code.title })).collect();
    json!({
        "type": "object",
        "description": "Problem details (RFC 9457).",
        "properties": {
            "type": { "type": "string", "format": "uri-reference", "description": "Where this code is explained." },
            "title": text("What the code means."),
            "status": { "type": "integer", "description": "The HTTP status." },
            "detail": text("One sentence: what is wrong, where, and what was expected."),
            "code": { "type": "string", "description": "A stable name for this sort of problem.", "oneOf": listed },
            "place": text("The parameter, position or cell that the problem is at."),
            "value": text("The offending value as it came."),
            "help": text("What to do about it."),
        },
        "required": ["type", "title", "status", "detail", "code"],
        "additionalProperties": false,
    })
}

fn responses(codes: &[ProblemCode]) -> Map<String, Value> {
    let mut statuses: Vec<u16> = codes.iter().map(|code| code.status).collect();
    statuses.sort_unstable();
    statuses.dedup();
    statuses
        .into_iter()
        .map(|status| {
            let listed: String = codes
                .iter()
                .filter(|code| code.status == status)
                .map(|code| format!("\n- `{}`: {}", code.code, code.title))
                .collect();
            let content = json!({ problem::DETAILS: { "schema": { "$ref": "#/components/schemas/Problem" } } });
            (status.to_string(), json!({ "description": format!("One of these problems:\n{listed}"), "content": content }))
        })
        .collect()
}
