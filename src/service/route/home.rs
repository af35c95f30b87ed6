//! `GET /`: a page that says what this is.

use actix_web::http::header::{CONTENT_SECURITY_POLICY, ContentType};
use actix_web::{HttpResponse, Resource, web};
use serde_json::json;

use super::{ANYWHERE, READ, head, path};
use crate::catalogue::openapi::Operation;

const PAGE: &str = include_str!("../page/index.html");

/// The page brings its own style and nothing else.
const POLICY: &str = "default-src 'none'; style-src 'unsafe-inline'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'";

pub fn resource() -> Resource {
    path("/", READ).route(web::get().to(get)).route(web::head().to(head_of))
}

async fn get() -> HttpResponse {
    HttpResponse::Ok().content_type(ContentType::html()).insert_header((CONTENT_SECURITY_POLICY, POLICY)).body(PAGE)
}

async fn head_of() -> HttpResponse {
    head("text/html; charset=utf-8")
}

pub fn operation() -> Operation {
    Operation {
        path: "/".into(),
        verb: "get",
        id: "home".into(),
        summary: "A page that says what this is".into(),
        answer: json!({ "text/html": { "schema": { "type": "string" } } }),
        problems: ANYWHERE.to_vec(),
        ..Operation::default()
    }
}
