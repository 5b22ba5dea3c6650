//! One gas of the caller's own: a molar mass and a heat capacity.

use super::heat_capacity::{ASSUMED_RANGE, Calorics, Curve, GAS_CONSTANT, Term, gas_state, supports};
use super::ideal_gas::MOLAR_MASSES;
use super::{Datum, Elements, Engine, Pair, PropertyError, Provenance, State};

/// A perfect gas: p v = R T / M with cp constant or Σ c·Tⁿ.
///
/// Datum: h = 0 and s = 0 at 298.15 K and 1 bar. It has no formation data, so it takes part in no
/// reaction and has no chemical exergy.
#[derive(Clone, Debug, PartialEq)]
pub struct PerfectGas {
    molar_mass: f64,
    gas_constant: f64,
    curve: Curve,
}

impl PerfectGas {
    /// A gas of `molar_mass` (kg/mol) with `heat_capacity` cp = Σ c·Tⁿ in J/(kg K) over
    /// `temperature_range` (K), [`ASSUMED_RANGE`] where not given.
    ///
    /// # Errors
    /// A molar mass outside 0.001 to 1 kg/mol, a heat capacity not positive over the whole range, a
    /// heat capacity that does not exceed R/M, or an empty range.
    pub fn new(
        molar_mass: f64,
        heat_capacity: &[Term],
        temperature_range: Option<(f64, f64)>,
    ) -> Result<PerfectGas, PropertyError> {
        if !MOLAR_MASSES.contains(&molar_mass) {
            return Err(PropertyError::OutOfRange {
                quantity: "molar mass",
                unit: "kg/mol",
                value: molar_mass,
                min: *MOLAR_MASSES.start(),
                max: *MOLAR_MASSES.end(),
            });
        }
        let (t_min, t_max) = temperature_range.unwrap_or(ASSUMED_RANGE);
        let gas_constant = GAS_CONSTANT / molar_mass;
        let curve = Curve::from_terms(heat_capacity, t_min, t_max, 0.0, 0.0)
            .ok_or(PropertyError::Unstated("a specific heat that is positive over the temperature range"))?;
        // cv = cp − R must be positive too: mechanical and thermal stability.
        if curve.lowest_heat_capacity() <= gas_constant {
            return Err(PropertyError::OutOfRange {
                quantity: "specific heat",
                unit: "J/(kg K)",
                value: curve.lowest_heat_capacity(),
                min: gas_constant,
                max: f64::MAX,
            });
        }
        Ok(PerfectGas { molar_mass, gas_constant, curve })
    }

    /// A gas with constant `heat_capacity` (J/(kg K)), taken between 50 and 6000 K.
    ///
    /// # Errors
    /// As [`PerfectGas::new`].
    pub fn with_constant(molar_mass: f64, heat_capacity: f64) -> Result<PerfectGas, PropertyError> {
        PerfectGas::new(
            molar_mass,
            &[Term { coefficient: heat_capacity, exponent: 0.0 }],
            Some((50.0, 6000.0)),
        )
    }

    /// Lowest and highest temperature, K.
    pub fn temperature_range(&self) -> (f64, f64) {
        self.curve.range()
    }
}

impl Engine for PerfectGas {
    fn provenance(&self) -> Provenance {
        let (low, high) = self.temperature_range();
        Provenance {
            formulation: "perfect gas".to_owned(),
            source: "given in the description".to_owned(),
            range: format!("{low:.2} to {high:.2} K"),
        }
    }

    fn supports(&self, pair: Pair) -> bool {
        supports(pair)
    }

    fn state(&self, pair: Pair, a: f64, b: f64, _c: f64) -> Result<State, PropertyError> {
        gas_state(&self.curve, self.gas_constant, pair, a, b)
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        Some(self.molar_mass)
    }

    fn elements(&self, _c: f64) -> Option<(Elements, Elements)> {
        None
    }

    fn datum(&self) -> Option<Datum> {
        None
    }

    /// Zero: the heat capacity is the caller's own definition of the gas.
    fn relative_uncertainty(&self, _state: &State) -> f64 {
        0.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn constant_heat_capacity_has_the_closed_forms() {
        let gas = PerfectGas::with_constant(0.02897, 1004.0).unwrap();
        let r = GAS_CONSTANT / 0.02897;
        let s = gas.state(Pair::PressureTemperature, 3e5, 500.0, 0.0).unwrap();
        assert!((s.enthalpy - 1004.0 * (500.0 - 298.15)).abs() < 1e-8);
        let expected = 1004.0 * (500.0f64 / 298.15).ln() - r * 3f64.ln();
        assert!((s.entropy - expected).abs() < 1e-10);
        assert!((s.volume - r * 500.0 / 3e5).abs() < 1e-14);
    }

    #[test]
    fn impossible_gases_are_refused() {
        assert!(PerfectGas::with_constant(0.029, 200.0).is_err(), "cp below R/M");
        assert!(PerfectGas::with_constant(-0.029, 1000.0).is_err());
        assert!(PerfectGas::with_constant(0.029, f64::NAN).is_err());
        assert!(PerfectGas::with_constant(f64::INFINITY, 1000.0).is_err());
    }
}
