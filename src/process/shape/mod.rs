//! What a description can hold: each object declared once. The reader, the published schema and
//! the documentation are drawn from these tables.

mod components;
mod flows;
mod fluids;

use crate::document::{Field, Key, ObjectShape, Shape};
use crate::quantity::Dimension as D;
use components::COMPONENTS;
use flows::{FLOWS, STATE_FIELDS};
pub use fluids::FLUID;
use fluids::FLUIDS;

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
