//! The invariants of the house: who may import whom, what the core must not name, what every rule
//! must bring along.

mod defects;
mod fuzz;
mod layers;
mod promises;
mod properties;
mod readme;
mod rules;
