//! wetness-unknown

use super::{Aspect, Authority, Case, Explanation, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::{Bracket, Evaluation, region};
use crate::fluid::{Pair, State};
use crate::model::{Blocked, Decision, Margin, Scope};
use crate::process::{ComponentId, FlowId, StateId};
use crate::quantity::Dimension;

/// Pressure and temperature at saturation do not tell how wet a state is.
///
/// Between saturated liquid and saturated vapour lies most of the entropy that a verdict hangs on, so
/// none is given; instead the bounds of σ over all qualities are. Where a balance settles the state,
/// there is nothing to advise.
pub struct WetnessUnknown;

static INFO: RuleInfo = RuleInfo {
    name: "wetness-unknown",
    title: "Wetness unknown",
    authority: Authority::Data,
    severity: Severity::Advice,
    aspect: Aspect::State,
    inequality: "the quality of a state at saturation is given or can be solved for",
    applies_to: "states given by pressure and temperature within three standard uncertainties of saturation, their phase undeclared",
    needs: "a quality, an enthalpy or a balance that gives it",
    typical_cause: "a missing quality",
    source: "definition of a saturated state; saturation by the property formulation of the fluid",
    breaking: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "0.100 bar", "temperature": "45.8 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"turbine": {"kind": "turbine"}},
            "flows": {
              "live": {"kind": "material", "to": "turbine", "fluid": "water", "pressure": "60.0 bar", "temperature": "480.0 degC", "mass_flow": "5 kg/s"},
              "exhaust": {"kind": "material", "from": "turbine", "fluid": "water", "pressure": "0.100 bar", "temperature": "45.8 degC", "mass_flow": "5 kg/s"},
              "shaft": {"kind": "work", "from": "turbine", "form": "shaft", "power": "4913 kW"}}}"#,
    ),
};

impl Rule for WetnessUnknown {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (s, spec) in view.model.process.states.iter().enumerate() {
            if spec.wet_ambiguous && matches!(view.state(s), Err(Blocked::Unknown(_))) {
                let scope = measure::scope_of_state(&view.model.process, s);
                out.push(Margin { detail: s, ..measure::fact(me, scope, spec.pointer.clone()) });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, _: &Decision) -> Explanation {
        let process = &evaluation.view.model.process;
        let s = margin.detail;
        let mut statement = format!(
            "{} is given by pressure and temperature at saturation, which leaves its quality open",
            phrase::state(evaluation, s),
        );
        if let Some((liquid, vapour)) = saturated(evaluation, s) {
            statement.push_str(&format!(
                ": its entropy is anything from {} to {}",
                phrase::figure(liquid.entropy, Dimension::SpecificEntropy),
                phrase::figure(vapour.entropy, Dimension::SpecificEntropy),
            ));
            let flow = measure::flow_of_state(process, s);
            let ends = flow.map_or([None, None], |f| [process.flows[f].from, process.flows[f].to]);
            for (f, k) in ends.into_iter().flatten().filter_map(|k| Some((flow?, k))) {
                if let Some((low, high)) = bounds(evaluation, f, k, &liquid, &vapour) {
                    let dimension = phrase::entropy_dimension(evaluation);
                    statement.push_str(&format!(
                        ", so that σ of {} lies between {} and {}",
                        phrase::subject(evaluation, Scope::Component(k)),
                        phrase::figure(low, dimension),
                        phrase::figure(high, dimension),
                    ));
                    if high < 0.0 {
                        statement.push_str(", negative whatever the quality");
                    }
                }
            }
        }
        statement.push_str(
            "; a quality, an enthalpy, or the power or heat that closes the energy balance would settle it.",
        );
        Explanation { statement: phrase::sentence(statement), ..Explanation::default() }
    }
}

/// Saturated liquid and vapour at the pressure of a state.
fn saturated(evaluation: &Evaluation<'_>, s: StateId) -> Option<(State, State)> {
    let view = evaluation.view;
    let spec = &view.model.process.states[s];
    let p = view.var(spec.a).ok()?.value;
    let engine = &view.model.process.fluids[spec.fluid].engine;
    let at = |quality: f64| engine.state(Pair::PressureQuality, p, quality, 0.0).ok();
    Some((at(0.0)?, at(1.0)?))
}

/// Bounds of σ of a component that a flow of unknown quality touches.
fn bounds(
    evaluation: &Evaluation<'_>,
    flow: FlowId,
    k: ComponentId,
    liquid: &State,
    vapour: &State,
) -> Option<(f64, f64)> {
    let view = evaluation.view;
    let mut rest = evaluation.equations.components.get(k)?.clone();
    let leaves = rest.outlets.iter().any(|o| o.0 == flow);
    rest.inlets.retain(|i| i.0 != flow);
    rest.outlets.retain(|o| o.0 != flow);
    let balance = region::entropy(view, &rest, Bracket::Lenient).ok()?;
    let mass = view.mass(flow).ok()?.value;
    let state = view.model.process.flows[flow].material()?.state;
    let offset = view.offset(state).ok()?.1.value;
    let sign = if leaves { 1.0 } else { -1.0 };
    let sigma = |s: &State| {
        balance.outflow - balance.inflow + sign * mass * (s.entropy + offset)
    };
    let (a, b) = (sigma(liquid), sigma(vapour));
    Some((a.min(b), a.max(b)))
}
