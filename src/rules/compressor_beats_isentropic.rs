//! compressor-beats-isentropic

use super::machine::{self, Machine};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin};

/// An adiabatic compressor, pump or fan needs less work than an isentropic one would.
///
/// Equivalently, the entropy of the fluid falls on its way through. For liquids the difference lies in
/// tenths of a kelvin, so the uncertainty of the temperatures mostly decides. A stated isentropic
/// efficiency is held against one.
pub struct CompressorBeatsIsentropic;

static INFO: RuleInfo = RuleInfo {
    name: "compressor-beats-isentropic",
    title: "Compressor against the isentropic one",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "s after − s before ≥ 0 for each section, hence isentropic efficiency ≤ 1",
    applies_to: "adiabatic compressors, pumps and fans with one inlet",
    needs: "pressure and a second property before and after",
    typical_cause: "outlet temperature read too low (cooling, recirculation), resolution of temperatures for liquids",
    source: "second law; Moran & Shapiro, Fundamentals of Engineering Thermodynamics, ch. 6.12",
    breaking: Case::Description(
        r#"{"components": {"pump": {"kind": "pump"}},
            "flows": {
              "suction": {"kind": "material", "to": "pump", "fluid": "water", "pressure": "1.20 bar", "temperature": "30.00 degC", "mass_flow": "12 kg/s"},
              "feed": {"kind": "material", "from": "pump", "fluid": "water", "pressure": "60.0 bar", "temperature": "29.50 degC", "mass_flow": "12 kg/s"},
              "drive": {"kind": "work", "to": "pump", "form": "electric"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"pump": {"kind": "pump"}},
            "flows": {
              "suction": {"kind": "material", "to": "pump", "fluid": "water", "pressure": "1.20 bar", "temperature": "30.00 degC", "mass_flow": "12 kg/s"},
              "feed": {"kind": "material", "from": "pump", "fluid": "water", "pressure": "60.0 bar", "temperature": "30.50 degC", "mass_flow": "12 kg/s"},
              "drive": {"kind": "work", "to": "pump", "form": "electric"}}}"#,
    ),
};

impl Rule for CompressorBeatsIsentropic {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        machine::margins(Machine::Compressor, me, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        machine::explain(evaluation, margin, decision)
    }
}
