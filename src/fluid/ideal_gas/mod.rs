//! Ideal-gas mixtures of fixed composition on the absolute datum.
//!
//! Species data are the nine-coefficient polynomials of NASA/TP-2002-211556; a mixture is
//! collapsed to one such polynomial per temperature interval when it is made.

mod mixture;
mod species;

pub(crate) use mixture::PseudoCritical;
pub use mixture::{CompositionError, DRY_AIR, IdealGas};
pub(crate) use species::MOLAR_MASSES;
pub use species::{CriticalPoint, Species, SpeciesDefinition, SpeciesPhase, all_species, find_species};
