//! What an operator asks: is it alive, is it ready, what does it offer.

use axum::body::Body;
use axum::http::Response;
use serde::Serialize;
use utoipa::ToSchema;

use super::problem::Problem;
use super::route::{BASE, Call, Gives, JSON, Outcome, Route, json_response};
use crate::diagnostic::Code;

/// The answer of `/livez` and `/readyz`.
#[derive(Serialize, ToSchema)]
pub struct Health {
    /// `ok`.
    #[schema(value_type = String, example = "ok")]
    status: &'static str,
    /// The version of the service.
    #[schema(value_type = String)]
    version: &'static str,
}

const HEALTH: &[Gives] = &[Gives { media: JSON, schema: Some("Health") }];

/// `GET /livez`.
pub const LIVE: Route = Route {
    path: "/livez",
    id: "is_alive",
    tag: Some("operation"),
    summary: "Whether the process runs",
    description: "Answers 200 as long as the process can answer at all.",
    gives: HEALTH,
    answer: "It runs.",
    handler: |_| Box::pin(async { healthy() }),
    ..BASE
};

/// `GET /readyz`.
pub const READY: Route = Route {
    path: "/readyz",
    id: "is_ready",
    tag: Some("operation"),
    summary: "Whether it takes work",
    description: "Answers 200 if a check would be taken now, and 503 while the queue is full or the service is stopping.",
    gives: HEALTH,
    answer: "It takes work.",
    refuses: &[503],
    handler: |call| Box::pin(ready(call)),
    ..BASE
};

/// `GET /openapi.json`.
pub const OPENAPI: Route = Route {
    path: "/openapi.json",
    id: "get_openapi",
    tag: Some("operation"),
    summary: "This interface as an OpenAPI document",
    description: "Gives the OpenAPI 3.1 document from which clients can be generated.",
    gives: &[Gives { media: JSON, schema: Some("OpenApiDocument") }],
    answer: "The document.",
    handler: |call| Box::pin(async move { Ok(Response::new(Body::from(call.service.openapi.clone()))) }),
    ..BASE
};

fn healthy() -> Outcome {
    let health = Health { status: "ok", version: env!("CARGO_PKG_VERSION") };
    json_response(&health)
}

async fn ready(call: Call) -> Outcome {
    if call.service.is_draining() {
        return Err(Problem::new(Code::Overloaded, "the service is stopping"));
    }
    if call.service.pool.is_full() {
        return Err(Problem::new(Code::Overloaded, "the queue is full"));
    }
    healthy()
}
