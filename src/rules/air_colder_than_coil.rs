//! air-colder-than-coil

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::{Carried, Component};
use crate::quantity::Dimension;

/// Air leaves a cooling coil colder than the coolant ever is.
///
/// Without work, nothing is cooled below what cools it.
pub struct AirColderThanCoil;

static INFO: RuleInfo = RuleInfo {
    name: "air-colder-than-coil",
    title: "Air against its coolant",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "T_air,out ≥ coldest coolant",
    applies_to: "cooling coils without other heat",
    needs: "temperatures of air and coolant",
    typical_cause: "swapped readings, supply and return mixed up",
    source: "second law, statement of Clausius",
    breaking: Case::Description(
        r#"{"components": {"coil": {"kind": "cooling_coil", "sides": [{"in": ["supply"], "out": ["return"]}]}},
            "flows": {
              "supply": {"kind": "material", "to": "coil", "fluid": "water", "pressure": "4.00 bar", "temperature": "8.0 degC"},
              "return": {"kind": "material", "from": "coil", "fluid": "water", "pressure": "3.80 bar", "temperature": "13.0 degC"},
              "air-in": {"kind": "material", "to": "coil", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "27.0 degC", "relative_humidity": "50.0 %", "dry_air_mass_flow": "5 kg/s"},
              "air-out": {"kind": "material", "from": "coil", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "6.0 degC", "relative_humidity": "95.0 %"},
              "condensate": {"kind": "material", "from": "coil", "fluid": "water", "pressure": "1.013 bar", "temperature": "10.0 degC"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"coil": {"kind": "cooling_coil", "sides": [{"in": ["supply"], "out": ["return"]}]}},
            "flows": {
              "supply": {"kind": "material", "to": "coil", "fluid": "water", "pressure": "4.00 bar", "temperature": "8.0 degC"},
              "return": {"kind": "material", "from": "coil", "fluid": "water", "pressure": "3.80 bar", "temperature": "13.0 degC"},
              "air-in": {"kind": "material", "to": "coil", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "27.0 degC", "relative_humidity": "50.0 %", "dry_air_mass_flow": "5 kg/s"},
              "air-out": {"kind": "material", "from": "coil", "fluid": "humid air", "pressure": "1.013 bar", "temperature": "14.0 degC", "relative_humidity": "95.0 %"},
              "condensate": {"kind": "material", "from": "coil", "fluid": "water", "pressure": "1.013 bar", "temperature": "14.0 degC"}}}"#,
    ),
};

impl Rule for AirColderThanCoil {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        for (k, component) in view.model.process.components.iter().enumerate() {
            if let Some((air, coolant)) = temperatures(view, component) {
                let throughput = air.value + coolant.value;
                out.push(Margin {
                    detail: 1,
                    ..measure::lower_bound(me, Scope::Component(k), air.minus(&coolant), throughput)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let Some((air, coolant)) = temperatures(evaluation.view, &evaluation.view.model.process.components[k])
        else {
            return Explanation::default();
        };
        Explanation {
            statement: format!(
                "Air leaves {} at {}; its coolant is nowhere below {}{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(air.value, Dimension::Temperature),
                phrase::figure(coolant.value, Dimension::Temperature),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: air.value, dimension: Dimension::Temperature }),
            limit: Some(Figure { value: coolant.value, dimension: Dimension::Temperature }),
            ..Explanation::default()
        }
    }
}

/// The coldest air that leaves, and the coldest end of the coolant: the sides that hold no air.
fn temperatures(view: View<'_>, component: &Component) -> Option<(Dual, Dual)> {
    let process = &view.model.process;
    let heat = component
        .inlets
        .iter()
        .chain(&component.outlets)
        .any(|&f| matches!(process.flows[f].carried, Carried::Heat(..) | Carried::Radiation(..)));
    if component.kind != Kind::CoolingCoil || heat {
        return None;
    }
    let coldest = |a: Dual, b: Dual| if b.value < a.value { b } else { a };
    let (mut air, mut coolant): (Option<Dual>, Option<Dual>) = (None, None);
    for side in &component.sides {
        let flows = side.inlets.iter().chain(&side.outlets);
        if flows.clone().any(|&f| physics::is_humid_air(process, f)) {
            for &f in side.outlets.iter().filter(|&&f| physics::is_humid_air(process, f)) {
                let t = physics::temperature(view, f)?;
                air = Some(air.map_or(t.clone(), |a| coldest(a, t)));
            }
        } else {
            for &f in flows {
                let t = physics::temperature(view, f)?;
                coolant = Some(coolant.map_or(t.clone(), |c| coldest(c, t)));
            }
        }
    }
    air.zip(coolant)
}
