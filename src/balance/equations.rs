//! The equations of a process as rows that should be zero.

use super::region::{self, Region};
use super::shares;
use crate::fluid::{Element, Pair, Property, Substance};
use crate::model::{Blocked, Dual, Model, Rows, View, Workspace, fluids_of, sample_composition};
use crate::process::kinds::{Kind, Purposeful};
use crate::process::{
    AmountForm, Carried, ComponentId, FlowId, PressureLoss, Side, StateForm, StateId, Var, VarId,
};

/// One equation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Row {
    /// A section of a machine has the given isentropic efficiency: component, flow before, after.
    Isentropic(ComponentId, FlowId, FlowId),
    /// Work out equals the given efficiency times work (or heat) in.
    Efficiency(ComponentId),
    /// Useful heat equals the given coefficient of performance times the drive.
    Cop(ComponentId),
    /// Outlet pressure of a side follows from its inlet pressure: component, index in `given`.
    PressureLoss(ComponentId, usize),
    /// A property given beyond need: state, index.
    Surplus(StateId, usize),
    /// Mass of one side of a component.
    Mass(ComponentId, usize),
    /// One element of one side of a component.
    Element(ComponentId, usize, Element),
    /// Energy of a component.
    Energy(ComponentId),
}

/// All equations of a process, with the regions they are drawn around.
#[derive(Clone, Debug, Default)]
pub struct Equations {
    rows: Vec<Row>,
    unknowns: Vec<Vec<VarId>>,
    /// One region a component.
    pub components: Vec<Region>,
    /// One region a group.
    pub groups: Vec<Region>,
    /// The plant.
    pub plant: Region,
}

impl Equations {
    /// Draws the regions and lists the rows. The workspace must be bound: sections of a machine
    /// are ordered by outlet pressure.
    pub fn compile(model: &Model, workspace: &Workspace) -> Equations {
        let process = &model.process;
        let mut out = Equations {
            components: (0..process.components.len()).map(|k| Region::of_component(process, k)).collect(),
            groups: process.groups.iter().map(|g| Region::around(process, &g.members)).collect(),
            plant: Region::around(process, &(0..process.components.len()).collect::<Vec<_>>()),
            ..Equations::default()
        };
        for (k, component) in process.components.iter().enumerate() {
            if component.given.isentropic_efficiency.is_some()
                && let Some(side) = component.sides.first()
                && let [inlet] = side.inlets[..]
            {
                let mut before = inlet;
                for outlet in by_pressure(model, workspace, &side.outlets, component.kind) {
                    out.push(model, Row::Isentropic(k, before, outlet));
                    before = outlet;
                }
            }
            if component.given.efficiency.is_some() {
                out.push(model, Row::Efficiency(k));
            }
            if component.given.cop.is_some() {
                out.push(model, Row::Cop(k));
            }
            for i in 0..component.given.pressure_loss.len() {
                out.push(model, Row::PressureLoss(k, i));
            }
        }
        for (s, spec) in process.states.iter().enumerate() {
            for (i, surplus) in spec.surplus.iter().enumerate() {
                // A temperature at saturation must not settle the quality; of stated figures, none
                // follows from the others.
                let stated = matches!(process.fluids[spec.fluid].substance, Substance::Stated);
                let ambiguous = spec.wet_ambiguous && surplus.property == Property::Temperature;
                if !(stated || ambiguous) {
                    out.push(model, Row::Surplus(s, i));
                }
            }
        }
        for (k, component) in process.components.iter().enumerate() {
            for (i, side) in component.sides.iter().enumerate() {
                if !(side.inlets.is_empty() && side.outlets.is_empty() && side.contents.is_empty()) {
                    out.push(model, Row::Mass(k, i));
                }
            }
        }
        for (k, component) in process.components.iter().enumerate() {
            for (i, side) in component.sides.iter().enumerate().filter(|(_, s)| s.pool) {
                let fluids = fluids_of(process, side);
                if fluids.len() < 2 && !fluids.iter().any(|&f| process.fluids[f].engine.elements_vary()) {
                    continue;
                }
                for &element in Element::ALL {
                    let present = fluids.iter().any(|&f| {
                        let fluid = &process.fluids[f];
                        fluid
                            .engine
                            .elements(sample_composition(fluid))
                            .is_some_and(|(e, _)| e[element as usize] != 0.0)
                    });
                    if present {
                        out.push(model, Row::Element(k, i, element));
                    }
                }
            }
        }
        // What has few flows comes first: a throttle's enthalpy follows from the throttle, so that the
        // exchanger after it keeps its balance as a test.
        let mut by_flows: Vec<usize> = (0..process.components.len()).collect();
        by_flows.sort_by_key(|&k| {
            let c = &process.components[k];
            (c.inlets.len() + c.outlets.len(), k)
        });
        for k in by_flows {
            let region = &out.components[k];
            if region.inlets.is_empty() && region.outlets.is_empty() && process.components[k].holdup.is_none()
            {
                continue;
            }
            out.push(model, Row::Energy(k));
        }
        out
    }

    fn push(&mut self, model: &Model, row: Row) {
        let mut unknowns = unknowns_of(model, row);
        unknowns.sort_unstable();
        unknowns.dedup();
        self.rows.push(row);
        self.unknowns.push(unknowns);
    }

    /// The rows in order.
    pub fn rows(&self) -> &[Row] {
        &self.rows
    }

    /// The index of a row.
    pub fn find(&self, row: Row) -> Option<usize> {
        self.rows.iter().position(|r| *r == row)
    }
}

/// Outlets in the order in which the working fluid passes them.
pub fn by_pressure(model: &Model, workspace: &Workspace, outlets: &[FlowId], kind: Kind) -> Vec<FlowId> {
    let view = View { model, workspace };
    let pressure = |f: FlowId| {
        model.process.flows[f]
            .material()
            .and_then(|m| view.property_value(m.state, Property::Pressure).ok())
            .unwrap_or(0.0)
    };
    let mut out = outlets.to_vec();
    let falling = matches!(kind, Kind::Turbine | Kind::Engine);
    out.sort_by(|&a, &b| {
        let order = pressure(a).total_cmp(&pressure(b));
        if falling { order.reverse() } else { order }
    });
    out
}

impl Rows for Equations {
    fn len(&self) -> usize {
        self.rows.len()
    }

    fn class(&self, row: usize) -> u8 {
        match self.rows[row] {
            Row::Isentropic(..) | Row::Efficiency(_) | Row::Cop(_) | Row::PressureLoss(..) => 0,
            Row::Surplus(..) => 1,
            Row::Mass(..) => 2,
            Row::Element(..) => 3,
            Row::Energy(_) => 4,
        }
    }

    fn weight(&self, row: usize) -> Option<f64> {
        match self.rows[row] {
            Row::Element(_, _, element) => Some(element.molar_mass()),
            _ => None,
        }
    }

    fn unknowns(&self, row: usize) -> &[VarId] {
        &self.unknowns[row]
    }

    fn residual(&self, view: View<'_>, row: usize) -> Result<Dual, Blocked> {
        let process = &view.model.process;
        match self.rows[row] {
            Row::Isentropic(k, before, after) => isentropic(view, k, before, after),
            Row::Efficiency(k) => {
                let efficiency = given(process.components[k].given.efficiency)?;
                let (work_in, work_out, heat_in, _) = transfers(view, k)?;
                let taken = if process.components[k].kind == Kind::HeatEngine { heat_in } else { work_in };
                Ok(work_out.minus(&taken.times(&view.var(efficiency)?)))
            }
            Row::Cop(k) => {
                let component = &process.components[k];
                let cop = given(component.given.cop)?;
                let (work_in, _, heat_in, heat_out) = transfers(view, k)?;
                let (useful, drive) = match component.kind {
                    Kind::HeatPump => (heat_out, work_in),
                    Kind::AbsorptionMachine => {
                        let port = |name: &str| {
                            let flow = component.ports.iter().find(|p| p.0 == name);
                            let flow = flow.ok_or(Blocked::Missing("the driving and cooled ports"))?;
                            port_heat(view, k, flow.1)
                        };
                        (port("cooled")?, port("driving")?)
                    }
                    _ => (heat_in, work_in),
                };
                Ok(useful.minus(&drive.times(&view.var(cop)?)))
            }
            Row::PressureLoss(k, i) => {
                let component = &process.components[k];
                let (side, loss) = component.given.pressure_loss[i];
                let ends = component.sides.get(side).and_then(|s| {
                    let inlet = process.flows[*s.inlets.first()?].material()?.state;
                    let outlet = process.flows[*s.outlets.first()?].material()?.state;
                    Some((inlet, outlet))
                });
                let (inlet, outlet) = ends.ok_or(Blocked::Missing("an inlet and an outlet"))?;
                let before = view.property(inlet, Property::Pressure)?;
                let after = view.property(outlet, Property::Pressure)?;
                Ok(match loss {
                    PressureLoss::Difference(v) => after.minus(&before).plus(&view.var(v)?),
                    PressureLoss::Fraction(v) => after.minus(&before).plus(&before.times(&view.var(v)?)),
                })
            }
            Row::Surplus(s, i) => {
                let surplus = &process.states[s].surplus[i];
                Ok(view.property(s, surplus.property)?.minus(&view.var(surplus.var)?))
            }
            Row::Mass(k, i) => Ok(region::set_mass(view, k, i)?.into_residual()),
            Row::Element(k, i, element) => Ok(region::element(view, k, i, element as usize)?.into_residual()),
            Row::Energy(k) => Ok(region::energy(view, &self.components[k])?.into_residual()),
        }
    }
}

fn given(var: Option<VarId>) -> Result<VarId, Blocked> {
    var.ok_or(Blocked::Missing("a given figure"))
}

/// The heat that a device takes in through a port: a flow of heat, or what the material of the
/// side to which a flow belongs gives off.
fn port_heat(view: View<'_>, k: ComponentId, flow: FlowId) -> Result<Dual, Blocked> {
    let side = view.model.process.components[k]
        .sides
        .iter()
        .find(|s| s.inlets.contains(&flow) || s.outlets.contains(&flow));
    match side {
        Some(side) => side_heat(view, side),
        None => shares::flow_energy(view, flow),
    }
}

/// What the material of one side gives off, W or J.
fn side_heat(view: View<'_>, side: &Side) -> Result<Dual, Blocked> {
    let mut out = Dual::default();
    for (flows, sign) in [(&side.inlets, 1.0), (&side.outlets, -1.0)] {
        for &f in flows {
            out.add_scaled(sign, &shares::flow_energy(view, f)?);
        }
    }
    Ok(out)
}

/// Whether the sides of a kind are what it exchanges heat with.
const fn exchanges_by_sides(kind: Kind) -> bool {
    matches!(kind.info().purpose, Purposeful::Engine | Purposeful::HeatMover)
}

/// Work in, work out, heat in and heat out of a component. Of cyclic devices the sides count as
/// heat, by what their material gives off or takes up.
///
/// # Errors
/// `Blocked`.
pub fn transfers(view: View<'_>, k: ComponentId) -> Result<(Dual, Dual, Dual, Dual), Blocked> {
    let component = &view.model.process.components[k];
    let mut out = [Dual::default(), Dual::default(), Dual::default(), Dual::default()];
    for (flows, inward) in [(&component.inlets, true), (&component.outlets, false)] {
        for &f in flows {
            let (index, var) = match view.model.process.flows[f].carried {
                Carried::Work(v, _) => (usize::from(!inward), v),
                Carried::Heat(v, _) | Carried::Radiation(v, _) => (2 + usize::from(!inward), v),
                Carried::Material(_) => continue,
            };
            out[index].add_scaled(1.0, &view.var(var)?);
        }
    }
    if exchanges_by_sides(component.kind) {
        for side in component.sides.iter().filter(|s| !s.inlets.is_empty() && !s.outlets.is_empty()) {
            let heat = side_heat(view, side)?;
            let (index, sign) = if heat.value >= 0.0 { (2, 1.0) } else { (3, -1.0) };
            out[index].add_scaled(sign, &heat);
        }
    }
    let [a, b, c, d] = out;
    Ok((a, b, c, d))
}

/// The enthalpy after an isentropic change of state from one flow to the pressure of another.
///
/// # Errors
/// `Blocked`.
pub fn isentropic_enthalpy(view: View<'_>, before: FlowId, after: FlowId) -> Result<Dual, Blocked> {
    let process = &view.model.process;
    let missing = Blocked::Missing("material");
    let first = process.flows[before].material().ok_or(missing.clone())?;
    let second = process.flows[after].material().ok_or(missing)?;
    let p = view.property(second.state, Property::Pressure)?;
    let s = view.property(first.state, Property::Entropy)?;
    let fluid = process.states[first.state].fluid;
    let c = match process.states[first.state].c {
        Some(_) => view.composition(first.state)?.value,
        None => 0.0,
    };
    let end = process.fluids[fluid]
        .engine
        .state(Pair::PressureEntropy, p.value, s.value, c)
        .map_err(|_| Blocked::State(second.state))?;
    // dh = v dp + T ds.
    let mut h = p.map(end.enthalpy, end.volume);
    h.follow(end.temperature, &s);
    Ok(h)
}

fn isentropic(view: View<'_>, k: ComponentId, before: FlowId, after: FlowId) -> Result<Dual, Blocked> {
    let process = &view.model.process;
    let component = &process.components[k];
    let efficiency = view.var(given(component.given.isentropic_efficiency)?)?;
    let enthalpy = |f: FlowId| {
        let m = process.flows[f].material().ok_or(Blocked::Missing("material"))?;
        view.property(m.state, Property::Enthalpy)
    };
    let (h1, h2) = (enthalpy(before)?, enthalpy(after)?);
    let ideal = isentropic_enthalpy(view, before, after)?.minus(&h1);
    let actual = h2.minus(&h1);
    Ok(match component.kind {
        Kind::Turbine | Kind::Engine => actual.minus(&efficiency.times(&ideal)),
        _ => actual.times(&efficiency).minus(&ideal),
    })
}

/// The unknown variables that a row depends on.
fn unknowns_of(model: &Model, row: Row) -> Vec<VarId> {
    let process = &model.process;
    let mut out = Vec::new();
    let mut var = |v: VarId| {
        if matches!(process.vars[v], Var::Unknown { .. }) {
            out.push(v);
        }
    };
    let property = |s: StateId, property: Property, var: &mut dyn FnMut(VarId)| {
        let spec = &process.states[s];
        if let StateForm::Pair(pair) = spec.form {
            let (a, b) = pair.properties();
            if property == a {
                return var(spec.a);
            }
            if property == b {
                return var(spec.b);
            }
        }
        for v in spec.vars() {
            var(v);
        }
    };
    let mass = |f: FlowId, var: &mut dyn FnMut(VarId)| {
        if let Some(m) = process.flows[f].material() {
            var(m.amount);
            if m.form != AmountForm::Mass {
                for v in process.states[m.state].vars() {
                    var(v);
                }
            }
        }
    };
    // Contents of one set, or of all: their amounts, and what these and the composition depend on.
    let contents = |k: ComponentId, set: Option<usize>, composition: bool, var: &mut dyn FnMut(VarId)| {
        let component = &process.components[k];
        for c in component.holdup.iter().flat_map(|h| h.initial.iter().chain(&h.r#final)) {
            if set.is_some_and(|i| !component.sides[i].contents.contains(&c.state)) {
                continue;
            }
            var(c.amount);
            let spec = &process.states[c.state];
            if set.is_none() || c.form != AmountForm::Mass {
                for v in spec.vars() {
                    var(v);
                }
            } else if composition && let Some((_, v)) = spec.c {
                var(v);
            }
        }
    };
    match row {
        Row::Isentropic(k, before, after) => {
            if let Some(v) = process.components[k].given.isentropic_efficiency {
                var(v);
            }
            if let (Some(first), Some(second)) =
                (process.flows[before].material(), process.flows[after].material())
            {
                for v in process.states[first.state].vars() {
                    var(v);
                }
                property(second.state, Property::Enthalpy, &mut var);
                property(second.state, Property::Pressure, &mut var);
            }
        }
        Row::Efficiency(k) | Row::Cop(k) => {
            let component = &process.components[k];
            for f in component.inlets.iter().chain(&component.outlets) {
                match &process.flows[*f].carried {
                    Carried::Work(v, _) | Carried::Heat(v, _) | Carried::Radiation(v, _) => var(*v),
                    Carried::Material(m) if exchanges_by_sides(component.kind) => {
                        mass(*f, &mut var);
                        property(m.state, Property::Enthalpy, &mut var);
                    }
                    Carried::Material(_) => {}
                }
            }
        }
        Row::PressureLoss(k, i) => {
            let component = &process.components[k];
            let (side, loss) = component.given.pressure_loss[i];
            let (PressureLoss::Difference(v) | PressureLoss::Fraction(v)) = loss;
            var(v);
            if let Some(side) = component.sides.get(side) {
                for f in side.inlets.first().into_iter().chain(side.outlets.first()) {
                    if let Some(m) = process.flows[*f].material() {
                        property(m.state, Property::Pressure, &mut var);
                    }
                }
            }
        }
        Row::Surplus(s, i) => {
            let surplus = &process.states[s].surplus[i];
            var(surplus.var);
            for v in process.states[s].vars() {
                var(v);
            }
        }
        Row::Mass(k, i) => {
            let side = &process.components[k].sides[i];
            for &f in side.inlets.iter().chain(&side.outlets) {
                mass(f, &mut var);
            }
            contents(k, Some(i), false, &mut var);
        }
        Row::Element(k, i, _) => {
            let side = &process.components[k].sides[i];
            for &f in side.inlets.iter().chain(&side.outlets) {
                mass(f, &mut var);
                if let Some(m) = process.flows[f].material()
                    && let Some((_, v)) = process.states[m.state].c
                {
                    var(v);
                }
            }
            contents(k, Some(i), true, &mut var);
        }
        Row::Energy(k) => {
            let component = &process.components[k];
            for &f in component.inlets.iter().chain(&component.outlets) {
                match &process.flows[f].carried {
                    Carried::Material(m) => {
                        mass(f, &mut var);
                        property(m.state, Property::Enthalpy, &mut var);
                        if let Some((_, v)) = process.states[m.state].c {
                            var(v);
                        }
                        for v in m.velocity.into_iter().chain(m.elevation) {
                            var(v);
                        }
                    }
                    Carried::Work(v, _) | Carried::Heat(v, _) | Carried::Radiation(v, _) => var(*v),
                }
            }
            contents(k, None, true, &mut var);
            if let Some(v) = component.holdup.as_ref().and_then(|h| h.boundary_pressure) {
                var(v);
            }
        }
    }
    out
}
