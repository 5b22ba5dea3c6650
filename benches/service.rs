//! What a check costs over HTTP, in CPU seconds of the server: `POST /v1/checks` of the service as it
//! is shipped, beside a bare route that reads the same body into typed values and answers with a
//! stored body of the report's size. Both run as child processes on loopback, with the same allocator,
//! and take turns. Prints a table; asserts nothing. Linux only (`/proc`). Run with
//! `cargo bench --bench service`.

mod data;

use axum::Router;
use axum::body::Bytes;
use axum::extract::State;
use axum::http::StatusCode;
use axum::routing::post;
use data::{PLANT, without_exchangers};
use hyper_util::rt::{TokioExecutor, TokioIo};
use hyper_util::server::conn::auto;
use hyper_util::service::TowerToHyperService;
use serde::Deserialize;
use std::collections::HashMap;
use std::error::Error;
use std::hint::black_box;
use std::io::{BufRead, BufReader, Read, Write};
use std::net::{SocketAddr, TcpStream};
use std::process::{Child, Command, Stdio};

#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

/// Calls of each server a turn.
const CALLS: usize = 2000;
const TURNS: usize = 6;
/// Connections that call at once, beside one alone.
const CONNECTIONS: usize = 4;
/// Ticks a second in `/proc/<pid>/stat` on every Linux architecture that Rust's tier 1 covers.
const TICKS: f64 = 100.0;

/// The description as plain typed values; quantities stay text.
#[derive(Deserialize)]
#[allow(dead_code, reason = "reading them is the work; nothing is done with them")]
struct Plant {
    name: String,
    environment: HashMap<String, String>,
    fluids: HashMap<String, Fluid>,
    components: HashMap<String, Component>,
    flows: HashMap<String, Flow>,
}

#[derive(Deserialize)]
#[allow(dead_code, reason = "see Plant")]
struct Fluid {
    kind: String,
    mole_fractions: HashMap<String, f64>,
}

#[derive(Deserialize)]
#[allow(dead_code, reason = "see Plant")]
struct Component {
    kind: String,
}

#[derive(Deserialize)]
#[allow(dead_code, reason = "see Plant")]
struct Flow {
    kind: String,
    from: Option<String>,
    to: Option<String>,
    fluid: Option<String>,
    pressure: Option<String>,
    temperature: Option<String>,
    quality: Option<f64>,
    mass_flow: Option<String>,
    power: Option<String>,
    rate: Option<String>,
    role: Option<String>,
}

async fn bare(State(stored): State<Bytes>, body: Bytes) -> Result<Bytes, StatusCode> {
    let plant: Plant = serde_json::from_slice(&body).map_err(|_| StatusCode::UNPROCESSABLE_ENTITY)?;
    black_box(&plant);
    Ok(stored)
}

/// The bare server, with `size` stored bytes; says where it listens and answers until it is killed.
fn serve_bare(size: usize) -> Result<(), Box<dyn Error>> {
    let stored = Bytes::from(vec![b'x'; size]);
    let router = Router::new().route("/v1/checks", post(bare)).with_state(stored);
    tokio::runtime::Builder::new_multi_thread().enable_all().build()?.block_on(async {
        let listener = tokio::net::TcpListener::bind("127.0.0.1:0").await?;
        println!("{{\"address\":\"{}\"}}", listener.local_addr()?);
        loop {
            let (stream, _) = listener.accept().await?;
            stream.set_nodelay(true)?;
            let service = TowerToHyperService::new(router.clone());
            tokio::spawn(async move {
                let builder = auto::Builder::new(TokioExecutor::new());
                // A client that hangs up is no fault of the server.
                let _ = builder.serve_connection(TokioIo::new(stream), service).await;
            });
        }
    })
}

/// A server in a process of its own, and connections to it.
struct Server {
    child: Child,
    connections: Vec<BufReader<TcpStream>>,
}

impl Server {
    /// Starts a command whose first line of output is a JSON object with the `address`.
    fn start(mut command: Command) -> Result<Server, Box<dyn Error>> {
        let mut child = command.stdout(Stdio::piped()).spawn()?;
        let mut output = BufReader::new(child.stdout.take().ok_or("no output")?);
        let mut line = String::new();
        output.read_line(&mut line)?;
        // Its log must have a reader.
        std::thread::spawn(move || std::io::copy(&mut output, &mut std::io::sink()));
        let said: serde_json::Value = serde_json::from_str(&line)?;
        let address: SocketAddr = said["address"].as_str().ok_or("no address")?.parse()?;
        let mut connections = Vec::new();
        for _ in 0..CONNECTIONS {
            let stream = TcpStream::connect(address)?;
            stream.set_nodelay(true)?;
            connections.push(BufReader::new(stream));
        }
        Ok(Server { child, connections })
    }

    /// Posts a plant on one connection.
    fn ask(&mut self, connection: usize, plant: &str) -> Result<(), Box<dyn Error>> {
        let request = format!(
            "POST /v1/checks HTTP/1.1\r\nhost: localhost\r\ncontent-type: application/json\r\ncontent-length: {}\r\n\r\n{plant}",
            plant.len()
        );
        self.connections[connection].get_mut().write_all(request.as_bytes())?;
        Ok(())
    }

    /// Reads the whole answer on one connection: its length.
    fn answer(&mut self, connection: usize) -> Result<usize, Box<dyn Error>> {
        let connection = &mut self.connections[connection];
        let mut status = String::new();
        connection.read_line(&mut status)?;
        if !status.starts_with("HTTP/1.1 200") {
            return Err(format!("answered {status}").into());
        }
        let mut length = None;
        loop {
            let mut header = String::new();
            connection.read_line(&mut header)?;
            let header = header.trim_end().to_ascii_lowercase();
            if header.is_empty() {
                break;
            }
            if let Some(value) = header.strip_prefix("content-length:") {
                length = Some(value.trim().parse::<usize>()?);
            }
        }
        let length = length.ok_or("an answer without its length")?;
        let mut body = vec![0; length];
        connection.read_exact(&mut body)?;
        Ok(length)
    }

    /// User and system time of the process so far, in seconds.
    fn cpu(&self) -> Result<f64, Box<dyn Error>> {
        let stat = std::fs::read_to_string(format!("/proc/{}/stat", self.child.id()))?;
        // The name in parentheses may hold anything; utime and stime are fields 14 and 15.
        let (_, rest) = stat.rsplit_once(')').ok_or("an odd /proc")?;
        let mut ticks = 0.0;
        for field in rest.split_whitespace().skip(11).take(2) {
            ticks += field.parse::<f64>()?;
        }
        Ok(ticks / TICKS)
    }

    /// CPU seconds of the calls of one turn, on so many connections at once.
    fn turn(&mut self, plant: &str, connections: usize) -> Result<f64, Box<dyn Error>> {
        let before = self.cpu()?;
        for _ in 0..CALLS / connections {
            for connection in 0..connections {
                self.ask(connection, plant)?;
            }
            for connection in 0..connections {
                self.answer(connection)?;
            }
        }
        Ok(self.cpu()? - before)
    }
}

impl Drop for Server {
    fn drop(&mut self) {
        // Already gone is as good.
        let _ = self.child.kill();
        let _ = self.child.wait();
    }
}

fn main() -> Result<(), Box<dyn Error>> {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    if let [word, size] = &arguments[..]
        && word == "bare"
    {
        return serve_bare(size.parse()?);
    }
    for (name, plant) in
        [("with two exchangers", PLANT.to_owned()), ("without exchangers", without_exchangers())]
    {
        let mut service = Command::new(env!("CARGO_BIN_EXE_sigmadot"));
        service.args(["serve", "--address", "127.0.0.1:0"]);
        let mut checks = Server::start(service)?;
        checks.ask(0, &plant)?;
        let size = checks.answer(0)?;
        let mut plain = Command::new(std::env::current_exe()?);
        plain.args(["bare", &size.to_string()]);
        let mut bare = Server::start(plain)?;
        println!("{name}: request {} bytes, answer {size} bytes, {} calls each", plant.len(), TURNS * CALLS);
        for connections in [1, CONNECTIONS] {
            for server in [&mut checks, &mut bare] {
                server.turn(&plant, connections)?;
            }
            let (mut ours, mut theirs) = (0.0, 0.0);
            for _ in 0..TURNS {
                ours += checks.turn(&plant, connections)?;
                theirs += bare.turn(&plant, connections)?;
            }
            let per_call = |seconds: f64| seconds * 1e6 / (TURNS * CALLS) as f64;
            println!(
                "{connections} connection(s): POST /v1/checks {:.1} µs CPU a call, bare typed route {:.1}; ratio {:.2}",
                per_call(ours),
                per_call(theirs),
                ours / theirs
            );
        }
    }
    Ok(())
}
