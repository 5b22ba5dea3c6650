//! sigmadot checks processes against the second law of thermodynamics.
//!
//! Data flows one way through the modules, in this order:
//!
//! ```text
//! bytes → document → process → model → balance → rules → evidence → assessment → report
//!              ↑           ↑
//!          quantity      fluid
//! ```

#[cfg(feature = "server")]
pub mod api;
pub mod assessment;
pub mod balance;
pub mod claim;
pub mod diagnostic;
pub mod document;
pub mod evidence;
pub mod fluid;
pub mod model;
pub mod pipeline;
pub mod process;
pub mod quantity;
pub mod report;
pub mod rules;
