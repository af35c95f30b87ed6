//! `GET` and `POST /adjust`: p-values of indicators that are judged together, adjusted for their number.

use actix_web::web::{self, Data, Payload};
use actix_web::{HttpRequest, HttpResponse, Resource};
use serde_json::{Value, json};

use super::super::application::State;
use super::super::limit::Limits;
use super::super::{body, compute, negotiate, respond};
use super::{ANYWHERE, READ_AND_SEND, head, path};
use crate::catalogue::openapi::{Operation, answer_forms, arguments_body};
use crate::finding::Adjustment;
use crate::method::declaration::{Arguments, Declared, List, ParameterError, check_names};
use crate::problem::{Problem, ProblemKind};
use crate::query::address;
use crate::reading::{Cell, list};
use crate::reply::adjusted::{Family, write};
use crate::reply::{Answer, Presentation, Reply};

crate::parameters! {
    /// What adjusting takes.
    pub struct Adjusting {
        /// The p-values of all indicators that are judged together, in any order; blanks keep their places and do not count.
        p: List = List::default(),
        /// How they are adjusted.
        by: Adjustment = Adjustment::Holm,
    }
}

pub fn resource() -> Resource {
    path("/adjust", READ_AND_SEND).route(web::get().to(get)).route(web::head().to(head_of)).route(web::post().to(post))
}

async fn get(request: HttpRequest, state: Data<State>) -> HttpResponse {
    respond(&request, Ok(address::arguments(request.query_string())), &state.limits)
}

async fn head_of(request: HttpRequest) -> HttpResponse {
    head(negotiate::presentation(&request).reply.media_type())
}

async fn post(request: HttpRequest, payload: Payload, state: Data<State>) -> HttpResponse {
    let sent = received(&request, payload, &state).await;
    respond(&request, sent, &state.limits)
}

async fn received(request: &HttpRequest, payload: Payload, state: &State) -> Result<Arguments, Problem> {
    let media = body::media(request)?;
    let body = body::read(request, payload, state.limits.body, state.limits.body_time).await?;
    let mut arguments = address::arguments(request.query_string());
    body::add(&mut arguments, media, &body)?;
    Ok(arguments)
}

fn respond(request: &HttpRequest, sent: Result<Arguments, Problem>, limits: &Limits) -> HttpResponse {
    let usual = negotiate::usual(request);
    let arguments = match sent {
        Ok(arguments) => arguments,
        Err(problem) => return respond::problem_for(request, &problem),
    };
    match compute::inline(|| adjust(&arguments, usual, limits)) {
        Ok(answer) => respond::answer(answer),
        Err(problem) => respond::problem(&problem, &Presentation::lenient(&arguments, usual)),
    }
}

fn adjust(arguments: &Arguments, usual: Reply, limits: &Limits) -> Result<Answer, Problem> {
    limits.check_readings(arguments)?;
    check_names(arguments, &[Adjusting::LIST, Presentation::LIST])?;
    let presentation = Presentation::of(arguments, usual)?;
    let adjusting = Adjusting::read(arguments)?;
    let Some(cells) = adjusting.p.cells else {
        return Err(ParameterError::Absent { name: "p", doc: "the p-values of all indicators that are judged together" }.into());
    };
    let p: Vec<Option<f64>> = cells.iter().enumerate().map(|(index, cell)| p_value(index, cell)).collect::<Result<_, _>>()?;
    write(&Family::new(p, adjusting.by), &presentation)
}

fn p_value(index: usize, cell: &Cell) -> Result<Option<f64>, Problem> {
    let number = match cell {
        Cell::Empty => return Ok(None),
        Cell::Number(number) => Some(*number),
        Cell::Text(text) => list::number(text),
        _ => None,
    };
    match number.filter(|p| (0.0..=1.0).contains(p)) {
        Some(p) => Ok(Some(p)),
        None => {
            let place = format!("p, position {}", index + 1);
            let message = format!("{place}: expected a number from 0 to 1 or blank, got `{}`", cell.quote());
            Err(Problem::new(ProblemKind::Malformed, "p-value", message).at(place).value(cell.quote()))
        }
    }
}

pub fn operations() -> [Operation; 2] {
    ["get", "post"].map(|verb| {
        let parameters = [Adjusting::LIST, Presentation::LIST].concat();
        let example = json!({ "p": [0.01, 0.04, 0.03] });
        let body = (verb == "post").then(|| Value::Object(arguments_body(&parameters, &[], &example)));
        let extra: &[u16] = if verb == "get" { &[413] } else { &[408, 413, 415] };
        let numbers = json!({ "type": "array", "items": { "type": ["number", "null"] } });
        let family = json!({
            "type": "object",
            "description": "The family; p and adjusted have the same order.",
            "properties": { "by": { "type": "string" }, "family": { "type": "integer" }, "p": numbers, "adjusted": numbers },
            "required": ["by", "family", "p", "adjusted"],
            "additionalProperties": false,
        });
        let one = json!({ "$ref": "#/components/schemas/OneFact" });
        let family_of_three = Family::new(vec![Some(0.01), Some(0.04), Some(0.03)], Adjustment::Holm);
        Operation {
            path: "/adjust".into(),
            verb,
            id: format!("{verb}-adjust"),
            summary: "Adjusts p-values for being judged together".into(),
            description: "With `give` set to a place in the list, counted from 1, the adjusted value at that place alone.".into(),
            parameters,
            needed: if verb == "get" { &["p"] } else { &[] },
            body,
            answer: answer_forms(json!({ "anyOf": [family, one] }), serde_json::to_value(family_of_three).ok()),
            examples: if verb == "get" { vec![("p".into(), "0.01;0.04;0.03".into())] } else { Vec::new() },
            problems: [&ANYWHERE, extra].concat(),
            ..Operation::default()
        }
    })
}
