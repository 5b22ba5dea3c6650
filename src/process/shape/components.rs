//! The components of a description, with what is given of them.

use super::super::kinds;
use super::{
    MANY,
    flows::{AMOUNT_FIELDS, STATE_FIELDS},
    fluids::FLUID,
    optional, required,
};
use crate::document::{Key, ObjectShape, Shape};
use crate::quantity::Dimension as D;

pub(super) const COMPONENTS: Shape =
    Shape::Map { key: Key::Name("component"), value: &Shape::Object(&COMPONENT) };

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
