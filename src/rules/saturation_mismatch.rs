//! saturation-mismatch

use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, surplus_property_mismatch};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};

/// A temperature or pressure given for a state of two phases does not belong to saturation.
///
/// In two phases pressure and temperature fix each other, so that the second of them is redundant.
pub struct SaturationMismatch;

static INFO: RuleInfo = RuleInfo {
    name: "saturation-mismatch",
    title: "Temperature and pressure at saturation",
    authority: Authority::Data,
    severity: Severity::Minor,
    aspect: Aspect::State,
    inequality: "|T − Tsat(p)| ≤ k u",
    applies_to: "states of two phases with both pressure and temperature given",
    needs: "pressure and temperature",
    typical_cause: "gas that does not condense, gauge taken for absolute pressure, a reading",
    source: "equilibrium of liquid and vapour; the property formulation of the fluid",
    breaking: Case::Description(
        r#"{"components": {"line": {"kind": "pipe"}},
            "flows": {
              "before": {"kind": "material", "to": "line", "fluid": "water", "pressure": "10.0 bar", "temperature": "175.0 degC", "quality": 0.90, "mass_flow": "2 kg/s"},
              "after": {"kind": "material", "from": "line", "fluid": "water", "pressure": "9.5 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"line": {"kind": "pipe"}},
            "flows": {
              "before": {"kind": "material", "to": "line", "fluid": "water", "pressure": "10.00 bar", "temperature": "179.9 degC", "quality": 0.90, "mass_flow": "2 kg/s"},
              "after": {"kind": "material", "from": "line", "fluid": "water", "pressure": "9.5 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for SaturationMismatch {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        surplus_property_mismatch::margins_where(true, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        surplus_property_mismatch::explain_surplus(evaluation, margin, decision)
    }
}
