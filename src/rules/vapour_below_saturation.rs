//! vapour-below-saturation

use super::saturation;
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};
use crate::fluid::Phase;

/// A state declared to be vapour is colder than saturation at its pressure.
///
/// It would be liquid there, or wet; the usual reason is a gauge pressure read as absolute. Above the
/// critical pressure there is no saturation and nothing is tested.
pub struct VapourBelowSaturation;

static INFO: RuleInfo = RuleInfo {
    name: "vapour-below-saturation",
    title: "Vapour below saturation",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "T ≥ Tsat(p) for a state declared vapour",
    applies_to: "states given by pressure and temperature that are declared vapour",
    needs: "pressure, temperature, declared phase",
    typical_cause: "a gauge pressure read as absolute, wet steam",
    source: "saturation by the property formulation of the fluid",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "10.00 bar", "mass_flow": "2 kg/s", "temperature": "150.0 degC", "phase": "vapour"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "5.00 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "10.00 bar", "mass_flow": "2 kg/s", "temperature": "210.0 degC", "phase": "vapour"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "5.00 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for VapourBelowSaturation {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        saturation::margins(Phase::Vapour, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        saturation::explain(Phase::Vapour, evaluation, margin, decision)
    }
}
