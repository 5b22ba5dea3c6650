//! The flows of a description, and the figures that fix a state.

use super::{fluids::FLUID, optional, required};
use crate::document::{Field, Key, ObjectShape, Shape, Union, Variant};
use crate::quantity::Dimension as D;

pub(super) const FLOWS: Shape = Shape::Map { key: Key::Name("flow"), value: &Shape::Tagged(&FLOW) };

static FLOW: Union = Union {
    name: "Flow",
    doc: "Something that crosses a boundary.",
    member: "kind",
    variants: &[
        Variant { word: "material", shape: &MATERIAL },
        Variant { word: "heat", shape: &HEAT },
        Variant { word: "work", shape: &WORK },
        Variant { word: "radiation", shape: &RADIATION },
    ],
};

const LINK_FIELDS: &[Field] = &[
    optional("from", Shape::Name, "The component it leaves; absent: it comes from outside."),
    optional("to", Shape::Name, "The component it enters; absent: it goes outside."),
    optional("role", Shape::Choice(ROLES), "What a boundary flow is to the plant."),
];

const ROLES: &[(&str, &str)] = &[
    ("fuel", "Paid for."),
    ("product", "What the plant is for."),
    ("loss", "Thrown away."),
    ("free", "Taken from the surroundings at no cost."),
];

static MATERIAL: ObjectShape = ObjectShape {
    name: "MaterialFlow",
    doc: "A flow of material.",
    fields: &[
        LINK_FIELDS,
        &[
            optional("fluid", FLUID, "The fluid: a name, an object, or a key of `fluids`."),
            optional("state", Shape::Choice(STATES), "`environment` for an intake from the surroundings."),
            optional(
                "same_state_as",
                Shape::Name,
                "Another flow whose state this one shares; `pressure` may differ.",
            ),
            optional(
                "ends",
                Shape::Object(&ENDS),
                "Two measured ends: the connection is then a pipe with balances of its own.",
            ),
            optional("velocity", Shape::Quantities(D::Velocity), "Mean velocity."),
            optional("elevation", Shape::Quantities(D::Length), "Height above the datum."),
        ],
        STATE_FIELDS,
        AMOUNT_FIELDS,
    ],
};

const STATES: &[(&str, &str)] = &[("environment", "At the temperature and pressure of the environment.")];

/// Properties that fix a state.
pub(super) const STATE_FIELDS: &[Field] = &[
    optional("temperature", Shape::Quantities(D::Temperature), "Temperature."),
    optional("pressure", Shape::Quantities(D::Pressure), "Pressure, absolute or gauge."),
    optional("enthalpy", Shape::Quantities(D::SpecificEnergy), "Specific enthalpy on the fluid's own datum."),
    optional("entropy", Shape::Quantities(D::SpecificEntropy), "Specific entropy on the fluid's own datum."),
    optional("quality", Shape::Quantities(D::Fraction), "Mass fraction of vapour."),
    optional("superheat", Shape::Quantities(D::TemperatureDifference), "Temperature above saturation."),
    optional("subcooling", Shape::Quantities(D::TemperatureDifference), "Temperature below saturation."),
    optional("phase", Shape::Choice(PHASES), "Declared phase."),
    optional("exergy", Shape::Quantity(D::SpecificEnergy), "Specific exergy of a `stated` fluid."),
    optional("relative_humidity", Shape::Quantities(D::Fraction), "Of humid air."),
    optional(
        "humidity_ratio",
        Shape::Quantities(D::HumidityRatio),
        "Of humid air: water over dry air by mass.",
    ),
    optional(
        "wet_bulb",
        Shape::Quantities(D::Temperature),
        "Of humid air: thermodynamic wet-bulb temperature.",
    ),
    optional("dew_point", Shape::Quantities(D::Temperature), "Of humid air: dew-point temperature."),
    optional("salinity", Shape::Quantities(D::Fraction), "Of a solution: mass fraction of the salt."),
];

const PHASES: &[(&str, &str)] = &[
    ("liquid", "Liquid."),
    ("vapour", "Vapour or gas."),
    ("two-phase", "Wet: liquid and vapour in equilibrium."),
    ("saturated-liquid", "Liquid at saturation: quality 0."),
    ("saturated-vapour", "Vapour at saturation: quality 1."),
];

/// How much there is.
pub(super) const AMOUNT_FIELDS: &[Field] = &[
    optional("mass_flow", Shape::Quantities(D::MassFlow), "Mass flow."),
    optional("mole_flow", Shape::Quantities(D::MoleFlow), "Mole flow."),
    optional("volume_flow", Shape::Quantities(D::VolumeFlow), "Volume flow, actual, normal or standard."),
    optional("dry_air_mass_flow", Shape::Quantities(D::MassFlow), "Of humid air: mass flow of the dry air."),
    optional("mass", Shape::Quantities(D::Mass), "Mass, with `basis: amount`."),
    optional("moles", Shape::Quantities(D::Moles), "Amount of substance, with `basis: amount`."),
    optional("volume", Shape::Quantities(D::Volume), "Volume, with `basis: amount`."),
];

static ENDS: ObjectShape = ObjectShape {
    name: "Ends",
    doc: "The two measured ends of a connection.",
    fields: &[&[
        required("from", Shape::Object(&END), "Where it leaves."),
        required("to", Shape::Object(&END), "Where it arrives."),
    ]],
};

static END: ObjectShape = ObjectShape {
    name: "End",
    doc: "One measured end of a connection.",
    fields: &[
        &[
            optional("velocity", Shape::Quantities(D::Velocity), "Mean velocity."),
            optional("elevation", Shape::Quantities(D::Length), "Height above the datum."),
        ],
        STATE_FIELDS,
    ],
};

static HEAT: ObjectShape = ObjectShape {
    name: "HeatFlow",
    doc: "A flow of heat and the temperature of the surface it crosses.",
    fields: &[
        LINK_FIELDS,
        &[
            optional("rate", Shape::Quantities(D::Power), "Heat rate."),
            optional("energy", Shape::Quantities(D::Energy), "Heat, with `basis: amount`."),
            optional(
                "temperature",
                Shape::OneOf(&[Shape::Object(&SLIDING), Shape::Quantities(D::Temperature)]),
                "Of the surface it crosses; absent: bracketed.",
            ),
        ],
    ],
};

static SLIDING: ObjectShape = ObjectShape {
    name: "SlidingTemperature",
    doc: "The two ends of a stream of constant heat capacity; or one value with its unit.",
    fields: &[&[
        optional("inlet", Shape::Quantities(D::Temperature), "Where it enters."),
        optional("outlet", Shape::Quantities(D::Temperature), "Where it leaves."),
        optional("value", Shape::Number, "One temperature."),
        optional("unit", Shape::Unit, "Its unit."),
        optional("uncertainty", Shape::Uncertainty, "Its uncertainty."),
        optional("u", Shape::Number, "Its standard uncertainty as a report gives it."),
        optional("resolution", Shape::AnyQuantity, "Its resolution."),
        optional("calibration", Shape::Name, "Its calibration group."),
    ]],
};

static WORK: ObjectShape = ObjectShape {
    name: "WorkFlow",
    doc: "A flow of work.",
    fields: &[
        LINK_FIELDS,
        &[
            optional("power", Shape::Quantities(D::Power), "Power."),
            optional("energy", Shape::Quantities(D::Energy), "Work, with `basis: amount`."),
            optional("form", Shape::Choice(WORK_FORMS), "`shaft` if absent."),
        ],
    ],
};

const WORK_FORMS: &[(&str, &str)] = &[("shaft", "Shaft work."), ("electric", "Electric work.")];

static RADIATION: ObjectShape = ObjectShape {
    name: "RadiationFlow",
    doc: "Black-body radiation.",
    fields: &[
        LINK_FIELDS,
        &[
            optional("rate", Shape::Quantities(D::Power), "Radiant power."),
            optional("energy", Shape::Quantities(D::Energy), "Radiant energy, with `basis: amount`."),
            required("temperature", Shape::Quantities(D::Temperature), "Temperature of the source."),
        ],
    ],
};
