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
            PropertyError::OutOfRange { quantity, unit, value, min, max } => {
                let [value, min, max] = [value, min, max].map(|x| in_words(*x, unit));
                write!(f, "{quantity} {value} is outside the formulation's range {min} to {max}")
            }
            PropertyError::UnsupportedPair(pair) => {
                write!(f, "the formulation cannot be fixed by {pair}")
            }
            PropertyError::NoSaturation => f.write_str("there is no saturation at this state"),
            PropertyError::Unstated(what) => write!(f, "{what} is not stated"),
            PropertyError::NoConvergence => f.write_str("the property equation did not converge"),
        }
    }
}

/// Five significant digits, and degrees Celsius beside kelvins.
fn in_words(x: f64, unit: &str) -> String {
    // The digits are written and read back, so that the shortest text of the result is theirs.
    let short = |x: f64| {
        let rounded: f64 = format!("{x:.4e}").parse().unwrap_or(x);
        if rounded == 0.0 || (1e-4..1e6).contains(&rounded.abs()) {
            format!("{rounded}")
        } else {
            format!("{rounded:e}")
        }
    };
    if unit == "K" {
        format!("{} K ({} degC)", short(x), short(((x - 273.15) * 100.0).round() / 100.0))
    } else {
        format!("{} {unit}", short(x))
    }
}

impl std::error::Error for PropertyError {}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ranges_are_written_shortly() {
        let range = |quantity, unit, value, min, max| {
            PropertyError::OutOfRange { quantity, unit, value, min, max }.to_string()
        };
        assert_eq!(
            range("pressure", "Pa", 2e8, 611.212_677_444_345_2, 1e8),
            "pressure 2e8 Pa is outside the formulation's range 611.21 Pa to 1e8 Pa"
        );
        assert_eq!(
            range("temperature", "K", 1123.15, 273.15, 600.0),
            "temperature 1123.2 K (850 degC) is outside the formulation's range 273.15 K (0 degC) to 600 K (326.85 degC)"
        );
    }
}
