//! liquid-above-saturation

use super::saturation;
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};
use crate::fluid::Phase;

/// A state declared to be liquid is hotter than saturation at its pressure.
///
/// It would have evaporated. Above the critical pressure there is no saturation and nothing is
/// tested.
pub struct LiquidAboveSaturation;

static INFO: RuleInfo = RuleInfo {
    name: "liquid-above-saturation",
    title: "Liquid above saturation",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "T ≤ Tsat(p) for a state declared liquid",
    applies_to: "states given by pressure and temperature that are declared liquid",
    needs: "pressure, temperature, declared phase",
    typical_cause: "a gauge pressure read as absolute, flashing",
    source: "saturation by the property formulation of the fluid",
    breaking: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "2.00 bar", "mass_flow": "2 kg/s", "temperature": "140.0 degC", "phase": "liquid"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "1.50 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"letdown": {"kind": "valve"}},
            "flows": {
              "upstream": {"kind": "material", "to": "letdown", "fluid": "water", "pressure": "6.00 bar", "mass_flow": "2 kg/s", "temperature": "140.0 degC", "phase": "liquid"},
              "downstream": {"kind": "material", "from": "letdown", "fluid": "water", "pressure": "4.00 bar", "mass_flow": "2 kg/s"}}}"#,
    ),
};

impl Rule for LiquidAboveSaturation {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        saturation::margins(Phase::Liquid, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        saturation::explain(Phase::Liquid, evaluation, margin, decision)
    }
}
