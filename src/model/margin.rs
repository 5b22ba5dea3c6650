//! Margins and decisions: what a rule measures and what the evidence says of it.

use super::{Blocked, Dual};

/// The set of tests among which the probability of a false alarm is shared.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Family {
    /// Tests of the second law.
    Entropy,
    /// Tests of mass, element and energy closure, and of redundant readings.
    Closure,
    /// Not part of a family.
    None,
}

impl Family {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            Family::Entropy => "entropy",
            Family::Closure => "closure",
            Family::None => "none",
        }
    }
}

/// What a margin is about.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Scope {
    /// A component.
    Component(usize),
    /// A declared group.
    Group(usize),
    /// The whole plant.
    Plant,
    /// A flow.
    Flow(usize),
    /// The description as a whole.
    Description,
}

/// What a margin must satisfy.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Test {
    /// The margin must not be negative.
    NonNegative,
    /// The margin must be zero; an allowance (same unit) is taken off its magnitude first.
    Zero {
        /// Part of the magnitude that is allowed without question.
        allowance: f64,
    },
}

/// One figure that a law, the data or practice bounds.
#[derive(Clone, Debug)]
pub struct Margin {
    /// Index of the rule in the catalogue.
    pub rule: usize,
    /// What it is about.
    pub scope: Scope,
    /// Its family.
    pub family: Family,
    /// What it must satisfy.
    pub test: Test,
    /// The figure with its gradient, or why it cannot be had.
    pub form: Result<Dual, Blocked>,
    /// Sum of the magnitudes that make the figure up: the scale of rounding.
    pub throughput: f64,
    /// JSON Pointer into the description, where it is more specific than the scope.
    pub pointer: Option<String>,
    /// A number of the rule's own (a side, an outlet, an element), for its explanation.
    pub detail: usize,
}

/// What the evidence says of one test.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Verdict {
    /// Lawful, distinguishable from the limit or exactly at it.
    Holds,
    /// Cannot be distinguished from the limit.
    Undecided,
    /// Likely but not surely violated.
    Suspect,
    /// Violated beyond the accepted probability of a false alarm.
    Violated,
}

impl Verdict {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            Verdict::Holds => "holds",
            Verdict::Undecided => "undecided",
            Verdict::Suspect => "suspect",
            Verdict::Violated => "violated",
        }
    }
}

/// The decision on one margin.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Decision {
    /// Verdict.
    pub verdict: Verdict,
    /// Identically reversible, or exactly balanced: nothing to test.
    pub at_limit: bool,
    /// The figure.
    pub value: f64,
    /// Its standard uncertainty.
    pub u: f64,
    /// value / u; infinite magnitudes are clamped to ±1e6.
    pub z: f64,
    /// Probability of a deviation at least this large if the truth were at the limit, after
    /// adjustment for the family (Holm).
    pub p_adjusted: f64,
    /// Probability that the true figure is negative (flat prior).
    pub probability_negative: f64,
    /// Smallest violation that would be found nine times in ten.
    pub detectable: f64,
}
