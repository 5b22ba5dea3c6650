//! What the data say of a margin: linear propagation of uncertainty (JCGM 100) through solved
//! unknowns, and decisions with a family-wise probability of a false alarm (JCGM 106).

mod decision;
mod sensitivity;

pub use decision::{Families, FamilySummary, decide, normal_cdf, normal_quantile};
pub use sensitivity::Sensitivity;
