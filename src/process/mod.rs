//! The validated process: flows of material, heat and work between components, each quantity tied
//! to the readings it came from. A [`Process`] exists only if its structure is valid; the values
//! of its readings live apart, in [`Inputs`].

pub mod kinds;
mod read;
pub mod shape;

pub use read::{ReadLimits, read, read_state};

use crate::fluid::{CompositionForm, Engine, Pair, Property, Substance};
use kinds::Kind;
use std::sync::Arc;

/// Whether amounts are rates (kg/s, W) or totals over a batch (kg, J).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Basis {
    /// Steady flow: kg/s and W.
    Rate,
    /// A batch: kg and J.
    Amount,
}

/// Index of a component.
pub type ComponentId = usize;
/// Index of a flow.
pub type FlowId = usize;
/// Index of a fluid.
pub type FluidId = usize;
/// Index of a state.
pub type StateId = usize;
/// Index of a source: one independent reading or common error.
pub type SourceId = usize;
/// Index of a variable.
pub type VarId = usize;

/// What kind of source an independent error is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum SourceKind {
    /// A figure of the description with a stated uncertainty.
    Stated,
    /// A figure of the description known to its printed digits.
    Digits,
    /// A figure of the description taken as exact.
    Exact,
    /// A value that was not given and was assumed.
    Assumed,
    /// An error common to a calibration group.
    Calibration,
    /// The barometric pressure behind every gauge reading.
    Barometer,
    /// The property formulation of one fluid in one component.
    Formulation,
}

/// One independent input: all sources are mutually uncorrelated; correlation between variables
/// comes from sharing sources.
#[derive(Clone, Debug)]
pub struct Source {
    /// JSON Pointer to the figure, or to what it belongs to.
    pub pointer: String,
    /// What it is.
    pub kind: SourceKind,
    /// Standard uncertainty in SI units of the figure (dimensionless for formulations).
    pub u: f64,
    /// Half a unit of the last printed digit, SI: what rounding could explain.
    pub half_digit: f64,
}

/// The values of the sources, in SI units. Formulation and calibration sources have value 0.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Inputs {
    /// One value a source.
    pub values: Vec<f64>,
}

/// A variable that is an affine function of sources: `constant + Σ weight · source`.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Affine {
    /// Constant part, SI.
    pub constant: f64,
    /// Weights of the sources.
    pub terms: Vec<(SourceId, f64)>,
}

/// How a variable comes by its value.
#[derive(Clone, Debug, PartialEq)]
pub enum Var {
    /// Given through sources.
    Given(Affine),
    /// To be solved for.
    Unknown {
        /// What it is, in words, for instance `mass flow of "steam"`.
        what: String,
        /// Its physical nature, for guesses and scales.
        nature: Nature,
        /// JSON Pointer to the object that lacks it.
        pointer: String,
    },
}

/// The physical nature of an unknown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Nature {
    /// kg/s or kg
    Mass,
    /// W or J
    Energy,
    /// J/kg
    Enthalpy,
    /// Pa
    Pressure,
    /// K
    Temperature,
    /// Composition coordinate of a variable mixture
    Composition,
}

/// The reference in which an amount of material is counted.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum AmountForm {
    /// kg(/s)
    Mass,
    /// mol(/s): times molar mass
    Moles,
    /// m³(/s) at the state's own density
    Volume,
    /// kg(/s) of dry air in humid air: times (1 + W)
    DryAirMass,
}

/// How the coordinates of a state are given.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum StateForm {
    /// A pair that the engine takes directly.
    Pair(Pair),
    /// (p, superheat): T = Tsat(p) + ΔT.
    PressureSuperheat,
    /// (p, subcooling): T = Tsat(p) − ΔT.
    PressureSubcooling,
    /// (T, superheat): p = psat(T − ΔT).
    TemperatureSuperheat,
    /// (T, subcooling): p = psat(T + ΔT).
    TemperatureSubcooling,
}

/// A property given beyond what fixes the state: a redundancy check, or the equation that fixes an
/// unknown coordinate.
#[derive(Clone, Debug)]
pub struct Surplus {
    /// Which property.
    pub property: Property,
    /// Its given value.
    pub var: VarId,
    /// Where it stands.
    pub pointer: String,
}

/// The thermodynamic state of one or more flows.
#[derive(Clone, Debug)]
pub struct StateSpec {
    /// The fluid.
    pub fluid: FluidId,
    /// How `a` and `b` are to be read.
    pub form: StateForm,
    /// First coordinate.
    pub a: VarId,
    /// Second coordinate.
    pub b: VarId,
    /// Composition coordinate of a variable mixture.
    pub c: Option<(CompositionForm, VarId)>,
    /// Properties given beyond need.
    pub surplus: Vec<Surplus>,
    /// The phase that the description declares, if it does.
    pub phase: Option<crate::fluid::Phase>,
    /// Where the state is described.
    pub pointer: String,
    /// Whether the state is the environment's.
    pub ambient: bool,
    /// Whether (p, T) was given so close to saturation that the wetness is unknown: the state then
    /// has an unknown enthalpy, and the temperature is a surplus property.
    pub wet_ambiguous: bool,
}

/// Work as shaft or electric power.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum WorkForm {
    /// Shaft power.
    Shaft,
    /// Electric power.
    Electric,
}

/// The temperature of the surface that a heat flow crosses.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Boundary {
    /// One temperature.
    Isothermal(VarId),
    /// A stream of constant heat capacity between two temperatures: log-mean.
    Sliding(VarId, VarId),
    /// Not given: bracketed.
    Unknown,
}

/// A flow of material.
#[derive(Clone, Debug)]
pub struct Material {
    /// Its state.
    pub state: StateId,
    /// The variable that holds its amount.
    pub amount: VarId,
    /// How that variable counts.
    pub form: AmountForm,
    /// m/s, where given.
    pub velocity: Option<VarId>,
    /// m, where given.
    pub elevation: Option<VarId>,
    /// Specific exergy as stated, J/kg (for a `stated` fluid).
    pub stated_exergy: Option<f64>,
}

/// What a flow carries.
#[derive(Clone, Debug)]
pub enum Carried {
    /// Material.
    Material(Material),
    /// Heat: amount variable (W or J) and the boundary it crosses.
    Heat(VarId, Boundary),
    /// Work: amount variable (W or J).
    Work(VarId, WorkForm),
    /// Black-body radiation: amount variable (W or J) and source temperature.
    Radiation(VarId, VarId),
}

/// What a boundary flow is to the plant.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// Paid for.
    Fuel,
    /// What the plant is for.
    Product,
    /// Thrown away.
    Loss,
    /// Taken from the surroundings at no cost.
    Free,
}

/// One flow.
#[derive(Clone, Debug)]
pub struct Flow {
    /// Its name.
    pub name: String,
    /// Where it is described.
    pub pointer: String,
    /// The component it leaves; `None`: it comes from outside.
    pub from: Option<ComponentId>,
    /// The component it enters; `None`: it goes outside.
    pub to: Option<ComponentId>,
    /// What it carries.
    pub carried: Carried,
    /// Its role at the plant boundary.
    pub role: Option<Role>,
    /// Whether it was made by the reader (a heat loss, an end of a pipe), not described as a flow.
    pub implied: bool,
}

impl Flow {
    /// The material, if that is what the flow carries.
    pub fn material(&self) -> Option<&Material> {
        match &self.carried {
            Carried::Material(m) => Some(m),
            _ => None,
        }
    }
}

/// One set of material flows of a component that keeps its substance to itself.
#[derive(Clone, Debug, Default)]
pub struct Side {
    /// Flows that enter.
    pub inlets: Vec<FlowId>,
    /// Flows that leave.
    pub outlets: Vec<FlowId>,
    /// Whether different substances meet here, so that elements are balanced on one datum.
    pub pool: bool,
    /// States of the contents, before or after a batch, that belong to the set.
    pub contents: Vec<StateId>,
}

/// Flow arrangement of an exchanger.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Arrangement {
    /// Counterflow.
    Counterflow,
    /// Parallel (co-current) flow.
    Parallel,
    /// One shell pass, two tube passes.
    Shell12,
    /// Crossflow.
    Crossflow,
    /// Not known: judged as counterflow, the most lenient.
    Unknown,
}

/// A pressure loss as a difference or a share of the inlet pressure.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PressureLoss {
    /// Pa
    Difference(VarId),
    /// Share of the inlet pressure
    Fraction(VarId),
}

/// Equations that are used to solve for what is unknown.
#[derive(Clone, Debug, Default)]
pub struct Given {
    /// Isentropic efficiency of a machine.
    pub isentropic_efficiency: Option<VarId>,
    /// Efficiency of a converter: output over input; for an engine, work over heat taken in.
    pub efficiency: Option<VarId>,
    /// Coefficient of performance.
    pub cop: Option<VarId>,
    /// Pressure losses by side.
    pub pressure_loss: Vec<(usize, PressureLoss)>,
    /// Whether heat loss was described (otherwise adiabatic is assumed and listed).
    pub heat_loss: bool,
}

/// A claim about performance: tested, never used to solve.
#[derive(Clone, Debug)]
pub struct Stated {
    /// Which figure, as in the description (`efficiency`, `cop`, `isentropic_efficiency`, …).
    pub what: StatedFigure,
    /// Its value.
    pub var: VarId,
    /// Where it stands.
    pub pointer: String,
}

/// Figures that can be claimed for a component.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum StatedFigure {
    /// Isentropic efficiency.
    IsentropicEfficiency,
    /// Energy efficiency.
    Efficiency,
    /// Coefficient of performance.
    Cop,
    /// Exergy efficiency.
    ExergyEfficiency,
}

/// One content of a vessel before or after a batch.
#[derive(Clone, Debug)]
pub struct Content {
    /// Its state.
    pub state: StateId,
    /// The variable that holds its amount.
    pub amount: VarId,
    /// How that variable counts.
    pub form: AmountForm,
}

/// What a component holds before and after.
#[derive(Clone, Debug, Default)]
pub struct Holdup {
    /// Before.
    pub initial: Vec<Content>,
    /// After.
    pub r#final: Vec<Content>,
    /// Pressure against which the boundary moves, Pa.
    pub boundary_pressure: Option<VarId>,
}

/// One component.
#[derive(Clone, Debug)]
pub struct Component {
    /// Its name.
    pub name: String,
    /// Where it is described.
    pub pointer: String,
    /// Its kind.
    pub kind: Kind,
    /// Flows that enter, in the order of the description.
    pub inlets: Vec<FlowId>,
    /// Flows that leave.
    pub outlets: Vec<FlowId>,
    /// Material flows by conserved set.
    pub sides: Vec<Side>,
    /// Flow arrangement of an exchanger.
    pub arrangement: Arrangement,
    /// Equations used to solve.
    pub given: Given,
    /// Claims that are tested.
    pub stated: Vec<Stated>,
    /// What it holds before and after a batch.
    pub holdup: Option<Holdup>,
    /// Named ports: port name and flow.
    pub ports: Vec<(&'static str, FlowId)>,
    /// Own fuel and product lists.
    pub purpose: Option<Purpose>,
    /// Smallest cross-section that the flow passes, m².
    pub throat_area: Option<VarId>,
    /// Whether it was made by the reader (the pipe of a flow with two ends).
    pub implied: bool,
}

/// Own definition of what a component consumes and what it is for.
#[derive(Clone, Debug, Default)]
pub struct Purpose {
    /// Exergy that is spent: flow and sign (+ entering, − leaving).
    pub fuel: Vec<(FlowId, f64)>,
    /// Exergy that is wanted: flow and sign (+ leaving, − entering).
    pub product: Vec<(FlowId, f64)>,
}

/// A declared union of components.
#[derive(Clone, Debug)]
pub struct Group {
    /// Its name.
    pub name: String,
    /// Where it is declared.
    pub pointer: String,
    /// Its members.
    pub members: Vec<ComponentId>,
}

/// A fluid as used by the process.
#[derive(Clone, Debug)]
pub struct Fluid {
    /// The name used in the description.
    pub name: String,
    /// Its property engine.
    pub engine: Arc<dyn Engine>,
    /// What it is in chemistry, for exergy and heating values.
    pub substance: Substance,
}

/// The surroundings.
#[derive(Clone, Debug)]
pub struct Environment {
    /// T0, K.
    pub temperature: f64,
    /// p0, Pa.
    pub pressure: f64,
    /// Relative humidity, 0 to 1, where given.
    pub relative_humidity: Option<f64>,
    /// Chemical reference set.
    pub chemistry: crate::fluid::chemistry::ReferenceSet,
    /// Source of the barometric pressure.
    pub barometer: SourceId,
}

/// How figures without uncertainty are read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Literals {
    /// Design data: known to their printed digits.
    Design,
    /// Measured data: the published default of their kind.
    Measured,
}

/// How verdicts are made.
#[derive(Clone, Debug)]
pub struct Policy {
    /// Pins rules and defaults.
    pub edition: &'static str,
    /// Family-wise probability of a false alarm.
    pub false_alarm: f64,
    /// How literals are read.
    pub literals: Literals,
    /// Share of the throughput that a balance of design data may be open.
    pub closure_tolerance: f64,
    /// Smallest temperature approach asked for by practice, K.
    pub minimum_approach: Option<f64>,
    /// Rules that are switched off, by name.
    pub disable: Vec<&'static str>,
}

/// Something that was assumed because it was not given.
#[derive(Clone, Debug, PartialEq)]
pub struct Assumption {
    /// JSON Pointer to what it is about.
    pub pointer: String,
    /// The assumption, in one sentence.
    pub statement: String,
}

/// A validated process.
#[derive(Clone, Debug)]
pub struct Process {
    /// Name of the description.
    pub name: String,
    /// Rates or totals.
    pub basis: Basis,
    /// Duration of a batch, s.
    pub duration: Option<f64>,
    /// The surroundings.
    pub environment: Environment,
    /// How verdicts are made.
    pub policy: Policy,
    /// Fluids.
    pub fluids: Vec<Fluid>,
    /// Components.
    pub components: Vec<Component>,
    /// Flows.
    pub flows: Vec<Flow>,
    /// States.
    pub states: Vec<StateSpec>,
    /// Variables.
    pub vars: Vec<Var>,
    /// Sources.
    pub sources: Vec<Source>,
    /// Groups.
    pub groups: Vec<Group>,
    /// Redundant readings of one variable: the variable, the reading, where it stands.
    pub redundant: Vec<(VarId, Affine, String)>,
    /// Two readings of one combustion gas, which must lie on the line of its fuel.
    pub flue_gas: Vec<FlueGas>,
    /// Data remarks made while reading (negative magnitudes and the like): rule, pointer, text.
    pub remarks: Vec<Remark>,
    /// What was assumed.
    pub assumptions: Vec<Assumption>,
}

/// Oxygen and carbon dioxide read in the same dry gas.
#[derive(Clone, Debug)]
pub struct FlueGas {
    /// The combustion gas; its air ratio follows from the oxygen.
    pub fluid: FluidId,
    /// O2 in the dry gas, mole fraction.
    pub oxygen: VarId,
    /// CO2 in the dry gas, mole fraction.
    pub carbon_dioxide: VarId,
    /// Where the carbon dioxide stands.
    pub pointer: String,
}

/// A remark made while reading, reported under its rule.
#[derive(Clone, Debug)]
pub struct Remark {
    /// Name of the rule.
    pub rule: &'static str,
    /// JSON Pointer.
    pub pointer: String,
    /// One sentence.
    pub statement: String,
    /// The figure and its limit, where there are such, with a unit text.
    pub figure: Option<(f64, f64, &'static str)>,
}
