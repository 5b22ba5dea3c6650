//! The service over real HTTP on loopback.

mod bad_input;
mod batch;
mod cases;
mod command_line;
mod documents;
mod faults;
mod limits;
mod problems;
mod schema;
