//! `/v1/states` and `/v1/claims`: one small question in, one answer out. Each can be asked by POST
//! with a JSON body, or by GET with the same members in the query.

use axum::body::{Body, Bytes};
use axum::http::Response;
use serde_json::Value;

use super::check::{DEADLINE, UNITS};
use super::engine::Engine;
use super::problem::Problem;
use super::route::{BASE, Call, Gives, JSON, Method, Outcome, Parameter, Route, Takes, optional};
use crate::pipeline::{Cancel, Failure, Limits};
use crate::report::UnitSystem;

/// Parameters of the call itself, which are no members of the question.
const OF_THE_CALL: &[&str] = &["units", "deadline"];

const STATE: &[Gives] = &[Gives { media: JSON, schema: Some("StateAnswer") }];
const CLAIM: &[Gives] = &[Gives { media: JSON, schema: Some("ClaimAnswer") }];

/// `GET /v1/states`.
pub const GET_STATE: Route = Route {
    path: "/v1/states",
    id: "get_state",
    tag: Some("states"),
    summary: "One state of a fluid",
    description: "Gives one state with enthalpy, entropy and exergy. The fluid is fixed by two independent properties (one \
                  where the composition or the phase leaves one free). Every value carries its unit.",
    parameters: &[
        Parameter {
            name: "fluid",
            in_path: false,
            required: true,
            choices: &[],
            pattern: None,
            description: "The fluid, as `/v1/fluids` lists it.",
            example: "water",
        },
        optional("temperature", "Temperature.", "300 degC"),
        optional("pressure", "Pressure, absolute unless the unit says gauge.", "10 bar"),
        optional("enthalpy", "Specific enthalpy.", "3000 kJ/kg"),
        optional("entropy", "Specific entropy.", "7 kJ/(kg.K)"),
        optional("quality", "Mass fraction of vapour, 0 to 1.", "0.9"),
        optional("superheat", "Temperature above saturation.", "20 K"),
        optional("subcooling", "Temperature below saturation.", "5 K"),
        optional("phase", "The phase where the pair leaves it open.", "vapour"),
        optional("relative_humidity", "Relative humidity of humid air, 0 to 1.", "0.6"),
        optional("humidity_ratio", "Mass of water vapour to mass of dry air.", "0.01"),
        optional("wet_bulb", "Wet-bulb temperature of humid air.", "18 degC"),
        optional("dew_point", "Dew point of humid air.", "12 degC"),
        optional("environment.temperature", "Temperature of the dead state.", "10 degC"),
        optional("environment.pressure", "Pressure of the dead state.", "1.013 bar"),
        optional("environment.relative_humidity", "Relative humidity of the dead state.", "0.6"),
        UNITS,
        DEADLINE,
    ],
    gives: STATE,
    answer: "The state.",
    refuses: &[406, 422, 503],
    handler: |call| Box::pin(ask_by_query(call, |e, b, u, l, c| e.state(b, u, l, c))),
    ..BASE
};

/// `POST /v1/states`.
pub const POST_STATE: Route = Route {
    method: Method::Post,
    path: "/v1/states",
    id: "state",
    tag: Some("states"),
    summary: "One state of a fluid, from a JSON body",
    description: "The same as the GET, for fluids that need an object (mixtures, own species).",
    parameters: &[UNITS, DEADLINE],
    takes: Some(Takes {
        media: &[JSON],
        schema: "StateQuestion",
        description: "The fluid and the properties that fix it.",
        examples: false,
        streamed: false,
    }),
    gives: STATE,
    answer: "The state.",
    refuses: &[406, 408, 413, 415, 422, 503],
    handler: |call| Box::pin(ask_by_body(call, |e, b, u, l, c| e.state(b, u, l, c))),
    ..BASE
};

/// `POST /v1/claims`.
pub const POST_CLAIM: Route = Route {
    method: Method::Post,
    path: "/v1/claims",
    id: "claim",
    tag: Some("claims"),
    summary: "Judge one claimed performance",
    description: "Says whether a stated efficiency, coefficient of performance or yield can be true between the stated \
                  temperatures: possible, at_limit, impossible or undecided, with the limits and the entropy generated.",
    parameters: &[UNITS, DEADLINE],
    takes: Some(Takes {
        media: &[JSON],
        schema: "Claim",
        description: "The claim.",
        examples: false,
        streamed: false,
    }),
    gives: CLAIM,
    answer: "The judgement.",
    refuses: &[406, 408, 413, 415, 422, 503],
    handler: |call| Box::pin(ask_by_body(call, |e, b, u, l, c| e.claim(b, u, l, c))),
    ..BASE
};

/// `GET /v1/claims/{kind}`.
pub const GET_CLAIM: Route = Route {
    path: "/v1/claims/{kind}",
    id: "get_claim",
    tag: Some("claims"),
    summary: "Judge one claimed performance, from the query",
    description: "The same as the POST. Members of members are written with a dot, for instance \
                  `source.inlet=8 degC&source.outlet=4 degC&claim.cop=4.9`.",
    parameters: &[
        Parameter {
            name: "kind",
            in_path: true,
            required: true,
            choices: &[],
            pattern: None,
            description: "The kind of machine.",
            example: "heat_pump",
        },
        UNITS,
        DEADLINE,
    ],
    takes_fields: true,
    gives: CLAIM,
    answer: "The judgement.",
    refuses: &[406, 422, 503],
    handler: |call| Box::pin(ask_by_query(call, |e, b, u, l, c| e.claim(b, u, l, c))),
    ..BASE
};

/// One of the engine's small calls.
type Ask = fn(&dyn Engine, &[u8], UnitSystem, &Limits, &Cancel) -> Result<Vec<u8>, Failure>;

async fn ask_by_body(call: Call, ask: Ask) -> Outcome {
    let body = call.body.clone();
    answer(call, body, ask).await
}

async fn ask_by_query(call: Call, ask: Ask) -> Outcome {
    let mut fields = call.query.fields(OF_THE_CALL)?;
    let kind = call.path("kind");
    if !kind.is_empty() {
        let given = fields.insert("kind".to_owned(), Value::from(kind));
        if given.is_some() {
            return Err(Problem::parameter("kind", "the kind stands in the path already", None));
        }
    }
    let body = Bytes::from(Value::Object(fields).to_string());
    answer(call, body, ask).await
}

async fn answer(call: Call, body: Bytes, ask: Ask) -> Outcome {
    let (deadline, units) = (call.deadline()?, call.query.units());
    let work =
        call.service.run(deadline, move |engine, limits, cancel| ask(engine, &body, units, limits, cancel));
    Ok(Response::new(Body::from(work.await?)))
}
