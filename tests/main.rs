//! Checks against published and reference values.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    clippy::indexing_slicing,
    reason = "a failed check has to stop its test"
)]

mod reference;
