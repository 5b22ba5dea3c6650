//! `POST /v1/checks/batch`.

use std::thread;
use std::time::Duration;

use super::problems::Obedient;
use crate::support::{Answer, Server};
use serde_json::Value;
use sigmadot::api::examples::EXAMPLES;
use sigmadot::api::log::Log;

fn lines(answer: &Answer) -> Vec<Value> {
    assert_eq!(answer.status, 200, "{}", answer.text());
    assert_eq!(answer.header("content-type"), Some("application/x-ndjson"));
    answer.text().lines().map(|line| serde_json::from_str(line).unwrap()).collect()
}

fn post(server: &Server, body: &[u8]) -> Answer {
    server.call("POST", "/v1/checks/batch", &[("content-type", "application/x-ndjson")], body)
}

/// An example on one line.
fn sound() -> String {
    serde_json::from_str::<Value>(EXAMPLES[0].text).unwrap().to_string()
}

#[test]
fn lines_are_answered_in_order_each_by_itself() {
    let server = Server::start();
    let sound = sound();
    let mut body = String::new();
    for n in 0..200 {
        body += match n % 4 {
            0 | 1 => &sound,
            2 => "{\"broken\": ",
            _ => "",
        };
        body += if n % 8 == 0 { "\r\n" } else { "\n" };
    }
    body += &sound;
    let answers = lines(&post(&server, body.as_bytes()));
    let expected: Vec<usize> = (0..=200).filter(|n| n % 4 != 3).map(|n| n + 1).collect();
    let found: Vec<usize> = answers.iter().map(|a| a["line"].as_u64().unwrap() as usize).collect();
    assert_eq!(found, expected);
    for answer in &answers {
        let broken = answer["line"].as_u64().unwrap() % 4 == 3;
        assert_eq!(answer.get("report").is_some(), !broken);
        assert_eq!(answer.get("problem").is_some(), broken);
        if broken {
            assert_eq!(answer["problem"]["status"], 400);
        }
    }
}

#[test]
fn answers_come_while_the_input_is_still_open() {
    let server = Server::start();
    let mut wire = server.connect();
    wire.send(b"POST /v1/checks/batch HTTP/1.1\r\nhost: x\r\nconnection: close\r\ntransfer-encoding: chunked\r\n\r\n");
    for n in 1..=3 {
        let line = sound() + "\n";
        wire.send(format!("{:x}\r\n{line}\r\n", line.len()).as_bytes());
        let seen = wire.until(b"}\n");
        assert!(String::from_utf8_lossy(&seen).contains(&format!("{{\"line\":{n},\"report\"")));
    }
    wire.send(b"0\r\n\r\n");
    assert!(wire.rest().ends_with(b"0\r\n\r\n"));
}

#[test]
fn limits_on_lines() {
    let server = Server::limited(|limits| {
        limits.service.line_bytes = 2000;
        limits.service.lines = 4;
    });
    let long = " ".repeat(2001);
    let body = format!("{long}\n{}\n{long}\n{{}}\n{{}}\n{{}}\n", sound());
    let answers = lines(&post(&server, body.as_bytes()));
    let statuses: Vec<(u64, u64)> = answers
        .iter()
        .map(|a| (a["line"].as_u64().unwrap(), a["problem"]["status"].as_u64().unwrap_or(200)))
        .collect();
    assert_eq!(statuses, [(1, 413), (2, 200), (3, 413), (4, 422), (5, 422)]);
    assert_eq!(answers[4]["problem"]["type"], "/v1/codes#limit-exceeded");
    server.assert_alive();
}

#[test]
fn a_line_that_fails_or_is_late_does_not_stop_the_rest() {
    let server = Server::with(
        Obedient,
        |limits| {
            limits.service.workers = 1;
            limits.service.deadline_ms = 1_500;
        },
        Log::silent(),
    );
    let body = format!("\"panic\"\n\"sleep\"\n{}\n", sound());
    let answers = lines(&post(&server, body.as_bytes()));
    assert_eq!(answers[0]["problem"]["status"], 500);
    assert_eq!(answers[1]["problem"]["status"], 503);
    assert!(answers[2]["report"].is_object());
}

#[test]
fn a_batch_leaves_room_for_single_calls_and_ends_with_its_client() {
    let server = Server::with(
        Obedient,
        |limits| {
            limits.service.workers = 1;
            limits.service.queue = 4;
        },
        Log::silent(),
    );
    let mut batch = server.connect();
    batch.send(b"POST /v1/checks/batch HTTP/1.1\r\nhost: x\r\ncontent-length: 1000000\r\n\r\n");
    batch.send("\"nap\"\n".repeat(100).as_bytes());
    thread::sleep(Duration::from_millis(100));
    assert_eq!(server.post("/v1/checks?deadline=10", EXAMPLES[0].text.as_bytes()).status, 200);
    drop(batch);
    thread::sleep(Duration::from_millis(700));
    assert_eq!(server.post("/v1/checks?deadline=500ms", EXAMPLES[0].text.as_bytes()).status, 200);
}

#[test]
fn an_input_that_goes_silent_is_told_so() {
    let server = Server::limited(|limits| limits.service.body_timeout_ms = 200);
    let mut wire = server.connect();
    let head =
        "POST /v1/checks/batch HTTP/1.1\r\nhost: x\r\nconnection: close\r\ncontent-length: 9999\r\n\r\n";
    wire.send(format!("{head}{}\n", sound()).as_bytes());
    let answers = lines(&wire.answer());
    assert!(answers[0]["report"].is_object());
    assert_eq!((&answers[1]["line"], &answers[1]["problem"]["status"]), (&2.into(), &408.into()));
}
