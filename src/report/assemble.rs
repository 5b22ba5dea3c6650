//! From an assessment in SI units to a report in the units asked for.

use super::figure::{Figure, Named, plain};
use super::*;
use crate::assessment::{self, Exergies, Findings, Judgement, Overall};
use crate::balance::region::{self, Balance, Bracket, Region};
use crate::balance::{Equations, Evaluation, RegionBalances, Row, exergy::ExergyBalance};
use crate::evidence::Sensitivity;
use crate::fluid::{Element, Property};
use crate::model::{Dual, Scope, View};
use crate::process::{AmountForm, Basis, Boundary, Carried, FlowId, WorkForm};
use crate::quantity::{Dimension, UnitSystem};
use crate::rules;

/// Everything that assembling needs at hand.
pub(super) struct Assembler<'a, 'e> {
    pub(super) evaluation: &'e Evaluation<'a>,
    pub(super) sensitivity: &'e mut Sensitivity,
    units: UnitSystem,
}

impl Report {
    /// Draws up the report.
    pub fn assemble(
        evaluation: &Evaluation<'_>,
        (judgement, findings): (&Judgement, &Findings),
        exergies: &Exergies,
        sensitivity: &mut Sensitivity,
        units: UnitSystem,
        description_sha256: String,
    ) -> Report {
        let mut a = Assembler { evaluation, sensitivity, units };
        let process = &evaluation.view.model.process;
        let equations = evaluation.equations;
        let mut components = Named::default();
        for (k, component) in process.components.iter().enumerate() {
            let region = a.region(
                &equations.components[k],
                &evaluation.components[k],
                exergies.components[k].as_ref().ok(),
                judgement.components[k],
                Some(k),
            );
            let report = a.component(k, region, exergies);
            components.push(component.name.clone(), report);
        }
        let mut groups = Named::default();
        for (g, group) in process.groups.iter().enumerate() {
            let region = a.region(
                &equations.groups[g],
                &evaluation.groups[g],
                exergies.groups[g].as_ref().ok(),
                judgement.groups[g],
                None,
            );
            groups.push(group.name.clone(), region);
        }
        let single = process.components.len() == 1;
        let plant_verdict = if single { judgement.components[0] } else { judgement.plant };
        let region =
            a.region(&equations.plant, &evaluation.plant, exergies.plant.as_ref().ok(), plant_verdict, None);
        let plant = a.plant(region, exergies);
        let mut flows = Named::default();
        for f in 0..process.flows.len() {
            let flow = a.flow(f, exergies);
            flows.push(process.flows[f].name.clone(), flow);
        }
        let violations: Vec<Finding> = findings.violations.iter().map(|f| a.finding(f)).collect();
        let warnings: Vec<Finding> = findings.warnings.iter().map(|f| a.finding(f)).collect();
        let undecided: Vec<Finding> = findings.undecided.iter().map(|f| a.finding(f)).collect();
        let c = judgement.counts;
        Report {
            name: process.name.clone(),
            verdict: judgement.verdict.text(),
            complete: judgement.complete,
            data_verdict: judgement.data.text(),
            statement: statement(judgement, &violations),
            counts: Counts {
                violated: c.violated,
                suspect: c.suspect,
                undecided: c.undecided,
                holds: c.holds,
                unchecked: c.unchecked,
                warnings: warnings.len(),
            },
            families: Named(
                judgement
                    .families
                    .iter()
                    .map(|(family, s)| {
                        let report = FamilyReport {
                            tests: s.tests,
                            false_alarm: s.false_alarm,
                            critical_z: plain(s.critical_z),
                        };
                        (family.text().to_owned(), report)
                    })
                    .collect(),
            ),
            violations,
            warnings,
            undecided,
            unchecked: findings
                .unchecked
                .iter()
                .map(|u| Unchecked {
                    r#where: u.pointer.clone(),
                    what: u.what,
                    reason: u.reason,
                    detail: u.detail.clone(),
                    would_need: u.would_need.clone(),
                })
                .collect(),
            plant,
            components,
            groups,
            flows,
            assumptions: process
                .assumptions
                .iter()
                .map(|x| AssumptionReport { r#where: x.pointer.clone(), statement: x.statement.clone() })
                .collect(),
            cautions: cautions(process),
            provenance: a.provenance(description_sha256),
        }
    }
}

/// The verdict in one sentence.
fn statement(judgement: &Judgement, violations: &[Finding]) -> String {
    let first = violations.first().map(|f| f.statement.clone()).unwrap_or_default();
    let mut out = match judgement.verdict {
        Overall::Violated => format!("Impossible as described: {first}"),
        Overall::Suspect => format!("Likely impossible as described: {first}"),
        Overall::Undecided => {
            "Nothing violates the second law, but some tests cannot be told from their limit.".to_owned()
        }
        Overall::Holds => "Every test of the second law that was made holds.".to_owned(),
        Overall::Unchecked => "No test of the second law could be made.".to_owned(),
    };
    if !judgement.complete {
        out.push_str(" Not every test could be made; see \"unchecked\".");
    }
    if judgement.data == crate::assessment::DataVerdict::Contradictory {
        out.push_str(" The data contradict each other; see \"warnings\".");
    }
    out
}

impl Assembler<'_, '_> {
    pub(super) fn view(&self) -> View<'_> {
        self.evaluation.view
    }

    pub(super) fn figure(&mut self, form: &Dual, dimension: Dimension) -> Figure {
        let u = self.sensitivity.uncertainty(self.evaluation.view.model, form);
        Figure::new(form.value, u, dimension, self.units)
    }

    pub(super) fn bare(&self, value: f64, dimension: Dimension) -> Figure {
        Figure::new(value, 0.0, dimension, self.units)
    }

    pub(super) fn units(&self) -> UnitSystem {
        self.units
    }

    pub(super) fn dimensions(&self) -> (Dimension, Dimension, Dimension, Dimension) {
        match self.evaluation.view.model.process.basis {
            Basis::Rate => {
                (Dimension::MassFlow, Dimension::MoleFlow, Dimension::Power, Dimension::EntropyRate)
            }
            Basis::Amount => (Dimension::Mass, Dimension::Moles, Dimension::Energy, Dimension::Entropy),
        }
    }

    fn balance(&mut self, balance: &Balance, dimension: Dimension) -> BalanceReport {
        let residual = balance.residual();
        BalanceReport {
            r#in: self.figure(&balance.inflow_form(), dimension),
            out: self.figure(&balance.outflow_form(), dimension),
            residual: self.figure(residual, dimension),
            closure: if balance.throughput > 0.0 { plain(residual.value / balance.throughput) } else { 0.0 },
        }
    }

    fn region(
        &mut self,
        region: &Region,
        balances: &RegionBalances,
        exergy: Option<&ExergyBalance>,
        (verdict, at_limit): (Overall, bool),
        component: Option<usize>,
    ) -> RegionReport {
        let view = self.evaluation.view;
        let (mass, moles, energy, entropy) = self.dimensions();
        let mass_balance = region::mass(view, region).ok().filter(|b| b.throughput > 0.0);
        let mass_balance = mass_balance.map(|b| self.balance(&b, mass));
        let mut element_balance = Named::default();
        if let Some(k) = component {
            for (side, element) in elements_of(self.evaluation.equations, k) {
                if let Ok(b) = region::element(view, k, side, element as usize) {
                    let report = self.balance(&b, moles);
                    element_balance.push(element.symbol(), report);
                }
            }
        }
        let energy_balance = balances.energy.as_ref().ok().map(|b| self.balance(b, energy));
        let entropy_balance = balances.entropy.as_ref().ok().map(|b| {
            let sigma = b.generation();
            let generation = self.figure(&sigma, entropy);
            let u = self.sensitivity.uncertainty(view.model, &sigma);
            let floor = u.hypot(1e-9 * b.throughput).max(f64::MIN_POSITIVE);
            let strict = region::has_open_boundary(&view.model.process, region)
                .then(|| region::entropy(view, region, Bracket::Strict).ok())
                .flatten();
            let generation_strict = strict.map(|s| self.figure(&s.generation(), entropy));
            EntropyReport {
                r#in: self.figure(&b.inflow_form(), entropy),
                out: self.figure(&b.outflow_form(), entropy),
                generation,
                generation_strict,
                z: plain((sigma.value / floor).clamp(-1e6, 1e6)),
            }
        });
        let exergy_balance = exergy.map(|e| {
            let residual = e.inflow.clone().minus(&e.outflow).minus(&e.destruction);
            ExergyReport {
                r#in: self.figure(&e.inflow, energy),
                out: self.figure(&e.outflow, energy),
                destruction: self.figure(&e.destruction, energy),
                residual: self.figure(&residual, energy),
                fuel: None,
                product: None,
                loss: None,
                free: None,
                efficiency: None,
                no_efficiency: None,
            }
        });
        RegionReport {
            verdict: verdict.text(),
            at_limit,
            mass_balance,
            element_balance,
            energy_balance,
            entropy_balance,
            exergy_balance,
            performance: Named::default(),
        }
    }

    fn finding(&self, f: &assessment::Finding) -> Finding {
        let info = rules::ALL[f.rule].info();
        let process = &self.evaluation.view.model.process;
        let figure =
            |x: Option<rules::Figure>, u: f64| x.map(|x| Figure::new(x.value, u, x.dimension, self.units));
        let value = figure(f.explanation.value, f.decision.u);
        // The detectable violation is in the unit of the value, where both are in one dimension.
        let detectable = f.explanation.value.map(|x| {
            let scale = crate::quantity::display(x.dimension, self.units).scale;
            plain(f.decision.detectable / scale)
        });
        Finding {
            rule: info.name,
            authority: info.authority.text(),
            severity: f.severity.text(),
            verdict: f.decision.verdict.text(),
            component: match f.scope {
                Scope::Component(k) => Some(process.components[k].name.clone()),
                _ => None,
            },
            r#where: f.pointer.clone(),
            statement: f.explanation.statement.clone(),
            value,
            limit: figure(f.explanation.limit, 0.0),
            z: plain(f.decision.z),
            p_adjusted: plain(f.decision.p_adjusted),
            probability_negative: plain(f.decision.probability_negative),
            detectable,
            covers: f.covers.clone(),
            conditional_on: f.conditional_on.clone(),
            causes: f
                .explanation
                .causes
                .unwrap_or(info.typical_cause)
                .split(", ")
                .map(str::to_owned)
                .collect(),
            source: info.source,
        }
    }

    fn flow(&mut self, f: FlowId, exergies: &Exergies) -> FlowReport {
        let view = self.evaluation.view;
        let process = &view.model.process;
        let flow = &process.flows[f];
        let (mass, moles, energy, _) = self.dimensions();
        let name = |k: Option<usize>| k.map(|k| process.components[k].name.clone());
        let mut out = FlowReport {
            kind: "material",
            from: name(flow.from),
            to: name(flow.to),
            origin: "given",
            ..FlowReport::default()
        };
        match &flow.carried {
            Carried::Material(m) => {
                out.origin = assessment::origin(view, m.amount);
                let spec = &process.states[m.state];
                let fluid = &process.fluids[spec.fluid];
                out.fluid = Some(fluid.name.clone());
                let batch = process.basis == Basis::Amount;
                if let Ok(kg) = view.mass(f) {
                    let figure = self.figure(&kg, mass);
                    out.figures.push(if batch { "mass" } else { "mass_flow" }, figure);
                    let c = view.composition(m.state).map_or(0.0, |c| c.value);
                    if let Some(molar) = fluid.engine.molar_mass(c) {
                        let figure = self.figure(&kg.clone().scaled(1.0 / molar), moles);
                        out.figures.push(if batch { "moles" } else { "mole_flow" }, figure);
                    }
                    if m.form != AmountForm::Volume
                        && let Ok(v) = view.property(m.state, Property::Volume)
                    {
                        let dimension = if batch { Dimension::Volume } else { Dimension::VolumeFlow };
                        let figure = self.figure(&kg.times(&v), dimension);
                        out.figures.push(if batch { "volume" } else { "volume_flow" }, figure);
                    }
                }
                for (word, property, dimension) in [
                    ("temperature", Property::Temperature, Dimension::Temperature),
                    ("pressure", Property::Pressure, Dimension::Pressure),
                    ("enthalpy", Property::Enthalpy, Dimension::SpecificEnergy),
                    ("entropy", Property::Entropy, Dimension::SpecificEntropy),
                    ("specific_volume", Property::Volume, Dimension::SpecificVolume),
                ] {
                    if let Ok(x) = view.property(m.state, property) {
                        let figure = self.figure(&x, dimension);
                        out.figures.push(word, figure);
                    }
                }
                if let Ok(state) = view.state(m.state) {
                    out.phase = Some(state.state.phase.text());
                    if state.state.quality.is_some()
                        && let Ok(x) = view.property(m.state, Property::Quality)
                    {
                        let figure = self.figure(&x, Dimension::Fraction);
                        out.figures.push("quality", figure);
                    }
                }
                if spec.c.is_some()
                    && let Ok(c) = view.composition(m.state)
                {
                    let word = match fluid.substance {
                        crate::fluid::Substance::HumidAir => "humidity_ratio",
                        crate::fluid::Substance::CombustionGas(_) => "air_ratio",
                        _ => "salinity",
                    };
                    let figure = self.figure(&c, Dimension::Fraction);
                    out.figures.push(word, figure);
                }
                if let Ok(parts) = exergies.surroundings.flow_parts(view, f) {
                    let dimension = Dimension::SpecificEnergy;
                    for (word, part) in [
                        ("thermal", &parts.thermal),
                        ("mechanical", &parts.mechanical),
                        ("kinetic", &parts.kinetic),
                        ("potential", &parts.potential),
                    ] {
                        if let Some(part) = part {
                            let figure = self.figure(part, dimension);
                            out.exergy.push(word, figure);
                        }
                    }
                    let figure = self.figure(&parts.physical, dimension);
                    out.exergy.push("physical", figure);
                    if let Some(chemical) = parts.chemical {
                        out.exergy.push("chemical", self.bare(chemical, dimension));
                    }
                    let figure = self.figure(&parts.total, dimension);
                    out.exergy.push("total", figure);
                    if let Ok(kg) = view.mass(f) {
                        let figure = self.figure(&kg.times(&parts.total), energy);
                        out.exergy.push("rate", figure);
                    }
                }
            }
            Carried::Heat(q, boundary) => {
                out.kind = "heat";
                out.origin = assessment::origin(view, *q);
                if let Ok(q) = view.var(*q) {
                    let figure = self.figure(&q, energy);
                    out.figures.push("rate", figure);
                }
                match boundary {
                    Boundary::Isothermal(t) => {
                        if let Ok(t) = view.var(*t) {
                            let figure = self.figure(&t, Dimension::Temperature);
                            out.figures.push("temperature", figure);
                        }
                    }
                    Boundary::Sliding(a, b) => {
                        if let (Ok(a), Ok(b)) = (view.var(*a), view.var(*b)) {
                            let mean = crate::model::dual::log_mean(&a, &b);
                            let figure = self.figure(&mean, Dimension::Temperature);
                            out.figures.push("mean_temperature", figure);
                        }
                    }
                    Boundary::Unknown => {}
                }
                self.transfer_exergy(f, exergies, &mut out);
            }
            Carried::Work(w, form) => {
                out.kind = "work";
                out.origin = assessment::origin(view, *w);
                if let Ok(w) = view.var(*w) {
                    let figure = self.figure(&w, energy);
                    out.figures.push("power", figure);
                }
                out.form = Some(match form {
                    WorkForm::Shaft => "shaft",
                    WorkForm::Electric => "electric",
                });
            }
            Carried::Radiation(q, t) => {
                out.kind = "radiation";
                out.origin = assessment::origin(view, *q);
                if let (Ok(q), Ok(t)) = (view.var(*q), view.var(*t)) {
                    let figure = self.figure(&q, energy);
                    out.figures.push("rate", figure);
                    let figure = self.figure(&t, Dimension::Temperature);
                    out.figures.push("temperature", figure);
                }
                self.transfer_exergy(f, exergies, &mut out);
            }
        }
        out
    }

    fn transfer_exergy(&mut self, f: FlowId, exergies: &Exergies, out: &mut FlowReport) {
        let view = self.evaluation.view;
        let flow = &view.model.process.flows[f];
        let (_, _, energy, _) = self.dimensions();
        let (k, sign) = match (flow.from, flow.to) {
            (Some(k), _) => (k, -1.0),
            (None, Some(k)) => (k, 1.0),
            (None, None) => return,
        };
        let region = &self.evaluation.equations.components[k];
        if let Ok(e) = exergies.surroundings.flow(view, f, region, sign) {
            let figure = self.figure(&e, energy);
            out.exergy.push("rate", figure);
        }
    }

    fn provenance(&self, description_sha256: String) -> Provenance {
        let process = &self.view().model.process;
        let mut formulations = Named::default();
        for fluid in &process.fluids {
            let p = fluid.engine.provenance();
            formulations.push(
                fluid.name.clone(),
                Formulation { formulation: p.formulation, source: p.source, range: p.range },
            );
        }
        let env = &process.environment;
        let mut environment = Named::default();
        environment.push("temperature", self.bare(env.temperature, Dimension::Temperature));
        environment.push("pressure", self.bare(env.pressure, Dimension::Pressure));
        if let Some(phi) = env.relative_humidity {
            environment.push("relative_humidity", self.bare(phi, Dimension::Fraction));
        }
        Provenance {
            tool: concat!("sigmadot ", env!("CARGO_PKG_VERSION")).to_owned(),
            edition: process.policy.edition,
            description_sha256,
            basis: match process.basis {
                Basis::Rate => "rate",
                Basis::Amount => "amount",
            },
            units: self.units.text(),
            formulations,
            environment,
            chemistry: env.chemistry.id(),
            method: format!(
                "linear propagation of uncertainty (JCGM 100:2008); one-sided tests at a family-wise \
                 false-alarm probability of {} (Sidak, Holm), JCGM 106:2012",
                process.policy.false_alarm
            ),
        }
    }
}

/// Elements that a component balances, with their side.
fn elements_of(equations: &Equations, k: usize) -> Vec<(usize, Element)> {
    equations
        .rows()
        .iter()
        .filter_map(|row| match row {
            Row::Element(c, side, element) if *c == k => Some((*side, *element)),
            _ => None,
        })
        .collect()
}

/// The usual cautions for what a description holds.
fn cautions(process: &crate::process::Process) -> Vec<&'static str> {
    use crate::fluid::Substance;
    use crate::process::kinds::Kind;
    let mut out = vec![
        "This report judges figures, not equipment. Follow local codes and have design, operation and changes of \
         plant answered for by licensed practice.",
    ];
    let has = |f: &dyn Fn(&Substance) -> bool| process.fluids.iter().any(|x| f(&x.substance));
    if has(&|s| matches!(s, Substance::Water)) {
        out.push("Steam and hot water scald, and stored pressure can burst vessels and pipes.");
    }
    if process
        .components
        .iter()
        .any(|c| matches!(c.kind, Kind::Combustor | Kind::Boiler | Kind::Engine | Kind::FuelCell))
    {
        out.push(
            "Fuel and air can explode, and flue gas can poison: purge, flame supervision and ventilation come first.",
        );
    }
    if has(&|s| matches!(s, Substance::Pure)) {
        out.push(
            "Refrigerants and working fluids can be toxic, flammable or displace air, and liquid frostbites.",
        );
    }
    out
}
