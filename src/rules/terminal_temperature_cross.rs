//! terminal-temperature-cross

use super::terminal;
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, family};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};
use crate::process::Arrangement;

/// At an end of an exchanger the side that is heated is hotter than the side that heats it.
///
/// At either end heat would have to run uphill. What is heated is found from the enthalpies. For any
/// arrangement but parallel flow the ends of a counterflow exchanger are the kindest bound, so they
/// are used for all of these; the end with the smaller approach decides.
pub struct TerminalTemperatureCross;

static INFO: RuleInfo = RuleInfo {
    name: "terminal-temperature-cross",
    title: "Temperature cross at an end",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Interior,
    inequality: "Th,in − Tc,out ≥ 0 and Th,out − Tc,in ≥ 0",
    applies_to: "exchangers with two sides of one inlet and one outlet each, not in parallel flow",
    needs: "the four end temperatures",
    typical_cause: "swapped readings",
    source: "second law, statement of Clausius",
    breaking: Case::Description(
        r#"{"components": {"exchanger": {"kind": "heat_exchanger", "arrangement": "counterflow",
              "sides": [{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["cold-in"], "out": ["cold-out"]}]}},
            "flows": {
              "hot-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "90.0 degC", "mass_flow": "10 kg/s"},
              "hot-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "60.0 degC", "mass_flow": "10 kg/s"},
              "cold-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "15.0 degC"},
              "cold-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "95.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"exchanger": {"kind": "heat_exchanger", "arrangement": "counterflow",
              "sides": [{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["cold-in"], "out": ["cold-out"]}]}},
            "flows": {
              "hot-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "90.0 degC", "mass_flow": "10 kg/s"},
              "hot-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "60.0 degC", "mass_flow": "10 kg/s"},
              "cold-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "15.0 degC"},
              "cold-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "55.0 degC"}}}"#,
    ),
};

impl Rule for TerminalTemperatureCross {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        terminal::margins(|a| a != Arrangement::Parallel, me, family(&INFO), evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        terminal::explain(evaluation, margin, decision)
    }
}
