//! The examples: one file each, embedded, and used by the documentation, the landing page, the
//! command line and the tests alike.

use axum::body::Body;
use axum::http::Response;
use serde::Serialize;
use utoipa::ToSchema;

use super::problem::Problem;
use super::route::{BASE, Call, Gives, JSON, Outcome, Parameter, Route, json_response};
use crate::diagnostic::{Code, nearest};

/// A description to try.
#[derive(Debug)]
pub struct Example {
    /// Its name in addresses.
    pub name: &'static str,
    /// What it shows.
    pub summary: &'static str,
    /// The description, as JSON.
    pub text: &'static str,
}

macro_rules! examples {
    ($($name:literal : $summary:literal),+ $(,)?) => {
        /// Every example; the first is the one that is shown first.
        pub const EXAMPLES: &[Example] = &[$(Example {
            name: $name,
            summary: $summary,
            text: include_str!(concat!("../../openapi/examples/", $name, ".json")),
        }),+];
    };
}

examples! {
    "laundry-back-pressure-turbine": "A steam turbine whose exhaust is colder than any turbine could make it.",
    "laundry-let-down": "A let-down valve and a desuperheater that hold.",
    "harbour-heat-engine": "A heat engine that promises more than its two temperatures allow.",
    "quay-waste-heat-boiler": "A waste-heat boiler whose balances hold while its inside is impossible.",
    "power-house-heat-recovery": "A two-pressure heat-recovery steam plant with condenser and generator.",
    "laundry-gas-boiler": "A gas-fired steam boiler whose air ratio follows from an oxygen reading.",
    "forge-quench": "A batch: hot steel quenched in oil, the final temperature solved.",
    "boatyard-air-receiver": "A batch: an air receiver filled from a line.",
    "cold-store-chiller": "An ammonia chiller with its four components.",
    "district-heat-pump": "A river heat pump with sliding source and sink.",
    "power-house-cooling-tower": "A cooling tower: dry air and make-up are solved.",
    "brewery-organic-cycle": "An organic Rankine cycle on hot water.",
    "grain-store-dryer": "A belt dryer: moist grain as dry grain and water; air flow and humidity of the exhaust solved.",
}

/// The example of this name.
pub fn find(name: &str) -> Option<&'static Example> {
    EXAMPLES.iter().find(|example| example.name == name)
}

/// One example in the list.
#[derive(Serialize, ToSchema)]
pub struct ExampleEntry {
    /// Its name.
    #[schema(value_type = String)]
    name: &'static str,
    /// What it shows.
    #[schema(value_type = String)]
    summary: &'static str,
    /// Where it is.
    href: String,
}

/// The answer of `GET /v1/examples`.
#[derive(Serialize, ToSchema)]
pub struct ExampleList {
    /// The examples.
    examples: Vec<ExampleEntry>,
}

/// `GET /v1/examples`.
pub const LIST: Route = Route {
    path: "/v1/examples",
    id: "list_examples",
    tag: Some("catalogues"),
    summary: "Examples of descriptions",
    description: "Lists complete descriptions that can be posted to `/v1/checks` as they are.",
    gives: &[Gives { media: JSON, schema: Some("ExampleList") }],
    answer: "The examples.",
    handler: |_| Box::pin(list()),
    ..BASE
};

/// `GET /v1/examples/{name}`.
pub const ONE: Route = Route {
    path: "/v1/examples/{name}",
    id: "get_example",
    tag: Some("catalogues"),
    summary: "One example",
    description: "Gives one description to post to `/v1/checks`.",
    parameters: &[Parameter {
        name: "name",
        in_path: true,
        required: true,
        choices: &[],
        pattern: None,
        description: "A name from the list.",
        example: "laundry-let-down",
    }],
    gives: &[Gives { media: JSON, schema: Some("Description") }],
    answer: "The description.",
    refuses: &[404],
    handler: |call| Box::pin(one(call)),
    ..BASE
};

async fn list() -> Outcome {
    let examples = EXAMPLES.iter().map(|example| ExampleEntry {
        name: example.name,
        summary: example.summary,
        href: format!("/v1/examples/{}", example.name),
    });
    json_response(&ExampleList { examples: examples.collect() })
}

async fn one(call: Call) -> Outcome {
    let name = call.path("name");
    match find(name) {
        Some(example) => Ok(Response::new(Body::from(example.text))),
        None => {
            let close = nearest(name, EXAMPLES.iter().map(|e| e.name));
            let hint = close.first().map_or_else(String::new, |name| format!("; did you mean {name:?}?"));
            Err(Problem::new(Code::NotFound, format!("there is no example of this name{hint}")))
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_file_is_listed_and_is_a_description() {
        let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/openapi/examples");
        let files = std::fs::read_dir(folder)
            .unwrap()
            .filter(|entry| entry.as_ref().is_ok_and(|e| e.path().extension().is_some_and(|x| x == "json")))
            .count();
        assert_eq!(files, EXAMPLES.len());
        for example in EXAMPLES {
            let value: serde_json::Value = serde_json::from_str(example.text).unwrap();
            assert!(value["flows"].is_object(), "{}", example.name);
        }
        assert!(find(ONE.parameters[0].example).is_some());
    }
}
