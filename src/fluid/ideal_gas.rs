//! Property engine.
