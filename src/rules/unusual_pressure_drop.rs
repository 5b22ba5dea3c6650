//! unusual-pressure-drop

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase};
use crate::balance::Evaluation;
use crate::fluid::{Phase, Property};
use crate::model::{Decision, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::{Component, FlowId, Process};
use crate::quantity::Dimension;

/// Gas loses a larger share of its pressure in an exchanger or a combustor than is usual.
pub struct UnusualPressureDrop;

static INFO: RuleInfo = RuleInfo {
    name: "unusual-pressure-drop",
    title: "Relative pressure drop of gas",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "(p1 − p2)/p1 ≤ 5 % on the gas side of an exchanger, 6 % in a combustor",
    applies_to: "gas through exchangers and combustors",
    needs: "the pressures before and after",
    typical_cause: "fouling, a reading of another place, gauge taken for absolute pressure",
    source: "common practice; figures of this order in the cogeneration problem of Bejan, Tsatsaronis & Moran, \
             Thermal Design and Optimization, 1996",
    breaking: Case::Description(
        r#"{"components": {"recuperator": {"kind": "heat_exchanger",
              "sides": [{"in": ["gas-in"], "out": ["gas-out"]}, {"in": ["air-in"], "out": ["air-out"]}]}},
            "flows": {
              "gas-in": {"kind": "material", "to": "recuperator", "fluid": "air", "pressure": "1.20 bar", "temperature": "500.0 degC", "mass_flow": "10 kg/s"},
              "gas-out": {"kind": "material", "from": "recuperator", "fluid": "air", "pressure": "1.02 bar"},
              "air-in": {"kind": "material", "to": "recuperator", "fluid": "air", "pressure": "8.00 bar", "temperature": "250.0 degC", "mass_flow": "10 kg/s"},
              "air-out": {"kind": "material", "from": "recuperator", "fluid": "air", "pressure": "7.80 bar", "temperature": "400.0 degC", "mass_flow": "10 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"recuperator": {"kind": "heat_exchanger",
              "sides": [{"in": ["gas-in"], "out": ["gas-out"]}, {"in": ["air-in"], "out": ["air-out"]}]}},
            "flows": {
              "gas-in": {"kind": "material", "to": "recuperator", "fluid": "air", "pressure": "1.05 bar", "temperature": "500.0 degC", "mass_flow": "10 kg/s"},
              "gas-out": {"kind": "material", "from": "recuperator", "fluid": "air", "pressure": "1.02 bar"},
              "air-in": {"kind": "material", "to": "recuperator", "fluid": "air", "pressure": "8.00 bar", "temperature": "250.0 degC", "mass_flow": "10 kg/s"},
              "air-out": {"kind": "material", "from": "recuperator", "fluid": "air", "pressure": "7.80 bar", "temperature": "400.0 degC", "mass_flow": "10 kg/s"}}}"#,
    ),
};

impl Rule for UnusualPressureDrop {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        let process = &view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            let Some(most) = most(component) else { continue };
            for (detail, side) in component.sides.iter().enumerate() {
                let Some((first, last)) = ends(view, process, &side.inlets, &side.outlets) else { continue };
                let pressure = |f: FlowId| {
                    view.property(process.flows[f].material()?.state, Property::Pressure).ok()
                };
                if let (Some(before), Some(after)) = (pressure(first), pressure(last)) {
                    // Kept share of the pressure minus the least usual one.
                    let kept = after.times(&before.reciprocal());
                    let form = kept.map(kept.value - (1.0 - most), 1.0);
                    out.push(Margin {
                        pointer: Some(process.flows[last].pointer.clone()),
                        detail,
                        ..measure::lower_bound(me, Scope::Component(k), form, 1.0)
                    });
                }
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let view = evaluation.view;
        let process = &view.model.process;
        let component = &process.components[k];
        let found = most(component).zip(
            component.sides.get(margin.detail).and_then(|s| ends(view, process, &s.inlets, &s.outlets)),
        );
        let Some((most, (first, last))) = found else { return Explanation::default() };
        let drop = most - decision.value;
        Explanation {
            statement: format!(
                "From \"{}\" to \"{}\" the gas in {} loses {} % of its pressure; usual is at most {} %.",
                process.flows[first].name,
                process.flows[last].name,
                phrase::subject(evaluation, margin.scope),
                phrase::number(100.0 * drop),
                phrase::number(100.0 * most),
            ),
            value: Some(Figure { value: drop, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: most, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}

/// The largest usual share, where there is one.
fn most(component: &Component) -> Option<f64> {
    match component.kind {
        Kind::Combustor => Some(0.06),
        kind if kind.is_exchanger() => Some(0.05),
        _ => None,
    }
}

/// The first inlet and outlet of gas: in a combustor the pool's inlet of highest pressure is the
/// fuel's, so that the one of lowest pressure counts.
fn ends(
    view: View<'_>,
    process: &Process,
    inlets: &[FlowId],
    outlets: &[FlowId],
) -> Option<(FlowId, FlowId)> {
    let gas = |f: &&FlowId| {
        process.flows[**f].material().is_some_and(|m| {
            !measure::is_reversed(view, **f)
                && view
                    .state(m.state)
                    .is_ok_and(|s| matches!(s.state.phase, Phase::Vapour | Phase::Supercritical))
        })
    };
    let pressure = |f: FlowId| {
        let state = process.flows[f].material()?.state;
        view.property_value(state, Property::Pressure).ok()
    };
    let first = inlets.iter().filter(gas).copied().min_by(|&a, &b| {
        pressure(a).unwrap_or(f64::INFINITY).total_cmp(&pressure(b).unwrap_or(f64::INFINITY))
    })?;
    let last = outlets.iter().find(gas).copied()?;
    Some((first, last))
}
