//! Fluids by name.

use super::humid_air::HumidAir;
use super::ideal_gas::IdealGas;
use super::solution::Solution;
use super::steam::Steam;
use super::{Engine, incompressible, real_fluid};
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
const BUILT_IN: [&str; 6] = ["water", "steam", "air", "humid air", "seawater", "sodium chloride"];

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
    let near = match real_fluid::by_name(name) {
        Ok(fluid) => return Ok((Substance::Pure, fluid.clone())),
        Err(near) => near,
    };
    if let Some(medium) = incompressible::Incompressible::listed(name) {
        return Ok((Substance::Inert, Arc::new(medium)));
    }
    let mut known: Vec<&str> = near;
    known.extend(nearest(name, names()));
    known.dedup();
    Err(known.into_iter().map(str::to_owned).collect())
}

/// Every name that [`by_name`] knows by heart, for the catalogue.
pub fn names() -> impl Iterator<Item = &'static str> {
    BUILT_IN.into_iter().chain(incompressible::LISTED.iter().map(|medium| medium.name))
}
