//! unusual-machine-efficiency

use super::practice::{self, Judged};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use super::unusual_gas_turbine_efficiency::expands_gas;
use crate::model::{Decision, Margin, Scope};
use crate::process::kinds::Kind;

/// The isentropic efficiency of a pump, fan or compressor is outside what is usual.
///
/// The compressor of a gas turbine is judged by its own rule.
pub struct UnusualMachineEfficiency;

/// Isentropic efficiency of pumps (common practice).
const PUMP_RANGE: (f64, f64) = (0.50, 0.88);
/// Isentropic efficiency of fans (common practice).
const FAN_RANGE: (f64, f64) = (0.55, 0.88);
/// Isentropic efficiency of displacement and turbo compressors (common practice).
const COMPRESSOR_RANGE: (f64, f64) = (0.65, 0.90);

static INFO: RuleInfo = RuleInfo {
    name: "unusual-machine-efficiency",
    title: "Pumps, fans, compressors",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "0.50 ≤ isentropic efficiency of pumps ≤ 0.88, 0.55 ≤ of fans ≤ 0.88, 0.65 ≤ of compressors ≤ 0.90",
    applies_to: "adiabatic pumps, fans and compressors",
    needs: "states at inlet and outlet",
    typical_cause: "wear, throttled operation, a wrong reading",
    source: "common practice",
    breaking: Case::Description(
        r#"{"components": {"pump": {"kind": "pump", "given": {"isentropic_efficiency": 0.30}}},
            "flows": {
              "suction": {"kind": "material", "to": "pump", "fluid": "water", "pressure": "1.00 bar", "temperature": "40.0 degC", "mass_flow": "10 kg/s"},
              "delivery": {"kind": "material", "from": "pump", "fluid": "water", "pressure": "60.0 bar"},
              "shaft": {"kind": "work", "to": "pump", "form": "shaft"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"pump": {"kind": "pump", "given": {"isentropic_efficiency": 0.75}}},
            "flows": {
              "suction": {"kind": "material", "to": "pump", "fluid": "water", "pressure": "1.00 bar", "temperature": "40.0 degC", "mass_flow": "10 kg/s"},
              "delivery": {"kind": "material", "from": "pump", "fluid": "water", "pressure": "60.0 bar"},
              "shaft": {"kind": "work", "to": "pump", "form": "shaft"}}}"#,
    ),
};

impl Rule for UnusualMachineEfficiency {
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
    let gas_turbine = expands_gas(evaluation);
    let components = evaluation.view.model.process.components.iter().enumerate();
    components
        .filter_map(|(k, component)| {
            let range = match component.kind {
                Kind::Pump => PUMP_RANGE,
                Kind::Fan => FAN_RANGE,
                Kind::Compressor if !gas_turbine => COMPRESSOR_RANGE,
                _ => return None,
            };
            let value = practice::metric(evaluation, k, "isentropic_efficiency")?;
            Some(Judged { scope: Scope::Component(k), what: "isentropic efficiency", value, range })
        })
        .collect()
}
