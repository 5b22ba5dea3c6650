//! One evaluation of a process: solved unknowns and the balances that rules and report share.

use super::{Balance, Bracket, Equations, Exergies, Region, region};
use crate::model::{Blocked, Dual, Plan, Scope, View};
use std::rc::Rc;

/// Energy and entropy over one region.
#[derive(Clone, Debug)]
pub struct RegionBalances {
    /// Energy, W or J.
    pub energy: Result<Balance, Blocked>,
    /// Entropy at the lenient end of any open bracket, W/K or J/K.
    pub entropy: Result<Balance, Blocked>,
}

impl RegionBalances {
    fn of(view: View<'_>, r: &Region) -> RegionBalances {
        RegionBalances {
            energy: region::energy(view, r),
            entropy: region::entropy(view, r, Bracket::Lenient),
        }
    }

    /// Entropy generation σ with its gradient, and the entropy throughput.
    ///
    /// # Errors
    /// What blocks it.
    pub fn generation(&self, view: View<'_>) -> Result<(Dual, f64), Blocked> {
        let balance = self.entropy.as_ref().map_err(Clone::clone)?;
        Ok((balance.residual(view).scaled(-1.0), balance.throughput))
    }

    /// Energy residual (in − out) with its gradient, and the energy throughput.
    ///
    /// # Errors
    /// What blocks it.
    pub fn energy_residual(&self, view: View<'_>) -> Result<(Dual, f64), Blocked> {
        let balance = self.energy.as_ref().map_err(Clone::clone)?;
        Ok((balance.residual(view), balance.throughput))
    }
}

/// One evaluation of a process.
#[derive(Debug)]
pub struct Evaluation<'a> {
    /// Structure and values.
    pub view: View<'a>,
    /// The equations and regions.
    pub equations: &'a Equations,
    /// How the unknowns were found.
    pub plan: &'a Plan,
    /// One entry a component.
    pub components: Vec<RegionBalances>,
    /// One entry a group.
    pub groups: Vec<RegionBalances>,
    /// The plant.
    pub plant: RegionBalances,
    /// Mismatch and throughput of each exergy balance, once they are derived.
    pub exergy_mismatch: Option<Vec<(Scope, f64, f64)>>,
    /// The exergy view, once it is derived.
    pub exergies: Option<Rc<Exergies>>,
}

impl<'a> Evaluation<'a> {
    /// Evaluates the balances of a solved workspace.
    pub fn new(view: View<'a>, equations: &'a Equations, plan: &'a Plan) -> Evaluation<'a> {
        Evaluation {
            view,
            equations,
            plan,
            components: equations.components.iter().map(|r| RegionBalances::of(view, r)).collect(),
            groups: equations.groups.iter().map(|r| RegionBalances::of(view, r)).collect(),
            plant: RegionBalances::of(view, &equations.plant),
            exergy_mismatch: None,
            exergies: None,
        }
    }

    /// Whether a row was spent on an unknown, so that it has no power as a test.
    pub fn spent_on(&self, row: usize) -> Option<&[usize]> {
        self.plan.spent[row].map(|step| self.plan.steps[step].unknowns.as_slice())
    }
}
