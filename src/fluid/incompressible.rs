//! Liquids and solids of constant density: ds = c dT/T, h = ∫c dT + v (p − p°).

use super::heat_capacity::{
    ASSUMED_RANGE, Calorics, Curve, STANDARD_PRESSURE, Term, check_pressure, in_range, supports,
};
use super::ideal_gas::{SpeciesPhase, find_species};
use super::{Datum, Element, Elements, Engine, Pair, Phase, PropertyError, Provenance, State};

/// Relative standard uncertainty of enthalpy and entropy differences (k = 1) of a listed medium
/// whose heat capacity is one rounded figure or a straight line; common practice.
const LISTED_UNCERTAINTY: f64 = 0.02;

/// Relative standard uncertainty (k = 1) of a species of the table; common practice.
const SPECIES_UNCERTAINTY: f64 = 5e-4;

/// Relative standard uncertainty (k = 1) of ash; common practice.
const ASH_UNCERTAINTY: f64 = 0.1;

/// An incompressible medium.
///
/// Datum: h = 0 and s = 0 at 298.15 K and 1 bar; a species of the table is on the absolute datum, on
/// which ash, whatever it consists of, starts from zero.
#[derive(Clone, Debug, PartialEq)]
pub struct Incompressible {
    name: String,
    source: String,
    phase: Phase,
    volume: f64,
    curve: Curve,
    uncertainty: f64,
    makeup: Option<Makeup>,
}

/// What is known of a medium on the absolute datum.
#[derive(Clone, Debug, PartialEq)]
struct Makeup {
    molar_mass: Option<f64>,
    elements: Elements,
}

/// A medium of the list: its heat capacity is c0 + c1·T.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ListedMedium {
    /// Name.
    pub name: &'static str,
    /// Liquid or solid.
    pub phase: Phase,
    /// kg/m³
    pub density: f64,
    /// c0 in J/(kg K) and c1 in J/(kg K²).
    pub heat_capacity: [f64; 2],
    /// K
    pub temperature_range: (f64, f64),
    /// Where the figures come from.
    pub source: &'static str,
}

const TABLES: &str = "Incropera, F. P., DeWitt, D. P.: Fundamentals of Heat and Mass Transfer, 5th ed., Wiley, 2002, Tables A.1, A.3 and A.5 at 300 K (from memory)";
const FITTED: &str = "straight line through Incropera, F. P., DeWitt, D. P.: Fundamentals of Heat and Mass Transfer, 5th ed., Wiley, 2002, Table A.5 (from memory)";
const PRACTICE: &str = "common practice";

const fn medium(
    name: &'static str,
    phase: Phase,
    density: f64,
    heat_capacity: [f64; 2],
    temperature_range: (f64, f64),
    source: &'static str,
) -> ListedMedium {
    ListedMedium { name, phase, density, heat_capacity, temperature_range, source }
}

/// Common liquids and solids. A constant heat capacity is the one near 300 K; solids are taken up
/// to somewhat below their melting or decomposition temperature.
pub const LISTED: &[ListedMedium] = &[
    medium("aluminium", Phase::Solid, 2702.0, [903.0, 0.0], (200.0, 930.0), TABLES),
    medium("brass", Phase::Solid, 8530.0, [380.0, 0.0], (200.0, 1150.0), TABLES),
    medium("brick", Phase::Solid, 1920.0, [835.0, 0.0], (200.0, 1500.0), TABLES),
    medium("concrete", Phase::Solid, 2300.0, [880.0, 0.0], (200.0, 900.0), TABLES),
    medium("copper", Phase::Solid, 8933.0, [385.0, 0.0], (200.0, 1350.0), TABLES),
    medium("engine oil", Phase::Liquid, 884.1, [622.0, 4.30], (273.0, 430.0), FITTED),
    medium("ethylene glycol", Phase::Liquid, 1114.4, [1071.0, 4.48], (273.0, 373.0), FITTED),
    medium("glass", Phase::Solid, 2500.0, [750.0, 0.0], (200.0, 800.0), TABLES),
    medium("granite", Phase::Solid, 2630.0, [775.0, 0.0], (200.0, 900.0), TABLES),
    medium("ice", Phase::Solid, 917.0, [2040.0, 0.0], (240.0, 273.15), TABLES),
    medium("iron", Phase::Solid, 7870.0, [447.0, 0.0], (200.0, 1800.0), TABLES),
    medium("lead", Phase::Solid, 11340.0, [129.0, 0.0], (200.0, 600.0), TABLES),
    medium("limestone", Phase::Solid, 2320.0, [810.0, 0.0], (200.0, 900.0), TABLES),
    medium("mercury", Phase::Liquid, 13529.0, [139.3, 0.0], (273.0, 600.0), TABLES),
    medium("milk", Phase::Liquid, 1030.0, [3930.0, 0.0], (273.15, 400.0), PRACTICE),
    medium(
        "molten nitrate salt",
        Phase::Liquid,
        1836.0,
        [1396.0, 0.172],
        (533.0, 873.0),
        "Zavoico, A. B.: Solar Power Tower Design Basis Document, SAND2001-2100, 2001: 60 % sodium, 40 % potassium nitrate (from memory)",
    ),
    medium("rock", Phase::Solid, 2600.0, [850.0, 0.0], (200.0, 900.0), PRACTICE),
    medium("sand", Phase::Solid, 1515.0, [800.0, 0.0], (200.0, 1300.0), TABLES),
    medium("seawater", Phase::Liquid, 1025.0, [3993.0, 0.0], (271.0, 373.0), PRACTICE),
    medium("stainless steel", Phase::Solid, 7900.0, [477.0, 0.0], (200.0, 1670.0), TABLES),
    medium("steel", Phase::Solid, 7832.0, [434.0, 0.0], (200.0, 1700.0), TABLES),
    medium("thermal oil", Phase::Liquid, 870.0, [805.0, 3.60], (263.0, 593.0), PRACTICE),
    medium("titanium", Phase::Solid, 4500.0, [522.0, 0.0], (200.0, 1900.0), TABLES),
    medium("wood", Phase::Solid, 545.0, [2385.0, 0.0], (220.0, 450.0), TABLES),
    medium("zinc", Phase::Solid, 7140.0, [389.0, 0.0], (200.0, 690.0), TABLES),
];

impl Incompressible {
    /// A medium of the caller's own: `heat_capacity` c = Σ c·Tⁿ in J/(kg K) over
    /// `temperature_range` (K), [`ASSUMED_RANGE`] where not given, and `density` in kg/m³.
    ///
    /// # Errors
    /// A density that is not finite and positive, a phase that is neither liquid nor solid, or a
    /// heat capacity that is not positive over the whole range.
    pub fn new(
        name: &str,
        phase: Phase,
        density: f64,
        heat_capacity: &[Term],
        temperature_range: Option<(f64, f64)>,
    ) -> Result<Incompressible, PropertyError> {
        in_range("density", "kg/m³", density, 1e-3, 1e6)?;
        if !matches!(phase, Phase::Liquid | Phase::Solid) {
            return Err(PropertyError::Unstated("a liquid or solid phase of the incompressible medium"));
        }
        let (t_min, t_max) = temperature_range.unwrap_or(ASSUMED_RANGE);
        let curve = Curve::from_terms(heat_capacity, t_min, t_max, 0.0, 0.0)
            .ok_or(PropertyError::Unstated("a specific heat that is positive over the temperature range"))?;
        Ok(Incompressible {
            name: name.to_owned(),
            source: "given in the description".to_owned(),
            phase,
            volume: 1.0 / density,
            curve,
            uncertainty: 0.0,
            makeup: None,
        })
    }

    /// A medium of [`LISTED`] by name (case does not matter); `None` where there is none.
    pub fn listed(name: &str) -> Option<Incompressible> {
        let row = LISTED.iter().find(|m| m.name.eq_ignore_ascii_case(name.trim()))?;
        let [c0, c1] = row.heat_capacity;
        let terms = [Term { coefficient: c0, exponent: 0.0 }, Term { coefficient: c1, exponent: 1.0 }];
        let medium =
            Incompressible::new(row.name, row.phase, row.density, &terms, Some(row.temperature_range))
                .ok()?;
        Some(Incompressible { source: row.source.to_owned(), uncertainty: LISTED_UNCERTAINTY, ..medium })
    }

    /// Ash as the fuels by ultimate analysis hold it: inert, with no elements that are counted and
    /// no enthalpy and entropy at 298.15 K, so that what enters in a fuel can leave as ash.
    /// Specific heat and density: common practice.
    ///
    /// # Errors
    /// None in practice; the signature is that of [`Incompressible::new`].
    pub fn ash() -> Result<Incompressible, PropertyError> {
        let terms = [Term { coefficient: 840.0, exponent: 0.0 }];
        let medium = Incompressible::new("ash", Phase::Solid, 2500.0, &terms, Some((200.0, 2000.0)))?;
        let makeup = Makeup { molar_mass: None, elements: [0.0; Element::COUNT] };
        Ok(Incompressible {
            source: PRACTICE.to_owned(),
            uncertainty: ASH_UNCERTAINTY,
            makeup: Some(makeup),
            ..medium
        })
    }

    /// A pure condensed species of the ideal-gas table (`C(gr)`, `S(a)`, `H2O(L)`) on the absolute
    /// datum, for instance unburnt carbon; `None` where it is not one of these.
    pub fn species(name: &str) -> Option<Incompressible> {
        let species = find_species(name)?;
        // Densities at 298.15 K, kg/m³, common practice.
        let (phase, density) = match (species.name(), species.phase()) {
            ("C(gr)", _) => (Phase::Solid, 2250.0),
            ("S(a)", _) => (Phase::Solid, 2070.0),
            (_, SpeciesPhase::Liquid) => (Phase::Liquid, 997.05),
            _ => return None,
        };
        let molar_mass = species.molar_mass();
        Some(Incompressible {
            name: species.name().to_owned(),
            source: species.source().to_owned(),
            phase,
            volume: 1.0 / density,
            curve: Curve::weighted(&[(species.curve(), 1.0 / molar_mass)])?,
            uncertainty: SPECIES_UNCERTAINTY,
            makeup: Some(Makeup {
                molar_mass: Some(molar_mass),
                elements: species.elements()?.map(|n| n / molar_mass),
            }),
        })
    }

    /// Name.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Lowest and highest temperature, K.
    pub fn temperature_range(&self) -> (f64, f64) {
        self.curve.range()
    }

    fn at(&self, t: f64, p: f64) -> State {
        let value = self.curve.at(t);
        let h = value.h + self.volume * (p - STANDARD_PRESSURE);
        State::one_phase(t, p, h, value.s, self.volume, self.phase, value.cp, 0.0, 0.0)
    }
}

impl Engine for Incompressible {
    fn provenance(&self) -> Provenance {
        let (low, high) = self.curve.range();
        Provenance {
            formulation: format!("incompressible medium, {}", self.name),
            source: self.source.clone(),
            range: format!("{low:.2} to {high:.2} K"),
        }
    }

    fn supports(&self, pair: Pair) -> bool {
        supports(pair)
    }

    fn state(&self, pair: Pair, a: f64, b: f64, _c: f64) -> Result<State, PropertyError> {
        if !(a.is_finite() && b.is_finite()) {
            return Err(PropertyError::NotFinite);
        }
        let (low, high) = self.curve.range();
        let (t, p) = match pair {
            Pair::PressureTemperature => {
                in_range("temperature", "K", b, low, high)?;
                (b, a)
            }
            Pair::PressureEnthalpy => {
                check_pressure(a)?;
                (self.curve.temperature_of_enthalpy(b - self.volume * (a - STANDARD_PRESSURE))?, a)
            }
            Pair::PressureEntropy => (self.curve.temperature_of_entropy(b)?, a),
            Pair::EnthalpyEntropy => {
                let t = self.curve.temperature_of_entropy(b)?;
                (t, STANDARD_PRESSURE + (a - self.curve.at(t).h) / self.volume)
            }
            other => return Err(PropertyError::UnsupportedPair(other)),
        };
        check_pressure(p)?;
        Ok(self.at(t, p))
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        self.makeup.as_ref().and_then(|m| m.molar_mass)
    }

    fn elements(&self, _c: f64) -> Option<(Elements, Elements)> {
        self.makeup.as_ref().map(|m| (m.elements, [0.0; Element::COUNT]))
    }

    fn datum(&self) -> Option<Datum> {
        self.makeup.as_ref().map(|_| Datum { enthalpy: 0.0, entropy: 0.0 })
    }

    fn relative_uncertainty(&self, _state: &State) -> f64 {
        self.uncertainty
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn closed_forms_and_pressure_term() {
        let iron = Incompressible::listed("Iron").unwrap();
        let s = iron.state(Pair::PressureTemperature, 5e5, 700.0, 0.0).unwrap();
        assert!((s.enthalpy - (447.0 * (700.0 - 298.15) + 4e5 / 7870.0)).abs() < 1e-8);
        assert!((s.entropy - 447.0 * (700.0f64 / 298.15).ln()).abs() < 1e-10);
        assert_eq!(s.phase, Phase::Solid);
        let oil = Incompressible::listed("engine oil").unwrap();
        let s = oil.state(Pair::PressureTemperature, 1e5, 350.0, 0.0).unwrap();
        assert!((s.heat_capacity().unwrap() - (622.0 + 4.30 * 350.0)).abs() < 1e-9);
    }

    #[test]
    fn every_listed_medium_is_usable_over_its_range() {
        for row in LISTED {
            let m = Incompressible::listed(row.name).unwrap_or_else(|| panic!("{}", row.name));
            let (low, high) = m.temperature_range();
            for t in [low, 0.5 * (low + high), high] {
                let s = m.state(Pair::PressureTemperature, 1e5, t, 0.0).unwrap();
                for (pair, a, b) in [
                    (Pair::PressureEnthalpy, 1e5, s.enthalpy),
                    (Pair::PressureEntropy, 1e5, s.entropy),
                    (Pair::EnthalpyEntropy, s.enthalpy, s.entropy),
                ] {
                    let back = m.state(pair, a, b, 0.0).unwrap();
                    assert!((back.temperature - t).abs() < 1e-9 * t, "{} {pair}", row.name);
                }
            }
        }
        assert!(Incompressible::listed("kryptonite").is_none());
    }

    #[test]
    fn impossible_media_are_refused() {
        let c = [Term { coefficient: 1000.0, exponent: 0.0 }];
        assert!(Incompressible::new("x", Phase::Liquid, 0.0, &c, Some((250.0, 400.0))).is_err());
        assert!(Incompressible::new("x", Phase::Vapour, 900.0, &c, Some((250.0, 400.0))).is_err());
        assert!(Incompressible::new("x", Phase::Liquid, 900.0, &[], Some((250.0, 400.0))).is_err());
        assert!(Incompressible::new("x", Phase::Liquid, 900.0, &c, Some((400.0, 250.0))).is_err());
    }
}
