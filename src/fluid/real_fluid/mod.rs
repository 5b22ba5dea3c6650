//! Pure fluids and pseudo-pure blends by their published multiparameter Helmholtz equations.
//!
//! Each fluid is one file in `fluid/data`, named after the equation's authors and year, with its
//! citation, its own gas constant, its range and its uncertainty. h and s are on the datum of the
//! published ideal part (or the usual reference state that the file gives).
//!
//! A blend (R410A …, and air as a real gas) is treated as one substance: its bubble and dew
//! pressures are the published correlations, the saturated states lie on the equation at those
//! pressures, and between them every property is linear in quality at constant pressure. The two
//! phases of a blend are therefore not in exact equilibrium by the equation, and du = T ds − p dv
//! holds along the quality of a blend only to the accuracy of the correlations.

mod equation;
mod flash;
mod grid;
mod ideal;
mod point;
mod registry;
mod residual;
mod saturation;
mod wet;

use super::heat_capacity::STANDARD_TEMPERATURE;
use super::ideal_gas::find_species;
use crate::fluid::{Datum, Element, Elements, Engine, Pair, PropertyError, Provenance, State};
use equation::{Equation, SaturationData};
use grid::{Grid, Target};
use point::Helmholtz;
use saturation::Saturation;
use std::sync::OnceLock;

pub use equation::{Citation, CriticalPoint, Range, Uncertainty};
pub use registry::{by_name, catalogue};

/// Tables that are traced when a fluid is first used.
#[derive(Debug)]
struct Tables {
    saturation: Saturation,
    grid: Grid,
}

/// A fluid with its compiled equation.
#[derive(Debug)]
pub struct RealFluid {
    equation: Equation,
    model: Helmholtz,
    elements: Elements,
    /// Above this temperature (K) no pressure in range freezes the fluid.
    t_melt_max: f64,
    tables: OnceLock<Option<Tables>>,
}

/// The ideal gas behind an equation, at 1 bar, on the equation's own datum.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct IdealGasReference {
    /// J/kg
    pub enthalpy: f64,
    /// J/(kg K) at 1 bar
    pub entropy: f64,
    /// J/(kg K)
    pub heat_capacity: f64,
}

impl RealFluid {
    /// Reads and compiles a data file.
    ///
    /// # Errors
    /// What in the file cannot be read or compiled.
    fn parse(text: &str) -> Result<RealFluid, String> {
        let equation: Equation = serde_json::from_str(text).map_err(|e| e.to_string())?;
        let model = Helmholtz::new(&equation)?;
        let mut elements = [0.0; Element::COUNT];
        for (symbol, count) in &equation.elements {
            let element = Element::from_symbol(symbol).ok_or_else(|| format!("no element {symbol}"))?;
            elements[element as usize] = count / equation.molar_mass;
        }
        let range = equation.range;
        let t_melt_max = equation.melting.as_ref().map_or(0.0, |m| {
            m.lowest_temperature(range.pressure_max, range.temperature_min, range.temperature_max)
        });
        Ok(RealFluid { equation, model, elements, t_melt_max, tables: OnceLock::new() })
    }

    fn tables(&self) -> Result<(&Saturation, &Grid), PropertyError> {
        let tables = self.tables.get_or_init(|| {
            let critical = self.equation.critical;
            let delta = critical.molar_density / self.equation.reducing.molar_density;
            let range = self.equation.range;
            let saturation = Saturation::trace(
                &self.model,
                &self.equation.saturation,
                (critical.temperature, delta),
                range.temperature_min,
            )?;
            let grid = Grid::fill(&self.model, &saturation, range.pressure_max, range.temperature_max);
            Some(Tables { saturation, grid })
        });
        tables.as_ref().map(|t| (&t.saturation, &t.grid)).ok_or(PropertyError::NoSaturation)
    }

    /// Canonical name.
    pub fn name(&self) -> &str {
        &self.equation.fluid
    }

    /// Every name that [`by_name`] takes, the canonical one among them.
    pub fn names(&self) -> &[String] {
        &self.equation.names
    }

    /// CAS registry number, where the fluid has one.
    pub fn cas(&self) -> Option<&str> {
        self.equation.cas.as_deref()
    }

    /// Where the equation was published.
    pub fn citation(&self) -> &Citation {
        &self.equation.citation
    }

    /// Range of validity, K and Pa.
    pub fn range(&self) -> Range {
        self.equation.range
    }

    /// The source's estimate of the equation's uncertainty.
    pub fn uncertainty(&self) -> &Uncertainty {
        &self.equation.uncertainty
    }

    /// Gas constant of the equation, J/(mol K).
    pub fn gas_constant(&self) -> f64 {
        self.equation.gas_constant
    }

    /// Critical point as the source states it (K, Pa, mol/m³).
    pub fn critical(&self) -> CriticalPoint {
        self.equation.critical
    }

    /// The point where liquid and vapour of the equation itself become one (K, Pa); it differs a
    /// little from the stated one where the equation was not forced through that.
    ///
    /// # Errors
    /// `NoSaturation` where the equation has no such point.
    pub fn own_critical(&self) -> Result<(f64, f64), PropertyError> {
        let (saturation, _) = self.tables()?;
        Ok((saturation.t_c, saturation.p_c))
    }

    /// Lowest saturation state: temperature (K) and bubble pressure (Pa), the triple point or the
    /// lower end of the equation.
    ///
    /// # Errors
    /// `NoSaturation` where the equation has no saturation line.
    pub fn triple(&self) -> Result<(f64, f64), PropertyError> {
        let (saturation, _) = self.tables()?;
        Ok((saturation.t_min, saturation.bubble_min))
    }

    /// Source of the melting line that bounds the liquid, where one is published.
    pub fn melting_source(&self) -> Option<&str> {
        self.equation.melting.as_ref().map(|m| m.citation.as_str())
    }

    /// Whether the fluid is a blend treated as one substance.
    pub fn is_pseudo_pure(&self) -> bool {
        matches!(self.equation.saturation, SaturationData::BubbleAndDew { .. })
    }

    /// The ideal gas of this equation at `t` (K) and 1 bar, on the equation's datum. With an
    /// absolute ideal-gas function of the same species it gives the bridge to absolute values.
    pub fn ideal_part(&self, t: f64) -> IdealGasReference {
        let (enthalpy, entropy, heat_capacity) = self.model.ideal_gas(t, 1e5);
        IdealGasReference { enthalpy, entropy, heat_capacity }
    }
}

impl Engine for RealFluid {
    fn provenance(&self) -> Provenance {
        let Citation { authors, year, .. } = &self.equation.citation;
        let Range { temperature_min, temperature_max, pressure_max } = self.equation.range;
        let first = authors.split(',').next().unwrap_or(authors);
        Provenance {
            formulation: format!("Helmholtz equation of {first} et al. ({year}) for {}", self.name()),
            source: self.equation.citation.to_string(),
            range: format!("{temperature_min} K to {temperature_max} K, up to {} MPa", pressure_max * 1e-6),
        }
    }

    fn supports(&self, _pair: Pair) -> bool {
        true
    }

    fn state(&self, pair: Pair, a: f64, b: f64, _c: f64) -> Result<State, PropertyError> {
        if !(a.is_finite() && b.is_finite()) {
            return Err(PropertyError::NotFinite);
        }
        match pair {
            Pair::PressureTemperature => self.state_pt(a, b),
            Pair::PressureQuality => self.state_px(a, b),
            Pair::TemperatureQuality => self.state_tx(a, b),
            Pair::PressureEnthalpy => self.state_py(a, Target::Enthalpy, b),
            Pair::PressureEntropy => self.state_py(a, Target::Entropy, b),
            Pair::EnthalpyEntropy => self.state_hs(a, b),
        }
    }

    fn saturation_temperature(&self, p: f64, quality: f64) -> Result<(f64, f64), PropertyError> {
        self.saturation_line(p, quality)
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        Some(self.equation.molar_mass)
    }

    fn elements(&self, _c: f64) -> Option<(Elements, Elements)> {
        Some((self.elements, [0.0; Element::COUNT]))
    }

    /// The bridge at 298.15 K and 1 bar from the equation's ideal part to the absolute function of
    /// the same species; `None` where the species table has none (refrigerants, blends).
    fn datum(&self) -> Option<Datum> {
        let species = self.names().iter().find_map(|name| find_species(name))?;
        let molar_mass = self.molar_mass(0.0)?;
        if (species.molar_mass() / molar_mass - 1.0).abs() > 1e-3 {
            return None;
        }
        let absolute = species.standard(STANDARD_TEMPERATURE).ok()?;
        let own = self.ideal_part(STANDARD_TEMPERATURE);
        Some(Datum {
            enthalpy: absolute.h / molar_mass - own.enthalpy,
            entropy: absolute.s / molar_mass - own.entropy,
        })
    }

    fn relative_uncertainty(&self, _state: &State) -> f64 {
        self.equation.uncertainty.enthalpy_difference
    }
}
