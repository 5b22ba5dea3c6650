//! A client of one call, for `sigmadot demo` and `sigmadot health`: it speaks real HTTP to the
//! service and has a time limit.

use std::io;
use std::net::SocketAddr;
use std::time::Duration;

use axum::body::{Body, Bytes};
use axum::http::{Request, StatusCode};
use http_body_util::BodyExt;
use hyper::client::conn::http1;
use hyper_util::rt::TokioIo;
use tokio::net::TcpStream;
use tokio::time::timeout;

/// Sends one request to `address` and reads the whole answer, within `limit`.
pub async fn call(
    address: SocketAddr,
    request: Request<Body>,
    limit: Duration,
) -> io::Result<(StatusCode, Bytes)> {
    let exchange = async {
        let stream = TcpStream::connect(address).await?;
        let (mut sender, connection) =
            http1::handshake(TokioIo::new(stream)).await.map_err(io::Error::other)?;
        // A failure of the connection also ends the call, which reports it.
        let driver = tokio::spawn(connection);
        let response = sender.send_request(request).await.map_err(io::Error::other)?;
        let status = response.status();
        let body = response.into_body().collect().await.map_err(io::Error::other)?.to_bytes();
        driver.abort();
        Ok((status, body))
    };
    timeout(limit, exchange).await.unwrap_or_else(|_| {
        Err(io::Error::new(io::ErrorKind::TimedOut, "the service did not answer in time"))
    })
}
