//! boundary-temperature-out-of-bounds

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::{Boundary, Carried, ComponentId, FlowId};
use crate::quantity::Dimension;

/// Heat leaves a device at a temperature above everything inside, or enters below everything inside.
///
/// Where nothing but heat drives the heat, the surface that it crosses lies between what gives it and
/// what takes it.
pub struct BoundaryTemperatureOutOfBounds;

static INFO: RuleInfo = RuleInfo {
    name: "boundary-temperature-out-of-bounds",
    title: "Temperature of a surface",
    authority: Authority::Law,
    severity: Severity::Major,
    aspect: Aspect::Entropy,
    inequality: "T_b ≤ hottest inside for heat that leaves, T_b ≥ coldest inside for heat that enters",
    applies_to: "components without work, reaction or radiation",
    needs: "temperatures of the flows and of the surface",
    typical_cause: "the temperature of a source or of the surroundings in place of that of the surface",
    source: "second law, statement of Clausius; Bejan, Tsatsaronis & Moran, Thermal Design and Optimization, 1996",
    breaking: Case::Description(
        r#"{"components": {"cooler": {"kind": "control_volume"}},
            "flows": {
              "in": {"kind": "material", "to": "cooler", "fluid": "water", "pressure": "5.00 bar", "temperature": "80.0 degC", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "cooler", "fluid": "water", "pressure": "5.00 bar", "temperature": "60.0 degC", "mass_flow": "1 kg/s"},
              "heat": {"kind": "heat", "from": "cooler", "temperature": "95.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"cooler": {"kind": "control_volume"}},
            "flows": {
              "in": {"kind": "material", "to": "cooler", "fluid": "water", "pressure": "5.00 bar", "temperature": "80.0 degC", "mass_flow": "1 kg/s"},
              "out": {"kind": "material", "from": "cooler", "fluid": "water", "pressure": "5.00 bar", "temperature": "60.0 degC", "mass_flow": "1 kg/s"},
              "heat": {"kind": "heat", "from": "cooler", "temperature": "50.0 degC"}}}"#,
    ),
};

impl Rule for BoundaryTemperatureOutOfBounds {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        let process = &view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            let pool = component.sides.iter().any(|s| s.pool);
            if physics::has_work(process, component) || pool || component.holdup.is_some() {
                continue;
            }
            for (flows, entering) in [(&component.inlets, true), (&component.outlets, false)] {
                for &f in flows {
                    let Some((surface, bound)) = bound(evaluation, k, f, entering) else { continue };
                    let throughput = surface.value + bound.value;
                    let form = if entering { surface.minus(&bound) } else { bound.minus(&surface) };
                    out.push(Margin {
                        pointer: Some(format!("{}/temperature", process.flows[f].pointer)),
                        ..measure::lower_bound(me, Scope::Component(k), form, throughput)
                    });
                }
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let process = &evaluation.view.model.process;
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let component = &process.components[k];
        let at = |f: &FlowId| {
            margin.pointer.as_deref() == Some(format!("{}/temperature", process.flows[*f].pointer).as_str())
        };
        let entering = component.inlets.iter().any(at);
        let found = component.inlets.iter().chain(&component.outlets).find(|f| at(f));
        let Some((f, (surface, bound))) =
            found.and_then(|&f| bound(evaluation, k, f, entering).map(|pair| (f, pair)))
        else {
            return Explanation::default();
        };
        let (verb, end) = if entering { ("enters", "coldest") } else { ("leaves", "hottest") };
        Explanation {
            statement: format!(
                "Heat \"{}\" {verb} {} at {}, whose {end} part is at {}{}.",
                process.flows[f].name,
                phrase::subject(evaluation, margin.scope),
                phrase::figure(surface.value, Dimension::Temperature),
                phrase::figure(bound.value, Dimension::Temperature),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: surface.value, dimension: Dimension::Temperature }),
            limit: Some(Figure { value: bound.value, dimension: Dimension::Temperature }),
            ..Explanation::default()
        }
    }
}

/// The temperature of the surface that a heat flow crosses, and of the coldest (for heat that
/// enters) or hottest part of the component. `None` where either is not known.
fn bound(evaluation: &Evaluation<'_>, k: ComponentId, f: FlowId, entering: bool) -> Option<(Dual, Dual)> {
    let view = evaluation.view;
    let process = &view.model.process;
    let Carried::Heat(q, Boundary::Isothermal(t)) = process.flows[f].carried else { return None };
    if view.var(q).ok()?.value <= 0.0 {
        return None;
    }
    let surface = view.var(t).ok()?;
    let mut extreme: Option<Dual> = None;
    let mut material = false;
    let component = &process.components[k];
    for &other in component.inlets.iter().chain(&component.outlets).filter(|&&other| other != f) {
        let t = match &process.flows[other].carried {
            Carried::Material(_) => {
                material = true;
                physics::temperature(view, other)?
            }
            Carried::Heat(_, Boundary::Isothermal(t)) => view.var(*t).ok()?,
            Carried::Heat(_, Boundary::Sliding(a, b)) => {
                let (a, b) = (view.var(*a).ok()?, view.var(*b).ok()?);
                if (a.value < b.value) == entering { a } else { b }
            }
            Carried::Heat(_, Boundary::Unknown) | Carried::Radiation(..) | Carried::Work(..) => return None,
        };
        let better = extreme.as_ref().is_none_or(|e| if entering { t.value < e.value } else { t.value > e.value });
        if better {
            extreme = Some(t);
        }
    }
    if material { Some((surface, extreme?)) } else { None }
}
