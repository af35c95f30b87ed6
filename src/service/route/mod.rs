//! The paths, one file each. A path says what it answers and, as an [`Operation`], what the OpenAPI document says of it.

mod adjust;
mod annotate;
mod health;
mod home;
mod methods;
mod openapi;
mod problems;
mod trend;

use actix_web::http::header::{ALLOW, CONTENT_TYPE, HeaderValue};
use actix_web::http::{Method, StatusCode};
use actix_web::web::{self, ServiceConfig};
use actix_web::{HttpRequest, HttpResponse, Resource, body};

use super::application::State;
use super::respond;
use crate::catalogue::openapi::Operation;
use crate::problem::{Problem, ProblemKind};

/// Registers every path.
pub fn configure(routes: &mut ServiceConfig, state: &State) {
    trend::configure(routes);
    routes
        .service(adjust::resource())
        .service(methods::list())
        .service(methods::one())
        .service(problems::list())
        .service(problems::one())
        .service(openapi::resource())
        .service(health::resource())
        .service(home::resource());
    if state.annotation.is_some() {
        routes.service(annotate::resource());
    }
    routes.default_service(web::to(unknown));
}

/// What the OpenAPI document says of all paths.
pub fn operations(state: &State) -> Vec<Operation> {
    let mut operations = trend::operations();
    operations.extend(adjust::operations());
    operations.extend(state.annotation.iter().map(annotate::operation));
    operations.extend([methods::list_operation(), methods::one_operation(), openapi::operation(), health::operation()]);
    operations.extend([problems::list_operation(), problems::one_operation(), home::operation()]);
    operations
}

/// The verbs of a path that only answers.
const READ: &str = "GET, HEAD, OPTIONS";
/// The verbs of a path that also takes a body.
const READ_AND_SEND: &str = "GET, HEAD, POST, OPTIONS";
/// The verbs of a path that only takes a body.
const SEND: &str = "POST, OPTIONS";

/// The statuses of problems that every path can answer with.
const ANYWHERE: [u16; 4] = [400, 403, 421, 500];

/// A path with what all paths answer alike: OPTIONS and verbs that it does not take.
fn path(pattern: &str, allowed: &'static str) -> Resource {
    web::resource(pattern.to_owned())
        .route(web::method(Method::OPTIONS).to(move || async move { options(allowed) }))
        .default_service(web::to(move |request: HttpRequest| async move { respond::not_allowed(&request, allowed) }))
}

fn options(allowed: &'static str) -> HttpResponse {
    HttpResponse::NoContent().insert_header((ALLOW, HeaderValue::from_static(allowed))).finish()
}

/// The answer to HEAD: that there would be an answer, and of which type. A spreadsheet asks this before each GET, so
/// nothing is computed for it, and the length of the answer is left open.
fn head(media_type: &'static str) -> HttpResponse {
    let mut response = HttpResponse::with_body(StatusCode::OK, body::None::new()).map_into_boxed_body();
    response.headers_mut().insert(CONTENT_TYPE, HeaderValue::from_static(media_type));
    response
}

async fn unknown(request: HttpRequest) -> HttpResponse {
    let path = request.path();
    let problem = Problem::new(ProblemKind::NotFound, "path-unknown", format!("there is nothing at {path}"))
        .help("See / for what there is.")
        .value(path);
    respond::problem_for(&request, &problem)
}
