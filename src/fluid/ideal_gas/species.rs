//! Species: their make-up, standard enthalpy, entropy and heat capacity.

use super::CompositionError;
use crate::fluid::heat_capacity::{
    ASSUMED_RANGE, Caloric, Calorics, Curve, GAS_CONSTANT, NineCoefficients, Term,
};
use crate::fluid::{Element, Elements, PropertyError};
use serde::Deserialize;
use std::collections::{BTreeMap, HashMap};
use std::ops::RangeInclusive;
use std::sync::OnceLock;

/// Highest temperature used, K: above it the published intervals describe ionised gas.
const T_MAX: f64 = 6000.0;

/// Molar masses taken from a caller, kg/mol: a figure in g/mol is outside.
pub(crate) const MOLAR_MASSES: RangeInclusive<f64> = 1e-3..=1.0;

/// Phase of a species' standard state.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum SpeciesPhase {
    /// Ideal gas at 1 bar.
    Gas,
    /// Pure liquid at 1 bar.
    Liquid,
    /// Pure solid at 1 bar.
    Solid,
}

/// Critical point.
#[derive(Clone, Copy, Debug, PartialEq, Deserialize)]
pub struct CriticalPoint {
    /// K
    #[serde(rename = "temperature_K")]
    pub temperature: f64,
    /// Pa
    #[serde(rename = "pressure_Pa")]
    pub pressure: f64,
}

/// A chemical species with its standard-state properties per mole, on the absolute datum
/// (elements at 298.15 K for enthalpy, third law at 1 bar for entropy).
#[derive(Clone, Debug, PartialEq)]
pub struct Species {
    name: String,
    aliases: Vec<String>,
    phase: SpeciesPhase,
    molar_mass: f64,
    elements: Option<Elements>,
    critical: Option<CriticalPoint>,
    curve: Curve,
    chemical_exergy: Option<f64>,
    source: String,
}

/// What a caller gives to define a species of its own, for instance to reproduce a published
/// table.
#[derive(Clone, Debug, PartialEq)]
pub struct SpeciesDefinition {
    /// Name.
    pub name: String,
    /// kg/mol.
    pub molar_mass: f64,
    /// Atoms of each element per molecule, where known.
    pub elements: Option<Elements>,
    /// cp = Σ c·Tⁿ, J/(mol K).
    pub heat_capacity: Vec<Term>,
    /// Lowest and highest temperature, K; [`ASSUMED_RANGE`] where not given.
    pub temperature_range: Option<(f64, f64)>,
    /// Enthalpy of formation at 298.15 K, J/mol.
    pub formation_enthalpy: f64,
    /// Entropy at 298.15 K and 1 bar, J/(mol K).
    pub standard_entropy: f64,
    /// Standard chemical exergy that overrides the one computed from formation data, J/mol.
    pub chemical_exergy: Option<f64>,
}

impl Species {
    /// A gas of the caller's own.
    ///
    /// # Errors
    /// A figure that is not finite, a molar mass outside 0.001 to 1 kg/mol, or a heat capacity that is
    /// not positive over the whole range of temperature.
    pub fn define(definition: &SpeciesDefinition) -> Result<Species, CompositionError> {
        let d = definition;
        let invalid = || CompositionError::InvalidSpecies(d.name.clone());
        if !MOLAR_MASSES.contains(&d.molar_mass)
            || d.chemical_exergy.is_some_and(|e| !e.is_finite())
            || d.elements.is_some_and(|e| e.iter().any(|n| !(n.is_finite() && *n >= 0.0)))
        {
            return Err(invalid());
        }
        let (t_min, t_max) = d.temperature_range.unwrap_or(ASSUMED_RANGE);
        let curve =
            Curve::from_terms(&d.heat_capacity, t_min, t_max, d.formation_enthalpy, d.standard_entropy)
                .ok_or_else(invalid)?;
        Ok(Species {
            name: d.name.clone(),
            aliases: Vec::new(),
            phase: SpeciesPhase::Gas,
            molar_mass: d.molar_mass,
            elements: d.elements,
            critical: None,
            curve,
            chemical_exergy: d.chemical_exergy,
            source: "given in the description".to_owned(),
        })
    }

    /// The same species with a standard chemical exergy (J/mol) that overrides the computed one.
    ///
    /// # Errors
    /// `InvalidSpecies` for a figure that is not finite.
    pub fn with_chemical_exergy(&self, exergy: f64) -> Result<Species, CompositionError> {
        if !exergy.is_finite() {
            return Err(CompositionError::InvalidSpecies(self.name.clone()));
        }
        Ok(Species { chemical_exergy: Some(exergy), ..self.clone() })
    }

    /// Name, usually the chemical formula.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Other names that [`find_species`] knows it by.
    pub fn aliases(&self) -> &[String] {
        &self.aliases
    }

    /// Phase of the standard state.
    pub fn phase(&self) -> SpeciesPhase {
        self.phase
    }

    /// kg/mol
    pub fn molar_mass(&self) -> f64 {
        self.molar_mass
    }

    /// Atoms of each element per molecule, where known.
    pub fn elements(&self) -> Option<&Elements> {
        self.elements.as_ref()
    }

    /// Critical point, where known.
    pub fn critical(&self) -> Option<CriticalPoint> {
        self.critical
    }

    /// Chemical exergy that the definition gives, J/mol; `None` where it is to be computed.
    pub fn chemical_exergy(&self) -> Option<f64> {
        self.chemical_exergy
    }

    /// Where the data come from.
    pub fn source(&self) -> &str {
        &self.source
    }

    /// Lowest and highest temperature, K.
    pub fn temperature_range(&self) -> (f64, f64) {
        self.curve.range()
    }

    /// Heat capacity, enthalpy and entropy per mole at 1 bar: the molar curve.
    pub fn curve(&self) -> &Curve {
        &self.curve
    }

    /// cp° in J/(mol K), h° in J/mol and s° in J/(mol K) at `t` (K) and 1 bar.
    ///
    /// # Errors
    /// `t` outside the range.
    pub fn standard(&self, t: f64) -> Result<Caloric, PropertyError> {
        self.curve.try_at(t)
    }

    /// Standard Gibbs energy g° = h° − T s°, J/mol, at `t` (K) and 1 bar.
    ///
    /// # Errors
    /// `t` outside the range.
    pub fn gibbs(&self, t: f64) -> Result<f64, PropertyError> {
        self.curve.try_at(t).map(|c| c.h - t * c.s)
    }
}

#[derive(Deserialize)]
struct File {
    source: String,
    species: Vec<Row>,
}

#[derive(Deserialize)]
struct Row {
    name: String,
    aliases: Vec<String>,
    phase: SpeciesPhase,
    molar_mass_g_mol: f64,
    critical: Option<CriticalPoint>,
    elements: BTreeMap<String, f64>,
    intervals: Vec<Interval>,
}

#[derive(Deserialize)]
struct Interval {
    t_min: f64,
    t_max: f64,
    a: [f64; 7],
    b: [f64; 2],
}

fn parse(text: &str) -> Vec<Species> {
    // The text is compiled in and a unit test holds it to be whole; were it broken, the table
    // would be short and every look-up in it an ordinary "unknown species".
    let Ok(file) = serde_json::from_str::<File>(text) else { return Vec::new() };
    file.species.into_iter().filter_map(|row| read_row(row, &file.source)).collect()
}

fn read_row(row: Row, source: &str) -> Option<Species> {
    let mut elements = [0.0; Element::COUNT];
    for (symbol, count) in &row.elements {
        *elements.get_mut(Element::from_symbol(symbol)? as usize)? = *count;
    }
    let t_min = row.intervals.first()?.t_min;
    let intervals: Vec<NineCoefficients> = row
        .intervals
        .iter()
        .filter(|i| i.t_min < T_MAX)
        .map(|i| NineCoefficients {
            t_max: i.t_max,
            a: i.a.map(|x| x * GAS_CONSTANT),
            b: i.b.map(|x| x * GAS_CONSTANT),
        })
        .collect();
    Some(Species {
        name: row.name,
        aliases: row.aliases,
        phase: row.phase,
        molar_mass: row.molar_mass_g_mol * 1e-3,
        elements: Some(elements),
        critical: row.critical,
        curve: Curve::from_intervals(t_min, &intervals)?,
        chemical_exergy: None,
        source: source.to_owned(),
    })
}

/// Every species of the table, in the order of the data file.
pub fn all_species() -> &'static [Species] {
    static TABLE: OnceLock<Vec<Species>> = OnceLock::new();
    TABLE.get_or_init(|| parse(include_str!("../data/McBride2002.json")))
}

/// The species known by this formula or name; case, spaces, hyphens and underscores do not matter.
pub fn find_species(name: &str) -> Option<&'static Species> {
    static BY_NAME: OnceLock<HashMap<&'static str, &'static Species>> = OnceLock::new();
    static BY_KEY: OnceLock<HashMap<String, &'static Species>> = OnceLock::new();
    // Nearly every name is written as the table has it.
    let by_name = BY_NAME.get_or_init(|| all_species().iter().map(|s| (s.name(), s)).collect());
    if let Some(species) = by_name.get(name) {
        return Some(species);
    }
    let by_key = BY_KEY.get_or_init(|| {
        let mut out = HashMap::new();
        for species in all_species() {
            for name in species.aliases.iter().chain([&species.name]) {
                // Of two that share a name, the first in the table has it.
                out.entry(key(name)).or_insert(species);
            }
        }
        out
    });
    by_key.get(&key(name)).copied()
}

fn key(name: &str) -> String {
    name.chars().filter(|c| !matches!(c, ' ' | '-' | '_')).flat_map(char::to_lowercase).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn table_is_whole() {
        assert_eq!(all_species().len(), 29);
        for s in all_species() {
            let from_atoms: f64 =
                Element::ALL.iter().map(|&e| s.elements().unwrap()[e as usize] * e.molar_mass()).sum();
            assert!((s.molar_mass() - from_atoms).abs() < 1e-9 * from_atoms, "{}", s.name());
            for name in s.aliases().iter().chain([&s.name]) {
                assert_eq!(find_species(name).unwrap().name(), s.name(), "{name}");
            }
        }
        assert!(find_species("unobtainium").is_none());
        assert_eq!(parse("not json"), Vec::new());
    }

    #[test]
    fn own_species_are_checked() {
        let good = SpeciesDefinition {
            name: "x".into(),
            molar_mass: 0.028,
            elements: None,
            heat_capacity: vec![Term { coefficient: 29.1, exponent: 0.0 }],
            temperature_range: Some((200.0, 3000.0)),
            formation_enthalpy: 0.0,
            standard_entropy: 191.6,
            chemical_exergy: None,
        };
        assert!(Species::define(&good).is_ok());
        for bad in [
            SpeciesDefinition { molar_mass: 0.0, ..good.clone() },
            SpeciesDefinition { molar_mass: f64::NAN, ..good.clone() },
            SpeciesDefinition { heat_capacity: vec![], ..good.clone() },
            SpeciesDefinition {
                heat_capacity: vec![
                    Term { coefficient: 29.1, exponent: 0.0 },
                    Term { coefficient: -0.02, exponent: 1.0 },
                ],
                ..good.clone()
            },
            SpeciesDefinition { temperature_range: Some((300.0, 300.0)), ..good.clone() },
            SpeciesDefinition { temperature_range: Some((f64::NAN, 300.0)), ..good.clone() },
            SpeciesDefinition { formation_enthalpy: f64::INFINITY, ..good.clone() },
            SpeciesDefinition { chemical_exergy: Some(f64::NAN), ..good.clone() },
        ] {
            assert_eq!(Species::define(&bad), Err(CompositionError::InvalidSpecies("x".into())), "{bad:?}");
        }
    }

    #[test]
    fn any_power_of_temperature_integrates() {
        // cp = 20 + 0.7 T^0.5 + 3e-6 T^-3: integrals by Simpson's rule.
        let d = SpeciesDefinition {
            name: "x".into(),
            molar_mass: 0.028,
            elements: None,
            heat_capacity: vec![
                Term { coefficient: 20.0, exponent: 0.0 },
                Term { coefficient: 0.7, exponent: 0.5 },
                Term { coefficient: 3e6, exponent: -3.0 },
            ],
            temperature_range: Some((200.0, 3000.0)),
            formation_enthalpy: -1000.0,
            standard_entropy: 200.0,
            chemical_exergy: None,
        };
        let s = Species::define(&d).unwrap();
        let cp = |t: f64| 20.0 + 0.7 * t.sqrt() + 3e6 / t.powi(3);
        let simpson = |f: &dyn Fn(f64) -> f64, a: f64, b: f64| {
            let n = 2000;
            let step = (b - a) / f64::from(n);
            (0..=n)
                .map(|i| {
                    let w = if i == 0 || i == n {
                        1.0
                    } else if i % 2 == 1 {
                        4.0
                    } else {
                        2.0
                    };
                    w * f(a + f64::from(i) * step)
                })
                .sum::<f64>()
                * step
                / 3.0
        };
        let at = s.standard(900.0).unwrap();
        assert!((at.cp - cp(900.0)).abs() < 1e-12 * at.cp);
        assert!((at.h + 1000.0 - simpson(&cp, 298.15, 900.0)).abs() < 1e-6);
        assert!((at.s - 200.0 - simpson(&|t| cp(t) / t, 298.15, 900.0)).abs() < 1e-9);
    }
}
