//! `GET /problems` and `GET /problems/{code}`: what the codes mean. The `type` of problem details leads here.

use actix_web::web::{self, Path};
use actix_web::{HttpRequest, HttpResponse, Resource};
use serde_json::{Value, json};

use super::super::{codes, respond};
use super::{ANYWHERE, READ, head, path};
use crate::catalogue::openapi::{Operation, ProblemCode};
use crate::method::declaration::nearest_word;
use crate::problem::{Problem, ProblemKind};
use crate::reply::{Answer, Reply};

pub fn list() -> Resource {
    path("/problems", READ).route(web::get().to(get_list)).route(web::head().to(head_of))
}

pub fn one() -> Resource {
    path("/problems/{code}", READ).route(web::get().to(get_one)).route(web::head().to(head_of))
}

async fn head_of() -> HttpResponse {
    head(Reply::Json.media_type())
}

async fn get_list() -> HttpResponse {
    let rows: Value = codes::CODES.iter().map(view).collect();
    respond::answer(Answer { media_type: Reply::Json.media_type(), body: json!({ "problems": rows }).to_string() })
}

async fn get_one(code: Path<String>, request: HttpRequest) -> HttpResponse {
    match codes::find(&code) {
        Some(row) => respond::answer(Answer { media_type: Reply::Json.media_type(), body: view(row).to_string() }),
        None => respond::problem_for(&request, &unknown(&code)),
    }
}

fn view(row: &ProblemCode) -> Value {
    json!({ "code": row.code, "status": row.status, "title": row.title })
}

fn unknown(code: &str) -> Problem {
    let known: Vec<&str> = codes::CODES.iter().map(|row| row.code).collect();
    let hint = nearest_word(code, &known).map(|near| format!("Did you mean `{near}`? ")).unwrap_or_default();
    Problem::new(ProblemKind::NotFound, "problem-unknown", format!("there is no problem code `{code}`"))
        .help(format!("{hint}All codes stand at /problems."))
        .value(code)
}

fn schema() -> Value {
    let text = json!({ "type": "string" });
    json!({
        "type": "object",
        "properties": { "code": text, "status": { "type": "integer" }, "title": text },
        "required": ["code", "status", "title"],
        "additionalProperties": false,
    })
}

pub fn list_operation() -> Operation {
    let list = json!({
        "type": "object",
        "properties": { "problems": { "type": "array", "items": schema() } },
        "required": ["problems"],
        "additionalProperties": false,
    });
    Operation {
        path: "/problems".into(),
        verb: "get",
        id: "list-problems".into(),
        summary: "The problem codes and what they mean".into(),
        answer: json!({ "application/json": { "schema": list } }),
        problems: ANYWHERE.to_vec(),
        ..Operation::default()
    }
}

pub fn one_operation() -> Operation {
    let codes: Vec<&str> = codes::CODES.iter().map(|row| row.code).collect();
    Operation {
        path: "/problems/{code}".into(),
        id: "explain-problem".into(),
        summary: "What one problem code means".into(),
        in_path: vec![("code", json!({ "type": "string", "enum": codes }), "The code.")],
        answer: json!({ "application/json": { "schema": schema() } }),
        problems: [&ANYWHERE[..], &[404]].concat(),
        ..list_operation()
    }
}
