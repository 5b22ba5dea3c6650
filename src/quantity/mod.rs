//! Units, uncertainties and printed-digit resolution: the only place where a unit is converted.
//!
//! A quantity is read from its text for the [`Dimension`] that the field takes, and is held in SI
//! units from there on. What a unit's letters mean follows from the dimension: `C` is a
//! temperature, `t/h` is tonnes per hour, `Nm3` is a normal cubic metre and never newtons.

mod dimension;
mod display;
mod instrument;
mod number;
mod read;
mod table;
#[cfg(test)]
mod tests;
mod uncertainty;
mod unit;

pub use dimension::Dimension;
pub use display::{UnitSystem, display};
pub use instrument::Instrument;
pub use number::{Decimal, split};
pub use read::{Bounds, Literal, Quantity, read_bare, read_number, read_resolution, read_text};
pub use uncertainty::{Amount, How, Spread, Uncertainty, UncertaintyText};
pub use unit::{Currency, Reference, Scale, Unit, catalogue, dimensions_of, find};
