//! Integration tests: the library against published values.

mod reference;
