//! Checks of the library as a user sees it.

mod reference;
