//! The report as one table for spreadsheets and scripts: comma-separated values by RFC 4180.

use super::{
    BalanceReport, ComponentReport, Figure, Finding, FlowReport, ProfileReport, RegionReport, Report,
};

/// Columns of the table, in their order.
const HEADER: [&str; 8] = ["section", "name", "quantity", "value", "unit", "u", "verdict", "note"];

/// One line: everything but figures is text.
#[derive(Default)]
struct Line<'a> {
    section: &'a str,
    name: &'a str,
    quantity: &'a str,
    value: Option<f64>,
    unit: &'a str,
    u: Option<f64>,
    verdict: &'a str,
    note: &'a str,
}

struct Sheet(String);

impl Report {
    /// The report as CSV (RFC 4180, UTF-8, lines ending in CRLF) in long form: one figure or
    /// statement a line, in the columns `section,name,quantity,value,unit,u,verdict,note`.
    ///
    /// `value` and `u` hold numbers only. Text that a spreadsheet would take for a formula is led
    /// by an apostrophe.
    pub fn to_csv(&self) -> String {
        let mut sheet = Sheet(String::with_capacity(16 * 1024));
        sheet.text_row(&HEADER);
        let complete = if self.complete { "complete" } else { "incomplete" };
        sheet.line(Line {
            section: "report",
            name: &self.name,
            quantity: "verdict",
            verdict: self.verdict,
            note: &self.statement,
            ..Line::default()
        });
        for (quantity, verdict) in [("completeness", complete), ("data_verdict", self.data_verdict)] {
            sheet.line(Line { section: "report", name: &self.name, quantity, verdict, ..Line::default() });
        }
        let c = &self.counts;
        for (quantity, n) in [
            ("tests_violated", c.violated),
            ("tests_suspect", c.suspect),
            ("tests_undecided", c.undecided),
            ("tests_hold", c.holds),
            ("tests_unchecked", c.unchecked),
            ("warnings", c.warnings),
        ] {
            sheet.number("report", &self.name, quantity, n as f64);
        }
        for (section, findings) in
            [("violation", &self.violations), ("warning", &self.warnings), ("undecided", &self.undecided)]
        {
            for f in findings {
                sheet.finding(section, f);
            }
        }
        for u in &self.unchecked {
            let note = format!("{}: {}; would need {}", u.reason, u.detail, u.would_need);
            sheet.line(Line {
                section: "unchecked",
                name: &u.r#where,
                quantity: u.what,
                verdict: "unchecked",
                note: &note,
                ..Line::default()
            });
        }
        sheet.region("plant", &self.name, "", &self.plant.region);
        for (name, group) in &self.groups.0 {
            sheet.region("group", name, "", group);
        }
        for (name, component) in &self.components.0 {
            let ComponentReport { kind, region, profile, .. } = component;
            sheet.region("component", name, kind, region);
            if let Some(profile) = profile {
                sheet.profile(name, profile);
            }
            if let Some(entry) = self.plant.ranking.iter().find(|r| r.component == *name) {
                sheet.number("component", name, "exergy_balance.destruction_share", entry.share);
                if let Some(share) = entry.share_of_fuel {
                    sheet.number("component", name, "exergy_balance.destruction_share_of_fuel", share);
                }
            }
        }
        for (name, component) in &self.components.0 {
            for (cause, f) in &component.decomposition.0 {
                sheet.figure("component", name, &format!("decomposition.{cause}"), f, "", "");
            }
        }
        for o in &self.plant.omitted {
            let note = format!("{}; would need {}", o.detail, o.would_need);
            sheet.note("plant", &self.name, &format!("omitted.{}", o.what), &note);
        }
        for (name, flow) in &self.flows.0 {
            sheet.flow(name, flow);
        }
        for (name, holdup) in self.components.0.iter().filter_map(|(n, c)| c.holdup.as_ref().map(|h| (n, h)))
        {
            for (when, held) in [("initial", &holdup.initial), ("final", &holdup.r#final)] {
                for (quantity, f) in &held.totals.0 {
                    sheet.figure("component", name, &format!("holdup.{when}.{quantity}"), f, "", "");
                }
                for (n, content) in held.contents.iter().enumerate() {
                    let words = [Some(content.fluid.as_str()), content.phase];
                    let words = words.into_iter().flatten().collect::<Vec<_>>().join("; ");
                    for (quantity, f) in &content.figures.0 {
                        let quantity = format!("holdup.{when}.contents.{n}.{quantity}");
                        sheet.figure("component", name, &quantity, f, "", &words);
                    }
                }
            }
            if let Some(work) = &holdup.boundary_work {
                sheet.figure("component", name, "holdup.boundary_work", work, "", "");
            }
        }
        for a in &self.assumptions {
            sheet.note("assumption", &a.r#where, "", &a.statement);
        }
        for caution in &self.cautions {
            sheet.note("caution", "", "", caution);
        }
        let p = &self.provenance;
        for (quantity, text) in [
            ("tool", p.tool.as_str()),
            ("edition", p.edition),
            ("description_sha256", &p.description_sha256),
            ("basis", p.basis),
            ("units", p.units),
            ("chemistry", p.chemistry),
            ("method", &p.method),
        ] {
            sheet.note("provenance", "", quantity, text);
        }
        for (name, f) in &p.formulations.0 {
            let text = format!("{}; {}; {}", f.formulation, f.source, f.range);
            sheet.note("provenance", name, "formulation", &text);
        }
        for (quantity, figure) in &p.environment.0 {
            sheet.figure("environment", "", quantity, figure, "", "");
        }
        sheet.0
    }
}

impl Sheet {
    fn text_row(&mut self, cells: &[&str]) {
        for (i, cell) in cells.iter().enumerate() {
            if i > 0 {
                self.0.push(',');
            }
            push_text(&mut self.0, cell);
        }
        self.0.push_str("\r\n");
    }

    fn line(&mut self, line: Line<'_>) {
        let value = line.value.map(number).unwrap_or_default();
        let u = line.u.map(number).unwrap_or_default();
        for text in [line.section, line.name, line.quantity] {
            push_text(&mut self.0, text);
            self.0.push(',');
        }
        // A number may begin with a minus: it is no formula.
        self.0.push_str(&value);
        self.0.push(',');
        push_text(&mut self.0, line.unit);
        self.0.push(',');
        self.0.push_str(&u);
        self.0.push(',');
        push_text(&mut self.0, line.verdict);
        self.0.push(',');
        push_text(&mut self.0, line.note);
        self.0.push_str("\r\n");
    }

    fn figure(&mut self, section: &str, name: &str, quantity: &str, f: &Figure, verdict: &str, note: &str) {
        let (value, unit, u) = (Some(f.value), f.unit, Some(f.u));
        self.line(Line { section, name, quantity, value, unit, u, verdict, note });
    }

    fn number(&mut self, section: &str, name: &str, quantity: &str, value: f64) {
        self.line(Line { section, name, quantity, value: Some(value), unit: "1", ..Line::default() });
    }

    fn note(&mut self, section: &str, name: &str, quantity: &str, note: &str) {
        self.line(Line { section, name, quantity, note, ..Line::default() });
    }

    fn finding(&mut self, section: &str, f: &Finding) {
        let name = f.component.as_deref().unwrap_or(&f.r#where);
        let line = Line {
            section,
            name,
            quantity: f.rule,
            verdict: f.verdict,
            note: &f.statement,
            ..Line::default()
        };
        match &f.value {
            Some(v) => {
                self.line(Line { value: Some(v.value), unit: v.unit, u: Some(v.u), ..line });
            }
            None => self.line(line),
        }
        if let Some(limit) = &f.limit {
            self.figure(section, name, &format!("{}.limit", f.rule), limit, "", "");
        }
        for (word, x) in
            [("z", f.z), ("p_adjusted", f.p_adjusted), ("probability_negative", f.probability_negative)]
        {
            self.number(section, name, &format!("{}.{word}", f.rule), x);
        }
        for (word, text) in [
            ("where", f.r#where.clone()),
            ("authority", f.authority.to_owned()),
            ("severity", f.severity.to_owned()),
            ("covers", f.covers.join("; ")),
            ("conditional_on", f.conditional_on.join("; ")),
            ("causes", f.causes.join("; ")),
            ("source", f.source.to_owned()),
        ] {
            if !text.is_empty() {
                self.note(section, name, &format!("{}.{word}", f.rule), &text);
            }
        }
    }

    fn region(&mut self, section: &str, name: &str, kind: &str, region: &RegionReport) {
        let verdict = region.verdict;
        let note = if region.at_limit { "identically reversible" } else { "" };
        self.line(Line { section, name, quantity: "verdict", verdict, note, ..Line::default() });
        if !kind.is_empty() {
            self.note(section, name, "kind", kind);
        }
        let mut balance = |word: &str, b: &BalanceReport| {
            for (part, f) in [("in", &b.r#in), ("out", &b.out), ("residual", &b.residual)] {
                self.figure(section, name, &format!("{word}.{part}"), f, verdict, "");
            }
            self.number(section, name, &format!("{word}.closure"), b.closure);
        };
        if let Some(b) = &region.mass_balance {
            balance("mass_balance", b);
        }
        for (element, b) in &region.element_balance.0 {
            balance(&format!("element_balance.{element}"), b);
        }
        if let Some(b) = &region.energy_balance {
            balance("energy_balance", b);
        }
        if let Some(e) = &region.entropy_balance {
            for (part, f) in [
                ("in", Some(&e.r#in)),
                ("out", Some(&e.out)),
                ("generation", Some(&e.generation)),
                ("generation_strict", e.generation_strict.as_ref()),
            ] {
                if let Some(f) = f {
                    self.figure(section, name, &format!("entropy_balance.{part}"), f, verdict, "");
                }
            }
            self.number(section, name, "entropy_balance.z", e.z);
        }
        if let Some(e) = &region.exergy_balance {
            for (part, f) in [
                ("in", Some(&e.r#in)),
                ("out", Some(&e.out)),
                ("destruction", Some(&e.destruction)),
                ("residual", Some(&e.residual)),
                ("fuel", e.fuel.as_ref()),
                ("product", e.product.as_ref()),
                ("loss", e.loss.as_ref()),
                ("free", e.free.as_ref()),
                ("efficiency", e.efficiency.as_ref()),
            ] {
                if let Some(f) = f {
                    self.figure(section, name, &format!("exergy_balance.{part}"), f, verdict, "");
                }
            }
            if let Some(reason) = e.no_efficiency {
                self.note(section, name, "exergy_balance.no_efficiency", reason);
            }
        }
        for (quantity, f) in &region.performance.0 {
            self.figure(section, name, &format!("performance.{quantity}"), f, verdict, "");
        }
    }

    fn profile(&mut self, name: &str, p: &ProfileReport) {
        let section = "component";
        self.note(section, name, "profile.arrangement", p.arrangement);
        self.note(section, name, "profile.note", &p.note);
        let crossed = p.crossed.as_ref();
        for (word, f) in [
            ("duty", Some(&p.duty)),
            ("given_off", p.given_off.as_ref()),
            ("pinch.difference", Some(&p.pinch.difference)),
            ("pinch.duty", Some(&p.pinch.duty)),
            ("pinch.hot", Some(&p.pinch.hot)),
            ("pinch.cold", Some(&p.pinch.cold)),
            ("crossed.from", crossed.map(|c| &c.from)),
            ("crossed.to", crossed.map(|c| &c.to)),
            ("crossed.generation", crossed.map(|c| &c.generation)),
            ("conductance", p.conductance.as_ref()),
            ("log_mean_difference", p.log_mean_difference.as_ref()),
        ] {
            if let Some(f) = f {
                self.figure(section, name, &format!("profile.{word}"), f, "", "");
            }
        }
        if let Some(effectiveness) = p.effectiveness {
            self.number(section, name, "profile.effectiveness", effectiveness);
        }
        // A place has three figures, told apart by their number.
        let (axis, temperature) = (p.pinch.duty.unit, p.pinch.hot.unit);
        for (n, point) in p.points.iter().enumerate() {
            for (word, x, unit) in [
                ("duty", point.duty, axis),
                ("hot", point.hot, temperature),
                ("cold", point.cold, temperature),
            ] {
                let quantity = format!("profile.points.{n}.{word}");
                self.line(Line {
                    section,
                    name,
                    quantity: &quantity,
                    value: Some(x),
                    unit,
                    ..Line::default()
                });
            }
        }
    }

    fn flow(&mut self, name: &str, flow: &FlowReport) {
        let outside = || "outside".to_owned();
        let words = [Some(flow.kind), flow.form, flow.fluid.as_deref(), flow.phase, Some(flow.origin)];
        let words: Vec<&str> = words.into_iter().flatten().collect();
        let (from, to) = (flow.from.clone().unwrap_or_else(outside), flow.to.clone().unwrap_or_else(outside));
        self.note("flow", name, "course", &format!("from {from} to {to}; {}", words.join("; ")));
        for (quantity, f) in &flow.figures.0 {
            self.figure("flow", name, quantity, f, "", "");
        }
        for (part, f) in &flow.exergy.0 {
            self.figure("flow", name, &format!("exergy.{part}"), f, "", "");
        }
    }
}

/// A number that reads back the same: plain where short, else with an exponent.
fn number(x: f64) -> String {
    if !x.is_finite() {
        return String::new();
    }
    if x == 0.0 || (1e-5..1e15).contains(&x.abs()) { format!("{x}") } else { format!("{x:e}") }
}

/// Appends a text cell, quoted where RFC 4180 asks for it.
fn push_text(out: &mut String, text: &str) {
    // What begins like this is run by spreadsheets, at times after trimming blanks.
    let formula = text.trim_start().chars().next().is_some_and(|c| "=+-@＝＋－＠|%".contains(c))
        || text.starts_with(['\t', '\r', '\n']);
    let quoted = text.contains([',', '"', '\r', '\n', ';', '\t']) || text.trim() != text;
    if quoted {
        out.push('"');
    }
    if formula {
        out.push('\'');
    }
    for c in text.chars() {
        match c {
            '"' => out.push_str("\"\""),
            // A null would end the cell for many readers.
            '\0' => out.push('\u{fffd}'),
            c => out.push(c),
        }
    }
    if quoted {
        out.push('"');
    }
}
