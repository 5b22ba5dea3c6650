//! expander-beats-isentropic

use super::machine::{self, Machine};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};

/// An adiabatic expander delivers more work than an isentropic one would.
///
/// Equivalently, the entropy of the fluid falls on its way through. Extractions divide the machine
/// into sections, and each is judged by itself: a sound total can hide an impossible section. A
/// stated isentropic efficiency is held against one.
pub struct ExpanderBeatsIsentropic;

static INFO: RuleInfo = RuleInfo {
    name: "expander-beats-isentropic",
    title: "Expander against the isentropic one",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "s after − s before ≥ 0 for each section, hence isentropic efficiency ≤ 1",
    applies_to: "adiabatic turbines with one inlet",
    needs: "pressure and a second property before and after",
    typical_cause: "wet exhaust read as dry, a gauge pressure read as absolute, heat loss",
    source: "second law; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 6.12",
    breaking: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "190.0 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "8.00 bar", "temperature": "225.0 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
};

impl Rule for ExpanderBeatsIsentropic {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        machine::margins(Machine::Expander, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        machine::explain(evaluation, margin, decision)
    }
}
