//! The collector of located faults.

use crate::diagnostic::{Code, Diagnostic};

/// How many faults one answer lists.
pub const FAULT_LIMIT: usize = 100;

/// Collects faults in the order in which they are found, up to [`FAULT_LIMIT`].
#[derive(Clone, Debug, Default)]
pub struct Faults {
    list: Vec<Diagnostic>,
    cut: bool,
}

impl Faults {
    /// An empty collector.
    pub fn new() -> Self {
        Faults::default()
    }

    /// Adds one fault, unless it is there already; beyond the limit it is dropped, and the list says
    /// so.
    pub fn push(&mut self, fault: Diagnostic) {
        if !self.stops() && !self.list.contains(&fault) {
            self.list.push(fault);
        }
    }

    /// Whether the limit is reached, for a walk that would now go on: the list then says that it
    /// may not be complete.
    pub fn stops(&mut self) -> bool {
        self.cut |= self.is_full();
        self.cut
    }

    /// Whether nothing was found.
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }

    /// Whether further faults are dropped.
    pub fn is_full(&self) -> bool {
        self.list.len() >= FAULT_LIMIT
    }

    /// The faults found so far.
    pub fn as_slice(&self) -> &[Diagnostic] {
        &self.list
    }

    /// The faults, closed by one that says so where the list was cut.
    pub fn into_vec(mut self) -> Vec<Diagnostic> {
        if self.cut {
            self.list.push(
                Diagnostic::new(
                    Code::LimitExceeded,
                    "",
                    format!("only the first {FAULT_LIMIT} faults are listed; there may be more"),
                )
                .hint("put these right and send the document again"),
            );
        }
        self.list
    }
}
