//! Property engine.
/// Placeholder until the engine lands.
#[derive(Debug)]
pub struct IdealGas;
