//! `/v1/claims`: a figure of a brochure against its limit, by POST with a JSON body, or by GET with flat
//! parameters.

use axum::body::Body;
use axum::http::{HeaderName, HeaderValue, Response};
use serde::Serialize;
use utoipa::ToSchema;

use super::check::{DEADLINE, UNITS};
use super::route::{BASE, Call, Gives, JSON, Method, Outcome, Parameter, Route, TEXT, Takes, json_response};
use super::state::OF_THE_CALL;
use crate::claim::{self, ClaimReport};

const VERDICT: HeaderName = HeaderName::from_static("verdict");

const CLAIM: &[Gives] =
    &[Gives { media: JSON, schema: Some("ClaimReport") }, Gives { media: TEXT, schema: None }];

/// `POST /v1/claims`.
pub const POST_CLAIM: Route = Route {
    method: Method::Post,
    path: "/v1/claims",
    id: "judge_claim",
    tag: Some("claims"),
    summary: "Judge a claim",
    description: "Judges one figure of a brochure against the limit that the second law sets for the stated conditions: \
                  possible, at the limit, impossible or undecided. The header `Verdict` repeats it.",
    parameters: &[UNITS, DEADLINE],
    takes: Some(Takes {
        media: &[JSON],
        schema: "Claim",
        description: "The claim and its conditions.",
        examples: false,
        streamed: false,
    }),
    gives: CLAIM,
    answer: "The judgement.",
    refuses: &[406, 408, 413, 415, 422, 503],
    handler: |call| Box::pin(by_body(call)),
    ..BASE
};

/// `GET /v1/claims/{kind}`.
pub const GET_CLAIM: Route = Route {
    path: "/v1/claims/{kind}",
    id: "judge_claim_by_query",
    tag: Some("claims"),
    summary: "Judge a claim, from a query",
    description: "The same as the POST, with the members as flat parameters: `source_inlet=8 degC`, `cop=4.9`. \
                  `GET /v1/claims` lists them by kind.",
    parameters: &[
        Parameter {
            name: "kind",
            in_path: true,
            required: true,
            choices: &[],
            pattern: None,
            description: "The kind of claim, as `/v1/claims` lists it.",
            example: "heat_pump",
        },
        UNITS,
        DEADLINE,
    ],
    further: Some("The members of the claim: paths joined by `_`, without `claim`."),
    gives: CLAIM,
    answer: "The judgement.",
    refuses: &[406, 422, 503],
    handler: |call| Box::pin(by_query(call)),
    ..BASE
};

/// `GET /v1/claims`.
pub const LIST: Route = Route {
    path: "/v1/claims",
    id: "list_claim_kinds",
    tag: Some("claims"),
    summary: "Kinds of claims",
    description: "Lists the kinds of claims that can be judged, with their parameters and an example each.",
    gives: &[Gives { media: JSON, schema: Some("ClaimKindList") }],
    answer: "The kinds.",
    handler: |_| Box::pin(async { json_response(&kinds()) }),
    ..BASE
};

/// The answer of `GET /v1/claims`.
#[derive(Serialize, ToSchema)]
pub struct ClaimKindList {
    /// The kinds.
    kinds: Vec<ClaimKindEntry>,
}

/// One kind of claim.
#[derive(Serialize, ToSchema)]
pub struct ClaimKindEntry {
    /// Its word.
    #[schema(value_type = String)]
    kind: &'static str,
    /// What such a machine does.
    #[schema(value_type = String)]
    summary: &'static str,
    /// Parameters of the query form.
    parameters: Vec<ClaimParameter>,
    /// A body for POST, to start from.
    #[schema(value_type = Object)]
    example: serde_json::Value,
}

/// One parameter of a kind of claim.
#[derive(Serialize, ToSchema)]
pub struct ClaimParameter {
    /// Its name.
    name: String,
    /// Whether the claim needs it.
    required: bool,
    /// What it holds.
    expects: String,
    /// What it means.
    #[schema(value_type = String)]
    description: &'static str,
}

fn kinds() -> ClaimKindList {
    let kinds = claim::catalogue().map(|kind| ClaimKindEntry {
        kind: kind.kind,
        summary: kind.doc,
        parameters: kind
            .parameters
            .into_iter()
            .map(|p| ClaimParameter {
                expects: p.shape.expected(),
                name: p.name,
                required: p.required,
                description: p.doc,
            })
            .collect(),
        example: serde_json::from_str(kind.example).unwrap_or_default(),
    });
    ClaimKindList { kinds: kinds.collect() }
}

async fn by_body(call: Call) -> Outcome {
    let (deadline, units, media, body) =
        (call.deadline()?, call.query.units(), call.media, call.body.clone());
    let work = call.service.run(deadline, move |engine, limits, cancel| {
        engine.claim(&body, limits, units, cancel).map(|report| (report.verdict, render(&report, media)))
    });
    Ok(answer(work.await?))
}

async fn by_query(call: Call) -> Outcome {
    let (deadline, units, media) = (call.deadline()?, call.query.units(), call.media);
    let (kind, parameters) = (call.path("kind").to_owned(), call.query.further(OF_THE_CALL));
    let work = call.service.run(deadline, move |engine, limits, cancel| {
        engine
            .claim_query(&kind, &parameters, limits, units, cancel)
            .map(|report| (report.verdict, render(&report, media)))
    });
    Ok(answer(work.await?))
}

fn render(report: &ClaimReport, media: &str) -> Vec<u8> {
    if media == TEXT { report.to_text().into_bytes() } else { report.to_json() }
}

fn answer((verdict, bytes): (&'static str, Vec<u8>)) -> Response<Body> {
    let mut response = Response::new(Body::from(bytes));
    response.headers_mut().insert(VERDICT, HeaderValue::from_static(verdict));
    response
}
