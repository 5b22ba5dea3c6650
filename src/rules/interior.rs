//! What the rules about the interior of an exchanger share.

use super::{Explanation, Figure, measure, phrase};
use crate::balance::{Evaluation, Profile};
use crate::model::{Decision, Family, Margin, Scope};
use crate::quantity::Dimension;

/// One margin an exchanger: its smallest temperature difference. A profile that cannot be had is
/// listed by the rule that asks for `blocked`.
pub(super) fn margins(
    wanted: fn(&Profile) -> bool,
    blocked: bool,
    me: usize,
    family: Family,
    evaluation: &Evaluation<'_>,
    out: &mut Vec<Margin>,
) {
    for k in 0..evaluation.components.len() {
        let scope = Scope::Component(k);
        match evaluation.profile(k) {
            Ok(Some(profile)) if wanted(profile) => {
                let pinch = &profile.pinch;
                let form = pinch.difference.clone();
                let throughput = pinch.hot + pinch.cold;
                out.push(Margin { family, ..measure::lower_bound(me, scope, form, throughput) });
            }
            Err(reason) if blocked => out.push(Margin {
                family,
                form: Err(reason.clone()),
                ..measure::lower_bound(me, scope, crate::model::Dual::default(), 0.0)
            }),
            _ => {}
        }
    }
}

/// The profile that a margin is about.
pub(super) fn of<'e>(evaluation: &'e Evaluation<'_>, margin: &Margin) -> Option<&'e Profile> {
    let Scope::Component(k) = margin.scope else { return None };
    evaluation.profile(k).ok().flatten()
}

/// A place in words: the duty passed up to it.
pub(super) fn place(evaluation: &Evaluation<'_>, profile: &Profile, x: f64) -> String {
    if profile.balanced {
        phrase::figure(x * profile.duty.value, phrase::energy_dimension(evaluation))
    } else {
        format!("{} %", phrase::number(100.0 * x))
    }
}

/// The end from which the duty is counted.
pub(super) const fn origin(profile: &Profile) -> &'static str {
    if profile.parallel { "the inlet end" } else { "the cold end" }
}

/// Where in the exchanger a place is, as share of the duty.
pub(super) fn position(profile: &Profile, x: f64) -> String {
    const END: f64 = 1e-4;
    let (first, last) = (origin(profile), if profile.parallel { "the outlet end" } else { "the hot end" });
    if x <= END {
        format!("at {first}")
    } else if x >= 1.0 - END {
        format!("at {last}")
    } else {
        format!("at {} % of the duty from {first}", phrase::number(100.0 * x))
    }
}

/// The explanation with the pinch, its place and the crossed section.
pub(super) fn explain(evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation {
    let Some(profile) = of(evaluation, margin) else { return Explanation::default() };
    let dimension = Dimension::TemperatureDifference;
    let pinch = &profile.pinch;
    let subject = phrase::subject(evaluation, margin.scope);
    let hot = phrase::figure(pinch.hot, Dimension::Temperature);
    let cold = phrase::figure(pinch.cold, Dimension::Temperature);
    let at = position(profile, pinch.place);
    let mut statement = if decision.value < 0.0 {
        format!(
            "Inside {subject}, what is heated ({cold}) is {} hotter than what heats it ({hot}) {at}{}.",
            phrase::figure(-decision.value, dimension),
            phrase::sureness(decision),
        )
    } else {
        format!(
            "Inside {subject}, what heats ({hot}) is {} hotter than what it heats ({cold}) {at}, \
             nowhere less{}.",
            phrase::figure(decision.value, dimension),
            phrase::sureness(decision),
        )
    };
    if let Some(crossing) = &profile.crossing {
        let sigma = phrase::figure(crossing.generation.value, phrase::entropy_dimension(evaluation));
        statement.push_str(&format!(
            " From {} to {} heat would run uphill",
            place(evaluation, profile, crossing.from),
            place(evaluation, profile, crossing.to),
        ));
        statement.push_str(&if crossing.generation.value < 0.0 {
            format!("; that section generates {sigma}.")
        } else {
            format!(", which only friction hides in the {sigma} that the section generates.")
        });
    }
    Explanation {
        statement,
        value: Some(Figure { value: decision.value, dimension }),
        limit: Some(Figure { value: 0.0, dimension }),
        ..Explanation::default()
    }
}

/// A boiler whose curves cross inside though both ends and the whole are in order.
pub(super) const CROSSED: &str = r#"{"fluids": {"gas": {"kind": "perfect_gas", "molar_mass": "28.6 g/mol", "specific_heat": "1.08 kJ/(kg K)"}},
            "components": {"boiler": {"kind": "heat_exchanger", "arrangement": "counterflow",
              "sides": [{"in": ["gas-in"], "out": ["gas-out"]}, {"in": ["feedwater"], "out": ["steam"]}]}},
            "flows": {
              "gas-in": {"kind": "material", "to": "boiler", "fluid": "gas", "pressure": "1.02 bar", "temperature": "530.0 degC", "mass_flow": "55.5556 kg/s"},
              "gas-out": {"kind": "material", "from": "boiler", "fluid": "gas", "pressure": "1.02 bar"},
              "feedwater": {"kind": "material", "to": "boiler", "fluid": "water", "pressure": "40.0 bar", "temperature": "105.0 degC", "mass_flow": "10 kg/s"},
              "steam": {"kind": "material", "from": "boiler", "fluid": "water", "pressure": "40.0 bar", "quality": 1}}}"#;

/// The same boiler with more and hotter gas.
pub(super) const UNCROSSED: &str = r#"{"fluids": {"gas": {"kind": "perfect_gas", "molar_mass": "28.6 g/mol", "specific_heat": "1.08 kJ/(kg K)"}},
            "components": {"boiler": {"kind": "heat_exchanger", "arrangement": "counterflow",
              "sides": [{"in": ["gas-in"], "out": ["gas-out"]}, {"in": ["feedwater"], "out": ["steam"]}]}},
            "flows": {
              "gas-in": {"kind": "material", "to": "boiler", "fluid": "gas", "pressure": "1.02 bar", "temperature": "600.0 degC", "mass_flow": "60 kg/s"},
              "gas-out": {"kind": "material", "from": "boiler", "fluid": "gas", "pressure": "1.02 bar"},
              "feedwater": {"kind": "material", "to": "boiler", "fluid": "water", "pressure": "40.0 bar", "temperature": "105.0 degC", "mass_flow": "10 kg/s"},
              "steam": {"kind": "material", "from": "boiler", "fluid": "water", "pressure": "40.0 bar", "quality": 1}}}"#;
