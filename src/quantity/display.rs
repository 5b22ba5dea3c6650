//! The units of reports.

use std::sync::OnceLock;

use super::dimension::Dimension;
use super::unit::{self, Reference, Scale};

/// Which units a report uses.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum UnitSystem {
    /// degC, bar, kW, kJ/kg, kW/K.
    #[default]
    Metric,
    /// K, Pa, W, J/kg, W/K.
    Si,
    /// degF, psi, Btu/h, Btu/lb.
    Us,
}

impl UnitSystem {
    /// Every system.
    pub const ALL: &'static [UnitSystem] = &[UnitSystem::Metric, UnitSystem::Si, UnitSystem::Us];

    /// The word for it: `metric`, `si`, `us`.
    pub const fn text(self) -> &'static str {
        match self {
            UnitSystem::Metric => "metric",
            UnitSystem::Si => "si",
            UnitSystem::Us => "us",
        }
    }

    /// The system of this word.
    pub fn read(text: &str) -> Option<UnitSystem> {
        UnitSystem::ALL.iter().copied().find(|s| s.text() == text)
    }
}

/// Metric, SI and United States units of a dimension.
const fn units(dimension: Dimension) -> [&'static str; 3] {
    use Dimension as D;
    match dimension {
        D::Temperature => ["degC", "K", "degF"],
        D::TemperatureDifference => ["K", "K", "delta degF"],
        D::Pressure | D::PressureDifference => ["bar", "Pa", "psi"],
        D::MassFlow => ["kg/s", "kg/s", "lb/h"],
        D::MoleFlow => ["kmol/s", "mol/s", "lbmol/h"],
        D::VolumeFlow => ["m3/h", "m3/s", "cfm"],
        D::Mass => ["kg", "kg", "lb"],
        D::Moles => ["kmol", "mol", "lbmol"],
        D::Volume => ["m3", "m3", "ft3"],
        D::Power => ["kW", "W", "Btu/h"],
        D::Energy => ["kJ", "J", "Btu"],
        D::SpecificEnergy => ["kJ/kg", "J/kg", "Btu/lb"],
        D::SpecificEntropy => ["kJ/(kg K)", "J/(kg K)", "Btu/(lb degF)"],
        D::MolarEnergy => ["kJ/mol", "J/mol", "Btu/lbmol"],
        D::MolarEntropy => ["J/(mol K)", "J/(mol K)", "Btu/(lbmol degF)"],
        D::EnergyPerVolume => ["kJ/m3", "J/m3", "kJ/m3"],
        D::EntropyRate | D::ThermalConductance => ["kW/K", "W/K", "Btu/(h degF)"],
        D::Entropy => ["kJ/K", "J/K", "Btu/degF"],
        D::Density => ["kg/m3", "kg/m3", "lb/ft3"],
        D::MassConcentration => ["mg/m3", "kg/m3", "mg/m3"],
        D::SpecificVolume => ["m3/kg", "m3/kg", "ft3/lb"],
        D::MolarMass => ["g/mol", "kg/mol", "g/mol"],
        D::HumidityRatio => ["kg/kg", "kg/kg", "kg/kg"],
        D::Fraction => ["1", "1", "1"],
        D::Velocity => ["m/s", "m/s", "ft/s"],
        D::Length => ["m", "m", "ft"],
        D::Area => ["m2", "m2", "ft2"],
        D::Duration => ["s", "s", "s"],
        D::ElectricPotential => ["V", "V", "V"],
        // What stands after the currency.
        D::Money => ["", "", ""],
        D::CostRate => ["/h", "/s", "/h"],
        D::PricePerEnergy => ["/MWh", "/J", "/MMBtu"],
        D::PricePerMass => ["/kg", "/kg", "/lb"],
        D::EmissionPerEnergy => ["kg/GJ", "kg/J", "lb/MMBtu"],
    }
}

/// The unit in which a report of this system writes values of this dimension: `code` is its text
/// (which can be read back as input), [`Scale::from_si`] gives the figure and
/// [`Scale::difference_from_si`] its standard uncertainty. For prices the code is what stands after the currency.
pub fn display(dimension: Dimension, system: UnitSystem) -> Scale {
    static SCALES: OnceLock<Vec<[Scale; 3]>> = OnceLock::new();
    // In the order of declaration.
    let scales = SCALES.get_or_init(|| {
        Dimension::ALL.iter().map(|&dimension| units(dimension).map(|code| scale(dimension, code))).collect()
    });
    scales[dimension as usize][system as usize]
}

fn scale(dimension: Dimension, code: &'static str) -> Scale {
    let si = Scale { code, scale: 1.0, offset: 0.0, reference: Reference::None, currency: None };
    match dimension.per() {
        Some(Some(base)) => match unit::find(code.trim_start_matches('/'), base) {
            Ok(unit) => Scale { scale: 1.0 / unit.scale, ..si },
            Err(_) => si,
        },
        Some(None) => si,
        None => unit::find(code, dimension).map_or(si, |unit| Scale { code, ..unit }),
    }
}
