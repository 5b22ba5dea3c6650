//! The seam between HTTP and thermodynamics: calls that take bytes and give an answer. Tests put a
//! slow or a broken engine in its place.

use crate::claim::{self, ClaimReport};
use crate::pipeline::{self, Cancel, Failure};
use crate::process::ReadLimits;
use crate::quantity::UnitSystem;
use crate::report::{Report, StateReport};

/// What the service asks of the core. Every call runs on a worker thread.
pub trait Engine: Send + Sync + 'static {
    /// Checks one description.
    fn check(
        &self,
        body: &[u8],
        limits: &ReadLimits,
        units: UnitSystem,
        cancel: &Cancel,
    ) -> Result<Report, Failure>;

    /// Gives one state with its properties.
    fn state(
        &self,
        body: &[u8],
        limits: &ReadLimits,
        units: UnitSystem,
        cancel: &Cancel,
    ) -> Result<StateReport, Failure>;

    /// Judges a claim, from a JSON body.
    fn claim(
        &self,
        body: &[u8],
        limits: &ReadLimits,
        units: UnitSystem,
        cancel: &Cancel,
    ) -> Result<ClaimReport, Failure>;

    /// Judges a claim, from a kind and flat parameters.
    fn claim_query(
        &self,
        kind: &str,
        parameters: &[(String, String)],
        limits: &ReadLimits,
        units: UnitSystem,
        cancel: &Cancel,
    ) -> Result<ClaimReport, Failure>;
}

/// The library itself.
#[derive(Clone, Copy, Debug, Default)]
pub struct Core;

impl Engine for Core {
    fn check(
        &self,
        body: &[u8],
        limits: &ReadLimits,
        units: UnitSystem,
        cancel: &Cancel,
    ) -> Result<Report, Failure> {
        pipeline::check_bytes(body, limits, units, cancel)
    }

    fn state(
        &self,
        body: &[u8],
        limits: &ReadLimits,
        units: UnitSystem,
        cancel: &Cancel,
    ) -> Result<StateReport, Failure> {
        pipeline::state_bytes(body, limits, units, cancel)
    }

    fn claim(
        &self,
        body: &[u8],
        limits: &ReadLimits,
        units: UnitSystem,
        cancel: &Cancel,
    ) -> Result<ClaimReport, Failure> {
        claim::judge_bytes(body, &limits.tree, units, cancel)
    }

    fn claim_query(
        &self,
        kind: &str,
        parameters: &[(String, String)],
        limits: &ReadLimits,
        units: UnitSystem,
        cancel: &Cancel,
    ) -> Result<ClaimReport, Failure> {
        claim::judge_query(kind, parameters, &limits.tree, units, cancel)
    }
}
