//! `GET /methods` and `GET /methods/{name}`: the tests and what they take.

use actix_web::web::{self, Data, Path};
use actix_web::{HttpRequest, HttpResponse, Resource};
use serde_json::json;

use super::super::application::State;
use super::super::document::Document;
use super::super::{negotiate, respond};
use super::{ANYWHERE, READ, head, path};
use crate::catalogue::openapi::Operation;
use crate::catalogue::{card, help};
use crate::method::METHODS;
use crate::method::declaration::{Arguments, Declared, check_names};
use crate::problem::Problem;
use crate::query::{address, request};
use crate::reply::{Answer, Fault, Reply};

crate::choices! {
    /// The form of a list of tests.
    pub enum Listed {
        /// Everything that is declared of each test, for programs.
        Json = "json",
        /// An explanation for people.
        Text = "text",
    }
}

crate::parameters! {
    /// How tests are to be listed.
    pub struct Listing {
        /// The form of the answer: json or text.
        reply: Listed = Listed::Json,
        /// How a problem is answered: by an HTTP status, or as text that a cell can show.
        fault: Fault = Fault::Status,
    }
}

pub fn list() -> Resource {
    path("/methods", READ).route(web::get().to(get_list)).route(web::head().to(head_of))
}

pub fn one() -> Resource {
    path("/methods/{name}", READ).route(web::get().to(get_one)).route(web::head().to(head_of))
}

async fn head_of(request: HttpRequest) -> HttpResponse {
    let listed = listed(&request).unwrap_or(Listed::Json);
    head(media_type(listed))
}

async fn get_list(request: HttpRequest, state: Data<State>) -> HttpResponse {
    match listed(&request) {
        Ok(listed) => {
            let [as_json, as_text] = state.documents.methods.get_or_init(|| {
                let form = |listed, text| Document::new(media_type(listed), text);
                [form(Listed::Json, card::all().to_string()), form(Listed::Text, help::list())]
            });
            if listed == Listed::Json { as_json.respond(&request) } else { as_text.respond(&request) }
        }
        Err(problem) => respond::problem_for(&request, &problem),
    }
}

async fn get_one(name: Path<String>, request: HttpRequest) -> HttpResponse {
    let answer = listed(&request).and_then(|listed| {
        let method = request::method(&name)?;
        let body = if listed == Listed::Json { card::one(method).to_string() } else { help::of(method) };
        Ok(Answer { media_type: media_type(listed), body })
    });
    match answer {
        Ok(answer) => respond::answer(answer),
        Err(problem) => respond::problem_for(&request, &problem),
    }
}

fn listed(request: &HttpRequest) -> Result<Listed, Problem> {
    let arguments: Arguments = address::arguments(request.query_string());
    check_names(&arguments, &[Listing::LIST])?;
    let listing = Listing::read(&arguments)?;
    let named = arguments.get("reply").is_some();
    Ok(if !named && negotiate::usual(request) == Reply::Text { Listed::Text } else { listing.reply })
}

fn media_type(listed: Listed) -> &'static str {
    match listed {
        Listed::Json => Reply::Json.media_type(),
        Listed::Text => Reply::Text.media_type(),
    }
}

pub fn list_operation() -> Operation {
    Operation {
        path: "/methods".into(),
        verb: "get",
        id: "list-methods".into(),
        summary: "The tests and what they take".into(),
        parameters: Listing::LIST.to_vec(),
        answer: described("All cards, and the parameters that the tests share."),
        problems: ANYWHERE.to_vec(),
        ..Operation::default()
    }
}

pub fn one_operation() -> Operation {
    let keys: Vec<&str> = METHODS.iter().map(|method| method.card.key).collect();
    Operation {
        path: "/methods/{name}".into(),
        id: "explain-method".into(),
        summary: "One test and what it takes".into(),
        in_path: vec![("name", json!({ "type": "string", "enum": keys }), "The test's key.")],
        answer: described("The card, the test's own parameters, and those that all tests share."),
        problems: [&ANYWHERE[..], &[404]].concat(),
        ..list_operation()
    }
}

fn described(what: &str) -> serde_json::Value {
    json!({
        "application/json": { "schema": { "type": "object", "description": what } },
        "text/plain": { "schema": { "type": "string" } },
    })
}
