//! Ideal-gas mixtures of fixed composition on the absolute datum.
//!
//! Species data are the nine-coefficient polynomials of NASA/TP-2002-211556; a mixture is
//! collapsed to one such polynomial per temperature interval when it is made.

mod mixture;
mod species;

pub use mixture::{CompositionError, DRY_AIR, IdealGas};
pub use species::{Species, SpeciesDefinition, SpeciesPhase, all_species, find_species};
