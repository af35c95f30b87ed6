//! `POST /annotate`: a workbook in, the same workbook with new sheets out.

use std::path::Path;
use std::sync::Arc;

use actix_web::body::SizedStream;
use actix_web::http::header::{
    CONTENT_DISPOSITION, CONTENT_TYPE, Charset, ContentDisposition, DispositionParam, DispositionType, ExtendedValue, HeaderValue,
};
use actix_web::web::{self, Data, Payload};
use actix_web::{HttpRequest, HttpResponse, Resource};
use serde_json::json;

use super::super::annotation::{AnnotatedSummary, Annotation, Annotator};
use super::super::application::State;
use super::super::{compute, respond, upload};
use super::{ANYWHERE, SEND, path};
use crate::catalogue::openapi::Operation;
use crate::method::declaration::{Arguments, Declared};
use crate::problem::Problem;
use crate::query::address;
use crate::reply::{Fault, Presentation, Reply};
use crate::workbook::package_kind::PackageKind;

crate::parameters! {
    /// What sending a workbook takes beyond what annotating it takes.
    pub struct Sending {
        /// The workbook's name, where it is sent as the body itself; its ending tells what kind of file it is.
        file: Option<String> = None,
        /// How a problem is answered: by an HTTP status, or as text.
        fault: Fault = Fault::Status,
    }
}

const INDICATORS: &str = "risefall-indicators";
const ATTENTION: &str = "risefall-attention";

pub fn resource() -> Resource {
    path("/annotate", SEND).route(web::post().to(post))
}

async fn post(request: HttpRequest, payload: Payload, state: Data<State>) -> HttpResponse {
    let mut arguments = address::arguments(request.query_string());
    match annotate(&request, payload, &mut arguments, &state).await {
        Ok(response) => response,
        Err(problem) => respond::problem(&problem, &Presentation::lenient(&arguments, Reply::Json)),
    }
}

async fn annotate(
    request: &HttpRequest,
    payload: Payload,
    arguments: &mut Arguments,
    state: &State,
) -> Result<HttpResponse, Problem> {
    let Some(Annotation { annotate, .. }) = &state.annotation else { return Err(compute::broken()) };
    let receiving = state.uploads.enter().await?;
    let mut upload = upload::receive(request, payload, arguments, &state.limits).await?;
    drop(receiving);
    if let Some(name) = Sending::read(arguments)?.file {
        upload.rename(&name)?;
    }
    let output = upload.beside("annotated");
    let work = {
        let (annotate, input, output) = (annotate.clone(), upload.path.clone(), output.clone());
        let asked = others(arguments);
        move || run(&annotate, &input, &output, &asked)
    };
    let summary = compute::elsewhere(&state.computing, work).await?;
    let file = std::fs::File::open(&output).map_err(|_| compute::broken())?;
    let size = file.metadata().map_err(|_| compute::broken())?.len();
    let mut response = HttpResponse::Ok();
    response.insert_header((CONTENT_TYPE, HeaderValue::from_static(summary.kind.media_type())));
    response.insert_header((CONTENT_DISPOSITION, disposition(&upload.name, summary.kind)));
    response.insert_header((INDICATORS, summary.indicators.to_string()));
    response.insert_header((ATTENTION, summary.attention.to_string()));
    Ok(response.body(SizedStream::new(size, Box::pin(upload::pieces(file, upload)))))
}

fn run(annotate: &Arc<Annotator>, input: &Path, output: &Path, arguments: &Arguments) -> Result<AnnotatedSummary, Problem> {
    annotate(input, output, arguments)
}

/// The arguments that the annotator is to see: all but those of sending.
fn others(arguments: &Arguments) -> Arguments {
    let own = |name: &str| Sending::LIST.iter().any(|parameter| parameter.name == name);
    arguments.clone().into_pairs().filter(|(name, _)| !own(name)).collect()
}

/// `visits.xlsx` comes back as `visits-trends.xlsx`, named in ASCII and, where that loses something, in full (RFC 6266).
fn disposition(name: &str, kind: PackageKind) -> ContentDisposition {
    let stem = name.rsplit_once('.').map_or(name, |(stem, _)| stem);
    let full = format!("{}-trends.{}", if stem.is_empty() { "workbook" } else { stem }, kind.ending());
    let plain: String =
        full.chars().map(|c| if c.is_ascii_graphic() && !"\"\\%;".contains(c) || c == ' ' { c } else { '_' }).collect();
    let mut parameters = vec![DispositionParam::Filename(plain.clone())];
    if plain != full {
        let value = full.into_bytes();
        parameters.push(DispositionParam::FilenameExt(ExtendedValue {
            charset: Charset::Ext("UTF-8".into()),
            language_tag: None,
            value,
        }));
    }
    ContentDisposition { disposition: DispositionType::Attachment, parameters }
}

pub fn operation(annotation: &Annotation) -> Operation {
    let file = json!({ "type": "string", "format": "binary", "description": "The workbook." });
    let form = json!({ "type": "object", "properties": { "workbook": file }, "required": ["workbook"] });
    let mut body = json!({
        "multipart/form-data": { "schema": form },
        "application/octet-stream": { "schema": file },
    });
    let mut answer = json!({});
    for media_type in PackageKind::ALL.map(PackageKind::media_type) {
        body[media_type] = json!({ "schema": file });
        answer[media_type] = json!({ "schema": { "type": "string", "format": "binary" } });
    }
    Operation {
        path: "/annotate".into(),
        verb: "post",
        id: "annotate".into(),
        summary: "The workbook with new sheets of conclusions, statistics, pairings and charts".into(),
        description:
            "All else in the workbook stays as it is. The parameters stand in the address, or are text fields of the form.".into(),
        parameters: [annotation.parameters.clone(), Sending::LIST.to_vec()].concat(),
        body: Some(body),
        answer,
        headers: vec![
            (CONTENT_DISPOSITION.as_str(), "The name to save it under."),
            (INDICATORS, "How many indicators were judged."),
            (ATTENTION, "How many show a trend in the direction that is not wanted."),
        ],
        problems: [&ANYWHERE[..], &[408, 413, 415, 422, 503]].concat(),
        ..Operation::default()
    }
}
