//! Who may come in, which headers every answer carries, and what becomes of a panic.
//!
//! A page elsewhere on the web can make the browser of the person at this machine send requests here. Three checks keep
//! it out, without asking the person for anything:
//!
//! - `Host` must be this machine by a name or number that nobody else can own; so a name that was first theirs and now
//!   points here (DNS rebinding) is refused. Only HTTP/1.0, which no browser speaks, may leave it out.
//! - `Origin`, where there is one, must be our own.
//! - `Sec-Fetch-Site`, where there is one, must not be another site's, save for a person following a link.
//!
//! No answer permits another origin to read it.

use std::future::poll_fn;
use std::net::IpAddr;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::pin::pin;
use std::task::Poll;

use actix_web::Error;
use actix_web::body::BoxBody;
use actix_web::dev::{ServiceRequest, ServiceResponse};
use actix_web::error::InternalError;
use actix_web::http::header::{self, HeaderMap, HeaderName, HeaderValue};
use actix_web::middleware::Next;
use actix_web::web::Data;

use super::application::State;
use super::{compute, respond};
use crate::problem::{Problem, ProblemKind};
use crate::reply::Presentation;

/// The middleware around all routes.
pub async fn guard(request: ServiceRequest, next: Next<BoxBody>) -> Result<ServiceResponse<BoxBody>, Error> {
    let bound = request.app_data::<Data<State>>().map(|state| state.host);
    let mut response = match bound.ok_or_else(compute::broken).and_then(|bound| admit(&request, bound)) {
        Err(problem) => {
            let refused = respond::problem_for(request.request(), &problem);
            request.into_response(refused)
        }
        Ok(()) => {
            let mut answering = pin!(next.call(request));
            let answered = poll_fn(|context| {
                catch_unwind(AssertUnwindSafe(|| answering.as_mut().poll(context)))
                    .unwrap_or_else(|_| Poll::Ready(Err(panicked())))
            });
            answered.await?
        }
    };
    protect(response.headers_mut());
    Ok(response)
}

/// The last resort for a panic outside of what computes, where it is caught more politely.
fn panicked() -> Error {
    let mut response = respond::problem(&compute::broken(), &Presentation::default());
    protect(response.headers_mut());
    InternalError::from_response("a panic", response).into()
}

/// Headers that keep an answer where it belongs. Readings may be about people, so nothing is stored on the way unless a
/// route says otherwise.
fn protect(headers: &mut HeaderMap) {
    let mut add = |name: HeaderName, value: &'static str| {
        if !headers.contains_key(&name) {
            headers.insert(name, HeaderValue::from_static(value));
        }
    };
    add(header::CACHE_CONTROL, "no-store");
    add(header::X_CONTENT_TYPE_OPTIONS, "nosniff");
    add(header::CONTENT_SECURITY_POLICY, "default-src 'none'; frame-ancestors 'none'");
    add(HeaderName::from_static("cross-origin-resource-policy"), "same-origin");
    add(header::REFERRER_POLICY, "no-referrer");
}

fn admit(request: &ServiceRequest, bound: IpAddr) -> Result<(), Problem> {
    let headers = request.headers();
    let mut host = None;
    for value in headers.get_all(header::HOST) {
        let authority = value.to_str().unwrap_or_default();
        check_host(authority, bound)?;
        host = Some(authority);
    }
    if let Some(authority) = request.uri().authority() {
        check_host(authority.as_str(), bound)?;
    }
    if let Some(origin) = headers.get(header::ORIGIN) {
        let origin = origin.to_str().unwrap_or_default();
        if origin.strip_prefix("http://") != host || host.is_none() {
            return Err(foreign(origin));
        }
    }
    let is = |name: &'static str, value: &[u8]| headers.get(name).is_some_and(|sent| sent.as_bytes() == value);
    let other_site = is("sec-fetch-site", b"cross-site") || is("sec-fetch-site", b"same-site");
    if other_site && !is("sec-fetch-mode", b"navigate") {
        return Err(foreign("another site"));
    }
    Ok(())
}

fn check_host(authority: &str, bound: IpAddr) -> Result<(), Problem> {
    let name = match authority.strip_prefix('[') {
        Some(rest) => rest.split(']').next().unwrap_or_default(),
        None => authority.split(':').next().unwrap_or_default(),
    };
    let own = name.eq_ignore_ascii_case("localhost")
        || name.parse::<IpAddr>().is_ok_and(|ip| ip.is_loopback() || ip == bound || bound.is_unspecified());
    if own {
        return Ok(());
    }
    Err(Problem::new(
        ProblemKind::Malformed,
        "host",
        format!("the request is meant for `{authority}`, which is not this service"),
    )
    .help("Ask by the name localhost or the number 127.0.0.1.")
    .at("Host")
    .value(authority))
}

fn foreign(origin: &str) -> Problem {
    Problem::new(ProblemKind::Malformed, "origin", format!("a page from {origin} may not use this service"))
        .help("Ask from a spreadsheet, the command line, or the page that this service itself shows.")
        .at("Origin")
        .value(origin)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_names_of_this_machine_are_let_in() {
        let loopback = IpAddr::from([127, 0, 0, 1]);
        for host in ["127.0.0.1:7373", "localhost", "LocalHost:1", "[::1]:7373", "127.0.0.2"] {
            assert!(check_host(host, loopback).is_ok(), "{host}");
        }
        for host in
            ["", "evil.example", "localhost.evil.example:7373", "127.0.0.1.evil.example", "192.0.2.7:7373", "[2001:db8::1]"]
        {
            assert!(check_host(host, loopback).is_err(), "{host}");
        }
        assert!(check_host("192.0.2.7:7373", IpAddr::from([192, 0, 2, 7])).is_ok());
        assert!(check_host("192.0.2.7", IpAddr::from([0, 0, 0, 0])).is_ok());
        assert!(check_host("evil.example", IpAddr::from([0, 0, 0, 0])).is_err());
    }
}
