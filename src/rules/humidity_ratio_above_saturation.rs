//! humidity-ratio-above-saturation

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::steam::Steam;
use crate::fluid::{CompositionForm, Phase, Property, Substance, combustion_gas};
use crate::model::{Decision, Dual, Margin, View};
use crate::process::StateId;
use crate::quantity::Dimension;

/// A gas holds more water vapour than saturation allows at its temperature and pressure.
///
/// What is beyond saturation is liquid and must be declared as a flow of its own.
pub struct HumidityRatioAboveSaturation;

static INFO: RuleInfo = RuleInfo {
    name: "humidity-ratio-above-saturation",
    title: "Water beyond saturation",
    authority: Authority::Data,
    severity: Severity::Major,
    aspect: Aspect::State,
    inequality: "W ≤ Wsat(T, p); in an ideal gas x p ≤ psat(T)",
    applies_to: "humid air, and gases with water between the triple and the critical point",
    needs: "humidity, temperature and pressure",
    typical_cause: "droplets that were left out, a temperature reading",
    source: "ASHRAE Handbook of Fundamentals, ch. 1; IAPWS-IF97 for psat",
    breaking: Case::Description(
        r#"{"components": {"duct": {"kind": "valve"}},
            "flows": {
              "in": {"kind": "material", "to": "duct", "fluid": "humid air", "pressure": "1.020 bar", "temperature": "25.0 degC", "humidity_ratio": "0.0280 kg/kg", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "duct", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "25.0 degC", "humidity_ratio": "0.0120 kg/kg", "mass_flow": "1 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"duct": {"kind": "valve"}},
            "flows": {
              "in": {"kind": "material", "to": "duct", "fluid": "humid air", "pressure": "1.020 bar", "temperature": "25.0 degC", "humidity_ratio": "0.0120 kg/kg", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "duct", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "25.0 degC", "humidity_ratio": "0.0120 kg/kg", "mass_flow": "1 kg/s"}}}"#,
    ),
};

impl Rule for HumidityRatioAboveSaturation {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for s in 0..view.model.process.states.len() {
            if let Some((held, limit, _)) = water(view, s) {
                let scope = measure::scope_of_state(&view.model.process, s);
                let throughput = held.value.abs() + limit.value.abs();
                out.push(Margin {
                    pointer: Some(view.model.process.states[s].pointer.clone()),
                    detail: s,
                    ..measure::lower_bound(me, scope, limit.minus(&held), throughput)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Some((held, limit, dimension)) = water(evaluation.view, margin.detail) else {
            return Explanation::default();
        };
        let what = if dimension == Dimension::Pressure { "partial pressure of water" } else { "humidity ratio" };
        Explanation {
            statement: format!(
                "The {what} in {} is {}; saturation is at {}{}.",
                phrase::state(evaluation, margin.detail),
                phrase::figure(held.value, dimension),
                phrase::figure(limit.value, dimension),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: held.value, dimension }),
            limit: Some(Figure { value: limit.value, dimension }),
            ..Explanation::default()
        }
    }
}

/// What a gas holds of water, what it can hold, and what both measure.
fn water(view: View<'_>, s: StateId) -> Option<(Dual, Dual, Dimension)> {
    let process = &view.model.process;
    let spec = &process.states[s];
    let substance = &process.fluids[spec.fluid].substance;
    match substance {
        Substance::HumidAir => {
            let (CompositionForm::Direct, c) = spec.c? else { return None };
            return Some((view.var(c).ok()?, physics::saturation_ratio(view, s)?, Dimension::HumidityRatio));
        }
        Substance::Gas(_) | Substance::CombustionGas(_) => {}
        _ => return None,
    }
    // Most gases are too hot for water to condense.
    let t = view.property(s, Property::Temperature).ok()?;
    let (saturation, by_t) = Steam.saturation_pressure(t.value).ok()?;
    let (share, slope, c) = match substance {
        Substance::Gas(gas) => (gas.mole_fraction("H2O"), 0.0, Dual::default()),
        Substance::CombustionGas(gas) => {
            let c = view.composition(s).ok()?;
            let (x, dx) = gas.composition(c.value).ok()?;
            let water = combustion_gas::SPECIES.iter().position(|name| *name == "H2O")?;
            (*x.get(water)?, *dx.get(water)?, c)
        }
        _ => return None,
    };
    if share <= 0.0 || !matches!(view.state(s).ok()?.state.phase, Phase::Vapour) {
        return None;
    }
    let p = view.property(s, Property::Pressure).ok()?;
    let held = physics::combine(share * p.value, &[(&p, share), (&c, slope * p.value)]);
    Some((held, t.map(saturation, by_t), Dimension::Pressure))
}

/// Whether a state of humid air is given beyond saturation.
pub(super) fn is_broken(view: View<'_>, s: StateId) -> bool {
    water(view, s).is_some_and(|(held, limit, _)| held.value > limit.value)
}
