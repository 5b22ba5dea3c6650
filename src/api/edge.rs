//! The outermost layer: every call passes it once on its way in and once on its way out. It gives
//! each call an id, catches panics, turns whatever failed into problem details, and writes the log
//! line when the answer has been sent.

use std::future::Future;
use std::hash::{BuildHasher, Hasher, RandomState};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::pin::Pin;
use std::sync::OnceLock;
use std::sync::atomic::{AtomicU64, Ordering};
use std::task::{Context, Poll};
use std::time::Instant;

use axum::Router;
use axum::body::{Body, Bytes};
use axum::http::header::{ALLOW, CONTENT_TYPE, X_CONTENT_TYPE_OPTIONS};
use axum::http::{HeaderName, HeaderValue, Method, Request, Response, StatusCode};
use hyper::body::{Body as HttpBody, Frame, SizeHint};
use serde_json::Value;
use tower::ServiceExt;

use super::activity::InFlight;
use super::log::Log;
use super::problem::{MEDIA_TYPE, Problem};
use super::route::Template;
use crate::diagnostic::Code;

/// The header that carries a call's id in both directions.
pub const REQUEST_ID: HeaderName = HeaderName::from_static("x-request-id");

/// Characters in a request id that a client may choose.
const LONGEST_ID: usize = 64;

/// The id of a call.
#[derive(Clone, Debug, Default)]
pub struct RequestId(pub String);

impl RequestId {
    /// A new id: a random part for this process, and a count.
    pub fn fresh() -> RequestId {
        static PROCESS: OnceLock<u64> = OnceLock::new();
        static COUNT: AtomicU64 = AtomicU64::new(1);
        let process = PROCESS.get_or_init(|| RandomState::new().build_hasher().finish());
        RequestId(format!("{process:016x}-{:x}", COUNT.fetch_add(1, Ordering::Relaxed)))
    }

    /// The id that the client chose, if it is harmless in a log; otherwise a new one.
    fn of(request: &Request<Body>) -> RequestId {
        let given = request.headers().get(&REQUEST_ID).and_then(|v| v.to_str().ok()).filter(|id| {
            (1..=LONGEST_ID).contains(&id.len())
                && id.bytes().all(|b| b.is_ascii_alphanumeric() || b"-_.".contains(&b))
        });
        given.map_or_else(RequestId::fresh, |id| RequestId(id.to_owned()))
    }
}

/// Answers one call.
pub async fn answer(
    router: Router,
    log: Log,
    in_flight: InFlight,
    mut request: Request<Body>,
) -> Response<Metered> {
    let begun = Instant::now();
    let id = RequestId::of(&request);
    let method = request.method().clone();
    request.extensions_mut().insert(id.clone());
    let called = Caught(Box::pin(router.oneshot(request)));
    let mut response = match called.await {
        Some(Ok(response)) => response,
        Some(Err(never)) => match never {},
        None => {
            let problem = Problem::new(Code::Internal, "the call failed; the fault is ours");
            problem.into_response(&id.0, method != Method::HEAD)
        }
    };
    if method == Method::OPTIONS && response.status() == StatusCode::METHOD_NOT_ALLOWED {
        response = options(&response);
    }
    if response.status().as_u16() >= 400 && !is_problem(&response) {
        response = into_problem(response, &id, method != Method::HEAD);
    }
    let headers = response.headers_mut();
    if let Ok(value) = HeaderValue::from_str(&id.0) {
        headers.insert(REQUEST_ID, value);
    }
    headers.insert(X_CONTENT_TYPE_OPTIONS, HeaderValue::from_static("nosniff"));
    // Of these nothing will be asked for.
    let complete = method == Method::HEAD || response.body().is_end_stream();
    let entry = LogEntry {
        log,
        method,
        route: response.extensions().get::<Template>().map_or("(none)", |t| t.0),
        status: response.status(),
        id,
        begun,
        bytes: 0,
        complete,
    };
    response.map(|body| Metered { body, entry, _in_flight: in_flight })
}

fn is_problem(response: &Response<Body>) -> bool {
    response.headers().get(CONTENT_TYPE).is_some_and(|t| t.as_bytes() == MEDIA_TYPE.as_bytes())
}

/// What an address allows, as an answer to OPTIONS.
fn options(refusal: &Response<Body>) -> Response<Body> {
    let mut response = Response::new(Body::empty());
    *response.status_mut() = StatusCode::NO_CONTENT;
    let allowed = refusal.headers().get(ALLOW).and_then(|v| v.to_str().ok()).unwrap_or_default();
    if let Ok(value) = HeaderValue::from_str(&format!("{allowed},OPTIONS")) {
        response.headers_mut().insert(ALLOW, value);
    }
    response
}

/// A problem in the place of an answer that some layer made, keeping its status and `Allow`.
fn into_problem(response: Response<Body>, id: &RequestId, with_body: bool) -> Response<Body> {
    let known = response.extensions().get::<Problem>().cloned();
    let problem = known.unwrap_or_else(|| Problem::from_status(response.status()));
    let mut problem = problem.into_response(&id.0, with_body);
    if let Some(allow) = response.headers().get(ALLOW) {
        problem.headers_mut().insert(ALLOW, allow.clone());
    }
    if let Some(template) = response.extensions().get::<Template>() {
        problem.extensions_mut().insert(*template);
    }
    problem
}

/// A future whose panic becomes `None`.
struct Caught<F>(Pin<Box<F>>);

impl<F: Future> Future for Caught<F> {
    type Output = Option<F::Output>;

    fn poll(mut self: Pin<&mut Self>, cx: &mut Context<'_>) -> Poll<Self::Output> {
        match catch_unwind(AssertUnwindSafe(|| self.0.as_mut().poll(cx))) {
            Ok(poll) => poll.map(Some),
            Err(_) => Poll::Ready(None),
        }
    }
}

struct LogEntry {
    log: Log,
    method: Method,
    route: &'static str,
    status: StatusCode,
    id: RequestId,
    begun: Instant,
    bytes: u64,
    complete: bool,
}

impl Drop for LogEntry {
    fn drop(&mut self) {
        let milliseconds = (self.begun.elapsed().as_secs_f64() * 1e6).round() / 1e3;
        let level = if self.status.is_server_error() { "error" } else { "info" };
        self.log.event(
            level,
            "request",
            &[
                ("method", Value::from(self.method.as_str())),
                ("route", Value::from(self.route)),
                ("status", Value::from(self.status.as_u16())),
                ("ms", Value::from(milliseconds)),
                ("bytes", Value::from(self.bytes)),
                ("complete", Value::from(self.complete)),
                ("request_id", Value::from(self.id.0.as_str())),
            ],
        );
    }
}

/// A body that is counted while it is sent; the call ends when it does.
pub struct Metered {
    body: Body,
    entry: LogEntry,
    _in_flight: InFlight,
}

impl HttpBody for Metered {
    type Data = Bytes;
    type Error = axum::Error;

    fn poll_frame(
        mut self: Pin<&mut Self>,
        cx: &mut Context<'_>,
    ) -> Poll<Option<Result<Frame<Bytes>, axum::Error>>> {
        let frame = Pin::new(&mut self.body).poll_frame(cx);
        match &frame {
            Poll::Ready(Some(Ok(frame))) => {
                self.entry.bytes += frame.data_ref().map_or(0, |d| d.len() as u64);
                self.entry.complete = self.body.is_end_stream();
            }
            Poll::Ready(None) => self.entry.complete = true,
            _ => {}
        }
        frame
    }

    fn is_end_stream(&self) -> bool {
        self.body.is_end_stream()
    }

    fn size_hint(&self) -> SizeHint {
        self.body.size_hint()
    }
}
