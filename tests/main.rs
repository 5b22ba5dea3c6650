//! Everything that is tested from outside, in one binary.

#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    reason = "a test fails by panicking; the lints are lifted only inside #[test] functions otherwise"
)]

#[cfg(feature = "server")]
mod api;
#[cfg(feature = "server")]
mod support;

mod supply;
