//! The plant as one: what it burns, what it delivers, what it throws away.

use super::exergy::Surroundings;
use super::performance::{COMBUSTIBLE, Metric, fuel_energy, heating_values, ratio};
use super::purpose::{Account, Entry};
use super::{Region, shares::flow_energy};
use crate::fluid::Substance;
use crate::model::{Blocked, Dual, View};
use crate::process::{Boundary, Carried, FlowId, Process, Role, WorkForm};
use crate::quantity::Dimension;

/// Something about the plant that was not computed, and why.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Omission {
    /// What.
    pub what: &'static str,
    /// Why not, in a sentence.
    pub detail: String,
    /// What would make it possible.
    pub would_need: String,
}

/// Figures of merit of the plant.
#[derive(Clone, Debug, Default)]
pub struct PlantPerformance {
    /// Fuel, product and loss, where every flow across the boundary has a role.
    pub account: Option<Account>,
    /// Exergy taken from the surroundings at no cost, less what is given back to them.
    pub free: Dual,
    /// Efficiencies and the like.
    pub metrics: Vec<Metric>,
    /// What was left out.
    pub omitted: Vec<Omission>,
}

/// What a flow across the plant boundary is to the plant: as declared, else where it is plain
/// (what burns and work that enters is fuel, work that leaves is product, heat that leaves at an
/// unnamed temperature is lost, intake from the surroundings is free).
pub fn role(process: &Process, f: FlowId) -> Option<Role> {
    let flow = &process.flows[f];
    if flow.role.is_some() {
        return flow.role;
    }
    let enters = flow.to.is_some();
    match &flow.carried {
        Carried::Work(..) => Some(if enters { Role::Fuel } else { Role::Product }),
        Carried::Heat(_, Boundary::Unknown) if !enters => Some(Role::Loss),
        Carried::Material(m) => {
            let spec = &process.states[m.state];
            if spec.ambient {
                return Some(Role::Free);
            }
            let burns = match &process.fluids[spec.fluid].substance {
                Substance::Fuel(_) => true,
                substance => heating_values(substance).is_some_and(|v| v.lower > COMBUSTIBLE),
            };
            (burns && enters).then_some(Role::Fuel)
        }
        Carried::Heat(..) | Carried::Radiation(..) => None,
    }
}

/// The figures of merit of the plant.
pub fn performance(view: View<'_>, surroundings: &Surroundings, plant: &Region) -> PlantPerformance {
    let process = &view.model.process;
    let mut out = PlantPerformance::default();
    let roles: Vec<(FlowId, f64, Option<Role>)> =
        plant.crossings().map(|(f, _, sign)| (f, sign, role(process, f))).collect();
    energy(view, &roles, &mut out);
    let without: Vec<&str> =
        roles.iter().filter(|r| r.2.is_none()).map(|r| process.flows[r.0].name.as_str()).collect();
    let what = "exergy_efficiency";
    if !without.is_empty() {
        out.omitted.push(Omission {
            what,
            detail: format!("what these flows are to the plant is not given: {}", without.join(", ")),
            would_need: "a \"role\" for each: fuel, product, loss or free".to_owned(),
        });
        return out;
    }
    match account(view, surroundings, plant, &roles) {
        Ok((account, free)) => {
            out.account = Some(account);
            out.free = free;
        }
        Err(_) => out.omitted.push(Omission {
            what,
            detail: "the exergy of a flow across the plant boundary is not known".to_owned(),
            would_need: "its amount and state".to_owned(),
        }),
    }
    out
}

fn account(
    view: View<'_>,
    surroundings: &Surroundings,
    plant: &Region,
    roles: &[(FlowId, f64, Option<Role>)],
) -> Result<(Account, Dual), Blocked> {
    let mut account = Account::default();
    let mut free = Dual::default();
    for &(f, sign, role) in roles {
        let e = surroundings.flow(view, f, plant, sign)?;
        match role {
            Some(Role::Fuel) => account.enter(Entry::Fuel, sign, &e),
            Some(Role::Product) => account.enter(Entry::Product, sign, &e),
            Some(Role::Loss) => account.enter(Entry::Loss, sign, &e),
            Some(Role::Free) | None => free.add_scaled(sign, &e),
        }
    }
    if account.product.value == 0.0 {
        account.reason = Some("no flow across the plant boundary is a product");
    }
    Ok((account, free))
}

/// Electric efficiency, heat rate and fuel utilisation on both heating values.
fn energy(view: View<'_>, roles: &[(FlowId, f64, Option<Role>)], out: &mut PlantPerformance) {
    let process = &view.model.process;
    let (mut lower, mut higher) = (Dual::default(), Dual::default());
    let (mut electric, mut shaft) = (Dual::default(), Dual::default());
    let (mut any_electric, mut any_shaft) = (false, false);
    let mut useful = Dual::default();
    for &(f, sign, role) in roles {
        match &process.flows[f].carried {
            Carried::Work(w, form) => {
                let Ok(w) = view.var(*w) else {
                    return out.omitted.push(Omission {
                        what: "electric_efficiency",
                        detail: format!("the power of \"{}\" is not known", process.flows[f].name),
                        would_need: "that power".to_owned(),
                    });
                };
                match form {
                    WorkForm::Electric => {
                        any_electric = true;
                        electric.add_scaled(-sign, &w);
                    }
                    WorkForm::Shaft => {
                        any_shaft = true;
                        shaft.add_scaled(-sign, &w);
                    }
                }
            }
            Carried::Material(_) if role == Some(Role::Fuel) => {
                if let Some((l, h)) = fuel_energy(view, f) {
                    lower.add_scaled(sign, &l);
                    higher.add_scaled(sign, &h);
                }
            }
            Carried::Heat(q, _) | Carried::Radiation(q, _) if role == Some(Role::Product) => {
                if let Ok(q) = view.var(*q) {
                    useful.add_scaled(-sign, &q);
                }
            }
            _ => {}
        }
    }
    if lower.value <= 0.0 {
        return;
    }
    let warmth = match product_heat(view, roles) {
        Ok(heat) => useful.plus(&heat),
        Err(_) => {
            return out.omitted.push(Omission {
                what: "fuel_utilisation",
                detail: "the energy of a product is not known".to_owned(),
                would_need: "its amount and state".to_owned(),
            });
        }
    };
    let fuels = [("lower", &lower), ("higher", &higher)];
    for (basis, fuel) in fuels {
        for (any, power, word) in
            [(any_electric, &electric, "electric_efficiency"), (any_shaft, &shaft, "shaft_efficiency")]
        {
            if any
                && power.value > 0.0
                && let Some(x) = ratio(power, fuel)
            {
                out.metrics.push(Metric::new(format!("{word}_{basis}"), x, Dimension::Fraction));
            }
        }
        if any_electric && let Some(x) = ratio(fuel, &electric) {
            out.metrics.push(Metric::new(format!("heat_rate_{basis}"), x, Dimension::Fraction));
        }
        let delivered = electric.clone().plus(&shaft).plus(&warmth);
        if delivered.value > 0.0
            && let Some(x) = ratio(&delivered, fuel)
        {
            out.metrics.push(Metric::new(format!("fuel_utilisation_{basis}"), x, Dimension::Fraction));
        }
    }
}

/// Energy that material products carry away beyond what the same fluids brought in.
fn product_heat(view: View<'_>, roles: &[(FlowId, f64, Option<Role>)]) -> Result<Dual, Blocked> {
    let process = &view.model.process;
    let fluid = |f: FlowId| process.flows[f].material().map(|m| process.states[m.state].fluid);
    let mut fluids: Vec<usize> =
        roles.iter().filter(|r| r.2 == Some(Role::Product)).filter_map(|r| fluid(r.0)).collect();
    fluids.sort_unstable();
    fluids.dedup();
    let mut out = Dual::default();
    for &(f, sign, role) in roles {
        let thrown = role == Some(Role::Loss) && sign < 0.0;
        if fluid(f).is_some_and(|x| fluids.contains(&x)) && fuel_energy(view, f).is_none() && !thrown {
            out.add_scaled(-sign, &flow_energy(view, f)?);
        }
    }
    Ok(out)
}
