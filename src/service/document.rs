//! Answers that stay the same while the service runs: written once, and not sent again to who has them.

use std::hash::{DefaultHasher, Hash, Hasher};

use actix_web::http::header::{CACHE_CONTROL, CONTENT_TYPE, ETAG, HeaderValue, IF_NONE_MATCH, VARY};
use actix_web::web::Bytes;
use actix_web::{HttpRequest, HttpResponse};

/// A text with its media type and a tag that changes when the text does. The tag is weak, for the text may be packed.
pub struct Document {
    media_type: &'static str,
    body: Bytes,
    tag: String,
}

impl Document {
    pub fn new(media_type: &'static str, body: String) -> Self {
        let mut hasher = DefaultHasher::new();
        (media_type, &body).hash(&mut hasher);
        Document { media_type, body: body.into(), tag: format!("W/\"{:016x}\"", hasher.finish()) }
    }

    /// The document, or 304 if the client has it (RFC 9110, section 13.1.2).
    pub fn respond(&self, request: &HttpRequest) -> HttpResponse {
        let known = request.headers().get(IF_NONE_MATCH).and_then(|tags| tags.to_str().ok());
        let known = known.is_some_and(|tags| tags.split(',').any(|tag| tag.trim() == self.tag));
        let mut response = if known { HttpResponse::NotModified() } else { HttpResponse::Ok() };
        response.insert_header((CACHE_CONTROL, HeaderValue::from_static("no-cache")));
        response.insert_header((ETAG, self.tag.as_str()));
        response.insert_header((VARY, HeaderValue::from_static("Accept")));
        response.insert_header((CONTENT_TYPE, HeaderValue::from_static(self.media_type)));
        if known { response.finish() } else { response.body(self.body.clone()) }
    }
}
