//! What is sent and what is answered, against the published schema (JSON Schema 2020-12, the part of
//! it that the document uses).

use std::fs;

use crate::support::Server;
use serde_json::{Map, Value};

/// The keywords that only describe.
const NOTES: &[&str] = &[
    "description",
    "title",
    "examples",
    "example",
    "default",
    "format",
    "discriminator",
    "deprecated",
    "readOnly",
];

struct Schemas(Map<String, Value>);

impl Schemas {
    /// Where a value does not conform; empty if it does.
    fn faults(&self, value: &Value, schema: &Value, here: &str) -> Vec<String> {
        let mut out = Vec::new();
        let Some(keywords) = schema.as_object() else {
            if schema == false {
                out.push(format!("{here}: nothing may stand here"));
            }
            return out;
        };
        for (keyword, rule) in keywords {
            let wrong = match keyword.as_str() {
                "$ref" => {
                    let name = rule.as_str().unwrap().strip_prefix("#/components/schemas/").unwrap();
                    out.extend(self.faults(value, &self.0[name], here));
                    false
                }
                "type" => match rule {
                    Value::Array(any) => !any.iter().any(|t| is(value, t)),
                    one => !is(value, one),
                },
                "enum" => !rule.as_array().unwrap().contains(value),
                "const" => rule != value,
                "required" => {
                    rule.as_array().unwrap().iter().any(|name| {
                        value.as_object().is_some_and(|o| !o.contains_key(name.as_str().unwrap()))
                    })
                }
                "properties" => {
                    for (name, inner) in rule.as_object().unwrap() {
                        if let Some(member) = value.get(name) {
                            out.extend(self.faults(member, inner, &format!("{here}/{name}")));
                        }
                    }
                    false
                }
                "additionalProperties" => {
                    let declared = keywords.get("properties").and_then(Value::as_object);
                    for (name, member) in value.as_object().into_iter().flatten() {
                        if !declared.is_some_and(|d| d.contains_key(name)) {
                            out.extend(self.faults(member, rule, &format!("{here}/{name}")));
                        }
                    }
                    false
                }
                "propertyNames" => {
                    for name in value.as_object().into_iter().flat_map(Map::keys) {
                        out.extend(self.faults(&Value::from(name.as_str()), rule, &format!("{here}/{name}")));
                    }
                    false
                }
                "items" => {
                    for (i, item) in value.as_array().into_iter().flatten().enumerate() {
                        out.extend(self.faults(item, rule, &format!("{here}/{i}")));
                    }
                    false
                }
                "allOf" => {
                    rule.as_array().unwrap().iter().for_each(|s| out.extend(self.faults(value, s, here)));
                    false
                }
                "oneOf" | "anyOf" => {
                    let fit = rule
                        .as_array()
                        .unwrap()
                        .iter()
                        .filter(|s| self.faults(value, s, here).is_empty())
                        .count();
                    fit == 0 || keyword == "oneOf" && fit > 1
                }
                "not" => self.faults(value, rule, here).is_empty(),
                "minimum" => value.as_f64().is_some_and(|x| x < rule.as_f64().unwrap()),
                "maximum" => value.as_f64().is_some_and(|x| x > rule.as_f64().unwrap()),
                "exclusiveMinimum" => value.as_f64().is_some_and(|x| x <= rule.as_f64().unwrap()),
                "exclusiveMaximum" => value.as_f64().is_some_and(|x| x >= rule.as_f64().unwrap()),
                "minItems" => value.as_array().is_some_and(|a| (a.len() as u64) < rule.as_u64().unwrap()),
                "maxItems" => value.as_array().is_some_and(|a| a.len() as u64 > rule.as_u64().unwrap()),
                "minLength" => {
                    value.as_str().is_some_and(|s| (s.chars().count() as u64) < rule.as_u64().unwrap())
                }
                "maxLength" => {
                    value.as_str().is_some_and(|s| s.chars().count() as u64 > rule.as_u64().unwrap())
                }
                // Patterns are the reader's own and tested there.
                "pattern" => false,
                "minProperties" => {
                    value.as_object().is_some_and(|o| (o.len() as u64) < rule.as_u64().unwrap())
                }
                "maxProperties" => value.as_object().is_some_and(|o| o.len() as u64 > rule.as_u64().unwrap()),
                note => {
                    assert!(NOTES.contains(&note), "the keyword {note} is not known here");
                    false
                }
            };
            if wrong {
                let shown: String = value.to_string().chars().take(80).collect();
                out.push(format!("{here}: {keyword} {rule} refuses {shown}"));
            }
        }
        out
    }

    fn named(&self, value: &Value, name: &str) -> Vec<String> {
        self.faults(value, &self.0[name], "")
    }
}

fn is(value: &Value, kind: &Value) -> bool {
    match kind.as_str().unwrap() {
        "null" => value.is_null(),
        "boolean" => value.is_boolean(),
        "integer" => value.is_i64() || value.is_u64() || value.as_f64().is_some_and(|x| x.fract() == 0.0),
        "number" => value.is_number(),
        "string" => value.is_string(),
        "array" => value.is_array(),
        "object" => value.is_object(),
        other => panic!("no such type: {other}"),
    }
}

fn documents(folder: &str) -> Vec<(String, Value)> {
    let folder = format!("{}/{folder}", env!("CARGO_MANIFEST_DIR"));
    let paths = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    let paths = paths.filter(|path| path.extension().is_some_and(|e| e == "json"));
    let read = paths.map(|path| {
        let mut value: Value = serde_json::from_str(&fs::read_to_string(&path).unwrap()).unwrap();
        // A worked case wraps its description.
        (path.display().to_string(), value.get_mut("description").map(Value::take).unwrap_or(value))
    });
    let mut all: Vec<_> = read.collect();
    all.sort_by(|a, b| a.0.cmp(&b.0));
    assert!(!all.is_empty());
    all
}

#[test]
fn descriptions_claims_and_answers_conform_to_the_published_schema() {
    let server = Server::start();
    let mut document = server.get("/openapi.json").json();
    let Some(Value::Object(schemas)) = document.pointer_mut("/components/schemas").map(Value::take) else {
        panic!("no schemas")
    };
    let schemas = Schemas(schemas);
    let mut wrong = Vec::new();
    for (folder, target, sent, answered) in [
        ("openapi/examples", "/v1/checks", "Description", "Report"),
        ("tests/cases", "/v1/checks", "Description", "Report"),
        ("openapi/examples/claims", "/v1/claims", "Claim", "ClaimReport"),
    ] {
        for (path, value) in documents(folder) {
            let told = |faults: Vec<String>| {
                faults.into_iter().take(3).map(|f| format!("{path}{f}")).collect::<Vec<_>>()
            };
            wrong.extend(told(schemas.named(&value, sent)));
            let answer = server.post(target, value.to_string().as_bytes());
            assert_eq!(answer.status, 200, "{path}: {}", answer.text());
            wrong.extend(told(schemas.named(&answer.json(), answered)));
        }
    }
    let refused = server.post("/v1/checks", b"{\"flows\": 1}");
    wrong.extend(schemas.named(&refused.json(), "Problem"));
    let state = server.get("/v1/states?fluid=water&pressure=10%20bar&temperature=300%20degC");
    wrong.extend(schemas.named(&state.json(), "StateReport"));
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    // The check itself can fail.
    assert!(!schemas.named(&refused.json(), "Report").is_empty());
    assert!(
        !schemas
            .named(&serde_json::json!({"components": {}, "flows": {"a": {"kind": "x"}}}), "Description")
            .is_empty()
    );
}
