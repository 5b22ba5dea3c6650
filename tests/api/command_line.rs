//! The program as a shell sees it.

use std::io::{BufRead, BufReader, Read, Write};
use std::net::TcpStream;
use std::process::{Command, Output, Stdio};
use std::time::{Duration, Instant};

use sigmadot::api::examples::EXAMPLES;
use sigmadot::api::openapi::document_text;

fn program(arguments: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_sigmadot"));
    command.args(arguments).stdin(Stdio::null()).stdout(Stdio::piped()).stderr(Stdio::piped());
    command
}

fn run(arguments: &[&str]) -> Output {
    program(arguments).output().unwrap()
}

fn feed(arguments: &[&str], input: &[u8]) -> Output {
    let mut child = program(arguments).stdin(Stdio::piped()).spawn().unwrap();
    child.stdin.take().unwrap().write_all(input).unwrap();
    child.wait_with_output().unwrap()
}

#[test]
fn check_tells_by_its_exit_code() {
    let broken = feed(&["check", "-"], b"{\"name\": ");
    assert_eq!(broken.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&broken.stderr).contains("not-json"));
    assert!(broken.stdout.is_empty());
    assert_eq!(run(&["check", "/nowhere/at/all.json"]).status.code(), Some(2));
    assert_eq!(run(&["check"]).status.code(), Some(3));
    assert_eq!(run(&["chekc"]).status.code(), Some(3));
    let file = concat!(env!("CARGO_MANIFEST_DIR"), "/openapi/examples/laundry-let-down.json");
    let sound = run(&["check", "--format", "json", file]);
    let report: serde_json::Value = serde_json::from_slice(&sound.stdout).unwrap();
    let expected = match report["verdict"].as_str().unwrap() {
        "violated" => 1,
        "holds" if report["complete"] == true && report["data_verdict"] != "contradictory" => 0,
        _ => 3,
    };
    assert_eq!(sound.status.code(), Some(expected));
    // Of several files the broken one decides unless another is violated.
    let both = run(&["check", file, "/nowhere/at/all.json"]);
    assert_eq!(both.status.code(), Some(if expected == 1 { 1 } else { 2 }));
}

#[test]
fn check_prints_what_the_service_answers() {
    let text = EXAMPLES[0].text.as_bytes();
    let printed = feed(&["check", "-", "--format", "json"], text).stdout;
    let served = crate::support::Server::start().post("/v1/checks", text).body;
    assert_eq!(printed.trim_ascii(), served.trim_ascii());
}

#[test]
fn demo_shows_a_report_and_how_to_repeat_it() {
    let begun = Instant::now();
    let shown = run(&["demo"]);
    assert_eq!(shown.status.code(), Some(0), "{}", String::from_utf8_lossy(&shown.stderr));
    let text = String::from_utf8(shown.stdout).unwrap();
    assert!(text.contains("curl") && text.contains("/v1/checks") && text.contains(EXAMPLES[0].name));
    assert!(begun.elapsed() < Duration::from_secs(30));
    assert_eq!(run(&["demo", "no-such-example"]).status.code(), Some(3));
}

#[test]
fn openapi_rules_and_version_are_printed() {
    assert_eq!(run(&["openapi"]).stdout, document_text().as_bytes());
    let rules: serde_json::Value =
        serde_json::from_slice(&run(&["rules", "--format", "json"]).stdout).unwrap();
    assert!(rules["rules"].is_array());
    assert_eq!(run(&["rules"]).status.code(), Some(0));
    let version = String::from_utf8(run(&["--version"]).stdout).unwrap();
    assert_eq!(version.trim(), concat!("sigmadot ", env!("CARGO_PKG_VERSION")));
}

#[test]
fn a_closed_pipe_is_no_error() {
    let mut child = program(&["openapi"]).spawn().unwrap();
    drop(child.stdout.take());
    let mut complaints = String::new();
    child.stderr.take().unwrap().read_to_string(&mut complaints).unwrap();
    assert_eq!((child.wait().unwrap().code(), complaints.as_str()), (Some(0), ""));
}

#[test]
fn serve_refuses_other_addresses() {
    let refused = run(&["serve", "--address", "0.0.0.0:0"]);
    assert_eq!(refused.status.code(), Some(3));
    assert!(String::from_utf8_lossy(&refused.stderr).contains("--allow-remote"));
}

#[cfg(unix)]
#[test]
fn serve_stops_cleanly_on_sigterm() {
    let mut child = program(&["serve", "--address", "127.0.0.1:0", "--workers", "1"]).spawn().unwrap();
    let mut log = BufReader::new(child.stdout.take().unwrap());
    let mut line = String::new();
    log.read_line(&mut line).unwrap();
    let event: serde_json::Value = serde_json::from_str(&line).unwrap();
    assert_eq!(event["event"], "listening");
    assert_eq!(event["reachable_by_other_machines"], false);
    let address = event["address"].as_str().unwrap();
    let health = run(&["health", "--address", address]);
    assert_eq!(health.status.code(), Some(0), "{}", String::from_utf8_lossy(&health.stderr));
    // A connection that is open but idle does not hold it up.
    let _idle = TcpStream::connect(address).unwrap();
    let killed = Command::new("kill").args(["-TERM", &child.id().to_string()]).status().unwrap();
    assert!(killed.success());
    let begun = Instant::now();
    assert_eq!(child.wait().unwrap().code(), Some(0));
    assert!(begun.elapsed() < Duration::from_secs(5));
    let mut rest = String::new();
    log.read_to_string(&mut rest).unwrap();
    assert!(rest.contains("\"stopped\"") && rest.contains("/readyz"), "{rest}");
    assert_ne!(run(&["health", "--address", address]).status.code(), Some(0));
}
