//! Whether a connection is in use, so that one that is not can be closed.

use std::sync::Arc;
use std::sync::Mutex;
use std::sync::PoisonError;
use std::time::{Duration, Instant};

/// The calls of one connection.
#[derive(Clone)]
pub struct Activity(Arc<Mutex<State>>);

struct State {
    calls: usize,
    since: Instant,
}

/// One call under way; dropped when its answer has been sent.
pub struct InFlight(Activity);

impl Activity {
    /// A connection without a call, from now on.
    pub fn new() -> Activity {
        Activity(Arc::new(Mutex::new(State { calls: 0, since: Instant::now() })))
    }

    fn with<T>(&self, act: impl FnOnce(&mut State) -> T) -> T {
        act(&mut self.0.lock().unwrap_or_else(PoisonError::into_inner))
    }

    /// A call begins.
    pub fn begin(&self) -> InFlight {
        self.with(|state| state.calls += 1);
        InFlight(self.clone())
    }

    /// How long the connection may stay as it is if it is granted `idle` without a call; `None`
    /// while a call is under way.
    pub fn remaining(&self, idle: Duration) -> Option<Duration> {
        self.with(|state| (state.calls == 0).then(|| idle.saturating_sub(state.since.elapsed())))
    }
}

impl Default for Activity {
    fn default() -> Self {
        Activity::new()
    }
}

impl Drop for InFlight {
    fn drop(&mut self) {
        self.0.with(|state| {
            state.calls = state.calls.saturating_sub(1);
            state.since = Instant::now();
        });
    }
}
