//! `GET` and `POST /trend/{name}`: readings in, a conclusion with its evidence out.

use actix_web::web::{self, Data, Path, Payload, ServiceConfig};
use actix_web::{HttpRequest, HttpResponse};
use serde_json::json;

use super::super::application::State;
use super::super::limit::{Limits, cells, separators};
use super::super::{body, compute, negotiate, respond};
use super::{ANYWHERE, READ_AND_SEND, head, path};
use crate::catalogue::example;
use crate::catalogue::openapi::{Operation, answer_forms, arguments_body};
use crate::finding::{Report, examine};
use crate::method::declaration::{Arguments, Declared};
use crate::method::{METHODS, Registered};
use crate::problem::Problem;
use crate::query::request::shared_parameters;
use crate::query::{address, read, request};
use crate::reply::{self, Answer, Presentation, Reply};

/// One path for each test, found by comparing, and one for all other names, which must be taken apart to be named.
pub fn configure(routes: &mut ServiceConfig) {
    for method in METHODS {
        routes.service(
            path(&format!("/trend/{}", method.card.key), READ_AND_SEND)
                .route(web::get().to(move |request, state| get(method, request, state)))
                .route(web::head().to(head_of))
                .route(web::post().to(move |request, payload, state| post(method, request, payload, state))),
        );
    }
    routes.service(web::resource("/trend/{name}").to(unknown));
}

async fn unknown(name: Path<String>, request: HttpRequest) -> HttpResponse {
    match request::method(&name) {
        Ok(_) => respond::not_allowed(&request, READ_AND_SEND),
        Err(problem) => respond::problem_for(&request, &problem),
    }
}

async fn get(method: &'static Registered, request: HttpRequest, state: Data<State>) -> HttpResponse {
    let sent = Sent { arguments: address::arguments(request.query_string()), body: None, usual: negotiate::usual(&request) };
    respond(method, sent, &state).await
}

async fn head_of(request: HttpRequest) -> HttpResponse {
    head(negotiate::presentation(&request).reply.media_type())
}

async fn post(method: &'static Registered, request: HttpRequest, payload: Payload, state: Data<State>) -> HttpResponse {
    let received = match body::media(&request) {
        Ok(media) => body::read(&request, payload, state.limits.body, state.limits.body_time).await.map(|body| (media, body)),
        Err(problem) => Err(problem),
    };
    match received {
        Ok((media, body)) => {
            let arguments = address::arguments(request.query_string());
            let body = Some((media, body.freeze()));
            respond(method, Sent { arguments, body, usual: negotiate::usual(&request) }, &state).await
        }
        Err(problem) => respond::problem_for(&request, &problem),
    }
}

/// A request as it came.
struct Sent {
    arguments: Arguments,
    body: Option<(Option<body::Media>, web::Bytes)>,
    usual: Reply,
}

impl Sent {
    /// How many readings there are at most, estimated without reading the body.
    fn readings(&self) -> usize {
        let in_address = self.arguments.values().map(cells).max().unwrap_or_default();
        in_address.max(self.body.as_ref().map_or(0, |(_, body)| separators(body)))
    }

    /// Judges, and says in which form a problem is to be answered.
    fn judge(mut self, method: &Registered, limits: &Limits) -> Judged {
        let body = self.body.as_ref().map_or(Ok(()), |(media, body)| body::add(&mut self.arguments, *media, body));
        let answer = body.and_then(|()| judge(method, &self.arguments, self.usual, limits));
        let presentation = Presentation::lenient(&self.arguments, self.usual);
        Judged { answer, presentation }
    }
}

struct Judged {
    answer: Result<Answer, Problem>,
    presentation: Presentation,
}

fn judge(method: &Registered, arguments: &Arguments, usual: Reply, limits: &Limits) -> Result<Answer, Problem> {
    limits.check_readings(arguments)?;
    let presentation = Presentation::of(arguments, usual)?;
    let asked = read(method, arguments, &[Presentation::LIST])?;
    let finding = examine(&asked.series, &asked.request);
    if let Err(refusal) = finding.result {
        return Err(refusal.into());
    }
    let report = if presentation.shows_evidence() { Report::new } else { Report::without_evidence };
    reply::write(&report(&asked.series, &asked.understood, &finding), &presentation)
}

async fn respond(method: &'static Registered, sent: Sent, state: &Data<State>) -> HttpResponse {
    let presentation = Presentation::lenient(&sent.arguments, sent.usual);
    let judged = if sent.readings() <= state.limits.inline_readings {
        compute::inline(|| Ok(sent.judge(method, &state.limits)))
    } else {
        let shared = state.clone();
        compute::elsewhere(&state.computing, move || Ok(sent.judge(method, &shared.limits))).await
    };
    match judged {
        Ok(Judged { answer: Ok(answer), .. }) => respond::answer(answer),
        Ok(Judged { answer: Err(problem), presentation }) => respond::problem(&problem, &presentation),
        Err(problem) => respond::problem(&problem, &presentation),
    }
}

pub fn operations() -> Vec<Operation> {
    METHODS.iter().flat_map(|method| [operation(method, "get"), operation(method, "post")]).collect()
}

fn operation(method: &Registered, verb: &'static str) -> Operation {
    let card = method.card;
    let parameters = [method.parameters.to_vec(), shared_parameters().concat(), Presentation::LIST.to_vec()].concat();
    let arguments = example::arguments(method);
    let schemas = ["Report", "OneFact", "Evidence"].map(|name| json!({ "$ref": format!("#/components/schemas/{name}") }));
    let needed: &[&str] = if verb == "get" { &["readings"] } else { &[] };
    let body = (verb == "post").then(|| {
        let mut content = arguments_body(&parameters, &[], &arguments);
        for (media_type, separated) in
            [("text/plain", "by newlines, tabs, semicolons or commas"), ("text/csv", "by newlines or commas")]
        {
            let description = format!("The readings, separated {separated}; all else stands in the address.");
            content.insert(media_type.into(), json!({ "schema": { "type": "string", "description": description } }));
        }
        content.into()
    });
    let extra: &[u16] = if verb == "get" { &[413, 422, 503] } else { &[408, 413, 415, 422, 503] };
    Operation {
        path: format!("/trend/{}", card.key),
        verb,
        id: format!("{verb}-{}", card.key),
        summary: card.title.into(),
        description: format!("{} Null hypothesis: {}", card.question, card.null_hypothesis),
        parameters,
        needed,
        body,
        answer: answer_forms(json!({ "anyOf": schemas }), example::answer(method)),
        examples: if verb == "get" { example::in_address(&arguments) } else { Vec::new() },
        problems: [&ANYWHERE, extra].concat(),
        ..Operation::default()
    }
}
