//! The one place that composes the phases.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use crate::diagnostic::{Code, Diagnostic};
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

fn parse(body: &[u8], limits: &Limits, cancel: &Cancel) -> Result<serde_json::Value, Failure> {
    if cancel.is_cancelled() {
        return Err(Failure::Cancelled);
    }
    let mut depth = 0_usize;
    for byte in body {
        match byte {
            b'{' | b'[' => depth += 1,
            b'}' | b']' => depth = depth.saturating_sub(1),
            _ => {}
        }
        if depth > limits.depth {
            let fault = Diagnostic::new(Code::TooDeep, "", "nested too deep");
            return Err(Failure::Rejected(vec![fault]));
        }
    }
    let value: serde_json::Value = serde_json::from_slice(body)
        .map_err(|e| Failure::Rejected(vec![Diagnostic::new(Code::NotJson, "", e.to_string())]))?;
    if value.is_object() {
        Ok(value)
    } else {
        Err(Failure::Rejected(vec![Diagnostic::new(Code::WrongType, "", "an object is wanted")]))
    }
}

/// One description in, one report out.
pub fn check_bytes(body: &[u8], limits: &Limits, cancel: &Cancel) -> Result<Report, Failure> {
    let value = parse(body, limits, cancel)?;
    if value.get("flows").is_none() {
        return Err(Failure::Rejected(vec![Diagnostic::new(
            Code::MissingField,
            "/flows",
            "flows is missing",
        )]));
    }
    Ok(Report { name: value.get("name").map(ToString::to_string).unwrap_or_default() })
}

/// One state in, its properties out, as JSON.
pub fn state_bytes(
    body: &[u8],
    _units: UnitSystem,
    limits: &Limits,
    cancel: &Cancel,
) -> Result<Vec<u8>, Failure> {
    parse(body, limits, cancel).map(|v| v.to_string().into_bytes())
}

/// One claim in, its judgement out, as JSON.
pub fn claim_bytes(
    body: &[u8],
    _units: UnitSystem,
    limits: &Limits,
    cancel: &Cancel,
) -> Result<Vec<u8>, Failure> {
    parse(body, limits, cancel).map(|v| v.to_string().into_bytes())
}
