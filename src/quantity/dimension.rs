//! What a number measures.

use std::fmt;

macro_rules! dimensions {
    ($($variant:ident => $name:literal, $si:literal, $example:literal : $doc:literal),+ $(,)?) => {
        /// What a number measures. Each dimension is declared once, with its name, its SI unit and
        /// an example as a user would write it.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
        pub enum Dimension { $(#[doc = $doc] $variant,)+ }

        impl Dimension {
            /// Every dimension, in the order of its declaration.
            pub const ALL: &'static [Dimension] = &[$(Dimension::$variant),+];

            /// The name in running text, for instance `temperature difference`.
            pub const fn name(self) -> &'static str {
                match self { $(Dimension::$variant => $name,)+ }
            }

            /// The name in camel case, for instance `TemperatureDifference`.
            pub const fn ident(self) -> &'static str {
                match self { $(Dimension::$variant => stringify!($variant),)+ }
            }

            /// The SI unit in which values of this dimension are held.
            pub const fn si_unit(self) -> &'static str {
                match self { $(Dimension::$variant => $si,)+ }
            }

            /// An example of a value as a user would write it.
            pub const fn example(self) -> &'static str {
                match self { $(Dimension::$variant => $example,)+ }
            }

            /// What the dimension is, in one sentence.
            pub const fn doc(self) -> &'static str {
                match self { $(Dimension::$variant => $doc,)+ }
            }
        }
    };
}

dimensions! {
    Temperature => "temperature", "K", "150 degC": "A temperature, K.",
    TemperatureDifference => "temperature difference", "K", "5 K": "A difference of two temperatures, K.",
    Pressure => "pressure", "Pa", "42 bar(g)": "A pressure, Pa, absolute or gauge.",
    PressureDifference => "pressure difference", "Pa", "0.3 bar": "A difference of two pressures, Pa.",
    MassFlow => "mass flow", "kg/s", "1.2 t/h": "Mass per time, kg/s.",
    MoleFlow => "mole flow", "mol/s", "40 kmol/h": "Amount of substance per time, mol/s.",
    VolumeFlow => "volume flow", "m3/s", "250 m3/h": "Volume per time, m3/s, at actual, normal or standard conditions.",
    Mass => "mass", "kg", "12 kg": "A mass, kg.",
    Moles => "amount of substance", "mol", "3 kmol": "An amount of substance, mol.",
    Volume => "volume", "m3", "2 m3": "A volume, m3, at actual, normal or standard conditions.",
    Power => "power", "W", "350 kW": "Energy per time, W: work or heat.",
    Energy => "energy", "J", "12 kWh": "An energy, J: work or heat.",
    SpecificEnergy => "specific energy", "J/kg", "2800 kJ/kg": "Energy per mass, J/kg: enthalpy, exergy, heating value.",
    SpecificEntropy => "specific entropy", "J/(kg K)", "6.5 kJ/(kg K)": "Entropy or heat capacity per mass, J/(kg K).",
    MolarEnergy => "molar energy", "J/mol", "-241.8 kJ/mol": "Energy per amount of substance, J/mol.",
    MolarEntropy => "molar entropy", "J/(mol K)", "188.8 J/(mol K)": "Entropy or heat capacity per amount of substance, J/(mol K).",
    EnergyPerVolume => "energy per volume", "J/m3", "10.5 kWh/Nm3": "Energy per volume, J/m3, at actual, normal or standard conditions.",
    EntropyRate => "entropy rate", "W/K", "0.12 kW/K": "Entropy per time, W/K.",
    Entropy => "entropy", "J/K", "1.4 kJ/K": "An entropy, J/K.",
    ThermalConductance => "thermal conductance", "W/K", "12 kW/K": "Heat rate per temperature difference, W/K.",
    Density => "density", "kg/m3", "998 kg/m3": "Mass per volume, kg/m3.",
    SpecificVolume => "specific volume", "m3/kg", "0.127 m3/kg": "Volume per mass, m3/kg.",
    MassConcentration => "mass concentration", "kg/m3", "50 mg/Nm3": "Mass of one substance per volume of the whole, kg/m3, at actual, normal or standard conditions.",
    MolarMass => "molar mass", "kg/mol", "28.97 g/mol": "Mass per amount of substance, kg/mol.",
    HumidityRatio => "humidity ratio", "1", "8 g/kg": "Mass of water vapour per mass of dry air, kg/kg.",
    Fraction => "fraction", "1", "0.85": "A plain number, a percentage or parts per million.",
    Velocity => "velocity", "m/s", "25 m/s": "A speed, m/s.",
    Length => "length", "m", "3 m": "A length or height, m.",
    Area => "area", "m2", "12 m2": "An area, m2.",
    Duration => "duration", "s", "8 h": "A length of time, s.",
    ElectricPotential => "voltage", "V", "0.7 V": "An electric potential difference, V.",
    Money => "sum of money", "1", "120000 EUR": "A sum of money, in units of its currency.",
    CostRate => "cost rate", "1/s", "120 EUR/h": "Money per time, currency units per second.",
    PricePerEnergy => "price per energy", "1/J", "35 EUR/MWh": "Money per energy, currency units per joule.",
    PricePerMass => "price per mass", "1/kg", "300 EUR/t": "Money per mass, currency units per kilogram.",
    EmissionPerEnergy => "emission per energy", "kg/J", "56.1 kg/GJ": "Mass emitted per energy, kg/J.",
}

impl Dimension {
    /// Whether a plain number without a unit is complete: fractions and humidity ratios.
    pub const fn is_dimensionless(self) -> bool {
        matches!(self, Dimension::Fraction | Dimension::HumidityRatio)
    }

    /// The dimension of a difference of two such values, hence of an uncertainty: a temperature
    /// difference for a temperature, a pressure difference for a pressure, otherwise the same.
    #[must_use]
    pub const fn difference(self) -> Dimension {
        match self {
            Dimension::Temperature => Dimension::TemperatureDifference,
            Dimension::Pressure => Dimension::PressureDifference,
            other => other,
        }
    }

    /// For a price, what it is paid for (`Some(None)`: a plain sum); `None` for what is no price.
    pub(crate) const fn per(self) -> Option<Option<Dimension>> {
        match self {
            Dimension::Money => Some(None),
            Dimension::CostRate => Some(Some(Dimension::Duration)),
            Dimension::PricePerEnergy => Some(Some(Dimension::Energy)),
            Dimension::PricePerMass => Some(Some(Dimension::Mass)),
            _ => None,
        }
    }
}

impl fmt::Display for Dimension {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}
