//! unusual-gas-turbine-efficiency

use super::practice::{self, Judged};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::process::kinds::Kind;

/// The polytropic efficiency of a gas turbine's expander or compressor is outside what is usual.
///
/// A compressor counts as that of a gas turbine where the same plant expands a gas.
pub struct UnusualGasTurbineEfficiency;

/// Polytropic efficiency of gas expanders (common practice).
const EXPANDER_RANGE: (f64, f64) = (0.82, 0.92);
/// Polytropic efficiency of gas turbine compressors (common practice).
const COMPRESSOR_RANGE: (f64, f64) = (0.85, 0.92);

static INFO: RuleInfo = RuleInfo {
    name: "unusual-gas-turbine-efficiency",
    title: "Gas turbine efficiency",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "0.82 ≤ polytropic efficiency of the expander ≤ 0.92, 0.85 ≤ of the compressor ≤ 0.92",
    applies_to: "adiabatic gas expanders, and compressors beside them",
    needs: "states at inlet and outlet",
    typical_cause: "fouling, a wrong reading, cooling air left out",
    source: "common practice",
    breaking: Case::Description(
        r#"{"components": {
              "compressor": {"kind": "compressor", "given": {"isentropic_efficiency": 0.86}},
              "heating": {"kind": "heat_exchanger"},
              "turbine": {"kind": "turbine", "given": {"isentropic_efficiency": 0.70}}},
            "flows": {
              "1": {"kind": "material", "to": "compressor", "fluid": "air", "pressure": "1.00 bar", "temperature": "15.0 degC", "mass_flow": "20 kg/s"},
              "2": {"kind": "material", "from": "compressor", "to": "heating", "fluid": "air", "pressure": "10.0 bar"},
              "3": {"kind": "material", "from": "heating", "to": "turbine", "fluid": "air", "pressure": "10.0 bar", "temperature": "1000.0 degC"},
              "4": {"kind": "material", "from": "turbine", "fluid": "air", "pressure": "1.00 bar"},
              "heat": {"kind": "heat", "to": "heating", "temperature": "1200 degC"},
              "drive": {"kind": "work", "to": "compressor", "form": "shaft"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {
              "compressor": {"kind": "compressor", "given": {"isentropic_efficiency": 0.86}},
              "heating": {"kind": "heat_exchanger"},
              "turbine": {"kind": "turbine", "given": {"isentropic_efficiency": 0.88}}},
            "flows": {
              "1": {"kind": "material", "to": "compressor", "fluid": "air", "pressure": "1.00 bar", "temperature": "15.0 degC", "mass_flow": "20 kg/s"},
              "2": {"kind": "material", "from": "compressor", "to": "heating", "fluid": "air", "pressure": "10.0 bar"},
              "3": {"kind": "material", "from": "heating", "to": "turbine", "fluid": "air", "pressure": "10.0 bar", "temperature": "1000.0 degC"},
              "4": {"kind": "material", "from": "turbine", "fluid": "air", "pressure": "1.00 bar"},
              "heat": {"kind": "heat", "to": "heating", "temperature": "1200 degC"},
              "drive": {"kind": "work", "to": "compressor", "form": "shaft"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
};

impl Rule for UnusualGasTurbineEfficiency {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        practice::margins(me, judged(evaluation), out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        practice::explain(evaluation, margin, decision, judged(evaluation))
    }
}

fn judged(evaluation: &Evaluation<'_>) -> Vec<Judged> {
    if !expands_gas(evaluation) {
        return Vec::new();
    }
    let components = evaluation.view.model.process.components.iter().enumerate();
    components
        .filter_map(|(k, component)| {
            let range = match component.kind {
                Kind::Turbine => EXPANDER_RANGE,
                Kind::Compressor => COMPRESSOR_RANGE,
                _ => return None,
            };
            practice::substance(evaluation, k).filter(|s| practice::is_gas(s))?;
            let value = practice::metric(evaluation, k, "polytropic_efficiency")?;
            Some(Judged { scope: Scope::Component(k), what: "polytropic efficiency", value, range })
        })
        .collect()
}

/// Whether the plant has a turbine that expands a gas.
pub(super) fn expands_gas(evaluation: &Evaluation<'_>) -> bool {
    let components = evaluation.view.model.process.components.iter().enumerate();
    components
        .filter(|(_, c)| c.kind == Kind::Turbine)
        .any(|(k, _)| practice::substance(evaluation, k).is_some_and(practice::is_gas))
}
