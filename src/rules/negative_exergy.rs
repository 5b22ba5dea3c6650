//! negative-exergy

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::Property;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::quantity::Dimension;

/// A stream at or above ambient pressure has less physical exergy than in equilibrium with the
/// surroundings.
///
/// The dead state is the one of least exergy at ambient pressure, so that a negative figure there is
/// an error; below ambient pressure it is legitimate. Chemical exergy is left out: it depends on the
/// reference chosen. Properties that the tool computes obey it by their nature, so that it is a test
/// of stated figures; a computed one is shown only when it breaks.
pub struct NegativeExergy;

static INFO: RuleInfo = RuleInfo {
    name: "negative-exergy",
    title: "Physical exergy of a stream",
    authority: Authority::Law,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "e = (h − h0) − T0 (s − s0) ≥ 0 where p ≥ p0",
    applies_to: "streams",
    needs: "pressure and exergy",
    typical_cause: "figures of different datums, an ambient state that is not theirs",
    source: "Bejan, Tsatsaronis & Moran, Thermal Design and Optimization, 1996, ch. 3",
    breaking: Case::Description(
        r#"{"components": {"box": {"kind": "control_volume"}},
            "flows": {
              "in": {"kind": "material", "to": "box", "fluid": {"kind": "stated"}, "enthalpy": "100 kJ/kg", "entropy": "0.30 kJ/(kg K)", "exergy": "-5.0 kJ/kg", "pressure": "3.00 bar", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "box", "fluid": {"kind": "stated"}, "enthalpy": "100 kJ/kg", "entropy": "0.31 kJ/(kg K)", "exergy": "2.0 kJ/kg", "pressure": "3.00 bar", "mass_flow": "1 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"box": {"kind": "control_volume"}},
            "flows": {
              "in": {"kind": "material", "to": "box", "fluid": {"kind": "stated"}, "enthalpy": "100 kJ/kg", "entropy": "0.30 kJ/(kg K)", "exergy": "15.0 kJ/kg", "pressure": "3.00 bar", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "box", "fluid": {"kind": "stated"}, "enthalpy": "100 kJ/kg", "entropy": "0.31 kJ/(kg K)", "exergy": "12.0 kJ/kg", "pressure": "3.00 bar", "mass_flow": "1 kg/s"}}}"#,
    ),
};

impl Rule for NegativeExergy {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let Some(exergies) = &evaluation.exergies else { return };
        let view = evaluation.view;
        let process = &view.model.process;
        let environment = &process.environment;
        for (f, flow) in process.flows.iter().enumerate() {
            let Some(m) = flow.material() else { continue };
            let Ok(parts) = exergies.surroundings.flow_parts(view, f) else { continue };
            let spec = &process.states[m.state];
            let pressure = match m.stated_exergy {
                Some(_) => {
                    let stated = spec.surplus.iter().find(|s| s.property == Property::Pressure);
                    stated.and_then(|s| view.var(s.var).ok())
                }
                None => view.property(m.state, Property::Pressure).ok(),
            };
            if pressure.is_none_or(|p| p.value < environment.pressure) {
                continue;
            }
            // The scale of the difference between two large figures.
            let scale = environment.temperature * COMMON_HEAT_CAPACITY;
            let e = parts.physical.value;
            if m.stated_exergy.is_some() || e < -ROUNDING * scale {
                let form: Dual = parts.physical.clone();
                out.push(measure::lower_bound(me, Scope::Flow(f), form, scale));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let dimension = Dimension::SpecificEnergy;
        let relation = if decision.value < 0.0 { "below" } else { "not below" };
        Explanation {
            statement: phrase::sentence(format!(
                "{} has a physical exergy of {} at a pressure that is not below that of the surroundings: \
                 {relation} the zero of equilibrium with them{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(decision.value, dimension),
                phrase::sureness(decision),
            )),
            value: Some(Figure { value: decision.value, dimension }),
            limit: Some(Figure { value: 0.0, dimension }),
            ..Explanation::default()
        }
    }
}

/// Order of the heat capacity of fluids, J/(kg K): that of air (common practice).
const COMMON_HEAT_CAPACITY: f64 = 1e3;

/// Share of the scale below which a computed exergy is rounding, or the accuracy of a formulation
/// near the dead state.
const ROUNDING: f64 = 1e-6;
