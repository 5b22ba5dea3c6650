//! The seam between HTTP and thermodynamics: three calls that take bytes and give an answer. Tests
//! put a slow or a broken engine in its place.

use crate::pipeline::{self, Cancel, Failure, Limits};
use crate::report::{Report, UnitSystem};

/// What the service asks of the core. Every call runs on a worker thread.
pub trait Engine: Send + Sync + 'static {
    /// Checks one description.
    fn check(&self, body: &[u8], limits: &Limits, cancel: &Cancel) -> Result<Report, Failure>;

    /// Gives one state with its properties, written as JSON.
    fn state(
        &self,
        body: &[u8],
        units: UnitSystem,
        limits: &Limits,
        cancel: &Cancel,
    ) -> Result<Vec<u8>, Failure>;

    /// Judges one claim; the answer is written as JSON.
    fn claim(
        &self,
        body: &[u8],
        units: UnitSystem,
        limits: &Limits,
        cancel: &Cancel,
    ) -> Result<Vec<u8>, Failure>;
}

/// The library itself.
#[derive(Clone, Copy, Debug, Default)]
pub struct Core;

impl Engine for Core {
    fn check(&self, body: &[u8], limits: &Limits, cancel: &Cancel) -> Result<Report, Failure> {
        pipeline::check_bytes(body, limits, cancel)
    }

    fn state(
        &self,
        body: &[u8],
        units: UnitSystem,
        limits: &Limits,
        cancel: &Cancel,
    ) -> Result<Vec<u8>, Failure> {
        pipeline::state_bytes(body, units, limits, cancel)
    }

    fn claim(
        &self,
        body: &[u8],
        units: UnitSystem,
        limits: &Limits,
        cancel: &Cancel,
    ) -> Result<Vec<u8>, Failure> {
        pipeline::claim_bytes(body, units, limits, cancel)
    }
}
