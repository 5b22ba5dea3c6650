//! composite-curves-cross

use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, family, interior};
use crate::balance::{Evaluation, Profile};
use crate::model::{Decision, Margin};

/// The composite curves of an exchanger with more than two streams cross.
///
/// Whichever stream is brought beside whichever, all that is given off above a temperature must
/// suffice for what is taken in above it.
pub struct CompositeCurvesCross;

static INFO: RuleInfo = RuleInfo {
    name: "composite-curves-cross",
    title: "Composite curves of an exchanger with several streams",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Interior,
    inequality: "Th(q) ≥ Tc(q) at every heat q, composites of all hot and all cold streams",
    applies_to: "exchangers with more than two streams",
    needs: "the states at every inlet and outlet, the amounts",
    typical_cause: "an overlooked pinch, a wrong amount or duty, a wrong pressure of evaporation",
    source: "second law, statement of Clausius; Linnhoff & Flower, AIChE J. 24 (1978) 633",
    breaking: Case::Description(
        r#"{"components": {"exchanger": {"kind": "heat_exchanger", "arrangement": "counterflow",
              "sides": [{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["a-in"], "out": ["a-out"]}, {"in": ["b-in"], "out": ["b-out"]}]}},
            "flows": {
              "hot-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "90.0 degC", "mass_flow": "10 kg/s"},
              "hot-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "6.0 bar"},
              "a-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "20.0 degC", "mass_flow": "4 kg/s"},
              "a-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "80.0 degC", "mass_flow": "4 kg/s"},
              "b-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "70.0 degC", "mass_flow": "22 kg/s"},
              "b-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "85.0 degC", "mass_flow": "22 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"exchanger": {"kind": "heat_exchanger", "arrangement": "counterflow",
              "sides": [{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["a-in"], "out": ["a-out"]}, {"in": ["b-in"], "out": ["b-out"]}]}},
            "flows": {
              "hot-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "90.0 degC", "mass_flow": "10 kg/s"},
              "hot-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "6.0 bar"},
              "a-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "20.0 degC", "mass_flow": "4 kg/s"},
              "a-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "60.0 degC", "mass_flow": "4 kg/s"},
              "b-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "40.0 degC", "mass_flow": "6 kg/s"},
              "b-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "70.0 degC", "mass_flow": "6 kg/s"}}}"#,
    ),
};

impl Rule for CompositeCurvesCross {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        interior::margins(Profile::is_composite, false, me, family(&INFO), evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        interior::explain(evaluation, margin, decision)
    }
}
