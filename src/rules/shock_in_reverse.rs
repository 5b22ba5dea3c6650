//! shock-in-reverse

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, measure, phrase, physics};
use crate::balance::Evaluation;
use crate::fluid::{Phase, Property};
use crate::model::{Decision, Dual, Margin, Scope, View};
use crate::process::kinds::Kind;
use crate::process::{Component, FlowId};
use crate::quantity::Dimension;

/// In a duct of constant section a gas goes from below to above the speed of sound.
///
/// Friction and shocks drive the flow in an adiabatic duct towards the speed of sound, where its
/// entropy is greatest; from below it cannot pass beyond.
pub struct ShockInReverse;

static INFO: RuleInfo = RuleInfo {
    name: "shock-in-reverse",
    title: "Through the speed of sound",
    authority: Authority::Law,
    severity: Severity::Critical,
    aspect: Aspect::Entropy,
    inequality: "M2 ≤ 1 where M1 < 1, at equal mass flux",
    applies_to: "adiabatic pipes with a gas and both speeds given, whose mass flux is the same at both ends",
    needs: "states and speeds at both ends",
    typical_cause: "swapped taps, a wrong section",
    source: "Fanno line; Shapiro, The Dynamics and Thermodynamics of Compressible Fluid Flow, 1953",
    breaking: Case::Description(
        r#"{"components": {"duct": {"kind": "pipe"}},
            "flows": {
              "before": {"kind": "material", "to": "duct", "fluid": "air", "pressure": "4.000 bar", "temperature": "392.93 K", "velocity": "119.21 m/s", "mass_flow": "1 kg/s"},
              "after": {"kind": "material", "from": "duct", "fluid": "air", "pressure": "0.670 bar", "temperature": "275.86 K", "velocity": "499.44 m/s", "mass_flow": "1 kg/s"}}}"#,
    ),
    keeping: Case::Description(
        r#"{"components": {"duct": {"kind": "pipe"}},
            "flows": {
              "before": {"kind": "material", "to": "duct", "fluid": "air", "pressure": "4.000 bar", "temperature": "392.93 K", "velocity": "119.21 m/s", "mass_flow": "1 kg/s"},
              "after": {"kind": "material", "from": "duct", "fluid": "air", "pressure": "1.949 bar", "temperature": "373.27 K", "velocity": "232.34 m/s", "mass_flow": "1 kg/s"}}}"#,
    ),
};

impl Rule for ShockInReverse {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        let view = evaluation.view;
        let process = &view.model.process;
        for (k, component) in process.components.iter().enumerate() {
            if component.kind != Kind::Pipe || !measure::is_adiabatic(process, component) {
                continue;
            }
            if let Some((before, after)) = numbers(view, component)
                && before.value < 1.0
            {
                let throughput = 1.0 + after.value;
                out.push(Margin {
                    detail: 1,
                    ..measure::lower_bound(me, Scope::Component(k), Dual::constant(1.0).minus(&after), throughput)
                });
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let Some((before, after)) = numbers(evaluation.view, &evaluation.view.model.process.components[k])
        else {
            return Explanation::default();
        };
        Explanation {
            statement: format!(
                "The gas in {} goes from Mach {} to Mach {} at the same mass flux{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::number(before.value),
                phrase::number(after.value),
                phrase::sureness(decision),
            ),
            value: Some(Figure { value: after.value, dimension: Dimension::Fraction }),
            limit: Some(Figure { value: 1.0, dimension: Dimension::Fraction }),
            ..Explanation::default()
        }
    }
}

/// Share by which the mass flux may differ between the ends of a duct of constant section.
const SAME_FLUX: f64 = 0.02;

/// Mach numbers before and after, where the mass flux is the same.
fn numbers(view: View<'_>, component: &Component) -> Option<(Dual, Dual)> {
    let (before, after) = measure::single_passage(view, component)?;
    let (m1, flux1) = mach(view, before)?;
    let (m2, flux2) = mach(view, after)?;
    ((flux1 / flux2 - 1.0).abs() <= SAME_FLUX).then_some((m1, m2))
}

/// Mach number and mass flux of a gas whose speed is given.
fn mach(view: View<'_>, f: FlowId) -> Option<(Dual, f64)> {
    let m = view.model.process.flows[f].material()?;
    let speed = view.var(m.velocity?).ok()?;
    if view.state(m.state).ok()?.state.phase != Phase::Vapour {
        return None;
    }
    let sound = physics::by_state(view, m.state, physics::sound_speed)?;
    let volume = view.property(m.state, Property::Volume).ok()?;
    Some((speed.times(&sound.reciprocal()), speed.value / volume.value))
}
