//! Where the entropy generation of a component comes from: temperature difference, pressure drop,
//! heat loss, mixing, reaction.
//!
//! From ds = dh/T − v dp/T along the path T → p → composition (Bejan, Tsatsaronis & Moran 1996,
//! ch. 3; Bejan, Entropy Generation Minimization, 1996). For a stream that keeps its substance the
//! path is h at the inlet pressure, then p at the outlet enthalpy, so that a change of phase needs
//! no care and the pressure part is exactly −∫ v dp/T at constant enthalpy.

use super::Evaluation;
use super::passage::{enthalpy_rise, is_empty};
use super::region::{self, Bracket};
use crate::fluid::heat_capacity::GAS_CONSTANT;
use crate::fluid::ideal_gas::IdealGas;
use crate::fluid::{Engine, Pair, Property, Substance};
use crate::model::{Blocked, Dual, View};
use crate::process::kinds::{Kind, Purposeful};
use crate::process::{Carried, Component, ComponentId, FlowId, Side, StateId};

/// A cause of entropy generation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cause {
    /// Heat passes between different temperatures.
    TemperatureDifference,
    /// A stream, named by its inlet, loses pressure.
    PressureDrop(FlowId),
    /// Heat is lost from the temperature of the hot side to that of its boundary.
    HeatLoss,
    /// Streams of different composition meet.
    Mixing,
    /// A reaction proceeds, ΣA ξ/T, at the temperature of its products.
    Reaction,
    /// Streams meet and react where the parts cannot be told apart.
    MixingAndReaction,
}

impl Cause {
    /// The word in reports.
    pub const fn text(self) -> &'static str {
        match self {
            Cause::TemperatureDifference => "temperature_difference",
            Cause::PressureDrop(_) => "pressure_drop",
            Cause::HeatLoss => "heat_loss",
            Cause::Mixing => "mixing",
            Cause::Reaction => "reaction",
            Cause::MixingAndReaction => "mixing_and_reaction",
        }
    }
}

/// Entropy generation by its causes, W/K or J/K.
#[derive(Clone, Debug, Default)]
pub struct Causes {
    /// The parts.
    pub parts: Vec<(Cause, Dual)>,
    /// Entropy generation less the parts: what an open energy balance carries, else rounding.
    pub remainder: Dual,
    /// Temperature part over temperature and pressure parts, for exchangers.
    pub bejan: Option<Dual>,
}

/// The causes of a component's entropy generation; `None` for a kind that has one cause only (a
/// machine), or where a state on the way cannot be had.
pub fn of(evaluation: &Evaluation<'_>, k: ComponentId) -> Option<Causes> {
    let view = evaluation.view;
    let component = &view.model.process.components[k];
    if component.holdup.is_some() {
        return None;
    }
    let (sigma, _) = evaluation.components.get(k)?.generation().ok()?;
    let exchanger = component.kind.is_exchanger();
    let mut causes = match component.kind.info().purpose {
        _ if exchanger || matches!(component.kind, Kind::Valve | Kind::Pipe) => {
            passing(evaluation, k).ok()?
        }
        Purposeful::Mixing => joining(evaluation, k).ok()?,
        Purposeful::Combustion => burning(evaluation, k).ok()?,
        _ => return None,
    };
    causes.remainder = sigma;
    for (_, part) in &causes.parts {
        causes.remainder.add_scaled(-1.0, part);
    }
    // What the formulations leave uncertain belongs to σ as a whole, not to what is left of it.
    let variables = view.model.process.vars.len();
    causes.remainder.terms.retain(|t| (t.0 as usize) < variables);
    if exchanger {
        causes.bejan = bejan(&causes);
    }
    Some(causes)
}

fn bejan(causes: &Causes) -> Option<Dual> {
    let mut temperature = Dual::default();
    let mut both = Dual::default();
    for (cause, part) in &causes.parts {
        match cause {
            Cause::TemperatureDifference => {
                temperature.add_scaled(1.0, part);
                both.add_scaled(1.0, part);
            }
            Cause::PressureDrop(_) => both.add_scaled(1.0, part),
            _ => {}
        }
    }
    (temperature.value > 0.0 && both.value > 0.0).then(|| temperature.times(&both.reciprocal()))
}

/// A property at another pair of coordinates of a state's fluid, with its gradient over them.
fn moved(
    view: View<'_>,
    state: StateId,
    pair: Pair,
    a: &Dual,
    b: &Dual,
    property: Property,
) -> Result<Dual, Blocked> {
    let process = &view.model.process;
    let spec = &process.states[state];
    let composition = match spec.c {
        Some(_) => view.composition(state)?.value,
        None => 0.0,
    };
    let at = process.fluids[spec.fluid]
        .engine
        .state(pair, a.value, b.value, composition)
        .map_err(|_| Blocked::Missing("a state on the way"))?;
    let jacobian = at.jacobian(pair).ok_or(Blocked::Missing("a state on the way"))?;
    let row = jacobian[property as usize];
    let mut out = a.map(at.get(property), row[0]);
    out.follow(row[1], b);
    Ok(out)
}

fn state_of(view: View<'_>, f: FlowId) -> Result<StateId, Blocked> {
    view.model.process.flows[f].material().map(|m| m.state).ok_or(Blocked::Missing("material"))
}

/// Entropy change of one kilogram from one state to the pressure and enthalpy of another of the
/// same substance: thermal part, then pressure part.
fn steps(view: View<'_>, from: StateId, p2: &Dual, h2: &Dual) -> Result<(Dual, Dual), Blocked> {
    let p1 = view.property(from, Property::Pressure)?;
    let s1 = view.property(from, Property::Entropy)?;
    let middle = moved(view, from, Pair::PressureEnthalpy, &p1, h2, Property::Entropy)?;
    let end = moved(view, from, Pair::PressureEnthalpy, p2, h2, Property::Entropy)?;
    Ok((middle.clone().minus(&s1), end.minus(&middle)))
}

/// Pressure and specific enthalpy to which the streams of a side come together.
fn outlet_of(view: View<'_>, side: &Side) -> Result<(Dual, Dual), Blocked> {
    let states: Vec<StateId> = side.outlets.iter().map(|&f| state_of(view, f)).collect::<Result<_, _>>()?;
    match states[..] {
        [only] => Ok((view.property(only, Property::Pressure)?, view.property(only, Property::Enthalpy)?)),
        _ => Err(Blocked::Missing("one outlet")),
    }
}

/// Entropy that the heat flows of a component carry away, W/K, and the heat lost at its boundary:
/// implied losses and heat that leaves the plant, with the entropy it carries.
fn heats(evaluation: &Evaluation<'_>, k: ComponentId) -> Result<(Dual, Dual, Dual), Blocked> {
    let view = evaluation.view;
    let process = &view.model.process;
    let (mut given, mut lost, mut lost_entropy) = (Dual::default(), Dual::default(), Dual::default());
    for (f, _, sign) in evaluation.equations.components[k].crossings() {
        match process.flows[f].carried {
            Carried::Heat(q, boundary) => {
                let s = region::heat_entropy(view, q, boundary, sign, Bracket::Lenient, &[k])?;
                if sign < 0.0 && process.flows[f].to.is_none() {
                    lost.add_scaled(1.0, &view.var(q)?);
                    lost_entropy.add_scaled(1.0, &s);
                } else {
                    given.add_scaled(-sign, &s);
                }
            }
            Carried::Radiation(..) => return Err(Blocked::Missing("heat with a temperature")),
            Carried::Material(_) | Carried::Work(..) => {}
        }
    }
    Ok((given, lost, lost_entropy))
}

/// Splits thermal entropy into what heat lost at the mean temperature `hot` would generate and the
/// rest.
fn with_loss(
    causes: &mut Causes,
    mut thermal: Dual,
    (given, lost, lost_entropy): (Dual, Dual, Dual),
    hot: Option<Dual>,
) {
    thermal.add_scaled(1.0, &given);
    if lost.value != 0.0 {
        match hot.filter(|t| t.value > 0.0 && t.value.is_finite()) {
            Some(t) => {
                let at_source = lost.times(&t.reciprocal());
                thermal.add_scaled(1.0, &at_source);
                causes.parts.push((Cause::HeatLoss, lost_entropy.minus(&at_source)));
            }
            None => thermal.add_scaled(1.0, &lost_entropy),
        }
    }
    causes.parts.insert(0, (Cause::TemperatureDifference, thermal));
}

/// Exchangers, valves and pipes: each side keeps its substance.
fn passing(evaluation: &Evaluation<'_>, k: ComponentId) -> Result<Causes, Blocked> {
    let view = evaluation.view;
    let component: &Component = &view.model.process.components[k];
    let mut causes = Causes::default();
    let mut thermal = Dual::default();
    // Heat and entropy that cooled sides give off, for their mean temperature.
    let (mut cooled_heat, mut cooled_entropy) = (Dual::default(), Dual::default());
    for side in component.sides.iter().filter(|s| !is_empty(s)) {
        let ([inlet], [outlet]) = (&side.inlets[..], &side.outlets[..]) else {
            return Err(Blocked::Missing("one inlet and one outlet a side"));
        };
        let (from, to) = (state_of(view, *inlet)?, state_of(view, *outlet)?);
        let process = &view.model.process;
        if process.states[from].fluid != process.states[to].fluid {
            return Err(Blocked::Missing("one fluid a side"));
        }
        let p2 = view.property(to, Property::Pressure)?;
        let h2 = view.property(to, Property::Enthalpy)?;
        let (warm, drop) = steps(view, from, &p2, &h2)?;
        let mass = view.mass(*inlet)?;
        let warm = mass.times(&warm);
        if enthalpy_rise(view, side)? < 0.0 {
            let dh = h2.minus(&view.property(from, Property::Enthalpy)?);
            cooled_heat.add_scaled(1.0, &mass.times(&dh));
            cooled_entropy.add_scaled(1.0, &warm);
        }
        thermal.add_scaled(1.0, &warm);
        causes.parts.push((Cause::PressureDrop(*inlet), mass.times(&drop)));
    }
    let hot = (cooled_entropy.value != 0.0).then(|| cooled_heat.times(&cooled_entropy.reciprocal()));
    with_loss(&mut causes, thermal, heats(evaluation, k)?, hot);
    Ok(causes)
}

/// Streams that meet without reaction.
fn joining(evaluation: &Evaluation<'_>, k: ComponentId) -> Result<Causes, Blocked> {
    let view = evaluation.view;
    let process = &view.model.process;
    let component = &process.components[k];
    let [side] = &component.sides[..] else { return Err(Blocked::Missing("one set of streams")) };
    let [outlet] = side.outlets[..] else { return Err(Blocked::Missing("one outlet")) };
    let to = state_of(view, outlet)?;
    let fluid = process.states[to].fluid;
    let mut causes = Causes::default();
    let (mut thermal, mut mixing) = (Dual::default(), Dual::default());
    let mut one_substance = process.states[to].c.is_none();
    for &f in &side.inlets {
        one_substance &= process.states[state_of(view, f)?].fluid == fluid;
    }
    let (p2, h2) = outlet_of(view, side)?;
    let t2 = view.property(to, Property::Temperature)?;
    if !one_substance {
        mixing.add_scaled(1.0, &view.mass(outlet)?.times(&view.entropy(to)?));
    }
    for &f in &side.inlets {
        let from = state_of(view, f)?;
        let mass = view.mass(f)?;
        let (warm, drop) = if one_substance {
            steps(view, from, &p2, &h2)?
        } else {
            let p1 = view.property(from, Property::Pressure)?;
            let s1 = view.property(from, Property::Entropy)?;
            let middle = moved(view, from, Pair::PressureTemperature, &p1, &t2, Property::Entropy)?;
            let end = moved(view, from, Pair::PressureTemperature, &p2, &t2, Property::Entropy)?;
            let on_datum = end.clone().plus(&view.offset(from)?.1);
            mixing.add_scaled(-1.0, &mass.times(&on_datum));
            (middle.clone().minus(&s1), end.minus(&middle))
        };
        thermal.add_scaled(1.0, &mass.times(&warm));
        causes.parts.push((Cause::PressureDrop(f), mass.times(&drop)));
    }
    if !one_substance {
        causes.parts.push((Cause::Mixing, mixing));
    }
    with_loss(&mut causes, thermal, heats(evaluation, k)?, Some(t2));
    Ok(causes)
}

/// Streams that meet and react: the reactants are brought to the temperature of the products by
/// heat from the reaction at that temperature, then to their pressure, mixed, and let react.
fn burning(evaluation: &Evaluation<'_>, k: ComponentId) -> Result<Causes, Blocked> {
    let view = evaluation.view;
    let process = &view.model.process;
    let component = &process.components[k];
    let [side] = &component.sides[..] else { return Err(Blocked::Missing("one set of streams")) };
    let [outlet] = side.outlets[..] else { return Err(Blocked::Missing("one outlet")) };
    let to = state_of(view, outlet)?;
    let p2 = view.property(to, Property::Pressure)?;
    let t2 = view.property(to, Property::Temperature)?;
    let warm_up = t2.reciprocal();
    let mut causes = Causes::default();
    let mut thermal = Dual::default();
    // −ΔG/T of reaction and mixing: entropy of the products less that of the reactants, with the
    // heat of reaction given off at the temperature of the products.
    let m2 = view.mass(outlet)?;
    let mut change = m2.times(&view.entropy(to)?);
    change.add_scaled(-1.0, &m2.times(&view.enthalpy(to)?).times(&warm_up));
    let mut gases: Vec<(&IdealGas, f64)> = Vec::new();
    for &f in &side.inlets {
        let from = state_of(view, f)?;
        let mass = view.mass(f)?;
        let pair = Pair::PressureTemperature;
        let p1 = view.property(from, Property::Pressure)?;
        let s_mid = moved(view, from, pair, &p1, &t2, Property::Entropy)?;
        let s_end = moved(view, from, pair, &p2, &t2, Property::Entropy)?;
        let h_end = moved(view, from, pair, &p2, &t2, Property::Enthalpy)?;
        let heat = mass.times(&h_end.clone().minus(&view.property(from, Property::Enthalpy)?));
        let rise = mass.times(&s_mid.clone().minus(&view.property(from, Property::Entropy)?));
        thermal.add_scaled(1.0, &rise);
        thermal.add_scaled(-1.0, &heat.times(&warm_up));
        causes.parts.push((Cause::PressureDrop(f), mass.times(&s_end.clone().minus(&s_mid))));
        let (h0, s0) = view.offset(from)?;
        change.add_scaled(-1.0, &mass.times(&s_end.plus(&s0)));
        change.add_scaled(1.0, &mass.times(&h_end.plus(&h0)).times(&warm_up));
        if let Substance::Gas(gas) = &process.fluids[process.states[from].fluid].substance {
            gases.push((gas, mass.value));
        }
    }
    match (gases.len() == side.inlets.len()).then(|| mixing_entropy(&gases)).flatten() {
        Some(mixing) => {
            change.value -= mixing;
            causes.parts.push((Cause::Mixing, Dual::constant(mixing)));
            causes.parts.push((Cause::Reaction, change));
        }
        None => causes.parts.push((Cause::MixingAndReaction, change)),
    }
    // Heat that leaves was given off by the reaction at the temperature of the products, too.
    for (f, _, sign) in evaluation.equations.components[k].crossings() {
        if let Carried::Heat(q, _) = process.flows[f].carried {
            thermal.add_scaled(sign, &view.var(q)?.times(&warm_up));
        }
    }
    with_loss(&mut causes, thermal, heats(evaluation, k)?, Some(t2));
    Ok(causes)
}

/// −R Σ n ln(x_mixed / x_own) of gases that meet at one temperature and pressure, W/K or J/K.
fn mixing_entropy(gases: &[(&IdealGas, f64)]) -> Option<f64> {
    let mut amounts: Vec<(&str, f64)> = Vec::new();
    let mut total = 0.0;
    for (gas, mass) in gases {
        let moles = mass / gas.molar_mass(0.0)?;
        total += moles;
        for (species, x) in gas.components() {
            match amounts.iter_mut().find(|a| a.0 == species.name()) {
                Some(a) => a.1 += moles * x,
                None => amounts.push((species.name(), moles * x)),
            }
        }
    }
    let mut out = 0.0;
    for (gas, mass) in gases {
        let moles = mass / gas.molar_mass(0.0)?;
        for (species, x) in gas.components() {
            let mixed = amounts.iter().find(|a| a.0 == species.name())?.1 / total;
            if moles * x > 0.0 {
                out -= GAS_CONSTANT * moles * x * (mixed / x).ln();
            }
        }
    }
    Some(out)
}
