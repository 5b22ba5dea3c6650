//! Integration tests: the library against published values, the service over HTTP, the program from
//! a shell, and the invariants of the house.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, reason = "a test fails by panicking")]

#[cfg(feature = "server")]
mod api;
mod house;
mod reference;
#[cfg(feature = "server")]
mod supply;
#[cfg(feature = "server")]
mod support;
