//! Figures of merit in reports: fuel and product, efficiencies, the ranking, causes of entropy
//! generation.

use super::assemble::Assembler;
use super::figure::{Figure, Named, plain};
use super::{ComponentReport, ExergyReport, Omitted, PlantReport, RankEntry, RegionReport};
use crate::assessment::Exergies;
use crate::balance::decomposition::{self, Cause};
use crate::balance::performance::Metric;
use crate::balance::purpose::Account;
use crate::quantity::Dimension;

impl Assembler<'_, '_> {
    fn metrics(&mut self, metrics: &[Metric], out: &mut Named<Figure>) {
        for m in metrics {
            let figure = self.figure(&m.value, m.dimension);
            out.push(m.name.clone(), figure);
        }
    }

    fn account(&mut self, account: &Account, report: &mut ExergyReport) {
        let (_, _, energy, _) = self.dimensions();
        let u = self.sensitivity.uncertainty(self.evaluation.view.model, &account.fuel);
        match account.efficiency(u) {
            Ok(efficiency) => report.efficiency = Some(self.figure(&efficiency, Dimension::Fraction)),
            Err(reason) => report.no_efficiency = Some(reason),
        }
        if account.reason.is_none() {
            report.fuel = Some(self.figure(&account.fuel, energy));
            report.product = Some(self.figure(&account.product, energy));
        }
        if account.loss.value != 0.0 {
            report.loss = Some(self.figure(&account.loss, energy));
        }
    }

    pub(super) fn component(
        &mut self,
        k: usize,
        mut region: RegionReport,
        exergies: &Exergies,
    ) -> ComponentReport {
        let view = self.evaluation.view;
        let metrics = exergies.metrics.get(k).map(Vec::as_slice).unwrap_or_default();
        self.metrics(metrics, &mut region.performance);
        if let (Some(report), Some(Ok(account))) = (&mut region.exergy_balance, exergies.accounts.get(k)) {
            self.account(account, report);
        }
        let mut decomposition = Named::default();
        if let Some(causes) = decomposition::of(self.evaluation, k) {
            let (_, _, _, entropy) = self.dimensions();
            for (cause, sigma) in &causes.parts {
                let name = match cause {
                    Cause::PressureDrop(f) => {
                        format!("{}.{}", cause.text(), view.model.process.flows[*f].name)
                    }
                    _ => cause.text().to_owned(),
                };
                let figure = self.figure(sigma, entropy);
                decomposition.push(name, figure);
            }
            let figure = self.figure(&causes.remainder, entropy);
            decomposition.push("remainder", figure);
            if let Some(bejan) = &causes.bejan {
                let figure = self.figure(bejan, Dimension::Fraction);
                decomposition.push("bejan_number", figure);
            }
        }
        let component = &view.model.process.components[k];
        let (kind, implied) = (component.kind.name(), component.implied);
        let (holdup, profile) = (self.holdup(k, exergies), self.profile(k));
        ComponentReport { kind, implied, region, decomposition, holdup, profile }
    }

    pub(super) fn plant(&mut self, mut region: RegionReport, exergies: &Exergies) -> PlantReport {
        let (_, _, energy, _) = self.dimensions();
        let performance = &exergies.performance;
        self.metrics(&performance.metrics, &mut region.performance);
        if let (Some(report), Some(account)) = (&mut region.exergy_balance, &performance.account) {
            self.account(account, report);
            if performance.free.value != 0.0 {
                report.free = Some(self.figure(&performance.free, energy));
            }
            if let Some(efficiency) = report.efficiency {
                region.performance.push("exergy_efficiency", efficiency);
            }
        }
        let fuel = performance.account.as_ref().map(|a| a.fuel.value).filter(|f| *f > 0.0);
        PlantReport {
            region,
            ranking: self.ranking(exergies, fuel),
            omitted: performance
                .omitted
                .iter()
                .map(|o| Omitted { what: o.what, detail: o.detail.clone(), would_need: o.would_need.clone() })
                .collect(),
        }
    }

    fn ranking(&mut self, exergies: &Exergies, fuel: Option<f64>) -> Vec<RankEntry> {
        let (_, _, energy, _) = self.dimensions();
        let total: f64 = exergies.components.iter().flatten().map(|b| b.destruction.value.max(0.0)).sum();
        let mut out = Vec::new();
        for (k, balance) in exergies.components.iter().enumerate() {
            if let Ok(b) = balance {
                let destroyed = b.destruction.value;
                out.push((
                    destroyed,
                    RankEntry {
                        component: self.evaluation.view.model.process.components[k].name.clone(),
                        destruction: self.figure(&b.destruction, energy),
                        share: if total > 0.0 { plain(destroyed / total) } else { 0.0 },
                        share_of_fuel: fuel.map(|f| plain(destroyed / f)),
                    },
                ));
            }
        }
        out.sort_by(|a, b| b.0.total_cmp(&a.0));
        out.into_iter().map(|(_, e)| e).collect()
    }
}
