//! A closed boundary and what crosses it.

use super::shares::{Direct, FormulationTerm, Ledger, formulation_slot, relative_enthalpy, relative_entropy};
use crate::fluid::{Property, Substance};
use crate::model::{Blocked, Dual, View, dual::log_mean};
use crate::process::{Boundary, Carried, ComponentId, Content, FlowId, Holdup, Process, StateId, VarId};

/// Standard acceleration of free fall, m/s² (ISO 80000-3, conventional value).
pub const GRAVITY: f64 = 9.80665;

/// A closed boundary: a component, a group of components, or the plant.
#[derive(Clone, Debug, Default)]
pub struct Region {
    /// Flows that enter, with the component inside that they touch.
    pub inlets: Vec<(FlowId, ComponentId)>,
    /// Flows that leave, with the component inside that they touch.
    pub outlets: Vec<(FlowId, ComponentId)>,
    /// Components inside.
    pub members: Vec<ComponentId>,
}

impl Region {
    /// The boundary around a set of components.
    pub fn around(process: &Process, members: &[ComponentId]) -> Region {
        let mut inside = vec![false; process.components.len()];
        for &k in members {
            inside[k] = true;
        }
        let mut region = Region { members: members.to_vec(), ..Region::default() };
        for (f, flow) in process.flows.iter().enumerate() {
            let from = flow.from.filter(|&k| inside[k]);
            let to = flow.to.filter(|&k| inside[k]);
            match (from, to) {
                (None, Some(k)) => region.inlets.push((f, k)),
                (Some(k), None) => region.outlets.push((f, k)),
                _ => {}
            }
        }
        region
    }

    /// The boundary around one component.
    pub fn of_component(process: &Process, k: ComponentId) -> Region {
        let component = &process.components[k];
        Region {
            inlets: component.inlets.iter().map(|&f| (f, k)).collect(),
            outlets: component.outlets.iter().map(|&f| (f, k)).collect(),
            members: vec![k],
        }
    }

    /// Flows across the boundary with their sign (+1 in, −1 out) and the member they touch.
    pub fn crossings(&self) -> impl Iterator<Item = (FlowId, ComponentId, f64)> + '_ {
        let inward = self.inlets.iter().map(|&(f, k)| (f, k, 1.0));
        let outward = self.outlets.iter().map(|&(f, k)| (f, k, -1.0));
        inward.chain(outward)
    }

    /// Contents before a batch, which count as entering, or after it, which count as leaving.
    fn held<'a>(
        &'a self,
        process: &'a Process,
        of: fn(&Holdup) -> &Vec<Content>,
    ) -> impl Iterator<Item = &'a Content> + 'a {
        let holdups = self.members.iter().filter_map(|&k| process.components[k].holdup.as_ref());
        holdups.flat_map(of)
    }

    /// Contents before (+1, as if they entered) and after (−1) a batch.
    pub fn contents<'a>(&'a self, process: &'a Process) -> impl Iterator<Item = (&'a Content, f64)> + 'a {
        let before = self.held(process, |h| &h.initial).map(|c| (c, 1.0));
        let after = self.held(process, |h| &h.r#final).map(|c| (c, -1.0));
        before.chain(after)
    }

    /// What crosses the boundary and what it holds, everything that enters (+1) first and then what
    /// leaves (−1).
    fn items<'a>(&'a self, process: &'a Process) -> impl Iterator<Item = (Item<'a>, f64)> + 'a {
        let inward = self.inlets.iter().map(|&(f, _)| (Item::Flow(f), 1.0));
        let before = self.held(process, |h| &h.initial).map(|c| (Item::Content(c), 1.0));
        let outward = self.outlets.iter().map(|&(f, _)| (Item::Flow(f), -1.0));
        let after = self.held(process, |h| &h.r#final).map(|c| (Item::Content(c), -1.0));
        inward.chain(before).chain(outward).chain(after)
    }
}

/// One thing that a balance counts.
enum Item<'a> {
    Flow(FlowId),
    Content(&'a Content),
}

/// In, out and difference of one conserved quantity over a region.
#[derive(Clone, Debug, Default)]
pub struct Balance {
    /// Inflow minus outflow; its gradient has the entries of the inflow first, then those of the
    /// outflow, then those of the property formulations.
    residual: Dual,
    /// How many of the entries are of the inflow, and how many of either.
    entries: (usize, usize),
    /// What enters (content before a batch included).
    pub inflow: f64,
    /// What leaves (content after a batch included).
    pub outflow: f64,
    /// Sum of magnitudes relative to the reference state: the scale of closure.
    pub throughput: f64,
}

impl Balance {
    /// Inflow minus outflow, with the uncertainty of the property formulations.
    pub fn residual(&self) -> &Dual {
        &self.residual
    }

    /// See [`Balance::residual`].
    pub fn into_residual(self) -> Dual {
        self.residual
    }

    /// Outflow minus inflow, with the uncertainty of the property formulations.
    pub fn generation(&self) -> Dual {
        self.residual.map(-self.residual.value, -1.0)
    }

    /// The inflow with its gradient.
    pub fn inflow_form(&self) -> Dual {
        let terms = self.residual.terms[..self.entries.0].iter().copied();
        Dual { value: self.inflow, terms: terms.collect() }
    }

    /// The outflow with its gradient.
    pub fn outflow_form(&self) -> Dual {
        let terms = self.residual.terms[self.entries.0..self.entries.1].iter().map(|&(s, d)| (s, -d));
        Dual { value: self.outflow, terms: terms.collect() }
    }

    /// Nothing yet, with room for what crosses a boundary.
    fn over(region: &Region) -> Balance {
        let room = region.inlets.len() + region.outlets.len() + region.members.len();
        Balance { residual: Dual::with_room(room), ..Balance::default() }
    }

    /// Counts what enters (+1) or leaves (−1), in this order.
    fn add(&mut self, sign: f64, figure: &Dual) {
        self.residual.add_scaled(sign, figure);
        let end = self.residual.terms.len();
        if sign > 0.0 {
            self.inflow += figure.value;
            self.entries = (end, end);
        } else {
            self.outflow += figure.value;
            self.entries.1 = end;
        }
    }

    /// The sums are added up apart, so that equal sums leave no rounding.
    fn close(mut self, throughput: f64, formulation: impl Iterator<Item = FormulationTerm>) -> Balance {
        self.residual.value = self.inflow - self.outflow;
        self.throughput = throughput;
        self.residual.terms.extend(formulation);
        self
    }

    /// Without property formulations, and with its own sums as scale.
    fn close_plain(self) -> Balance {
        let throughput = self.inflow.abs().max(self.outflow.abs());
        self.close(throughput, std::iter::empty())
    }
}

/// Mass over a region, kg/s or kg.
///
/// # Errors
/// The first thing that blocks it.
pub fn mass(view: View<'_>, region: &Region) -> Result<Balance, Blocked> {
    let process = &view.model.process;
    let mut out = Balance::over(region);
    for (item, sign) in region.items(process) {
        match item {
            Item::Flow(f) if process.flows[f].material().is_none() => {}
            Item::Flow(f) => out.add(sign, &view.mass(f)?),
            Item::Content(c) => out.add(sign, &view.mass_of(c.state, c.amount, c.form)?),
        }
    }
    Ok(out.close_plain())
}

/// Blocked where a member turns a substance without formation data into another one.
fn grounded(view: View<'_>, region: &Region) -> Result<(), Blocked> {
    if region.members.iter().any(|&k| view.model.groundless[k]) {
        return Err(Blocked::Missing(
            "formation data of a substance that meets others and does not leave again as it came",
        ));
    }
    Ok(())
}

/// What the flows and contents of one set of a component carry of a quantity that `of` finds from a
/// state and its mass.
fn set_balance(
    view: View<'_>,
    k: ComponentId,
    side: usize,
    of: impl Fn(StateId, Dual) -> Result<Dual, Blocked>,
) -> Result<Balance, Blocked> {
    let process = &view.model.process;
    let component = &process.components[k];
    let side = &component.sides[side];
    let holdup = component.holdup.as_ref();
    let mut out = Balance::default();
    for (flows, contents, sign) in
        [(&side.inlets, holdup.map(|h| &h.initial), 1.0), (&side.outlets, holdup.map(|h| &h.r#final), -1.0)]
    {
        for m in flows.iter().filter_map(|&f| process.flows[f].material()) {
            out.add(sign, &of(m.state, view.mass_of(m.state, m.amount, m.form)?)?);
        }
        for c in contents.into_iter().flatten().filter(|c| side.contents.contains(&c.state)) {
            out.add(sign, &of(c.state, view.mass_of(c.state, c.amount, c.form)?)?);
        }
    }
    Ok(out.close_plain())
}

/// Mass of one set of a component, kg/s or kg: its flows and contents.
///
/// # Errors
/// The first thing that blocks it.
pub fn set_mass(view: View<'_>, k: ComponentId, side: usize) -> Result<Balance, Blocked> {
    set_balance(view, k, side, |_, mass| Ok(mass))
}

/// Mass into and out of one set of a component, by value alone.
///
/// # Errors
/// `Blocked`.
pub fn set_mass_values(view: View<'_>, k: ComponentId, side: usize) -> Result<(f64, f64), Blocked> {
    let process = &view.model.process;
    let component = &process.components[k];
    let side = &component.sides[side];
    let mut sums = [0.0; 2];
    for (flows, sum) in [&side.inlets, &side.outlets].into_iter().zip(&mut sums) {
        for &f in flows {
            if let Some(m) = process.flows[f].material() {
                *sum += view.mass_value(m.state, m.amount, m.form)?;
            }
        }
    }
    if let Some(holdup) = &component.holdup {
        for (contents, sum) in [&holdup.initial, &holdup.r#final].into_iter().zip(&mut sums) {
            for c in contents.iter().filter(|c| side.contents.contains(&c.state)) {
                *sum += view.mass_value(c.state, c.amount, c.form)?;
            }
        }
    }
    Ok((sums[0], sums[1]))
}

/// Energy over a region, W or J. The boundary work of a batch counts as outflow.
///
/// # Errors
/// The first thing that blocks it.
pub fn energy(view: View<'_>, region: &Region) -> Result<Balance, Blocked> {
    sum_energy(view, region, &Direct::energy(view))
}

pub(super) fn sum_energy(view: View<'_>, region: &Region, ledger: &impl Ledger) -> Result<Balance, Blocked> {
    let process = &view.model.process;
    grounded(view, region)?;
    let mut out = Balance::over(region);
    let mut size = Size::default();
    for (item, sign) in region.items(process) {
        match item {
            Item::Flow(f) => {
                let share = ledger.flow(f)?;
                out.add(sign, &share.0);
                size.add(sign, share.1);
            }
            Item::Content(c) => {
                let mass = view.mass_of(c.state, c.amount, c.form)?;
                out.add(sign, &mass.times(&view.internal_energy(c.state)?));
                size.add(sign, (mass.value * relative_enthalpy(view, c.state)?).abs());
            }
        }
    }
    for &k in &region.members {
        if let Some(work) = boundary_work(view, k)? {
            size.add(-1.0, work.value.abs());
            out.add(-1.0, &work);
        }
    }
    let formulation = region.members.iter().flat_map(|&k| ledger.formulation(k));
    Ok(out.close(size.throughput(), formulation))
}

/// Magnitudes in and out.
#[derive(Default)]
struct Size {
    inward: f64,
    outward: f64,
}

impl Size {
    fn add(&mut self, sign: f64, size: f64) {
        if sign > 0.0 {
            self.inward += size;
        } else {
            self.outward += size;
        }
    }

    fn throughput(&self) -> f64 {
        self.inward.max(self.outward)
    }
}

/// Work p_b (V₂ − V₁) that the contents of a component do at their moving boundary, J; `None`
/// where no boundary moves.
///
/// # Errors
/// `Blocked`.
pub fn boundary_work(view: View<'_>, k: ComponentId) -> Result<Option<Dual>, Blocked> {
    let Some(holdup) = &view.model.process.components[k].holdup else { return Ok(None) };
    let Some(p) = holdup.boundary_pressure else { return Ok(None) };
    let mut change = Dual::default();
    for (contents, sign) in [(&holdup.initial, -1.0), (&holdup.r#final, 1.0)] {
        for c in contents {
            let volume =
                view.mass_of(c.state, c.amount, c.form)?.times(&view.property(c.state, Property::Volume)?);
            change.add_scaled(sign, &volume);
        }
    }
    Ok(Some(view.var(p)?.times(&change)))
}

/// Which end of the bracket is taken where a boundary temperature is not given.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Bracket {
    /// The temperature that makes entropy generation largest.
    Lenient,
    /// The one that makes it smallest.
    Strict,
}

/// The entropy that a heat flow carries, W/K or J/K, seen from inside the region it enters
/// (`sign` +1) or leaves (−1); `members` are the components inside.
pub(super) fn heat_entropy(
    view: View<'_>,
    heat: VarId,
    boundary: Boundary,
    sign: f64,
    bracket: Bracket,
    members: &[ComponentId],
) -> Result<Dual, Blocked> {
    let q = view.var(heat)?;
    let temperature = match boundary {
        Boundary::Isothermal(t) => view.var(t)?,
        Boundary::Sliding(a, b) => log_mean(&view.var(a)?, &view.var(b)?),
        Boundary::Unknown => {
            // The declared direction decides, or its opposite for a negative amount.
            let inward = sign * q.value >= 0.0;
            let (coldest, hottest) = temperature_range(view, members);
            let ambient = view.model.process.environment.temperature;
            match (inward, bracket) {
                (true, Bracket::Lenient) => return Ok(q.map(0.0, 0.0)),
                (true, Bracket::Strict) => Dual::constant(coldest.unwrap_or(ambient)),
                (false, Bracket::Lenient) => Dual::constant(hottest.map_or(ambient, |t| t.min(ambient))),
                (false, Bracket::Strict) => Dual::constant(hottest.unwrap_or(ambient).max(ambient)),
            }
        }
    };
    Ok(q.times(&temperature.reciprocal()))
}

/// Coldest and hottest material temperature at the boundary of a set of components.
fn temperature_range(view: View<'_>, members: &[ComponentId]) -> (Option<f64>, Option<f64>) {
    let process = &view.model.process;
    let mut range: (Option<f64>, Option<f64>) = (None, None);
    let mut take = |state: usize| {
        if let Ok(t) = view.property_value(state, Property::Temperature) {
            range.0 = Some(range.0.map_or(t, |m: f64| m.min(t)));
            range.1 = Some(range.1.map_or(t, |m: f64| m.max(t)));
        }
    };
    for &k in members {
        let component = &process.components[k];
        for f in component.inlets.iter().chain(&component.outlets) {
            if let Some(m) = process.flows[*f].material() {
                take(m.state);
            }
        }
        for c in component.holdup.iter().flat_map(|h| h.initial.iter().chain(&h.r#final)) {
            take(c.state);
        }
    }
    range
}

/// Entropy flux of black-body radiation is 4/3 of rate over source temperature (Planck; Petela,
/// J. Heat Transfer 86 (1964) 187).
pub const RADIATION_ENTROPY: f64 = 4.0 / 3.0;

/// Entropy over a region, W/K or J/K: entropy generation is outflow minus inflow.
///
/// # Errors
/// The first thing that blocks it.
pub fn entropy(view: View<'_>, region: &Region, bracket: Bracket) -> Result<Balance, Blocked> {
    sum_entropy(view, region, bracket, &Direct::entropy(view))
}

pub(super) fn sum_entropy(
    view: View<'_>,
    region: &Region,
    bracket: Bracket,
    ledger: &impl Ledger,
) -> Result<Balance, Blocked> {
    let process = &view.model.process;
    grounded(view, region)?;
    let mut out = Balance::over(region);
    let mut size = Size::default();
    for (item, sign) in region.items(process) {
        let f = match item {
            Item::Flow(f) => f,
            Item::Content(c) => {
                let mass = view.mass_of(c.state, c.amount, c.form)?;
                out.add(sign, &mass.times(&view.entropy(c.state)?));
                size.add(sign, (mass.value * relative_entropy(view, c.state)?).abs());
                continue;
            }
        };
        let carried = match &process.flows[f].carried {
            Carried::Material(_) => {
                let share = ledger.flow(f)?;
                out.add(sign, &share.0);
                size.add(sign, share.1);
                continue;
            }
            Carried::Heat(q, boundary) => heat_entropy(view, *q, *boundary, sign, bracket, &region.members)?,
            Carried::Radiation(q, t) => {
                view.var(*q)?.times(&view.var(*t)?.reciprocal()).scaled(RADIATION_ENTROPY)
            }
            Carried::Work(..) => continue,
        };
        size.add(sign, carried.value.abs());
        out.add(sign, &carried);
    }
    let formulation = region.members.iter().flat_map(|&k| ledger.formulation(k));
    let fuels = region.members.iter().flat_map(|&k| fuel_terms(view, k));
    Ok(out.close(size.throughput(), formulation.chain(fuels)))
}

/// What the correlations of chemical exergy leave uncertain in the entropy of fuels.
fn fuel_terms(view: View<'_>, k: ComponentId) -> impl Iterator<Item = FormulationTerm> + '_ {
    let process = &view.model.process;
    let component = &process.components[k];
    let flows = [(&component.inlets, 1.0), (&component.outlets, -1.0)];
    flows.into_iter().flat_map(|(flows, sign)| flows.iter().map(move |&f| (f, sign))).filter_map(
        move |(f, sign)| {
            let fluid = process.states[process.flows[f].material()?.state].fluid;
            let Substance::Fuel(fuel) = &process.fluids[fluid].substance else { return None };
            let mass = view.mass(f).ok()?;
            let slot = formulation_slot(view, k, fluid)?;
            Some((slot, sign * mass.value * fuel.entropy_uncertainty()))
        },
    )
}

/// Whether a region has a heat flow whose boundary temperature is not given.
pub fn has_open_boundary(process: &Process, region: &Region) -> bool {
    region
        .crossings()
        .any(|(f, _, _)| matches!(process.flows[f].carried, Carried::Heat(_, Boundary::Unknown)))
}

/// Moles of one element in and out of one set of a component: its flows and contents.
///
/// # Errors
/// `Blocked`; `Missing` where a fluid's make-up is not known.
pub fn element(view: View<'_>, k: ComponentId, side: usize, index: usize) -> Result<Balance, Blocked> {
    let process = &view.model.process;
    set_balance(view, k, side, |state, mass| {
        let fluid = process.states[state].fluid;
        let scale = &view.model.scales[fluid];
        let missing = Blocked::Missing("the elements that the fluid consists of");
        if scale.variable {
            let c = view.composition(state)?;
            let (elements, slopes) = process.fluids[fluid].engine.elements(c.value).ok_or(missing)?;
            Ok(mass.times(&c.map(elements[index], slopes[index])))
        } else {
            let elements = scale.elements.as_ref().ok_or(missing)?;
            Ok(mass.scaled(elements[index]))
        }
    })
}
