//! Heating values and products of complete combustion from formation data.

use crate::fluid::heat_capacity::{Calorics, STANDARD_TEMPERATURE};
use crate::fluid::ideal_gas::{IdealGas, Species, find_species};
use crate::fluid::{Element, Elements, Engine};
use std::sync::OnceLock;

/// Heating values at 298.15 K, in J per unit of amount.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct HeatingValue {
    /// With water of combustion as vapour.
    pub lower: f64,
    /// With water of combustion as liquid.
    pub higher: f64,
}

/// Complete combustion of an amount of matter, in the unit of its elements.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Combustion {
    /// Moles of O2 needed beyond the oxygen that the matter brings along (negative for an
    /// oxidant).
    pub oxygen: f64,
    /// Moles of CO2 formed.
    pub carbon_dioxide: f64,
    /// Moles of H2O formed.
    pub water: f64,
    /// Moles of SO2 formed.
    pub sulfur_dioxide: f64,
    /// Moles of N2 set free.
    pub nitrogen: f64,
    /// Moles of Ar set free.
    pub argon: f64,
    /// Moles of He set free.
    pub helium: f64,
}

/// What complete combustion with oxygen makes of these elements: CO2, H2O, SO2, N2 and the noble
/// gases; `None` where another element is present.
pub fn complete_combustion(elements: &Elements) -> Option<Combustion> {
    let burns = [Element::C, Element::H, Element::O, Element::N, Element::S, Element::Ar, Element::He];
    if Element::ALL.iter().zip(elements).any(|(e, n)| *n != 0.0 && !burns.contains(e)) {
        return None;
    }
    let n = |e: Element| elements.get(e as usize).copied().unwrap_or(0.0);
    Some(Combustion {
        oxygen: n(Element::C) + n(Element::S) + 0.25 * n(Element::H) - 0.5 * n(Element::O),
        carbon_dioxide: n(Element::C),
        water: 0.5 * n(Element::H),
        sulfur_dioxide: n(Element::S),
        nitrogen: 0.5 * n(Element::N),
        argon: n(Element::Ar),
        helium: n(Element::He),
    })
}

/// Enthalpy of the products of complete combustion at 298.15 K less that of the oxygen taken, per
/// unit of amount of `elements`: water as vapour and as liquid.
pub(crate) fn product_enthalpy(elements: &Elements) -> Option<HeatingValue> {
    static PRODUCTS: OnceLock<Option<[f64; 4]>> = OnceLock::new();
    let made = complete_combustion(elements)?;
    let [carbon_dioxide, sulfur_dioxide, vapour, liquid] = (*PRODUCTS.get_or_init(|| {
        let h = |name: &str| Some(find_species(name)?.curve().at(STANDARD_TEMPERATURE).h);
        Some([h("CO2")?, h("SO2")?, h("H2O")?, h("H2O(L)")?])
    }))?;
    let dry = made.carbon_dioxide * carbon_dioxide + made.sulfur_dioxide * sulfur_dioxide;
    Some(HeatingValue { lower: dry + made.water * vapour, higher: dry + made.water * liquid })
}

/// Heating values of a species in its standard state, J/mol; `None` where its elements are not
/// known or do not burn to gases of the table. Zero for what does not burn.
pub fn heating_value(species: &Species) -> Option<HeatingValue> {
    let products = product_enthalpy(species.elements()?)?;
    let h = species.curve().at(STANDARD_TEMPERATURE).h;
    Some(HeatingValue { lower: h - products.lower, higher: h - products.higher })
}

/// Heating values of a gas mixture, J/kg. Water that the mixture holds counts as vapour in it and
/// as liquid in the higher heating value's products.
pub fn mixture_heating_value(gas: &IdealGas) -> Option<HeatingValue> {
    let molar_mass = gas.molar_mass(0.0)?;
    gas.components().iter().try_fold(HeatingValue { lower: 0.0, higher: 0.0 }, |sum, (species, x)| {
        let own = heating_value(species)?;
        Some(HeatingValue {
            lower: sum.lower + x * own.lower / molar_mass,
            higher: sum.higher + x * own.higher / molar_mass,
        })
    })
}
