//! What a device takes heat from and gives heat to, and the entropic mean temperatures
//! T = ΣQ / Σ(Q/T) between which it works.
//!
//! A stream that passes through counts with Δ(m h) / Δ(m s): the temperature of the reservoir
//! that would take or give the same heat with the same entropy.

use super::region::RADIATION_ENTROPY;
use crate::model::{Blocked, Dual, View, dual::log_mean};
use crate::process::kinds::Kind;
use crate::process::{Boundary, Carried, Component, ComponentId, Side};

/// One thing that heat is exchanged with.
#[derive(Clone, Debug)]
pub struct Exchange {
    /// The magnitude of the heat, W or J, where it is known.
    pub heat: Option<Dual>,
    /// Entropic mean temperature, K.
    pub temperature: Dual,
}

/// What a device exchanges heat with.
#[derive(Clone, Debug, Default)]
pub struct Reservoirs {
    /// Where it takes heat in.
    pub sources: Vec<Exchange>,
    /// Where it gives heat off.
    pub sinks: Vec<Exchange>,
}

impl Reservoirs {
    /// The reservoirs of a component. `None` where a temperature that bounds its performance is
    /// not known.
    pub fn of(view: View<'_>, k: ComponentId) -> Option<Reservoirs> {
        let process = &view.model.process;
        let component = &process.components[k];
        if component.holdup.is_some() {
            return None;
        }
        let mut out = Reservoirs::default();
        let mut to_the_open = Vec::new();
        for (flows, entering) in [(&component.inlets, true), (&component.outlets, false)] {
            for &f in flows {
                let (q, temperature) = match process.flows[f].carried {
                    Carried::Heat(q, boundary) => (q, boundary_temperature(view, boundary)?),
                    Carried::Radiation(q, t) => (q, Some(view.var(t).ok()?.scaled(1.0 / RADIATION_ENTROPY))),
                    Carried::Material(_) | Carried::Work(..) => continue,
                };
                let heat = view.var(q).ok();
                let reversed = heat.as_ref().is_some_and(|q| q.value < 0.0);
                let heat = heat.map(|q| if reversed { q.scaled(-1.0) } else { q });
                let inward = entering != reversed;
                match temperature {
                    Some(temperature) => out.push(inward, Exchange { heat, temperature }),
                    // Heat from an unnamed source carries no entropy at best: nothing bounds it.
                    None if inward => return None,
                    None => to_the_open.push(heat),
                }
            }
        }
        for side in &component.sides {
            if let Some((inward, exchange)) = side_exchange(view, side)? {
                out.push(inward, exchange);
            }
        }
        // A loss at an unnamed temperature: nothing can take it that is colder than the
        // surroundings and the device's own reservoirs.
        let coldest = out.sources.iter().chain(&out.sinks).map(|e| e.temperature.value);
        let coldest = coldest.fold(process.environment.temperature, f64::min);
        for heat in to_the_open {
            out.push(false, Exchange { heat, temperature: Dual::constant(coldest) });
        }
        Some(out)
    }

    fn push(&mut self, inward: bool, exchange: Exchange) {
        // Nothing passes: no reservoir.
        if exchange.heat.as_ref().is_some_and(|q| q.value == 0.0) {
            return;
        }
        if inward { self.sources.push(exchange) } else { self.sinks.push(exchange) }
    }

    /// Heat taken in, W or J, where it is known and there is any.
    pub fn heat_in(&self) -> Option<Dual> {
        total(&self.sources)
    }

    /// Heat given off, W or J, where it is known and there is any.
    pub fn heat_out(&self) -> Option<Dual> {
        total(&self.sinks)
    }

    /// Entropic mean temperature of the heat taken in; the hottest where the shares are not known.
    pub fn source_temperature(&self) -> Option<Dual> {
        mean(&self.sources, |a, b| a > b)
    }

    /// Entropic mean temperature of the heat given off; the coldest where the shares are not known.
    pub fn sink_temperature(&self) -> Option<Dual> {
        mean(&self.sinks, |a, b| a < b)
    }

    /// Whether all heat is exchanged at one temperature.
    pub fn single_temperature(&self) -> Option<f64> {
        let mut all = self.sources.iter().chain(&self.sinks).map(|e| e.temperature.value);
        let first = all.next()?;
        all.all(|t| (t - first).abs() <= 1e-9 * first).then_some(first)
    }

    /// Whether there is anything that heat is given off to.
    pub fn has_sinks(&self) -> bool {
        !self.sinks.is_empty()
    }
}

/// The temperature of a boundary; the outer `None`: not known, the inner: not given.
fn boundary_temperature(view: View<'_>, boundary: Boundary) -> Option<Option<Dual>> {
    match boundary {
        Boundary::Isothermal(t) => view.var(t).ok().map(Some),
        Boundary::Sliding(a, b) => Some(Some(log_mean(&view.var(a).ok()?, &view.var(b).ok()?))),
        Boundary::Unknown => Some(None),
    }
}

/// What the material of one side exchanges with the device, and whether it gives heat to it.
/// The outer `None`: not known, or no temperature stands for it; the inner: nothing.
fn side_exchange(view: View<'_>, side: &Side) -> Option<Option<(bool, Exchange)>> {
    if side.inlets.is_empty() && side.outlets.is_empty() {
        return Some(None);
    }
    if side.pool {
        return None;
    }
    let process = &view.model.process;
    let specific = |f: usize| -> Result<(Dual, Dual), Blocked> {
        let m = process.flows[f].material().ok_or(Blocked::Missing("material"))?;
        Ok((view.enthalpy(m.state)?, view.entropy(m.state)?))
    };
    let (heat, energy, entropy) = if let ([inlet], [outlet]) = (&side.inlets[..], &side.outlets[..]) {
        // The amount cancels in the mean temperature.
        let (h1, s1) = specific(*inlet).ok()?;
        let (h2, s2) = specific(*outlet).ok()?;
        let (dh, ds) = (h1.minus(&h2), s1.minus(&s2));
        let mass = view.mass(*inlet).or_else(|_| view.mass(*outlet)).ok();
        (mass.map(|m| m.times(&dh)), dh, ds)
    } else {
        let (mut energy, mut entropy) = (Dual::default(), Dual::default());
        for (flows, sign) in [(&side.inlets, 1.0), (&side.outlets, -1.0)] {
            for &f in flows {
                let (h, s) = specific(f).ok()?;
                let mass = view.mass(f).ok()?;
                energy.add_scaled(sign, &mass.times(&h));
                entropy.add_scaled(sign, &mass.times(&s));
            }
        }
        (Some(energy.clone()), energy, entropy)
    };
    if energy.value == 0.0 {
        return Some(None);
    }
    let temperature = energy.times(&entropy.reciprocal());
    if !(temperature.value > 0.0 && temperature.value.is_finite()) {
        return None;
    }
    let inward = heat.as_ref().map_or(energy.value, |q| q.value) > 0.0;
    let heat = heat.map(|q| if inward { q } else { q.scaled(-1.0) });
    Some(Some((inward, Exchange { heat, temperature })))
}

fn total(list: &[Exchange]) -> Option<Dual> {
    if list.is_empty() {
        return None;
    }
    let mut out = Dual::default();
    for e in list {
        out.add_scaled(1.0, e.heat.as_ref()?);
    }
    Some(out)
}

fn mean(list: &[Exchange], kinder: fn(f64, f64) -> bool) -> Option<Dual> {
    if let [only] = list {
        return Some(only.temperature.clone());
    }
    if let Some(heat) = total(list) {
        let mut entropy = Dual::default();
        for e in list {
            if let Some(q) = &e.heat {
                entropy.add_scaled(1.0, &q.times(&e.temperature.reciprocal()));
            }
        }
        return Some(heat.times(&entropy.reciprocal()));
    }
    list.iter()
        .map(|e| &e.temperature)
        .reduce(|best, t| if kinder(t.value, best.value) { t } else { best })
        .cloned()
}

/// A cyclic machine between two reservoirs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cycle {
    /// η = W / Qin ≤ 1 − Tc/Th.
    Engine,
    /// COP = Qin / W ≤ Tc / (Th − Tc).
    Refrigerator,
    /// COP = Qout / W ≤ Th / (Th − Tc).
    HeatPump,
}

impl Cycle {
    /// The cycle of a kind, if it is one.
    pub const fn of(kind: Kind) -> Option<Cycle> {
        match kind {
            Kind::HeatEngine => Some(Cycle::Engine),
            Kind::Refrigerator => Some(Cycle::Refrigerator),
            Kind::HeatPump => Some(Cycle::HeatPump),
            _ => None,
        }
    }

    /// The reversible limit; `None` where the temperatures set none.
    pub fn limit(self, reservoirs: &Reservoirs) -> Option<Dual> {
        let source = reservoirs.source_temperature()?;
        let sink = reservoirs.sink_temperature()?;
        if self == Cycle::Engine {
            // Below zero when heat is rejected hotter than it is taken in: any work is too much.
            return Some(Dual::constant(1.0).minus(&sink.times(&source.reciprocal())));
        }
        let lift = sink.clone().minus(&source);
        if lift.value <= 0.0 {
            return None;
        }
        let useful = if self == Cycle::Refrigerator { source } else { sink };
        Some(useful.times(&lift.reciprocal()))
    }

    /// What the machine achieves by its own flows; `None` where it is not known or it does not run
    /// as what it is.
    pub fn actual(self, view: View<'_>, k: ComponentId, reservoirs: &Reservoirs) -> Option<Dual> {
        let (work, _) = net_work_out(view, &view.model.process.components[k]).ok()?;
        let (benefit, cost) = match self {
            Cycle::Engine => (work, reservoirs.heat_in()?),
            Cycle::Refrigerator => (reservoirs.heat_in()?, work.scaled(-1.0)),
            Cycle::HeatPump => (reservoirs.heat_out()?, work.scaled(-1.0)),
        };
        (benefit.value > 0.0 && cost.value > 0.0).then(|| benefit.times(&cost.reciprocal()))
    }
}

/// Net work out of a component, and whether it has any flow of work.
///
/// # Errors
/// `Blocked` by a power that is not known.
pub fn net_work_out(view: View<'_>, component: &Component) -> Result<(Dual, bool), Blocked> {
    let mut out = Dual::default();
    let mut any = false;
    for (flows, sign) in [(&component.inlets, -1.0), (&component.outlets, 1.0)] {
        for &f in flows {
            if let Carried::Work(power, _) = view.model.process.flows[f].carried {
                out.add_scaled(sign, &view.var(power)?);
                any = true;
            }
        }
    }
    Ok((out, any))
}
