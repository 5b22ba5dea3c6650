//! engine-beats-carnot

use super::carnot::{self, Machine};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};

/// A heat engine turns more of its heat into work than a reversible one could.
///
/// The temperatures are entropic means, so a source that cools down or a stream that passes through
/// is judged by what it really offers. A stated efficiency is judged as well, and needs temperatures
/// only. A claim whose rounding interval holds the limit is at the limit.
pub struct EngineBeatsCarnot;

static INFO: RuleInfo = RuleInfo {
    name: "engine-beats-carnot",
    title: "Engine against Carnot",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "η ≤ 1 − Tc/Th (entropic mean temperatures)",
    applies_to: "heat engines, and efficiencies claimed for them",
    needs: "temperatures of the heats; heat in and work, or a claim",
    typical_cause: "degrees Celsius used for kelvins, mixed heating values, a source temperature misquoted",
    source: "second law, theorem of Carnot; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 5.9 to 5.10",
    breaking: Case::Description(
        r#"{"components": {"engine": {"kind": "heat_engine"}},
            "flows": {
              "hot": {"kind": "heat", "to": "engine", "rate": "100 kW", "temperature": "500.0 degC"},
              "cold": {"kind": "heat", "from": "engine", "rate": "35 kW", "temperature": "30.0 degC"},
              "shaft": {"kind": "work", "from": "engine", "form": "shaft", "power": "65 kW"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"engine": {"kind": "heat_engine"}},
            "flows": {
              "hot": {"kind": "heat", "to": "engine", "rate": "100 kW", "temperature": "500.0 degC"},
              "cold": {"kind": "heat", "from": "engine", "rate": "58 kW", "temperature": "30.0 degC"},
              "shaft": {"kind": "work", "from": "engine", "form": "shaft", "power": "42 kW"}}}"#,
    ),
};

impl Rule for EngineBeatsCarnot {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        carnot::margins(Machine::Engine, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        carnot::explain(Machine::Engine, evaluation, margin, decision)
    }
}
