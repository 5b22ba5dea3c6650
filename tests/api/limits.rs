//! Size, time and concurrency: each limit is met with an answer, and the service lives on.

use std::io::Write;
use std::net::{Ipv4Addr, SocketAddr};
use std::sync::Arc;
use std::thread;
use std::time::{Duration, Instant};

use super::problems::Obedient;
use crate::support::{Answer, Server, request};
use flate2::{Compression, write::GzEncoder};
use sigmadot::api::engine::Core;
use sigmadot::api::examples::EXAMPLES;
use sigmadot::api::limits::PublishedLimits;
use sigmadot::api::log::Log;
use sigmadot::api::serve::{Settings, bind};

fn gzip(plain: &[u8]) -> Vec<u8> {
    let mut encoder = GzEncoder::new(Vec::new(), Compression::best());
    encoder.write_all(plain).unwrap();
    encoder.finish().unwrap()
}

#[test]
fn large_bodies() {
    let server = Server::start();
    let ten_megabytes = vec![b' '; 10 << 20];
    server.post("/v1/checks", &ten_megabytes).assert_problem(413, "body-too-large");
    // Without an announced length it is counted as it comes.
    let mut wire = server.connect();
    wire.send(
        b"POST /v1/checks HTTP/1.1\r\nhost: x\r\nconnection: close\r\ntransfer-encoding: chunked\r\n\r\n",
    );
    for _ in 0..20 {
        wire.send(b"20000\r\n");
        wire.send(&[b' '; 0x20000]);
        wire.send(b"\r\n");
    }
    wire.send(b"0\r\n\r\n");
    wire.answer().assert_problem(413, "body-too-large");
    // Who asks first is told before sending.
    let mut wire = server.connect();
    wire.send(
        b"POST /v1/checks HTTP/1.1\r\nhost: x\r\nexpect: 100-continue\r\ncontent-length: 99999999\r\n\r\n",
    );
    wire.answer().assert_problem(413, "body-too-large");
    server.assert_alive();
}

#[test]
fn compressed_bodies() {
    let server = Server::start();
    let coded = [("content-encoding", "gzip")];
    let sound = gzip(EXAMPLES[0].text.as_bytes());
    assert_eq!(server.call("POST", "/v1/checks", &coded, &sound).status, 200);
    let bomb = gzip(&vec![b' '; 200 << 20]);
    assert!(bomb.len() < 1 << 20);
    server.call("POST", "/v1/checks", &coded, &bomb).assert_problem(413, "body-too-large");
    server.call("POST", "/v1/checks", &coded, b"plain").assert_problem(400, "not-json");
    server.assert_alive();
}

#[test]
fn slow_clients() {
    let server = Server::limited(|limits| {
        limits.service.first_byte_timeout_ms = 300;
        limits.service.head_timeout_ms = 300;
        limits.service.body_timeout_ms = 300;
    });
    // Says nothing at all.
    let mut silent = server.connect();
    let begun = Instant::now();
    assert!(silent.rest().is_empty());
    assert!(begun.elapsed() < Duration::from_secs(5));
    // Begins a head and stops.
    let mut slow = server.connect();
    slow.send(b"GET /livez HTTP/1.1\r\nhost: x");
    slow.answer().assert_problem(408, "request-timeout");
    // Begins so little that even the protocol is open.
    let mut vague = server.connect();
    vague.send(b"P");
    assert!(begun.elapsed() < Duration::from_secs(8));
    let rest = vague.rest();
    assert!(rest.is_empty() || Answer::parse(&rest).status == 408);
    // Announces a body and sends half of it.
    let mut half = server.connect();
    half.send(b"POST /v1/checks HTTP/1.1\r\nhost: x\r\ncontent-length: 100\r\n\r\n{\"name\": ");
    half.answer().assert_problem(408, "request-timeout");
    // Keeps a connection open without using it.
    let mut idle = server.connect();
    idle.send(b"GET /livez HTTP/1.1\r\nhost: x\r\n\r\n");
    let rest = idle.rest();
    assert_eq!(Answer::parse(&rest).status, 200);
    assert!(!rest.windows(4).skip(20).any(|w| w == b"HTTP"), "an idle connection is closed silently");
    server.assert_alive();
}

#[test]
fn a_body_that_breaks_off() {
    let server = Server::start();
    let mut wire = server.connect();
    wire.send(b"POST /v1/checks HTTP/1.1\r\nhost: x\r\ncontent-length: 100\r\n\r\n{");
    wire.finish_sending();
    drop(wire);
    server.assert_alive();
}

#[test]
fn deadlines() {
    let server = Server::with(
        Obedient,
        |limits| {
            limits.service.workers = 1;
            limits.service.deadline_ms = 100;
        },
        Log::silent(),
    );
    let begun = Instant::now();
    let late = server.post("/v1/checks", b"\"sleep\"");
    late.assert_problem(503, "deadline-exceeded");
    assert_eq!(late.header("retry-after"), Some("1"));
    server.post("/v1/checks?deadline=200ms", b"\"sleep\"").assert_problem(503, "deadline-exceeded");
    assert!(begun.elapsed() >= Duration::from_millis(300));
    // The only worker is free again, so the work was really given up.
    assert_eq!(server.post("/v1/checks?deadline=5", EXAMPLES[0].text.as_bytes()).status, 200);
}

#[test]
fn a_full_queue() {
    let server = Server::with(
        Obedient,
        |limits| {
            limits.service.workers = 1;
            limits.service.queue = 4;
        },
        Log::silent(),
    );
    let sleepers: Vec<_> = (0..3)
        .map(|_| {
            let mut wire = server.connect();
            wire.send(&request("POST", "/v1/checks?deadline=3", &[], b"\"sleep\""));
            thread::sleep(Duration::from_millis(100));
            wire
        })
        .collect();
    let refused = server.post("/v1/checks", b"{}");
    refused.assert_problem(503, "overloaded");
    assert_eq!(refused.header("retry-after"), Some("1"));
    server.get("/readyz").assert_problem(503, "overloaded");
    server.assert_alive();
    // Work whose client has gone is given up, which frees worker and queue before the deadline.
    drop(sleepers);
    let begun = Instant::now();
    while server.get("/readyz").status != 200 {
        assert!(begun.elapsed() < Duration::from_secs(2), "abandoned work is not given up");
        thread::sleep(Duration::from_millis(20));
    }
}

#[test]
fn too_many_connections() {
    let server = Server::limited(|limits| limits.service.connections = 2);
    let held: Vec<_> = (0..2).map(|_| server.connect()).collect();
    thread::sleep(Duration::from_millis(100));
    let mut third = server.connect();
    third.answer().assert_problem(503, "overloaded");
    drop(held);
    thread::sleep(Duration::from_millis(100));
    server.assert_alive();
}

#[test]
fn stopping_lets_calls_in_flight_finish() {
    let mut server = Server::with(Obedient, |_| {}, Log::silent());
    let mut busy = server.connect();
    busy.send(b"POST /v1/checks HTTP/1.1\r\nhost: x\r\ncontent-length: 5\r\n\r\n\"nap\"");
    let mut idle = server.connect();
    idle.send(b"GET /livez HTTP/1.1\r\nhost: x\r\n\r\n");
    idle.until(b"\"}");
    thread::sleep(Duration::from_millis(100));
    let begun = Instant::now();
    server.tell_to_stop();
    assert_eq!(busy.answer().status, 200);
    assert!(idle.rest().is_empty());
    server.wait();
    assert!(begun.elapsed() < Duration::from_secs(3));
    assert!(std::net::TcpStream::connect(server.address).is_err());
}

#[test]
fn stopping_does_not_wait_for_ever() {
    let mut server = Server::with(Obedient, |limits| limits.service.drain_ms = 200, Log::silent());
    let mut stuck = server.connect();
    stuck.send(&request("POST", "/v1/checks?deadline=20", &[], b"\"sleep\""));
    thread::sleep(Duration::from_millis(100));
    let begun = Instant::now();
    server.tell_to_stop();
    server.wait();
    assert!(begun.elapsed() < Duration::from_secs(3));
}

#[test]
fn other_addresses_are_refused_unless_asked_for() {
    let runtime = tokio::runtime::Builder::new_current_thread().enable_all().build().unwrap();
    let settings = |allow_remote| Settings {
        address: SocketAddr::from((Ipv4Addr::UNSPECIFIED, 0)),
        allow_remote,
        limits: PublishedLimits::default(),
        log: Log::silent(),
    };
    runtime.block_on(async {
        let refused = bind(settings(false), Arc::new(Core)).await;
        assert_eq!(refused.err().unwrap().kind(), std::io::ErrorKind::PermissionDenied);
        assert!(bind(settings(true), Arc::new(Core)).await.is_ok());
    });
}

#[test]
fn limits_are_published_as_they_are_set() {
    let server = Server::limited(|limits| {
        limits.service.body_bytes = 4321;
        limits.description.flows = 17;
    });
    let limits = server.get("/v1/limits").json();
    assert_eq!(limits["service"]["body_bytes"], 4321);
    assert_eq!(limits["description"]["flows"], 17);
    assert!(limits["service"]["workers"].as_u64().unwrap() >= 1);
    let just_fits = vec![b' '; 4321];
    server.post("/v1/checks", &just_fits).assert_problem(400, "not-json");
    server.post("/v1/checks", &[b' '; 4322]).assert_problem(413, "body-too-large");
}
