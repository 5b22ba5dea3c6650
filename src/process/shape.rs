//! What a description can hold: each object declared once. The reader, the published schema and
//! the documentation are drawn from these tables.

use super::kinds;
use crate::document::{Field, Key, ObjectShape, Shape, Union, Variant};
use crate::quantity::Dimension as D;

const fn optional(name: &'static str, shape: Shape, doc: &'static str) -> Field {
    Field::optional(name, shape, doc)
}

const fn required(name: &'static str, shape: Shape, doc: &'static str) -> Field {
    Field::required(name, shape, doc)
}

/// Greatest number of inline lists (flows of a side, members of a group).
const MANY: usize = 500;

/// The whole description.
pub static DESCRIPTION: ObjectShape = ObjectShape {
    name: "Description",
    doc: "A process: components, and the flows of material, heat and work between them.",
    fields: &[&[
        optional("name", Shape::Text, "What the description is about."),
        optional("basis", Shape::Choice(BASES), "Whether amounts are rates or totals; `rate` if absent."),
        optional("duration", Shape::Quantity(D::Duration), "Duration of a batch; turns rates into amounts."),
        optional(
            "environment",
            Shape::Object(&ENVIRONMENT),
            "The surroundings; assumed and listed if absent.",
        ),
        optional("policy", Shape::Object(&POLICY), "How figures are read and verdicts are made."),
        optional("fluids", FLUIDS, "Own fluids by name."),
        optional("groups", GROUPS, "Unions of components that get balances of their own."),
        optional("calibrations", CALIBRATIONS, "Errors common to the members of a calibration group."),
        optional(
            "economics",
            Shape::Object(&ECONOMICS),
            "Prices and costs; taken for later use, and listed as not used by a check.",
        ),
        required("components", COMPONENTS, "Components by name."),
        required("flows", FLOWS, "Flows by name."),
    ]],
};

/// A question for one state.
pub static STATE_QUESTION: ObjectShape = ObjectShape {
    name: "StateQuestion",
    doc: "One state of a fluid, fixed by two properties.",
    fields: &[
        &[
            required("fluid", FLUID, "The fluid."),
            optional("environment", Shape::Object(&ENVIRONMENT), "The surroundings, for exergy."),
            optional("fluids", FLUIDS, "Own fluids by name."),
        ],
        STATE_FIELDS,
    ],
};

static ECONOMICS: ObjectShape = ObjectShape {
    name: "Economics",
    doc: "Prices and costs. A check computes none yet and says so.",
    fields: &[&[
        optional("currency", Shape::Text, "Three-letter code."),
        optional("annual_hours", Shape::Number, "Hours of operation a year."),
        optional("prices", PRICED, "Prices of fuels and products, by flow."),
        optional("capital", PRICED, "Cost of capital and maintenance, by component."),
        optional("loss_rule", Shape::Choice(LOSS_RULES), "Who bears the cost of a loss."),
        optional("emissions", PRICED, "Specific emissions, by flow."),
    ]],
};

const PRICED: Shape = Shape::Map { key: Key::Name("flow or component"), value: &Shape::Any };

const LOSS_RULES: &[(&str, &str)] = &[
    ("fuel_rule", "A loss leaves at the unit cost of the fuel it comes from."),
    ("zero_value", "A loss is worth nothing; the product bears its cost."),
];

const BASES: &[(&str, &str)] = &[("rate", "Steady flow: kg/s and kW."), ("amount", "A batch: kg and kJ.")];

static ENVIRONMENT: ObjectShape = ObjectShape {
    name: "Environment",
    doc: "The surroundings: temperature, pressure, humidity and chemistry of the dead state.",
    fields: &[&[
        optional("temperature", Shape::Quantity(D::Temperature), "T0; 25 degC if absent."),
        optional("pressure", Shape::Quantity(D::Pressure), "p0, absolute; 1.01325 bar if absent."),
        optional(
            "relative_humidity",
            Shape::Quantity(D::Fraction),
            "Relative humidity; 0.6 if the environment is absent.",
        ),
        optional(
            "barometric_pressure",
            Shape::Quantity(D::Pressure),
            "What gauge pressures are referred to; 1.01325 bar with a standard uncertainty of 3 kPa if absent.",
        ),
        optional(
            "chemistry",
            Shape::Choice(CHEMISTRIES),
            "The chemical reference set; `szargut-1986` if absent.",
        ),
    ]],
};

const CHEMISTRIES: &[(&str, &str)] = &[
    ("szargut-1986", "Reference atmosphere and elements of Szargut, Morris and Steward."),
    ("szargut-2007", "Revised reference set of Szargut."),
    ("ahrendts", "Equilibrium environment of Ahrendts."),
];

static POLICY: ObjectShape = ObjectShape {
    name: "Policy",
    doc: "How figures are read and verdicts are made.",
    fields: &[&[
        optional("edition", Shape::Choice(EDITIONS), "Pins rules and defaults."),
        optional(
            "false_alarm",
            Shape::Number,
            "Accepted probability of any false alarm in a family of tests; 0.01 if absent.",
        ),
        optional(
            "literals",
            Shape::Choice(LITERALS),
            "How figures without uncertainty are read; `design` if absent.",
        ),
        optional(
            "closure_tolerance",
            Shape::Quantity(D::Fraction),
            "Share of the throughput that a balance of design data may be open; 0.1 % if absent.",
        ),
        optional(
            "minimum_approach",
            Shape::Quantity(D::TemperatureDifference),
            "Smallest temperature approach that practice asks for.",
        ),
        optional("disable", Shape::List { item: &Shape::Text, max: MANY }, "Rules that are switched off."),
        optional(
            "enable",
            Shape::List { item: &Shape::Text, max: MANY },
            "Rules that are switched on again.",
        ),
        optional("method", Shape::Choice(METHODS), "How uncertainty is propagated; `linear` if absent."),
    ]],
};

const EDITIONS: &[(&str, &str)] = &[("2026", "The rules and defaults of 2026.")];
const METHODS: &[(&str, &str)] = &[("linear", "Linear propagation (JCGM 100).")];
const LITERALS: &[(&str, &str)] = &[
    ("design", "A figure is known to its printed digits."),
    ("measured", "A figure without uncertainty gets the published default of its kind."),
];

const CALIBRATIONS: Shape =
    Shape::Map { key: Key::Name("calibration group"), value: &Shape::Object(&CALIBRATION) };

static CALIBRATION: ObjectShape = ObjectShape {
    name: "Calibration",
    doc: "The error common to every member of a calibration group.",
    fields: &[&[required("uncertainty", Shape::Uncertainty, "Standard uncertainty of the common error.")]],
};

const GROUPS: Shape =
    Shape::Map { key: Key::Name("group"), value: &Shape::List { item: &Shape::Name, max: MANY } };

// ---- Fluids

const FLUIDS: Shape = Shape::Map { key: Key::Name("fluid"), value: &FLUID };

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

// ---- Components

const COMPONENTS: Shape = Shape::Map { key: Key::Name("component"), value: &Shape::Object(&COMPONENT) };

static COMPONENT: ObjectShape = ObjectShape {
    name: "Component",
    doc: "A component. What it takes of `given`, `sides` and the rest depends on its kind.",
    fields: &[&[
        required("kind", Shape::Choice(kinds::WORDS), "What it is."),
        optional("sides", Shape::List { item: &Shape::Object(&SIDE), max: 64 }, "Material flows by side."),
        optional(
            "arrangement",
            Shape::Choice(ARRANGEMENTS),
            "Flow arrangement of an exchanger; `unknown` if absent.",
        ),
        optional(
            "ports",
            Shape::Map {
                key: Key::Name("role"),
                value: &Shape::OneOf(&[Shape::Name, Shape::List { item: &Shape::Name, max: 64 }]),
            },
            "Which flow plays which role, where it cannot be inferred.",
        ),
        optional("given", Shape::Object(&GIVEN), "Equations used to solve for what is unknown."),
        optional("stated_performance", Shape::Object(&STATED), "Claims: tested, never used to solve."),
        optional(
            "heat_loss",
            Shape::Quantities(D::Power),
            "Heat lost through the casing; none if absent, and listed as assumed.",
        ),
        optional("holdup", Shape::Object(&HOLDUP), "What it holds before and after a batch."),
        optional("purpose", Shape::Object(&PURPOSE), "Own definition of fuel and product."),
        optional("geometry", Shape::Object(&GEOMETRY), "Dimensions that bound what can pass."),
    ]],
};

static GEOMETRY: ObjectShape = ObjectShape {
    name: "Geometry",
    doc: "Dimensions of a component.",
    fields: &[&[optional(
        "throat_area",
        Shape::Quantity(D::Area),
        "Smallest cross-section that the flow passes.",
    )]],
};

const ARRANGEMENTS: &[(&str, &str)] = &[
    ("counterflow", "The sides run against each other."),
    ("parallel", "The sides run the same way."),
    ("shell_1_2", "One shell pass, two tube passes."),
    ("crossflow", "The sides run across each other."),
    ("unknown", "Judged as counterflow, the most lenient."),
];

static SIDE: ObjectShape = ObjectShape {
    name: "Side",
    doc: "One side of an exchanger: flows that enter and leave without meeting another substance.",
    fields: &[&[
        required("in", Shape::List { item: &Shape::Name, max: MANY }, "Flows that enter."),
        required("out", Shape::List { item: &Shape::Name, max: MANY }, "Flows that leave."),
        optional("pressure_loss", PRESSURE_LOSS, "Pressure loss from the first inlet to the first outlet."),
    ]],
};

const PRESSURE_LOSS: Shape = Shape::Quantities(D::PressureDifference);

static GIVEN: ObjectShape = ObjectShape {
    name: "Given",
    doc: "Equations used to solve for what is unknown.",
    fields: &[&[
        optional(
            "isentropic_efficiency",
            Shape::Quantities(D::Fraction),
            "Of each section between successive outlets.",
        ),
        optional(
            "efficiency",
            Shape::Quantities(D::Fraction),
            "Output over input; of a heat engine, work over heat taken in.",
        ),
        optional("cop", Shape::Quantities(D::Fraction), "Coefficient of performance."),
        optional(
            "mechanical_loss",
            Shape::Quantities(D::Power),
            "Power lost in bearings, given off as heat.",
        ),
        optional("heat_loss", Shape::Quantities(D::Power), "Heat lost through the casing."),
        optional("pressure_loss", PRESSURE_LOSS, "Pressure loss of the first side."),
        optional(
            "pressure_loss_fraction",
            Shape::Quantities(D::Fraction),
            "Pressure loss of the first side as share of its inlet pressure.",
        ),
    ]],
};

static STATED: ObjectShape = ObjectShape {
    name: "StatedPerformance",
    doc: "Claims about a component: tested, never used to solve.",
    fields: &[&[
        optional("isentropic_efficiency", Shape::Quantity(D::Fraction), "Isentropic efficiency."),
        optional("efficiency", Shape::Quantity(D::Fraction), "Energy efficiency."),
        optional("cop", Shape::Quantity(D::Fraction), "Coefficient of performance."),
        optional("exergy_efficiency", Shape::Quantity(D::Fraction), "Exergy efficiency."),
    ]],
};

static HOLDUP: ObjectShape = ObjectShape {
    name: "Holdup",
    doc: "What a component holds before and after.",
    fields: &[&[
        required(
            "initial",
            Shape::List { item: &Shape::Object(&CONTENT), max: 64 },
            "Contents before; an empty list if it is empty then.",
        ),
        required(
            "final",
            Shape::List { item: &Shape::Object(&CONTENT), max: 64 },
            "Contents after; an empty list if it is empty then.",
        ),
        optional(
            "boundary_pressure",
            Shape::Quantity(D::Pressure),
            "Pressure against which the boundary moves.",
        ),
    ]],
};

static CONTENT: ObjectShape = ObjectShape {
    name: "Content",
    doc: "One content of a vessel.",
    fields: &[&[required("fluid", FLUID, "The fluid.")], STATE_FIELDS, AMOUNT_FIELDS],
};

static PURPOSE: ObjectShape = ObjectShape {
    name: "Purpose",
    doc: "What a component consumes and what it is for, as flows; a leading `-` subtracts.",
    fields: &[&[
        optional(
            "fuel",
            Shape::List { item: &Shape::Text, max: MANY },
            "Exergy spent: flows that enter, or `-name` for flows that leave.",
        ),
        optional(
            "product",
            Shape::List { item: &Shape::Text, max: MANY },
            "Exergy wanted: flows that leave, or `-name` for flows that enter.",
        ),
    ]],
};

// ---- Flows

const FLOWS: Shape = Shape::Map { key: Key::Name("flow"), value: &Shape::Tagged(&FLOW) };

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
const STATE_FIELDS: &[Field] = &[
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
const AMOUNT_FIELDS: &[Field] = &[
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
