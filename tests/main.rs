//! Checks of the library as a user sees it.

#[cfg(test)]
mod reference;
