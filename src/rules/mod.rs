//! The rules: one file a rule. A rule turns an evaluation into margins and, given a decision, into
//! an explanation. [`ALL`] lists them; the catalogue, the report and the tests draw from it.
//!
//! To add a rule: write its file after the pattern of any other (a documented struct, its
//! [`RuleInfo`] with a breaking and a keeping case, its margins, its explanation), and add it to
//! the list below.

mod carnot;
mod hottest;
mod interior;
mod machine;
mod measure;
pub mod phrase;
mod physics;
mod practice;
mod remark;
mod saturation;
mod terminal;
#[cfg(test)]
mod tests;
mod three_bodies;

use crate::balance::Evaluation;
use crate::model::{Decision, Family, Margin};
use crate::quantity::Dimension;

/// By what right a rule speaks.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Authority {
    /// A law of nature: may say impossible.
    Law,
    /// The data contradict each other.
    Data,
    /// Common practice: unusual.
    Practice,
    /// The tool checks itself.
    SelfCheck,
}

impl Authority {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            Authority::Law => "law",
            Authority::Data => "data",
            Authority::Practice => "practice",
            Authority::SelfCheck => "self-check",
        }
    }

    /// What a violation is called.
    pub const fn complaint(self) -> &'static str {
        match self {
            Authority::Law => "impossible",
            Authority::Data => "contradiction",
            Authority::Practice => "unusual",
            Authority::SelfCheck => "internal",
        }
    }
}

/// How much hangs on a finding.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// Advice.
    Advice,
    /// Minor.
    Minor,
    /// Major.
    Major,
    /// Critical.
    Critical,
    /// Cannot be evaluated.
    Fatal,
    /// A fault of the tool.
    Internal,
}

impl Severity {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            Severity::Advice => "advice",
            Severity::Minor => "minor",
            Severity::Major => "major",
            Severity::Critical => "critical",
            Severity::Fatal => "fatal",
            Severity::Internal => "internal",
        }
    }
}

/// Which defect a rule sees: rules of one aspect that are broken at one place are one defect.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Aspect {
    /// The entropy balance and everything that follows from it.
    Entropy,
    /// Temperatures inside or at the ends of an exchanger.
    Interior,
    /// The direction or equilibrium of a reaction.
    Reaction,
    /// A claimed figure.
    Claim,
    /// Conservation of mass, elements and energy.
    Closure,
    /// What one state says of itself.
    State,
    /// A habit of the trade.
    Practice,
    /// The tool's own arithmetic.
    Tool,
}

/// A case that breaks or keeps a rule.
#[derive(Clone, Copy, Debug)]
pub enum Case {
    /// A description.
    Description(&'static str),
    /// No description can show it; the reason.
    None(&'static str),
}

/// What the catalogue says of a rule.
#[derive(Debug)]
pub struct RuleInfo {
    /// Its one identity.
    pub name: &'static str,
    /// Short title.
    pub title: &'static str,
    /// By what right it speaks.
    pub authority: Authority,
    /// How much hangs on a violation.
    pub severity: Severity,
    /// Which defect it sees.
    pub aspect: Aspect,
    /// The inequality, in words and symbols.
    pub inequality: &'static str,
    /// Where it applies.
    pub applies_to: &'static str,
    /// What it needs.
    pub needs: &'static str,
    /// Usual causes of a violation.
    pub typical_cause: &'static str,
    /// Source of the rule.
    pub source: &'static str,
    /// A description that breaks it.
    pub breaking: Case,
    /// A description that keeps it.
    pub keeping: Case,
}

/// A figure in an explanation, SI, with its dimension.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Figure {
    /// SI value.
    pub value: f64,
    /// What it measures.
    pub dimension: Dimension,
}

/// What a rule says of a margin that does not hold.
#[derive(Clone, Debug, Default)]
pub struct Explanation {
    /// One sentence with its numbers.
    pub statement: String,
    /// The figure that was tested.
    pub value: Option<Figure>,
    /// Its bound.
    pub limit: Option<Figure>,
    /// A milder severity, where the case is milder than the rule.
    pub severity: Option<Severity>,
    /// The usual causes, separated by commas, where this case has others than the rule.
    pub causes: Option<&'static str>,
    /// Rules that this finding covers by its nature.
    pub covers: Vec<&'static str>,
}

/// A rule.
pub trait Rule: Sync {
    /// What the catalogue says of it.
    fn info(&self) -> &'static RuleInfo;

    /// Appends its margins. `me` is the rule's index in [`ALL`].
    fn margins(&self, me: usize, evaluation: &Evaluation<'_>, out: &mut Vec<Margin>);

    /// Explains a margin that does not hold, or that is at its limit.
    fn explain(&self, evaluation: &Evaluation<'_>, margin: &Margin, decision: &Decision) -> Explanation;
}

macro_rules! rules {
    ($($module:ident :: $rule:ident),+ $(,)?) => {
        $(pub mod $module;)+

        /// Every rule; for rules of one aspect, the one that names the defect best comes first.
        pub static ALL: &[&dyn Rule] = &[$(&$module::$rule),+];
    };
}

rules! {
    negative_entropy_generation::NegativeEntropyGeneration,
    negative_group_entropy_generation::NegativeGroupEntropyGeneration,
    negative_plant_entropy_generation::NegativePlantEntropyGeneration,
    heat_flows_uphill::HeatFlowsUphill,
    clausius_inequality_broken::ClausiusInequalityBroken,
    work_from_one_reservoir::WorkFromOneReservoir,
    engine_beats_carnot::EngineBeatsCarnot,
    refrigerator_beats_carnot::RefrigeratorBeatsCarnot,
    heat_pump_beats_carnot::HeatPumpBeatsCarnot,
    expander_beats_isentropic::ExpanderBeatsIsentropic,
    compressor_beats_isentropic::CompressorBeatsIsentropic,
    throttle_against_entropy::ThrottleAgainstEntropy,
    pipe_against_entropy::PipeAgainstEntropy,
    passive_pressure_rise::PassivePressureRise,
    mixer_pressure_above_inlets::MixerPressureAboveInlets,
    boundary_temperature_out_of_bounds::BoundaryTemperatureOutOfBounds,
    batch_entropy_negative::BatchEntropyNegative,
    heat_driven_chiller_beats_limit::HeatDrivenChillerBeatsLimit,
    heat_transformer_beats_limit::HeatTransformerBeatsLimit,
    separation_below_minimum_work::SeparationBelowMinimumWork,
    electrochemical_limit_broken::ElectrochemicalLimitBroken,
    flow_above_choked::FlowAboveChoked,
    shock_in_reverse::ShockInReverse,
    reaction_against_affinity::ReactionAgainstAffinity,
    equilibrium_overshot::EquilibriumOvershot,
    internal_temperature_cross::InternalTemperatureCross,
    composite_curves_cross::CompositeCurvesCross,
    work_beats_reversible::WorkBeatsReversible,
    compressor_beats_isothermal::CompressorBeatsIsothermal,
    negative_exergy_destruction::NegativeExergyDestruction,
    exergy_efficiency_above_one::ExergyEfficiencyAboveOne,
    terminal_temperature_cross::TerminalTemperatureCross,
    parallel_flow_outlet_cross::ParallelFlowOutletCross,
    exchanger_effectiveness_above_one::ExchangerEffectivenessAboveOne,
    section_entropy_negative::SectionEntropyNegative,
    air_colder_than_coil::AirColderThanCoil,
    radiation_exergy_above_limit::RadiationExergyAboveLimit,
    flame_hotter_than_adiabatic::FlameHotterThanAdiabatic,
    filling_hotter_than_limit::FillingHotterThanLimit,
    mixed_temperature_out_of_bounds::MixedTemperatureOutOfBounds,
    mass_imbalance::MassImbalance,
    element_imbalance::ElementImbalance,
    energy_imbalance::EnergyImbalance,
    composition_sum::CompositionSum,
    surplus_property_mismatch::SurplusPropertyMismatch,
    saturation_mismatch::SaturationMismatch,
    redundant_readings_disagree::RedundantReadingsDisagree,
    given_figure_contradicted::GivenFigureContradicted,
    stated_figure_missed::StatedFigureMissed,
    state_outside_formulation::StateOutsideFormulation,
    vapour_below_saturation::VapourBelowSaturation,
    liquid_above_saturation::LiquidAboveSaturation,
    quality_out_of_range::QualityOutOfRange,
    humidity_above_saturation::HumidityAboveSaturation,
    humidity_ratio_above_saturation::HumidityRatioAboveSaturation,
    water_below_wet_bulb::WaterBelowWetBulb,
    flue_gas_line_mismatch::FlueGasLineMismatch,
    ideal_gas_far_from_ideal::IdealGasFarFromIdeal,
    wetness_unknown::WetnessUnknown,
    reversed_flow::ReversedFlow,
    unusual_approach::UnusualApproach,
    unusual_pressure_drop::UnusualPressureDrop,
    negative_exergy::NegativeExergy,
    unusual_dead_state::UnusualDeadState,
    unusual_turbine_efficiency::UnusualTurbineEfficiency,
    unusual_gas_turbine_efficiency::UnusualGasTurbineEfficiency,
    unusual_machine_efficiency::UnusualMachineEfficiency,
    unusual_exergy_efficiency::UnusualExergyEfficiency,
    unusual_stack_loss::UnusualStackLoss,
    claim_close_to_limit::ClaimCloseToLimit,
    below_acid_dew_point::BelowAcidDewPoint,
    gouy_stodola_mismatch::GouyStodolaMismatch,
}

/// The index of a rule by name.
pub fn find(name: &str) -> Option<usize> {
    ALL.iter().position(|r| r.info().name == name)
}

/// Every rule's name.
pub fn names() -> Vec<&'static str> {
    ALL.iter().map(|rule| rule.info().name).collect()
}

/// Whether a rule only adds up entropy, so that a finding of it gains from the sentence of a rule
/// that [names the defect](names_the_defect).
pub fn only_counts_entropy(name: &str) -> bool {
    matches!(
        name,
        "negative-entropy-generation"
            | "negative-group-entropy-generation"
            | "negative-plant-entropy-generation"
    )
}

/// Whether a rule of law says what is wrong in terms of the machine at hand, beyond the balance of
/// entropy or exergy.
pub fn names_the_defect(info: &RuleInfo) -> bool {
    let of_law = matches!(info.authority, Authority::Law);
    let restates = matches!(
        info.name,
        "clausius-inequality-broken"
            | "batch-entropy-negative"
            | "work-beats-reversible"
            | "negative-exergy-destruction"
            | "exergy-efficiency-above-one"
            | "section-entropy-negative"
    );
    let aspect = matches!(info.aspect, Aspect::Entropy | Aspect::Interior | Aspect::Reaction);
    of_law && aspect && !restates && !only_counts_entropy(info.name)
}

/// The family of a rule's tests by its authority and aspect.
pub const fn family(info: &RuleInfo) -> Family {
    match info.aspect {
        Aspect::Entropy | Aspect::Interior => Family::Entropy,
        Aspect::Closure => Family::Closure,
        _ => Family::None,
    }
}
