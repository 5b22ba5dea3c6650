//! Numbers and names in the sentences of rules, always in metric units.

use crate::balance::Evaluation;
use crate::model::Scope;
use crate::process::Basis;
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
