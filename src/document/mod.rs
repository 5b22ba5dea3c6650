//! The ordered JSON tree and the reader that collects every fault with its pointer.
