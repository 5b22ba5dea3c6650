//! Equilibrium constant and affinity of one reaction among ideal gases and pure condensed species.

use crate::fluid::heat_capacity::{GAS_CONSTANT, STANDARD_PRESSURE};
use crate::fluid::ideal_gas::{Species, SpeciesPhase, find_species};
use crate::fluid::{Element, PropertyError};
use std::fmt;

/// Why a reaction cannot be used.
#[derive(Clone, Debug, PartialEq)]
pub enum ReactionError {
    /// No species of that name in the table.
    UnknownSpecies(String),
    /// The make-up of a species is not known.
    UnknownElements(String),
    /// A coefficient is not finite, or all are zero.
    Coefficients,
    /// An element is not conserved; products less reactants in moles.
    Unbalanced(Element, f64),
}

impl fmt::Display for ReactionError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::UnknownSpecies(name) => write!(f, "there is no species {name:?} in the table"),
            Self::UnknownElements(name) => write!(f, "the elements of {name:?} are not known"),
            Self::Coefficients => f.write_str("the reaction needs finite coefficients that are not all zero"),
            Self::Unbalanced(element, excess) => {
                write!(f, "the reaction makes {excess:+.6} mol of {}", element.symbol())
            }
        }
    }
}

impl std::error::Error for ReactionError {}

/// A balanced reaction: stoichiometric coefficients, positive for products.
#[derive(Clone, Debug, PartialEq)]
pub struct Reaction {
    terms: Vec<(Species, f64)>,
}

impl Reaction {
    /// A reaction from species and coefficients (negative for reactants).
    ///
    /// # Errors
    /// See [`ReactionError`]: each element must balance within 1e-9.
    pub fn new(terms: &[(&Species, f64)]) -> Result<Reaction, ReactionError> {
        if terms.iter().any(|(_, nu)| !nu.is_finite()) || terms.iter().all(|(_, nu)| *nu == 0.0) {
            return Err(ReactionError::Coefficients);
        }
        let mut excess = [0.0; Element::COUNT];
        let mut scale = 0.0f64;
        for (species, nu) in terms {
            let elements = species
                .elements()
                .ok_or_else(|| ReactionError::UnknownElements(species.name().to_owned()))?;
            for (sum, n) in excess.iter_mut().zip(elements) {
                *sum += nu * n;
                scale = scale.max((nu * n).abs());
            }
        }
        if let Some((element, n)) = Element::ALL.iter().zip(excess).find(|(_, n)| n.abs() > 1e-9 * scale) {
            return Err(ReactionError::Unbalanced(*element, n));
        }
        Ok(Reaction { terms: terms.iter().map(|(s, nu)| ((*s).clone(), *nu)).collect() })
    }

    /// A reaction among species of the table, by name.
    ///
    /// # Errors
    /// See [`ReactionError`].
    pub fn from_names(terms: &[(&str, f64)]) -> Result<Reaction, ReactionError> {
        let found = terms
            .iter()
            .map(|(name, nu)| {
                find_species(name)
                    .map(|s| (s, *nu))
                    .ok_or_else(|| ReactionError::UnknownSpecies((*name).to_owned()))
            })
            .collect::<Result<Vec<_>, _>>()?;
        Reaction::new(&found)
    }

    /// ln K at `t` (K), activities referred to 1 bar for gases and to the pure substance for
    /// condensed species.
    ///
    /// # Errors
    /// `t` outside the range of a species.
    pub fn ln_equilibrium_constant(&self, t: f64) -> Result<f64, PropertyError> {
        let mut gibbs = 0.0;
        for (species, nu) in &self.terms {
            gibbs += nu * species.gibbs(t)?;
        }
        Ok(-gibbs / (GAS_CONSTANT * t))
    }

    /// Affinity A = −ΔG in J per mole of reaction at `t` (K), `p` (Pa) and a composition of the
    /// gas (mole fractions by species name): positive drives the reaction forward.
    ///
    /// # Errors
    /// `t` outside the range of a species, `p` not positive, or a gas that takes part without a
    /// share in `composition`, where the affinity has no bound (`Unstated`).
    pub fn affinity(&self, t: f64, p: f64, composition: &[(&str, f64)]) -> Result<f64, PropertyError> {
        crate::fluid::heat_capacity::check_pressure(p)?;
        let mut affinity = GAS_CONSTANT * t * self.ln_equilibrium_constant(t)?;
        for (species, nu) in &self.terms {
            if species.phase() == SpeciesPhase::Gas && *nu != 0.0 {
                let x = composition
                    .iter()
                    .find(|(name, _)| {
                        find_species(name).is_some_and(|s| s.name() == species.name())
                            || *name == species.name()
                    })
                    .map_or(0.0, |(_, x)| *x);
                if !(x > 0.0 && x.is_finite()) {
                    return Err(PropertyError::Unstated(
                        "the share of a gas that takes part in the reaction",
                    ));
                }
                affinity -= nu * GAS_CONSTANT * t * (x * p / STANDARD_PRESSURE).ln();
            }
        }
        Ok(affinity)
    }
}
