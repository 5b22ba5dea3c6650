//! The claims' fields, each declared once: the reader, the query form, the schema and the catalogue
//! draw on them.

use crate::document::{Field, Key, ObjectShape, Shape, Union, Variant};
use crate::quantity::Dimension as D;

const fn required(name: &'static str, shape: Shape, doc: &'static str) -> Field {
    Field::required(name, shape, doc)
}
const fn optional(name: &'static str, shape: Shape, doc: &'static str) -> Field {
    Field::optional(name, shape, doc)
}
const fn object(name: &'static str, doc: &'static str, fields: &'static [&'static [Field]]) -> ObjectShape {
    ObjectShape { name, doc, fields }
}

const TEMPERATURE: Shape = Shape::Quantity(D::Temperature);
const PRESSURE: Shape = Shape::Quantity(D::Pressure);
const FRACTION: Shape = Shape::Quantity(D::Fraction);
const POWER: Shape = Shape::Quantity(D::Power);
const ENERGY: Shape = Shape::Quantity(D::Energy);

static COMMON: &[Field] = &[
    optional("name", Shape::Text, "What is claimed, for the record."),
    optional(
        "includes_auxiliaries",
        Shape::Boolean,
        "Whether the claimed figure includes the power of pumps, fans and controls; false if absent.",
    ),
    optional("ambient", TEMPERATURE, "Temperature of the surroundings."),
    optional(
        "barometric_pressure",
        PRESSURE,
        "Barometric pressure behind gauge readings; 1.01325 bar ± 3 kPa if absent.",
    ),
    optional(
        "false_alarm",
        Shape::Number,
        "Accepted probability of calling a lawful claim impossible; 0.01 if absent.",
    ),
];

static BODY_OBJECT: ObjectShape = object(
    "ClaimBody",
    "What heat is taken from or given to: a constant temperature, or a stream that slides from inlet to outlet. An \
     inlet or outlet alone is bracketed.",
    &[&[
        optional("temperature", TEMPERATURE, "The constant temperature of a large body."),
        optional("inlet", TEMPERATURE, "Temperature at which the stream arrives at the machine."),
        optional("outlet", TEMPERATURE, "Temperature at which the stream leaves the machine."),
        optional("fluid", Shape::Text, "The stream's fluid; constant heat capacity if absent."),
        optional("pressure", PRESSURE, "The stream's pressure, needed with `fluid`."),
    ]],
);
const BODY: Shape = Shape::OneOf(&[Shape::Object(&BODY_OBJECT), TEMPERATURE]);

static PERFECT_GAS: ObjectShape = object(
    "ClaimPerfectGas",
    "A gas of constant specific heat.",
    &[&[
        required("molar_mass", Shape::Quantity(D::MolarMass), "Molar mass."),
        required("specific_heat", Shape::Quantity(D::SpecificEntropy), "Specific heat at constant pressure."),
    ]],
);
const FLUID: Shape = Shape::OneOf(&[Shape::Text, Shape::Object(&PERFECT_GAS)]);

static STREAM_OBJECT: ObjectShape = object(
    "ClaimStream",
    "The state of a stream: pressure and temperature, or quality with one of them.",
    &[&[
        optional("temperature", TEMPERATURE, "Temperature."),
        optional("pressure", PRESSURE, "Pressure."),
        optional("quality", FRACTION, "Mass fraction of vapour: 1 for saturated vapour."),
    ]],
);
const STREAM: Shape = Shape::Object(&STREAM_OBJECT);

static OUTLET_OBJECT: ObjectShape = object(
    "ClaimOutlet",
    "The outlet of a machine.",
    &[&[
        required("pressure", PRESSURE, "Pressure."),
        optional("temperature", TEMPERATURE, "Temperature, where it is stated."),
    ]],
);

static ENGINE_CLAIM: ObjectShape = object(
    "ClaimedEngine",
    "One of: efficiency; power with heat_flow; work with heat.",
    &[&[
        optional("efficiency", FRACTION, "Work per heat taken in."),
        optional("power", POWER, "Power delivered."),
        optional("heat_flow", POWER, "Heat flow taken in."),
        optional("work", ENERGY, "Work delivered."),
        optional("heat", ENERGY, "Heat taken in."),
    ]],
);
static MOVER_CLAIM: ObjectShape = object(
    "ClaimedHeatMover",
    "One of: cop; heat_flow with power; heat with work.",
    &[&[
        optional("cop", FRACTION, "Coefficient of performance: useful heat per work."),
        optional("heat_flow", POWER, "Useful heat flow: heating capacity, or cooling capacity."),
        optional("power", POWER, "Power taken in."),
        optional("heat", ENERGY, "Useful heat."),
        optional("work", ENERGY, "Work taken in."),
    ]],
);
static TRANSFER_CLAIM: ObjectShape = object(
    "ClaimedHeatTransfer",
    "How much heat passes, where that is known.",
    &[&[optional("heat_flow", POWER, "Heat flow."), optional("heat", ENERGY, "Heat.")]],
);
static ABSORPTION_CLAIM: ObjectShape = object(
    "ClaimedAbsorption",
    "One of: cop; heating_cop.",
    &[&[
        optional("cop", FRACTION, "Cooling per driving heat."),
        optional("heating_cop", FRACTION, "Heat given off to the sink per driving heat."),
    ]],
);
static TRANSFORMER_CLAIM: ObjectShape = object(
    "ClaimedTransformer",
    "The heat delivered per heat taken in.",
    &[&[required("cop", FRACTION, "Heat delivered to the hot sink per heat taken from the source.")]],
);
static MACHINE_CLAIM: ObjectShape = object(
    "ClaimedMachine",
    "One of: specific_work; energy_per_volume; power with mass_flow; power with volume_flow; isentropic_efficiency.",
    &[&[
        optional("specific_work", Shape::Quantity(D::SpecificEnergy), "Work per mass."),
        optional(
            "energy_per_volume",
            Shape::Quantity(D::EnergyPerVolume),
            "Work per volume: actual at the inlet, or normal or standard, for instance kW/(m3/min) or kWh/Nm3.",
        ),
        optional("power", POWER, "Power."),
        optional("mass_flow", Shape::Quantity(D::MassFlow), "Mass flow."),
        optional(
            "volume_flow",
            Shape::Quantity(D::VolumeFlow),
            "Volume flow: actual at the inlet, normal or standard.",
        ),
        optional("isentropic_efficiency", FRACTION, "Isentropic efficiency."),
    ]],
);
static EJECTOR_CLAIM: ObjectShape = object(
    "ClaimedEjector",
    "What the ejector reaches.",
    &[&[
        required("entrainment_ratio", FRACTION, "Mass of suction fluid per mass of motive fluid."),
        required("outlet_pressure", PRESSURE, "Pressure at the outlet."),
    ]],
);
static SPLITTER_CLAIM: ObjectShape = object(
    "ClaimedSplitter",
    "What the splitter reaches.",
    &[&[
        required("hot_temperature", TEMPERATURE, "Temperature of the hot outlet."),
        required("cold_temperature", TEMPERATURE, "Temperature of the cold outlet."),
        required("cold_fraction", FRACTION, "Mass share of the cold outlet."),
    ]],
);
static SEPARATION_CLAIM: ObjectShape = object(
    "ClaimedSeparation",
    "One of: energy_per_volume; specific_work; molar_work; specific_heat_input; each per amount of product.",
    &[&[
        optional(
            "energy_per_volume",
            Shape::Quantity(D::EnergyPerVolume),
            "Work per volume of product, for instance kWh/m3.",
        ),
        optional(
            "specific_work",
            Shape::Quantity(D::SpecificEnergy),
            "Work per mass of product, for instance kWh/t.",
        ),
        optional("molar_work", Shape::Quantity(D::MolarEnergy), "Work per amount of product."),
        optional(
            "specific_heat_input",
            Shape::Quantity(D::SpecificEnergy),
            "Heat from `source` per mass of product, for a separation that is driven by heat alone.",
        ),
    ]],
);
static CELL_CLAIM: ObjectShape = object(
    "ClaimedCell",
    "One of: energy_per_volume; specific_work; voltage; efficiency_hhv; efficiency_lhv; each about hydrogen.",
    &[&[
        optional(
            "energy_per_volume",
            Shape::Quantity(D::EnergyPerVolume),
            "Electric work per volume of hydrogen: kWh/Nm3.",
        ),
        optional(
            "specific_work",
            Shape::Quantity(D::SpecificEnergy),
            "Electric work per mass of hydrogen: kWh/kg.",
        ),
        optional(
            "voltage",
            Shape::Quantity(D::ElectricPotential),
            "Voltage of one cell, at full current yield.",
        ),
        optional("efficiency_hhv", FRACTION, "Efficiency on the higher heating value of hydrogen."),
        optional("efficiency_lhv", FRACTION, "Efficiency on the lower heating value of hydrogen."),
    ]],
);

const SOURCE_DOC: &str = "Where heat is taken from; the ambient if absent.";
const SINK_DOC: &str = "Where heat is given to; the ambient if absent.";

static ENGINE: ObjectShape = object(
    "ClaimHeatEngine",
    "Heat is turned into work.",
    &[
        &[
            required("source", BODY, "Where heat is taken from."),
            optional("sink", BODY, SINK_DOC),
            required("claim", Shape::Object(&ENGINE_CLAIM), "What is claimed."),
        ],
        COMMON,
    ],
);
static REFRIGERATOR: ObjectShape = object(
    "ClaimRefrigerator",
    "Work takes heat from what is cooled.",
    &[
        &[
            required("source", BODY, "What is cooled."),
            optional("sink", BODY, SINK_DOC),
            required("claim", Shape::Object(&MOVER_CLAIM), "What is claimed."),
        ],
        COMMON,
    ],
);
static HEAT_PUMP: ObjectShape = object(
    "ClaimHeatPump",
    "Work delivers heat to what is heated.",
    &[
        &[
            optional("source", BODY, SOURCE_DOC),
            required("sink", BODY, "What is heated."),
            required("claim", Shape::Object(&MOVER_CLAIM), "What is claimed."),
        ],
        COMMON,
    ],
);
static TRANSFER: ObjectShape = object(
    "ClaimHeatTransfer",
    "Heat passes from one body to another by itself.",
    &[
        &[
            required("source", BODY, "What gives heat off."),
            required("sink", BODY, "What takes heat up."),
            optional("claim", Shape::Object(&TRANSFER_CLAIM), "How much heat passes."),
        ],
        COMMON,
    ],
);
static ABSORPTION: ObjectShape = object(
    "ClaimAbsorptionMachine",
    "Driving heat moves heat.",
    &[
        &[
            required("driving", BODY, "Where the driving heat is taken from."),
            required("source", BODY, "What is cooled."),
            optional("sink", BODY, SINK_DOC),
            required("claim", Shape::Object(&ABSORPTION_CLAIM), "What is claimed."),
        ],
        COMMON,
    ],
);
static TRANSFORMER: ObjectShape = object(
    "ClaimHeatTransformer",
    "Part of the heat of a source is raised to a higher temperature, the rest is rejected.",
    &[
        &[
            required("source", BODY, "Where heat is taken from."),
            required("sink", BODY, "What is heated above the source."),
            optional("rejected", BODY, "Where the rest is rejected; the ambient if absent."),
            required("claim", Shape::Object(&TRANSFORMER_CLAIM), "What is claimed."),
        ],
        COMMON,
    ],
);
const HEAT_EXCHANGE: &[(&str, &str)] = &[
    ("adiabatic", "No heat passes the casing."),
    ("ambient", "Heat is exchanged with the surroundings at `ambient`: intercooled, oil-cooled, reheated."),
];
static MACHINE_FIELDS: &[Field] = &[
    required("fluid", FLUID, "Fluid: a name, or molar mass and specific heat."),
    required("inlet", STREAM, "State at the inlet."),
    required("outlet", Shape::Object(&OUTLET_OBJECT), "What is known of the outlet."),
    required("claim", Shape::Object(&MACHINE_CLAIM), "What is claimed."),
];
static COMPRESSOR: ObjectShape = object(
    "ClaimCompressor",
    "Work raises the pressure of a fluid.",
    &[
        MACHINE_FIELDS,
        &[optional(
            "heat_exchange",
            Shape::Choice(HEAT_EXCHANGE),
            "`ambient` if absent: the more lenient limit.",
        )],
        COMMON,
    ],
);
static EXPANDER: ObjectShape = object(
    "ClaimExpander",
    "The pressure of a fluid delivers work.",
    &[
        MACHINE_FIELDS,
        &[optional("heat_exchange", Shape::Choice(HEAT_EXCHANGE), "`adiabatic` if absent.")],
        COMMON,
    ],
);
static EJECTOR: ObjectShape = object(
    "ClaimEjector",
    "A motive stream lifts a suction stream.",
    &[
        &[
            required("fluid", FLUID, "Fluid of both streams."),
            required("motive", STREAM, "State of the motive stream."),
            required("suction", STREAM, "State of the suction stream."),
            required("claim", Shape::Object(&EJECTOR_CLAIM), "What is claimed."),
        ],
        COMMON,
    ],
);
static SPLITTER: ObjectShape = object(
    "ClaimSplitter",
    "A compressed gas is divided into a hot and a cold stream without work or heat (vortex tube).",
    &[
        &[
            required("fluid", FLUID, "The gas."),
            required("inlet", STREAM, "State at the inlet."),
            required("outlet_pressure", PRESSURE, "Pressure at the outlets."),
            optional("hot_pressure", PRESSURE, "Pressure at the hot outlet, where it differs."),
            required("claim", Shape::Object(&SPLITTER_CLAIM), "What is claimed."),
        ],
        COMMON,
    ],
);
const SALTS: &[(&str, &str)] =
    &[("seawater", "Sea salt in water."), ("sodium chloride", "Sodium chloride in water.")];
static SEPARATION: ObjectShape = object(
    "ClaimSeparation",
    "A mixture is divided. Give `feed` with `product`, `purity` and `recovery` for an ideal mixture; `solution`, \
     `salinity` and `recovery` for desalination; or `osmotic_pressure` and `recovery` for a dilute solution.",
    &[
        &[
            optional(
                "feed",
                Shape::Map { key: Key::Name("a substance of the feed"), value: &FRACTION },
                "Mole fractions of an ideal mixture.",
            ),
            optional("product", Shape::Text, "The substance of the feed that is won."),
            optional("purity", FRACTION, "Mole fraction of that substance in the product; 1 if absent."),
            optional(
                "recovery",
                FRACTION,
                "Share of that substance, or of the feed water, that is won; near zero if absent.",
            ),
            optional("feed_pressure", PRESSURE, "Pressure of a gaseous feed."),
            optional(
                "product_pressure",
                PRESSURE,
                "Pressure of the gaseous product; that of the feed if absent.",
            ),
            optional("solution", Shape::Choice(SALTS), "The salt solution that is desalinated."),
            optional(
                "salinity",
                Shape::Quantity(D::HumidityRatio),
                "Mass of salt per mass of solution, for instance 35 g/kg.",
            ),
            optional(
                "product_salinity",
                Shape::Quantity(D::HumidityRatio),
                "That of the product; pure water if absent.",
            ),
            optional(
                "osmotic_pressure",
                Shape::Quantity(D::PressureDifference),
                "Osmotic pressure of a dilute feed.",
            ),
            optional("temperature", TEMPERATURE, "Temperature of the separation; 25 degC if absent."),
            optional("source", BODY, "Where driving heat is taken from, with `specific_heat_input`."),
            required("claim", Shape::Object(&SEPARATION_CLAIM), "What is claimed."),
        ],
        COMMON,
    ],
);
const WATER: &[(&str, &str)] = &[
    ("liquid", "Liquid water."),
    ("vapour", "Water vapour at `water_pressure`."),
    ("steam", "The same as `vapour`."),
];
static CELL_FIELDS: &[Field] = &[
    optional("temperature", TEMPERATURE, "Temperature of the cell; 25 degC if absent."),
    optional("pressure", PRESSURE, "Pressure of hydrogen and oxygen; 1 bar if absent."),
    optional("oxygen_pressure", PRESSURE, "Partial pressure of oxygen, where it differs."),
    optional("water", Shape::Choice(WATER), "State of the water; liquid if absent."),
    optional("water_pressure", PRESSURE, "Partial pressure of water vapour; `pressure` if absent."),
    required("claim", Shape::Object(&CELL_CLAIM), "What is claimed."),
];
static ELECTROLYSER: ObjectShape = object(
    "ClaimElectrolyser",
    "Electric work splits water into hydrogen and oxygen.",
    &[CELL_FIELDS, COMMON],
);
static FUEL_CELL: ObjectShape = object(
    "ClaimFuelCell",
    "Hydrogen and oxygen deliver electric work.",
    &[
        CELL_FIELDS,
        &[optional(
            "oxidant",
            Shape::Choice(&[("oxygen", "Pure oxygen."), ("air", "Dry air of the cell's pressure.")]),
            "Oxygen if absent: the more lenient limit.",
        )],
        COMMON,
    ],
);

macro_rules! claims {
    ($($word:literal => $shape:ident),+ $(,)?) => {
        /// A claim.
        pub static CLAIM: Union = Union {
            name: "Claim",
            doc: "A claimed figure of a machine, with the conditions that it is claimed for.",
            member: "kind",
            variants: &[$(Variant { word: $word, shape: &$shape }),+],
        };
    };
}

claims! {
    "heat_engine" => ENGINE,
    "refrigerator" => REFRIGERATOR,
    "heat_pump" => HEAT_PUMP,
    "heat_transformer" => TRANSFORMER,
    "absorption_machine" => ABSORPTION,
    "heat_transfer" => TRANSFER,
    "compressor" => COMPRESSOR,
    "expander" => EXPANDER,
    "ejector" => EJECTOR,
    "splitter" => SPLITTER,
    "separation" => SEPARATION,
    "electrolyser" => ELECTROLYSER,
    "fuel_cell" => FUEL_CELL,
}
