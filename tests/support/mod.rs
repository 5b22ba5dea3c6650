//! A service on a free loopback port, and a client that speaks bytes, so that a test can also be
//! slow, rude or wrong.

use std::io::{ErrorKind, Read, Write};
use std::net::{Ipv4Addr, Shutdown, SocketAddr, TcpStream};
use std::sync::Arc;
use std::thread::{self, JoinHandle};
use std::time::Duration;

use serde_json::Value;
use sigmadot::api::engine::{Core, Engine};
use sigmadot::api::limits::PublishedLimits;
use sigmadot::api::log::Log;
use sigmadot::api::serve::{Settings, bind};
use tokio::sync::oneshot;

/// How long a test waits for bytes before it fails.
const PATIENCE: Duration = Duration::from_secs(20);

/// A running service; stopped when dropped.
pub struct Server {
    pub address: SocketAddr,
    stop: Option<oneshot::Sender<()>>,
    thread: Option<JoinHandle<()>>,
}

impl Server {
    /// The service as it is, with its default limits.
    pub fn start() -> Server {
        Server::with(Core, |_| {}, Log::silent())
    }

    /// The service with other limits.
    pub fn limited(adjust: impl FnOnce(&mut PublishedLimits)) -> Server {
        Server::with(Core, adjust, Log::silent())
    }

    /// The service over another engine, with other limits and a log.
    pub fn with(engine: impl Engine, adjust: impl FnOnce(&mut PublishedLimits), log: Log) -> Server {
        let mut limits = PublishedLimits::default();
        adjust(&mut limits);
        let address = SocketAddr::from((Ipv4Addr::LOCALHOST, 0));
        let settings = Settings { address, allow_remote: false, limits, log };
        let (stop, stopped) = oneshot::channel();
        let (tell, told) = std::sync::mpsc::channel();
        let thread = thread::spawn(move || {
            let runtime =
                tokio::runtime::Builder::new_multi_thread().worker_threads(2).enable_all().build().unwrap();
            runtime.block_on(async {
                let bound = bind(settings, Arc::new(engine)).await.unwrap();
                tell.send(bound.address).unwrap();
                bound
                    .serve(async {
                        let _ = stopped.await;
                    })
                    .await;
            });
            runtime.shutdown_background();
        });
        Server { address: told.recv().unwrap(), stop: Some(stop), thread: Some(thread) }
    }

    /// Tells the service to stop, without waiting for it.
    pub fn tell_to_stop(&mut self) {
        drop(self.stop.take());
    }

    /// Waits until the service has stopped.
    pub fn wait(&mut self) {
        if let Some(thread) = self.thread.take() {
            thread.join().unwrap();
        }
    }

    /// A raw connection.
    pub fn connect(&self) -> Wire {
        let stream = TcpStream::connect(self.address).unwrap();
        stream.set_read_timeout(Some(PATIENCE)).unwrap();
        stream.set_nodelay(true).unwrap();
        Wire(stream)
    }

    /// One call with a connection of its own.
    pub fn call(&self, method: &str, target: &str, headers: &[(&str, &str)], body: &[u8]) -> Answer {
        let mut wire = self.connect();
        wire.send(&request(method, target, headers, body));
        wire.answer()
    }

    pub fn get(&self, target: &str) -> Answer {
        self.call("GET", target, &[], b"")
    }

    pub fn post(&self, target: &str, body: &[u8]) -> Answer {
        self.call("POST", target, &[("content-type", "application/json")], body)
    }

    /// Fails unless the service still answers.
    #[track_caller]
    pub fn assert_alive(&self) {
        assert_eq!(self.get("/livez").status, 200);
    }
}

impl Drop for Server {
    fn drop(&mut self) {
        self.tell_to_stop();
        if !thread::panicking() {
            self.wait();
        }
    }
}

/// The bytes of a request that closes its connection.
pub fn request(method: &str, target: &str, headers: &[(&str, &str)], body: &[u8]) -> Vec<u8> {
    let mut text = format!("{method} {target} HTTP/1.1\r\nhost: test\r\nconnection: close\r\n");
    for (name, value) in headers {
        text += &format!("{name}: {value}\r\n");
    }
    if method == "POST" {
        text += &format!("content-length: {}\r\n", body.len());
    }
    text += "\r\n";
    let mut bytes = text.into_bytes();
    bytes.extend_from_slice(body);
    bytes
}

/// A raw connection.
pub struct Wire(pub TcpStream);

impl Wire {
    pub fn send(&mut self, bytes: &[u8]) {
        // The service may close before it has read everything; the answer tells.
        let _ = self.0.write_all(bytes);
    }

    /// Everything up to the end of the connection.
    pub fn rest(&mut self) -> Vec<u8> {
        let mut bytes = Vec::new();
        match self.0.read_to_end(&mut bytes) {
            Ok(_) => {}
            Err(error) if error.kind() == ErrorKind::ConnectionReset => {}
            Err(error) => panic!("the service neither answers nor closes: {error}"),
        }
        bytes
    }

    /// The answer to a request that closes its connection.
    #[track_caller]
    pub fn answer(&mut self) -> Answer {
        Answer::parse(&self.rest())
    }

    /// Bytes until `end` has been seen.
    pub fn until(&mut self, end: &[u8]) -> Vec<u8> {
        let mut bytes = Vec::new();
        let mut byte = [0];
        while !bytes.ends_with(end) {
            assert_eq!(
                self.0.read(&mut byte).unwrap(),
                1,
                "closed after {}",
                String::from_utf8_lossy(&bytes)
            );
            bytes.push(byte[0]);
        }
        bytes
    }

    pub fn finish_sending(&self) {
        self.0.shutdown(Shutdown::Write).unwrap();
    }
}

/// An answer, taken apart.
#[derive(Debug)]
pub struct Answer {
    pub status: u16,
    headers: Vec<(String, String)>,
    pub body: Vec<u8>,
}

impl Answer {
    #[track_caller]
    pub fn parse(bytes: &[u8]) -> Answer {
        let shown = String::from_utf8_lossy(bytes);
        let split = bytes.windows(4).position(|w| w == b"\r\n\r\n");
        let split = split.unwrap_or_else(|| panic!("no answer but {shown:?}"));
        let head = String::from_utf8(bytes[..split].to_vec()).unwrap();
        let mut lines = head.split("\r\n");
        let status = lines.next().unwrap().split(' ').nth(1).unwrap().parse().unwrap();
        let headers: Vec<(String, String)> = lines
            .map(|line| line.split_once(':').unwrap())
            .map(|(name, value)| (name.to_ascii_lowercase(), value.trim().to_owned()))
            .collect();
        let mut answer = Answer { status, headers, body: bytes[split + 4..].to_vec() };
        if answer.header("transfer-encoding") == Some("chunked") {
            answer.body = unchunk(&answer.body);
        }
        answer
    }

    pub fn header(&self, name: &str) -> Option<&str> {
        self.headers.iter().find(|(n, _)| n == name).map(|(_, v)| v.as_str())
    }

    pub fn text(&self) -> &str {
        std::str::from_utf8(&self.body).unwrap()
    }

    #[track_caller]
    pub fn json(&self) -> Value {
        serde_json::from_slice(&self.body).unwrap_or_else(|e| panic!("{e}: {:?}", self.text()))
    }

    /// Fails unless this is a whole problem with this status and code.
    #[track_caller]
    pub fn assert_problem(&self, status: u16, code: &str) -> Value {
        assert_eq!(self.status, status, "{}", self.text());
        assert_eq!(self.header("content-type"), Some("application/problem+json"));
        let problem = self.json();
        assert_eq!(problem["type"], format!("/v1/codes#{code}"));
        assert_eq!(problem["status"], status);
        assert!(problem["title"].as_str().is_some_and(|t| !t.is_empty()));
        assert!(problem["detail"].as_str().is_some_and(|t| !t.is_empty()));
        assert_eq!(problem["request_id"].as_str(), self.header("x-request-id"));
        for fault in problem["errors"].as_array().unwrap() {
            for member in ["pointer", "code", "detail"] {
                assert!(fault[member].is_string(), "{fault}");
            }
        }
        problem
    }
}

fn unchunk(mut bytes: &[u8]) -> Vec<u8> {
    let mut whole = Vec::new();
    loop {
        let end = bytes.windows(2).position(|w| w == b"\r\n").unwrap();
        let length = usize::from_str_radix(std::str::from_utf8(&bytes[..end]).unwrap(), 16).unwrap();
        bytes = &bytes[end + 2..];
        if length == 0 {
            return whole;
        }
        whole.extend_from_slice(&bytes[..length]);
        bytes = &bytes[length + 2..];
    }
}
