//! Request bodies: media type, coding, size and time are settled before a handler sees a byte.

use std::io::{self, Write};
use std::time::Duration;

use axum::body::{Body, Bytes};
use axum::http::header::{CONTENT_ENCODING, CONTENT_LENGTH, CONTENT_TYPE, EXPECT};
use axum::http::request::Parts;
use flate2::write::MultiGzDecoder;
use http_body_util::BodyExt;
use tokio::task::consume_budget;
use tokio::time::{Instant, timeout, timeout_at};

use super::negotiate::essence;
use super::problem::Problem;
use crate::diagnostic::Code;

/// How much of an oversized body is read and thrown away before the answer, so that a client that
/// sends everything first gets to read why it was refused instead of a broken connection.
const DISCARDED_BYTES: u64 = 16 << 20;
/// How long that may take.
const DISCARD_TIME: Duration = Duration::from_secs(2);
/// How much compressed input is expanded at once: deflate grows at most about a thousandfold.
const GZIP_PIECE: usize = 1 << 10;

/// Refuses a body of a type that is not among `taken`; an absent type is taken as the first. A
/// type `…+json` counts as `application/json`.
pub fn check_media_type(parts: &Parts, taken: &[&'static str]) -> Result<(), Problem> {
    let Some(header) = parts.headers.get(CONTENT_TYPE) else { return Ok(()) };
    let found = essence(&String::from_utf8_lossy(header.as_bytes()));
    let is_json = found.starts_with("application/") && found.ends_with("+json");
    if taken.contains(&found.as_str()) || (is_json && taken.contains(&"application/json")) {
        return Ok(());
    }
    let detail = format!("the media type {found:?} is not taken here; send {}", taken.join(" or "));
    Err(Problem::new(Code::UnsupportedMediaType, detail))
}

/// A body as it arrives, decompressed.
pub struct Incoming {
    body: Body,
    decoder: Option<MultiGzDecoder<Vec<u8>>>,
    waiting: Bytes,
    finished: bool,
}

impl Incoming {
    /// Takes the body over; content codings other than gzip are refused.
    pub fn new(parts: &Parts, body: Body) -> Result<Incoming, Problem> {
        let mut codings = parts.headers.get_all(CONTENT_ENCODING).iter();
        let coding = codings.next().map(|c| String::from_utf8_lossy(c.as_bytes()).to_ascii_lowercase());
        let decoder = match coding.as_deref().map(str::trim) {
            None | Some("identity" | "") => None,
            Some("gzip" | "x-gzip") if codings.next().is_none() => Some(MultiGzDecoder::new(Vec::new())),
            Some(other) => {
                let detail = format!("the content coding {other:?} is not taken here; send gzip or none");
                return Err(Problem::new(Code::UnsupportedMediaType, detail));
            }
        };
        Ok(Incoming { body, decoder, waiting: Bytes::new(), finished: false })
    }

    /// The next piece, at most about 1 MiB; `None` at the end.
    pub async fn next(&mut self, pause: Duration) -> Result<Option<Bytes>, Problem> {
        loop {
            if self.finished {
                return Ok(None);
            }
            if self.waiting.is_empty() {
                self.waiting = match timeout(pause, self.body.frame()).await {
                    Err(_) => {
                        return Err(Problem::new(Code::RequestTimeout, "the body did not arrive in time"));
                    }
                    Ok(Some(Ok(frame))) => frame.into_data().unwrap_or_default(),
                    Ok(Some(Err(_))) => return Err(Problem::new(Code::NotJson, "the body broke off")),
                    Ok(None) => {
                        self.finished = true;
                        return self.last();
                    }
                };
            }
            let Some(decoder) = &mut self.decoder else { return Ok(Some(std::mem::take(&mut self.waiting))) };
            let piece = self.waiting.split_to(self.waiting.len().min(GZIP_PIECE));
            decoder.write_all(&piece).map_err(bad_gzip)?;
            // A stream of many empty members is dear to expand and gives nothing: others get their turn.
            consume_budget().await;
            let plain = std::mem::take(decoder.get_mut());
            if !plain.is_empty() {
                return Ok(Some(Bytes::from(plain)));
            }
        }
    }

    /// What the decoder still holds once the input has ended.
    fn last(&mut self) -> Result<Option<Bytes>, Problem> {
        let Some(decoder) = self.decoder.take() else { return Ok(None) };
        let plain = decoder.finish().map_err(bad_gzip)?;
        Ok((!plain.is_empty()).then(|| Bytes::from(plain)))
    }

    async fn discard(&mut self, already: u64) {
        let deadline = Instant::now() + DISCARD_TIME;
        let mut seen = already;
        while seen < DISCARDED_BYTES {
            match timeout_at(deadline, self.body.frame()).await {
                Ok(Some(Ok(frame))) => seen += frame.data_ref().map_or(0, |d| d.len() as u64),
                _ => return,
            }
        }
    }
}

fn bad_gzip(_: io::Error) -> Problem {
    Problem::new(Code::NotJson, "the body is not a sound gzip stream")
}

/// Reads a whole body of at most `cap` bytes after decompression, within `time`.
pub async fn read(parts: &Parts, body: Body, cap: usize, time: Duration) -> Result<Bytes, Problem> {
    let too_large = || {
        Problem::new(Code::BodyTooLarge, format!("the body is larger than {cap} bytes after decompression"))
    };
    let mut incoming = Incoming::new(parts, body)?;
    let announced = parts.headers.get(CONTENT_LENGTH).and_then(|l| l.to_str().ok()?.parse::<u64>().ok());
    if announced.is_some_and(|length| length > cap as u64) {
        // A client that asked first has sent nothing yet and reads the refusal at once.
        if !parts.headers.contains_key(EXPECT) {
            incoming.discard(0).await;
        }
        return Err(too_large());
    }
    let deadline = Instant::now() + time;
    let mut whole: Option<Bytes> = None;
    let mut joined: Vec<u8> = Vec::new();
    while let Some(piece) = incoming.next(deadline.saturating_duration_since(Instant::now())).await? {
        let length = whole.as_ref().map_or(0, Bytes::len) + joined.len() + piece.len();
        if length > cap {
            incoming.discard(length as u64).await;
            return Err(too_large());
        }
        // Most bodies arrive in one piece, which then needs no copy.
        match whole.take() {
            None if joined.is_empty() => whole = Some(piece),
            first => {
                joined.extend_from_slice(&first.unwrap_or_default());
                joined.extend_from_slice(&piece);
            }
        }
    }
    Ok(whole.unwrap_or_else(|| Bytes::from(joined)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use axum::http::Request;
    use flate2::{Compression, write::GzEncoder};

    fn gzip(plain: &[u8]) -> Vec<u8> {
        let mut encoder = GzEncoder::new(Vec::new(), Compression::best());
        encoder.write_all(plain).unwrap();
        encoder.finish().unwrap()
    }

    fn read_all(coding: Option<&str>, body: Vec<u8>, cap: usize) -> Result<Bytes, Problem> {
        let mut request = Request::builder();
        if let Some(coding) = coding {
            request = request.header(CONTENT_ENCODING, coding);
        }
        let (parts, body) = request.body(Body::from(body)).unwrap().into_parts();
        let runtime = tokio::runtime::Builder::new_current_thread().enable_time().build().unwrap();
        runtime.block_on(read(&parts, body, cap, Duration::from_secs(5)))
    }

    #[test]
    fn gzip_is_undone_and_counted_after_it() {
        let plain = vec![b'x'; 100_000];
        assert_eq!(read_all(Some("gzip"), gzip(&plain), 100_000).unwrap(), plain);
        assert_eq!(read_all(Some("gzip"), gzip(&plain), 99_999).unwrap_err().status, 413);
        assert_eq!(read_all(Some("br"), plain.clone(), 100_000).unwrap_err().status, 415);
        assert_eq!(read_all(None, plain, 99_999).unwrap_err().status, 413);
    }

    #[test]
    fn a_broken_stream_is_refused() {
        let mut cut = gzip(b"{\"name\": \"a plant\"}");
        cut.truncate(cut.len() - 6);
        assert_eq!(read_all(Some("gzip"), cut, 1000).unwrap_err().status, 400);
        assert_eq!(read_all(Some("gzip"), b"not gzip at all".to_vec(), 1000).unwrap_err().status, 400);
    }
}
