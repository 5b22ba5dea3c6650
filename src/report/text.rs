//! The report as text for people at a terminal.

use super::grid::{self, Align, Grid};
use super::{Finding, Report, prose};
use crate::rules;
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
        writeln!(out, "Data        {}", prose::data_clause(self))?;
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
        let grids = grid::all(self);
        let (first, others): (Vec<Grid>, Vec<Grid>) = grids.into_iter().partition(|g| !g.is_of_flows());
        first.into_iter().try_for_each(|g| g.write(out))?;
        self.write_profiles(out)?;
        self.write_unchecked(out)?;
        others.into_iter().try_for_each(|g| g.write(out))?;
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
                let specific = |name: &&&str| {
                    rules::find(name).is_some_and(|i| rules::names_the_defect(rules::ALL[i].info()))
                };
                let plain = f.covers.iter().find(specific).copied().unwrap_or(f.rule);
                let short = format!("{}: {} (1 below).", prose::place(&f.r#where), prose::words(plain));
                prose::clean(&self.statement.replace(&f.statement, &short))
            }
            None => prose::clean(&self.statement),
        }
    }

    fn write_profiles(&self, out: &mut String) -> std::fmt::Result {
        let mut begun = false;
        for (name, c) in &self.components.0 {
            if let Some(p) = &c.profile {
                if !begun {
                    heading(out, "Inside exchangers")?;
                    begun = true;
                }
                writeln!(
                    out,
                    "{}",
                    wrapped(&format!("{}: {}", prose::clean(name), prose::profile(p)), 2, 4)
                )?;
            }
        }
        Ok(())
    }

    fn write_unchecked(&self, out: &mut String) -> std::fmt::Result {
        for (title, groups) in [
            ("Not checked", prose::group_unchecked(&self.unchecked)),
            ("Left out", prose::group_omitted(self)),
        ] {
            if !groups.is_empty() {
                heading(out, title)?;
            }
            for g in groups {
                writeln!(out, "{}", wrapped(&format!("{}:", g.heading), 2, 4))?;
                writeln!(out, "{}", wrapped(&listed(&g.places), 4, 4))?;
            }
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
    wrapped_at(WIDTH, text, first, others)
}

/// The same, at most `width` columns wide.
pub(crate) fn wrapped_at(width: usize, text: &str, first: usize, others: usize) -> String {
    let mut out = " ".repeat(first);
    let mut column = first;
    let mut fresh = true;
    for word in text.split_whitespace() {
        let length = word.chars().count();
        if !fresh && column + 1 + length > width {
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

impl Grid {
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
        heading(out, self.title)?;
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
