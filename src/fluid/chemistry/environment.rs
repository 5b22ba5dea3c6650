//! The surroundings at (T0, p0) as a chemical dead state.

use super::reference_sets::{ReferenceSet, TABLE_PRESSURE};
use crate::fluid::heat_capacity::{Caloric, GAS_CONSTANT, STANDARD_PRESSURE, STANDARD_TEMPERATURE, in_range};
use crate::fluid::ideal_gas::{IdealGas, Species, SpeciesPhase, find_species};
use crate::fluid::{Element, Elements, Engine, PropertyError};

/// Molar volume of liquid water near ambient temperature, m³/mol (IAPWS-IF97 at 298.15 K, 1 bar).
const LIQUID_WATER_VOLUME: f64 = 1.8069e-5;
/// Lowest temperature of the liquid-water data, K.
const LIQUID_WATER_MIN: f64 = 273.15;
/// Lowest relative humidity taken: chemical exergy of water grows without bound towards zero.
const HUMIDITY_MIN: f64 = 1e-3;

/// The surroundings that all exergies refer to.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Environment {
    /// T0, K.
    pub temperature: f64,
    /// p0, Pa absolute.
    pub pressure: f64,
    /// φ0, 0 to 1, where given; it replaces the set's own water vapour.
    pub relative_humidity: Option<f64>,
    /// Chemical reference set.
    pub set: ReferenceSet,
}

/// Chemical potentials of the elements in equilibrium with the surroundings at (T0, p0).
///
/// On the absolute datum the specific flow exergy of anything whose elements are known is
/// e = h − T0 s − Σ n λ, physical and chemical part together.
#[derive(Clone, Debug, PartialEq)]
pub struct ReferenceState {
    environment: Environment,
    saturation_pressure: f64,
    partial_pressures: Vec<(&'static str, f64)>,
    potentials: [Option<f64>; Element::COUNT],
}

/// A gas at rest with the surroundings at (T0, p0), its composition kept, and with its water
/// condensed as far as it would be there.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DeadState {
    /// h0, J per kg of mixture, absolute datum.
    pub enthalpy: f64,
    /// s0, J/(K kg of mixture), absolute datum.
    pub entropy: f64,
    /// Chemical exergy of the equilibrated mixture, J/kg.
    pub chemical_exergy: f64,
    /// Moles of liquid water per mole of mixture.
    pub condensed: f64,
}

/// Standard Gibbs energy (J/mol) of a monatomic gas from its entropy at 298.15 K and 1 bar.
fn monatomic_gibbs(t: f64, entropy: f64) -> f64 {
    let cp = 2.5 * GAS_CONSTANT;
    cp * (t - STANDARD_TEMPERATURE) - t * (entropy + cp * (t / STANDARD_TEMPERATURE).ln())
}

fn standard_gibbs(name: &str, t: f64) -> Result<f64, PropertyError> {
    match name {
        // CODATA Key Values 1989.
        "Ne" => Ok(monatomic_gibbs(t, 146.328)),
        "Kr" => Ok(monatomic_gibbs(t, 164.085)),
        "Xe" => Ok(monatomic_gibbs(t, 169.685)),
        _ => find_species(name).ok_or(PropertyError::Unstated("species data of the reference gas"))?.gibbs(t),
    }
}

impl ReferenceState {
    /// The reference for an environment; `saturation_pressure` is that of water at T0, Pa.
    ///
    /// Water vapour is φ0·p_sat(T0) where a relative humidity is given, else the set's, capped at
    /// saturation; the dry gases share what is left of p0 in the set's proportion.
    ///
    /// # Errors
    /// T0 outside 200–400 K, p0 outside 1 kPa–10 MPa, a relative humidity outside 0.001–1, or
    /// water vapour that fills p0.
    pub fn new(environment: Environment, saturation_pressure: f64) -> Result<ReferenceState, PropertyError> {
        let Environment { temperature: t0, pressure: p0, relative_humidity, set } = environment;
        in_range("ambient temperature", "K", t0, 200.0, 400.0)?;
        in_range("ambient pressure", "Pa", p0, 1e3, 1e7)?;
        in_range("saturation pressure of water", "Pa", saturation_pressure, 1e-6, 1e7)?;
        let rows = set.partial_pressures();
        let table_water = rows.iter().find(|r| r.1 == "H2O").map_or(0.0, |r| r.2);
        let water = match relative_humidity {
            Some(phi) => {
                in_range("relative humidity", "1", phi, HUMIDITY_MIN, 1.0)?;
                phi * saturation_pressure
            }
            None => (table_water * p0 / TABLE_PRESSURE).min(saturation_pressure),
        };
        in_range("partial pressure of water vapour", "Pa", water, 0.0, 0.99 * p0)?;
        let dry_share = (p0 - water) / (TABLE_PRESSURE - table_water);
        let mut partial_pressures = Vec::with_capacity(rows.len());
        let mut gases = [None; Element::COUNT];
        for (element, name, table) in rows {
            let p = if name == "H2O" { water } else { table * dry_share };
            partial_pressures.push((name, p));
            let mu = standard_gibbs(name, t0)? + GAS_CONSTANT * t0 * (p / STANDARD_PRESSURE).ln();
            if let Some(slot) = gases.get_mut(element as usize) {
                *slot = Some(mu);
            }
        }
        // From the potentials of N2, O2, CO2 and H2O to those of their elements.
        let get = |e: Element| gases.get(e as usize).copied().flatten();
        let oxygen = get(Element::O);
        let mut potentials = gases;
        let mut put = |e: Element, value: Option<f64>| {
            if let Some(slot) = potentials.get_mut(e as usize) {
                *slot = value;
            }
        };
        put(Element::N, get(Element::N).map(|mu| 0.5 * mu));
        put(Element::O, oxygen.map(|mu| 0.5 * mu));
        put(Element::C, get(Element::C).zip(oxygen).map(|(c, o)| c - o));
        put(Element::H, get(Element::H).zip(oxygen).map(|(w, o)| 0.5 * (w - 0.5 * o)));
        for solid in set.solids() {
            // e(T0) = e·T0/T + D (1 − T0/T): the element's own exergy at T0.
            let ratio = t0 / STANDARD_TEMPERATURE;
            let exergy = solid.exergy * ratio + solid.devaluation * (1.0 - ratio);
            // The element's Gibbs energy at T0 to first order, with h = 0 at 298.15 K; the second
            // order is cp (ΔT)²/2T, some 10 J/mol.
            put(solid.element, Some(-t0 * solid.entropy - exergy));
        }
        Ok(ReferenceState { environment, saturation_pressure, partial_pressures, potentials })
    }

    /// The environment that this belongs to.
    pub fn environment(&self) -> &Environment {
        &self.environment
    }

    /// Partial pressures (Pa) of the reference gases as used at (T0, p0).
    pub fn partial_pressures(&self) -> &[(&'static str, f64)] {
        &self.partial_pressures
    }

    /// λ of an element, J per mole of atoms on the absolute datum; `None` where the set has no
    /// reference species for it.
    pub fn potential(&self, element: Element) -> Option<f64> {
        self.potentials.get(element as usize).copied().flatten()
    }

    /// Σ n λ in the unit of `elements` (moles per kg gives J/kg); `None` where an element that is
    /// present has no reference species.
    pub fn ground(&self, elements: &Elements) -> Option<f64> {
        self.potentials
            .iter()
            .zip(elements)
            .try_fold(0.0, |sum, (lambda, n)| if *n == 0.0 { Some(sum) } else { lambda.map(|l| sum + n * l) })
    }

    /// Specific flow exergy h − T0 s − Σ n λ from absolute enthalpy (J/kg), absolute entropy
    /// (J/(kg K)) and moles of elements per kg: J/kg.
    pub fn flow_exergy(&self, enthalpy: f64, entropy: f64, elements: &Elements) -> Option<f64> {
        self.ground(elements).map(|ground| enthalpy - self.environment.temperature * entropy - ground)
    }

    /// Chemical exergy of a pure species at (T0, p0), J/mol: the definition's own figure where it
    /// has one, else from its Gibbs energy.
    ///
    /// # Errors
    /// `OutOfRange` where T0 lies outside the species' data, `Unstated` where its elements or
    /// their reference species are not known.
    pub fn chemical_exergy(&self, species: &Species) -> Result<f64, PropertyError> {
        match species.chemical_exergy() {
            Some(own) => Ok(own),
            None => Ok(self.gibbs(species)? - self.species_ground(species)?),
        }
    }

    /// Gibbs energy of a pure species at (T0, p0), J/mol.
    fn gibbs(&self, species: &Species) -> Result<f64, PropertyError> {
        let t0 = self.environment.temperature;
        let g = species.gibbs(t0)?;
        Ok(match species.phase() {
            SpeciesPhase::Gas => g + GAS_CONSTANT * t0 * (self.environment.pressure / STANDARD_PRESSURE).ln(),
            // v (p0 − 1 bar) of a condensed species is below 0.1 J/mol at ambient pressure.
            SpeciesPhase::Liquid | SpeciesPhase::Solid => g,
        })
    }

    fn species_ground(&self, species: &Species) -> Result<f64, PropertyError> {
        if let Some(own) = species.chemical_exergy() {
            return Ok(self.gibbs(species)? - own);
        }
        let elements = species.elements().ok_or(PropertyError::Unstated("the elements of a species"))?;
        self.ground(elements).ok_or(PropertyError::Unstated("the chemical exergy of an element"))
    }

    /// What to subtract from h − T0 s of a mixture (J/kg, absolute datum) for its flow exergy:
    /// Σ n λ, and for a species with a chemical exergy of its own what that figure implies.
    ///
    /// # Errors
    /// As [`ReferenceState::chemical_exergy`].
    pub fn gas_ground(&self, gas: &IdealGas) -> Result<f64, PropertyError> {
        let molar_mass = gas.molar_mass(0.0).ok_or(PropertyError::Unstated("molar mass"))?;
        let mut sum = 0.0;
        for (species, x) in gas.components() {
            sum += x * self.species_ground(species)?;
        }
        Ok(sum / molar_mass)
    }

    /// Chemical exergy of liquid water at (T0, p0), J/mol.
    pub fn liquid_water_exergy(&self) -> f64 {
        let Environment { temperature: t0, pressure: p0, .. } = self.environment;
        let vapour = self.partial_pressures.iter().find(|r| r.0 == "H2O").map_or(f64::NAN, |r| r.1);
        GAS_CONSTANT * t0 * (self.saturation_pressure / vapour).ln()
            + LIQUID_WATER_VOLUME * (p0 - self.saturation_pressure)
    }

    /// Enthalpy (J/mol) and entropy (J/(mol K)) of liquid water at (T0, p0), in equilibrium with
    /// vapour at the saturation pressure, on the datum of that `vapour`. Below 273.15 K it is
    /// continued as supercooled liquid with the heat capacity at 273.15 K.
    fn liquid_water(&self, vapour: Caloric) -> Result<(f64, f64), PropertyError> {
        let t0 = self.environment.temperature;
        let missing = PropertyError::Unstated("species data of water");
        let liquid = find_species("H2O(L)").ok_or(missing.clone())?;
        let warm = t0.max(LIQUID_WATER_MIN);
        let at = liquid.standard(warm)?;
        let latent = find_species("H2O").ok_or(missing)?.standard(t0)?.h - at.h - at.cp * (t0 - warm);
        let compression = LIQUID_WATER_VOLUME * (self.environment.pressure - self.saturation_pressure);
        let s_saturated = vapour.s - GAS_CONSTANT * (self.saturation_pressure / STANDARD_PRESSURE).ln();
        Ok((vapour.h - latent + compression, s_saturated - latent / t0))
    }

    /// The dead state of a gas mixture with water condensing where it exceeds saturation.
    ///
    /// Physical exergy is (h − h0) − T0 (s − s0) with these figures, and its sum with
    /// `chemical_exergy` is h − T0 s less [`ReferenceState::gas_ground`], exactly.
    ///
    /// # Errors
    /// As [`ReferenceState::chemical_exergy`].
    pub fn dead_state(&self, gas: &IdealGas) -> Result<DeadState, PropertyError> {
        let Environment { temperature: t0, pressure: p0, .. } = self.environment;
        let molar_mass = gas.molar_mass(0.0).ok_or(PropertyError::Unstated("molar mass"))?;
        let water = gas.mole_fraction("H2O");
        let saturated = self.saturation_pressure / p0;
        let vapour = if saturated < 1.0 && water > saturated {
            (1.0 - water) * saturated / (1.0 - saturated)
        } else {
            water
        };
        let condensed = water - vapour;
        let left = 1.0 - condensed;
        let (mut h, mut s) = (0.0, 0.0);
        for (species, x) in gas.components() {
            let at = species.standard(t0)?;
            let mut n = *x;
            if species.name() == "H2O" {
                let (h_liquid, s_liquid) = self.liquid_water(at)?;
                h += condensed * h_liquid;
                s += condensed * s_liquid;
                n = vapour;
            }
            if n > 0.0 {
                h += n * at.h;
                s += n * (at.s - GAS_CONSTANT * (n / left * p0 / STANDARD_PRESSURE).ln());
            }
        }
        let (enthalpy, entropy) = (h / molar_mass, s / molar_mass);
        let chemical_exergy = enthalpy - t0 * entropy - self.gas_ground(gas)?;
        Ok(DeadState { enthalpy, entropy, chemical_exergy, condensed })
    }
}
