//! The HTTP service.
