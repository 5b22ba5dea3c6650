//! water-below-wet-bulb

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::Substance;
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::{Component, FlowId};
use crate::quantity::Dimension;

/// Water leaves a cooling tower below the wet-bulb temperature of the air that enters.
///
/// Water and air in direct contact approach the wet-bulb temperature of the entering air and do not
/// pass it; an indirect cooler may lawfully go lower.
pub struct WaterBelowWetBulb;

static INFO: RuleInfo = RuleInfo {
    name: "water-below-wet-bulb",
    title: "Wet-bulb limit",
    authority: Authority::Data,
    severity: Severity::Critical,
    aspect: Aspect::State,
    inequality: "T_water,out ≥ T_wb,in",
    applies_to: "cooling towers",
    needs: "temperatures, humidity of the entering air",
    typical_cause: "a humidity that was not measured at the inlet, recirculation",
    source: "Merkel, F.: VDI-Forschungsarbeiten 275 (1925)",
    breaking: Case::Description(
        r#"{"components": {"tower": {"kind": "cooling_tower"}},
            "flows": {
              "hot": {"kind": "material", "to": "tower", "fluid": "water", "pressure": "1.013 bar", "temperature": "38.0 degC", "mass_flow": "100 kg/s"},
              "cold": {"kind": "material", "from": "tower", "fluid": "water", "pressure": "1.013 bar", "temperature": "14.0 degC"},
              "air-in": {"kind": "material", "to": "tower", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "25.0 degC", "relative_humidity": "50.0 %"},
              "air-out": {"kind": "material", "from": "tower", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "33.0 degC", "relative_humidity": "95.0 %"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"tower": {"kind": "cooling_tower"}},
            "flows": {
              "hot": {"kind": "material", "to": "tower", "fluid": "water", "pressure": "1.013 bar", "temperature": "38.0 degC", "mass_flow": "100 kg/s"},
              "cold": {"kind": "material", "from": "tower", "fluid": "water", "pressure": "1.013 bar", "temperature": "26.0 degC"},
              "air-in": {"kind": "material", "to": "tower", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "25.0 degC", "relative_humidity": "50.0 %"},
              "air-out": {"kind": "material", "from": "tower", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "33.0 degC", "relative_humidity": "95.0 %"}}}"#,
    ),
};

impl Rule for WaterBelowWetBulb {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for component in view.model.process.components.iter().filter(|c| c.kind == Kind::CoolingTower) {
            for (f, water, limit) in pairs(view, component) {
                let throughput = water.value + limit.value;
                out.push(Margin {
                    pointer: Some(view.model.process.flows[f].pointer.clone()),
                    ..measure::lower_bound(me, Scope::Flow(f), water.minus(&limit), throughput)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let view = evaluation.view;
        let Scope::Flow(f) = margin.scope else { return Explanation::default() };
        let tower = view.model.process.flows[f].from.map(|k| &view.model.process.components[k]);
        let Some((_, water, limit)) =
            tower.and_then(|tower| pairs(view, tower).into_iter().find(|pair| pair.0 == f))
        else {
            return Explanation::default();
        };
        Explanation {
            statement: format!(
                "Water leaves as {} at {}; the wet bulb of the entering air is at {}{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(water.value, Dimension::Temperature),
                phrase::figure(limit.value, Dimension::Temperature),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: water.value, dimension: Dimension::Temperature }),
            limit: Some(Figure { value: limit.value, dimension: Dimension::Temperature }),
            ..Explanation::default()
        }
    }
}

/// Each outlet of water with its temperature, and the lowest wet bulb of the entering air.
fn pairs(view: View<'_>, component: &Component) -> Vec<(FlowId, Dual, Dual)> {
    let process = &view.model.process;
    let inlets = component.inlets.iter().filter(|&&f| physics::is_humid_air(process, f));
    let bulbs: Option<Vec<Dual>> = inlets.map(|&f| physics::wet_bulb(view, f)).collect();
    let lowest = bulbs.unwrap_or_default().into_iter().reduce(|a, b| if b.value < a.value { b } else { a });
    let Some(lowest) = lowest else { return Vec::new() };
    component
        .outlets
        .iter()
        .filter(|&&f| {
            process.flows[f].material().is_some_and(|m| {
                matches!(process.fluids[process.states[m.state].fluid].substance, Substance::Water)
            })
        })
        .filter_map(|&f| Some((f, physics::temperature(view, f)?, lowest.clone())))
        .collect()
}
