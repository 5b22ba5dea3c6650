//! The report as text for people.

use super::{Figure, Report};
use std::fmt::Write;

impl Report {
    /// The report as plain text, at most 100 columns wide where names allow it.
    pub fn to_text(&self) -> String {
        let mut out = String::new();
        // Writing to a String cannot fail.
        let _ = self.write_text(&mut out);
        out
    }

    fn write_text(&self, out: &mut String) -> std::fmt::Result {
        writeln!(out, "{}", self.name)?;
        let complete = if self.complete { "complete" } else { "incomplete" };
        writeln!(
            out,
            "Second law: {} ({complete})    Data: {}",
            self.verdict.to_uppercase(),
            self.data_verdict
        )?;
        writeln!(out, "{}", wrapped(&self.statement, 0))?;
        for (title, findings) in
            [("Violations", &self.violations), ("Warnings", &self.warnings), ("Undecided", &self.undecided)]
        {
            if findings.is_empty() {
                continue;
            }
            writeln!(out, "\n{title}")?;
            for f in findings {
                writeln!(out, "  {} [{}, {}] at {}", f.rule, f.authority, f.severity, place(&f.r#where))?;
                writeln!(out, "{}", wrapped(&f.statement, 4))?;
                if f.authority == "law" {
                    writeln!(
                        out,
                        "    z = {:.2}, adjusted p = {:.2e}, P(negative) = {:.4}",
                        f.z, f.p_adjusted, f.probability_negative
                    )?;
                }
                if !f.covers.is_empty() {
                    writeln!(out, "    also seen by: {}", f.covers.join(", "))?;
                }
                if !f.conditional_on.is_empty() {
                    writeln!(out, "    conditional on: {}", f.conditional_on.join(", "))?;
                }
                if f.verdict != "undecided" {
                    writeln!(out, "    usual causes: {}", f.causes.join("; "))?;
                }
            }
        }
        if !self.plant.ranking.is_empty() {
            writeln!(out, "\nExergy destruction")?;
            let width =
                self.plant.ranking.iter().map(|r| r.component.chars().count()).max().unwrap_or(0).max(9);
            for r in &self.plant.ranking {
                let entropy = self.components.get(&r.component).and_then(|c| c.region.entropy_balance);
                let sigma = entropy.map(|e| format!("σ = {}", shown(&e.generation))).unwrap_or_default();
                writeln!(
                    out,
                    "  {:width$}  {:>22}  {:>6.1} %   {sigma}",
                    r.component,
                    shown(&r.destruction),
                    100.0 * r.share,
                )?;
            }
        }
        if !self.unchecked.is_empty() {
            writeln!(out, "\nNot checked")?;
            for u in &self.unchecked {
                writeln!(out, "  {} at {} ({}): {}", u.what, place(&u.r#where), u.reason, u.detail)?;
            }
        }
        if !self.assumptions.is_empty() {
            writeln!(out, "\nAssumed")?;
            for a in &self.assumptions {
                writeln!(out, "  {}: {}", place(&a.r#where), a.statement)?;
            }
        }
        writeln!(out, "\nCautions")?;
        for c in &self.cautions {
            writeln!(out, "{}", wrapped(c, 2))?;
        }
        writeln!(
            out,
            "\n{}, edition {}, description {}",
            self.provenance.tool,
            self.provenance.edition,
            self.provenance.description_sha256.get(..16).unwrap_or_default()
        )
    }
}

fn place(pointer: &str) -> &str {
    if pointer.is_empty() { "the plant" } else { pointer }
}

/// A figure with as many digits as its uncertainty warrants, at most five significant ones.
fn shown(f: &Figure) -> String {
    let digits = if f.value == 0.0 {
        0
    } else {
        let magnitude = f.value.abs().log10().floor() as i32;
        (4 - magnitude).clamp(0, 8)
    };
    let value = format!("{:.*}", digits as usize, f.value);
    if f.u > 0.0 { format!("{value} ± {:.2e} {}", f.u, f.unit) } else { format!("{value} {}", f.unit) }
}

/// Breaks a paragraph at 96 columns with an indent.
fn wrapped(text: &str, indent: usize) -> String {
    let mut out = String::new();
    let mut column = 0;
    for word in text.split_whitespace() {
        let length = word.chars().count();
        if column == 0 {
            out.push_str(&" ".repeat(indent));
            column = indent;
        } else if column + 1 + length > 96 {
            out.push('\n');
            out.push_str(&" ".repeat(indent));
            column = indent;
        } else {
            out.push(' ');
            column += 1;
        }
        out.push_str(word);
        column += length;
    }
    out
}
