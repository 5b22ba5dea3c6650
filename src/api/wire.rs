//! The byte stream under a connection. It does what the HTTP library leaves open: it gives up on a
//! client that does not read, it tells a client whose head is too slow why it is cut off, and it
//! rewrites the bare refusals that the library itself sends (a malformed head, a head that is too
//! large) into problem details.

use std::future::Future;
use std::io;
use std::pin::Pin;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::task::{Context, Poll};
use std::time::Duration;

use axum::http::StatusCode;
use hyper::rt::{Read, ReadBufCursor, Write};
use hyper_util::rt::TokioIo;
use tokio::net::TcpStream;
use tokio::time::{Instant, Sleep};

use super::edge::{REQUEST_ID, RequestId};
use super::problem::Problem;

/// A socket with a time limit on writing.
pub struct Wire {
    stream: TokioIo<TcpStream>,
    timed_out: TimedOut,
    half_read: bool,
    stall: Pin<Box<Sleep>>,
    stalled: bool,
    write_timeout: Duration,
    substitute: Option<Substitute>,
}

/// Bytes that go out in the place of others.
struct Substitute {
    bytes: Vec<u8>,
    sent: usize,
    replaces: usize,
}

/// Raised by the connection's task when the head of a request did not arrive in time; the socket
/// then says so before it closes.
#[derive(Clone, Default)]
pub struct TimedOut(Arc<AtomicBool>);

impl TimedOut {
    /// Raises the flag.
    pub fn raise(&self) {
        self.0.store(true, Ordering::Relaxed);
    }
}

impl Wire {
    /// Takes a socket over.
    pub fn new(stream: TcpStream, write_timeout: Duration, timed_out: TimedOut) -> Wire {
        Wire {
            stream: TokioIo::new(stream),
            timed_out,
            half_read: false,
            stall: Box::pin(tokio::time::sleep(write_timeout)),
            stalled: false,
            write_timeout,
            substitute: None,
        }
    }

    fn send(&mut self, cx: &mut Context<'_>, bytes: &[u8]) -> Poll<io::Result<usize>> {
        let outcome = Pin::new(&mut self.stream).poll_write(cx, bytes);
        if outcome.is_ready() {
            self.stalled = false;
            return outcome;
        }
        if !self.stalled {
            self.stalled = true;
            self.stall.as_mut().reset(Instant::now() + self.write_timeout);
        }
        self.stall
            .as_mut()
            .poll(cx)
            .map(|()| Err(io::Error::new(io::ErrorKind::TimedOut, "the client does not read its answer")))
    }
}

impl Read for Wire {
    fn poll_read(
        mut self: Pin<&mut Self>,
        cx: &mut Context<'_>,
        buffer: ReadBufCursor<'_>,
    ) -> Poll<io::Result<()>> {
        let outcome = Pin::new(&mut self.stream).poll_read(cx, buffer);
        self.half_read |= matches!(outcome, Poll::Ready(Ok(())));
        outcome
    }
}

impl Write for Wire {
    fn poll_write(mut self: Pin<&mut Self>, cx: &mut Context<'_>, bytes: &[u8]) -> Poll<io::Result<usize>> {
        self.half_read = false;
        if self.substitute.is_none()
            && let Some(status) = bare_refusal(bytes)
        {
            self.substitute = Some(Substitute { bytes: raw_problem(status), sent: 0, replaces: bytes.len() });
        }
        while let Some(mut substitute) = self.substitute.take() {
            let Some(rest) = substitute.bytes.get(substitute.sent..).filter(|rest| !rest.is_empty()) else {
                return Poll::Ready(Ok(substitute.replaces));
            };
            let outcome = self.send(cx, rest);
            if let Poll::Ready(Ok(sent)) = outcome {
                substitute.sent += sent;
            }
            self.substitute = Some(substitute);
            if !matches!(outcome, Poll::Ready(Ok(_))) {
                return outcome;
            }
        }
        self.send(cx, bytes)
    }

    fn poll_flush(mut self: Pin<&mut Self>, cx: &mut Context<'_>) -> Poll<io::Result<()>> {
        Pin::new(&mut self.stream).poll_flush(cx)
    }

    fn poll_shutdown(mut self: Pin<&mut Self>, cx: &mut Context<'_>) -> Poll<io::Result<()>> {
        Pin::new(&mut self.stream).poll_shutdown(cx)
    }
}

impl Drop for Wire {
    fn drop(&mut self) {
        if self.half_read && self.timed_out.0.load(Ordering::Relaxed) {
            // Whoever is too slow to send may also be gone; then there is nobody to tell.
            let _ = self.stream.inner().try_write(&raw_problem(StatusCode::REQUEST_TIMEOUT));
        }
    }
}

/// The status of an answer that the HTTP library made by itself: it is the only one without a
/// request id, and it has no body. Such an answer is written in one piece.
fn bare_refusal(bytes: &[u8]) -> Option<StatusCode> {
    let head = bytes.strip_prefix(b"HTTP/1.1 ").or_else(|| bytes.strip_prefix(b"HTTP/1.0 "))?;
    let status = StatusCode::from_bytes(head.get(..3)?).ok().filter(|s| s.is_client_error())?;
    let text = std::str::from_utf8(head.strip_suffix(b"\r\n\r\n")?).ok()?;
    let ours = text.split("\r\n").any(|line| {
        line.split_once(':').is_some_and(|(name, _)| name.eq_ignore_ascii_case(REQUEST_ID.as_str()))
    });
    (!ours).then_some(status)
}

/// A whole HTTP/1.1 answer with a problem, after which the connection closes.
pub fn raw_problem(status: StatusCode) -> Vec<u8> {
    let id = RequestId::fresh();
    let mut problem = Problem::from_status(status);
    problem.request_id = id.0.as_str().into();
    let body = problem.to_json();
    let retry = if status == StatusCode::SERVICE_UNAVAILABLE { "retry-after: 1\r\n" } else { "" };
    let mut bytes = format!(
        "HTTP/1.1 {status}\r\ncontent-type: {}\r\ncontent-length: {}\r\nconnection: close\r\n{REQUEST_ID}: {}\r\n{retry}\r\n",
        super::problem::MEDIA_TYPE,
        body.len(),
        id.0,
    )
    .into_bytes();
    bytes.extend_from_slice(&body);
    bytes
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_refusals_of_the_library_are_recognised() {
        let bare =
            b"HTTP/1.1 431 Request Header Fields Too Large\r\nconnection: close\r\ncontent-length: 0\r\n\r\n";
        assert_eq!(bare_refusal(bare), Some(StatusCode::REQUEST_HEADER_FIELDS_TOO_LARGE));
        let ours = b"HTTP/1.1 404 Not Found\r\nX-Request-Id: 1\r\ncontent-length: 300\r\n\r\n";
        assert_eq!(bare_refusal(ours), None);
        assert_eq!(bare_refusal(b"HTTP/1.1 204 No Content\r\n\r\n"), None);
        assert_eq!(bare_refusal(b"HTTP/1.1 400 Bad Request\r\n\r\n{\"a\": 1}"), None);
        assert_eq!(bare_refusal(b"HTTP/1.1 4"), None);
    }
}
