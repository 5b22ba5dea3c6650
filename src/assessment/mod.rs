//! What the library returns: a finished assessment, in SI units, from which every report is drawn.

mod findings;
mod judgement;

pub use crate::balance::Exergies;
pub use findings::{explain, pointer, reason};
pub use judgement::judge;

use crate::balance::Evaluation;
use crate::evidence::Families;
use crate::model::{Decision, Margin, Scope, Verdict, View};
use crate::process::Var;
use crate::rules::{self, Authority, Explanation, Severity};

/// The verdict of a component, a group, the plant or the whole, over tests of law.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Overall {
    /// No test could be made.
    Unchecked,
    /// Every test that was made holds.
    Holds,
    /// At least one cannot be told from its limit.
    Undecided,
    /// At least one is likely violated.
    Suspect,
    /// At least one is violated.
    Violated,
}

impl Overall {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            Overall::Unchecked => "unchecked",
            Overall::Holds => "holds",
            Overall::Undecided => "undecided",
            Overall::Suspect => "suspect",
            Overall::Violated => "violated",
        }
    }

    const fn of(verdict: Verdict) -> Overall {
        match verdict {
            Verdict::Holds => Overall::Holds,
            Verdict::Undecided => Overall::Undecided,
            Verdict::Suspect => Overall::Suspect,
            Verdict::Violated => Overall::Violated,
        }
    }
}

/// Whether the data contradict each other.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DataVerdict {
    /// Every test of the data that was made passed.
    Consistent,
    /// At least one contradiction.
    Contradictory,
    /// No test of the data could be made.
    Unchecked,
}

impl DataVerdict {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            DataVerdict::Consistent => "consistent",
            DataVerdict::Contradictory => "contradictory",
            DataVerdict::Unchecked => "unchecked",
        }
    }
}

/// One defect.
#[derive(Clone, Debug)]
pub struct Finding {
    /// Index of the rule in [`rules::ALL`].
    pub rule: usize,
    /// What it is about.
    pub scope: Scope,
    /// Severity, which may be milder than the rule's.
    pub severity: Severity,
    /// JSON Pointer into the description.
    pub pointer: String,
    /// The decision behind it.
    pub decision: Decision,
    /// The rule's explanation.
    pub explanation: Explanation,
    /// Other rules that see the same defect.
    pub covers: Vec<&'static str>,
    /// What the finding is conditional on.
    pub conditional_on: Vec<&'static str>,
}

/// A test that was not made.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Unchecked {
    /// JSON Pointer into the description.
    pub pointer: String,
    /// The rule or balance.
    pub what: &'static str,
    /// Why not: `unknown`, `spent-on`, `state`, `missing` or `disabled`.
    pub reason: &'static str,
    /// The reason in a sentence.
    pub detail: String,
    /// What would make it possible.
    pub would_need: String,
}

/// Counts of decisions over tests of law.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Counts {
    /// Violated tests.
    pub violated: usize,
    /// Suspect tests.
    pub suspect: usize,
    /// Undecided tests.
    pub undecided: usize,
    /// Tests that hold.
    pub holds: usize,
    /// Tests that could not be made.
    pub unchecked: usize,
}

/// What the evidence says: verdicts without words.
#[derive(Debug)]
pub struct Judgement {
    /// Verdict over tests of law.
    pub verdict: Overall,
    /// Whether every test of law that applies was made.
    pub complete: bool,
    /// Verdict over the data.
    pub data: DataVerdict,
    /// Counts over tests of law.
    pub counts: Counts,
    /// Families of tests.
    pub families: Families,
    /// Verdict of each component.
    pub components: Vec<(Overall, bool)>,
    /// Verdict of each group.
    pub groups: Vec<(Overall, bool)>,
    /// Verdict of the plant.
    pub plant: (Overall, bool),
    /// The decision on each margin; `None` where it is blocked.
    decisions: Vec<Option<Decision>>,
    /// The decision that a margin only sees from another side, where there is one.
    primaries: Vec<Option<Decision>>,
}

/// What was found, in words.
#[derive(Debug, Default)]
pub struct Findings {
    /// Law findings that are violated or suspect, worst first.
    pub violations: Vec<Finding>,
    /// Contradictions in the data, unusual practice, advice.
    pub warnings: Vec<Finding>,
    /// Law tests that cannot be told from their limit.
    pub undecided: Vec<Finding>,
    /// Tests that were not made.
    pub unchecked: Vec<Unchecked>,
}

/// Collects the margins of every rule that is switched on. Advice of practice belongs to a full report
/// only: without the exergy view the rules of practice are left out, as they decide nothing.
pub fn margins(evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
    let disabled = &evaluation.view.model.process.policy.disable;
    for (i, rule) in rules::ALL.iter().enumerate() {
        let info = rule.info();
        let advice = info.authority == Authority::Practice && evaluation.exergies.is_none();
        if !advice && !disabled.contains(&info.name) {
            rule.margins(i, evaluation, out);
        }
    }
}

/// Whether a figure was given, solved for or assumed; `unknown` where none of these could be done.
/// A given figure whose uncertainty alone was assumed is given.
pub fn origin(view: View<'_>, var: usize) -> &'static str {
    if !view.workspace.is_known(var) {
        return "unknown";
    }
    match &view.model.process.vars[var] {
        Var::Unknown { .. } => "solved",
        Var::Given(affine) if affine.terms.is_empty() => "assumed",
        Var::Given(_) => "given",
    }
}
