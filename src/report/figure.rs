//! Figures with their units, and ordered maps.

use crate::quantity::{Dimension, Scale, UnitSystem, display};
use serde::ser::SerializeMap;
use serde::{Serialize, Serializer};

/// A figure: value, unit and standard uncertainty in that unit.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(utoipa::ToSchema))]
pub struct Figure {
    /// The value.
    pub value: f64,
    /// Its unit, as the reader of descriptions takes it.
    pub unit: &'static str,
    /// Standard uncertainty, in the same unit.
    pub u: f64,
}

/// Rounds to a number of significant digits.
fn significant(x: f64, digits: i32) -> f64 {
    if x == 0.0 || !x.is_finite() {
        return 0.0;
    }
    let exponent = digits - 1 - order(x.abs());
    if exponent > 300 {
        return 0.0;
    }
    let scale = power_of_ten(exponent.abs());
    if exponent >= 0 { (x * scale).round() / scale } else { (x / scale).round() * scale }
}

/// Powers of ten around the figures of a plant, the lowest being 10^[`LOWEST`]; from 10^0 up they are
/// exact.
const POWERS: [f64; 32] = [
    1e-9, 1e-8, 1e-7, 1e-6, 1e-5, 1e-4, 1e-3, 1e-2, 1e-1, 1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9,
    1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
];
const LOWEST: i32 = -9;

/// 10^n for n from 0 up.
fn power_of_ten(n: i32) -> f64 {
    usize::try_from(n - LOWEST).ok().and_then(|at| POWERS.get(at)).copied().unwrap_or_else(|| 10f64.powi(n))
}

/// The decimal exponent of a positive number: 2 for 123.
fn order(x: f64) -> i32 {
    match POWERS.partition_point(|&power| power <= x) {
        0 | 32 => x.log10().floor() as i32,
        above => above as i32 - 1 + LOWEST,
    }
}

impl Figure {
    /// A figure from SI value and uncertainty. The value is rounded to ten significant digits, the
    /// uncertainty to three.
    pub fn new(value: f64, u: f64, dimension: Dimension, units: UnitSystem) -> Figure {
        Figure::in_unit(value, u, &display(dimension, units))
    }

    /// With the digits that the uncertainty warrants: `12.00 ± 0.10 kW`.
    pub(crate) fn in_words(&self) -> String {
        super::prose::figure(self)
    }

    /// The same in a unit of the caller's choice.
    pub fn in_unit(value: f64, u: f64, scale: &Scale) -> Figure {
        Figure {
            value: significant(scale.from_si(value), 10),
            unit: scale.code,
            u: significant(u / scale.scale, 3),
        }
    }
}

/// A plain number rounded for a report.
pub(super) fn plain(x: f64) -> f64 {
    significant(x, 6)
}

/// Values by name, in a fixed order.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "server", derive(utoipa::ToSchema))]
#[cfg_attr(feature = "server", schema(value_type = std::collections::BTreeMap<String, T>))]
pub struct Named<T>(pub Vec<(String, T)>);

impl<T> Default for Named<T> {
    fn default() -> Self {
        Named(Vec::new())
    }
}

impl<T> Named<T> {
    /// Whether there is nothing in it.
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// Appends a member.
    pub fn push(&mut self, name: impl Into<String>, value: T) {
        self.0.push((name.into(), value));
    }

    /// The member of a name.
    pub fn get(&self, name: &str) -> Option<&T> {
        self.0.iter().find(|(n, _)| n == name).map(|(_, v)| v)
    }
}

impl<T: Serialize> Serialize for Named<T> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(Some(self.0.len()))?;
        for (name, value) in &self.0 {
            map.serialize_entry(name, value)?;
        }
        map.end()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rounding_keeps_significant_digits() {
        assert_eq!(significant(123_456.789_012_345, 10), 123_456.789);
        assert_eq!(significant(-0.000_123_456, 3), -0.000_123);
        assert_eq!(significant(2.0 / 3.0 * 1e9, 3), 667e6);
        assert_eq!(significant(f64::NAN, 3), 0.0);
        assert_eq!(significant(1e-310, 3), 0.0);
    }

    #[test]
    fn temperatures_shift_and_their_uncertainties_do_not() {
        let f = Figure::new(373.15, 0.5, Dimension::Temperature, UnitSystem::Metric);
        assert_eq!((f.value, f.unit, f.u), (100.0, "degC", 0.5));
        let f = Figure::new(373.15, 0.5, Dimension::Temperature, UnitSystem::Us);
        assert_eq!((f.value, f.unit, f.u), (212.0, "degF", 0.9));
    }
}
