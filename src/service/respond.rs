//! Answers and problems as HTTP responses.

use actix_web::http::StatusCode;
use actix_web::http::header::{ALLOW, CONTENT_TYPE, HeaderValue, RETRY_AFTER};
use actix_web::{HttpRequest, HttpResponse};

use super::{codes, negotiate};
use crate::problem::{Problem, ProblemKind};
use crate::reply::{Answer, Fault, Presentation, problem as problem_form};

/// An answer with status 200.
pub fn answer(answer: Answer) -> HttpResponse {
    with_status(StatusCode::OK, answer)
}

/// A problem in the form that was asked for: problem details with a status, or the sentence with status 200.
pub fn problem(problem: &Problem, presentation: &Presentation) -> HttpResponse {
    let mut response = match presentation.fault {
        Fault::Text => answer(problem_form::sentence(problem, presentation)),
        Fault::Status => {
            let status = status(problem);
            let title = codes::find(problem.code).map_or_else(|| of_kind(problem.kind).1, |row| row.title);
            with_status(status, problem_form::details(problem, status.as_u16(), title))
        }
    };
    if problem.kind == ProblemKind::Busy {
        response.headers_mut().insert(RETRY_AFTER, HeaderValue::from_static("1"));
    }
    response
}

/// A problem with a request of which only the address is known.
pub fn problem_for(request: &HttpRequest, found: &Problem) -> HttpResponse {
    problem(found, &negotiate::presentation(request))
}

/// The answer to a verb that an address does not take.
pub fn not_allowed(request: &HttpRequest, allowed: &'static str) -> HttpResponse {
    let message = format!("{} does not take {}", request.path(), request.method());
    let found = Problem::new(ProblemKind::Malformed, "verb", message)
        .help(format!("It takes {allowed}."))
        .value(request.method().as_str());
    let mut response = problem_for(request, &found);
    response.headers_mut().insert(ALLOW, HeaderValue::from_static(allowed));
    response
}

/// The status of a problem: that of its kind, except for what only HTTP knows.
pub fn status(problem: &Problem) -> StatusCode {
    match problem.code {
        "origin" => StatusCode::FORBIDDEN,
        "verb" => StatusCode::METHOD_NOT_ALLOWED,
        "slow" => StatusCode::REQUEST_TIMEOUT,
        "media-type" => StatusCode::UNSUPPORTED_MEDIA_TYPE,
        "host" => StatusCode::MISDIRECTED_REQUEST,
        _ => of_kind(problem.kind).0,
    }
}

fn of_kind(kind: ProblemKind) -> (StatusCode, &'static str) {
    match kind {
        ProblemKind::Malformed => (StatusCode::BAD_REQUEST, "The request cannot be read as it stands."),
        ProblemKind::NotFound => (StatusCode::NOT_FOUND, "What was asked for is not there."),
        ProblemKind::TooLarge => (StatusCode::PAYLOAD_TOO_LARGE, "The input is larger than the limit."),
        ProblemKind::Busy => (StatusCode::SERVICE_UNAVAILABLE, "All places are taken."),
        ProblemKind::Unsupported => (StatusCode::UNPROCESSABLE_ENTITY, "The request cannot be answered for this input."),
        ProblemKind::Broken => (StatusCode::INTERNAL_SERVER_ERROR, "Something went wrong on our side."),
    }
}

fn with_status(status: StatusCode, answer: Answer) -> HttpResponse {
    let mut response = HttpResponse::with_body(status, answer.body).map_into_boxed_body();
    response.headers_mut().insert(CONTENT_TYPE, HeaderValue::from_static(answer.media_type));
    response
}
