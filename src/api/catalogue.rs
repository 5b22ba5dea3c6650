//! The catalogues: what the service knows, as lists that programs can read. Each is made once.

use std::sync::OnceLock;

use axum::body::{Body, Bytes};
use axum::http::Response;
use serde::Serialize;
use serde_json::{Value, json};
use utoipa::ToSchema;

use super::problem;
use super::route::{BASE, Call, Gives, JSON, Outcome, Route, json_response};
use crate::diagnostic::Code;

/// A handler that serves a value which is the same for the life of the process.
macro_rules! made_once {
    ($make:path) => {{
        static MADE: OnceLock<Bytes> = OnceLock::new();
        let bytes = MADE.get_or_init(|| Bytes::from($make().to_string())).clone();
        Box::pin(async { Ok(Response::new(Body::from(bytes))) })
    }};
}
/// `GET /v1/fluids`.
pub const FLUIDS: Route = Route {
    path: "/v1/fluids",
    id: "list_fluids",
    tag: Some("catalogues"),
    summary: "Fluids, with their formulations and ranges",
    description: "Lists the fluids that a description can name, with formulation, range and source.",
    gives: &[Gives { media: JSON, schema: Some("FluidList") }],
    answer: "The fluids.",
    handler: |_| made_once!(fluids),
    ..BASE
};

/// `GET /v1/rules`.
pub const RULES: Route = Route {
    path: "/v1/rules",
    id: "list_rules",
    tag: Some("catalogues"),
    summary: "Rules that a process is tested against",
    description: "Lists the rules with what each tests, its authority (law, data or practice), and its source.",
    gives: &[Gives { media: JSON, schema: Some("RuleList") }],
    answer: "The rules.",
    handler: |_| made_once!(rules),
    ..BASE
};

/// `GET /v1/units`.
pub const UNITS: Route = Route {
    path: "/v1/units",
    id: "list_units",
    tag: Some("catalogues"),
    summary: "Units, by quantity",
    description: "Lists the units that each quantity takes, with their other spellings.",
    gives: &[Gives { media: JSON, schema: Some("UnitList") }],
    answer: "The units.",
    handler: |_| made_once!(units),
    ..BASE
};

/// `GET /v1/component-kinds`.
pub const KINDS: Route = Route {
    path: "/v1/component-kinds",
    id: "list_component_kinds",
    tag: Some("catalogues"),
    summary: "Kinds of components, with their ports",
    description: "Lists the kinds of components with required and optional ports and what can be given for each.",
    gives: &[Gives { media: JSON, schema: Some("ComponentKindList") }],
    answer: "The kinds of components.",
    handler: |_| made_once!(component_kinds),
    ..BASE
};

/// `GET /v1/codes`.
pub const CODES: Route = Route {
    path: "/v1/codes",
    id: "list_codes",
    tag: Some("catalogues"),
    summary: "Codes of faults",
    description: "Lists the codes that stand in problem details, with their meaning and the status they are answered with.",
    gives: &[Gives { media: JSON, schema: Some("CodeList") }],
    answer: "The codes.",
    handler: |_| made_once!(codes),
    ..BASE
};

/// `GET /v1/limits`.
pub const LIMITS: Route = Route {
    path: "/v1/limits",
    id: "get_limits",
    tag: Some("catalogues"),
    summary: "Limits of this service",
    description: "Gives every limit as it is set on this service: bytes, times, concurrency, and what one description may hold.",
    gives: &[Gives { media: JSON, schema: Some("PublishedLimits") }],
    answer: "The limits.",
    handler: |call| Box::pin(limits(call)),
    ..BASE
};

async fn limits(call: Call) -> Outcome {
    json_response(&call.service.limits)
}

/// The fluids.
pub fn fluids() -> Value {
    json!({"fluids": []})
}

/// The rules.
pub fn rules() -> Value {
    json!({"rules": []})
}

/// The units.
pub fn units() -> Value {
    json!({"quantities": []})
}

/// The kinds of components.
pub fn component_kinds() -> Value {
    json!({"component_kinds": []})
}

/// One code.
#[derive(Serialize, ToSchema)]
pub struct CodeEntry {
    /// The code as it stands in an answer.
    #[schema(value_type = String)]
    code: &'static str,
    /// What it means.
    #[schema(value_type = String)]
    meaning: &'static str,
    /// The status of an answer whose first fault it is.
    status: u16,
}

/// The answer of `GET /v1/codes`.
#[derive(Serialize, ToSchema)]
pub struct CodeList {
    /// The codes.
    codes: Vec<CodeEntry>,
}

/// The codes.
pub fn codes() -> Value {
    let codes = Code::ALL.iter().map(|code| CodeEntry {
        code: code.text(),
        meaning: code.meaning(),
        status: problem::status(*code).as_u16(),
    });
    json!(CodeList { codes: codes.collect() })
}
