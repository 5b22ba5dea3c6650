//! Reports as people get them: what must be in them, and what must never be.

use super::*;
use crate::pipeline::{Cancel, check_bytes};
use crate::quantity::UnitSystem;

/// A violation, a contradiction, something undecided, spent balances, work, and a recycle.
const PLANT: &str = r#"{"name": "Bakery", "policy": {"literals": "measured"},
  "components": {
    "economiser": {"kind": "heat_exchanger", "arrangement": "counterflow",
      "sides": [{"in": ["flue-in"], "out": ["flue-out"]}, {"in": ["water-in"], "out": ["water-out"]}]},
    "recirculation": {"kind": "pump"},
    "letdown": {"kind": "valve"}},
  "flows": {
    "flue-in": {"kind": "material", "to": "economiser", "fluid": "air", "temperature": "210 degC", "pressure": "1.02 bar", "mass_flow": "1.5 kg/s"},
    "flue-out": {"kind": "material", "from": "economiser", "fluid": "air", "temperature": "60 degC", "pressure": "1.013 bar"},
    "return": {"kind": "material", "from": "letdown", "to": "recirculation", "fluid": "water", "temperature": "70 degC", "pressure": "3 bar"},
    "drive": {"kind": "work", "to": "recirculation", "power": "0.4 kW", "form": "electric"},
    "water-in": {"kind": "material", "from": "recirculation", "to": "economiser", "fluid": "water", "temperature": "70 degC", "pressure": "4 bar", "mass_flow": "0.6 kg/s"},
    "water-out": {"kind": "material", "from": "economiser", "to": "letdown", "fluid": "water", "temperature": "158 degC", "pressure": "3.8 bar"}}}"#;

fn check(description: &str, units: UnitSystem) -> Report {
    check_bytes(description.as_bytes(), &Default::default(), units, &Cancel::new())
        .unwrap_or_else(|failure| panic!("{failure:?}"))
}

fn plant() -> Report {
    let report = check(PLANT, UnitSystem::Metric);
    assert!(!report.violations.is_empty() && !report.warnings.is_empty() && !report.unchecked.is_empty());
    report
}

const HOSTILE: [&str; 6] = [
    "<script>alert('x')</script>",
    "\"><img src=\"http://example.invalid/x\" onerror=\"y\">",
    "=HYPERLINK(\"http://example.invalid\")",
    "\u{202e}txt.exe\u{0}\u{1b}[31m",
    "پمپ 🏭 & \u{fffe}",
    "a very, \"very\"\r\nlong name: @SUM(1+9)*cmd|' /C calc'!A0 ]]>--><!-- --> a very long name a very long name",
];

/// A report whose every free text is hostile.
fn hostile() -> Report {
    let mut report = plant();
    let mut n = 0;
    let mut next = || {
        n += 1;
        format!("{}{n}", HOSTILE[n % HOSTILE.len()])
    };
    report.name = next();
    report.statement = next();
    let names: Vec<(String, String)> =
        report.components.0.iter().map(|(name, _)| (name.clone(), next())).collect();
    let renamed = |name: &str| names.iter().find(|x| x.0 == name).map_or(name.to_owned(), |x| x.1.clone());
    for (name, _) in &mut report.components.0 {
        *name = renamed(name);
    }
    for entry in &mut report.plant.ranking {
        entry.component = renamed(&entry.component);
    }
    for (name, f) in &mut report.flows.0 {
        *name = next();
        f.from = f.from.as_deref().map(renamed);
        f.to = f.to.as_deref().map(renamed);
        f.fluid = Some(next());
    }
    for f in report.violations.iter_mut().chain(&mut report.warnings).chain(&mut report.undecided) {
        f.statement = next();
        f.r#where = format!("/components/{}", next());
        f.component = Some(next());
        f.causes = vec![next(), next()];
    }
    for u in &mut report.unchecked {
        (u.r#where, u.detail, u.would_need) = (format!("/flows/{}", next()), next(), next());
    }
    for a in &mut report.assumptions {
        (a.r#where, a.statement) = (next(), next());
    }
    for (name, f) in &mut report.provenance.formulations.0 {
        (*name, f.source) = (next(), next());
    }
    report
}

/// Walks the markup: tags nest and close, attributes are quoted, entities are known, and
/// nothing else opens a tag. Gives the elements with their attributes, and fails otherwise.
fn elements(markup: &str) -> Vec<(String, Vec<(String, String)>)> {
    const VOID: [&str; 1] = ["meta"];
    let mut out = Vec::new();
    let mut open: Vec<String> = Vec::new();
    let mut rest = markup;
    while let Some(start) = rest.find('<') {
        let text = &rest[..start];
        assert!(!text.contains('>') || open.last().is_some_and(|t| t == "style"), "stray > in {text:?}");
        for entity in text.split('&').skip(1) {
            let known = ["amp;", "lt;", "gt;", "quot;", "#39;"];
            assert!(known.iter().any(|k| entity.starts_with(k)), "entity in {text:?}");
        }
        let end = start + rest[start..].find('>').expect("a tag ends");
        let tag = &rest[start + 1..end];
        rest = &rest[end + 1..];
        if tag.starts_with('!') {
            assert_eq!(tag, "!doctype html");
            continue;
        }
        if let Some(name) = tag.strip_prefix('/') {
            assert_eq!(open.pop().as_deref(), Some(name), "closing tag");
            continue;
        }
        let (tag, closed) = tag.strip_suffix('/').map_or((tag, false), |t| (t, true));
        let (name, mut attributes) = tag.split_once(' ').unwrap_or((tag, ""));
        assert!(name.chars().all(|c| c.is_ascii_alphanumeric()), "tag {name:?}");
        let mut list = Vec::new();
        while !attributes.trim().is_empty() {
            let (key, after) = attributes.trim_start().split_once("=\"").expect("a quoted attribute");
            let (value, after) = after.split_once('"').expect("an ending quote");
            assert!(key.chars().all(|c| c.is_ascii_alphabetic() || "-:0123456789".contains(c)), "{key:?}");
            assert!(!value.contains('<'));
            list.push((key.to_owned(), value.to_owned()));
            attributes = after;
        }
        out.push((name.to_owned(), list));
        if !closed && !VOID.contains(&name) {
            open.push(name.to_owned());
        }
    }
    assert!(open.is_empty(), "{open:?} stay open");
    out
}

/// The page is well formed, loads nothing, runs nothing, and every number in it is one.
fn check_page(page: &str) {
    let mut ids = std::collections::HashSet::new();
    for (name, attributes) in elements(page) {
        assert!(
            !["script", "link", "img", "iframe", "object", "embed", "base", "form", "use", "image"]
                .contains(&name.as_str())
        );
        for (key, value) in attributes {
            assert!(
                !key.starts_with("on")
                    && !["src", "href", "style", "srcset", "xlink:href"].contains(&key.as_str()),
                "{key}"
            );
            if key == "id" {
                assert!(ids.insert(value.clone()), "id {value} twice");
            }
            if ["x", "y", "x1", "x2", "y1", "y2", "width", "height", "cx", "cy"].contains(&key.as_str())
                && name != "meta"
            {
                let x: f64 = value.parse().unwrap_or(f64::NAN);
                assert!(x.is_finite() && (x >= 0.0 || key != "width"), "{name} {key}={value}");
            }
        }
    }
    let style = &page[page.find("<style>").unwrap()..page.find("</style>").unwrap()];
    assert!(!style.contains("url(") && !style.contains("@import"));
    for word in page.split(|c: char| !c.is_alphanumeric()) {
        assert!(!["NaN", "inf", "Infinity", "null", "undefined"].contains(&word), "{word}");
    }
    let hidden = |c: char| (c.is_control() && c != '\n') || ('\u{202a}'..='\u{202e}').contains(&c);
    assert!(!page.contains(hidden));
}

#[test]
fn the_page_of_an_ordinary_plant_holds_everything() {
    for units in UnitSystem::ALL {
        let report = check(PLANT, *units);
        let page = report.to_html();
        check_page(&page);
        assert!(page.contains("✕ Impossible"));
        assert!(page.contains("Temperatures inside economiser") && page.contains("class=\"curve hot\""));
        for (name, _) in report.components.0.iter() {
            assert!(page.contains(&format!("<th scope=\"row\">{name}</th>")), "{name}");
        }
        for name in report.flows.0.iter().map(|f| &f.0) {
            assert!(page.matches(name.as_str()).count() >= 2, "{name} in drawing and table");
        }
        for f in report.violations.iter().chain(&report.warnings).chain(&report.undecided) {
            assert!(page.contains(&markup::escaped(&f.statement)));
        }
        for c in &report.cautions {
            assert!(page.contains(&markup::escaped(c)));
        }
        assert!(page.contains(&report.provenance.description_sha256));
    }
}

#[test]
fn hostile_text_stays_text_on_the_page() {
    let report = hostile();
    let page = report.to_html();
    check_page(&page);
    for (name, _) in &report.components.0 {
        assert!(page.contains(&markup::escaped(name)), "{name:?}");
    }
    assert!(!page.contains("<script") && !page.contains("<img"));
}

#[test]
fn text_is_narrow_and_clean() {
    let report = plant();
    let text = report.to_text();
    for line in text.lines() {
        assert!(line.chars().count() <= 100, "{line}");
    }
    for name in report.components.0.iter().map(|c| &c.0).chain(report.flows.0.iter().map(|f| &f.0)) {
        assert!(text.contains(name.as_str()), "{name}");
    }
    let order = [
        "VIOLATED",
        "Violations",
        "Warnings",
        "Entropy generation",
        "Not checked",
        "Assumed",
        "Flows of",
        "Cautions",
    ];
    let places: Vec<usize> =
        order.iter().map(|w| text.find(w).unwrap_or_else(|| panic!("{w} in {text}"))).collect();
    assert!(places.is_sorted(), "{places:?}");
    let text = hostile().to_text();
    assert!(!text.contains(|c: char| (c.is_control() && c != '\n') || c == '\u{202e}'));
}

/// Reads CSV as RFC 4180 has it.
fn parsed(csv: &str) -> Vec<Vec<String>> {
    let mut rows = vec![];
    let mut row = vec![];
    let mut cell = String::new();
    let mut quoted = false;
    let mut chars = csv.chars().peekable();
    while let Some(c) = chars.next() {
        match (quoted, c) {
            (true, '"') if chars.peek() == Some(&'"') => {
                chars.next();
                cell.push('"');
            }
            (true, '"') => quoted = false,
            (true, c) => cell.push(c),
            (false, '"') => {
                assert!(cell.is_empty(), "a quote inside of {cell:?}");
                quoted = true;
            }
            (false, ',') => row.push(std::mem::take(&mut cell)),
            (false, '\r') => {
                assert_eq!(chars.next(), Some('\n'));
                row.push(std::mem::take(&mut cell));
                rows.push(std::mem::take(&mut row));
            }
            (false, c) => cell.push(c),
        }
    }
    assert!(row.is_empty() && cell.is_empty() && !quoted);
    rows
}

#[test]
fn csv_reads_back() {
    let report = plant();
    let rows = parsed(&report.to_csv());
    assert_eq!(rows[0], ["section", "name", "quantity", "value", "unit", "u", "verdict", "note"]);
    assert!(rows.iter().all(|r| r.len() == 8));
    let find = |section: &str, name: &str, quantity: &str| {
        rows.iter().find(|r| r[0] == section && r[1] == name && r[2] == quantity).cloned()
    };
    for (name, c) in &report.components.0 {
        let row = find("component", name, "entropy_balance.generation").expect("a row");
        let sigma = c.region.entropy_balance.expect("a balance").generation;
        assert_eq!(row[3].parse(), Ok(sigma.value));
        assert_eq!((row[4].as_str(), row[5].parse()), (sigma.unit, Ok(sigma.u)));
        assert_eq!(row[6], c.region.verdict);
    }
    for (name, f) in &report.flows.0 {
        for (quantity, figure) in &f.figures.0 {
            assert_eq!(find("flow", name, quantity).expect("a row")[3].parse(), Ok(figure.value));
        }
    }
    assert_eq!(rows.iter().filter(|r| r[0] == "unchecked").count(), report.unchecked.len());
    assert_eq!(rows.iter().filter(|r| r[0] == "assumption").count(), report.assumptions.len());
}

#[test]
fn csv_holds_no_formula() {
    let rows = parsed(&hostile().to_csv());
    let mut guarded = 0;
    for row in rows.iter().skip(1) {
        for (j, cell) in row.iter().enumerate() {
            if j == 3 || j == 5 {
                assert!(cell.is_empty() || cell.parse::<f64>().is_ok_and(f64::is_finite), "{cell:?}");
            } else {
                assert!(!cell.trim_start().starts_with(['=', '+', '-', '@', '|', '%']), "{cell:?}");
                guarded += usize::from(cell.starts_with("'="));
            }
        }
    }
    assert!(guarded > 0);
}

#[test]
fn far_figures_stay_finite() {
    let mut report = plant();
    let extremes = [f64::MAX, f64::MIN, f64::MIN_POSITIVE, 5e-324, -0.0, f64::NAN, f64::INFINITY, 0.0];
    for (n, (_, c)) in report.components.0.iter_mut().enumerate() {
        if let Some(e) = &mut c.region.entropy_balance {
            e.generation.value = extremes[n % extremes.len()];
        }
    }
    for shift in 0..extremes.len() {
        let x = |n: usize| extremes[(n + shift) % extremes.len()];
        for (n, entry) in report.plant.ranking.iter_mut().enumerate() {
            (entry.destruction.value, entry.destruction.u, entry.share) = (x(n), x(n + 1), x(n + 2));
        }
        for f in report.violations.iter_mut().chain(&mut report.undecided) {
            f.value = f.value.map(|v| Figure { value: x(0), u: x(3), ..v });
            (f.z, f.p_adjusted, f.detectable) = (x(1), x(2), Some(x(4)));
        }
        for p in report.components.0.iter_mut().filter_map(|c| c.1.profile.as_mut()) {
            for (n, point) in p.points.iter_mut().enumerate() {
                (point.hot, point.cold) = (x(n), x(n + 3));
            }
            (p.pinch.hot.value, p.duty.value, p.effectiveness) = (x(5), x(6), Some(x(7)));
        }
        check_page(&report.to_html());
        let text = report.to_text();
        assert!(!text.contains("NaN") && !text.contains("inf "), "{text}");
        parsed(&report.to_csv());
    }
}

/// A chain of valves, with a recycle of work to each from a single shaft.
fn chain(count: usize) -> Report {
    let mut components = Vec::new();
    let mut flows = vec![
        r#""f0": {"kind": "material", "to": "c0", "fluid": "water", "pressure": "60 bar", "temperature": "450 degC", "mass_flow": "20 kg/s"}"#.to_owned(),
    ];
    for k in 0..count {
        components.push(format!(r#""c{k}": {{"kind": "valve"}}"#));
        let to = if k + 1 < count { format!(r#""to": "c{}", "#, k + 1) } else { String::new() };
        let p = 60.0 * 0.97f64.powi(k as i32 + 1);
        flows.push(format!(
            r#""f{}": {{"kind": "material", "from": "c{k}", {to}"fluid": "water", "pressure": "{p:.3} bar"}}"#,
            k + 1
        ));
    }
    check(
        &format!(r#"{{"components": {{{}}}, "flows": {{{}}}}}"#, components.join(","), flows.join(",")),
        UnitSystem::Metric,
    )
}

#[test]
fn a_large_plant_degrades() {
    let report = chain(60);
    let (svg, tall) = diagram::sheet(&report).expect("a drawing");
    assert!(tall);
    elements(&svg);
    for (name, _) in &report.components.0 {
        assert!(svg.contains(&format!(">{name}</text>")), "{name}");
    }
    let mut report = chain(8);
    let one = report.components.0[0].clone();
    while report.components.0.len() < 200 {
        report.components.push(format!("more-{}", report.components.0.len()), one.1.clone());
    }
    assert!(diagram::sheet(&report).is_none());
    let page = report.to_html();
    check_page(&page);
    assert!(page.contains("too many components") && page.contains("more-199"));
}
