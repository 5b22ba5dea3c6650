//! `/v1/states`: one state of a fluid, asked by POST with a JSON body, or by GET with the same members
//! in the query.

use axum::body::{Body, Bytes};
use axum::http::Response;
use serde_json::Value;

use super::check::{DEADLINE, UNITS};
use super::route::{BASE, Call, Gives, JSON, Method, Outcome, Parameter, Route, TEXT, Takes, optional};

/// Parameters of the call itself, which are no members of the question.
pub(super) const OF_THE_CALL: &[&str] = &["units", "deadline"];

const STATE: &[Gives] =
    &[Gives { media: JSON, schema: Some("StateReport") }, Gives { media: TEXT, schema: None }];

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
        optional("salinity", "Mass fraction of the salt in a solution, 0 to 1.", "0.035"),
        optional("environment.temperature", "Temperature of the dead state.", "10 degC"),
        optional("environment.pressure", "Pressure of the dead state.", "1.013 bar"),
        optional("environment.relative_humidity", "Relative humidity of the dead state.", "0.6"),
        UNITS,
        DEADLINE,
    ],
    gives: STATE,
    answer: "The state.",
    refuses: &[406, 422, 503],
    handler: |call| Box::pin(by_query(call)),
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
    handler: |call| Box::pin(by_body(call)),
    ..BASE
};

async fn by_body(call: Call) -> Outcome {
    let body = call.body.clone();
    answer(call, body).await
}

async fn by_query(call: Call) -> Outcome {
    let body = Bytes::from(Value::Object(call.query.fields(OF_THE_CALL)?).to_string());
    answer(call, body).await
}

async fn answer(call: Call, body: Bytes) -> Outcome {
    let (deadline, units, media) = (call.deadline()?, call.query.units(), call.media);
    let work = call.service.run(deadline, move |engine, limits, cancel| {
        let state = engine.state(&body, limits, units, cancel)?;
        Ok(if media == TEXT { state.to_text().into_bytes() } else { state.to_json() })
    });
    Ok(Response::new(Body::from(work.await?)))
}
