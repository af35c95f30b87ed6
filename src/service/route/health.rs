//! `GET /health`: that the service is there, and how busy it is.

use actix_web::web::{self, Data};
use actix_web::{HttpResponse, Resource};
use serde_json::json;

use super::super::application::State;
use super::super::respond;
use super::{ANYWHERE, READ, head, path};
use crate::catalogue::openapi::Operation;
use crate::reply::{Answer, Reply};

pub fn resource() -> Resource {
    path("/health", READ).route(web::get().to(get)).route(web::head().to(head_of))
}

async fn get(state: Data<State>) -> HttpResponse {
    let body = json!({
        "status": "ok",
        "version": env!("CARGO_PKG_VERSION"),
        "places_free": state.computing.free(),
        "waiting": state.computing.waiting(),
    });
    respond::answer(Answer { media_type: Reply::Json.media_type(), body: body.to_string() })
}

async fn head_of() -> HttpResponse {
    head(Reply::Json.media_type())
}

pub fn operation() -> Operation {
    let schema = json!({
        "type": "object",
        "properties": {
            "status": { "const": "ok" },
            "version": { "type": "string" },
            "places_free": { "type": "integer", "minimum": 0, "description": "Places for computing that are free." },
            "waiting": { "type": "integer", "minimum": 0, "description": "Requests that wait for a place." },
        },
        "required": ["status", "version", "places_free", "waiting"],
        "additionalProperties": false,
    });
    Operation {
        path: "/health".into(),
        verb: "get",
        id: "health".into(),
        summary: "That the service is there, and how busy it is".into(),
        answer: json!({ "application/json": { "schema": schema } }),
        problems: ANYWHERE.to_vec(),
        ..Operation::default()
    }
}
