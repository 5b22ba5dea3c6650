//! Checks against published values.

mod chemistry;
mod gas;
mod steam;
