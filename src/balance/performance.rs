//! Figures of merit of components: isentropic and polytropic efficiencies, energy efficiencies,
//! coefficients of performance, duties and pressure losses.

use super::passage::{enthalpy_rise, is_adiabatic, is_fuel, sections};
use super::reservoir::{Cycle, Reservoirs};
use super::shares::flow_energy;
use super::{isentropic_enthalpy, transfers};
use crate::fluid::chemistry::{HeatingValue, mixture_heating_value};
use crate::fluid::heat_capacity::GAS_CONSTANT;
use crate::fluid::{Property, Substance};
use crate::model::{Dual, View};
use crate::process::kinds::{Kind, Purposeful, Sorting};
use crate::process::{Basis, Carried, ComponentId, FlowId};
use crate::quantity::Dimension;

/// Lower heating value above which a gas is taken for a fuel without being called one, J/kg:
/// below that of the leanest furnace gases, above that of flue gas with traces of carbon monoxide
/// (common practice).
pub const COMBUSTIBLE: f64 = 0.5e6;

/// One figure of merit.
#[derive(Clone, Debug)]
pub struct Metric {
    /// Its name in reports; of several sections or sides, with the flow after a point.
    pub name: String,
    /// Its value with the gradient, SI.
    pub value: Dual,
    /// What it measures.
    pub dimension: Dimension,
}

impl Metric {
    pub(super) fn new(name: impl Into<String>, value: Dual, dimension: Dimension) -> Metric {
        Metric { name: name.into(), value, dimension }
    }
}

/// A name, with a flow where there are several of it.
fn name_of(view: View<'_>, word: &str, flow: FlowId, several: bool) -> String {
    if several { format!("{word}.{}", view.model.process.flows[flow].name) } else { word.to_owned() }
}

/// Lower and higher heating value of a substance, J/kg; `None` where it has none.
pub fn heating_values(substance: &Substance) -> Option<HeatingValue> {
    match substance {
        Substance::Fuel(fuel) => {
            Some(HeatingValue { lower: fuel.lower_heating_value(), higher: fuel.higher_heating_value() })
        }
        Substance::Gas(gas) => mixture_heating_value(gas),
        _ => None,
    }
}

/// The heating values of what a flow carries, W or J; `None` for what does not burn.
pub fn fuel_energy(view: View<'_>, f: FlowId) -> Option<(Dual, Dual)> {
    let process = &view.model.process;
    let m = process.flows[f].material()?;
    let values = heating_values(&process.fluids[process.states[m.state].fluid].substance)?;
    if values.lower <= 0.0 {
        return None;
    }
    let mass = view.mass(f).ok()?;
    Some((mass.clone().scaled(values.lower), mass.scaled(values.higher)))
}

/// Ratio of two positive figures.
pub(super) fn ratio(benefit: &Dual, cost: &Dual) -> Option<Dual> {
    (cost.value > 0.0).then(|| benefit.times(&cost.reciprocal()))
}

/// The isentropic efficiency of the passage from one flow to another: actual over ideal where the
/// pressure falls and work comes out, ideal over actual where work raises the pressure. `None`
/// where the passage does neither.
pub fn isentropic_efficiency(view: View<'_>, before: FlowId, after: FlowId) -> Option<Dual> {
    let enthalpy = |f: FlowId| {
        let state = view.model.process.flows[f].material()?.state;
        view.property(state, Property::Enthalpy).ok()
    };
    let h1 = enthalpy(before)?;
    let actual = enthalpy(after)?.minus(&h1);
    let ideal = isentropic_enthalpy(view, before, after).ok()?.minus(&h1);
    if actual.value < 0.0 && ideal.value < 0.0 {
        Some(actual.times(&ideal.reciprocal()))
    } else if actual.value > 0.0 && ideal.value > 0.0 {
        Some(ideal.times(&actual.reciprocal()))
    } else {
        None
    }
}

/// The polytropic (small-stage) efficiency of an ideal gas between two flows, from its own
/// temperature-dependent entropy: R ln(p2/p1) / Δs° for compression, the inverse for expansion.
/// `None` for what is not an ideal gas.
pub fn polytropic_efficiency(view: View<'_>, before: FlowId, after: FlowId) -> Option<Dual> {
    let process = &view.model.process;
    let at = |f: FlowId| process.flows[f].material().map(|m| m.state);
    let (first, second) = (at(before)?, at(after)?);
    let fluid = process.states[first].fluid;
    if process.states[second].fluid != fluid {
        return None;
    }
    let engine = &process.fluids[fluid].engine;
    // An ideal gas has p v / T = R / M everywhere, whichever figure its formulation takes for R.
    let constant = |state: usize| {
        let s = &view.state(state).ok()?.state;
        Some(s.pressure * s.volume / s.temperature)
    };
    let r = constant(first)?;
    let molar = engine.molar_mass(view.state(first).ok()?.composition)?;
    if (constant(second)? / r - 1.0).abs() > 1e-9 || (r * molar / GAS_CONSTANT - 1.0).abs() > 1e-4 {
        return None;
    }
    let (p1, p2) =
        (view.property(first, Property::Pressure).ok()?, view.property(second, Property::Pressure).ok()?);
    let (s1, s2) =
        (view.property(first, Property::Entropy).ok()?, view.property(second, Property::Entropy).ok()?);
    let log = |p: &Dual| p.map(p.value.ln(), 1.0 / p.value);
    let mechanical = log(&p2).minus(&log(&p1)).scaled(r);
    let thermal = s2.minus(&s1).plus(&mechanical);
    if mechanical.value > 0.0 && thermal.value > 0.0 {
        Some(mechanical.times(&thermal.reciprocal()))
    } else if mechanical.value < 0.0 && thermal.value < 0.0 {
        Some(thermal.times(&mechanical.reciprocal()))
    } else {
        None
    }
}

/// The figures of merit of one component; what cannot be had is left out.
pub fn component(view: View<'_>, k: ComponentId) -> Vec<Metric> {
    let component = &view.model.process.components[k];
    let mut out = Vec::new();
    match component.kind.info().purpose {
        Purposeful::Compression | Purposeful::Expansion if component.kind != Kind::Engine => {
            machine(view, k, &mut out);
        }
        Purposeful::Conversion => {
            if let Ok((work_in, work_out, ..)) = transfers(view, k)
                && let Some(efficiency) = ratio(&work_out, &work_in)
            {
                out.push(Metric::new("efficiency", efficiency, Dimension::Fraction));
            }
        }
        Purposeful::Engine | Purposeful::HeatMover => cycle(view, k, &mut out),
        Purposeful::Firing => firing(view, k, &mut out),
        _ => {}
    }
    if component.kind == Kind::Engine {
        engine(view, k, &mut out);
    }
    duties(view, k, &mut out);
    pressure_losses(view, k, &mut out);
    out
}

/// Efficiencies of an adiabatic machine by its sections, and of the whole.
fn machine(view: View<'_>, k: ComponentId, out: &mut Vec<Metric>) {
    let process = &view.model.process;
    let component = &process.components[k];
    let sections = sections(view, component);
    if component.kind.info().purpose == Purposeful::Compression
        && let [(inlet, _)] = sections[..]
        && let (Ok((work_in, ..)), Ok(mass)) = (transfers(view, k), view.mass(inlet))
        && let Some(x) = ratio(&work_in, &mass).filter(|x| x.value > 0.0)
    {
        out.push(Metric::new("specific_work", x, Dimension::SpecificEnergy));
    }
    if !is_adiabatic(process, component) {
        return;
    }
    let several = sections.len() > 1;
    for &(before, after) in &sections {
        if let Some(x) = isentropic_efficiency(view, before, after) {
            let name = name_of(view, "isentropic_efficiency", after, several);
            out.push(Metric::new(name, x, Dimension::Fraction));
        }
        if let Some(x) = polytropic_efficiency(view, before, after) {
            let name = name_of(view, "polytropic_efficiency", after, several);
            out.push(Metric::new(name, x, Dimension::Fraction));
        }
    }
    if several && let Some(x) = overall_efficiency(view, &sections) {
        out.push(Metric::new("isentropic_efficiency", x, Dimension::Fraction));
    }
}

/// Of a machine with several outlets: each stream against its isentropic path from the inlet.
fn overall_efficiency(view: View<'_>, sections: &[(FlowId, FlowId)]) -> Option<Dual> {
    let inlet = sections.first()?.0;
    let enthalpy = |f: FlowId| {
        let state = view.model.process.flows[f].material()?.state;
        view.property(state, Property::Enthalpy).ok()
    };
    let h1 = enthalpy(inlet)?;
    let (mut actual, mut ideal) = (Dual::default(), Dual::default());
    for &(_, after) in sections {
        let mass = view.mass(after).ok()?;
        actual.add_scaled(1.0, &mass.times(&enthalpy(after)?.minus(&h1)));
        ideal.add_scaled(1.0, &mass.times(&isentropic_enthalpy(view, inlet, after).ok()?.minus(&h1)));
    }
    if actual.value < 0.0 && ideal.value < 0.0 {
        Some(actual.times(&ideal.reciprocal()))
    } else if actual.value > 0.0 && ideal.value > 0.0 {
        Some(ideal.times(&actual.reciprocal()))
    } else {
        None
    }
}

/// Efficiency or coefficient of performance, its reversible limit and the share of it.
fn cycle(view: View<'_>, k: ComponentId, out: &mut Vec<Metric>) {
    let component = &view.model.process.components[k];
    if component.kind == Kind::AbsorptionMachine {
        let port = |name: &str| {
            let flow = component.ports.iter().find(|p| p.0 == name)?;
            super::shares::flow_energy(view, flow.1).ok()
        };
        if let (Some(cooled), Some(driving)) = (port("cooled"), port("driving"))
            && let Some(cop) = ratio(&cooled, &driving)
        {
            out.push(Metric::new("cop", cop, Dimension::Fraction));
        }
        return;
    }
    let Some(cycle) = Cycle::of(component.kind) else { return };
    let Some(reservoirs) = Reservoirs::of(view, k) else { return };
    let word = if cycle == Cycle::Engine { "efficiency" } else { "cop" };
    let Some(actual) = cycle.actual(view, k, &reservoirs) else { return };
    let limit = cycle.limit(&reservoirs);
    out.push(Metric::new(word, actual.clone(), Dimension::Fraction));
    if let Some(limit) = limit.filter(|l| l.value > 0.0) {
        let share = actual.times(&limit.reciprocal());
        out.push(Metric::new("reversible_limit", limit, Dimension::Fraction));
        out.push(Metric::new("share_of_reversible_limit", share, Dimension::Fraction));
    }
}

/// Heating values of the fuel that enters a component, lower and higher.
fn fuel_of(view: View<'_>, k: ComponentId) -> Option<(Dual, Dual)> {
    let process = &view.model.process;
    let component = &process.components[k];
    let (mut lower, mut higher) = (Dual::default(), Dual::default());
    for &f in &component.inlets {
        if is_fuel(process, component, f)
            && let Some((l, h)) = fuel_energy(view, f)
        {
            lower.add_scaled(1.0, &l);
            higher.add_scaled(1.0, &h);
        }
    }
    (lower.value > 0.0).then_some((lower, higher))
}

/// Heat to the sides over the heating value of the fuel.
fn firing(view: View<'_>, k: ComponentId, out: &mut Vec<Metric>) {
    let component = &view.model.process.components[k];
    let Some((lower, higher)) = fuel_of(view, k) else { return };
    let mut useful = Dual::default();
    for side in component.sides.iter().filter(|s| !s.pool) {
        for (flows, sign) in [(&side.inlets, -1.0), (&side.outlets, 1.0)] {
            for &f in flows {
                let Ok(e) = flow_energy(view, f) else { return };
                useful.add_scaled(sign, &e);
            }
        }
    }
    for (name, fuel) in [("efficiency_lower", &lower), ("efficiency_higher", &higher)] {
        if let Some(x) = ratio(&useful, fuel).filter(|x| x.value > 0.0) {
            out.push(Metric::new(name, x, Dimension::Fraction));
        }
    }
}

/// Work over the heating value of the fuel.
fn engine(view: View<'_>, k: ComponentId, out: &mut Vec<Metric>) {
    let (Some((lower, higher)), Ok((work_in, work_out, ..))) = (fuel_of(view, k), transfers(view, k)) else {
        return;
    };
    let net = work_out.minus(&work_in);
    for (name, fuel) in [("efficiency_lower", &lower), ("efficiency_higher", &higher)] {
        if let Some(x) = ratio(&net, fuel) {
            out.push(Metric::new(name, x, Dimension::Fraction));
        }
    }
}

/// What each side of an exchanger takes up or gives off.
fn duties(view: View<'_>, k: ComponentId, out: &mut Vec<Metric>) {
    let process = &view.model.process;
    let component = &process.components[k];
    if component.kind.info().sorting != Sorting::Sides || component.kind == Kind::Compressor {
        return;
    }
    let dimension = match process.basis {
        Basis::Rate => Dimension::Power,
        Basis::Amount => Dimension::Energy,
    };
    let sides =
        || component.sides.iter().filter(|s| !s.pool && !s.inlets.is_empty() && !s.outlets.is_empty());
    let several = sides().count() > 1;
    for side in sides() {
        let mut duty = Dual::default();
        for (flows, sign) in [(&side.inlets, -1.0), (&side.outlets, 1.0)] {
            for &f in flows {
                let Ok(e) = flow_energy(view, f) else { return };
                duty.add_scaled(sign, &e);
            }
        }
        let Ok(rise) = enthalpy_rise(view, side) else { return };
        let duty = if rise < 0.0 { duty.scaled(-1.0) } else { duty };
        out.push(Metric::new(name_of(view, "duty", side.inlets[0], several), duty, dimension));
    }
}

/// Pressure lost by each stream that passes from one inlet to one outlet, and its share.
fn pressure_losses(view: View<'_>, k: ComponentId, out: &mut Vec<Metric>) {
    let process = &view.model.process;
    let component = &process.components[k];
    let passive = !component
        .inlets
        .iter()
        .chain(&component.outlets)
        .any(|&f| matches!(process.flows[f].carried, Carried::Work(..)));
    if !(passive || component.kind == Kind::Heater) {
        return;
    }
    let several = component.sides.len() > 1;
    for side in &component.sides {
        let ends = match (&side.inlets[..], &side.outlets[..]) {
            ([inlet], [outlet]) => Some((*inlet, *outlet)),
            // What burns comes in beside what it burns with.
            (_, [outlet]) if component.kind == Kind::Combustor => {
                let mut others = side.inlets.iter().filter(|&&f| !is_fuel(process, component, f));
                match (others.next(), others.next()) {
                    (Some(&inlet), None) => Some((inlet, *outlet)),
                    _ => None,
                }
            }
            _ => None,
        };
        let Some((inlet, outlet)) = ends else { continue };
        let pressure = |f: FlowId| {
            let state = process.flows[f].material()?.state;
            view.property(state, Property::Pressure).ok()
        };
        let (Some(before), Some(after)) = (pressure(inlet), pressure(outlet)) else { continue };
        let loss = before.clone().minus(&after);
        let share = loss.times(&before.reciprocal());
        out.push(Metric::new(
            name_of(view, "pressure_loss", inlet, several),
            loss,
            Dimension::PressureDifference,
        ));
        out.push(Metric::new(
            name_of(view, "pressure_loss_share", inlet, several),
            share,
            Dimension::Fraction,
        ));
    }
}
