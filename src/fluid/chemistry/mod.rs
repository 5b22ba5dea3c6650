//! Chemical reference environments, chemical exergy, heating values and reaction equilibrium, all
//! computed from the one set of formation data that the property engines use.

mod combustion;
mod environment;
mod reaction;
mod reference_sets;

pub(crate) use combustion::product_enthalpy;
pub use combustion::{Combustion, HeatingValue, complete_combustion, heating_value, mixture_heating_value};
pub use environment::{DeadState, Environment, ReferenceState};
pub use reaction::{Reaction, ReactionError};
pub use reference_sets::ReferenceSet;
