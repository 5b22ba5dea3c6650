//! Checks against published and independently computed values.

mod real_fluid;
