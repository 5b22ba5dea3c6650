//! Solid and liquid fuels known by ultimate analysis and heating value.
//!
//! Cautions: fuels, dusts and combustion gases can burn, explode or suffocate. Figures from here
//! serve balances; plant safety belongs to local codes and licensed practice.

use super::chemistry::{Environment, ReferenceSet, ReferenceState, product_enthalpy};
use super::heat_capacity::{STANDARD_PRESSURE, STANDARD_TEMPERATURE, Term, in_range};
use super::incompressible::Incompressible;
use super::{Datum, Element, Elements, Engine, Pair, Phase, PropertyError, Provenance, State};
use std::fmt;

/// Heat of evaporation in the published exergy formula of moist fuels, J/kg.
const MOISTURE_EVAPORATION: f64 = 2.442e6;
/// Exergy of sulfur beyond its heating value in the published formula, J/kg of sulfur.
const SULFUR_EXERGY: f64 = 9.417e6;
/// Range of temperature, K: below the onset of drying and pyrolysis, common practice.
const TEMPERATURES: (f64, f64) = (230.0, 500.0);
/// Specific heats of dry solid fuel, liquid fuel, moisture and ash in J/(kg K), common practice.
const SPECIFIC_HEATS: [f64; 4] = [1300.0, 2000.0, 4186.0, 840.0];
/// Relative standard uncertainty of an assumed specific heat, common practice.
const ASSUMED_UNCERTAINTY: f64 = 0.1;
/// Largest departure of the sum of an analysis from one; smaller ones are normalised away.
const SUM_TOLERANCE: f64 = 0.01;
/// Highest oxygen-to-carbon mass ratio of a liquid: the published formula is for oils and is off
/// by more than 1 % for alcohols.
const LIQUID_OXYGEN_MAX: f64 = 0.15;
/// Saturation pressure of water at 298.15 K, Pa (IAPWS-IF97 equation 30).
const SATURATION_298: f64 = 3169.75;

/// Ultimate analysis as received: mass fractions that sum to one.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct UltimateAnalysis {
    /// Carbon.
    pub carbon: f64,
    /// Hydrogen without that of the moisture.
    pub hydrogen: f64,
    /// Oxygen without that of the moisture.
    pub oxygen: f64,
    /// Nitrogen.
    pub nitrogen: f64,
    /// Sulfur.
    pub sulfur: f64,
    /// Ash.
    pub ash: f64,
    /// Moisture.
    pub moisture: f64,
}

/// Heating value as received at 298.15 K, J/kg.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum GivenHeatingValue {
    /// Water of combustion and moisture leave as vapour.
    Lower(f64),
    /// Water of combustion and moisture leave as liquid.
    Higher(f64),
}

/// State of aggregation, which selects the exergy correlation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FuelKind {
    /// Coal, coke, peat, wood, straw, waste …
    Solid,
    /// Oils and liquid hydrocarbons.
    Liquid,
}

/// Ratio β of chemical exergy to lower heating value of the dry matter.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ExergyRatio {
    /// β
    pub value: f64,
    /// Relative standard uncertainty.
    pub uncertainty: f64,
    /// Name of the correlation.
    pub correlation: &'static str,
}

/// Why a fuel cannot be used.
#[derive(Clone, Debug, PartialEq)]
pub enum FuelError {
    /// A fraction is negative, not finite, or there is no carbon.
    Analysis(&'static str),
    /// The fractions sum to this instead of one.
    Sum(f64),
    /// The heating value (J/kg, lower) is not finite or not between 0 and 60 MJ/kg.
    HeatingValue(f64),
    /// A mass ratio outside the range of the exergy correlations.
    OutsideCorrelation {
        /// The ratio, for instance `O/C`.
        ratio: &'static str,
        /// Its value.
        value: f64,
        /// The highest value covered.
        max: f64,
    },
    /// The engine behind refused a figure.
    Property(PropertyError),
}

impl fmt::Display for FuelError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Analysis(what) => write!(f, "ultimate analysis: {what}"),
            Self::Sum(sum) => write!(f, "the ultimate analysis sums to {sum:.4}, not to 1"),
            Self::HeatingValue(v) => {
                write!(f, "a lower heating value of {:.3} MJ/kg is not between 0 and 60 MJ/kg", v * 1e-6)
            }
            Self::OutsideCorrelation { ratio, value, max } => write!(
                f,
                "{ratio} = {value:.4} by mass is outside the exergy correlation's range (up to {max}); give the composition by species instead"
            ),
            Self::Property(e) => e.fmt(f),
        }
    }
}

impl std::error::Error for FuelError {}

impl From<PropertyError> for FuelError {
    fn from(e: PropertyError) -> Self {
        FuelError::Property(e)
    }
}

impl UltimateAnalysis {
    const NAMES: [&'static str; 7] =
        ["carbon", "hydrogen", "oxygen", "nitrogen", "sulfur", "ash", "moisture"];

    fn parts(&self) -> [f64; 7] {
        [self.carbon, self.hydrogen, self.oxygen, self.nitrogen, self.sulfur, self.ash, self.moisture]
    }

    /// The analysis scaled to a sum of one.
    ///
    /// # Errors
    /// A negative or non-finite fraction, no carbon, or a sum that is off by more than 1 %.
    pub fn normalised(&self) -> Result<UltimateAnalysis, FuelError> {
        let parts = self.parts();
        if let Some((_, name)) = parts.iter().zip(Self::NAMES).find(|(x, _)| !(x.is_finite() && **x >= 0.0)) {
            return Err(FuelError::Analysis(name));
        }
        let sum: f64 = parts.iter().sum();
        if (sum - 1.0).abs() > SUM_TOLERANCE {
            return Err(FuelError::Sum(sum));
        }
        if self.carbon < 1e-3 {
            return Err(FuelError::Analysis("less than 0.1 % carbon"));
        }
        let [carbon, hydrogen, oxygen, nitrogen, sulfur, ash, moisture] = parts.map(|x| x / sum);
        Ok(UltimateAnalysis { carbon, hydrogen, oxygen, nitrogen, sulfur, ash, moisture })
    }

    /// Moles of each element per kg as received, moisture included; ash carries none.
    pub fn elements(&self) -> Elements {
        let water = self.moisture / (2.0 * Element::H.molar_mass() + Element::O.molar_mass());
        let mut out = [0.0; Element::COUNT];
        for (element, mass, moles) in [
            (Element::C, self.carbon, 0.0),
            (Element::H, self.hydrogen, 2.0 * water),
            (Element::O, self.oxygen, water),
            (Element::N, self.nitrogen, 0.0),
            (Element::S, self.sulfur, 0.0),
        ] {
            if let Some(slot) = out.get_mut(element as usize) {
                *slot = mass / element.molar_mass() + moles;
            }
        }
        out
    }

    /// β of the dry matter by the published correlation for its kind and range.
    ///
    /// Sources: Szargut, J., Styrylska, T.: Brennstoff-Wärme-Kraft 16 (1964) 589–596; Kotas, T. J.:
    /// The Exergy Method of Thermal Plant Analysis, Butterworths, 1985.
    ///
    /// # Errors
    /// `OutsideCorrelation`, or `Analysis` without carbon.
    pub fn exergy_ratio(&self, kind: FuelKind) -> Result<ExergyRatio, FuelError> {
        if self.carbon.is_nan() || self.carbon <= 0.0 {
            return Err(FuelError::Analysis("no carbon"));
        }
        let [h, o, n, s] = [self.hydrogen, self.oxygen, self.nitrogen, self.sulfur].map(|x| x / self.carbon);
        let outside = |ratio, value, max| FuelError::OutsideCorrelation { ratio, value, max };
        // CH4 has H/C = 0.336 by mass: above it there is no fuel of condensed matter.
        if h > 0.336 {
            return Err(outside("H/C", h, 0.336));
        }
        match kind {
            FuelKind::Solid if o <= 0.667 => Ok(ExergyRatio {
                value: solid_ratio(h, o, n),
                uncertainty: 0.01,
                correlation: "solid fossil fuel",
            }),
            FuelKind::Solid if o <= 2.67 => Ok(ExergyRatio {
                value: biomass_ratio(h, o, n),
                uncertainty: 0.01,
                correlation: "wood and biomass",
            }),
            FuelKind::Solid => Err(outside("O/C", o, 2.67)),
            FuelKind::Liquid if o <= LIQUID_OXYGEN_MAX => Ok(ExergyRatio {
                value: liquid_ratio(h, o, s),
                uncertainty: 0.005,
                correlation: "liquid hydrocarbons",
            }),
            FuelKind::Liquid => Err(outside("O/C", o, LIQUID_OXYGEN_MAX)),
        }
    }
}

fn solid_ratio(h: f64, o: f64, n: f64) -> f64 {
    1.0437 + 0.1882 * h + 0.0610 * o + 0.0404 * n
}

fn biomass_ratio(h: f64, o: f64, n: f64) -> f64 {
    (1.0412 + 0.2160 * h - 0.2499 * o * (1.0 + 0.7884 * h) + 0.0450 * n) / (1.0 - 0.3035 * o)
}

fn liquid_ratio(h: f64, o: f64, s: f64) -> f64 {
    1.0401 + 0.1728 * h + 0.0432 * o + 0.2169 * s * (1.0 - 2.0628 * h)
}

/// A solid or liquid fuel by ultimate analysis.
///
/// Its own datum is h = 0 and s = 0 at 298.15 K and 1 bar; [`Engine::datum`] carries it to the
/// absolute one: enthalpy of formation from the heating value, absolute entropy from the chemical
/// exergy, both fixed at 298.15 K so that entropy generation does not depend on the surroundings.
/// The ash is inert: it carries heat, no elements and no exergy of its own.
#[derive(Clone, Debug, PartialEq)]
pub struct Fuel {
    analysis: UltimateAnalysis,
    elements: Elements,
    medium: Incompressible,
    lower: f64,
    higher: f64,
    ratio: ExergyRatio,
    exergy: f64,
    datum: Datum,
    uncertainty: f64,
}

impl Fuel {
    /// A fuel from its analysis and heating value; `specific_heat` in J/(kg K) as received, or an
    /// assumed one from its parts.
    ///
    /// # Errors
    /// See [`FuelError`].
    pub fn new(
        kind: FuelKind,
        analysis: UltimateAnalysis,
        heating_value: GivenHeatingValue,
        specific_heat: Option<f64>,
    ) -> Result<Fuel, FuelError> {
        let a = analysis.normalised()?;
        let elements = a.elements();
        let products = product_enthalpy(&elements).ok_or(FuelError::Analysis("elements"))?;
        let latent = products.lower - products.higher;
        let (lower, higher) = match heating_value {
            GivenHeatingValue::Lower(x) => (x, x + latent),
            GivenHeatingValue::Higher(x) => (x - latent, x),
        };
        if !(lower > 0.0 && lower < 6e7) {
            return Err(FuelError::HeatingValue(lower));
        }
        let ratio = a.exergy_ratio(kind)?;
        // Szargut and Styrylska: dry matter by its ratio, and sulfur of solids apart.
        let sulfur = match kind {
            FuelKind::Solid => SULFUR_EXERGY * a.sulfur,
            FuelKind::Liquid => 0.0,
        };
        let exergy = (lower + MOISTURE_EVAPORATION * a.moisture) * ratio.value + sulfur;
        let enthalpy = lower + products.lower;
        // The correlations refer to the 1986 environment at 298.15 K and 1 atm; the entropy that
        // follows is the fuel's own and holds for every environment.
        let reference = ReferenceState::new(
            Environment {
                temperature: STANDARD_TEMPERATURE,
                pressure: 101_325.0,
                relative_humidity: None,
                set: ReferenceSet::Szargut1986,
            },
            SATURATION_298,
        )?;
        let ground = reference.ground(&elements).ok_or(FuelError::Analysis("elements"))?;
        let entropy = (enthalpy - exergy - ground) / STANDARD_TEMPERATURE;
        let (phase, density, dry) = match kind {
            // Densities in common practice; they only enter v dp.
            FuelKind::Solid => (Phase::Solid, 1300.0, SPECIFIC_HEATS[0]),
            FuelKind::Liquid => (Phase::Liquid, 900.0, SPECIFIC_HEATS[1]),
        };
        let assumed =
            dry * (1.0 - a.ash - a.moisture) + SPECIFIC_HEATS[2] * a.moisture + SPECIFIC_HEATS[3] * a.ash;
        let c = specific_heat.unwrap_or(assumed);
        in_range("specific heat", "J/(kg K)", c, 100.0, 1e4)?;
        let terms = [Term { coefficient: c, exponent: 0.0 }];
        Ok(Fuel {
            analysis: a,
            elements,
            medium: Incompressible::new("fuel", phase, density, &terms, Some(TEMPERATURES))?,
            lower,
            higher,
            ratio,
            exergy,
            datum: Datum { enthalpy, entropy },
            uncertainty: if specific_heat.is_some() { 0.0 } else { ASSUMED_UNCERTAINTY },
        })
    }

    /// The analysis, normalised.
    pub fn analysis(&self) -> &UltimateAnalysis {
        &self.analysis
    }

    /// Lower heating value as received, J/kg.
    pub fn lower_heating_value(&self) -> f64 {
        self.lower
    }

    /// Higher heating value as received, J/kg.
    pub fn higher_heating_value(&self) -> f64 {
        self.higher
    }

    /// Chemical exergy by the correlation at 298.15 K and 1 atm in the 1986 environment, J/kg.
    pub fn standard_exergy(&self) -> f64 {
        self.exergy
    }

    /// The ratio β and its correlation.
    pub fn exergy_ratio(&self) -> ExergyRatio {
        self.ratio
    }

    /// Standard uncertainty of the absolute entropy that comes from the correlation, J/(kg K).
    pub fn entropy_uncertainty(&self) -> f64 {
        self.ratio.uncertainty * self.exergy / STANDARD_TEMPERATURE
    }

    /// Mass of ash per mass of fuel, which no element accounts for.
    pub fn ash(&self) -> f64 {
        self.analysis.ash
    }

    /// The fuel at 298.15 K and 1 bar on the absolute datum: J/kg and J/(kg K).
    pub fn standard_state(&self) -> Datum {
        self.datum
    }
}

impl Engine for Fuel {
    fn provenance(&self) -> Provenance {
        Provenance {
            formulation: format!("fuel by ultimate analysis, exergy correlation for {}", self.ratio.correlation),
            source: "Szargut, J., Styrylska, T.: Brennstoff-Wärme-Kraft 16 (1964) 589-596; Kotas, T. J.: The Exergy Method of Thermal Plant Analysis, Butterworths, 1985".to_owned(),
            range: format!("{:.2} to {:.2} K, near {STANDARD_PRESSURE:.0} Pa", TEMPERATURES.0, TEMPERATURES.1),
        }
    }

    fn supports(&self, pair: Pair) -> bool {
        self.medium.supports(pair)
    }

    fn state(&self, pair: Pair, a: f64, b: f64, c: f64) -> Result<State, PropertyError> {
        self.medium.state(pair, a, b, c)
    }

    fn molar_mass(&self, _c: f64) -> Option<f64> {
        None
    }

    fn elements(&self, _c: f64) -> Option<(Elements, Elements)> {
        Some((self.elements, [0.0; Element::COUNT]))
    }

    fn datum(&self) -> Option<Datum> {
        Some(self.datum)
    }

    fn relative_uncertainty(&self, _state: &State) -> f64 {
        self.uncertainty
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::Value;

    fn ratios(carbon: f64, hydrogen: f64, oxygen: f64) -> [f64; 3] {
        let mass = |n: f64, e: Element| n * e.molar_mass();
        let c = mass(carbon, Element::C);
        [mass(hydrogen, Element::H) / c, mass(oxygen, Element::O) / c, 0.0]
    }

    #[test]
    fn correlations_match_their_published_tests() {
        let data: Value =
            serde_json::from_str(include_str!("../../tests/data/fuel-exergy-correlations.json")).unwrap();
        let mut seen = 0;
        for row in data["rows"].as_array().unwrap() {
            let beta = match row["fuel"].as_str().unwrap() {
                "graphite" => solid_ratio(0.0, 0.0, 0.0),
                name => {
                    let [h, o, s] = match name {
                        "n-octane(l)" => ratios(8.0, 18.0, 0.0),
                        "benzene(l)" => ratios(6.0, 6.0, 0.0),
                        "methanol(l)" => ratios(1.0, 4.0, 1.0),
                        "ethanol(l)" => ratios(2.0, 6.0, 1.0),
                        other => panic!("{other}"),
                    };
                    liquid_ratio(h, o, s)
                }
            };
            assert!((beta - row["beta_correlation"].as_f64().unwrap()).abs() < 1e-4, "{row}: {beta}");
            seen += 1;
        }
        assert_eq!(seen, 5);
        let wood = &data["wood"];
        let [h, o, beta] = ["h_c", "o_c", "beta"].map(|k| wood[k].as_f64().unwrap());
        assert!((biomass_ratio(h, o, 0.0) - beta).abs() < 1e-4);
    }

    #[test]
    fn outside_the_correlations_is_refused() {
        // Ethanol: the oil correlation is 1.3 % off.
        let alcohol =
            UltimateAnalysis { carbon: 0.5214, hydrogen: 0.1313, oxygen: 0.3473, ..Default::default() };
        assert!(matches!(
            alcohol.exergy_ratio(FuelKind::Liquid),
            Err(FuelError::OutsideCorrelation { ratio: "O/C", .. })
        ));
        let carbonate = UltimateAnalysis { carbon: 0.2, oxygen: 0.8, ..Default::default() };
        assert!(carbonate.exergy_ratio(FuelKind::Solid).is_err());
        let hydrogen = UltimateAnalysis { carbon: 0.1, hydrogen: 0.9, ..Default::default() };
        assert!(matches!(
            Fuel::new(FuelKind::Liquid, hydrogen, GivenHeatingValue::Lower(5e7), None),
            Err(FuelError::OutsideCorrelation { ratio: "H/C", .. })
        ));
        let coal =
            UltimateAnalysis { carbon: 0.8, hydrogen: 0.05, oxygen: 0.1, ash: 0.05, ..Default::default() };
        let lower = GivenHeatingValue::Lower;
        assert!(Fuel::new(FuelKind::Solid, coal, lower(3e7), None).is_ok());
        for (analysis, value, c) in [
            (UltimateAnalysis { ash: 0.25, ..coal }, lower(3e7), None),
            (UltimateAnalysis { oxygen: -0.1, ash: 0.25, ..coal }, lower(3e7), None),
            (UltimateAnalysis { carbon: f64::NAN, ..coal }, lower(3e7), None),
            (UltimateAnalysis { ash: 1.0, ..Default::default() }, lower(3e7), None),
            (coal, lower(0.0), None),
            (coal, lower(f64::NAN), None),
            (coal, GivenHeatingValue::Higher(1e6), None),
            (coal, lower(3e7), Some(f64::NAN)),
            (coal, lower(3e7), Some(0.0)),
        ] {
            assert!(Fuel::new(FuelKind::Solid, analysis, value, c).is_err(), "{analysis:?} {value:?} {c:?}");
        }
    }
}
