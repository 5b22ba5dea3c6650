//! Listening, connections, and stopping. Every wait in here has an end.

use std::io;
use std::net::SocketAddr;
use std::pin::pin;
use std::sync::Arc;
use std::time::Duration;

use axum::Router;
use axum::body::Body;
use axum::http::{Request, StatusCode};
use hyper::service::service_fn;
use hyper_util::rt::{TokioExecutor, TokioTimer};
use hyper_util::server::conn::auto;
use serde_json::Value;
use tokio::net::{TcpListener, TcpStream};
use tokio::sync::{Semaphore, watch};
use tokio::time::{sleep, timeout};

use super::activity::Activity;
use super::edge;
use super::engine::Engine;
use super::limits::PublishedLimits;
use super::log::Log;
use super::routes;
use super::service::Service;
use super::wire::{TimedOut, Wire, raw_problem};

/// The least that the HTTP library takes as its buffer.
const LEAST_HEAD_BYTES: usize = 8 << 10;
/// How long a connection whose time is up may take to say goodbye.
const GOODBYE: Duration = Duration::from_secs(1);
/// How long the listener rests when the system has no file descriptors left.
const ACCEPT_REST: Duration = Duration::from_millis(50);
/// Streams that a peer may reset before they are accepted, and those that it may make us reset:
/// beyond either the connection is closed (RUSTSEC-2024-0003).
const RESET_STREAMS: usize = 20;

/// Where and how to serve.
pub struct Settings {
    /// The address to listen on; port 0 takes a free one.
    pub address: SocketAddr,
    /// Whether an address other than loopback is allowed.
    pub allow_remote: bool,
    /// What is granted.
    pub limits: PublishedLimits,
    /// Where to log.
    pub log: Log,
}

/// A service that listens but does not answer yet.
pub struct Bound {
    listener: TcpListener,
    /// The address with its real port.
    pub address: SocketAddr,
    service: Arc<Service>,
    log: Log,
}

/// Opens the listener and starts the workers. Without `allow_remote`, refuses any address that
/// other machines can reach.
pub async fn bind(settings: Settings, engine: Arc<dyn Engine>) -> io::Result<Bound> {
    let remote = !settings.address.ip().is_loopback();
    if remote && !settings.allow_remote {
        let message = format!(
            "{} can be reached by other machines; pass --allow-remote if that is wanted (the service has no \
             authentication or encryption of its own)",
            settings.address
        );
        return Err(io::Error::new(io::ErrorKind::PermissionDenied, message));
    }
    let listener = TcpListener::bind(settings.address).await?;
    let address = listener.local_addr()?;
    let service = Arc::new(Service::new(engine, settings.limits)?);
    settings.log.event(
        "info",
        "listening",
        &[
            ("address", Value::from(address.to_string())),
            ("reachable_by_other_machines", Value::from(remote)),
            ("version", Value::from(env!("CARGO_PKG_VERSION"))),
            ("workers", Value::from(service.pool.workers())),
        ],
    );
    Ok(Bound { listener, address, service, log: settings.log })
}

impl Bound {
    /// Answers until `stop` is ready, then lets calls in flight finish, at most for the drain time.
    pub async fn serve(self, stop: impl Future<Output = ()>) {
        let Bound { listener, service, log, .. } = self;
        let router = routes::router(&service);
        let limits = &service.limits.service;
        let capacity = u32::try_from(limits.connections.max(1)).unwrap_or(u32::MAX);
        let places = Arc::new(Semaphore::new(capacity as usize));
        let (stopping, _) = watch::channel(false);
        let shared = Arc::new(Shared {
            builder: builder(&service),
            router,
            log: log.clone(),
            service: Arc::clone(&service),
        });
        let mut stop = pin!(stop);
        loop {
            let accepted = tokio::select! {
                () = &mut stop => break,
                accepted = listener.accept() => accepted,
            };
            let stream = match accepted {
                Ok((stream, _)) => stream,
                Err(error) => {
                    log.event("warn", "accept failed", &[("error", Value::from(error.to_string()))]);
                    sleep(ACCEPT_REST).await;
                    continue;
                }
            };
            let Ok(place) = Arc::clone(&places).try_acquire_owned() else {
                // Nothing waits for this client: if its buffer is full, it learns nothing.
                let _ = stream.try_write(&raw_problem(StatusCode::SERVICE_UNAVAILABLE));
                continue;
            };
            let (shared, stopping) = (Arc::clone(&shared), stopping.subscribe());
            tokio::spawn(async move {
                shared.connection(stream, stopping).await;
                drop(place);
            });
        }
        drop(listener);
        service.begin_drain();
        log.event("info", "stopping", &[]);
        stopping.send_replace(true);
        let drained = timeout(Duration::from_millis(limits.drain_ms), places.acquire_many(capacity)).await;
        log.event("info", "stopped", &[("drained", Value::from(drained.is_ok()))]);
    }
}

/// Ready once the service is told to stop, or is gone.
async fn told_to_stop(stopping: &mut watch::Receiver<bool>) {
    let _ = stopping.wait_for(|stop| *stop).await;
}

fn builder(service: &Service) -> auto::Builder<TokioExecutor> {
    let limits = &service.limits.service;
    let mut builder = auto::Builder::new(TokioExecutor::new());
    builder
        .http1()
        .timer(TokioTimer::new())
        .header_read_timeout(Duration::from_millis(limits.head_timeout_ms))
        .max_buf_size(limits.head_bytes.max(LEAST_HEAD_BYTES))
        .http2()
        .timer(TokioTimer::new())
        .max_concurrent_streams(limits.streams)
        .max_pending_accept_reset_streams(RESET_STREAMS)
        .max_local_error_reset_streams(RESET_STREAMS)
        .max_header_list_size(u32::try_from(limits.head_bytes).unwrap_or(u32::MAX))
        .keep_alive_interval(Duration::from_millis(limits.head_timeout_ms))
        .keep_alive_timeout(Duration::from_millis(limits.head_timeout_ms));
    builder
}

/// What the connections share.
struct Shared {
    builder: auto::Builder<TokioExecutor>,
    router: Router,
    log: Log,
    service: Arc<Service>,
}

impl Shared {
    async fn connection(&self, stream: TcpStream, mut stopping: watch::Receiver<bool>) {
        let limits = &self.service.limits.service;
        let first_byte = Duration::from_millis(limits.first_byte_timeout_ms);
        let opened = tokio::select! {
            opened = timeout(first_byte, stream.readable()) => opened,
            () = told_to_stop(&mut stopping) => return,
        };
        if !matches!(opened, Ok(Ok(()))) {
            return;
        }
        // Answers are written whole; waiting to fill packets would only delay them.
        let _ = stream.set_nodelay(true);
        let timed_out = TimedOut::default();
        let wire = Wire::new(stream, Duration::from_millis(limits.write_timeout_ms), timed_out.clone());
        let activity = Activity::new();
        let answer = service_fn(|request: Request<hyper::body::Incoming>| {
            let (router, log, call) = (self.router.clone(), self.log.clone(), activity.begin());
            async move {
                Ok::<_, std::convert::Infallible>(
                    edge::answer(router, log, call, request.map(Body::new)).await,
                )
            }
        });
        let mut connection = Box::pin(self.builder.serve_connection(wire, answer));
        let head = Duration::from_millis(limits.head_timeout_ms);
        // The library's own time-out comes first where it applies; this one also covers what it
        // does not: the guess at the protocol, and an HTTP/2 connection without calls.
        let idle = head + GOODBYE;
        let mut goodbye = false;
        loop {
            let left = activity.remaining(idle);
            let wait = left.map_or(head, |left| if goodbye { GOODBYE } else { left });
            let outcome = tokio::select! {
                outcome = connection.as_mut() => outcome,
                () = sleep(wait) => {
                    match activity.remaining(idle) {
                        Some(_) if goodbye => {
                            timed_out.raise();
                            return;
                        }
                        Some(left) if left.is_zero() => {
                            connection.as_mut().graceful_shutdown();
                            goodbye = true;
                        }
                        _ => {}
                    }
                    continue;
                }
                () = told_to_stop(&mut stopping), if !goodbye => {
                    // Calls in flight finish; the drain time is the end of it.
                    connection.as_mut().graceful_shutdown();
                    let _ = connection.as_mut().await;
                    return;
                }
            };
            let slow = outcome.err().and_then(|error| error.downcast::<hyper::Error>().ok());
            if slow.is_some_and(|error| error.is_timeout()) {
                timed_out.raise();
            }
            return;
        }
    }
}
