//! Why a property engine could not answer.

use super::Pair;
use std::fmt;

/// Why a state cannot be had, with the limit that was broken as data.
#[derive(Clone, Debug, PartialEq)]
pub enum PropertyError {
    /// An input is NaN or infinite.
    NotFinite,
    /// A quantity lies outside the range of the formulation (SI units).
    OutOfRange {
        /// Name of the quantity, for instance `temperature`.
        quantity: &'static str,
        /// SI unit of the figures.
        unit: &'static str,
        /// The value that was asked for.
        value: f64,
        /// Lowest value in range.
        min: f64,
        /// Highest value in range.
        max: f64,
    },
    /// The engine does not take this pair of coordinates.
    UnsupportedPair(Pair),
    /// The formulation has no saturation line, or not at this state.
    NoSaturation,
    /// A needed figure is absent (a `stated` fluid without that figure, a fuel off its datum …).
    Unstated(&'static str),
    /// The iteration did not converge within its bound.
    NoConvergence,
}

impl fmt::Display for PropertyError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            PropertyError::NotFinite => f.write_str("an input is not a finite number"),
            PropertyError::OutOfRange { quantity, unit, value, min, max } => write!(
                f,
                "{quantity} {} {unit} is outside the formulation's range {} to {} {unit}",
                Short(*value),
                Short(*min),
                Short(*max)
            ),
            PropertyError::UnsupportedPair(pair) => {
                write!(f, "the formulation cannot be fixed by {pair}")
            }
            PropertyError::NoSaturation => f.write_str("there is no saturation at this state"),
            PropertyError::Unstated(what) => write!(f, "{what} is not stated"),
            PropertyError::NoConvergence => f.write_str("the property equation did not converge"),
        }
    }
}

impl std::error::Error for PropertyError {}

/// A number to about six significant digits, without trailing zeros.
struct Short(f64);

impl fmt::Display for Short {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        // Six digits are written and read back, so that the shortest text of the result is theirs.
        let rounded = format!("{:.5e}", self.0).parse().unwrap_or(self.0);
        if rounded == 0.0 || (1e-4..1e6).contains(&rounded.abs()) {
            write!(f, "{rounded}")
        } else {
            write!(f, "{rounded:e}")
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ranges_are_written_shortly() {
        let error = PropertyError::OutOfRange {
            quantity: "pressure",
            unit: "Pa",
            value: 2e8,
            min: 611.212_677_444_345_2,
            max: 1.0e8,
        };
        let text = error.to_string();
        assert_eq!(text, "pressure 2e8 Pa is outside the formulation's range 611.213 to 1e8 Pa");
    }
}
