//! One evaluation of a process: solved unknowns and the balances that rules and report share.

use super::{Balance, Bracket, Equations, Exergies, Profile, Region, leniency, shares::Shares};
use crate::model::{Blocked, Dual, Plan, Scope, View};
use crate::process::ComponentId;
use std::cell::OnceCell;
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
    fn of(shares: &Shares<'_>, r: &Region) -> RegionBalances {
        RegionBalances { energy: shares.energy(r), entropy: shares.entropy(r, Bracket::Lenient) }
    }

    /// Entropy generation σ with its gradient, and the entropy throughput.
    ///
    /// # Errors
    /// What blocks it.
    pub fn generation(&self) -> Result<(Dual, f64), Blocked> {
        let balance = self.entropy.as_ref().map_err(Clone::clone)?;
        Ok((balance.generation(), balance.throughput))
    }

    /// Energy residual (in − out) with its gradient, and the energy throughput.
    ///
    /// # Errors
    /// What blocks it.
    pub fn energy_residual(&self) -> Result<(&Dual, f64), &Blocked> {
        self.energy.as_ref().map(|balance| (balance.residual(), balance.throughput))
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
    /// Interiors of exchangers, computed when first asked for; empty where there are none.
    profiles: Vec<OnceCell<Result<Option<Profile>, Blocked>>>,
    /// What open balances may hide, one entry a component, computed when first asked for.
    unseen: Vec<OnceCell<Result<Option<Dual>, Blocked>>>,
    /// The exergy view, once it is derived.
    pub exergies: Option<Rc<Exergies>>,
}

impl<'a> Evaluation<'a> {
    /// Evaluates the balances of a solved workspace.
    pub fn new(view: View<'a>, equations: &'a Equations, plan: &'a Plan) -> Evaluation<'a> {
        let shares = Shares::new(view);
        Evaluation {
            view,
            equations,
            plan,
            components: equations.components.iter().map(|r| RegionBalances::of(&shares, r)).collect(),
            groups: equations.groups.iter().map(|r| RegionBalances::of(&shares, r)).collect(),
            plant: RegionBalances::of(&shares, &equations.plant),
            exergy_mismatch: None,
            exergies: None,
            unseen: vec![OnceCell::new(); equations.components.len()],
            profiles: if view.model.process.components.iter().any(|c| c.kind.is_exchanger()) {
                vec![OnceCell::new(); equations.components.len()]
            } else {
                Vec::new()
            },
        }
    }

    /// The interior of a component; `None` where it has none.
    ///
    /// # Errors
    /// What blocks it.
    pub fn profile(&self, k: ComponentId) -> Result<Option<&Profile>, &Blocked> {
        match self.profiles.get(k) {
            Some(cell) => cell.get_or_init(|| Profile::of(self.view, k)).as_ref().map(Option::as_ref),
            None => Ok(None),
        }
    }

    /// What the open balances of a component may hide of entropy generation; see [`leniency::of`].
    ///
    /// # Errors
    /// What blocks it.
    pub(super) fn unseen(&self, k: ComponentId) -> Result<Option<&Dual>, &Blocked> {
        self.unseen[k].get_or_init(|| leniency::of_component(self, k)).as_ref().map(Option::as_ref)
    }

    /// Whether a row was spent on an unknown, so that it has no power as a test.
    pub fn spent_on(&self, row: usize) -> Option<&[usize]> {
        self.plan.spent[row].map(|step| self.plan.steps[step].unknowns.as_slice())
    }
}
