//! unusual-stack-loss

use super::practice::{self, Judged};
use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity};
use crate::balance::Evaluation;
use crate::balance::performance::fuel_energy;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::Role;

/// The stack carries away an unusual share of the fuel's exergy.
///
/// Gas that leaves the plant as a loss is counted against what burns.
pub struct UnusualStackLoss;

/// Share of the fuel's exergy in the flue gas of boilers and heat-recovery plant (common practice).
const RANGE: (f64, f64) = (0.0, 0.05);

static INFO: RuleInfo = RuleInfo {
    name: "unusual-stack-loss",
    title: "Stack loss",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "exergy of the flue gas that is thrown away ≤ 0.05 of that of the fuel",
    applies_to: "plants that burn a fuel and give a flow of gas the role \"loss\"",
    needs: "exergy of fuel and flue gas",
    typical_cause: "excess air, fouled heating surfaces, a wrong stack temperature",
    source: "common practice",
    breaking: Case::Description(
        r#"{"fluids": {"flue": {"kind": "ideal_gas", "mole_fractions": {"N2": 0.7505422, "O2": 0.1368368, "CO2": 0.0315990, "H2O": 0.0810219}},
              "intake": {"kind": "ideal_gas", "mole_fractions": {"N2": 0.7748, "O2": 0.2059, "CO2": 0.0003, "H2O": 0.019}},
              "methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}}},
            "components": {"firing": {"kind": "combustor"}, "boiler": {"kind": "heat_exchanger", "sides": [{"in": ["hot"], "out": ["stack"]}, {"in": ["feed"], "out": ["steam"]}]}},
            "flows": {
              "air": {"kind": "material", "to": "firing", "fluid": "intake", "pressure": "1.013 bar", "temperature": "25.0 degC", "mass_flow": "90.9479 kg/s", "role": "free"},
              "gas": {"kind": "material", "to": "firing", "fluid": "methane", "pressure": "1.100 bar", "temperature": "25.0 degC", "mass_flow": "1.64601 kg/s"},
              "hot": {"kind": "material", "from": "firing", "to": "boiler", "fluid": "flue", "pressure": "1.013 bar", "mass_flow": "92.5939 kg/s"},
              "stack": {"kind": "material", "from": "boiler", "fluid": "flue", "pressure": "1.013 bar", "temperature": "420.0 degC", "role": "loss"},
              "feed": {"kind": "material", "to": "boiler", "fluid": "water", "pressure": "20.0 bar", "temperature": "60.0 degC", "role": "fuel"},
              "steam": {"kind": "material", "from": "boiler", "fluid": "water", "pressure": "20.0 bar", "quality": 1, "role": "product"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"flue": {"kind": "ideal_gas", "mole_fractions": {"N2": 0.7505422, "O2": 0.1368368, "CO2": 0.0315990, "H2O": 0.0810219}},
              "intake": {"kind": "ideal_gas", "mole_fractions": {"N2": 0.7748, "O2": 0.2059, "CO2": 0.0003, "H2O": 0.019}},
              "methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}}},
            "components": {"firing": {"kind": "combustor"}, "boiler": {"kind": "heat_exchanger", "sides": [{"in": ["hot"], "out": ["stack"]}, {"in": ["feed"], "out": ["steam"]}]}},
            "flows": {
              "air": {"kind": "material", "to": "firing", "fluid": "intake", "pressure": "1.013 bar", "temperature": "25.0 degC", "mass_flow": "90.9479 kg/s", "role": "free"},
              "gas": {"kind": "material", "to": "firing", "fluid": "methane", "pressure": "1.100 bar", "temperature": "25.0 degC", "mass_flow": "1.64601 kg/s"},
              "hot": {"kind": "material", "from": "firing", "to": "boiler", "fluid": "flue", "pressure": "1.013 bar", "mass_flow": "92.5939 kg/s"},
              "stack": {"kind": "material", "from": "boiler", "fluid": "flue", "pressure": "1.013 bar", "temperature": "120.0 degC", "role": "loss"},
              "feed": {"kind": "material", "to": "boiler", "fluid": "water", "pressure": "20.0 bar", "temperature": "60.0 degC", "role": "fuel"},
              "steam": {"kind": "material", "from": "boiler", "fluid": "water", "pressure": "20.0 bar", "quality": 1, "role": "product"}}}"#,
    ),
};

impl Rule for UnusualStackLoss {
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
    share(evaluation)
        .map(|value| Judged { scope: Scope::Plant, what: "share of the fuel's exergy in the flue gas", value, range: RANGE })
        .into_iter()
        .collect()
}

fn share(evaluation: &Evaluation<'_>) -> Option<Dual> {
    let view = evaluation.view;
    let process = &view.model.process;
    let exergies = evaluation.exergies.as_ref()?;
    let plant = &evaluation.equations.plant;
    let (mut fuel, mut stack) = (Dual::default(), Dual::default());
    for (f, _, sign) in plant.crossings() {
        let flow = &process.flows[f];
        let Some(m) = flow.material() else { continue };
        if sign > 0.0 && fuel_energy(view, f).is_some() {
            fuel.add_scaled(1.0, &exergies.surroundings.flow(view, f, plant, sign).ok()?);
        } else if sign < 0.0
            && flow.role == Some(Role::Loss)
            && practice::is_gas(&process.fluids[process.states[m.state].fluid].substance)
        {
            stack.add_scaled(1.0, &exergies.surroundings.flow(view, f, plant, sign).ok()?);
        }
    }
    (fuel.value > 0.0).then(|| stack.times(&fuel.reciprocal()))
}
