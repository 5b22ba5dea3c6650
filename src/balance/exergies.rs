//! What is derived from an evaluation beyond its verdicts: exergy balances, accounts and figures of
//! merit. Repeated checks of one process do without.

use super::Evaluation;
use super::exergy::{self, ExergyBalance, Surroundings};
use super::performance::{self, Metric};
use super::plant::{self, PlantPerformance};
use super::purpose::{self, Account};
use crate::model::{Blocked, Scope};

/// The exergy balances of components, groups and plant, and their figures of merit.
#[derive(Debug)]
pub struct Exergies {
    /// The surroundings.
    pub surroundings: Surroundings,
    /// One entry a component.
    pub components: Vec<Result<ExergyBalance, Blocked>>,
    /// One entry a group.
    pub groups: Vec<Result<ExergyBalance, Blocked>>,
    /// The plant.
    pub plant: Result<ExergyBalance, Blocked>,
    /// Fuel, product and loss of each component.
    pub accounts: Vec<Result<Account, Blocked>>,
    /// Figures of merit of each component.
    pub metrics: Vec<Vec<Metric>>,
    /// Figures of merit of the plant.
    pub performance: PlantPerformance,
}

impl Exergies {
    /// Derives the exergy balances of an evaluation.
    pub fn derive(evaluation: &Evaluation<'_>) -> Exergies {
        let view = evaluation.view;
        let equations = evaluation.equations;
        let surroundings = Surroundings::new(&view.model.process);
        let balance = |region, balances| exergy::balance(evaluation, &surroundings, region, balances);
        let pairs = equations.components.iter().zip(&evaluation.components);
        let components = pairs.map(|(r, b)| balance(r, b)).collect();
        let groups = equations.groups.iter().zip(&evaluation.groups).map(|(r, b)| balance(r, b)).collect();
        let plant = balance(&equations.plant, &evaluation.plant);
        let regions = equations.components.iter().enumerate();
        let accounts = regions.map(|(k, r)| purpose::account(view, &surroundings, r, k)).collect();
        let metrics = (0..equations.components.len()).map(|k| performance::component(view, k)).collect();
        let performance = plant::performance(view, &surroundings, &equations.plant);
        Exergies { components, groups, plant, accounts, metrics, performance, surroundings }
    }

    /// Mismatch and throughput of every balance that could be made.
    pub fn mismatches(&self) -> Vec<(Scope, f64, f64)> {
        let components = self.components.iter().enumerate().map(|(k, b)| (Scope::Component(k), b));
        let groups = self.groups.iter().enumerate().map(|(g, b)| (Scope::Group(g), b));
        components
            .chain(groups)
            .chain(std::iter::once((Scope::Plant, &self.plant)))
            .filter_map(|(s, b)| b.as_ref().ok().map(|b| (s, b.mismatch, b.throughput)))
            .collect()
    }
}
