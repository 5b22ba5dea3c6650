//! HTTP over the library. A call travels through these files in this order:
//!
//! ```text
//! serve (listener, connections) → wire (bytes) → edge (id, panics, problems, log line)
//!   → routes (the one list) → route (parameters, media types, body) → check | batch | state | …
//!   → service (deadline) → pool (worker threads) → engine (the library)
//! ```

pub mod activity;
pub mod batch;
pub mod body;
pub mod catalogue;
pub mod check;
pub mod claim;
pub mod client;
pub mod edge;
pub mod engine;
pub mod examples;
pub mod limits;
pub mod log;
pub mod negotiate;
pub mod openapi;
pub mod operation;
pub mod pages;
pub mod pool;
pub mod problem;
pub mod query;
pub mod route;
pub mod routes;
pub mod serve;
pub mod service;
pub mod state;
pub mod wire;
