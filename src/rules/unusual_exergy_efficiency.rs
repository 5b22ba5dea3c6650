//! unusual-exergy-efficiency

use super::practice::{self, Judged};
use super::unusual_gas_turbine_efficiency::expands_gas;
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::model::{Decision, Margin, Scope};
use crate::process::{Carried, ComponentId};
use crate::process::kinds::Kind;

/// The exergy efficiency of a component is outside what is usual for its kind.
///
/// Machines are judged by their isentropic or polytropic efficiency instead: one figure, one
/// finding.
pub struct UnusualExergyEfficiency;

/// Combustors of gas turbines (common practice).
const COMBUSTOR_RANGE: (f64, f64) = (0.65, 0.80);
/// Boilers, from fuel to steam (common practice).
const BOILER_RANGE: (f64, f64) = (0.35, 0.50);
/// Exchangers between gases (common practice).
const GAS_EXCHANGER_RANGE: (f64, f64) = (0.70, 0.90);
/// Heat-recovery steam generators (common practice).
const HRSG_RANGE: (f64, f64) = (0.65, 0.80);
/// Refrigerators as a whole (common practice).
const REFRIGERATOR_RANGE: (f64, f64) = (0.20, 0.45);

static INFO: RuleInfo = RuleInfo {
    name: "unusual-exergy-efficiency",
    title: "Exergy efficiency",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "combustor of a gas turbine 0.65–0.80, boiler 0.35–0.50, gas-to-gas exchanger 0.70–0.90, heat-recovery steam generator 0.65–0.80, refrigerator 0.20–0.45",
    applies_to: "components of these kinds with a fuel clear of zero",
    needs: "the exergy balance",
    typical_cause: "a large temperature difference, a wrong reading",
    source: "common practice",
    breaking: Case::Description(
        r#"{"components": {"recuperator": {"kind": "heat_exchanger", "sides": [{"in": ["gas-in"], "out": ["gas-out"]}, {"in": ["air-in"], "out": ["air-out"]}]}},
            "flows": {
              "gas-in": {"kind": "material", "to": "recuperator", "fluid": "air", "pressure": "1.06 bar", "temperature": "1300.0 degC", "mass_flow": "20.0 kg/s"},
              "gas-out": {"kind": "material", "from": "recuperator", "fluid": "air", "pressure": "1.05 bar"},
              "air-in": {"kind": "material", "to": "recuperator", "fluid": "air", "pressure": "8.00 bar", "temperature": "300.0 degC", "mass_flow": "10.0 kg/s"},
              "air-out": {"kind": "material", "from": "recuperator", "fluid": "air", "pressure": "7.90 bar", "temperature": "450.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"recuperator": {"kind": "heat_exchanger", "sides": [{"in": ["gas-in"], "out": ["gas-out"]}, {"in": ["air-in"], "out": ["air-out"]}]}},
            "flows": {
              "gas-in": {"kind": "material", "to": "recuperator", "fluid": "air", "pressure": "1.06 bar", "temperature": "560.0 degC", "mass_flow": "10.0 kg/s"},
              "gas-out": {"kind": "material", "from": "recuperator", "fluid": "air", "pressure": "1.05 bar"},
              "air-in": {"kind": "material", "to": "recuperator", "fluid": "air", "pressure": "8.00 bar", "temperature": "300.0 degC", "mass_flow": "10.0 kg/s"},
              "air-out": {"kind": "material", "from": "recuperator", "fluid": "air", "pressure": "7.90 bar", "temperature": "450.0 degC"}}}"#,
    ),
};

impl Rule for UnusualExergyEfficiency {
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
    let Some(exergies) = &evaluation.exergies else { return Vec::new() };
    let gas_turbine = expands_gas(evaluation);
    let components = evaluation.view.model.process.components.iter().enumerate();
    components
        .filter_map(|(k, component)| {
            let range = match component.kind {
                Kind::Combustor if gas_turbine && !delivers_heat(evaluation, k) => COMBUSTOR_RANGE,
                Kind::Boiler => BOILER_RANGE,
                Kind::HeatExchanger if between_gases(evaluation, k) => GAS_EXCHANGER_RANGE,
                Kind::Hrsg => HRSG_RANGE,
                Kind::Refrigerator => REFRIGERATOR_RANGE,
                _ => return None,
            };
            let account = exergies.accounts.get(k)?.as_ref().ok()?;
            let value = account.efficiency(0.0).ok()?;
            Some(Judged { scope: Scope::Component(k), what: "exergy efficiency", value, range })
        })
        .collect()
}

/// Whether every stream of a component with two sides is a gas.
fn between_gases(evaluation: &Evaluation<'_>, k: ComponentId) -> bool {
    let process = &evaluation.view.model.process;
    let component = &process.components[k];
    component.sides.len() == 2
        && component.inlets.iter().chain(&component.outlets).all(|&f| {
            process.flows[f].material().is_some_and(|m| {
                practice::is_gas(&process.fluids[process.states[m.state].fluid].substance)
            })
        })
}

/// Whether heat is taken from a component on purpose.
fn delivers_heat(evaluation: &Evaluation<'_>, k: ComponentId) -> bool {
    let process = &evaluation.view.model.process;
    process.components[k].outlets.iter().any(|&f| {
        let flow = &process.flows[f];
        !flow.implied && matches!(flow.carried, Carried::Heat(..) | Carried::Radiation(..))
    })
}
