//! Published chemical reference environments.

use crate::fluid::Element;
use crate::fluid::heat_capacity::{GAS_CONSTANT, STANDARD_TEMPERATURE};

/// Pressure to which the sets' tabulated values belong, Pa (1 atm).
pub(super) const TABLE_PRESSURE: f64 = 101_325.0;

/// A published chemical reference environment. One set serves a whole assessment; values of
/// different sets must not be mixed.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ReferenceSet {
    /// Morris and Szargut 1986.
    Szargut1986,
    /// Szargut 2007: as 1986 with newer carbon dioxide and solid reference species.
    Szargut2007,
    /// Ahrendts 1980: calculated equilibrium environment.
    Ahrendts,
}

/// An element whose reference species is not a gas of the atmosphere.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct SolidReference {
    pub element: Element,
    /// Chemical exergy of the element per mole of atoms at 298.15 K, J/mol.
    pub exergy: f64,
    /// Enthalpy of devaluation per mole of atoms, J/mol: carries the exergy to another T0.
    pub devaluation: f64,
    /// Third-law entropy of the element per mole of atoms at 298.15 K, J/(mol K).
    pub entropy: f64,
}

const fn solid(element: Element, exergy: f64, devaluation: f64, entropy: f64) -> SolidReference {
    SolidReference { element, exergy, devaluation, entropy }
}

// Exergies: Morris and Szargut 1986 and Szargut, Morris and Steward 1988 (from memory; Fe, Al, Na,
// Cl, Ca and S agree with the published values of their oxides and salts within 0.3 kJ/mol).
// Devaluation enthalpies: Szargut, Morris and Steward 1988 (from memory). Entropies: CODATA 1989.
const SOLIDS_1986: &[SolidReference] = &[
    solid(Element::S, 609.6e3, 725.42e3, 32.07),
    solid(Element::Al, 888.4e3, 930.9e3, 28.30),
    solid(Element::Ca, 712.4e3, 813.57e3, 41.59),
    solid(Element::Cl, 61.8e3, 80.22e3, 111.54),
    solid(Element::Fe, 376.4e3, 412.12e3, 27.28),
    solid(Element::K, 366.6e3, 356.63e3, 64.68),
    solid(Element::Mg, 633.8e3, 725.71e3, 32.67),
    solid(Element::Na, 336.6e3, 330.9e3, 51.30),
    solid(Element::Si, 854.6e3, 910.94e3, 18.81),
];

// Szargut 2007 (from memory; Fe, Al and Ca agree with the published values of their oxides).
const SOLIDS_2007: &[SolidReference] = &[
    solid(Element::S, 609.3e3, 725.42e3, 32.07),
    solid(Element::Al, 795.7e3, 930.9e3, 28.30),
    solid(Element::Ca, 729.1e3, 813.57e3, 41.59),
    solid(Element::Cl, 61.85e3, 80.22e3, 111.54),
    solid(Element::Fe, 374.3e3, 412.12e3, 27.28),
    solid(Element::K, 366.7e3, 356.63e3, 64.68),
    solid(Element::Mg, 626.9e3, 725.71e3, 32.67),
    solid(Element::Na, 336.7e3, 330.9e3, 51.30),
    solid(Element::Si, 855.0e3, 910.94e3, 18.81),
];

// From sulfur dioxide at 301.94 kJ/mol in Ahrendts 1980; devaluation as for the other sets, since
// the reference species is a calcium sulfate in each.
const SOLIDS_AHRENDTS: &[SolidReference] = &[solid(Element::S, 598.08e3, 725.42e3, 32.07)];

impl ReferenceSet {
    /// Every set.
    pub const ALL: [ReferenceSet; 3] =
        [ReferenceSet::Szargut1986, ReferenceSet::Szargut2007, ReferenceSet::Ahrendts];

    /// The word used in descriptions and reports.
    pub const fn id(self) -> &'static str {
        match self {
            ReferenceSet::Szargut1986 => "szargut-1986",
            ReferenceSet::Szargut2007 => "szargut-2007",
            ReferenceSet::Ahrendts => "ahrendts",
        }
    }

    /// The set with this id.
    pub fn from_id(id: &str) -> Option<ReferenceSet> {
        Self::ALL.into_iter().find(|s| s.id() == id)
    }

    /// Citation.
    pub const fn source(self) -> &'static str {
        match self {
            ReferenceSet::Szargut1986 => {
                "Morris, D. R., Szargut, J.: Standard chemical exergy of some elements and compounds on the planet Earth, Energy 11 (1986) 733-755"
            }
            ReferenceSet::Szargut2007 => "Szargut, J.: Egzergia, Gliwice, 2007, appendix 1",
            ReferenceSet::Ahrendts => {
                "Ahrendts, J.: Reference states, Energy 5 (1980) 666-677, as model I in Bejan, A., Tsatsaronis, G., Moran, M.: Thermal Design and Optimization, Wiley, 1996"
            }
        }
    }

    /// Partial pressures (Pa) of the reference gases in an atmosphere of 101.325 kPa at 298.15 K.
    pub(super) fn partial_pressures(self) -> Vec<(Element, &'static str, f64)> {
        // p = p_table·exp(−e/RT) where the set is published as standard chemical exergies.
        let of = |kilojoules: f64| {
            TABLE_PRESSURE * (-kilojoules * 1e3 / (GAS_CONSTANT * STANDARD_TEMPERATURE)).exp()
        };
        let mut rows = vec![
            (Element::N, "N2", 75_780.0),
            (Element::O, "O2", 20_390.0),
            (Element::C, "CO2", 33.5),
            (Element::H, "H2O", 2_200.0),
            (Element::Ar, "Ar", 906.0),
            (Element::He, "He", 0.485),
            (Element::Ne, "Ne", 1.77),
            (Element::Kr, "Kr", 0.097),
            (Element::Xe, "Xe", 0.0087),
        ];
        match self {
            ReferenceSet::Szargut1986 => {}
            ReferenceSet::Szargut2007 => {
                // Graphite at 409.87 kJ/mol puts carbon dioxide at 19.48 kJ/mol.
                rows.iter_mut().filter(|r| r.1 == "CO2").for_each(|r| r.2 = of(19.48));
            }
            ReferenceSet::Ahrendts => {
                let gases = [
                    (Element::N, "N2", of(0.64)),
                    (Element::O, "O2", of(3.95)),
                    (Element::C, "CO2", of(14.175)),
                    (Element::H, "H2O", of(8.635)),
                ];
                // The environment's total is 1.019 atm; argon is what remains.
                let argon = 1.019 * TABLE_PRESSURE - gases.iter().map(|g| g.2).sum::<f64>();
                rows = gases.into();
                rows.push((Element::Ar, "Ar", argon));
            }
        }
        rows
    }

    pub(super) fn solids(self) -> &'static [SolidReference] {
        match self {
            ReferenceSet::Szargut1986 => SOLIDS_1986,
            ReferenceSet::Szargut2007 => SOLIDS_2007,
            ReferenceSet::Ahrendts => SOLIDS_AHRENDTS,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ids_round_trip_and_argon_of_the_closure_is_that_of_air() {
        for set in ReferenceSet::ALL {
            assert_eq!(ReferenceSet::from_id(set.id()), Some(set));
        }
        assert_eq!(ReferenceSet::from_id("mars"), None);
        let argon = ReferenceSet::Ahrendts.partial_pressures().last().unwrap().2;
        assert!((argon / TABLE_PRESSURE - 0.0093).abs() < 3e-4, "{argon}");
    }
}
