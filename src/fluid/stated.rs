//! States as another program gives them: enthalpy and entropy, taken at their word.

use super::{Datum, Elements, Engine, Pair, Phase, PropertyError, Provenance, State, state::PROPERTIES};

/// A state given by its figures. Only enthalpy and entropy are needed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct StatedState {
    /// J/kg, on the giver's own datum.
    pub enthalpy: f64,
    /// J/(kg K), on the giver's own datum.
    pub entropy: f64,
    /// K, where stated.
    pub temperature: Option<f64>,
    /// Pa absolute, where stated.
    pub pressure: Option<f64>,
    /// Specific flow exergy, J/kg, where stated.
    pub exergy: Option<f64>,
}

/// A fluid known only by stated figures. One value serves one flow, since temperature and
/// pressure cannot be derived from enthalpy and entropy.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Stated {
    temperature: Option<f64>,
    pressure: Option<f64>,
    exergy: Option<f64>,
}

impl Stated {
    /// A flow's stated temperature (K), pressure (Pa absolute) and flow exergy (J/kg), each where
    /// given.
    ///
    /// # Errors
    /// `NotFinite`, or `OutOfRange` for a temperature or a pressure that is not positive.
    pub fn new(
        temperature: Option<f64>,
        pressure: Option<f64>,
        exergy: Option<f64>,
    ) -> Result<Stated, PropertyError> {
        for (value, quantity, unit) in [(temperature, "temperature", "K"), (pressure, "pressure", "Pa")] {
            if let Some(x) = value {
                super::heat_capacity::in_range(quantity, unit, x, f64::MIN_POSITIVE, f64::MAX)?;
            }
        }
        if exergy.is_some_and(|e| !e.is_finite()) {
            return Err(PropertyError::NotFinite);
        }
        Ok(Stated { temperature, pressure, exergy })
    }

    /// The flow's figures joined with its enthalpy (J/kg) and entropy (J/(kg K)).
    ///
    /// # Errors
    /// `NotFinite`.
    pub fn state_from(&self, enthalpy: f64, entropy: f64) -> Result<StatedState, PropertyError> {
        if !(enthalpy.is_finite() && entropy.is_finite()) {
            return Err(PropertyError::NotFinite);
        }
        Ok(StatedState {
            enthalpy,
            entropy,
            temperature: self.temperature,
            pressure: self.pressure,
            exergy: self.exergy,
        })
    }
}

impl Engine for Stated {
    fn provenance(&self) -> Provenance {
        Provenance {
            formulation: "stated figures".to_owned(),
            source: "given in the description, not checked".to_owned(),
            range: "the stated states only".to_owned(),
        }
    }

    fn supports(&self, pair: Pair) -> bool {
        pair == Pair::EnthalpyEntropy
    }

    /// Only (h, s), and only where temperature and pressure are stated too; [`Stated::state_from`]
    /// has no such need. The gradient's first two columns are (h, s) themselves: temperature,
    /// pressure and volume are constants here and have zero derivatives. Volume is not known and
    /// reads 0.
    fn state(&self, pair: Pair, a: f64, b: f64, _c: f64) -> Result<State, PropertyError> {
        if pair != Pair::EnthalpyEntropy {
            return Err(PropertyError::UnsupportedPair(pair));
        }
        let stated = self.state_from(a, b)?;
        let mut gradient = [[0.0; 3]; PROPERTIES];
        gradient[super::Property::Enthalpy as usize] = [1.0, 0.0, 0.0];
        gradient[super::Property::Entropy as usize] = [0.0, 1.0, 0.0];
        Ok(State {
            temperature: stated.temperature.ok_or(PropertyError::Unstated("temperature"))?,
            pressure: stated.pressure.ok_or(PropertyError::Unstated("pressure"))?,
            enthalpy: a,
            entropy: b,
            volume: 0.0,
            quality: None,
            phase: Phase::Vapour,
            gradient,
        })
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        None
    }

    fn elements(&self, _c: f64) -> Option<(Elements, Elements)> {
        None
    }

    fn datum(&self) -> Option<Datum> {
        None
    }

    /// Zero: the figures' own uncertainty is in the description.
    fn relative_uncertainty(&self, _state: &State) -> f64 {
        0.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fluid::Property;

    #[test]
    fn enthalpy_and_entropy_are_their_own_coordinates() {
        let full = Stated::new(Some(400.0), Some(2e5), None).unwrap();
        let state = full.state(Pair::EnthalpyEntropy, 2.7e6, 7.1e3, 0.0).unwrap();
        let j = state.jacobian(Pair::EnthalpyEntropy).unwrap();
        assert_eq!(j[Property::Enthalpy as usize], [1.0, 0.0, 0.0]);
        assert_eq!(j[Property::Entropy as usize], [0.0, 1.0, 0.0]);
        assert_eq!(j[Property::Temperature as usize], [0.0, 0.0, 0.0]);
        assert!(state.jacobian(Pair::PressureTemperature).is_none());
    }

    #[test]
    fn what_is_not_stated_is_not_invented() {
        let bare = Stated::default();
        let s = bare.state_from(1e5, 300.0).unwrap();
        assert_eq!((s.temperature, s.pressure, s.exergy), (None, None, None));
        assert_eq!(
            bare.state(Pair::EnthalpyEntropy, 1e5, 300.0, 0.0),
            Err(PropertyError::Unstated("temperature"))
        );
        assert_eq!(
            bare.state(Pair::PressureTemperature, 1e5, 300.0, 0.0),
            Err(PropertyError::UnsupportedPair(Pair::PressureTemperature))
        );
        assert!(Stated::new(Some(-1.0), None, None).is_err());
        assert!(Stated::new(None, None, Some(f64::NAN)).is_err());
        assert!(bare.state_from(f64::NAN, 0.0).is_err());
    }
}
