//! The body of a request, read within limits and turned into arguments.

use std::time::Duration;

use actix_web::HttpRequest;
use actix_web::http::header::{CONTENT_ENCODING, CONTENT_LENGTH, CONTENT_TYPE};
use actix_web::rt::time::timeout;
use actix_web::web::{BytesMut, Payload};
use futures_util::StreamExt;

use crate::method::declaration::{Argument, Arguments};
use crate::problem::{Problem, ProblemKind};
use crate::query::{address, json};

/// How a body of readings is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Media {
    /// A JSON object of named values.
    Json,
    /// `name=value&name=value`.
    Form,
    /// A list of readings.
    List,
}

/// Reads a whole body of at most `most` bytes.
pub async fn read(request: &HttpRequest, payload: Payload, most: usize, time: Duration) -> Result<BytesMut, Problem> {
    check_encoding(request)?;
    check_length(request, most as u64)?;
    let collect = async {
        let mut payload = payload;
        let mut body = BytesMut::new();
        while let Some(chunk) = payload.next().await {
            let chunk = chunk.map_err(|error| broken_off(&error))?;
            if body.len() + chunk.len() > most {
                return Err(too_large(most as u64));
            }
            body.extend_from_slice(&chunk);
        }
        Ok(body)
    };
    timeout(time, collect).await.unwrap_or_else(|_| Err(slow(time)))
}

/// Refuses a body that was packed; on one machine there is nothing to gain by it.
pub fn check_encoding(request: &HttpRequest) -> Result<(), Problem> {
    match request.headers().get(CONTENT_ENCODING) {
        Some(encoding) if encoding.as_bytes() != b"identity" => {
            let encoding = String::from_utf8_lossy(encoding.as_bytes()).into_owned();
            Err(Problem::new(ProblemKind::Malformed, "media-type", format!("a body packed as `{encoding}` is not read"))
                .help("Send it as it is.")
                .at("Content-Encoding")
                .value(encoding))
        }
        _ => Ok(()),
    }
}

/// Refuses a body whose stated length is beyond the limit before any of it is read.
pub fn check_length(request: &HttpRequest, most: u64) -> Result<(), Problem> {
    let stated = request.headers().get(CONTENT_LENGTH).and_then(|length| length.to_str().ok()?.parse::<u64>().ok());
    if stated.is_some_and(|length| length > most) { Err(too_large(most)) } else { Ok(()) }
}

/// How the body of a request is written, from its `Content-Type`.
pub fn media(request: &HttpRequest) -> Result<Option<Media>, Problem> {
    let Some(value) = request.headers().get(CONTENT_TYPE) else { return Ok(None) };
    let value = value.to_str().unwrap_or_default();
    let essence = value.split(';').next().unwrap_or_default().trim().to_ascii_lowercase();
    match essence.as_str() {
        "application/json" | "text/json" => Ok(Some(Media::Json)),
        "application/x-www-form-urlencoded" => Ok(Some(Media::Form)),
        "text/plain" | "text/csv" | "text/tab-separated-values" => Ok(Some(Media::List)),
        "" | "application/octet-stream" => Ok(None),
        _ => Err(Problem::new(ProblemKind::Malformed, "media-type", format!("a body of type `{essence}` is not read here"))
            .help("Send application/json, application/x-www-form-urlencoded, text/plain or text/csv.")
            .at("Content-Type")
            .value(essence)),
    }
}

/// Adds what a body holds to the arguments of the address; where both name a parameter, the body counts.
///
/// Many programs send JSON under the type of a form or of plain text, or under none. A body that begins like an object
/// is one, whatever it is called: neither a form nor a list of readings begins with `{`.
pub fn add(arguments: &mut Arguments, media: Option<Media>, body: &[u8]) -> Result<(), Problem> {
    let body = body.strip_prefix(b"\xef\xbb\xbf").unwrap_or(body);
    let is_object = body.iter().find(|byte| !byte.is_ascii_whitespace()) == Some(&b'{');
    let more = match media {
        _ if is_object => json::arguments(body)?,
        Some(Media::Json) => json::arguments(body)?,
        Some(Media::Form) => address::form(body),
        Some(Media::List) | None if body.is_empty() => Arguments::default(),
        Some(Media::List) | None => {
            let text = std::str::from_utf8(body).map_err(|error| not_text(error.valid_up_to()))?;
            Arguments::from_iter([("readings", Argument::Text(text.to_owned()))])
        }
    };
    for (name, value) in more.into_pairs() {
        arguments.push(name, value);
    }
    Ok(())
}

fn not_text(byte: usize) -> Problem {
    Problem::new(ProblemKind::Malformed, "encoding", format!("the body is not text in UTF-8 from byte {} on", byte + 1))
        .help("Save or send the text as UTF-8.")
        .at(format!("byte {}", byte + 1))
}

/// The body is larger than the limit.
pub fn too_large(most: u64) -> Problem {
    let limit = if most >= 1 << 20 { format!("{} MiB", most >> 20) } else { format!("{most} bytes") };
    Problem::new(ProblemKind::TooLarge, "too-large", format!("the body is larger than {limit}, the most that is read here"))
}

/// The body took too long.
pub fn slow(time: Duration) -> Problem {
    Problem::new(ProblemKind::Malformed, "slow", format!("the body did not arrive within {} seconds", time.as_secs_f64()))
}

/// The body ended early or cannot be taken apart.
pub fn broken_off(error: &dyn std::fmt::Display) -> Problem {
    Problem::new(ProblemKind::Malformed, "body-broken", format!("the body cannot be read to its end: {error}"))
}
