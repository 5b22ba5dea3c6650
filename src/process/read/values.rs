//! Figures of a description as variables over independent sources.

use super::*;
use crate::document::Reading;
use crate::quantity::{Quantity, Reference, display};

/// How a figure without a stated uncertainty is read.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Class {
    /// Temperatures, pressures, compositions and other state figures: known to their digits.
    State,
    /// Amounts, heats and powers: exact in design data.
    Amount,
    /// Parameters used to solve: exact.
    Parameter,
    /// Claimed figures: known to their digits.
    Claim,
}

/// Molar volume of an ideal gas at 0 degC and 101.325 kPa, m³/mol (CODATA 2018).
fn molar_volume(reference: Reference) -> Option<f64> {
    const R: f64 = 8.314_462_618;
    match reference {
        Reference::Normal => Some(R * 273.15 / 101_325.0),
        Reference::Standard => Some(R * 288.15 / 101_325.0),
        // 60 degF, 14.696 psi.
        Reference::StandardCubicFoot => Some(R * 288.705_555_6 / (14.696 * 6_894.757_293_168)),
        _ => None,
    }
}

/// Standard uncertainty of a measured figure whose uncertainty is not stated: common practice for
/// plant instruments in fair order.
fn measured_default(dimension: Dimension, value: f64) -> (f64, &'static str) {
    match dimension {
        Dimension::Temperature => (1.0, "1 K"),
        Dimension::TemperatureDifference => (0.5, "0.5 K"),
        Dimension::Pressure | Dimension::PressureDifference => (0.005 * value.abs(), "0.5 % of the value"),
        Dimension::MassFlow | Dimension::MoleFlow | Dimension::VolumeFlow => {
            (0.02 * value.abs(), "2 % of the value")
        }
        Dimension::Power => (0.01 * value.abs(), "1 % of the value"),
        _ => (0.01 * value.abs(), "1 % of the value"),
    }
}

impl<'t> Reader<'t> {
    pub(super) fn source(
        &mut self,
        pointer: String,
        kind: SourceKind,
        value: f64,
        u: f64,
        half_digit: f64,
    ) -> SourceId {
        self.process.sources.push(Source { pointer, kind, u, half_digit });
        self.inputs.values.push(value);
        self.process.sources.len() - 1
    }

    /// The common error of a calibration group, in the SI unit of whichever dimension its unit
    /// names as a difference.
    pub(super) fn common_uncertainty(&mut self, node: Node<'t>) -> Option<f64> {
        for dimension in [
            Dimension::Temperature,
            Dimension::Pressure,
            Dimension::MassFlow,
            Dimension::VolumeFlow,
            Dimension::Power,
            Dimension::Fraction,
        ] {
            let mut trial = Faults::new();
            let scale = display(dimension, crate::quantity::UnitSystem::Si);
            if let Some(spread) = node.uncertainty(dimension, &scale, &mut trial)
                && trial.is_empty()
            {
                return Some(spread.at(1.0).u);
            }
        }
        let scale = display(Dimension::Temperature, crate::quantity::UnitSystem::Si);
        let _ = node.uncertainty(Dimension::Temperature, &scale, &mut self.faults);
        None
    }

    pub(super) fn constant(&mut self, value: f64) -> VarId {
        self.process.vars.push(Var::Given(Affine { constant: value, terms: Vec::new() }));
        self.process.vars.len() - 1
    }

    pub(super) fn unknown(&mut self, what: String, nature: Nature, pointer: String) -> VarId {
        self.process.vars.push(Var::Unknown { what, nature, pointer });
        self.process.vars.len() - 1
    }

    /// Ambient temperature and pressure as variables.
    pub(super) fn ambient(&mut self) -> (VarId, VarId) {
        if let Some(vars) = self.ambient {
            return vars;
        }
        let (t, p) = (self.process.environment.temperature, self.process.environment.pressure);
        let vars = (self.constant(t), self.constant(p));
        self.ambient = Some(vars);
        vars
    }

    /// Says how a figure is read whose printed digits leave more than a tenth of it open.
    fn note_coarse(&mut self, q: &Quantity) {
        if q.value == 0.0 || q.half_digit <= 0.1 * q.value.abs() {
            return;
        }
        let (text, code) = (&q.text, q.scale.code);
        let (value, half) = (q.scale.from_si(q.value), q.half_digit / q.scale.scale.abs());
        let (half, meant) = match code {
            "1" => (format!("{half}"), format!("{value:.3}")),
            code => (format!("{half} {code}"), format!("{value:.3} {code}")),
        };
        self.assume(
            q.pointer.clone(),
            format!("read as {text} ± {half} by its printed digits; write {meant} if it is meant so"),
        );
    }

    /// One quantity as an affine function of sources, times a factor.
    fn affine(&mut self, q: &Quantity, class: Class, factor: f64) -> Affine {
        let (u, kind) = match q.u() {
            Some(u) => (u, SourceKind::Stated),
            None => match (self.process.policy.literals, class) {
                (_, Class::Parameter) => (0.0, SourceKind::Exact),
                (Literals::Design, Class::Amount) => (0.0, SourceKind::Exact),
                (Literals::Design, _) | (Literals::Measured, Class::Claim) => {
                    // Saturated liquid and vapour, and round shares 0 and 1, are meant exactly.
                    let exact = matches!(q.dimension, Dimension::Fraction | Dimension::HumidityRatio)
                        && (q.value == 0.0 || q.value == 1.0);
                    if exact {
                        (0.0, SourceKind::Exact)
                    } else {
                        self.note_coarse(q);
                        (q.half_digit / 3f64.sqrt(), SourceKind::Digits)
                    }
                }
                (Literals::Measured, _) => {
                    let (u, words) = measured_default(q.dimension, q.value);
                    self.assume(
                        q.pointer.clone(),
                        format!("standard uncertainty of {} not stated: {words}", q.dimension.name()),
                    );
                    (u, SourceKind::Assumed)
                }
            },
        };
        let own = self.source(q.pointer.clone(), kind, q.value, u, q.half_digit);
        let mut terms = vec![(own, factor)];
        if q.reference() == Reference::Gauge {
            terms.push((self.process.environment.barometer, factor));
            let barometer = self.process.environment.barometer;
            if std::mem::take(&mut self.barometer_assumed) {
                self.assume(
                    "/environment/barometric_pressure",
                    "barometric pressure not given: 1.01325 bar with a standard uncertainty of 3 kPa",
                );
            }
            if q.value + self.inputs.values[barometer] <= 0.0 {
                self.fault(Diagnostic::new(
                    Code::BelowAbsoluteZero,
                    q.pointer.clone(),
                    format!("{} is at or below absolute vacuum", q.text),
                ));
            }
        }
        if let Some(group) = &q.calibration {
            match self.calibrations.get(group.as_str()) {
                Some(&id) => terms.push((id, factor)),
                None => self.fault(Diagnostic::new(
                    Code::DanglingReference,
                    q.pointer.clone(),
                    format!("there is no calibration group \"{group}\""),
                )),
            }
        }
        Affine { constant: 0.0, terms }
    }

    /// A member as a variable; redundant readings are joined with the weights of their
    /// uncertainties, and each is kept as a check.
    pub(super) fn var(
        &mut self,
        node: Node<'t>,
        member: &str,
        dimension: Dimension,
        class: Class,
        factor: f64,
    ) -> Option<VarId> {
        let n = node.get(member)?;
        let quantities = self.quantities(n, dimension)?;
        self.join(n, &quantities, class, factor)
    }

    fn quantities(&mut self, n: Node<'t>, dimension: Dimension) -> Option<Vec<Quantity>> {
        let mut out = Vec::new();
        for reading in n.quantities(dimension, &mut self.faults) {
            match reading {
                Reading::Value(q) => out.push(q),
                Reading::Tag { name, pointer } => {
                    self.fault(
                        Diagnostic::new(
                            Code::DanglingReference,
                            pointer,
                            format!("tag \"{name}\" has no reading here"),
                        )
                        .hint("a single check takes values; leave the member out if the value is unknown"),
                    );
                }
            }
        }
        (!out.is_empty()).then_some(out)
    }

    fn join(&mut self, n: Node<'t>, quantities: &[Quantity], class: Class, factor: f64) -> Option<VarId> {
        let parts: Vec<Affine> = quantities.iter().map(|q| self.affine(q, class, factor)).collect();
        let id = self.process.vars.len();
        if let [only] = &parts[..] {
            self.process.vars.push(Var::Given(only.clone()));
            return Some(id);
        }
        // Weights 1/u² where every reading has one, else equal.
        let us: Vec<f64> = parts.iter().map(|p| self.process.sources[p.terms[0].0].u).collect();
        let weights: Vec<f64> = if us.iter().all(|u| *u > 0.0) {
            us.iter().map(|u| 1.0 / (u * u)).collect()
        } else {
            vec![1.0; parts.len()]
        };
        let total: f64 = weights.iter().sum();
        let mut joined = Affine::default();
        for (part, w) in parts.iter().zip(&weights) {
            for &(s, d) in &part.terms {
                let share = d * w / total;
                match joined.terms.iter_mut().find(|t| t.0 == s) {
                    Some(t) => t.1 += share,
                    None => joined.terms.push((s, share)),
                }
            }
        }
        self.process.vars.push(Var::Given(joined));
        for (part, item) in parts.into_iter().zip(n.items()) {
            self.process.redundant.push((id, part, item.pointer()));
        }
        Some(id)
    }

    /// What a rate is to be multiplied by: 1, or the duration of a batch. A batch without a duration
    /// takes no rate, but `instead`.
    pub(super) fn rate_factor(&mut self, holder: Node<'t>, member: &str, instead: &str) -> Option<f64> {
        match (self.process.basis, self.process.duration) {
            (Basis::Rate, _) => Some(1.0),
            (Basis::Amount, Some(seconds)) => Some(seconds),
            (Basis::Amount, None) => {
                let message = "a rate in a batch needs the description's \"duration\"";
                let fault = Diagnostic::new(Code::Conflict, holder.pointer_to(member), message);
                self.fault(fault.hint(format!("give \"duration\", or {instead}")));
                None
            }
        }
    }

    /// An amount of material: the variable and how it counts.
    pub(super) fn amount(&mut self, node: Node<'t>, name: &str, what: &str) -> (VarId, AmountForm) {
        let batch = self.process.basis == Basis::Amount;
        let mut found: Option<(VarId, AmountForm)> = None;
        for (member, dimension, rate) in [
            ("mass_flow", Dimension::MassFlow, true),
            ("mole_flow", Dimension::MoleFlow, true),
            ("volume_flow", Dimension::VolumeFlow, true),
            ("dry_air_mass_flow", Dimension::MassFlow, true),
            ("mass", Dimension::Mass, false),
            ("moles", Dimension::Moles, false),
            ("volume", Dimension::Volume, false),
        ] {
            let Some(n) = node.get(member) else { continue };
            if found.is_some() {
                self.fault(
                    n.fault(Code::Conflict, "the amount is given twice")
                        .hint("give one; redundant readings go into a list"),
                );
                continue;
            }
            let factor = match (batch, rate) {
                (_, true) => {
                    let instead = "the total as \"mass\", \"moles\" or \"volume\"";
                    let Some(factor) = self.rate_factor(node, member, instead) else { continue };
                    factor
                }
                (true, false) => 1.0,
                (false, false) => {
                    self.fault(
                        n.fault(
                            Code::Conflict,
                            format!("\"{member}\" is a total, but amounts are rates here"),
                        )
                        .hint("set \"basis\": \"amount\", or give a flow such as \"mass_flow\""),
                    );
                    continue;
                }
            };
            let Some(quantities) = self.quantities(n, dimension) else { continue };
            let reference = quantities[0].reference();
            if quantities.iter().any(|q| q.reference() != reference) {
                self.fault(n.fault(Code::Conflict, "redundant volumes must have one reference"));
                continue;
            }
            let (form, factor) = match (dimension, molar_volume(reference)) {
                (Dimension::VolumeFlow | Dimension::Volume, Some(v)) => (AmountForm::Moles, factor / v),
                (Dimension::VolumeFlow | Dimension::Volume, None) => (AmountForm::Volume, factor),
                (Dimension::MoleFlow | Dimension::Moles, _) => (AmountForm::Moles, factor),
                _ if member == "dry_air_mass_flow" => (AmountForm::DryAirMass, factor),
                _ => (AmountForm::Mass, factor),
            };
            if reference == Reference::StandardCubicFoot {
                self.assume(n.pointer(), "scfm read at 60 degF and 14.696 psi");
            }
            if let Some(var) = self.join(n, &quantities, Class::Amount, factor) {
                found = Some((var, form));
            }
        }
        found.unwrap_or_else(|| {
            let var = self.unknown(format!("{what} of \"{name}\""), Nature::Mass, node.pointer());
            (var, AmountForm::Mass)
        })
    }

    /// A heat, work or radiation amount: `rate`/`power`, or `energy` in a batch.
    pub(super) fn transfer(&mut self, node: Node<'t>, name: &str, rate: &str) -> VarId {
        let batch = self.process.basis == Basis::Amount;
        let word = if rate == "power" { "power" } else { "heat" };
        let both = node.get(rate).is_some() && node.get("energy").is_some();
        if both && let Some(n) = node.get("energy") {
            self.fault(n.fault(Code::Conflict, format!("give \"{rate}\" or \"energy\", not both")));
        }
        if node.get(rate).is_some() {
            let factor = self.rate_factor(node, rate, "the total as \"energy\"").unwrap_or(1.0);
            if let Some(v) = self.var(node, rate, Dimension::Power, Class::Amount, factor) {
                return v;
            }
        } else if let Some(n) = node.get("energy") {
            if !batch {
                self.fault(
                    n.fault(Code::Conflict, "\"energy\" is a total, but amounts are rates here")
                        .hint(format!("set \"basis\": \"amount\", or give \"{rate}\"")),
                );
            }
            if let Some(v) = self.var(node, "energy", Dimension::Energy, Class::Amount, 1.0) {
                return v;
            }
        }
        self.unknown(format!("{word} of \"{name}\""), Nature::Energy, node.pointer())
    }

    /// A temperature that stands in `node` itself rather than in a member of it.
    pub(super) fn temperature_here(&mut self, node: Node<'t>) -> Option<VarId> {
        let quantities = self.quantities(node, Dimension::Temperature)?;
        self.join(node, &quantities, Class::State, 1.0)
    }
}
