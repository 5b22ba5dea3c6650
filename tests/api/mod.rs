//! The service over real HTTP on loopback.

mod batch;
mod cases;
mod command_line;
mod documents;
mod faults;
mod limits;
mod problems;
