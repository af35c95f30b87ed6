//! `GET /openapi.json`: what the service takes and answers, for programs that make clients of it.

use actix_web::dev::HttpServiceFactory;
use actix_web::web::{self, Data};
use actix_web::{HttpRequest, HttpResponse, middleware};
use serde_json::json;

use super::super::application::State;
use super::super::codes::CODES;
use super::super::document::Document;
use super::{ANYWHERE, READ, head, operations, path};
use crate::catalogue::openapi::{Operation, document};
use crate::reply::Reply;

pub fn resource() -> impl HttpServiceFactory {
    path("/openapi.json", READ).route(web::get().to(get)).route(web::head().to(head_of)).wrap(middleware::Compress::default())
}

async fn get(request: HttpRequest, state: Data<State>) -> HttpResponse {
    let write = || Document::new(Reply::Json.media_type(), document(&operations(&state), CODES).to_string());
    state.documents.openapi.get_or_init(write).respond(&request)
}

async fn head_of() -> HttpResponse {
    head(Reply::Json.media_type())
}

pub fn operation() -> Operation {
    Operation {
        path: "/openapi.json".into(),
        verb: "get",
        id: "openapi".into(),
        summary: "This document".into(),
        answer: json!({ "application/json": { "schema": { "type": "object" } } }),
        problems: ANYWHERE.to_vec(),
        ..Operation::default()
    }
}
