//! unusual-approach

use super::{Aspect, Authority, Case, Explanation, Figure, Rule, RuleInfo, Severity, interior, measure, phrase};
use crate::balance::{Evaluation, Profile};
use crate::fluid::{Phase, Substance};
use crate::model::{Decision, Dual, Margin, Scope};
use crate::process::kinds::Kind;
use crate::quantity::Dimension;

/// Streams come closer to each other inside an exchanger than is usual.
///
/// The bound is the policy's `minimum_approach`, or else the lower end of what is common for the
/// phases that meet at the pinch.
pub struct UnusualApproach;

static INFO: RuleInfo = RuleInfo {
    name: "unusual-approach",
    title: "Smallest temperature difference of an exchanger",
    authority: Authority::Practice,
    severity: Severity::Advice,
    aspect: Aspect::Practice,
    inequality: "ΔT ≥ 20 K gas to gas, 10 K gas to liquid, 8 K gas to boiling liquid, 1 K liquid to liquid, \
                 3 K at condensation and evaporation, 1 K below 120 K, or the policy's minimum approach",
    applies_to: "exchangers with a temperature profile that is lawful",
    needs: "the temperature profile",
    typical_cause: "a reading, fouling not allowed for, a claim for a very large surface",
    source: "common practice in handbooks of heat transfer",
    breaking: Case::Description(
        r#"{"components": {"exchanger": {"kind": "heat_exchanger", "arrangement": "counterflow",
              "sides": [{"in": ["hot-in"], "out": ["hot-out"]}, {"in": ["cold-in"], "out": ["cold-out"]}]}},
            "flows": {
              "hot-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "90.0 degC", "mass_flow": "10 kg/s"},
              "hot-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "6.0 bar", "temperature": "60.0 degC", "mass_flow": "10 kg/s"},
              "cold-in": {"kind": "material", "to": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "15.0 degC"},
              "cold-out": {"kind": "material", "from": "exchanger", "fluid": "water", "pressure": "4.0 bar", "temperature": "89.7 degC"}}}"#,
    ),
    keeping: Case::Description(interior::UNCROSSED),
};

impl Rule for UnusualApproach {
    fn info(&self) -> &'static RuleInfo {
        &INFO
    }

    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>) {
        for k in 0..evaluation.components.len() {
            if let Ok(Some(profile)) = evaluation.profile(k)
                && profile.pinch.difference.value >= 0.0
                && let Some((bound, _)) = bound(evaluation, k, profile)
            {
                let form = profile.pinch.difference.clone().minus(&Dual::constant(bound));
                let throughput = profile.pinch.hot + profile.pinch.cold;
                out.push(measure::lower_bound(me, Scope::Component(k), form, throughput));
            }
        }
    }

    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
        let Scope::Component(k) = margin.scope else { return Explanation::default() };
        let Some((profile, (bound, what))) = interior::of(evaluation, margin)
            .and_then(|profile| Some((profile, bound(evaluation, k, profile)?)))
        else {
            return Explanation::default();
        };
        let dimension = Dimension::TemperatureDifference;
        let difference = decision.value + bound;
        Explanation {
            statement: format!(
                "Inside {} the streams come as close as {} {}; {what} at least {}{}.",
                phrase::subject(evaluation, margin.scope),
                phrase::figure(difference, dimension),
                interior::position(profile, profile.pinch.place),
                phrase::figure(bound, dimension),
                if what.starts_with("usual") { " (common practice)" } else { "" },
            ),
            value: Some(Figure { value: difference, dimension }),
            limit: Some(Figure { value: bound, dimension }),
            ..Explanation::default()
        }
    }
}

/// The smallest usual approach, K, and the words before it; `None` where nothing is usual.
fn bound(evaluation: &Evaluation<'_>, k: usize, profile: &Profile) -> Option<(f64, &'static str)> {
    let process = &evaluation.view.model.process;
    if let Some(own) = process.policy.minimum_approach {
        return Some((own, "the policy asks for"));
    }
    let [hot, cold] = profile.phases(evaluation.view)?;
    let kind = process.components[k].kind;
    let gas = |p: Phase| matches!(p, Phase::Vapour | Phase::Supercritical);
    let boiling = cold == Phase::TwoPhase || kind == Kind::Evaporator && cold == Phase::Liquid;
    // Cold boxes are built for differences that would be wasteful elsewhere.
    if profile.pinch.hot < 120.0 {
        return Some((1.0, "usual below 120 K is"));
    }
    let pure = profile.fluids().is_some_and(|(h, c)| {
        [h, c].iter().any(|&f| matches!(process.fluids[f].substance, Substance::Pure))
    });
    Some(match (gas(hot), gas(cold)) {
        (true, _) if boiling && !pure => (8.0, "usual between gas and boiling liquid is"),
        _ if hot == Phase::TwoPhase || boiling || kind == Kind::Condenser => {
            (3.0, "usual at condensation and evaporation is")
        }
        (true, true) => (20.0, "usual between gas and gas is"),
        (true, false) | (false, true) => (10.0, "usual between gas and liquid is"),
        // Plates are built for a few kelvin.
        (false, false) => (1.0, "usual between liquid and liquid is"),
    })
}
