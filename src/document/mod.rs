//! The ordered JSON tree and the reader that collects every fault with its pointer.
//!
//! Reading has two stages. [`Tree::read`] turns a body into an ordered tree that keeps the text of
//! numbers and refuses duplicate keys and excess in size and depth. [`check`] walks the tree
//! against an [`ObjectShape`], the one declaration from which [`json_schema`] draws the published
//! schema as well, and collects all faults at once. What passed is read through [`Node`].

mod canonical;
mod check;
mod faults;
mod node;
mod quantity;
mod schema;
mod shape;
#[cfg(test)]
mod tests;
mod tree;

pub use canonical::{canonical, sha256_hex};
pub use check::{check, check_shape};
pub use faults::{FAULT_LIMIT, Faults};
pub use node::{JsonType, Node};
pub use quantity::Reading;
pub use schema::{REFERENCE_PREFIX, clashing_names, components, json_schema, union_components};
pub use shape::{Field, Key, ObjectShape, Shape, Union, Variant, is_name};
pub use tree::{Limits, Tree};
