//! Fluids by name.

use super::humid_air::HumidAir;
use super::ideal_gas::{IdealGas, SpeciesPhase, all_species};
use super::incompressible::{self, Incompressible};
use super::solution::Solution;
use super::steam::Steam;
use super::{Engine, real_fluid};
use crate::diagnostic::nearest;
use std::sync::{Arc, OnceLock};

/// What is known of a fluid's chemistry beyond its engine.
#[derive(Clone, Debug)]
pub enum Substance {
    /// Water by the steam formulation.
    Water,
    /// An ideal-gas mixture (fixed composition).
    Gas(Arc<IdealGas>),
    /// Humid air.
    HumidAir,
    /// A combustion gas of variable air ratio.
    CombustionGas(Arc<super::combustion_gas::CombustionGas>),
    /// A fuel by ultimate analysis.
    Fuel(Arc<super::fuel::Fuel>),
    /// A pure fluid by a multiparameter equation.
    Pure,
    /// A substance without chemistry.
    Inert,
    /// Figures taken at their word.
    Stated,
}

/// Names that are taken before any listed fluid.
const BUILT_IN: [&str; 7] = ["water", "steam", "air", "humid air", "seawater", "sodium chloride", "ash"];

fn dry_air() -> Option<Arc<IdealGas>> {
    static AIR: OnceLock<Option<Arc<IdealGas>>> = OnceLock::new();
    AIR.get_or_init(|| IdealGas::dry_air().ok().map(Arc::new)).clone()
}

/// A fluid by the name that people write: water, dry air, humid air, or a listed one.
///
/// # Errors
/// The nearest known names.
pub fn by_name(name: &str) -> Result<(Substance, Arc<dyn Engine>), Vec<String>> {
    match name {
        "water" | "steam" => return Ok((Substance::Water, Arc::new(Steam))),
        "air" => {
            if let Some(air) = dry_air() {
                return Ok((Substance::Gas(air.clone()), air));
            }
        }
        "humid air" | "humid_air" | "moist air" => {
            return Ok((Substance::HumidAir, Arc::new(HumidAir::new())));
        }
        "seawater" => return Ok((Substance::Inert, Arc::new(Solution::seawater()))),
        "sodium chloride" | "brine" => {
            return Ok((Substance::Inert, Arc::new(Solution::sodium_chloride())));
        }
        _ => {}
    }
    if let Ok(fluid) = real_fluid::by_name(name) {
        return Ok((Substance::Pure, fluid.clone()));
    }
    if name.eq_ignore_ascii_case("ash")
        && let Ok(ash) = Incompressible::ash()
    {
        return Ok((Substance::Inert, Arc::new(ash)));
    }
    if let Some(medium) = Incompressible::listed(name).or_else(|| Incompressible::species(name)) {
        return Ok((Substance::Inert, Arc::new(medium)));
    }
    let real = real_fluid::catalogue().iter().flat_map(|f| f.names().iter().map(String::as_str));
    Err(nearest(name, names().chain(real)).into_iter().map(str::to_owned).collect())
}

/// Every name that [`by_name`] knows by heart, for the catalogue.
pub fn names() -> impl Iterator<Item = &'static str> {
    BUILT_IN.into_iter().chain(incompressible::LISTED.iter().map(|medium| medium.name))
}

/// A fluid that can be named, for the catalogue.
#[derive(Clone, Debug, PartialEq)]
pub struct Listed {
    /// The name as a description gives it.
    pub name: String,
    /// Other spellings that are taken.
    pub aliases: Vec<String>,
    /// The kind of fluid object that it stands for.
    pub kind: &'static str,
    /// Formulation, source and range.
    pub provenance: super::Provenance,
}

/// Every fluid that [`by_name`] knows.
pub fn listing() -> Vec<Listed> {
    let mut out = Vec::new();
    let mut list = |name: &str, aliases: Vec<String>, kind: &'static str| {
        if let Ok((_, engine)) = by_name(name) {
            out.push(Listed { name: name.to_owned(), aliases, kind, provenance: engine.provenance() });
        }
    };
    let spellings = |words: &[&str]| words.iter().map(|w| (*w).to_owned()).collect::<Vec<_>>();
    list("water", spellings(&["steam"]), "water");
    list("air", Vec::new(), "ideal_gas");
    list("humid air", spellings(&["humid_air", "moist air"]), "humid_air");
    list("seawater", Vec::new(), "solution");
    list("sodium chloride", spellings(&["brine"]), "solution");
    for fluid in real_fluid::catalogue() {
        // A name that is taken by a formulation above is left to it.
        if !BUILT_IN.contains(&fluid.name()) {
            let others = fluid.names().iter().filter(|n| n.as_str() != fluid.name()).cloned().collect();
            list(fluid.name(), others, "pure");
        }
    }
    list("ash", Vec::new(), "incompressible");
    for medium in incompressible::LISTED.iter().filter(|m| !BUILT_IN.contains(&m.name)) {
        list(medium.name, Vec::new(), "incompressible");
    }
    for species in all_species().iter().filter(|s| s.phase() != SpeciesPhase::Gas) {
        list(species.name(), species.aliases().to_vec(), "incompressible");
    }
    out
}

/// A chemical species that mixtures can be made of, for the catalogue.
#[derive(Clone, Debug, PartialEq)]
pub struct ListedSpecies {
    /// The name as a description gives it.
    pub name: &'static str,
    /// Other spellings that are taken.
    pub aliases: &'static [String],
    /// Gas, liquid or solid.
    pub phase: SpeciesPhase,
    /// kg/mol
    pub molar_mass: f64,
    /// K
    pub temperature_range: (f64, f64),
    /// Where its coefficients come from.
    pub source: &'static str,
}

/// Every species of the table.
pub fn species() -> impl Iterator<Item = ListedSpecies> {
    all_species().iter().map(|s| ListedSpecies {
        name: s.name(),
        aliases: s.aliases(),
        phase: s.phase(),
        molar_mass: s.molar_mass(),
        temperature_range: s.temperature_range(),
        source: s.source(),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_listed_name_gives_the_fluid_that_it_is_listed_with() {
        let all = listing();
        assert!(all.len() > 60, "{}", all.len());
        let mut seen = std::collections::BTreeSet::new();
        for fluid in &all {
            assert!(seen.insert(&fluid.name), "{} twice", fluid.name);
            for name in fluid.aliases.iter().chain([&fluid.name]) {
                let (substance, engine) = by_name(name).unwrap_or_else(|near| panic!("{name}: {near:?}"));
                assert_eq!(engine.provenance(), fluid.provenance, "{name}");
                let pure = matches!(substance, Substance::Pure);
                assert_eq!(pure, fluid.kind == "pure", "{name}");
            }
        }
        assert!(species().any(|s| s.name == "CO2") && species().count() >= 26);
    }
}
