//! Balances of mass, elements, energy and entropy over a region: a component, a group or the
//! plant; and the equations that solve for what is unknown.

pub mod decomposition;
mod equations;
mod evaluation;
mod exergies;
pub mod exergy;
pub mod leniency;
pub mod passage;
pub mod performance;
pub mod plant;
pub mod profile;
pub mod purpose;
pub mod region;
pub mod reservoir;
pub mod shares;

pub use equations::{Equations, Row, by_pressure, isentropic_enthalpy, transfers};
pub use evaluation::{Evaluation, RegionBalances};
pub use exergies::Exergies;
pub use profile::Profile;
pub use region::{Balance, Bracket, Region};
