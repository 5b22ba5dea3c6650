//! A mixture of ideal gases with fixed composition.

use super::species::{Species, SpeciesPhase, find_species};
use crate::fluid::heat_capacity::{Calorics, Curve, GAS_CONSTANT, gas_state, supports};
use crate::fluid::{Datum, Element, Elements, Engine, Pair, PropertyError, Provenance, State};
use std::fmt;

/// Mole fractions of dry air (normalised where used): the usual rounded composition of the dry
/// atmosphere, common practice.
pub const DRY_AIR: [(&str, f64); 4] = [("N2", 0.78084), ("O2", 0.20946), ("Ar", 0.00934), ("CO2", 0.00036)];

/// Relative standard uncertainty of enthalpy and entropy differences (k = 1) assumed for the
/// nine-coefficient polynomials, common practice.
const UNCERTAINTY: f64 = 5e-4;

/// Pseudo-critical point of a mixture by Kay's rule, to judge what the ideal-gas model neglects.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct PseudoCritical {
    temperature: f64,
    pressure: f64,
}

impl PseudoCritical {
    /// From mole fractions; species without critical data are left out, `None` where all are.
    pub(crate) fn new<'a>(parts: impl Iterator<Item = (&'a Species, f64)>) -> Option<PseudoCritical> {
        let (x, t, p) =
            parts.filter_map(|(s, x)| s.critical().map(|c| (c, x))).fold((0.0, 0.0, 0.0), |sum, (c, x)| {
                (sum.0 + x, sum.1 + x * c.temperature, sum.2 + x * c.pressure)
            });
        (x > 0.0).then(|| PseudoCritical { temperature: t / x, pressure: p / x })
    }

    /// |Z − 1| from the second virial coefficient of simple fluids (Abbott's form, in Smith, Van
    /// Ness and Abbott: Introduction to Chemical Engineering Thermodynamics), at most 1.
    pub(crate) fn departure(&self, t: f64, p: f64) -> f64 {
        let reduced = t / self.temperature;
        let b = 0.083 - 0.422 / reduced.powf(1.6);
        (b * p / self.pressure / reduced).abs().min(1.0)
    }
}

/// Why a composition cannot be used.
#[derive(Clone, Debug, PartialEq)]
pub enum CompositionError {
    /// No species of that name in the table.
    UnknownSpecies(String),
    /// A species of the caller's own with a figure out of order, or a heat capacity that is not
    /// positive over its range of temperature.
    InvalidSpecies(String),
    /// A fraction that is negative or not finite, with the species' name.
    InvalidFraction(String),
    /// A condensed species in a gas.
    Condensed(String),
    /// No species with a positive fraction.
    Empty,
    /// A water fraction outside 0 to 1 (1 excluded), or a saturation pressure at or above the
    /// total pressure.
    WaterFraction(f64),
    /// The species share no range of temperature.
    NoCommonRange,
}

impl fmt::Display for CompositionError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::UnknownSpecies(name) => write!(f, "there is no species {name:?} in the table"),
            Self::InvalidSpecies(name) => write!(
                f,
                "species {name:?} needs finite figures, a positive molar mass and a heat capacity that is positive over its whole range of temperature"
            ),
            Self::InvalidFraction(name) => {
                write!(f, "the fraction of {name:?} is negative or not finite")
            }
            Self::Condensed(name) => write!(f, "{name:?} is not a gas"),
            Self::Empty => f.write_str("no species has a positive fraction"),
            Self::WaterFraction(x) => write!(f, "a mole fraction of water of {x:.6} is not between 0 and 1"),
            Self::NoCommonRange => f.write_str("the species share no range of temperature"),
        }
    }
}

impl std::error::Error for CompositionError {}

/// An ideal-gas mixture of fixed composition.
///
/// Datum: absolute (elements at 298.15 K, third-law entropy at 1 bar, entropy of ideal mixing
/// included). Source: NASA/TP-2002-211556 unless a species is the caller's own.
#[derive(Clone, Debug, PartialEq)]
pub struct IdealGas {
    components: Vec<(Species, f64)>,
    molar_mass: f64,
    elements: Option<Elements>,
    curve: Curve,
    critical: Option<PseudoCritical>,
}

impl IdealGas {
    /// A mixture from mole fractions, which are normalised.
    ///
    /// # Errors
    /// See [`CompositionError`].
    pub fn new(mole_fractions: &[(&Species, f64)]) -> Result<IdealGas, CompositionError> {
        let mut components: Vec<(Species, f64)> = Vec::with_capacity(mole_fractions.len());
        for &(species, x) in mole_fractions {
            if !(x.is_finite() && x >= 0.0) {
                return Err(CompositionError::InvalidFraction(species.name().to_owned()));
            }
            if species.phase() != SpeciesPhase::Gas {
                return Err(CompositionError::Condensed(species.name().to_owned()));
            }
            if x == 0.0 {
                continue;
            }
            match components.iter_mut().find(|(s, _)| s.name() == species.name()) {
                Some((_, sum)) => *sum += x,
                None => components.push((species.clone(), x)),
            }
        }
        let total: f64 = components.iter().map(|(_, x)| x).sum();
        if !(total > 0.0 && total.is_finite()) {
            return Err(CompositionError::Empty);
        }
        components.iter_mut().for_each(|(_, x)| *x /= total);
        components.retain(|(_, x)| *x > 0.0);
        let molar_mass: f64 = components.iter().map(|(s, x)| x * s.molar_mass()).sum();
        let parts: Vec<(&Curve, f64)> = components.iter().map(|(s, x)| (s.curve(), x / molar_mass)).collect();
        let mixing: f64 = components.iter().map(|(_, x)| -GAS_CONSTANT * x * x.ln()).sum();
        let curve =
            Curve::weighted(&parts).ok_or(CompositionError::NoCommonRange)?.shifted(0.0, mixing / molar_mass);
        let elements = components.iter().try_fold([0.0; Element::COUNT], |mut sum, (s, x)| {
            for (to, n) in sum.iter_mut().zip(s.elements()?) {
                *to += x * n / molar_mass;
            }
            Some(sum)
        });
        let critical = PseudoCritical::new(components.iter().map(|(s, x)| (s, *x)));
        Ok(IdealGas { components, molar_mass, elements, curve, critical })
    }

    /// A mixture from mass fractions, which are normalised.
    ///
    /// # Errors
    /// See [`CompositionError`].
    pub fn from_mass(mass_fractions: &[(&Species, f64)]) -> Result<IdealGas, CompositionError> {
        let moles: Vec<(&Species, f64)> =
            mass_fractions.iter().map(|&(s, w)| (s, w / s.molar_mass())).collect();
        IdealGas::new(&moles)
    }

    /// A mixture from the names of table species and their mole fractions.
    ///
    /// # Errors
    /// See [`CompositionError`].
    pub fn from_names<N: AsRef<str>>(mole_fractions: &[(N, f64)]) -> Result<IdealGas, CompositionError> {
        let found = mole_fractions
            .iter()
            .map(|(name, x)| {
                find_species(name.as_ref())
                    .map(|s| (s, *x))
                    .ok_or_else(|| CompositionError::UnknownSpecies(name.as_ref().to_owned()))
            })
            .collect::<Result<Vec<_>, _>>()?;
        IdealGas::new(&found)
    }

    /// A dry composition (mole fractions, normalised; water among them is refused by the caller)
    /// with a mole fraction of water vapour in the wet gas.
    ///
    /// # Errors
    /// `WaterFraction` outside [0, 1), or as [`IdealGas::new`].
    pub fn moist(dry: &[(&Species, f64)], water: f64) -> Result<IdealGas, CompositionError> {
        if !(0.0..1.0).contains(&water) {
            return Err(CompositionError::WaterFraction(water));
        }
        let vapour = find_species("H2O").ok_or_else(|| CompositionError::UnknownSpecies("H2O".to_owned()))?;
        let total: f64 = dry.iter().map(|(_, x)| x).sum();
        if !(total > 0.0 && total.is_finite()) {
            return Err(CompositionError::Empty);
        }
        let mut wet: Vec<(&Species, f64)> =
            dry.iter().map(|&(s, x)| (s, x / total * (1.0 - water))).collect();
        wet.push((vapour, water));
        IdealGas::new(&wet)
    }

    /// A dry composition saturated with water: `saturation_pressure` (Pa) of water at the gas's
    /// temperature, in a total pressure `pressure` (Pa).
    ///
    /// # Errors
    /// `WaterFraction` where the saturation pressure reaches the total pressure.
    pub fn saturated(
        dry: &[(&Species, f64)],
        saturation_pressure: f64,
        pressure: f64,
    ) -> Result<IdealGas, CompositionError> {
        IdealGas::moist(dry, saturation_pressure / pressure)
    }

    /// Dry air, [`DRY_AIR`].
    ///
    /// # Errors
    /// None in practice; the signature is that of [`IdealGas::from_names`].
    pub fn dry_air() -> Result<IdealGas, CompositionError> {
        IdealGas::from_names(&DRY_AIR)
    }

    /// Species and normalised mole fractions, none of them zero.
    pub fn components(&self) -> &[(Species, f64)] {
        &self.components
    }

    /// Mole fraction of a species by name (0 where it is absent).
    pub fn mole_fraction(&self, name: &str) -> f64 {
        self.components.iter().find(|(s, _)| s.name() == name).map_or(0.0, |(_, x)| *x)
    }

    /// Lowest and highest temperature, K.
    pub fn temperature_range(&self) -> (f64, f64) {
        self.curve.range()
    }
}

impl Engine for IdealGas {
    fn provenance(&self) -> Provenance {
        let (low, high) = self.temperature_range();
        let mut sources: Vec<&str> = Vec::new();
        for (species, _) in &self.components {
            if !sources.contains(&species.source()) {
                sources.push(species.source());
            }
        }
        Provenance {
            formulation: "ideal-gas mixture, NASA nine-coefficient polynomials".to_owned(),
            source: sources.join("; "),
            range: format!("{low:.2} to {high:.2} K, ideal gas (pressure effects on h and cp neglected)"),
        }
    }

    fn supports(&self, pair: Pair) -> bool {
        supports(pair)
    }

    fn state(&self, pair: Pair, a: f64, b: f64, _c: f64) -> Result<State, PropertyError> {
        gas_state(&self.curve, GAS_CONSTANT / self.molar_mass, pair, a, b)
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        Some(self.molar_mass)
    }

    fn elements(&self, _c: f64) -> Option<(Elements, Elements)> {
        self.elements.map(|e| (e, [0.0; Element::COUNT]))
    }

    fn datum(&self) -> Option<Datum> {
        Some(Datum { enthalpy: 0.0, entropy: 0.0 })
    }

    /// That of the polynomials, and |Z − 1| for the pressure effect that the model neglects.
    fn relative_uncertainty(&self, state: &State) -> f64 {
        let neglected = self.critical.map_or(0.0, |c| c.departure(state.temperature, state.pressure));
        (UNCERTAINTY * UNCERTAINTY + neglected * neglected).sqrt()
    }
}
