//! flue-gas-line-mismatch

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::Substance;
use crate::model::{Decision, Dual, Margin, Scope, Test, View};
use crate::process::FlueGas;
use crate::quantity::Dimension;

/// Oxygen and carbon dioxide of a dry flue gas do not belong to its fuel.
///
/// For a fuel burnt completely, or with the carbon monoxide that is given, both follow from the air
/// ratio, so that each fixes the other.
pub struct FlueGasLineMismatch;

static INFO: RuleInfo = RuleInfo {
    name: "flue-gas-line-mismatch",
    title: "Oxygen and carbon dioxide",
    authority: Authority::Data,
    severity: Severity::Minor,
    aspect: Aspect::State,
    inequality: "CO2 dry = line of the fuel at O2 dry",
    applies_to: "combustion gases with both readings",
    needs: "o2_dry and co2_dry",
    typical_cause: "air drawn in, an analyser, another fuel",
    source: "stoichiometry; Ostwald diagram, common practice",
    breaking: Case::Description(
        r#"{"fluids": {"methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}}, "flue": {"kind": "combustion_gas", "fuel": "gas", "oxidant": "air", "o2_dry": "3.00 %", "co2_dry": "12.50 %"}},
             "components": {"burner": {"kind": "combustor"}},
            "flows": {
              "gas": {"kind": "material", "to": "burner", "fluid": "methane", "pressure": "1.050 bar", "temperature": "25.0 degC", "mole_flow": "2 mol/s"},
              "air": {"kind": "material", "to": "burner", "fluid": "air", "pressure": "1.050 bar", "temperature": "25.0 degC"},
              "hot": {"kind": "material", "from": "burner", "fluid": "flue", "pressure": "1.013 bar"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}}, "flue": {"kind": "combustion_gas", "fuel": "gas", "oxidant": "air", "o2_dry": "3.00 %", "co2_dry": "10.06 %"}},
             "components": {"burner": {"kind": "combustor"}},
            "flows": {
              "gas": {"kind": "material", "to": "burner", "fluid": "methane", "pressure": "1.050 bar", "temperature": "25.0 degC", "mole_flow": "2 mol/s"},
              "air": {"kind": "material", "to": "burner", "fluid": "air", "pressure": "1.050 bar", "temperature": "25.0 degC"},
              "hot": {"kind": "material", "from": "burner", "fluid": "flue", "pressure": "1.013 bar"}}}"#,
    ),
};

impl Rule for FlueGasLineMismatch {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (i, pair) in view.model.process.flue_gas.iter().enumerate() {
            if let Some((read, line)) = pair_of(view, pair) {
                let throughput = read.value.abs() + line.value.abs();
                out.push(Margin {
                    test: Test::Zero { allowance: 0.0 },
                    pointer: Some(pair.pointer.clone()),
                    detail: i,
                    ..measure::lower_bound(me, Scope::Description, read.minus(&line), throughput)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let view = evaluation.view;
        let pair = view.model.process.flue_gas.get(margin.detail);
        let Some((read, line)) = pair.and_then(|p| pair_of(view, p)) else { return Explanation::default() };
        Explanation {
            statement: format!(
                "Carbon dioxide is read as {} in the dry gas; with this fuel and the oxygen that is read it is {}{}.",
                phrase::figure(read.value, Dimension::Fraction),
                phrase::figure(line.value, Dimension::Fraction),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: read.value, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: line.value, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}

/// Carbon dioxide as read, and as the oxygen has it.
fn pair_of(view: View<'_>, pair: &FlueGas) -> Option<(Dual, Dual)> {
    let Substance::CombustionGas(gas) = &view.model.process.fluids[pair.fluid].substance else { return None };
    let oxygen = view.var(pair.oxygen).ok()?;
    let read = view.var(pair.carbon_dioxide).ok()?;
    let line = gas.carbon_dioxide_for_oxygen(oxygen.value).ok()?;
    // The line is straight.
    let step = 1e-4;
    let slope = (gas.carbon_dioxide_for_oxygen(oxygen.value + step).ok()? - line) / step;
    Some((read, oxygen.map(line, slope)))
}
