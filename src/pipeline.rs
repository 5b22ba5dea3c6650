//! The one place that composes the phases.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use crate::diagnostic::{Code, Diagnostic};
use crate::process;
use crate::report::{Report, UnitSystem};

/// How much a description may hold.
#[derive(Clone, Debug)]
pub struct Limits {
    /// Levels of nesting.
    pub depth: usize,
    /// Bytes in a member name.
    pub key_bytes: usize,
    /// Bytes in a string.
    pub text_bytes: usize,
    /// Components.
    pub components: usize,
    /// Flows.
    pub flows: usize,
    /// Species in a mixture.
    pub species: usize,
    /// Tags.
    pub tags: usize,
    /// Points of an exchanger's profile.
    pub profile_points: usize,
    /// Groups.
    pub groups: usize,
    /// Faults collected before reading stops.
    pub faults: usize,
}

impl Default for Limits {
    fn default() -> Self {
        Limits {
            depth: 32,
            key_bytes: 64,
            text_bytes: 1024,
            components: 200,
            flows: 500,
            species: 40,
            tags: 2000,
            profile_points: 200,
            groups: 64,
            faults: 100,
        }
    }
}

/// A flag that stops a check from outside.
#[derive(Clone, Debug, Default)]
pub struct Cancel(Arc<AtomicBool>);

impl Cancel {
    /// A flag that is not raised.
    pub fn new() -> Self {
        Cancel::default()
    }

    /// Raises the flag.
    pub fn cancel(&self) {
        self.0.store(true, Ordering::Relaxed);
    }

    /// Whether the flag is raised.
    pub fn is_cancelled(&self) -> bool {
        self.0.load(Ordering::Relaxed)
    }
}

/// Why there is no answer.
#[derive(Debug)]
pub enum Failure {
    /// The description has faults.
    Rejected(Vec<Diagnostic>),
    /// The flag was raised.
    Cancelled,
}

fn read_limits(limits: &Limits) -> process::ReadLimits {
    let mut read = process::ReadLimits::default();
    read.tree.depth = limits.depth;
    read.tree.key_bytes = limits.key_bytes;
    read.tree.string_bytes = limits.text_bytes;
    read.components = limits.components;
    read.flows = limits.flows;
    read.species = limits.species;
    read.groups = limits.groups;
    read
}

fn parse(body: &[u8], cancel: &Cancel) -> Result<serde_json::Value, Failure> {
    if cancel.is_cancelled() {
        return Err(Failure::Cancelled);
    }
    serde_json::from_slice(body)
        .map_err(|e| Failure::Rejected(vec![Diagnostic::new(Code::NotJson, "", e.to_string())]))
}

/// One description in, one report out.
pub fn check_bytes(body: &[u8], limits: &Limits, cancel: &Cancel) -> Result<Report, Failure> {
    if cancel.is_cancelled() {
        return Err(Failure::Cancelled);
    }
    process::read(body, &read_limits(limits)).map_err(Failure::Rejected)?;
    let value = parse(body, cancel)?;
    Ok(Report { name: value.get("name").map(ToString::to_string).unwrap_or_default() })
}

/// One state in, its properties out, as JSON.
pub fn state_bytes(body: &[u8], _: UnitSystem, _: &Limits, cancel: &Cancel) -> Result<Vec<u8>, Failure> {
    parse(body, cancel).map(|v| v.to_string().into_bytes())
}

/// One claim in, its judgement out, as JSON.
pub fn claim_bytes(body: &[u8], _: UnitSystem, _: &Limits, cancel: &Cancel) -> Result<Vec<u8>, Failure> {
    parse(body, cancel).map(|v| v.to_string().into_bytes())
}
