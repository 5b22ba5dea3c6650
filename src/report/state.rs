//! The answer to a question for one state.

use super::figure::{Figure, Named};
use super::{AssumptionReport, Formulation};
use crate::balance::exergy::Surroundings;
use crate::diagnostic::{Code, Diagnostic};
use crate::evidence::Sensitivity;
use crate::fluid::{Property, PropertyError};
use crate::model::{Blocked, Dual, View};
use crate::quantity::{Dimension, UnitSystem};
use serde::Serialize;

/// One state of a fluid.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(utoipa::ToSchema))]
pub struct StateReport {
    /// The fluid.
    pub fluid: String,
    /// `liquid`, `vapour`, `two-phase`, `supercritical` or `solid`.
    pub phase: &'static str,
    /// Properties by name, each with its unit and standard uncertainty.
    pub properties: Named<Figure>,
    /// Specific exergy by its parts, against the environment.
    #[serde(skip_serializing_if = "Named::is_empty")]
    pub exergy: Named<Figure>,
    /// The environment that the exergy is counted from.
    pub environment: Named<Figure>,
    /// Where the properties come from.
    pub formulation: Formulation,
    /// What was assumed because it was not given.
    pub assumptions: Vec<AssumptionReport>,
}

impl StateReport {
    /// Draws up the answer for the only state of a bound process.
    ///
    /// # Errors
    /// The state lies outside the formulation, or cannot be computed.
    pub fn assemble(
        view: View<'_>,
        sensitivity: &mut Sensitivity,
        units: UnitSystem,
    ) -> Result<StateReport, Diagnostic> {
        let model = view.model;
        let process = &model.process;
        let spec = &process.states[0];
        let fluid = &process.fluids[spec.fluid];
        let value = view.state(0).map_err(|blocked| fault(view, &blocked))?;
        let state = value.state;
        let mut figure = |form: &Dual, dimension: Dimension| {
            Figure::new(form.value, sensitivity.uncertainty(model, form), dimension, units)
        };
        let mut properties = Named::default();
        for (word, property, dimension) in [
            ("temperature", Property::Temperature, Dimension::Temperature),
            ("pressure", Property::Pressure, Dimension::Pressure),
            ("enthalpy", Property::Enthalpy, Dimension::SpecificEnergy),
            ("entropy", Property::Entropy, Dimension::SpecificEntropy),
            ("specific_volume", Property::Volume, Dimension::SpecificVolume),
        ] {
            if let Ok(x) = view.property(0, property) {
                properties.push(word, figure(&x, dimension));
            }
        }
        let bare = |x: f64, dimension| Figure::new(x, 0.0, dimension, units);
        if let (Ok(h), Ok(p), Ok(v)) = (
            view.property(0, Property::Enthalpy),
            view.property(0, Property::Pressure),
            view.property(0, Property::Volume),
        ) {
            let u = h.minus(&p.times(&v));
            properties.push("internal_energy", figure(&u, Dimension::SpecificEnergy));
        }
        if state.volume > 0.0
            && let Ok(v) = view.property(0, Property::Volume)
        {
            properties.push("density", figure(&v.reciprocal(), Dimension::Density));
        }
        if let Some(cp) = state.heat_capacity() {
            // The formulation's own uncertainty; the derivative of cp is not at hand.
            let u = fluid.engine.relative_uncertainty(&state) * cp;
            properties.push("heat_capacity", Figure::new(cp, u, Dimension::SpecificEntropy, units));
        }
        if state.quality.is_some()
            && let Ok(x) = view.property(0, Property::Quality)
        {
            properties.push("quality", figure(&x, Dimension::Fraction));
        }
        if let Ok((t, slope)) = fluid.engine.saturation_temperature(state.pressure, 1.0)
            && let Ok(p) = view.property(0, Property::Pressure)
        {
            properties.push("saturation_temperature", figure(&p.map(t, slope), Dimension::Temperature));
        }
        if spec.c.is_some()
            && let Ok(c) = view.composition(0)
        {
            let word = match fluid.substance {
                crate::fluid::Substance::HumidAir => "humidity_ratio",
                crate::fluid::Substance::CombustionGas(_) => "air_ratio",
                _ => "salinity",
            };
            properties.push(word, figure(&c, Dimension::Fraction));
        }
        if let Some(m) = fluid.engine.molar_mass(value.composition) {
            properties.push("molar_mass", bare(m, Dimension::MolarMass));
        }
        let mut exergy = Named::default();
        if let Ok(parts) = Surroundings::new(process).parts(view, 0) {
            let dimension = Dimension::SpecificEnergy;
            for (word, part) in [("thermal", &parts.thermal), ("mechanical", &parts.mechanical)] {
                if let Some(part) = part {
                    exergy.push(word, figure(part, dimension));
                }
            }
            exergy.push("physical", figure(&parts.physical, dimension));
            if let Some(chemical) = parts.chemical {
                exergy.push("chemical", bare(chemical, dimension));
            }
            exergy.push("total", figure(&parts.total, dimension));
        }
        let mut environment = Named::default();
        environment.push("temperature", bare(process.environment.temperature, Dimension::Temperature));
        environment.push("pressure", bare(process.environment.pressure, Dimension::Pressure));
        let p = fluid.engine.provenance();
        Ok(StateReport {
            fluid: fluid.name.clone(),
            phase: state.phase.text(),
            properties,
            exergy,
            environment,
            formulation: Formulation { formulation: p.formulation, source: p.source, range: p.range },
            assumptions: process
                .assumptions
                .iter()
                .map(|a| AssumptionReport { r#where: a.pointer.clone(), statement: a.statement.clone() })
                .collect(),
        })
    }

    /// The answer as plain text.
    pub fn to_text(&self) -> String {
        let mut lines = vec![format!("{}, {}", super::prose::clean(&self.fluid), self.phase)];
        for (title, figures) in [
            ("Properties", &self.properties),
            ("Specific exergy", &self.exergy),
            ("Environment", &self.environment),
        ] {
            if figures.is_empty() {
                continue;
            }
            lines.push(format!("\n{title}"));
            let width = figures.0.iter().map(|(name, _)| name.chars().count()).max().unwrap_or(0);
            for (name, figure) in &figures.0 {
                lines.push(format!("  {:width$}  {}", super::prose::words(name), figure.in_words()));
            }
        }
        let wrapped = |text: &str| super::wrapped_at(super::SHORT_WIDTH, text, 0, 2);
        let f = &self.formulation;
        lines.push(format!(
            "\n{}",
            wrapped(&format!("Formulation: {}; {}. Range: {}", f.formulation, f.source, f.range))
        ));
        for a in &self.assumptions {
            lines.push(wrapped(&super::prose::clean(&format!("Assumed: {}", a.statement))));
        }
        lines.join("\n") + "\n"
    }

    /// The answer as JSON.
    pub fn to_json(&self) -> Vec<u8> {
        // Only text keys: this cannot fail.
        serde_json::to_vec(self).unwrap_or_default()
    }
}

/// The member of the question that a fault is about, where it was given as such.
fn place(view: View<'_>, error: Option<&PropertyError>) -> String {
    let Some(PropertyError::OutOfRange { quantity, .. }) = error else { return String::new() };
    let member = format!("/{}", quantity.replace(' ', "_"));
    let mut sources = view.model.process.sources.iter();
    if sources.any(|s| s.pointer == member || s.pointer.starts_with(&format!("{member}/"))) {
        member
    } else {
        String::new()
    }
}

fn fault(view: View<'_>, blocked: &Blocked) -> Diagnostic {
    match blocked {
        Blocked::State(s) => {
            let error = view.workspace.state_error(*s);
            let code = match error {
                Some(PropertyError::NoConvergence) => Code::NoConvergence,
                Some(PropertyError::UnsupportedPair(_)) => Code::UnsupportedPair,
                _ => Code::OutOfRange,
            };
            let message =
                error.map_or_else(|| "the state cannot be computed".to_owned(), ToString::to_string);
            let fluid = &view.model.process.fluids[view.model.process.states[*s].fluid];
            let range = fluid.engine.provenance().range;
            Diagnostic::new(code, place(view, error), message)
                .hint(format!("the formulation holds for {range}"))
        }
        Blocked::Unknown(_) => {
            Diagnostic::new(Code::Unsolvable, "", "two properties are needed to fix a state")
        }
        Blocked::Missing(what) => Diagnostic::new(Code::Unsolvable, "", format!("{what} is missing")),
    }
}
