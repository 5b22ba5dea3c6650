//! The OpenAPI 3.1 document, drawn from the routes and from the types on the wire.

use serde_json::{Map, Value, json};
use utoipa::OpenApi;

use super::catalogue::{
    CodeEntry, CodeList, FluidEntry, FluidList, KindEntry, KindList, PortEntry, QuantityEntry, RuleEntry,
    RuleList, UnitEntry, UnitList,
};
use super::claim::{ClaimKindEntry, ClaimKindList, ClaimParameter};
use super::edge::REQUEST_ID;
use super::examples::{EXAMPLES, ExampleEntry, ExampleList};
use super::limits::{DescriptionLimits, PublishedLimits, ServiceLimits};
use super::operation::Health;
use super::problem::{MEDIA_TYPE, Problem, ProblemFault};
use super::route::{Gives, Parameter, Route, Takes};
use super::routes::ROUTES;
use crate::claim::{CLAIM, ClaimReport};
use crate::document::{ObjectShape, components, union_components};
use crate::process::shape::{DESCRIPTION, STATE_QUESTION};
use crate::report::{Report, StateReport};

/// The types on the wire whose schemas are derived.
#[derive(OpenApi)]
#[openapi(components(schemas(
    Report,
    StateReport,
    ClaimReport,
    ClaimKindList,
    ClaimKindEntry,
    ClaimParameter,
    Problem,
    ProblemFault,
    PublishedLimits,
    ServiceLimits,
    DescriptionLimits,
    FluidList,
    FluidEntry,
    RuleList,
    RuleEntry,
    UnitList,
    QuantityEntry,
    UnitEntry,
    KindList,
    KindEntry,
    PortEntry,
    CodeList,
    CodeEntry,
    ExampleList,
    ExampleEntry,
    Health,
)))]
struct Derived;

/// The groups of routes, in the order in which they are shown.
const TAGS: &[(&str, &str)] = &[
    ("checks", "One description of a process in, one report out."),
    ("states", "One state of a fluid."),
    ("claims", "A figure of a brochure against its limit."),
    ("catalogues", "What the service knows and grants."),
    ("operation", "Health and documentation."),
];

/// Statuses from 400 on, and what each says. Every route may answer 400 and 500.
const REFUSALS: &[(u16, &str, &str)] = &[
    (400, "BadRequest", "The request or its body is malformed."),
    (404, "NotFound", "There is nothing at this address."),
    (406, "NotAcceptable", "None of the accepted media types can be produced."),
    (408, "RequestTimeout", "The request did not arrive in time."),
    (413, "ContentTooLarge", "The body is larger than the limit."),
    (415, "UnsupportedMediaType", "The body's media type or coding is not taken here."),
    (422, "Unprocessable", "What was sent cannot be read as a question; every fault is located."),
    (500, "InternalError", "The service failed."),
    (
        503,
        "Unavailable",
        "Overloaded, stopping, or the deadline has passed; ask again after `Retry-After` seconds.",
    ),
];

/// The objects that are sent; what they consist of follows from their declarations.
const SENT: &[&ObjectShape] = &[&DESCRIPTION, &STATE_QUESTION];

/// The document.
pub fn document() -> Value {
    let derived = serde_json::to_value(Derived::openapi()).unwrap_or_default();
    let mut schemas = components(SENT);
    schemas.extend(union_components(&CLAIM));
    schemas.insert("BatchAnswer".into(), batch_answer());
    schemas.insert(
        "OpenApiDocument".into(),
        json!({"type": "object", "description": "An OpenAPI 3.1 document.", "additionalProperties": true}),
    );
    if let Some(Value::Object(found)) = derived.pointer("/components/schemas").cloned() {
        schemas.extend(found);
    }
    share_map_values(&mut schemas);
    open_flattened_maps(&mut schemas);
    let mut paths = Map::new();
    for route in ROUTES.iter().filter(|route| route.tag.is_some()) {
        let entry = paths.entry(route.path).or_insert_with(|| json!({}));
        if let Some(item) = entry.as_object_mut() {
            item.insert(route.method.key().into(), operation(route));
        }
    }
    let responses: Map<String, Value> =
        REFUSALS.iter().map(|(status, name, text)| ((*name).into(), refusal(*status, text))).collect();
    let tags: Vec<Value> =
        TAGS.iter().map(|(name, text)| json!({"name": name, "description": text})).collect();
    json!({
        "openapi": "3.1.0",
        "info": {
            "title": env!("CARGO_PKG_NAME"),
            "version": env!("CARGO_PKG_VERSION"),
            "summary": "Checks processes against the second law of thermodynamics.",
            "description": ABOUT,
            "license": {"name": "MIT OR Apache-2.0", "identifier": "MIT OR Apache-2.0"},
        },
        "servers": [{"url": "/", "description": "This service."}],
        "security": [],
        "tags": tags,
        "paths": paths,
        "components": {"schemas": schemas, "responses": responses, "headers": headers()},
    })
}

/// The document as it is served and committed.
pub fn document_text() -> String {
    let mut text = serde_json::to_string_pretty(&document()).unwrap_or_default();
    text.push('\n');
    text
}

/// A derived map (`Named_X`) holds a copy of the schema of its values; it becomes a reference to `X`,
/// so that generated clients know one type instead of many alike.
fn share_map_values(schemas: &mut Map<String, Value>) {
    let mut shared = Vec::new();
    for (name, schema) in schemas.iter_mut() {
        if let (Some(value), Some(held)) =
            (name.strip_prefix("Named_"), schema.get_mut("additionalProperties"))
        {
            shared.push((value.to_owned(), std::mem::replace(held, schema_ref(value))));
        }
    }
    for (name, schema) in shared {
        schemas.entry(name).or_insert(schema);
    }
}

/// An object with a map flattened into it is derived as both at once (`allOf`), so that every declared
/// member would have to be a value of the map as well; it becomes one object whose other members are
/// the map's values.
fn open_flattened_maps(schemas: &mut Map<String, Value>) {
    const MAP: &str = "#/components/schemas/Named_";
    for schema in schemas.values_mut() {
        let Some([map, own]) = schema.get("allOf").and_then(Value::as_array).map(Vec::as_slice) else {
            continue;
        };
        let Some(value) = map["$ref"].as_str().and_then(|r| r.strip_prefix(MAP)) else { continue };
        let mut object = own.clone();
        object["additionalProperties"] = schema_ref(value);
        object["description"] = schema["description"].clone();
        *schema = object;
    }
}

const ABOUT: &str = "Takes a description of a process (components, and the flows of matter, heat and work between \
    them) and answers with balances of mass, energy, entropy and exergy, and with every place where the description \
    contradicts the second law: by how much, and how sure that is.\n\nEvery value that has a dimension carries its unit. \
    Every answer from 400 on is `application/problem+json` and locates each fault with a JSON Pointer.\n\nA verdict \
    judges figures, not equipment: it replaces no design review, no code and no licensed engineer.";

fn headers() -> Value {
    json!({
        "RequestId": {
            "description": "The id of the call, as sent by the client in the same header or made by the service.",
            "schema": {"type": "string"},
        },
        "RetryAfter": {"description": "Seconds to wait.", "schema": {"type": "integer", "minimum": 0}},
        "Verdict": {"description": "The report's verdict.", "schema": {"type": "string"}},
    })
}

fn schema_ref(name: &str) -> Value {
    json!({"$ref": format!("#/components/schemas/{name}")})
}

fn header_ref(name: &str) -> Value {
    json!({"$ref": format!("#/components/headers/{name}")})
}

fn refusal(status: u16, text: &str) -> Value {
    let mut headers = Map::new();
    headers.insert(REQUEST_ID.to_string(), header_ref("RequestId"));
    if status == 503 {
        headers.insert("retry-after".into(), header_ref("RetryAfter"));
    }
    json!({
        "description": text,
        "headers": headers,
        "content": {MEDIA_TYPE: {"schema": schema_ref("Problem")}},
    })
}

fn batch_answer() -> Value {
    json!({
        "type": "object",
        "description": "The answer to one line: a report, or the problem that kept it from being checked.",
        "required": ["line"],
        "properties": {
            "line": {"type": "integer", "minimum": 1, "description": "The number of the line, from 1."},
            "report": schema_ref("Report"),
            "problem": schema_ref("Problem"),
        },
    })
}

fn operation(route: &Route) -> Value {
    let mut responses = Map::new();
    let mut headers = Map::new();
    headers.insert(REQUEST_ID.to_string(), header_ref("RequestId"));
    if route.gives.iter().any(|g| matches!(g.schema, Some("Report" | "ClaimReport"))) {
        headers.insert("verdict".into(), header_ref("Verdict"));
    }
    let content: Map<String, Value> = route.gives.iter().map(|g| (g.media.into(), given(g))).collect();
    responses
        .insert("200".into(), json!({"description": route.answer, "headers": headers, "content": content}));
    for (status, name, _) in REFUSALS {
        if matches!(status, 400 | 500) || route.refuses.contains(status) {
            responses.insert(status.to_string(), json!({"$ref": format!("#/components/responses/{name}")}));
        }
    }
    let mut parameters: Vec<Value> = route.parameters.iter().map(parameter).collect();
    parameters.extend(route.further.map(further));
    let mut operation = json!({
        "tags": [route.tag],
        "summary": route.summary,
        "description": route.description,
        "operationId": route.id,
        "parameters": parameters,
        "responses": responses,
    });
    if let (Some(takes), Some(members)) = (&route.takes, operation.as_object_mut()) {
        members.insert("requestBody".into(), taken(takes));
    }
    operation
}

fn given(gives: &Gives) -> Value {
    json!({"schema": gives.schema.map_or_else(|| json!({"type": "string"}), schema_ref)})
}

fn parameter(parameter: &Parameter) -> Value {
    let mut schema = json!({"type": "string"});
    if let (false, Some(members)) = (parameter.choices.is_empty(), schema.as_object_mut()) {
        members.insert("enum".into(), json!(parameter.choices));
    }
    if let (Some(pattern), Some(members)) = (parameter.pattern, schema.as_object_mut()) {
        members.insert("pattern".into(), json!(pattern));
    }
    json!({
        "name": parameter.name,
        "in": if parameter.in_path { "path" } else { "query" },
        "required": parameter.required,
        "description": parameter.description,
        "schema": schema,
        "example": parameter.example,
    })
}

/// Parameters that a declaration elsewhere names: an open object, spread over the query.
fn further(about: &str) -> Value {
    json!({
        "name": "further",
        "in": "query",
        "required": false,
        "description": about,
        "style": "form",
        "explode": true,
        "schema": {"type": "object", "additionalProperties": {"type": "string"}},
    })
}

fn taken(takes: &Takes) -> Value {
    let mut content = json!({"schema": schema_ref(takes.schema)});
    if let (true, Some(members)) = (takes.examples, content.as_object_mut()) {
        let examples: Map<String, Value> = EXAMPLES
            .iter()
            .map(|e| {
                let value: Value = serde_json::from_str(e.text).unwrap_or_default();
                (e.name.into(), json!({"summary": e.summary, "value": value}))
            })
            .collect();
        members.insert("examples".into(), Value::Object(examples));
    }
    let media = takes.media.first().copied().unwrap_or_default();
    // An empty stream is a stream; an empty body is no JSON.
    json!({"required": !takes.streamed, "description": takes.description, "content": {media: content}})
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::document::clashing_names;

    fn references<'a>(value: &'a Value, found: &mut Vec<&'a str>) {
        match value {
            Value::Object(members) => {
                found.extend(members.get("$ref").and_then(Value::as_str));
                members.values().for_each(|v| references(v, found));
            }
            Value::Array(items) => items.iter().for_each(|v| references(v, found)),
            _ => {}
        }
    }

    #[test]
    fn every_reference_leads_somewhere() {
        let document = document();
        let mut found = Vec::new();
        references(&document, &mut found);
        assert!(found.len() > 20);
        for reference in found {
            let pointer = reference.strip_prefix('#').unwrap();
            assert!(document.pointer(pointer).is_some(), "{reference} dangles");
        }
    }

    #[test]
    fn no_two_schemas_share_a_name() {
        assert_eq!(clashing_names(SENT), Vec::<String>::new());
        let derived = serde_json::to_value(Derived::openapi()).unwrap();
        let derived = derived.pointer("/components/schemas").unwrap().as_object().unwrap();
        let others = components(SENT);
        for name in others.keys() {
            assert!(!derived.contains_key(name), "{name} twice");
        }
    }

    #[test]
    fn every_tag_is_described_and_every_refusal_known() {
        for route in ROUTES {
            assert!(route.tag.is_none_or(|tag| TAGS.iter().any(|(name, _)| *name == tag)), "{}", route.path);
            for status in route.refuses {
                assert!(REFUSALS.iter().any(|(s, _, _)| s == status), "{status} at {}", route.path);
            }
        }
    }
}
