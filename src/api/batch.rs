//! `POST /v1/checks/batch`: one description a line in, one answer a line out, in order, while the
//! input is still arriving. A reader hands lines to the workers and a writer waits for them in turn;
//! between them stands a short queue, so that a client that does not read slows down what is read
//! from it.

use std::sync::Arc;
use std::time::Duration;

use axum::body::{Body, Bytes};
use axum::http::Response;
use http_body_util::channel::{Channel, Sender};
use tokio::sync::mpsc;

use super::body::Incoming;
use super::check::{DEADLINE, UNITS};
use super::problem::Problem;
use super::route::{BASE, Call, Gives, JSON, Method, NDJSON, Outcome, Route, Takes};
use super::service::{Service, Ticket};
use crate::diagnostic::Code;
use crate::quantity::UnitSystem;

/// The route.
pub const BATCH: Route = Route {
    method: Method::Post,
    path: "/v1/checks/batch",
    id: "check_batch",
    tag: Some("checks"),
    summary: "Check a stream of descriptions",
    description: "Takes newline-delimited JSON, one description a line, and answers each line in order while the input is \
                  still arriving: `{\"line\": n, \"report\": …}` or `{\"line\": n, \"problem\": …}`. Empty lines are passed \
                  over but counted. The deadline holds for each line. The answer is 200 as soon as it begins; what goes wrong later is told in a \
                  line of its own.",
    parameters: &[UNITS, DEADLINE],
    takes: Some(Takes {
        media: &[NDJSON, "application/ndjson", "application/jsonl", JSON],
        schema: "Description",
        description: "One description a line.",
        examples: false,
        streamed: true,
    }),
    gives: &[Gives { media: NDJSON, schema: Some("BatchAnswer") }],
    answer: "One answer a line.",
    refuses: &[406, 415],
    handler: |call| Box::pin(batch(call)),
    ..BASE
};

/// What is known about a line when it is handed to the writer.
enum Entry {
    Queued(Ticket<Vec<u8>>),
    Refused(Problem),
}

async fn batch(call: Call) -> Outcome {
    let (deadline, units) = (call.deadline()?, call.query.units());
    let Some(incoming) = call.stream else {
        return Err(Problem::new(Code::Internal, "the stream is missing"));
    };
    let service = call.service;
    // Two lines a worker keep every worker busy while one answer is being written.
    let (entries, answers) = mpsc::channel(2 * service.pool.workers());
    let (sender, body) = Channel::<Bytes>::new(2);
    tokio::spawn(write(answers, sender, deadline));
    tokio::spawn(Reader { service, units, entries, line: 0 }.run(incoming));
    Ok(Response::new(Body::new(body)))
}

struct Reader {
    service: Arc<Service>,
    units: UnitSystem,
    entries: mpsc::Sender<(usize, Entry)>,
    line: usize,
}

/// The writer is gone because the client is: reading on is pointless.
struct Gone;

impl Reader {
    async fn run(mut self, incoming: Incoming) {
        if let Err(Some(problem)) = self.read(incoming).await {
            // If the writer is gone there is nobody left to tell.
            let _ = self.hand_over(Entry::Refused(problem)).await;
        }
    }

    /// Splits the input into lines. `Err(None)` if the client is gone.
    async fn read(&mut self, mut incoming: Incoming) -> Result<(), Option<Problem>> {
        let pause = self.service.limits.service.body_timeout();
        let cap = self.service.limits.service.line_bytes;
        let mut partial: Vec<u8> = Vec::new();
        let mut too_long = false;
        loop {
            let piece = incoming.next(pause).await.map_err(|problem| {
                self.line += 1;
                Some(problem)
            })?;
            let at_end = piece.is_none();
            let mut rest = piece.unwrap_or_default();
            loop {
                let newline = rest.iter().position(|b| *b == b'\n');
                let text = rest.split_to(newline.unwrap_or(rest.len()));
                if too_long || partial.len() + text.len() > cap {
                    too_long = true;
                    partial = Vec::new();
                } else {
                    partial.extend_from_slice(&text);
                }
                let is_line = newline.is_some() || (at_end && (too_long || !partial.is_empty()));
                if !is_line {
                    break;
                }
                if newline.is_some() {
                    rest = rest.split_off(1);
                }
                self.line += 1;
                let line = std::mem::take(&mut partial);
                self.accept(line, std::mem::take(&mut too_long)).await?;
                if newline.is_none() {
                    break;
                }
            }
            if at_end {
                return Ok(());
            }
        }
    }

    async fn accept(&mut self, line: Vec<u8>, too_long: bool) -> Result<(), Option<Problem>> {
        let limits = &self.service.limits.service;
        if self.line > limits.lines {
            let detail = format!("a batch takes {} lines; the rest was not read", limits.lines);
            return Err(Some(Problem::new(Code::LimitExceeded, detail)));
        }
        if too_long {
            let detail = format!("the line is longer than {} bytes", limits.line_bytes);
            let refused = Entry::Refused(Problem::new(Code::BodyTooLarge, detail));
            return self.hand_over(refused).await.map_err(|Gone| None);
        }
        if line.iter().all(u8::is_ascii_whitespace) {
            return Ok(());
        }
        let units = self.units;
        let queued = self.service.queue(move |engine, limits, cancel| {
            engine.check(&line, limits, units, cancel).map(|report| report.to_json())
        });
        let ticket = queued.await.map_err(Some)?;
        self.hand_over(Entry::Queued(ticket)).await.map_err(|Gone| None)
    }

    async fn hand_over(&self, entry: Entry) -> Result<(), Gone> {
        self.entries.send((self.line, entry)).await.map_err(|_| Gone)
    }
}

async fn write(mut entries: mpsc::Receiver<(usize, Entry)>, mut body: Sender<Bytes>, deadline: Duration) {
    while let Some((line, entry)) = entries.recv().await {
        let answer = match entry {
            Entry::Queued(ticket) => ticket.wait(deadline).await,
            Entry::Refused(problem) => Err(problem),
        };
        let (key, json) = match answer {
            Ok(report) => ("report", report),
            Err(problem) => ("problem", problem.to_json()),
        };
        let mut text = format!("{{\"line\":{line},\"{key}\":").into_bytes();
        text.extend_from_slice(&json);
        text.extend_from_slice(b"}\n");
        if body.send_data(Bytes::from(text)).await.is_err() {
            return;
        }
    }
}
