//! The integration tests, one binary.

mod reference;
