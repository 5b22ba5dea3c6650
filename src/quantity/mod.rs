//! Units, uncertainties and printed-digit resolution.
