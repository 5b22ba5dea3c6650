//! (module)
