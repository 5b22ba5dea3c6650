//! The kinds of claims, for the documentation.

use super::query::{Parameter, parameters};
use super::shape::CLAIM;

/// A kind of claim.
#[derive(Clone, Debug)]
pub struct ClaimKind {
    /// Its word.
    pub kind: &'static str,
    /// What such a machine does.
    pub doc: &'static str,
    /// Parameters of the query form.
    pub parameters: Vec<Parameter>,
    /// An example as JSON.
    pub example: &'static str,
}

macro_rules! examples {
    ($($kind:literal),+ $(,)?) => {
        fn example(kind: &str) -> &'static str {
            match kind {
                $($kind => include_str!(concat!("../../openapi/examples/claims/", $kind, ".json")),)+
                _ => "",
            }
        }
    };
}

examples! {
    "heat_engine", "refrigerator", "heat_pump", "heat_transformer", "absorption_machine", "heat_transfer",
    "compressor", "expander", "ejector", "splitter", "separation", "electrolyser", "fuel_cell",
}

/// Every kind of claim.
pub fn catalogue() -> impl Iterator<Item = ClaimKind> {
    CLAIM.variants.iter().map(|v| ClaimKind {
        kind: v.word,
        doc: v.shape.doc,
        parameters: parameters(v.word).unwrap_or_default(),
        example: example(v.word),
    })
}
