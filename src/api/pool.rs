//! The worker threads that do the arithmetic, apart from the threads that talk to the network, so
//! that a heavy check never delays a light answer. The queue is bounded: beyond it the caller is
//! told at once instead of waiting without end.

use std::collections::VecDeque;
use std::io;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::{Arc, Condvar, Mutex, MutexGuard, PoisonError};
use std::thread;

use tokio::sync::{OwnedSemaphorePermit, Semaphore, oneshot};

/// Bytes of stack a worker has; the reader of descriptions is recursive up to the depth limit.
const STACK_BYTES: usize = 4 << 20;

type Job = Box<dyn FnOnce() + Send>;

#[derive(Default)]
struct Queue {
    jobs: VecDeque<Job>,
    closed: bool,
}

#[derive(Default)]
struct Shared {
    queue: Mutex<Queue>,
    wake: Condvar,
}

impl Shared {
    /// A panic never happens while the lock is held, so a poisoned lock still guards a sound queue.
    fn lock(&self) -> MutexGuard<'_, Queue> {
        self.queue.lock().unwrap_or_else(PoisonError::into_inner)
    }

    fn push(&self, job: Job) {
        self.lock().jobs.push_back(job);
        self.wake.notify_one();
    }

    fn next(&self) -> Option<Job> {
        let mut queue = self.lock();
        loop {
            if queue.closed {
                return None;
            }
            if let Some(job) = queue.jobs.pop_front() {
                return Some(job);
            }
            queue = self.wake.wait(queue).unwrap_or_else(PoisonError::into_inner);
        }
    }
}

/// No place is left in the queue.
#[derive(Debug, PartialEq, Eq)]
pub struct Full;

/// A fixed number of threads over one bounded queue. Dropping it lets each worker finish the job
/// in hand, and drops the jobs that still wait.
pub struct Pool {
    shared: Arc<Shared>,
    places: Arc<Semaphore>,
    batch_places: Arc<Semaphore>,
    workers: usize,
}

impl Pool {
    /// Starts `workers` threads (at least one) over a queue of `places` jobs (at least two). Jobs
    /// of streams may take half of the places, so that single calls always find room beside them.
    pub fn start(workers: usize, places: usize) -> io::Result<Pool> {
        let workers = workers.max(1);
        let places = places.clamp(2, Semaphore::MAX_PERMITS);
        let shared = Arc::new(Shared::default());
        for index in 0..workers {
            let shared = Arc::clone(&shared);
            thread::Builder::new().name(format!("check-{index}")).stack_size(STACK_BYTES).spawn(
                move || {
                    while let Some(job) = shared.next() {
                        // The panic hook has already reported it; the caller sees its channel close.
                        let _ = catch_unwind(AssertUnwindSafe(job));
                    }
                },
            )?;
        }
        Ok(Pool {
            shared,
            places: Arc::new(Semaphore::new(places - places / 2)),
            batch_places: Arc::new(Semaphore::new(places / 2)),
            workers,
        })
    }

    /// How many threads work.
    pub fn workers(&self) -> usize {
        self.workers
    }

    /// Whether a single call would find no place now.
    pub fn is_full(&self) -> bool {
        self.places.available_permits() == 0
    }

    /// Queues a job, or says at once that there is no place. The receiver fails if the job panics.
    pub fn try_submit<T: Send + 'static>(
        &self,
        job: impl FnOnce() -> T + Send + 'static,
    ) -> Result<oneshot::Receiver<T>, Full> {
        let place = Arc::clone(&self.places).try_acquire_owned().map_err(|_| Full)?;
        Ok(self.enqueue(place, job))
    }

    /// Queues a job of a stream, waiting for a place.
    pub async fn submit<T: Send + 'static>(
        &self,
        job: impl FnOnce() -> T + Send + 'static,
    ) -> Result<oneshot::Receiver<T>, Full> {
        let place = Arc::clone(&self.batch_places).acquire_owned().await.map_err(|_| Full)?;
        Ok(self.enqueue(place, job))
    }

    fn enqueue<T: Send + 'static>(
        &self,
        place: OwnedSemaphorePermit,
        job: impl FnOnce() -> T + Send + 'static,
    ) -> oneshot::Receiver<T> {
        let (sender, receiver) = oneshot::channel();
        self.shared.push(Box::new(move || {
            // The place is in the queue, not on the worker: it is free as soon as work begins.
            drop(place);
            if !sender.is_closed() {
                let _ = sender.send(job());
            }
        }));
        receiver
    }
}

impl Drop for Pool {
    fn drop(&mut self) {
        let mut queue = self.shared.lock();
        queue.closed = true;
        queue.jobs.clear();
        drop(queue);
        self.shared.wake.notify_all();
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::sync::mpsc;

    #[test]
    fn a_panicking_job_closes_its_channel_and_the_worker_lives_on() {
        let pool = Pool::start(1, 4).unwrap();
        let broken = pool.try_submit(|| panic!("on purpose")).unwrap();
        assert!(broken.blocking_recv().is_err());
        let sound = pool.try_submit(|| 7).unwrap();
        assert_eq!(sound.blocking_recv(), Ok(7));
    }

    #[test]
    fn a_full_queue_says_so_and_frees_its_places() {
        let pool = Pool::start(1, 4).unwrap();
        let (started, has_started) = mpsc::channel();
        let (release, released) = mpsc::channel::<()>();
        let blocker = pool
            .try_submit(move || {
                started.send(()).unwrap();
                released.recv().unwrap();
            })
            .unwrap();
        has_started.recv().unwrap();
        let waiting: Vec<_> = (0..2).map(|n| pool.try_submit(move || n).unwrap()).collect();
        assert!(pool.is_full());
        assert_eq!(pool.try_submit(|| 0).unwrap_err(), Full);
        release.send(()).unwrap();
        assert!(blocker.blocking_recv().is_ok());
        for (n, receiver) in waiting.into_iter().enumerate() {
            assert_eq!(receiver.blocking_recv(), Ok(n));
        }
        assert!(pool.try_submit(|| 0).is_ok());
    }
}
