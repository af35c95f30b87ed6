//! Which form of answer is wanted, where the request does not name one.

use actix_web::HttpRequest;
use actix_web::http::header::ACCEPT;

use crate::query::address;
use crate::reply::{Presentation, Reply};

/// The form that the `Accept` header asks for (RFC 9110, section 12.5.1); JSON if it leaves the choice to us.
///
/// A browser, which accepts `text/html` before all, names XML only because its makers always do; it gets JSON.
pub fn usual(request: &HttpRequest) -> Reply {
    let Some(accept) = request.headers().get(ACCEPT).and_then(|value| value.to_str().ok()) else { return Reply::Json };
    choose(accept)
}

/// How a problem is to be answered, from the address and the `Accept` header alone.
pub fn presentation(request: &HttpRequest) -> Presentation {
    Presentation::lenient(&address::arguments(request.query_string()), usual(request))
}

fn choose(accept: &str) -> Reply {
    if accept == "*/*" {
        return Reply::Json;
    }
    let mut best = (0.0, Reply::Json);
    for item in accept.split(',') {
        let mut parts = item.split(';').map(str::trim);
        let reply = match parts.next().unwrap_or_default().to_ascii_lowercase().as_str() {
            "text/html" => return Reply::Json,
            "application/json" | "application/*" | "*/*" => Reply::Json,
            "text/plain" | "text/*" => Reply::Text,
            "text/csv" => Reply::Csv,
            "application/xml" | "text/xml" => Reply::Xml,
            _ => continue,
        };
        let weight = parts.find_map(|part| part.strip_prefix("q=")).map_or(Some(1.0), |weight| weight.parse().ok());
        let weight: f64 = weight.unwrap_or(0.0);
        if weight > best.0 {
            best = (weight, reply);
        }
    }
    best.1
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_heaviest_known_type_wins() {
        for (accept, reply) in [
            ("*/*", Reply::Json),
            ("text/csv", Reply::Csv),
            ("text/csv;q=0.2, application/xml;q=0.9", Reply::Xml),
            ("text/plain, */*;q=0.1", Reply::Text),
            ("text/plain;q=0, */*;q=0.1", Reply::Json),
            ("image/png", Reply::Json),
            ("text/html,application/xhtml+xml,application/xml;q=0.9,*/*;q=0.8", Reply::Json),
            ("", Reply::Json),
        ] {
            assert_eq!(choose(accept), reply, "{accept}");
        }
    }
}
