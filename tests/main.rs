//! Checks against published and reference values.

mod reference;
