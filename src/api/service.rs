//! What every call shares: the engine, the workers, the limits; and how a call gets its work done.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::Duration;

use axum::body::Bytes;
use tokio::sync::oneshot;
use tokio::time::timeout;

use super::engine::Engine;
use super::limits::PublishedLimits;
use super::pool::{Full, Pool};
use super::problem::Problem;
use crate::diagnostic::Code;
use crate::pipeline::{Cancel, Failure};
use crate::process::ReadLimits;

/// The state of a running service.
pub struct Service {
    /// Who answers.
    pub engine: Arc<dyn Engine>,
    /// Who computes.
    pub pool: Pool,
    /// What is granted.
    pub limits: PublishedLimits,
    /// The limits on a description, as the core takes them.
    description: Arc<ReadLimits>,
    /// The OpenAPI document.
    pub openapi: Bytes,
    draining: AtomicBool,
}

/// Raises the flag when a caller is gone, so that nobody computes for nobody.
struct CancelOnDrop(Cancel);

impl Drop for CancelOnDrop {
    fn drop(&mut self) {
        self.0.cancel();
    }
}

/// Work that is queued or under way.
pub struct Ticket<T> {
    receiver: oneshot::Receiver<Result<T, Failure>>,
    cancel: CancelOnDrop,
}

impl<T> Ticket<T> {
    /// Waits for the work until the deadline; after it, or if the ticket is dropped, the work is
    /// cancelled.
    pub async fn wait(self, deadline: Duration) -> Result<T, Problem> {
        let Ticket { receiver, cancel } = self;
        let late = || {
            let detail = format!(
                "the check did not finish within {} s; ask for more with ?deadline=",
                deadline.as_secs_f64()
            );
            Problem::new(Code::DeadlineExceeded, detail)
        };
        let outcome = timeout(deadline, receiver).await;
        drop(cancel);
        match outcome {
            Err(_) | Ok(Ok(Err(Failure::Cancelled))) => Err(late()),
            Ok(Err(_)) => Err(Problem::new(Code::Internal, "the check failed; the fault is ours")),
            Ok(Ok(Err(Failure::Rejected(faults)))) => Err(Problem::rejected(faults)),
            Ok(Ok(Ok(answer))) => Ok(answer),
        }
    }
}

impl Service {
    /// A service over an engine. Fails if the threads cannot be started.
    pub fn new(engine: Arc<dyn Engine>, mut limits: PublishedLimits) -> std::io::Result<Service> {
        limits.service.workers = limits.service.resolved_workers();
        let pool = Pool::start(limits.service.workers, limits.service.queue)?;
        let description = Arc::new(ReadLimits::from(&limits.description));
        let openapi = Bytes::from(super::openapi::document_text());
        Ok(Service { engine, pool, limits, description, openapi, draining: AtomicBool::new(false) })
    }

    /// Runs work on a worker thread, or says at once that none is free.
    pub async fn run<T: Send + 'static>(
        &self,
        deadline: Duration,
        work: impl FnOnce(&dyn Engine, &ReadLimits, &Cancel) -> Result<T, Failure> + Send + 'static,
    ) -> Result<T, Problem> {
        let (job, cancel) = self.job(work);
        let receiver = self.pool.try_submit(job).map_err(overloaded)?;
        Ticket { receiver, cancel: CancelOnDrop(cancel) }.wait(deadline).await
    }

    /// Queues work of a stream, waiting for a place in the queue.
    pub async fn queue<T: Send + 'static>(
        &self,
        work: impl FnOnce(&dyn Engine, &ReadLimits, &Cancel) -> Result<T, Failure> + Send + 'static,
    ) -> Result<Ticket<T>, Problem> {
        let (job, cancel) = self.job(work);
        let receiver = self.pool.submit(job).await.map_err(overloaded)?;
        Ok(Ticket { receiver, cancel: CancelOnDrop(cancel) })
    }

    fn job<T, W>(&self, work: W) -> (impl FnOnce() -> Result<T, Failure> + use<T, W>, Cancel)
    where
        W: FnOnce(&dyn Engine, &ReadLimits, &Cancel) -> Result<T, Failure>,
    {
        let cancel = Cancel::new();
        let (engine, limits, flag) =
            (Arc::clone(&self.engine), Arc::clone(&self.description), cancel.clone());
        let job = move || {
            if flag.is_cancelled() { Err(Failure::Cancelled) } else { work(engine.as_ref(), &limits, &flag) }
        };
        (job, cancel)
    }

    /// Marks the service as stopping.
    pub fn begin_drain(&self) {
        self.draining.store(true, Ordering::Relaxed);
    }

    /// Whether the service is stopping.
    pub fn is_draining(&self) -> bool {
        self.draining.load(Ordering::Relaxed)
    }
}

fn overloaded(_: Full) -> Problem {
    Problem::new(Code::Overloaded, "all workers are busy and the queue is full; try again shortly")
}
