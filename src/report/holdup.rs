//! What components hold before and after a batch.

use super::assemble::Assembler;
use super::{ContentReport, HeldReport, HoldupReport};
use crate::assessment::Exergies;
use crate::balance::region;
use crate::fluid::Property;
use crate::model::{Blocked, Dual};
use crate::process::{ComponentId, Content};
use crate::quantity::Dimension;

impl Assembler<'_, '_> {
    /// The contents of a component, where it has any.
    pub(super) fn holdup(&mut self, k: ComponentId, exergies: &Exergies) -> Option<HoldupReport> {
        let holdup = self.view().model.process.components[k].holdup.clone()?;
        let work = region::boundary_work(self.view(), k).ok().flatten();
        Some(HoldupReport {
            initial: self.held(&holdup.initial, exergies),
            r#final: self.held(&holdup.r#final, exergies),
            boundary_work: work.map(|w| self.figure(&w, Dimension::Energy)),
        })
    }

    fn held(&mut self, contents: &[Content], exergies: &Exergies) -> HeldReport {
        let mut out = HeldReport::default();
        let mut totals = [(); 6].map(|()| Some(Dual::default()));
        for c in contents {
            let (report, extensive) = self.content(c, exergies);
            out.contents.push(report);
            for (total, part) in totals.iter_mut().zip(extensive) {
                *total = total.take().zip(part.ok()).map(|(sum, part)| sum.plus(&part));
            }
        }
        if contents.is_empty() {
            return out;
        }
        let words = [
            ("mass", Dimension::Mass),
            ("volume", Dimension::Volume),
            ("internal_energy", Dimension::Energy),
            ("entropy", Dimension::Entropy),
            ("exergy", Dimension::Energy),
            ("chemical_exergy", Dimension::Energy),
        ];
        for ((word, dimension), total) in words.into_iter().zip(totals) {
            if let Some(total) = total {
                let figure = self.figure(&total, dimension);
                out.totals.push(word, figure);
            }
        }
        out
    }

    /// One content, and its mass, volume, internal energy, entropy, exergy, and the chemical part of
    /// the latter.
    fn content(&mut self, c: &Content, exergies: &Exergies) -> (ContentReport, [Result<Dual, Blocked>; 6]) {
        let view = self.evaluation.view;
        let process = &view.model.process;
        let mass = view.mass_of(c.state, c.amount, c.form);
        let times = |x: Result<Dual, Blocked>| Ok(mass.clone()?.times(&x?));
        let extensive = [
            mass.clone(),
            times(view.property(c.state, Property::Volume)),
            times(view.internal_energy(c.state)),
            times(view.entropy(c.state)),
            exergies.surroundings.content(view, c),
            exergies.surroundings.parts(view, c.state).and_then(|parts| {
                let chemical = parts.chemical.ok_or(Blocked::Missing("chemical exergy"))?;
                Ok(mass.clone()?.scaled(chemical))
            }),
        ];
        let mut report = ContentReport {
            fluid: process.fluids[process.states[c.state].fluid].name.clone(),
            ..ContentReport::default()
        };
        if let Ok(state) = view.state(c.state) {
            report.phase = Some(state.state.phase.text());
        }
        let figures = [
            ("mass", Dimension::Mass, mass.clone()),
            ("temperature", Dimension::Temperature, view.property(c.state, Property::Temperature)),
            ("pressure", Dimension::Pressure, view.property(c.state, Property::Pressure)),
            ("specific_volume", Dimension::SpecificVolume, view.property(c.state, Property::Volume)),
            ("exergy", Dimension::Energy, extensive[4].clone()),
            ("chemical_exergy", Dimension::Energy, extensive[5].clone()),
        ];
        for (word, dimension, form) in figures {
            if let Ok(form) = form {
                let figure = self.figure(&form, dimension);
                report.figures.push(word, figure);
            }
        }
        (report, extensive)
    }
}
