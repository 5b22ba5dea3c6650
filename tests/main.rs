//! Integration tests: the library against published values, the service over HTTP, the program from
//! a shell.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, reason = "a test fails by panicking")]

#[cfg(feature = "server")]
mod api;
mod reference;
mod supply;
#[cfg(feature = "server")]
mod support;
