//! Every refusal, whichever layer makes it, is a problem with its place, and leaves the service alive.

use std::io::Write;
use std::sync::{Arc, Mutex};

use crate::support::{Answer, Server, request};
use serde_json::Value;
use sigmadot::api::engine::{Core, Engine};
use sigmadot::api::examples::EXAMPLES;
use sigmadot::api::log::Log;
use sigmadot::claim::ClaimReport;
use sigmadot::pipeline::{Cancel, Failure};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use sigmadot::report::{Report, StateReport};

fn check(server: &Server, headers: &[(&str, &str)], body: &[u8]) -> Answer {
    server.call("POST", "/v1/checks", headers, body)
}

#[test]
fn addresses_and_methods() {
    let server = Server::start();
    server.get("/nowhere").assert_problem(404, "not-found");
    server.get("/v1/examples/nothing").assert_problem(404, "not-found");
    let refused = server.get("/v1/checks");
    refused.assert_problem(405, "method-not-allowed");
    assert_eq!(refused.header("allow"), Some("POST"));
    server.call("DELETE", "/", &[], b"").assert_problem(405, "method-not-allowed");
    server.call("TRACE", "/livez", &[], b"").assert_problem(405, "method-not-allowed");
    let options = server.call("OPTIONS", "/v1/states", &[], b"");
    assert_eq!(options.status, 204);
    let allowed = options.header("allow").unwrap();
    for method in ["GET", "HEAD", "POST", "OPTIONS"] {
        assert!(allowed.split(',').any(|m| m.trim() == method), "{allowed}");
    }
    let head = server.call("HEAD", "/nowhere", &[], b"");
    assert_eq!((head.status, head.body.len()), (404, 0));
    assert_eq!(head.header("content-type"), Some("application/problem+json"));
    let head = server.call("HEAD", "/livez", &[], b"");
    assert_eq!((head.status, head.body.len()), (200, 0));
}

#[test]
fn media_types_and_codings() {
    let server = Server::start();
    let body = EXAMPLES[0].text.as_bytes();
    for taken in ["application/json", "application/json; charset=utf-8", "application/vnd.plant+json"] {
        assert_eq!(check(&server, &[("content-type", taken)], body).status, 200, "{taken}");
    }
    assert_eq!(check(&server, &[], body).status, 200);
    for refused in
        ["text/plain", "application/x-www-form-urlencoded", "image/svg+json", "application/x-ndjson"]
    {
        check(&server, &[("content-type", refused)], body).assert_problem(415, "unsupported-media-type");
    }
    check(&server, &[("content-encoding", "br")], body).assert_problem(415, "unsupported-media-type");
    check(&server, &[("accept", "image/png")], body).assert_problem(406, "not-acceptable");
    for (accept, given) in [
        ("*/*", "application/json"),
        ("text/html,*/*;q=0.8", "text/html; charset=utf-8"),
        ("text/csv", "text/csv; charset=utf-8; header=present"),
        ("text/plain", "text/plain; charset=utf-8"),
    ] {
        let answer = check(&server, &[("accept", accept)], body);
        assert_eq!((answer.status, answer.header("content-type")), (200, Some(given)));
        assert_eq!(answer.header("vary"), Some("accept"));
        assert!(answer.header("verdict").is_some());
    }
}

#[test]
fn bodies_that_are_no_descriptions() {
    let server = Server::start();
    for (body, status) in [
        (&b""[..], 400),
        (b"not json", 400),
        (b"{\"a\": ", 400),
        (b"{\"flows\": NaN}", 400),
        (b"\xff\xfe\x00", 400),
        (b"[]", 422),
        (b"null", 422),
        (b"{}", 422),
    ] {
        let answer = server.post("/v1/checks", body);
        assert_eq!(answer.status, status, "{body:?}: {}", answer.text());
        assert_eq!(answer.header("content-type"), Some("application/problem+json"));
        let problem = answer.json();
        assert!(!problem["errors"].as_array().unwrap().is_empty());
    }
    for opening in ["[", "{\"a\":"] {
        let answer = server.post("/v1/checks", opening.repeat(1000).as_bytes());
        assert!(matches!(answer.status, 400 | 422), "{}", answer.text());
    }
    server.assert_alive();
}

#[test]
fn query_parameters() {
    let server = Server::start();
    for target in [
        "/v1/checks?units=furlongs",
        "/v1/checks?unit=si",
        "/v1/checks?units=si&units=si",
        "/v1/checks?deadline=0",
        "/v1/checks?deadline=31",
        "/v1/checks?deadline=soon",
        "/v1/checks?units=%zz",
    ] {
        server.post(target, EXAMPLES[0].text.as_bytes()).assert_problem(400, "bad-parameter");
    }
    let problem = server.get("/v1/states?pressure=10+bar").assert_problem(400, "bad-parameter");
    assert_eq!(problem["errors"][0]["pointer"], "/fluid");
    assert!(problem["errors"][0]["hint"].as_str().unwrap().contains("fluid=water"));
    let problem = server.get("/v1/states?fluid=water&presure=1+bar").assert_problem(400, "bad-parameter");
    assert!(problem["errors"][0]["hint"].as_str().unwrap().contains("pressure"));
}

#[test]
fn requests_that_are_no_http() {
    let server = Server::start();
    for (bytes, status) in [
        (&b"nonsense\r\n\r\n"[..], 400),
        (b"GET / HTTP/9.9\r\n\r\n", 400),
        (b"GET / HTTP/1.1\r\nbad header\r\n\r\n", 400),
        (b"POST /v1/checks HTTP/1.1\r\nhost: x\r\ncontent-length: no\r\n\r\n", 400),
    ] {
        let mut wire = server.connect();
        wire.send(bytes);
        let answer = wire.answer();
        assert_eq!(answer.status, status);
        assert_eq!(answer.header("content-type"), Some("application/problem+json"), "{answer:?}");
        assert_eq!(answer.json()["status"], status);
        assert_eq!(answer.json()["request_id"].as_str(), answer.header("x-request-id"));
    }
    let long = "x".repeat(64 << 10);
    let mut wire = server.connect();
    wire.send(&request("GET", "/livez", &[("x-long", &long)], b""));
    wire.answer().assert_problem(431, "limit-exceeded");
    server.assert_alive();
}

#[test]
fn request_ids() {
    let server = Server::start();
    let chosen = server.call("GET", "/nowhere", &[("x-request-id", "Job-7.a_b")], b"");
    assert_eq!(chosen.header("x-request-id"), Some("Job-7.a_b"));
    assert_eq!(chosen.json()["request_id"], "Job-7.a_b");
    let too_long = "x".repeat(65);
    for refused in ["", "a b", "a\"b", "<script>", &too_long] {
        let answer = server.call("GET", "/livez", &[("x-request-id", refused)], b"");
        let id = answer.header("x-request-id").unwrap();
        assert!(id != refused && !id.is_empty());
    }
    assert_ne!(server.get("/livez").header("x-request-id"), server.get("/livez").header("x-request-id"));
}

/// An engine that does what the body says.
pub struct Obedient;

impl Engine for Obedient {
    fn check(&self, body: &[u8], l: &ReadLimits, u: UnitSystem, cancel: &Cancel) -> Result<Report, Failure> {
        match body {
            b"\"panic\"" => panic!("on purpose"),
            b"\"sleep\"" => {
                while !cancel.is_cancelled() {
                    std::thread::sleep(std::time::Duration::from_millis(2));
                }
                Err(Failure::Cancelled)
            }
            b"\"nap\"" => {
                std::thread::sleep(std::time::Duration::from_millis(300));
                Core.check(EXAMPLES[0].text.as_bytes(), l, u, cancel)
            }
            other => Core.check(other, l, u, cancel),
        }
    }

    fn state(&self, body: &[u8], l: &ReadLimits, u: UnitSystem, c: &Cancel) -> Result<StateReport, Failure> {
        Core.state(body, l, u, c)
    }

    fn claim(&self, body: &[u8], l: &ReadLimits, u: UnitSystem, c: &Cancel) -> Result<ClaimReport, Failure> {
        Core.claim(body, l, u, c)
    }

    fn claim_query(
        &self,
        kind: &str,
        parameters: &[(String, String)],
        l: &ReadLimits,
        u: UnitSystem,
        c: &Cancel,
    ) -> Result<ClaimReport, Failure> {
        Core.claim_query(kind, parameters, l, u, c)
    }
}

/// Log lines, kept.
#[derive(Clone, Default)]
struct Kept(Arc<Mutex<Vec<u8>>>);

impl Write for Kept {
    fn write(&mut self, bytes: &[u8]) -> std::io::Result<usize> {
        self.0.lock().unwrap().write(bytes)
    }

    fn flush(&mut self) -> std::io::Result<()> {
        Ok(())
    }
}

#[test]
fn a_panic_is_a_problem_and_the_worker_lives_on() {
    let server = Server::with(Obedient, |limits| limits.service.workers = 1, Log::silent());
    for _ in 0..3 {
        server.post("/v1/checks", b"\"panic\"").assert_problem(500, "internal");
    }
    assert_eq!(server.post("/v1/checks", EXAMPLES[0].text.as_bytes()).status, 200);
}

#[test]
fn the_log_has_one_line_a_call_without_bodies_or_query_values() {
    let kept = Kept::default();
    let log = Log::to(kept.clone()).unwrap();
    let mut server = Server::with(Core, |_| {}, log.clone());
    server.call("POST", "/v1/checks?units=si", &[("x-request-id", "seen")], b"{\"secret\": 1}");
    server.get("/v1/states?fluid=secret");
    server.get("/secret");
    server.tell_to_stop();
    server.wait();
    log.close();
    let text = String::from_utf8(kept.0.lock().unwrap().clone()).unwrap();
    assert!(!text.contains("secret") && !text.contains("units"), "{text}");
    let lines: Vec<Value> = text.lines().map(|l| serde_json::from_str(l).unwrap()).collect();
    let calls: Vec<&Value> = lines.iter().filter(|l| l["event"] == "request").collect();
    assert_eq!(calls.len(), 3);
    let first = calls.iter().find(|l| l["request_id"] == "seen").unwrap();
    assert_eq!((&first["method"], &first["route"]), (&"POST".into(), &"/v1/checks".into()));
    assert_eq!(first["status"], 422);
    assert!(first["ms"].as_f64().unwrap() > 0.0 && first["bytes"].as_u64().unwrap() > 0);
    for event in ["listening", "stopping", "stopped"] {
        assert!(lines.iter().any(|l| l["event"] == event), "{event}");
    }
}
