//! Bad input over HTTP: every one is answered with its place, every fault at once, and the service
//! lives on.

use std::fs;
use std::io::{Read, Write};
use std::net::TcpStream;
use std::time::{Duration, Instant};

use crate::support::Server;
use serde_json::{Map, Value, json};
use sigmadot::claim::CLAIM;
use sigmadot::document::{JsonType, ObjectShape, Shape};
use sigmadot::process::shape::{DESCRIPTION, STATE_QUESTION};
use sigmadot::quantity::Dimension;

/// What one answer may take, generously: debug builds on a busy machine.
const LONGEST: Duration = Duration::from_secs(5);

/// A connection that is used for one call after another.
struct Line(TcpStream);

impl Line {
    fn to(server: &Server) -> Line {
        let line = server.connect();
        Line(line.0)
    }

    /// Status and body.
    #[track_caller]
    fn post(&mut self, target: &str, body: &[u8]) -> (u16, Value) {
        let head = format!("POST {target} HTTP/1.1\r\nhost: x\r\ncontent-length: {}\r\n\r\n", body.len());
        let begun = Instant::now();
        self.0.write_all(&[head.as_bytes(), body].concat()).unwrap();
        let mut bytes = Vec::new();
        let mut piece = [0; 16 << 10];
        let (status, length, start) = loop {
            let n = self.0.read(&mut piece).unwrap();
            assert!(n > 0, "closed on {}", String::from_utf8_lossy(body));
            bytes.extend_from_slice(&piece[..n]);
            let Some(at) = bytes.windows(4).position(|w| w == b"\r\n\r\n") else { continue };
            let head = String::from_utf8_lossy(&bytes[..at]).to_ascii_lowercase();
            let status: u16 = head.split(' ').nth(1).unwrap().parse().unwrap();
            let length = head.split("content-length: ").nth(1).unwrap();
            break (status, length.split("\r\n").next().unwrap().parse::<usize>().unwrap(), at + 4);
        };
        while bytes.len() < start + length {
            let n = self.0.read(&mut piece).unwrap();
            assert!(n > 0, "the answer breaks off");
            bytes.extend_from_slice(&piece[..n]);
        }
        assert!(begun.elapsed() < LONGEST, "{:?} for {}", begun.elapsed(), String::from_utf8_lossy(body));
        (status, serde_json::from_slice(&bytes[start..]).unwrap())
    }
}

/// The places and codes of a problem.
fn faults(problem: &Value) -> Vec<(String, String)> {
    let text = |v: &Value| v.as_str().unwrap().to_owned();
    let list = problem["errors"].as_array().unwrap();
    list.iter().map(|e| (text(&e["pointer"]), text(&e["code"]))).collect()
}

fn join(place: &str, name: &str) -> String {
    format!("{place}/{}", name.replace('~', "~0").replace('/', "~1"))
}

/// Every field that a shape declares: a document that holds it with a mark in its place, the pointer,
/// and its shape.
fn fields(shape: &Shape, wrap: &dyn Fn(Value) -> Value, place: &str, depth: usize, out: &mut Vec<Declared>) {
    if depth > 7 {
        return;
    }
    match shape {
        Shape::Object(object) => members(object, None, wrap, place, depth, out),
        Shape::Map { value, .. } => {
            let inner = |v: Value| wrap(json!({ "x": v }));
            fields(value, &inner, &join(place, "x"), depth + 1, out);
        }
        Shape::List { item, .. } => {
            let inner = |v: Value| wrap(json!([v]));
            fields(item, &inner, &join(place, "0"), depth + 1, out);
        }
        Shape::Tagged(union) => {
            for variant in union.variants {
                members(variant.shape, Some((union.member, variant.word)), wrap, place, depth, out);
            }
        }
        Shape::OneOf(shapes) => shapes.iter().for_each(|s| fields(s, wrap, place, depth, out)),
        _ => {}
    }
}

struct Declared {
    place: String,
    shape: Shape,
    document: Value,
}

const MARK: &str = "THE MARK";

fn members(
    object: &ObjectShape,
    telling: Option<(&str, &str)>,
    wrap: &dyn Fn(Value) -> Value,
    place: &str,
    depth: usize,
    out: &mut Vec<Declared>,
) {
    for field in object.all_fields() {
        let inner = |v: Value| {
            let mut map = Map::new();
            if let Some((member, word)) = telling {
                map.insert(member.to_owned(), json!(word));
            }
            map.insert(field.name.to_owned(), v);
            wrap(Value::Object(map))
        };
        let place = join(place, field.name);
        out.push(Declared { place: place.clone(), shape: field.shape, document: inner(json!(MARK)) });
        fields(&field.shape, &inner, &place, depth + 1, out);
    }
}

/// A shape without its alternatives that take other JSON types.
fn quantity(shape: &Shape) -> Option<Dimension> {
    match shape {
        Shape::Quantity(d) | Shape::Quantities(d) => Some(*d),
        _ => None,
    }
}

/// What may not stand at a field, as JSON text, with the code of its fault.
fn wrong_values(shape: &Shape) -> Vec<(String, &'static str)> {
    let long = format!("\"{}\"", "x".repeat(10_000));
    let mut out = vec![
        ("null".to_owned(), "wrong-type"),
        ("1e999".to_owned(), if shape.takes(JsonType::Number) { "bad-number" } else { "" }),
        (long, "limit-exceeded"),
    ];
    let samples = [
        (JsonType::Boolean, "true"),
        (JsonType::List, "[]"),
        (JsonType::Object, "{}"),
        (JsonType::Number, "7"),
    ];
    for (json, text) in samples {
        if !shape.takes(json) {
            let bare = json == JsonType::Number && quantity(shape).is_some();
            out.push((text.to_owned(), if bare { "bare-number" } else { "wrong-type" }));
        }
    }
    if let Some(dimension) = quantity(shape) {
        let foreign = if dimension == Dimension::MassFlow { "3 K" } else { "3 kg/s" };
        out.push((format!("\"{foreign}\""), "wrong-dimension"));
        out.push(("\"3 furlongs\"".to_owned(), "unknown-unit"));
        out.push(("{\"value\": 3, \"unit\": \"furlongs\"}".to_owned(), "unknown-unit"));
        for text in ["", " ", "three", "NaN", "inf", "1e999", "0x10", "1,5"] {
            out.push((format!("\"{text}\""), ""));
        }
    }
    if let Shape::Choice(_) = shape {
        out.push(("\"\"".to_owned(), "unknown-choice"));
    }
    if let Shape::Name = shape {
        out.push(("\"\"".to_owned(), "bad-name"));
        out.push(("\"a b\"".to_owned(), "bad-name"));
    }
    out
}

fn spoil_every_field(shape: &Shape, target: &str, at_least: usize) {
    let server = Server::start();
    let mut line = Line::to(&server);
    let mut declared = Vec::new();
    fields(shape, &|v| v, "", 0, &mut declared);
    assert!(declared.len() >= at_least, "only {} fields", declared.len());
    let mut missed = Vec::new();
    let mut count = 0;
    for field in &declared {
        let text = field.document.to_string();
        for (wrong, code) in wrong_values(&field.shape) {
            count += 1;
            let body = text.replacen(&format!("\"{MARK}\""), &wrong, 1);
            let (status, problem) = line.post(target, body.as_bytes());
            let told = status == 422
                && faults(&problem).iter().any(|(place, c)| {
                    (place == &field.place || place.starts_with(&format!("{}/", field.place)))
                        && (code.is_empty() || c == code)
                });
            if !told {
                let shown: String = wrong.chars().take(40).collect();
                missed.push(format!("{} = {shown} ({code}): {status} {:?}", field.place, faults(&problem)));
            }
        }
    }
    println!("{} fields, {count} documents", declared.len());
    assert!(missed.is_empty(), "{} of {count}:\n{}", missed.len(), missed[..missed.len().min(40)].join("\n"));
    server.assert_alive();
}

#[test]
fn every_field_of_a_description_refuses_what_it_does_not_take() {
    spoil_every_field(&Shape::Object(&DESCRIPTION), "/v1/checks", 150);
}

#[test]
fn every_field_of_a_claim_refuses_what_it_does_not_take() {
    spoil_every_field(&Shape::Tagged(&CLAIM), "/v1/claims", 100);
}

#[test]
fn every_field_of_a_question_refuses_what_it_does_not_take() {
    spoil_every_field(&Shape::Object(&STATE_QUESTION), "/v1/states", 50);
}

/// Every value of a document with its pointer.
fn places(value: &Value, here: &str, out: &mut Vec<String>) {
    match value {
        Value::Object(map) => map.iter().for_each(|(name, v)| {
            out.push(join(here, name));
            places(v, &join(here, name), out);
        }),
        Value::Array(items) => items.iter().enumerate().for_each(|(i, v)| {
            out.push(format!("{here}/{i}"));
            places(v, &format!("{here}/{i}"), out);
        }),
        _ => {}
    }
}

fn examples(folder: &str) -> Vec<(String, Value)> {
    let folder = format!("{}/openapi/examples{folder}", env!("CARGO_MANIFEST_DIR"));
    let paths = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    let paths = paths.filter(|path| path.extension().is_some_and(|e| e == "json"));
    let mut out: Vec<(String, Value)> = paths
        .map(|path| {
            let text = fs::read_to_string(&path).unwrap();
            (path.file_stem().unwrap().to_string_lossy().into_owned(), serde_json::from_str(&text).unwrap())
        })
        .collect();
    out.sort_by(|a, b| a.0.cmp(&b.0));
    out
}

/// Every value of every example in turn becomes something that nothing takes, and then something
/// that may or may not stand there.
#[test]
fn every_value_of_every_example_spoilt() {
    let server = Server::start();
    let mut line = Line::to(&server);
    let mut count = 0;
    for (folder, target) in [("", "/v1/checks"), ("/claims", "/v1/claims")] {
        for (name, example) in examples(folder) {
            let mut all = Vec::new();
            places(&example, "", &mut all);
            for place in all {
                let mut spoilt = example.clone();
                for (value, certain) in [
                    (json!(null), true),
                    (json!("x".repeat(10_000)), true),
                    (json!(""), false),
                    (json!([]), false),
                ] {
                    *spoilt.pointer_mut(&place).unwrap() = value.clone();
                    let (status, answer) = line.post(target, spoilt.to_string().as_bytes());
                    count += 1;
                    if certain {
                        let found = faults(&answer);
                        assert_eq!(status, 422, "{name}{place} = {value}");
                        assert!(found.iter().any(|(p, _)| p == &place), "{name}{place} = {value}: {found:?}");
                    } else {
                        assert!(
                            status == 200 || !faults(&answer).is_empty(),
                            "{name}{place} = {value}: {status}"
                        );
                    }
                }
            }
        }
    }
    assert!(count > 2_000, "only {count}");
    server.assert_alive();
}

/// A small sound plant to spoil.
const VALVE: &str = r#"{"components": {"v": {"kind": "valve"}}, "flows": {
    "a": {"kind": "material", "to": "v", "fluid": "water", "pressure": "40 bar", "temperature": "400 degC", "mass_flow": "2 kg/s"},
    "b": {"kind": "material", "from": "v", "pressure": "10 bar"}}}"#;

/// Document, status, places with their codes.
type Row = (String, u16, &'static [(&'static str, &'static str)]);

fn swapped(from: &str, to: &str) -> String {
    assert!(VALVE.contains(from), "{from}");
    VALVE.replacen(from, to, 1)
}

fn table() -> Vec<Row> {
    let exchanger = |sides: &str| {
        format!(
            r#"{{"components": {{"x": {{"kind": "heat_exchanger", "sides": {sides}}}}}, "flows": {{
            "hi": {{"kind": "material", "to": "x", "fluid": "water", "pressure": "3 bar", "temperature": "90 degC", "mass_flow": "1 kg/s"}},
            "ho": {{"kind": "material", "from": "x", "fluid": "water", "pressure": "3 bar", "temperature": "60 degC", "mass_flow": "1 kg/s"}},
            "ci": {{"kind": "material", "to": "x", "fluid": "water", "pressure": "3 bar", "temperature": "10 degC", "mass_flow": "1 kg/s"}},
            "co": {{"kind": "material", "from": "x", "fluid": "water", "pressure": "3 bar", "mass_flow": "1 kg/s"}}}}}}"#
        )
    };
    vec![
        ("not json".to_owned(), 400, &[("", "not-json")]),
        ("{\"components\": NaN}".to_owned(), 400, &[("/components", "not-json")]),
        ("{\"components\": Infinity}".to_owned(), 400, &[("/components", "not-json")]),
        ("[".repeat(1000), 400, &[("", "not-json")]),
        ("[".repeat(1000) + &"]".repeat(1000), 422, &[("", "too-deep")]),
        ("{\"a\":".repeat(1000) + "1" + &"}".repeat(1000), 422, &[("", "too-deep")]),
        (swapped("\"flows\"", "\"floes\""), 422, &[("/floes", "unknown-field"), ("", "missing-field")]),
        (swapped("\"fluid\"", "\"liquid\""), 422, &[("/flows/a/liquid", "unknown-field")]),
        (swapped("\"pressure\"", "\"temperature\""), 422, &[("/flows/a/temperature", "duplicate-key")]),
        (swapped("40 bar", "40 barn"), 422, &[("/flows/a/pressure", "unknown-unit")]),
        (swapped("40 bar", "40 kg"), 422, &[("/flows/a/pressure", "wrong-dimension")]),
        (swapped("\"40 bar\"", "40"), 422, &[("/flows/a/pressure", "bare-number")]),
        (swapped("\"40 bar\"", "1e999"), 422, &[("/flows/a/pressure", "")]),
        (swapped("40 bar", "1e999 bar"), 422, &[("/flows/a/pressure", "")]),
        (swapped("40 bar", "NaN bar"), 422, &[("/flows/a/pressure", "bad-number")]),
        (swapped("40 bar", "-1 bar"), 422, &[("/flows/a/pressure", "below-absolute-zero")]),
        (swapped("400 degC", "-300 degC"), 422, &[("/flows/a/temperature", "below-absolute-zero")]),
        (swapped("400 degC", "0 K"), 422, &[("/flows/a/temperature", "below-absolute-zero")]),
        (swapped("\"from\": \"v\"", "\"from\": \"w\""), 422, &[("/flows/b/from", "dangling-reference")]),
        (swapped("\"to\": \"v\"", "\"to\": \"w\""), 422, &[("/flows/a/to", "dangling-reference")]),
        (
            swapped("\"pressure\": \"10 bar\"", "\"same_state_as\": \"b\""),
            422,
            &[("/flows/b/same_state_as", "circular-reference")],
        ),
        (
            swapped("\"fluid\": \"water\", \"pressure\": \"40 bar\", \"temperature\": \"400 degC\"", "\"same_state_as\": \"b\"")
                .replace("\"pressure\": \"10 bar\"", "\"same_state_as\": \"a\""),
            422,
            &[("/flows/a/same_state_as", "circular-reference")],
        ),
        (
            swapped("\"pressure\": \"10 bar\"", "\"same_state_as\": \"c\""),
            422,
            &[("/flows/b/same_state_as", "dangling-reference")],
        ),
        (swapped("\"water\"", "\"R-134b\""), 422, &[("/flows/a/fluid", "unknown-fluid")]),
        // Incomplete sides.
        (exchanger(r#"[{"in": ["hi"]}, {"in": ["ci"], "out": ["co"]}]"#), 422, &[("/components/x/sides/0", "missing-field")]),
        (exchanger(r#"[{"in": ["hi"], "out": []}, {"in": ["ci"], "out": ["co"]}]"#), 422, &[("/components/x", "missing-port")]),
        (exchanger("[{}]"), 422, &[("/components/x/sides/0", "missing-field")]),
        (exchanger(r#"[{"in": ["hi"], "out": ["zz"]}, {"in": ["ci"], "out": ["co"]}]"#), 422, &[("/components/x/sides/0/out/0", "dangling-reference")]),
        (exchanger(r#"[{"in": ["hi", "hi"], "out": ["ho"]}, {"in": ["ci"], "out": ["co"]}]"#), 422, &[("/components/x/sides/0/in/1", "")]),
        // Many faults at once.
        (
            r#"{"components": {"v": {"kind": "vlave"}, "a b": {"kind": "valve"}}, "policy": {"false_alarm": "x"}, "colour": 1,
               "flows": {"a": {"kind": "material", "to": 7, "pressure": 40, "temperature": "400 degX"}, "b": {"kind": "stuff"}, "c": {}}}"#
                .to_owned(),
            422,
            &[
                ("/components/v/kind", "unknown-choice"),
                ("/components/a b", "bad-name"),
                ("/policy/false_alarm", "wrong-type"),
                ("/colour", "unknown-field"),
                ("/flows/a/to", "wrong-type"),
                ("/flows/a/pressure", "bare-number"),
                ("/flows/a/temperature", "unknown-unit"),
                ("/flows/b/kind", "unknown-choice"),
                ("/flows/c", "missing-field"),
            ],
        ),
    ]
}

#[test]
fn named_bad_inputs_are_refused_where_they_are() {
    let server = Server::start();
    let mut line = Line::to(&server);
    assert_eq!(line.post("/v1/checks", VALVE.as_bytes()).0, 200);
    let mut wrong = Vec::new();
    for (body, status, expected) in table() {
        let (got, problem) = line.post("/v1/checks", body.as_bytes());
        let shown: String = body.chars().take(600).collect();
        if got != status {
            wrong.push(format!("{got} instead of {status} for {shown}: {}", problem["errors"]));
            continue;
        }
        let found = faults(&problem);
        for (place, code) in expected {
            let told = found.iter().any(|(p, c)| {
                (p == place || *code == "too-deep" || *code == "not-json") && (code.is_empty() || c == code)
            });
            if !told {
                wrong.push(format!("{place} {code} is not among {found:?} for {shown}"));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    server.assert_alive();
}

fn example(name: &str) -> Value {
    let text = server_example(name);
    serde_json::from_str(&text).unwrap()
}

fn server_example(name: &str) -> String {
    fs::read_to_string(format!("{}/openapi/examples/{name}.json", env!("CARGO_MANIFEST_DIR"))).unwrap()
}

fn with(mut document: Value, pointer: &str, value: Value) -> Value {
    *document.pointer_mut(pointer).unwrap_or_else(|| panic!("no {pointer}")) = value;
    document
}

/// What is well-formed and means something impossible: refused with its place.
#[test]
fn what_cannot_be_is_refused_where_it_is() {
    let server = Server::start();
    let mut line = Line::to(&server);
    let boiler = |o2: Value| with(example("laundry-gas-boiler"), "/fluids/flue-gas/o2_dry", o2);
    let mut endless = example("forge-quench");
    endless["components"]["bath"]["holdup"].as_object_mut().unwrap().remove("final");
    let steady = with(example("forge-quench"), "/basis", json!("rate"));
    for (target, body, place, code) in [
        ("/v1/checks", boiler(json!(0.25)), "/fluids/flue-gas/o2_dry", "out-of-bounds"),
        ("/v1/checks", boiler(json!("-1 %")), "/fluids/flue-gas/o2_dry", "out-of-bounds"),
        ("/v1/checks", boiler(json!("3 bar")), "/fluids/flue-gas/o2_dry", "wrong-dimension"),
        ("/v1/checks", endless, "/components/bath/holdup", "missing-field"),
        ("/v1/checks", steady, "/components/bath/holdup", "conflict"),
        (
            "/v1/states",
            json!({"fluid": "water", "pressure": "2000 bar", "temperature": "20 degC"}),
            "/pressure",
            "out-of-range",
        ),
        (
            "/v1/states",
            json!({"fluid": "water", "pressure": "1 bar", "temperature": "3000 degC"}),
            "/temperature",
            "out-of-range",
        ),
        (
            "/v1/states",
            json!({"fluid": "water", "pressure": "1.01325 bar", "temperature": "99.974 degC"}),
            "",
            "unsolvable",
        ),
        (
            "/v1/states",
            json!({"fluid": "water", "pressure": "1 bar", "quality": 1.5}),
            "/quality",
            "out-of-range",
        ),
    ] {
        let (status, answer) = line.post(target, body.to_string().as_bytes());
        assert_eq!(status, 422, "{body}: {answer}");
        let found = faults(&answer);
        assert!(found.contains(&(place.to_owned(), code.to_owned())), "{place} {code}: {found:?}");
    }
    for (written, meant) in [("R-134b", "R134a"), ("watre", "water"), ("amonia", "ammonia")] {
        let body = json!({"fluid": written, "pressure": "1 bar", "temperature": "20 degC"}).to_string();
        let (status, answer) = line.post("/v1/states", body.as_bytes());
        assert_eq!(status, 422);
        assert_eq!(answer["errors"].as_array().unwrap().len(), 1, "{answer}");
        assert!(answer["errors"][0]["hint"].as_str().unwrap().contains(meant), "{answer}");
    }
    server.assert_alive();
}

/// What only the property formulations can tell is a finding, with its place, in a report that says it
/// is not complete.
#[test]
fn what_cannot_be_computed_is_a_finding() {
    let server = Server::start();
    let mut line = Line::to(&server);
    let valve = |from: &str, to: &str| serde_json::from_str::<Value>(&swapped(from, to)).unwrap();
    let hot_air = json!({"components": {"x": {"kind": "heat_exchanger"}}, "flows": {
        "hi": {"kind": "material", "to": "x", "fluid": "air", "pressure": "1.1 bar", "temperature": "2500 degC", "mass_flow": "1 kg/s"},
        "ho": {"kind": "material", "from": "x", "fluid": "air", "pressure": "1 bar", "temperature": "200 degC"},
        "ci": {"kind": "material", "to": "x", "fluid": "water", "pressure": "900 bar", "temperature": "20 degC", "mass_flow": "0.5 kg/s"},
        "co": {"kind": "material", "from": "x", "fluid": "water", "pressure": "900 bar"}}});
    for (body, list, rule, place) in [
        (valve("40 bar", "2000 bar"), "warnings", "state-outside-formulation", "/flows/a"),
        (valve("400 degC", "3000 degC"), "warnings", "state-outside-formulation", "/flows/a"),
        (
            valve(
                "\"40 bar\", \"temperature\": \"400 degC\"",
                "\"10 bar\", \"temperature\": \"179.89 degC\"",
            ),
            "warnings",
            "wetness-unknown",
            "/flows/a",
        ),
        (hot_air, "unchecked", "internal-temperature-cross", "/components/x"),
    ] {
        let (status, report) = line.post("/v1/checks", body.to_string().as_bytes());
        assert_eq!(status, 200, "{report}");
        assert_eq!(report["complete"], false);
        let told = report[list]
            .as_array()
            .unwrap()
            .iter()
            .any(|f| (f["rule"] == rule || f["what"] == rule) && f["where"] == place);
        assert!(told, "{rule} at {place} is not among {}", report[list]);
    }
    server.assert_alive();
}

/// The time of the largest description that is taken is bounded: if it cannot be had before the
/// deadline, the answer says so, and the worker is free again.
#[test]
fn a_ring_of_unknowns_ends_at_the_deadline() {
    let server = Server::limited(|limits| limits.service.workers = 1);
    let mut components = Map::new();
    let mut flows = Map::new();
    for i in 0..200 {
        let (this, next) = (format!("c{i}"), format!("c{}", (i + 1) % 200));
        components.insert(this.clone(), json!({"kind": if i % 2 == 1 { "mixer" } else { "splitter" }}));
        let state = json!({"kind": "material", "fluid": "water", "pressure": "5 bar"});
        let mut ring = state.clone();
        ring["from"] = json!(this);
        ring["to"] = json!(next);
        flows.insert(format!("ring{i}"), ring);
        let mut side = state;
        side["mass_flow"] = json!("1 kg/s");
        if i % 2 == 1 {
            side["to"] = json!(this);
            side["temperature"] = json!(format!("{} degC", 20 + i % 100));
        } else {
            side["from"] = json!(this);
        }
        flows.insert(format!("side{i}"), side);
    }
    let body = json!({"components": components, "flows": flows}).to_string();
    let mut line = Line::to(&server);
    let (status, answer) = line.post("/v1/checks?deadline=1ms", body.as_bytes());
    assert_eq!((status, &answer["type"]), (503, &json!("/v1/codes#deadline-exceeded")));
    let begun = Instant::now();
    assert_eq!(line.post("/v1/checks?deadline=30s", VALVE.as_bytes()).0, 200);
    assert!(begun.elapsed() < Duration::from_secs(2), "the worker went on for {:?}", begun.elapsed());
}
