//! The report as one page that stands alone: it loads nothing and runs nothing.

use super::grid::{self, Align, Grid};
use super::markup::escaped;
use super::{Finding, Report, charts, diagram, prose};
use std::fmt::{Result, Write};

/// The one style sheet. It holds nothing of the description.
const STYLE: &str = include_str!("page.css");

/// The page allows itself only its own style, whoever serves it.
const POLICY: &str = "default-src 'none'; style-src 'unsafe-inline'; base-uri 'none'; form-action 'none'";

impl Report {
    /// The report as a self-contained HTML page: no script, nothing loaded, every text of the
    /// description escaped.
    pub fn to_html(&self) -> String {
        let mut out = String::with_capacity(64 * 1024);
        // Writing to a String cannot fail.
        let _ = self.write_page(&mut out);
        out
    }

    fn write_page(&self, out: &mut String) -> Result {
        let name = if self.name.trim().is_empty() { "Process without a name" } else { &self.name };
        let name = escaped(name);
        write!(
            out,
            "<!doctype html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n\
             <meta http-equiv=\"Content-Security-Policy\" content=\"{POLICY}\">\n\
             <meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n\
             <meta name=\"color-scheme\" content=\"light dark\">\n\
             <title>{}: {name}</title>\n<style>\n{STYLE}</style>\n</head>\n<body>\n<main>\n",
            prose::verdict(self.verdict)
        )?;
        writeln!(out, "<p class=\"kicker\">Second law of thermodynamics</p>\n<h1><bdi>{name}</bdi></h1>")?;
        self.write_verdict(out)?;
        self.write_findings(out)?;
        self.write_drawings(out)?;
        for grid in grid::all(self) {
            self.write_grid(out, &grid)?;
        }
        self.set_unchecked(out)?;
        self.write_cautions(out)?;
        self.write_provenance(out)?;
        out.push_str("</main>\n</body>\n</html>\n");
        Ok(())
    }

    fn write_verdict(&self, out: &mut String) -> Result {
        let worst = self.violations.first();
        let verdict = self.verdict;
        writeln!(
            out,
            "<section class=\"verdict {verdict}\" aria-label=\"Verdict\">\n<p class=\"word\">{} {}</p>\n\
             <p class=\"why\">{}</p>",
            prose::sign(verdict),
            prose::verdict(verdict),
            escaped(&self.statement)
        )?;
        let shown = worst.or(self.undecided.first());
        if let Some(strip) = shown.and_then(|f| charts::strip("strip", f)) {
            writeln!(out, "{strip}")?;
        }
        if let Some(text) = shown.and_then(prose::certainty) {
            // What is undecided is not named by the statement.
            let of = if worst.is_none() { shown } else { None };
            let of = of.map_or(String::new(), |f| format!("{}: ", escaped(&prose::place(&f.r#where))));
            writeln!(out, "<p>{of}{}</p>", escaped(&text))?;
        }
        let complete = if self.complete {
            "every test of law that applies was made"
        } else {
            "some tests of law could not be made"
        };
        writeln!(
            out,
            "<ul class=\"facts\"><li>{}</li><li>{complete}</li><li>{}</li></ul>\n</section>",
            prose::counts(self),
            prose::data_clause(self)
        )
    }

    fn write_findings(&self, out: &mut String) -> Result {
        for (title, findings) in
            [("Violations", &self.violations), ("Warnings", &self.warnings), ("Undecided", &self.undecided)]
        {
            if findings.is_empty() {
                continue;
            }
            writeln!(out, "<section>\n<h2>{title}</h2>")?;
            for (n, f) in findings.iter().enumerate() {
                let headline = title == "Violations" && n == 0;
                write_finding(out, &format!("{}-{n}", title.to_lowercase()), f, headline)?;
            }
            out.push_str("</section>\n");
        }
        Ok(())
    }

    fn write_drawings(&self, out: &mut String) -> Result {
        if let Some(svg) = charts::destruction(self) {
            writeln!(
                out,
                "<section>\n<h2>Where exergy is destroyed</h2>\n<figure class=\"wide\">{svg}</figure>\n\
                 <p class=\"note small\">Bars: exergy destruction T0σ; lines: one standard uncertainty to each side. \
                 Left of zero is impossible.</p>\n</section>"
            )?;
        }
        self.set_profiles(out)?;
        match diagram::sheet(self) {
            Some((svg, tall)) => {
                let class = if tall { "wide tall" } else { "wide sheet" };
                writeln!(
                    out,
                    "<section>\n<h2>Flow sheet</h2>\n<figure class=\"{class}\">{svg}</figure>\n<p class=\"legend\">"
                )?;
                for kind in ["material", "heat", "work", "radiation"] {
                    if self.flows.0.iter().any(|f| f.1.kind == kind) {
                        writeln!(
                            out,
                            "<span><svg width=\"34\" height=\"6\" viewBox=\"0 0 34 6\" aria-hidden=\"true\">\
                             <path d=\"M0 3L34 3\" class=\"flow {kind}\"/></svg>{kind}</span>"
                        )?;
                    }
                }
                out.push_str("</p>\n</section>\n");
            }
            None if !self.components.is_empty() => {
                out.push_str(
                    "<section>\n<h2>Flow sheet</h2>\n<p>There are too many components and flows for a drawing that \
                     could be read; the tables below hold all of them.</p>\n</section>\n",
                );
            }
            None => {}
        }
        Ok(())
    }

    /// The interiors of exchangers.
    fn set_profiles(&self, out: &mut String) -> Result {
        let profiles = || self.components.0.iter().filter_map(|(n, c)| c.profile.as_ref().map(|p| (n, p)));
        if profiles().next().is_none() {
            return Ok(());
        }
        out.push_str("<section>\n<h2>Temperatures inside exchangers</h2>\n");
        for (n, (name, p)) in profiles().enumerate() {
            writeln!(out, "<article class=\"profile\">\n<h3>{}</h3>", escaped(name))?;
            if let Some(svg) = charts::profile(&format!("profile-{n}"), name, p) {
                writeln!(out, "<figure class=\"wide\">{svg}</figure>")?;
            }
            writeln!(out, "<p class=\"small\">{}</p>\n</article>", escaped(&prose::profile(p)))?;
        }
        out.push_str("</section>\n");
        Ok(())
    }

    fn write_grid(&self, out: &mut String, grid: &Grid) -> Result {
        writeln!(out, "<section>\n<h2>{}</h2>\n<div class=\"wide\"><table>\n<thead><tr>", grid.title)?;
        for (head, align) in &grid.heads {
            let attributes = match align {
                Align::Left => "",
                Align::Right => " class=\"r\"",
                Align::Figure => " class=\"r\" colspan=\"2\"",
            };
            write!(out, "<th scope=\"col\"{attributes}>{}</th>", escaped(head))?;
        }
        out.push_str("</tr></thead>\n<tbody>\n");
        for (n, row) in grid.rows.iter().enumerate() {
            let sum = n + grid.sums >= grid.rows.len();
            out.push_str(if sum { "<tr class=\"sum\">" } else { "<tr>" });
            for (j, (cell, (head, align))) in row.iter().zip(&grid.heads).enumerate() {
                let cell = escaped(cell);
                match align {
                    _ if j == 0 => write!(out, "<th scope=\"row\">{cell}</th>")?,
                    Align::Left if head == "Verdict" => {
                        let word = cell.split(' ').nth(1).unwrap_or_default();
                        let class = if word == "reversible" { "holds" } else { word };
                        write!(out, "<td class=\"v {class}\">{cell}</td>")?;
                    }
                    Align::Left => write!(out, "<td>{cell}</td>")?,
                    Align::Right => write!(out, "<td class=\"r\">{cell}</td>")?,
                    Align::Figure => match cell.split_once(" ± ") {
                        Some((value, u)) => {
                            write!(out, "<td class=\"a\">{value}</td><td class=\"u\">± {u}</td>")?;
                        }
                        None => write!(out, "<td class=\"a\">{cell}</td><td class=\"u\"></td>")?,
                    },
                }
            }
            out.push_str("</tr>\n");
        }
        out.push_str("</tbody></table></div>\n</section>\n");
        Ok(())
    }

    fn set_unchecked(&self, out: &mut String) -> Result {
        for (title, groups) in [
            ("Not checked", prose::group_unchecked(&self.unchecked)),
            ("Left out", prose::group_omitted(self)),
        ] {
            if groups.is_empty() {
                continue;
            }
            writeln!(out, "<section>\n<h2>{title}</h2>\n<ul class=\"plain small\">")?;
            for g in groups {
                writeln!(
                    out,
                    "<li>{}: <span class=\"soft\">{}</span></li>",
                    escaped(&g.heading),
                    escaped(&g.places.join(", "))
                )?;
            }
            out.push_str("</ul>\n</section>\n");
        }
        let groups = prose::group_assumptions(self);
        if !groups.is_empty() {
            out.push_str("<section>\n<h2>Assumed</h2>\n<ul class=\"plain small\">\n");
            for (statement, places) in groups {
                writeln!(
                    out,
                    "<li>{} – <span class=\"soft\">{}</span></li>",
                    escaped(&statement),
                    escaped(&places.join(", "))
                )?;
            }
            out.push_str("</ul>\n</section>\n");
        }
        Ok(())
    }

    fn write_cautions(&self, out: &mut String) -> Result {
        if self.cautions.is_empty() {
            return Ok(());
        }
        out.push_str("<section>\n<h2>Cautions</h2>\n<div class=\"caution\"><ul>\n");
        for c in &self.cautions {
            writeln!(out, "<li>{}</li>", escaped(c))?;
        }
        out.push_str("</ul></div>\n</section>\n");
        Ok(())
    }

    fn write_provenance(&self, out: &mut String) -> Result {
        let p = &self.provenance;
        out.push_str("<section>\n<h2>Where the numbers come from</h2>\n<dl>\n");
        let environment: Vec<String> = p
            .environment
            .0
            .iter()
            .map(|(quantity, f)| format!("{} {}", prose::words(quantity), prose::figure(f)))
            .collect();
        let mut rows = vec![
            ("Made by".to_owned(), format!("{}, edition {}", p.tool, p.edition)),
            ("Description".to_owned(), format!("SHA-256 {}", p.description_sha256)),
            ("Basis, units".to_owned(), format!("{}, {}", p.basis, p.units)),
            ("Environment".to_owned(), format!("{}; chemistry {}", environment.join(", "), p.chemistry)),
            ("Method".to_owned(), p.method.clone()),
        ];
        rows.extend(p.formulations.0.iter().map(|(fluid, f)| {
            (fluid.clone(), format!("{}: {}. Range: {}", f.formulation, f.source, f.range))
        }));
        for (term, text) in rows {
            writeln!(out, "<dt>{}</dt><dd>{}</dd>", escaped(&term), escaped(&text))?;
        }
        out.push_str("</dl>\n</section>\n");
        Ok(())
    }
}

/// One finding. What the headline has told is not told again.
fn write_finding(out: &mut String, id: &str, f: &Finding, headline: bool) -> Result {
    let tone = if f.authority == "practice" { "practice" } else { f.verdict };
    writeln!(
        out,
        "<article class=\"finding {}\">\n<h3>{} – {} <span class=\"tag\">{}, {}</span></h3>",
        tone,
        escaped(&prose::title(f.rule)),
        escaped(&prose::place(&f.r#where)),
        f.authority,
        f.severity
    )?;
    if !headline {
        writeln!(out, "<p>{}</p>", escaped(&f.statement))?;
        if f.verdict != "undecided"
            && let Some(strip) = charts::strip(id, f)
        {
            writeln!(out, "{strip}")?;
        }
        if let Some(text) = prose::certainty(f) {
            writeln!(out, "<p>{}</p>", escaped(&text))?;
        }
    }
    out.push_str("<dl>");
    let names = |rules: &[&str]| rules.iter().map(|r| prose::words(r)).collect::<Vec<_>>().join(", ");
    let causes = if f.verdict == "undecided" { String::new() } else { f.causes.join(", ") };
    for (term, text) in [
        ("Usual causes", causes),
        ("Also seen by", names(&f.covers)),
        ("Depends on", names(&f.conditional_on)),
        ("Source", f.source.to_owned()),
    ] {
        if !text.is_empty() {
            write!(out, "<dt>{term}</dt><dd>{}</dd>", escaped(&text))?;
        }
    }
    out.push_str("</dl>\n</article>\n");
    Ok(())
}
