//! flame-hotter-than-adiabatic

use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, hottest, measure, physics};
use crate::balance::Evaluation;
use crate::fluid::{Pair, Property};
use crate::model::{Decision, Dual, Margin};
use crate::process::ComponentId;
use crate::process::kinds::Kind;

/// A flame is hotter than its fuel and oxidant can make it.
///
/// The temperature of complete combustion without heat loss bounds what leaves a combustor; what
/// dissociates or is lost only lowers it.
pub struct FlameHotterThanAdiabatic;

static INFO: RuleInfo = RuleInfo {
    name: "flame-hotter-than-adiabatic",
    title: "Flame temperature",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Closure,
    inequality: "T_out ≤ T_ad",
    applies_to: "combustors with one gas outlet whose temperature is given",
    needs: "amounts, compositions and temperatures of fuel, oxidant and gas",
    typical_cause: "a wrong air ratio, wet and dry oxygen mixed up, a higher heating value in place of the lower",
    source: "conservation of energy; complete combustion as the upper bound",
    breaking: Case::Description(
        r#"{"fluids": {"methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}}, "flue": {"kind": "combustion_gas", "fuel": "gas", "oxidant": "air", "excess_air": "0.200"}},
             "components": {"burner": {"kind": "combustor"}},
            "flows": {
              "gas": {"kind": "material", "to": "burner", "fluid": "methane", "pressure": "1.050 bar", "temperature": "25.0 degC", "mole_flow": "2 mol/s"},
              "air": {"kind": "material", "to": "burner", "fluid": "air", "pressure": "1.050 bar", "temperature": "25.0 degC"},
              "hot": {"kind": "material", "from": "burner", "fluid": "flue", "pressure": "1.013 bar", "temperature": "2000.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"fluids": {"methane": {"kind": "ideal_gas", "mole_fractions": {"CH4": 1}}, "flue": {"kind": "combustion_gas", "fuel": "gas", "oxidant": "air", "excess_air": "0.200"}},
             "components": {"burner": {"kind": "combustor"}},
            "flows": {
              "gas": {"kind": "material", "to": "burner", "fluid": "methane", "pressure": "1.050 bar", "temperature": "25.0 degC", "mole_flow": "2 mol/s"},
              "air": {"kind": "material", "to": "burner", "fluid": "air", "pressure": "1.050 bar", "temperature": "25.0 degC"},
              "hot": {"kind": "material", "from": "burner", "fluid": "flue", "pressure": "1.013 bar", "temperature": "1500.0 degC"},
              "wall": {"kind": "heat", "from": "burner", "temperature": "900 degC"}}}"#,
    ),
};

impl Rule for FlameHotterThanAdiabatic {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        hottest::margins(me, temperatures, evaluation, out);
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let words = ["The gas from", "is at", "complete combustion without loss gives"];
        hottest::explain(temperatures, evaluation, margin, decision, words)
    }
}

/// The temperature that the energy brought along would give the gas, with what a balance of design
/// data may be open, and the temperature at which the gas leaves.
fn temperatures(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<(Dual, Dual)> {
    let view = evaluation.view;
    let process = &view.model.process;
    let component = &process.components[k];
    if component.kind != Kind::Combustor || physics::has_work(process, component) {
        return None;
    }
    let (surplus, throughput) = physics::energy_surplus(evaluation, k)?;
    let outlet = physics::only_outlet(process, component)?;
    let state = process.flows[outlet].material()?.state;
    let mass = view.mass(outlet).ok()?;
    if mass.value <= 0.0 {
        return None;
    }
    let open = Dual::constant(measure::allowance(process, throughput));
    let mut h = view.property(state, Property::Enthalpy).ok()?;
    h.add_scaled(1.0, &open.plus(surplus).times(&mass.reciprocal()));
    let p = view.property(state, Property::Pressure).ok()?;
    let c = match process.states[state].c {
        Some(_) => view.composition(state).ok()?,
        None => Dual::default(),
    };
    let engine = &process.fluids[process.states[state].fluid].engine;
    let at = engine.state(Pair::PressureEnthalpy, p.value, h.value, c.value).ok()?;
    let slopes = at.jacobian(Pair::PressureEnthalpy)?[Property::Temperature as usize];
    let limit = physics::combine(at.temperature, &[(&p, slopes[0]), (&h, slopes[1]), (&c, slopes[2])]);
    Some((limit, view.property(state, Property::Temperature).ok()?))
}
