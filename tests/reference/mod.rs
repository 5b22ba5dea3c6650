//! Checks against published values.

mod gas;
