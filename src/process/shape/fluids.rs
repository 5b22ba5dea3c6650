//! The fluids of a description.

use super::{optional, required};
use crate::document::{Key, ObjectShape, Shape, Union, Variant};
use crate::quantity::Dimension as D;

pub(super) const FLUIDS: Shape = Shape::Map { key: Key::Name("fluid"), value: &FLUID };

/// A fluid: a name, or an object.
pub const FLUID: Shape = Shape::OneOf(&[Shape::Text, Shape::Tagged(&FLUID_UNION)]);

static FLUID_UNION: Union = Union {
    name: "Fluid",
    doc: "A fluid by its kind.",
    member: "kind",
    variants: &[
        Variant { word: "water", shape: &FLUID_WATER },
        Variant { word: "ideal_gas", shape: &FLUID_IDEAL_GAS },
        Variant { word: "combustion_gas", shape: &FLUID_COMBUSTION_GAS },
        Variant { word: "pure", shape: &FLUID_PURE },
        Variant { word: "humid_air", shape: &FLUID_HUMID_AIR },
        Variant { word: "incompressible", shape: &FLUID_INCOMPRESSIBLE },
        Variant { word: "perfect_gas", shape: &FLUID_PERFECT_GAS },
        Variant { word: "solution", shape: &FLUID_SOLUTION },
        Variant { word: "fuel", shape: &FLUID_FUEL },
        Variant { word: "stated", shape: &FLUID_STATED },
    ],
};

static FLUID_WATER: ObjectShape =
    ObjectShape { name: "FluidWater", doc: "Water and steam, IAPWS-IF97.", fields: &[&[]] };
static FLUID_HUMID_AIR: ObjectShape =
    ObjectShape { name: "FluidHumidAir", doc: "Humid air as a real gas.", fields: &[&[]] };
static FLUID_STATED: ObjectShape = ObjectShape {
    name: "FluidStated",
    doc: "Enthalpy and entropy are given by each flow and taken at their word.",
    fields: &[&[]],
};

const SPECIES_MAP: Shape = Shape::Map { key: Key::Text("species"), value: &Shape::Quantity(D::Fraction) };

static FLUID_IDEAL_GAS: ObjectShape = ObjectShape {
    name: "FluidIdealGas",
    doc: "A mixture of ideal gases.",
    fields: &[&[
        optional("mole_fractions", SPECIES_MAP, "Mole fractions by species."),
        optional("mass_fractions", SPECIES_MAP, "Mass fractions by species."),
        optional(
            "composition_basis",
            Shape::Choice(COMPOSITION_BASES),
            "Whether the fractions include the water.",
        ),
        optional(
            "water_mole_fraction",
            Shape::Quantity(D::Fraction),
            "Mole fraction of water in the wet gas, with a dry composition.",
        ),
        optional(
            "saturated",
            Shape::Object(&SATURATED),
            "The dry gas is saturated with water at this state.",
        ),
        optional("species", OWN_SPECIES, "Own species by name."),
    ]],
};

const COMPOSITION_BASES: &[(&str, &str)] =
    &[("wet", "The fractions include the water."), ("dry", "The fractions are of the dry gas.")];

static SATURATED: ObjectShape = ObjectShape {
    name: "Saturated",
    doc: "The state at which a gas was saturated with water.",
    fields: &[&[
        required("temperature", Shape::Quantity(D::Temperature), "Temperature of saturation."),
        required("pressure", Shape::Quantity(D::Pressure), "Pressure of saturation, absolute."),
    ]],
};

const OWN_SPECIES: Shape = Shape::Map { key: Key::Text("species"), value: &Shape::Object(&SPECIES) };

static SPECIES: ObjectShape = ObjectShape {
    name: "Species",
    doc: "A species by its own figures, to reproduce a published table.",
    fields: &[&[
        required("molar_mass", Shape::Quantity(D::MolarMass), "Molar mass."),
        optional(
            "elements",
            Shape::Map { key: Key::Text("element"), value: &Shape::Number },
            "Atoms of each element.",
        ),
        required(
            "heat_capacity",
            Shape::List { item: &Shape::Object(&POWER_TERM), max: 16 },
            "Terms c·T^n of the molar heat capacity, J/(mol K) with T in K.",
        ),
        required("formation_enthalpy", Shape::Quantity(D::MolarEnergy), "At 298.15 K."),
        required("standard_entropy", Shape::Quantity(D::MolarEntropy), "At 298.15 K and 1 bar."),
        optional(
            "chemical_exergy",
            Shape::Quantity(D::MolarEnergy),
            "Standard chemical exergy, where it is not to be computed.",
        ),
    ]],
};

static POWER_TERM: ObjectShape = ObjectShape {
    name: "PowerTerm",
    doc: "One term c·T^n with T in K.",
    fields: &[&[required("coefficient", Shape::Number, "c."), required("exponent", Shape::Number, "n.")]],
};

static FLUID_COMBUSTION_GAS: ObjectShape = ObjectShape {
    name: "FluidCombustionGas",
    doc: "What a fuel and an oxidant become; the air ratio follows from one reading, or from the balances.",
    fields: &[&[
        required("fuel", Shape::Name, "The flow of fuel."),
        required("oxidant", Shape::Name, "The flow of air or oxygen."),
        optional("o2_dry", Shape::Quantities(D::Fraction), "Oxygen in the dry gas, by volume."),
        optional("o2_wet", Shape::Quantities(D::Fraction), "Oxygen in the wet gas, by volume."),
        optional("co2_dry", Shape::Quantities(D::Fraction), "Carbon dioxide in the dry gas, by volume."),
        optional("excess_air", Shape::Quantities(D::Fraction), "Air beyond need, as share of the need."),
        optional("co_dry", Shape::Quantity(D::Fraction), "Carbon monoxide in the dry gas, by volume."),
    ]],
};

static FLUID_PURE: ObjectShape = ObjectShape {
    name: "FluidPure",
    doc: "A pure fluid by its published multiparameter equation.",
    fields: &[&[required("name", Shape::Text, "Its common name, for instance R134a, ammonia, CO2.")]],
};

static FLUID_INCOMPRESSIBLE: ObjectShape = ObjectShape {
    name: "FluidIncompressible",
    doc: "A liquid or solid of constant density.",
    fields: &[&[
        optional("name", Shape::Text, "A listed substance."),
        optional("specific_heat", SPECIFIC_HEAT, "Specific heat: a figure, or coefficients of a polynomial."),
        optional("density", Shape::Quantity(D::Density), "Density."),
        optional("solid", Shape::Boolean, "Whether it is a solid."),
    ]],
};

const SPECIFIC_HEAT: Shape =
    Shape::OneOf(&[Shape::Quantity(D::SpecificEntropy), Shape::List { item: &Shape::Number, max: 8 }]);

static FLUID_PERFECT_GAS: ObjectShape = ObjectShape {
    name: "FluidPerfectGas",
    doc: "A gas of own molar mass and specific heat.",
    fields: &[&[
        required("molar_mass", Shape::Quantity(D::MolarMass), "Molar mass."),
        required(
            "specific_heat",
            SPECIFIC_HEAT,
            "Specific heat at constant pressure: a figure, or coefficients a0, a1, … of Σ a·T^i in J/(kg K).",
        ),
    ]],
};

static FLUID_SOLUTION: ObjectShape = ObjectShape {
    name: "FluidSolution",
    doc: "A listed aqueous solution.",
    fields: &[&[
        required("name", Shape::Text, "seawater, sodium chloride, ethylene glycol or propylene glycol."),
        optional(
            "mass_fraction",
            Shape::Quantity(D::Fraction),
            "Mass fraction of the solute, for a fixed composition.",
        ),
    ]],
};

static FLUID_FUEL: ObjectShape = ObjectShape {
    name: "FluidFuel",
    doc: "A fuel by ultimate analysis.",
    fields: &[&[
        required("ultimate", Shape::Object(&ULTIMATE), "Mass fractions as received."),
        optional(
            "lower_heating_value",
            Shape::Quantity(D::SpecificEnergy),
            "Lower heating value as received.",
        ),
        optional(
            "higher_heating_value",
            Shape::Quantity(D::SpecificEnergy),
            "Higher heating value as received.",
        ),
        optional("state", Shape::Choice(FUEL_STATES), "Which correlation of chemical exergy applies."),
        optional("specific_heat", Shape::Quantity(D::SpecificEntropy), "Specific heat of the fuel."),
    ]],
};

const FUEL_STATES: &[(&str, &str)] = &[
    ("solid", "Coal, coke, peat."),
    ("wood", "Wood and other biomass."),
    ("liquid", "Oils and liquid hydrocarbons."),
];

static ULTIMATE: ObjectShape = ObjectShape {
    name: "Ultimate",
    doc: "Ultimate analysis, mass fractions as received.",
    fields: &[&[
        required("carbon", Shape::Quantity(D::Fraction), "C."),
        required("hydrogen", Shape::Quantity(D::Fraction), "H, without the hydrogen of the moisture."),
        optional("oxygen", Shape::Quantity(D::Fraction), "O, without the oxygen of the moisture."),
        optional("nitrogen", Shape::Quantity(D::Fraction), "N."),
        optional("sulphur", Shape::Quantity(D::Fraction), "S."),
        optional("ash", Shape::Quantity(D::Fraction), "Ash."),
        optional("moisture", Shape::Quantity(D::Fraction), "Water."),
    ]],
};
