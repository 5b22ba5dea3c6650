//! parallel-flow-outlet-cross

use super::terminal;
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, family};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};
use crate::process::Arrangement;

/// In parallel flow the heated side leaves hotter than the side that heats it.
///
/// Both sides run the same way, so their temperatures approach each other and can at best be equal at
/// the outlet; nor can they be crossed at the inlet. The end with the smaller approach decides.
pub struct ParallelFlowOutletCross;

static INFO: RuleInfo = RuleInfo {
    name: "parallel-flow-outlet-cross",
    title: "Temperature cross in parallel flow",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Interior,
    inequality: "Th,out − Tc,out ≥ 0 and Th,in − Tc,in ≥ 0",
    applies_to: "exchangers in parallel flow with two sides of one inlet and one outlet each",
    needs: "the four end temperatures",
    typical_cause: "an arrangement that is not parallel, swapped readings",
    source: "second law, statement of Clausius",
    breaking: Case::Description(
        r#"{"components": {"exchanger": {"kind": "heat_exchanger", "arrangement": "parallel",
              "sides": [{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["cold-in"], "out": ["cold-out"]}]}},
            "flows": {
              "hot-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "90.0 degC", "mass_flow": "10 kg/s"},
              "hot-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "60.0 degC", "mass_flow": "10 kg/s"},
              "cold-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "15.0 degC"},
              "cold-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "65.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"exchanger": {"kind": "heat_exchanger", "arrangement": "parallel",
              "sides": [{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["cold-in"], "out": ["cold-out"]}]}},
            "flows": {
              "hot-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "90.0 degC", "mass_flow": "10 kg/s"},
              "hot-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "60.0 degC", "mass_flow": "10 kg/s"},
              "cold-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "15.0 degC"},
              "cold-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "55.0 degC"}}}"#,
    ),
};

impl Rule for ParallelFlowOutletCross {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        terminal::margins(|a| a == Arrangement::Parallel, me, family(&INFO), evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        terminal::explain(evaluation, margin, decision)
    }
}
