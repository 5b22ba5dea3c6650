//! The catalogues: what the service knows, as lists that programs can read. Each is made once.

use std::sync::OnceLock;

use axum::body::{Body, Bytes};
use axum::http::Response;
use serde::Serialize;
use serde_json::json;
use utoipa::ToSchema;

use super::problem;
use super::route::{BASE, Call, Gives, JSON, Outcome, Route, json_response};
use crate::diagnostic::Code;
use crate::fluid::Provenance;
use crate::fluid::catalogue::{self, Listed, ListedSpecies};
use crate::fluid::ideal_gas::SpeciesPhase;
use crate::process::kinds::{Direction, Kind, Port, Stuff};
use crate::quantity::{self, Dimension};
use crate::rules::{self, RuleInfo};

/// A handler that serves a value which is the same for the life of the process.
macro_rules! made_once {
    ($make:path) => {{
        static MADE: OnceLock<Bytes> = OnceLock::new();
        let bytes = MADE.get_or_init(|| Bytes::from(json!($make()).to_string())).clone();
        Box::pin(async { Ok(Response::new(Body::from(bytes))) })
    }};
}
/// `GET /v1/fluids`.
pub const FLUIDS: Route = Route {
    path: "/v1/fluids",
    id: "list_fluids",
    tag: Some("catalogues"),
    summary: "Fluids, with their formulations and ranges",
    description: "Lists the fluids that a description can name, with formulation, range and source.",
    gives: &[Gives { media: JSON, schema: Some("FluidList") }],
    answer: "The fluids.",
    handler: |_| made_once!(fluids),
    ..BASE
};

/// `GET /v1/rules`.
pub const RULES: Route = Route {
    path: "/v1/rules",
    id: "list_rules",
    tag: Some("catalogues"),
    summary: "Rules that a process is tested against",
    description: "Lists the rules with what each tests, its authority (law, data or practice), and its source.",
    gives: &[Gives { media: JSON, schema: Some("RuleList") }],
    answer: "The rules.",
    handler: |_| made_once!(rules),
    ..BASE
};

/// `GET /v1/units`.
pub const UNITS: Route = Route {
    path: "/v1/units",
    id: "list_units",
    tag: Some("catalogues"),
    summary: "Units, by quantity",
    description: "Lists the units that each quantity takes, with their other spellings.",
    gives: &[Gives { media: JSON, schema: Some("UnitList") }],
    answer: "The units.",
    handler: |_| made_once!(units),
    ..BASE
};

/// `GET /v1/component-kinds`.
pub const KINDS: Route = Route {
    path: "/v1/component-kinds",
    id: "list_component_kinds",
    tag: Some("catalogues"),
    summary: "Kinds of components, with their ports",
    description: "Lists the kinds of components with required and optional ports and what can be given for each.",
    gives: &[Gives { media: JSON, schema: Some("KindList") }],
    answer: "The kinds of components.",
    handler: |_| made_once!(component_kinds),
    ..BASE
};

/// `GET /v1/codes`.
pub const CODES: Route = Route {
    path: "/v1/codes",
    id: "list_codes",
    tag: Some("catalogues"),
    summary: "Codes of faults",
    description: "Lists the codes that stand in problem details, with their meaning and the status they are answered with.",
    gives: &[Gives { media: JSON, schema: Some("CodeList") }],
    answer: "The codes.",
    handler: |_| made_once!(codes),
    ..BASE
};

/// `GET /v1/limits`.
pub const LIMITS: Route = Route {
    path: "/v1/limits",
    id: "get_limits",
    tag: Some("catalogues"),
    summary: "Limits of this service",
    description: "Gives every limit as it is set on this service: bytes, times, concurrency, and what one description may hold.",
    gives: &[Gives { media: JSON, schema: Some("PublishedLimits") }],
    answer: "The limits.",
    handler: |call| Box::pin(limits(call)),
    ..BASE
};

async fn limits(call: Call) -> Outcome {
    json_response(&call.service.limits)
}

/// One fluid.
#[derive(Serialize, ToSchema)]
pub struct FluidEntry {
    /// The name as a description gives it.
    pub name: String,
    /// Other spellings that are taken.
    pub aliases: Vec<String>,
    /// The kind of fluid object that the name stands for.
    #[schema(value_type = String)]
    pub kind: &'static str,
    /// The equation that its states come from.
    pub formulation: String,
    /// Where that equation is published.
    pub source: String,
    /// Where it holds.
    pub range: String,
}

/// One chemical species.
#[derive(Serialize, ToSchema)]
pub struct SpeciesEntry {
    /// The name as a description gives it.
    #[schema(value_type = String)]
    pub name: &'static str,
    /// Other spellings that are taken.
    pub aliases: &'static [String],
    /// `gas`, `liquid` or `solid`.
    #[schema(value_type = String)]
    pub phase: &'static str,
    /// Molar mass in kg/mol.
    pub molar_mass: f64,
    /// Lowest temperature of its data, K.
    pub lowest_temperature: f64,
    /// Highest temperature of its data, K.
    pub highest_temperature: f64,
    /// Where its coefficients are published.
    #[schema(value_type = String)]
    pub source: &'static str,
}

/// The answer of `GET /v1/fluids`.
#[derive(Serialize, ToSchema)]
pub struct FluidList {
    /// The fluids that can be named; further ones are described in `fluids` of a description.
    pub fluids: Vec<FluidEntry>,
    /// The species that mixtures of ideal gases are made of, and those that stand alone as liquid or solid.
    pub species: Vec<SpeciesEntry>,
}

/// The fluids and species.
pub fn fluids() -> FluidList {
    let fluid = |Listed { name, aliases, kind, provenance }: Listed| {
        let Provenance { formulation, source, range } = provenance;
        FluidEntry { name, aliases, kind, formulation, source, range }
    };
    let species = |s: ListedSpecies| SpeciesEntry {
        name: s.name,
        aliases: s.aliases,
        phase: match s.phase {
            SpeciesPhase::Gas => "gas",
            SpeciesPhase::Liquid => "liquid",
            SpeciesPhase::Solid => "solid",
        },
        molar_mass: s.molar_mass,
        lowest_temperature: s.temperature_range.0,
        highest_temperature: s.temperature_range.1,
        source: s.source,
    };
    FluidList {
        fluids: catalogue::listing().into_iter().map(fluid).collect(),
        species: catalogue::species().map(species).collect(),
    }
}

/// One rule.
#[derive(Serialize, ToSchema)]
pub struct RuleEntry {
    /// Its name in findings.
    #[schema(value_type = String)]
    pub name: &'static str,
    /// Short title.
    #[schema(value_type = String)]
    pub title: &'static str,
    /// By what right it speaks: law, data, practice or self-check.
    #[schema(value_type = String)]
    pub authority: &'static str,
    /// How much hangs on a violation.
    #[schema(value_type = String)]
    pub severity: &'static str,
    /// The inequality.
    #[schema(value_type = String)]
    pub inequality: &'static str,
    /// Where it applies.
    #[schema(value_type = String)]
    pub applies_to: &'static str,
    /// What it needs.
    #[schema(value_type = String)]
    pub needs: &'static str,
    /// The usual causes of a violation.
    #[schema(value_type = String)]
    pub typical_cause: &'static str,
    /// Its source.
    #[schema(value_type = String)]
    pub source: &'static str,
}

/// The answer of `GET /v1/rules`.
#[derive(Serialize, ToSchema)]
pub struct RuleList {
    /// The rules.
    pub rules: Vec<RuleEntry>,
}

/// The rules.
pub fn rules() -> RuleList {
    let entry = |info: &'static RuleInfo| RuleEntry {
        name: info.name,
        title: info.title,
        authority: info.authority.text(),
        severity: info.severity.text(),
        inequality: info.inequality,
        applies_to: info.applies_to,
        needs: info.needs,
        typical_cause: info.typical_cause,
        source: info.source,
    };
    RuleList { rules: rules::ALL.iter().map(|rule| entry(rule.info())).collect() }
}

/// One quantity and its units.
#[derive(Serialize, ToSchema)]
pub struct QuantityEntry {
    /// The quantity.
    #[schema(value_type = String)]
    pub quantity: &'static str,
    /// What it is.
    #[schema(value_type = String)]
    pub description: &'static str,
    /// A value that can be written for it.
    #[schema(value_type = String)]
    pub example: &'static str,
    /// The unit in which it is computed, and to which the factors below refer.
    #[schema(value_type = String)]
    pub si_unit: &'static str,
    /// The units that it takes.
    pub units: Vec<UnitEntry>,
}

/// One unit: a value in SI is `value * scale + offset`.
#[derive(Serialize, ToSchema)]
pub struct UnitEntry {
    /// The spellings; the first is the one that reports use.
    #[schema(value_type = Vec<String>)]
    pub spellings: &'static [&'static str],
    /// SI units in one of this unit.
    pub scale: f64,
    /// The SI value of this unit's zero.
    pub offset: f64,
    /// What a pressure or a gas volume is referred to.
    #[schema(value_type = String)]
    pub reference: &'static str,
    /// Where the factor is from.
    #[schema(value_type = String)]
    pub source: &'static str,
}

/// The answer of `GET /v1/units`.
#[derive(Serialize, ToSchema)]
pub struct UnitList {
    /// The quantities.
    pub quantities: Vec<QuantityEntry>,
}

/// The units.
pub fn units() -> UnitList {
    let quantities = Dimension::ALL.iter().map(|dimension| QuantityEntry {
        quantity: dimension.name(),
        description: dimension.doc(),
        example: dimension.example(),
        si_unit: dimension.si_unit(),
        units: quantity::catalogue()
            .filter(|unit| unit.dimensions.contains(dimension))
            .map(|unit| UnitEntry {
                spellings: unit.spellings,
                scale: unit.scale,
                offset: unit.offset,
                reference: unit.reference.text(),
                source: unit.source,
            })
            .collect(),
    });
    UnitList { quantities: quantities.collect() }
}

/// One port of a kind of component.
#[derive(Serialize, ToSchema)]
pub struct PortEntry {
    /// What it takes: material, heat or work.
    #[schema(value_type = String)]
    pub takes: &'static str,
    /// Into the component, or out of it.
    #[schema(value_type = String)]
    pub direction: &'static str,
    /// Fewest flows.
    pub least: usize,
    /// Most flows; any number where absent.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = usize, required = false, nullable = false)]
    pub most: Option<usize>,
}

/// One kind of component.
#[derive(Serialize, ToSchema)]
pub struct KindEntry {
    /// Its name in a description.
    #[schema(value_type = String)]
    pub name: &'static str,
    /// What it is.
    #[schema(value_type = String)]
    pub description: &'static str,
    /// Its ports.
    pub ports: Vec<PortEntry>,
    /// The roles that `ports` of a component may assign to its flows.
    #[schema(value_type = Vec<String>)]
    pub roles: &'static [&'static str],
    /// What `given` of a component takes.
    #[schema(value_type = Vec<String>)]
    pub given: &'static [&'static str],
}

/// The answer of `GET /v1/component-kinds`.
#[derive(Serialize, ToSchema)]
pub struct KindList {
    /// The kinds.
    pub component_kinds: Vec<KindEntry>,
}

/// The kinds of components.
pub fn component_kinds() -> KindList {
    let port = |port: &Port| PortEntry {
        takes: match port.stuff {
            Stuff::Material => "material",
            Stuff::Heat => "heat",
            Stuff::Work => "work",
        },
        direction: match port.direction {
            Direction::In => "in",
            Direction::Out => "out",
        },
        least: port.min,
        most: (port.max != usize::MAX).then_some(port.max),
    };
    let entry = |kind: &Kind| {
        let info = kind.info();
        KindEntry {
            name: info.name,
            description: info.doc,
            ports: info.ports.iter().map(port).collect(),
            roles: info.roles,
            given: info.given,
        }
    };
    KindList { component_kinds: Kind::ALL.iter().map(entry).collect() }
}

/// One code.
#[derive(Serialize, ToSchema)]
pub struct CodeEntry {
    /// The code as it stands in an answer.
    #[schema(value_type = String)]
    code: &'static str,
    /// What it means.
    #[schema(value_type = String)]
    meaning: &'static str,
    /// The status of an answer whose first fault it is.
    status: u16,
}

/// The answer of `GET /v1/codes`.
#[derive(Serialize, ToSchema)]
pub struct CodeList {
    /// The codes.
    codes: Vec<CodeEntry>,
}

/// The codes.
pub fn codes() -> CodeList {
    let codes = Code::ALL.iter().map(|code| CodeEntry {
        code: code.text(),
        meaning: code.meaning(),
        status: problem::status(*code).as_u16(),
    });
    CodeList { codes: codes.collect() }
}
