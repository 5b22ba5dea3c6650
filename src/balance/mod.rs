//! Balances of mass, elements, energy and entropy over a region: a component, a group or the
//! plant; and the equations that solve for what is unknown.

mod equations;
mod evaluation;
pub mod exergy;
pub mod profile;
pub mod region;

pub use equations::{Equations, Row, by_pressure, isentropic_enthalpy, transfers};
pub use evaluation::{Evaluation, RegionBalances};
pub use profile::Profile;
pub use region::{Balance, Bracket, Region};
