//! The report as text for people at a terminal.

use super::{Finding, FlowReport, Report, prose};
use std::fmt::Write;

/// Widest line.
const WIDTH: usize = 100;

/// Widest name that shares a line with its figures.
const WIDEST_NAME: usize = 28;

/// Most places named for one reason; the rest are counted.
const MOST_PLACES: usize = 16;

impl Report {
    /// The report as plain text, at most 100 columns wide where names allow it.
    pub fn to_text(&self) -> String {
        let mut out = String::with_capacity(8 * 1024);
        // Writing to a String cannot fail.
        let _ = self.write_text(&mut out);
        out
    }

    fn write_text(&self, out: &mut String) -> std::fmt::Result {
        let name = prose::clean(&self.name);
        if !name.is_empty() {
            writeln!(out, "{}\n{}", wrapped(&name, 0, 0), "═".repeat(name.chars().count().clamp(8, WIDTH)))?;
        }
        let complete = if self.complete { "complete" } else { "incomplete" };
        writeln!(out, "Second law  {} ({complete})", self.verdict.to_uppercase())?;
        writeln!(out, "Data        {}", prose::data_clause(self.data_verdict))?;
        writeln!(out, "\n{}", wrapped(&self.headline(), 0, 0))?;
        writeln!(out, "({})", prose::counts(self))?;
        for (title, findings) in
            [("Violations", &self.violations), ("Warnings", &self.warnings), ("Undecided", &self.undecided)]
        {
            if !findings.is_empty() {
                heading(out, title)?;
            }
            for (n, f) in findings.iter().enumerate() {
                write_finding(out, n + 1, f)?;
            }
        }
        self.write_components(out)?;
        self.write_performance(out)?;
        self.write_unchecked(out)?;
        self.write_flows(out)?;
        if !self.cautions.is_empty() {
            heading(out, "Cautions")?;
            for c in &self.cautions {
                writeln!(out, "{}", wrapped(&format!("! {c}"), 0, 2))?;
            }
        }
        let p = &self.provenance;
        let hash = p.description_sha256.get(..16).unwrap_or(&p.description_sha256);
        writeln!(out, "\n{}, edition {}; description {hash}", p.tool, p.edition)
    }

    /// The verdict in a sentence; a violation is named here and told below.
    fn headline(&self) -> String {
        match self.violations.first() {
            Some(f) => {
                let short = format!("{}: {} (1 below).", prose::place(&f.r#where), prose::words(f.rule));
                prose::clean(&self.statement.replace(&f.statement, &short))
            }
            None => prose::clean(&self.statement),
        }
    }

    fn write_components(&self, out: &mut String) -> std::fmt::Result {
        let region = &self.plant.region;
        let unit =
            |code: Option<&'static str>| code.map_or(String::new(), |c| format!(" {}", prose::unit(c)));
        let regions = || self.components.0.iter().map(|c| &c.1.region).chain([region]);
        let entropy = regions().find_map(|r| r.entropy_balance.map(|e| e.generation.unit));
        let exergy = regions().find_map(|r| r.exergy_balance.as_ref().map(|e| e.destruction.unit));
        let mut table = Table::new(&[
            ("Component", Align::Left),
            ("Kind", Align::Left),
            ("Verdict", Align::Left),
            (&format!("σ{}", unit(entropy)), Align::Figure),
            (&format!("T0σ{}", unit(exergy)), Align::Figure),
            ("Share", Align::Right),
        ]);
        let mut row = |name: &str, kind: &str, region: &super::RegionReport, share: Option<f64>| {
            let sigma =
                region.entropy_balance.map(|e| prose::digits(e.generation.value, e.generation.u).text());
            let destruction = region.exergy_balance.as_ref().map(|e| e.destruction);
            let verdict = if region.at_limit {
                "reversible".to_owned()
            } else {
                format!("{} {}", prose::sign(region.verdict), region.verdict)
            };
            table.row(vec![
                prose::clean(name),
                prose::words(kind),
                verdict,
                sigma.unwrap_or_else(|| "–".to_owned()),
                destruction.map_or_else(|| "–".to_owned(), |d| prose::digits(d.value, d.u).text()),
                share.map_or_else(String::new, prose::percent),
            ]);
        };
        for k in prose::component_order(self) {
            if let Some((name, c)) = self.components.0.get(k) {
                let share = self.plant.ranking.iter().find(|r| r.component == *name).map(|r| r.share);
                row(name, c.kind, &c.region, share);
            }
        }
        for (name, group) in &self.groups.0 {
            row(name, "group", group, None);
        }
        if self.components.0.len() > 1 {
            row("whole plant", "", region, None);
        }
        heading(out, "Entropy generation and exergy destruction")?;
        table.write(out)
    }

    fn write_performance(&self, out: &mut String) -> std::fmt::Result {
        let mut table = Table::new(&[
            ("Of", Align::Left),
            ("Quantity", Align::Left),
            ("", Align::Figure),
            ("", Align::Left),
        ]);
        let components = self.components.0.iter().map(|(n, c)| (n.as_str(), &c.region));
        let groups = self.groups.0.iter().map(|(n, g)| (n.as_str(), g));
        for (name, region) in components.chain(groups).chain([("whole plant", &self.plant.region)]) {
            for (quantity, f) in &region.performance.0 {
                table.row(vec![
                    prose::clean(name),
                    prose::words(quantity),
                    prose::digits(f.value, f.u).text(),
                    prose::unit(f.unit),
                ]);
            }
        }
        if table.rows.is_empty() {
            return Ok(());
        }
        heading(out, "Performance")?;
        table.write(out)
    }

    fn write_unchecked(&self, out: &mut String) -> std::fmt::Result {
        let groups = prose::group_unchecked(&self.unchecked);
        if !groups.is_empty() {
            heading(out, "Not checked")?;
        }
        for g in groups {
            writeln!(out, "{}", wrapped(&format!("{}:", g.heading), 2, 4))?;
            writeln!(out, "{}", wrapped(&listed(&g.places), 4, 4))?;
        }
        let groups = prose::group_assumptions(self);
        if !groups.is_empty() {
            heading(out, "Assumed")?;
        }
        for (statement, places) in groups {
            writeln!(out, "{}", wrapped(&format!("{statement} – {}", listed(&places)), 2, 4))?;
        }
        Ok(())
    }

    fn write_flows(&self, out: &mut String) -> std::fmt::Result {
        let material: Vec<&(String, FlowReport)> =
            self.flows.0.iter().filter(|(_, f)| f.kind == "material").collect();
        const COLUMNS: [(&str, &[&str]); 6] = [
            ("m", &["mass_flow", "mass"]),
            ("T", &["temperature"]),
            ("p", &["pressure"]),
            ("h", &["enthalpy"]),
            ("s", &["entropy"]),
            ("e", &[]),
        ];
        let find = |f: &FlowReport, keys: &[&str]| {
            if keys.is_empty() {
                f.exergy.get("total").copied()
            } else {
                keys.iter().find_map(|k| f.figures.get(k).copied())
            }
        };
        if !material.is_empty() {
            heading(out, "Flows of material (digits as the uncertainty warrants)")?;
            let heads: Vec<(String, Align)> = COLUMNS
                .iter()
                .map(|(symbol, keys)| {
                    let unit = material.iter().find_map(|(_, f)| find(f, keys)).map_or("", |f| f.unit);
                    (format!("{symbol} {}", prose::unit(unit)).trim().to_owned(), Align::Right)
                })
                .collect();
            let mut all = vec![("Flow", Align::Left), ("Fluid", Align::Left)];
            all.extend(heads.iter().map(|(h, a)| (h.as_str(), *a)));
            let mut table = Table::new(&all);
            for (name, f) in &material {
                let mut row = vec![prose::clean(name), prose::clean(f.fluid.as_deref().unwrap_or(""))];
                row.extend(COLUMNS.iter().map(|(_, keys)| {
                    find(f, keys).map_or_else(|| "–".to_owned(), |x| prose::digits(x.value, x.u).bare())
                }));
                table.row(row);
            }
            table.write(out)?;
        }
        let mut table = Table::new(&[
            ("Flow", Align::Left),
            ("Kind", Align::Left),
            ("", Align::Figure),
            ("", Align::Left),
            ("At", Align::Right),
            ("Origin", Align::Left),
        ]);
        for (name, f) in self.flows.0.iter().filter(|(_, f)| f.kind != "material") {
            let rate = f.figures.get("power").or_else(|| f.figures.get("rate"));
            let at = f.figures.get("temperature").or_else(|| f.figures.get("mean_temperature"));
            let kind =
                f.fluid.as_deref().map_or_else(|| f.kind.to_owned(), |form| format!("{form} {}", f.kind));
            table.row(vec![
                prose::clean(name),
                prose::clean(&kind),
                rate.map_or_else(|| "–".to_owned(), |r| prose::digits(r.value, r.u).text()),
                rate.map_or_else(String::new, |r| prose::unit(r.unit)),
                at.map_or_else(String::new, prose::bare_figure),
                f.origin.to_owned(),
            ]);
        }
        if table.rows.is_empty() {
            return Ok(());
        }
        heading(out, "Heat and work")?;
        table.write(out)
    }
}

fn heading(out: &mut String, text: &str) -> std::fmt::Result {
    writeln!(out, "\n{text}\n{}", "─".repeat(text.chars().count()))
}

fn write_finding(out: &mut String, number: usize, f: &Finding) -> std::fmt::Result {
    let head = format!(
        "{number}. {} – {} [{}, {}]",
        prose::title(f.rule),
        prose::place(&f.r#where),
        f.authority,
        f.severity
    );
    writeln!(out, "{}", wrapped(&head, 0, 3))?;
    writeln!(out, "{}", wrapped(&prose::clean(&f.statement), 3, 3))?;
    if let Some(text) = prose::certainty(f) {
        writeln!(out, "{}", wrapped(&text, 3, 3))?;
    }
    let more = |out: &mut String, label: &str, list: Vec<String>| {
        if list.is_empty() {
            Ok(())
        } else {
            writeln!(out, "{}", wrapped(&format!("{label}: {}", list.join(", ")), 3, 5))
        }
    };
    more(out, "Also seen by", f.covers.iter().map(|r| prose::words(r)).collect())?;
    more(out, "Depends on", f.conditional_on.iter().map(|r| prose::words(r)).collect())?;
    if f.verdict != "undecided" {
        more(out, "Usual causes", f.causes.iter().map(|c| prose::clean(c)).collect())?;
    }
    Ok(())
}

/// Places in a row, the most of them by name.
fn listed(places: &[String]) -> String {
    let named = places.iter().take(MOST_PLACES).cloned().collect::<Vec<_>>().join(", ");
    match places.len().saturating_sub(MOST_PLACES) {
        0 => named,
        more => format!("{named} and {more} more"),
    }
}

/// Breaks a paragraph with an indent for its first line and one for the others.
fn wrapped(text: &str, first: usize, others: usize) -> String {
    let mut out = " ".repeat(first);
    let mut column = first;
    let mut fresh = true;
    for word in text.split_whitespace() {
        let length = word.chars().count();
        if !fresh && column + 1 + length > WIDTH {
            out.push('\n');
            out.push_str(&" ".repeat(others));
            column = others;
        } else if !fresh {
            out.push(' ');
            column += 1;
        }
        out.push_str(word);
        column += length;
        fresh = false;
    }
    out
}

#[derive(Clone, Copy, PartialEq)]
enum Align {
    Left,
    Right,
    /// Aligned at ±.
    Figure,
}

/// Columns as wide as what is in them.
struct Table {
    heads: Vec<(String, Align)>,
    rows: Vec<Vec<String>>,
}

impl Table {
    fn new(heads: &[(&str, Align)]) -> Table {
        Table { heads: heads.iter().map(|(h, a)| ((*h).to_owned(), *a)).collect(), rows: Vec::new() }
    }

    fn row(&mut self, cells: Vec<String>) {
        self.rows.push(cells);
    }

    /// Brings the figures of a column to one shape, padded around their ±.
    fn align_figures(&mut self) {
        for (j, (_, align)) in self.heads.iter().enumerate() {
            if *align != Align::Figure {
                continue;
            }
            let split = |cell: &str| {
                let (a, b) = cell.split_once(" ± ").map_or((cell, None), |(a, b)| (a, Some(b)));
                (a.chars().count(), b.map_or(0, |b| b.chars().count()))
            };
            let sizes: Vec<(usize, usize)> =
                self.rows.iter().map(|r| r.get(j).map_or((0, 0), |c| split(c))).collect();
            let left = sizes.iter().map(|s| s.0).max().unwrap_or(0);
            let right = sizes.iter().map(|s| if s.1 > 0 { s.1 + 3 } else { 0 }).max().unwrap_or(0);
            for (row, (a, b)) in self.rows.iter_mut().zip(sizes) {
                if let Some(cell) = row.get_mut(j) {
                    let tail = if b > 0 { b + 3 } else { 0 };
                    *cell = format!("{}{cell}{}", " ".repeat(left - a), " ".repeat(right - tail));
                }
            }
        }
    }

    fn write(mut self, out: &mut String) -> std::fmt::Result {
        self.align_figures();
        let width = |text: &str| text.chars().count();
        let widths: Vec<usize> = self
            .heads
            .iter()
            .enumerate()
            .map(|(j, (head, _))| {
                let cells = self.rows.iter().filter_map(|r| r.get(j)).map(|c| width(c));
                let widest = if j == 0 { cells.filter(|w| *w <= WIDEST_NAME).max() } else { cells.max() };
                widest.unwrap_or(0).max(width(head))
            })
            .collect();
        let line = |cells: &[String]| {
            let mut text = String::new();
            for (j, cell) in cells.iter().enumerate() {
                let (w, align) =
                    (widths.get(j).copied().unwrap_or(0), self.heads.get(j).map_or(Align::Left, |h| h.1));
                text.push_str("  ");
                let pad = " ".repeat(w.saturating_sub(width(cell)));
                if align == Align::Left {
                    text.push_str(cell);
                    text.push_str(&pad);
                } else {
                    text.push_str(&pad);
                    text.push_str(cell);
                }
            }
            text.trim_end().to_owned()
        };
        writeln!(out, "{}", line(&self.heads.iter().map(|h| h.0.clone()).collect::<Vec<_>>()))?;
        for row in &self.rows {
            let mut cells = row.clone();
            if let Some(first) = cells.first_mut().filter(|c| width(c) > WIDEST_NAME) {
                writeln!(out, "  {first}")?;
                first.clear();
            }
            writeln!(out, "{}", line(&cells))?;
        }
        Ok(())
    }
}
