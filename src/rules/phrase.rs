//! Numbers and names in the sentences of rules, always in metric units.

use crate::balance::Evaluation;
use crate::model::{Decision, Scope};
use crate::process::{Basis, StateId};
use crate::quantity::{Dimension, UnitSystem, display};

/// A figure with four significant digits and its metric unit.
pub fn figure(value: f64, dimension: Dimension) -> String {
    let scale = display(dimension, UnitSystem::Metric);
    let shown = if dimension == Dimension::Temperature {
        // Two decimals of a degree, whatever the magnitude.
        return format!("{:.2} {}", scale.from_si(value), scale.code);
    } else {
        number(scale.from_si(value))
    };
    if scale.code == "1" { shown } else { format!("{shown} {}", scale.code) }
}

/// A number with four significant digits.
pub fn number(x: f64) -> String {
    if x == 0.0 || !x.is_finite() {
        return "0".to_owned();
    }
    let magnitude = x.abs().log10().floor() as i32;
    if !(-4..7).contains(&magnitude) {
        return format!("{x:.3e}");
    }
    let decimals = (3 - magnitude).max(0) as usize;
    let text = format!("{x:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// A sentence with a capital at its beginning.
pub fn sentence(text: String) -> String {
    match text.chars().next() {
        Some(first) if first.is_lowercase() => first.to_uppercase().chain(text.chars().skip(1)).collect(),
        _ => text,
    }
}

/// A probability in per cent, with its extremes in words.
pub fn probability(p: f64) -> String {
    if p < 1e-6 {
        "less than one in a million".to_owned()
    } else if p < 1e-3 {
        format!("{p:.1e}")
    } else {
        format!("{:.2} %", 100.0 * p)
    }
}

/// Energy flow or energy, by the basis.
pub fn energy_dimension(evaluation: &Evaluation<'_>) -> Dimension {
    match evaluation.view.model.process.basis {
        Basis::Rate => Dimension::Power,
        Basis::Amount => Dimension::Energy,
    }
}

/// Entropy rate or entropy, by the basis.
pub fn entropy_dimension(evaluation: &Evaluation<'_>) -> Dimension {
    match evaluation.view.model.process.basis {
        Basis::Rate => Dimension::EntropyRate,
        Basis::Amount => Dimension::Entropy,
    }
}

/// Mass flow or mass, by the basis.
pub fn mass_dimension(evaluation: &Evaluation<'_>) -> Dimension {
    match evaluation.view.model.process.basis {
        Basis::Rate => Dimension::MassFlow,
        Basis::Amount => Dimension::Mass,
    }
}

/// What a scope is called in a sentence.
pub fn subject(evaluation: &Evaluation<'_>, scope: Scope) -> String {
    let process = &evaluation.view.model.process;
    match scope {
        Scope::Component(k) => {
            let c = &process.components[k];
            format!("{} \"{}\"", c.kind.name().replace('_', " "), c.name)
        }
        Scope::Group(g) => format!("group \"{}\"", process.groups[g].name),
        Scope::Plant => "the plant".to_owned(),
        Scope::Flow(f) => format!("flow \"{}\"", process.flows[f].name),
        Scope::Description => "the description".to_owned(),
    }
}

/// How sure a figure is, to be put behind it: nothing where no uncertainty enters.
pub fn sureness(decision: &Decision) -> String {
    if decision.u > 0.0 { format!(" (z = {})", number(decision.z)) } else { String::new() }
}

/// What a state is called in a sentence.
pub fn state(evaluation: &Evaluation<'_>, state: StateId) -> String {
    match super::measure::scope_of_state(&evaluation.view.model.process, state) {
        Scope::Component(k) => format!("the content of {}", subject(evaluation, Scope::Component(k))),
        Scope::Description => "a state of the description".to_owned(),
        scope => subject(evaluation, scope),
    }
}

/// What enters and leaves, what is missing, and how much that is of the throughput.
pub fn imbalance(
    evaluation: &Evaluation<'_>,
    decision: &Decision,
    scope: Scope,
    what: &str,
    sums: (f64, f64, f64),
    dimension: Dimension,
) -> String {
    let (inflow, outflow, throughput) = sums;
    let share = if throughput > 0.0 { 100.0 * decision.value.abs() / throughput } else { 0.0 };
    let (verb, size) = if decision.at_limit {
        ("equals", "no difference")
    } else if decision.value < 0.0 {
        ("exceeds", "more out than in")
    } else {
        ("falls short of", "more in than out")
    };
    sentence(format!(
        "{what} leaving {} ({}) {verb} {what} entering ({}): {} {size}, {} % of the throughput{}.",
        subject(evaluation, scope),
        figure(outflow, dimension),
        figure(inflow, dimension),
        figure(decision.value.abs(), dimension),
        number(share),
        sureness(decision),
    ))
}
