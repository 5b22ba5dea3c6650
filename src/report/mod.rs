//! Reports over one finished assessment: JSON, text, CSV and HTML are siblings.

mod assemble;
mod charts;
mod csv;
mod diagram;
mod figure;
mod grid;
mod holdup;
mod html;
mod markup;
mod merit;
mod profile;
mod prose;
mod state;
mod text;

pub use figure::{Figure, Named};
pub use profile::{CrossedReport, PinchReport, ProfilePoint, ProfileReport};
pub use state::StateReport;
pub(crate) use text::wrapped_at;

/// Widest line of the short answers, to a claim or for a state.
pub(crate) const SHORT_WIDTH: usize = 96;

use serde::Serialize;
#[cfg(feature = "server")]
use utoipa::ToSchema;

/// The report of one check.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct Report {
    /// Name of the description.
    pub name: String,
    /// `violated`, `suspect`, `undecided`, `holds` or `unchecked`, over tests of law.
    #[cfg_attr(feature = "server", schema(value_type = VerdictWord))]
    pub verdict: &'static str,
    /// Whether every test of law that applies was made.
    pub complete: bool,
    /// `consistent`, `contradictory` or `unchecked`.
    #[cfg_attr(feature = "server", schema(value_type = DataVerdictWord))]
    pub data_verdict: &'static str,
    /// The verdict in one sentence.
    pub statement: String,
    /// Number of law tests by verdict.
    pub counts: Counts,
    /// Families of tests that share a probability of a false alarm.
    pub families: Named<FamilyReport>,
    /// Law findings that are violated or suspect, worst first.
    pub violations: Vec<Finding>,
    /// Contradictions in the data, unusual practice, advice.
    pub warnings: Vec<Finding>,
    /// Law tests that cannot be told from their limit.
    pub undecided: Vec<Finding>,
    /// Tests that were not made, and why.
    pub unchecked: Vec<Unchecked>,
    /// The whole plant.
    pub plant: PlantReport,
    /// Components by name.
    pub components: Named<ComponentReport>,
    /// Declared groups by name.
    pub groups: Named<RegionReport>,
    /// Flows by name.
    pub flows: Named<FlowReport>,
    /// What was assumed because it was not given.
    pub assumptions: Vec<AssumptionReport>,
    /// Cautions that apply to what is described.
    pub cautions: Vec<&'static str>,
    /// Where the numbers come from.
    pub provenance: Provenance,
}

/// The verdict over tests of law.
#[cfg(feature = "server")]
#[derive(ToSchema)]
#[schema(rename_all = "lowercase")]
#[allow(dead_code, reason = "only its schema is used")]
pub enum VerdictWord {
    /// At least one law is violated beyond the accepted probability of a false alarm.
    Violated,
    /// At least one law is likely violated.
    Suspect,
    /// At least one test cannot be told from its limit.
    Undecided,
    /// Every test that was made holds.
    Holds,
    /// No test could be made.
    Unchecked,
}

/// The verdict over the data.
#[cfg(feature = "server")]
#[derive(ToSchema)]
#[schema(rename_all = "lowercase")]
#[allow(dead_code, reason = "only its schema is used")]
pub enum DataVerdictWord {
    /// Every test of the data passed.
    Consistent,
    /// At least one contradiction.
    Contradictory,
    /// No test could be made.
    Unchecked,
}

/// Number of law tests by verdict.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct Counts {
    /// Violated.
    pub violated: usize,
    /// Suspect.
    pub suspect: usize,
    /// Undecided.
    pub undecided: usize,
    /// Hold.
    pub holds: usize,
    /// Could not be made.
    pub unchecked: usize,
    /// Findings about data and practice.
    pub warnings: usize,
}

/// A family of tests.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct FamilyReport {
    /// Number of tests.
    pub tests: usize,
    /// Accepted probability of any false alarm.
    pub false_alarm: f64,
    /// Magnitude of z beyond which the first step calls a violation.
    pub critical_z: f64,
}

/// One defect.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct Finding {
    /// The rule's name.
    pub rule: &'static str,
    /// `law`, `data`, `practice` or `self-check`.
    pub authority: &'static str,
    /// `advice`, `minor`, `major`, `critical`, `fatal` or `internal`.
    pub severity: &'static str,
    /// `violated`, `suspect`, `undecided` or `holds`.
    pub verdict: &'static str,
    /// The component, where it is about one.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub component: Option<String>,
    /// JSON Pointer into the description.
    pub r#where: String,
    /// One sentence with its numbers.
    pub statement: String,
    /// The figure that was tested.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub value: Option<Figure>,
    /// Its bound.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub limit: Option<Figure>,
    /// Distance from the limit in standard uncertainties.
    pub z: f64,
    /// Probability of such a deviation at the limit, adjusted for the family.
    pub p_adjusted: f64,
    /// Probability that the true figure is negative.
    pub probability_negative: f64,
    /// Smallest violation that would be found nine times in ten, in the unit of `value`.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub detectable: Option<f64>,
    /// Other rules that see the same defect.
    pub covers: Vec<&'static str>,
    /// Rules whose outcome this finding depends on.
    pub conditional_on: Vec<&'static str>,
    /// Usual causes.
    pub causes: Vec<String>,
    /// Source of the rule.
    pub source: &'static str,
}

/// A test that was not made.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct Unchecked {
    /// JSON Pointer into the description.
    pub r#where: String,
    /// The rule.
    pub what: &'static str,
    /// `unknown`, `spent-on`, `state`, `missing` or `disabled`.
    pub reason: &'static str,
    /// The reason in a sentence.
    pub detail: String,
    /// What would make it possible.
    pub would_need: String,
}

/// What enters, what leaves, and the difference.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct BalanceReport {
    /// What enters.
    pub r#in: Figure,
    /// What leaves.
    pub out: Figure,
    /// In minus out.
    pub residual: Figure,
    /// Residual as share of the throughput.
    pub closure: f64,
}

/// The entropy balance.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct EntropyReport {
    /// What enters.
    pub r#in: Figure,
    /// What leaves.
    pub out: Figure,
    /// Entropy generation σ; at the lenient end where a boundary temperature is not given.
    pub generation: Figure,
    /// σ at the strict end, where a boundary temperature is not given.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub generation_strict: Option<Figure>,
    /// Distance from zero in standard uncertainties.
    pub z: f64,
}

/// The exergy balance.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ExergyReport {
    /// What enters.
    pub r#in: Figure,
    /// What leaves.
    pub out: Figure,
    /// Destruction T0 σ.
    pub destruction: Figure,
    /// In minus out minus destruction: what open balances of energy and matter carry.
    pub residual: Figure,
    /// Exergy spent, for what serves a purpose.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub fuel: Option<Figure>,
    /// Exergy wanted: fuel is product, loss, destruction and residual together.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub product: Option<Figure>,
    /// Exergy thrown away across the plant boundary.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub loss: Option<Figure>,
    /// Exergy taken from the surroundings at no cost.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub free: Option<Figure>,
    /// Product over fuel.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub efficiency: Option<Figure>,
    /// Why there is no efficiency.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub no_efficiency: Option<&'static str>,
}

/// The balances of a region.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct RegionReport {
    /// Verdict over its tests of law.
    pub verdict: &'static str,
    /// Identically reversible.
    #[serde(skip_serializing_if = "std::ops::Not::not")]
    pub at_limit: bool,
    /// Mass.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub mass_balance: Option<BalanceReport>,
    /// Elements, where substances meet.
    #[serde(skip_serializing_if = "Named::is_empty")]
    pub element_balance: Named<BalanceReport>,
    /// Energy.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub energy_balance: Option<BalanceReport>,
    /// Entropy.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub entropy_balance: Option<EntropyReport>,
    /// Exergy.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub exergy_balance: Option<ExergyReport>,
    /// Efficiencies and the like.
    #[serde(skip_serializing_if = "Named::is_empty")]
    pub performance: Named<Figure>,
}

/// The plant: its balances, and where the exergy goes.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct PlantReport {
    /// Its balances.
    #[serde(flatten)]
    pub region: RegionReport,
    /// Components by exergy destruction, largest first.
    pub ranking: Vec<RankEntry>,
    /// Figures of merit that were left out, and why.
    pub omitted: Vec<Omitted>,
}

/// A figure of merit that was left out.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct Omitted {
    /// Its name.
    pub what: &'static str,
    /// Why, in a sentence.
    pub detail: String,
    /// What would make it possible.
    pub would_need: String,
}

/// One line of the ranking.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct RankEntry {
    /// Component.
    pub component: String,
    /// Exergy destruction.
    pub destruction: Figure,
    /// Share of the destruction of all components.
    pub share: f64,
    /// Share of the plant's exergy fuel, where that is known.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub share_of_fuel: Option<f64>,
}

/// A component.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ComponentReport {
    /// Its kind.
    pub kind: &'static str,
    /// Whether the description implies it: the pipe of a flow with two ends.
    #[serde(skip_serializing_if = "std::ops::Not::not")]
    pub implied: bool,
    /// Its balances.
    #[serde(flatten)]
    pub region: RegionReport,
    /// What it holds before and after a batch.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub holdup: Option<HoldupReport>,
    /// Temperatures inside an exchanger.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub profile: Option<ProfileReport>,
    /// Entropy generation by its causes.
    #[serde(skip_serializing_if = "Named::is_empty")]
    pub decomposition: Named<Figure>,
}

/// What a component holds before and after a batch.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct HoldupReport {
    /// Before.
    pub initial: HeldReport,
    /// After.
    pub r#final: HeldReport,
    /// Work done at the moving boundary.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub boundary_work: Option<Figure>,
}

/// The contents of a component at one time.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct HeldReport {
    /// Mass, volume, internal energy and entropy on the datum of the balances, exergy, and the
    /// chemical part of the latter: totals, each only where every content has it.
    #[serde(flatten)]
    pub totals: Named<Figure>,
    /// Each content.
    pub contents: Vec<ContentReport>,
}

/// One content.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct ContentReport {
    /// Fluid.
    pub fluid: String,
    /// Phase.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub phase: Option<&'static str>,
    /// Mass, temperature, pressure, specific volume, internal energy, entropy, exergy.
    #[serde(flatten)]
    pub figures: Named<Figure>,
}

/// A flow.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct FlowReport {
    /// `material`, `heat`, `work` or `radiation`.
    pub kind: &'static str,
    /// The component it leaves.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub from: Option<String>,
    /// The component it enters.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub to: Option<String>,
    /// Where its amount comes from: `given`, `solved`, `assumed`, or `unknown` where it could not be
    /// solved for.
    pub origin: &'static str,
    /// Fluid.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub fluid: Option<String>,
    /// Form of work: `shaft` or `electric`.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub form: Option<&'static str>,
    /// Phase.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[cfg_attr(feature = "server", schema(nullable = false))]
    pub phase: Option<&'static str>,
    /// Figures by name: amounts, properties, rate or power.
    #[serde(flatten)]
    pub figures: Named<Figure>,
    /// Specific exergy by its parts, and the total carried as `rate`.
    #[serde(skip_serializing_if = "Named::is_empty")]
    pub exergy: Named<Figure>,
}

/// An assumption.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct AssumptionReport {
    /// JSON Pointer to what it is about.
    pub r#where: String,
    /// The assumption.
    pub statement: String,
}

/// Where the numbers come from.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct Provenance {
    /// Name and version of the tool.
    pub tool: String,
    /// Edition of rules and defaults.
    pub edition: &'static str,
    /// SHA-256 of the description in canonical form.
    pub description_sha256: String,
    /// `rate` or `amount`.
    pub basis: &'static str,
    /// `metric`, `si` or `us`.
    pub units: &'static str,
    /// Property formulations by fluid.
    pub formulations: Named<Formulation>,
    /// Ambient temperature and pressure.
    pub environment: Named<Figure>,
    /// Chemical reference set.
    pub chemistry: &'static str,
    /// How verdicts were made.
    pub method: String,
}

/// One property formulation.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
#[cfg_attr(feature = "server", derive(ToSchema))]
pub struct Formulation {
    /// Name.
    pub formulation: String,
    /// Citation.
    pub source: String,
    /// Range of validity.
    pub range: String,
}

impl Report {
    /// The report as JSON, without a final line break.
    pub fn to_json(&self) -> Vec<u8> {
        let mut out = Vec::with_capacity(16 * 1024);
        // A report holds no map with other than text keys, so this cannot fail.
        if serde_json::to_writer(&mut out, self).is_err() {
            out.clear();
        }
        out
    }
}

#[cfg(test)]
mod tests;
