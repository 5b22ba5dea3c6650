//! Words and numbers as people read them: shared by the report as text and as a page.

use super::{Figure, Finding, ProfileReport, Report, Unchecked};

/// A number and its standard uncertainty, both with the digits that the uncertainty warrants:
/// two significant digits of the uncertainty, and the value to the same place
/// (JCGM 100:2008, 7.2.6).
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Digits {
    /// The value.
    pub value: String,
    /// The uncertainty; empty where it is none or below the last digit shown.
    pub u: String,
    /// Power of ten that both are to be multiplied by.
    pub exponent: i32,
}

/// Less than this, in any unit in use, is rounding noise.
const NOISE: f64 = 1e-12;

/// Most significant digits of a value, whatever its uncertainty claims.
const MOST_DIGITS: i32 = 6;

/// Significant digits of a value without uncertainty.
const EXACT_DIGITS: i32 = 5;

/// The digits of a value and its uncertainty.
pub(super) fn digits(value: f64, u: f64) -> Digits {
    let (value, u) = (if value.is_finite() { value } else { 0.0 }, if u.is_finite() { u.abs() } else { 0.0 });
    let value = if value.abs().max(u) < NOISE { 0.0 } else { value };
    let u = if u < NOISE { 0.0 } else { u };
    let largest = value.abs().max(u);
    let magnitude = order(largest);
    let exponent =
        if largest > 0.0 && !(-3..7).contains(&magnitude) { 3 * magnitude.div_euclid(3) } else { 0 };
    // Powers in two halves stay finite at the ends of the range.
    let scale = |x: f64| x * 10f64.powi(-exponent / 2) * 10f64.powi(-exponent + exponent / 2);
    let (value, u, magnitude) = (scale(value), scale(u), magnitude - exponent);
    if u > 0.0 {
        let wanted = 1 - order(rounded(u, 1 - order(u)));
        let places = wanted.min(MOST_DIGITS - 1 - magnitude);
        let shown = fixed(u, places);
        let u = if shown.chars().any(|c| ('1'..='9').contains(&c)) { shown } else { String::new() };
        return Digits { value: fixed(value, places), u, exponent };
    }
    let text = fixed(value, EXACT_DIGITS - 1 - magnitude);
    let text = if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.') } else { &text };
    Digits { value: text.to_owned(), u: String::new(), exponent }
}

/// Decimal order of magnitude.
fn order(x: f64) -> i32 {
    if x > 0.0 { x.log10().floor() as i32 } else { 0 }
}

/// Rounds to decimal places, which may be negative.
fn rounded(x: f64, places: i32) -> f64 {
    let places = places.clamp(-300, 300);
    if places >= 0 {
        let scale = 10f64.powi(places);
        (x * scale).round() / scale
    } else {
        let scale = 10f64.powi(-places);
        (x / scale).round() * scale
    }
}

/// A number to decimal places, without a minus before zeros.
fn fixed(x: f64, places: i32) -> String {
    let x = if x.is_finite() { rounded(x, places) } else { 0.0 };
    let text = format!("{:.*}", places.clamp(0, 12) as usize, x);
    match text.strip_prefix('-') {
        Some(zeros) if !zeros.chars().any(|c| ('1'..='9').contains(&c)) => zeros.to_owned(),
        _ => text,
    }
}

impl Digits {
    /// `value ± u`, with a common power of ten where there is one.
    pub fn text(&self) -> String {
        let pair =
            if self.u.is_empty() { self.value.clone() } else { format!("{} ± {}", self.value, self.u) };
        match self.exponent {
            0 => pair,
            n if self.u.is_empty() => format!("{pair}{}", power(n)),
            n => format!("({pair}){}", power(n)),
        }
    }

    /// The value alone.
    pub fn bare(&self) -> String {
        if self.exponent == 0 {
            self.value.clone()
        } else {
            format!("{}{}", self.value, power(self.exponent))
        }
    }
}

/// `×10⁶`.
fn power(exponent: i32) -> String {
    const RAISED: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    let digits = exponent.unsigned_abs().to_string();
    let raised = digits.chars().filter_map(|c| RAISED.get(c.to_digit(10)? as usize));
    let minus = if exponent < 0 { "⁻" } else { "" };
    format!("×10{minus}{}", raised.collect::<String>())
}

/// A unit as it is printed.
pub(super) fn unit(code: &str) -> String {
    if code == "1" {
        return String::new();
    }
    code.replace("delta degF", "°F")
        .replace("deg", "°")
        .replace("m3", "m³")
        .replace("ft3", "ft³")
        .replace("m2", "m²")
}

/// `-369.7 ± 8.6 kW`.
pub(super) fn figure(f: &Figure) -> String {
    with_unit(digits(f.value, f.u).text(), f.unit)
}

/// A figure without its uncertainty, but with no more digits than that warrants.
pub(super) fn bare_figure(f: &Figure) -> String {
    with_unit(digits(f.value, f.u).bare(), f.unit)
}

fn with_unit(number: String, code: &str) -> String {
    let unit = unit(code);
    if unit.is_empty() { number } else { format!("{number} {unit}") }
}

/// A share in per cent.
pub(super) fn percent(share: f64) -> String {
    format!("{} %", fixed(100.0 * share, 1))
}

/// User text without characters that steer a terminal or turn the direction of what follows.
pub(super) fn clean(text: &str) -> String {
    text.chars()
        .map(|c| {
            let steers = c.is_control()
                || matches!(c, '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}');
            if steers { '\u{fffd}' } else { c }
        })
        .collect()
}

/// What a JSON Pointer points at, in words.
pub(super) fn place(pointer: &str) -> String {
    let mut parts = pointer.split('/').skip(1).map(|p| p.replace("~1", "/").replace("~0", "~"));
    match (parts.next(), parts.next()) {
        (Some(section), Some(name))
            if matches!(section.as_str(), "components" | "flows" | "groups" | "fluids") =>
        {
            let rest: Vec<String> = parts.map(|p| p.replace('_', " ")).collect();
            if rest.is_empty() { clean(&name) } else { clean(&format!("{name}: {}", rest.join(" "))) }
        }
        (Some(section), None) => clean(&section),
        (Some(_), Some(_)) => clean(pointer.trim_start_matches('/')),
        (None, _) => "whole plant".to_owned(),
    }
}

/// A word of the interface (`heat_exchanger`, `negative-entropy-generation`) as it is read.
pub(super) fn words(code: &str) -> String {
    code.replace(['_', '-'], " ")
}

/// A word of the interface that may be followed by the name of a flow (`duty.flue-gas`).
pub(super) fn qualified(code: &str) -> String {
    match code.split_once('.') {
        Some((word, name)) => format!("{}, {}", words(word), clean(name)),
        None => words(code),
    }
}

/// A word of the interface with a capital.
pub(super) fn title(code: &str) -> String {
    let text = words(code);
    let mut chars = text.chars();
    chars.next().map(|c| c.to_uppercase().chain(chars).collect()).unwrap_or_default()
}

/// A verdict in words that stand alone.
pub(super) fn verdict(word: &str) -> &'static str {
    match word {
        "violated" => "Impossible",
        "suspect" => "Likely impossible",
        "undecided" => "Undecided",
        "holds" => "Holds",
        _ => "Not checked",
    }
}

/// A sign for a verdict, so that colour is never alone in telling it.
pub(super) fn sign(word: &str) -> char {
    match word {
        "violated" => '✕',
        "suspect" => '!',
        "undecided" => '?',
        "holds" => '✓',
        _ => '–',
    }
}

/// The data verdict as a clause.
pub(super) fn data_clause(report: &Report) -> &'static str {
    let sure = report
        .violations
        .iter()
        .chain(&report.warnings)
        .any(|f| f.authority == "data" && f.verdict == "violated");
    match report.data_verdict {
        "contradictory" if !sure => "likely contradictions between the data",
        "consistent" => "the data agree with each other",
        "contradictory" => "the data contradict each other",
        _ => "no redundant data to compare",
    }
}

/// How many tests ended how.
pub(super) fn counts(report: &Report) -> String {
    let c = &report.counts;
    let parts = [
        (c.violated, "violated"),
        (c.suspect, "suspect"),
        (c.undecided, "undecided"),
        (c.holds, "hold"),
        (c.unchecked, "not made"),
    ];
    let parts: Vec<String> =
        parts.iter().filter(|(n, _)| *n > 0).map(|(n, word)| format!("{n} {word}")).collect();
    if parts.is_empty() {
        "no tests of law apply".to_owned()
    } else {
        format!("tests of law: {}", parts.join(", "))
    }
}

/// How often, in words.
fn how_often(p: f64) -> String {
    if p < 1e-6 {
        "less than once in a million times".to_owned()
    } else if p < 0.2 {
        let times = 1.0 / p;
        format!("about once in {} times", fixed(times, 1 - order(times)))
    } else {
        format!("{} times in a hundred", fixed(100.0 * p, 0))
    }
}

/// How sure a finding is, in one sentence; nothing where no probability speaks.
pub(super) fn certainty(f: &Finding) -> Option<String> {
    let just = match f.authority {
        "law" => "a process that is only just possible",
        "data" => "data that agree",
        _ => return None,
    };
    // A plain contradiction (no figure that could be off by chance) needs no such sentence.
    if f.authority == "data" && f.value.is_none_or(|v| v.u == 0.0) {
        return None;
    }
    let distance = if f.z.abs() >= 1000.0 {
        "more than 1000 standard uncertainties from the limit".to_owned()
    } else {
        format!("{} standard uncertainties from the limit", fixed(f.z.abs(), 1))
    };
    let detectable = f.detectable.filter(|d| *d > 0.0).zip(f.value);
    let detectable = detectable.map(|(d, value)| {
        let d = Figure { value: d, u: 0.1 * d, unit: difference_unit(value.unit) };
        format!(" A violation of {} would be found nine times in ten.", bare_figure(&d))
    });
    Some(match f.verdict {
        "violated" => {
            format!("Sure: {just} would look like this by chance {} ({distance}).", how_often(f.p_adjusted))
        }
        "suspect" => {
            format!("Likely: {just} would look like this by chance {} ({distance}).", how_often(f.p_adjusted))
        }
        "undecided" => format!(
            "Open: the limit is broken with a probability of {}.{}",
            percent(f.probability_negative),
            detectable.unwrap_or_default()
        ),
        _ => return None,
    })
}

/// The unit of a difference of values in a unit.
fn difference_unit(code: &'static str) -> &'static str {
    match code {
        "degC" => "K",
        "degF" => "delta degF",
        other => other,
    }
}

/// Tests that were not made for one reason, together.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct UncheckedGroup {
    /// What was not tested, and why.
    pub heading: String,
    /// Where.
    pub places: Vec<String>,
}

/// Groups what was not checked: balances that were spent on unknowns by balance, the rest by
/// rule and reason.
pub(super) fn group_unchecked(unchecked: &[Unchecked]) -> Vec<UncheckedGroup> {
    let mut groups: Vec<UncheckedGroup> = Vec::new();
    // Balances that found several unknowns together, by these.
    let mut joint: Vec<UncheckedGroup> = Vec::new();
    for u in unchecked {
        let (heading, place) = if u.reason == "spent-on" {
            let balance = u.what.split('-').next().unwrap_or(u.what);
            let found = u.detail.strip_prefix("the balance was used to find the ").unwrap_or(&u.detail);
            if found.contains(", ") {
                let place = place(&u.r#where);
                match joint.iter_mut().find(|g| g.heading == found) {
                    Some(g) if g.places.contains(&place) => {}
                    Some(g) => g.places.push(place),
                    None => joint.push(UncheckedGroup { heading: found.to_owned(), places: vec![place] }),
                }
                continue;
            }
            (
                format!("{} balance, used to find an unknown and so no test any more", title(balance)),
                format!("{} ({})", place(&u.r#where), clean(found)),
            )
        } else {
            (format!("{}: {}", title(u.what), clean(&u.detail)), place(&u.r#where))
        };
        match groups.iter_mut().find(|g| g.heading == heading) {
            Some(g) => g.places.push(place),
            None => groups.push(UncheckedGroup { heading, places: vec![place] }),
        }
    }
    groups.extend(joint.into_iter().map(|g| {
        let of = match g.places.len() {
            1 => "Balances of 1 component used".to_owned(),
            n => format!("{n} components solved together"),
        };
        UncheckedGroup { heading: format!("{of} for: {}", clean(&g.heading)), places: g.places }
    }));
    groups
}

/// Figures of merit that were left out, and why: by the reason, each with what it is about.
pub(super) fn group_omitted(report: &Report) -> Vec<UncheckedGroup> {
    let mut groups: Vec<UncheckedGroup> = Vec::new();
    let mut add = |heading: String, place: String| match groups.iter_mut().find(|g| g.heading == heading) {
        Some(g) => g.places.push(place),
        None => groups.push(UncheckedGroup { heading, places: vec![place] }),
    };
    for o in &report.plant.omitted {
        add(clean(&o.detail), words(o.what));
    }
    for (name, c) in &report.components.0 {
        if let Some(reason) = c.region.exergy_balance.as_ref().and_then(|e| e.no_efficiency) {
            add(format!("No exergetic efficiency: {reason}"), clean(name));
        }
    }
    groups
}

/// Assumptions by statement, each with its places.
pub(super) fn group_assumptions(report: &Report) -> Vec<(String, Vec<String>)> {
    let mut groups: Vec<(String, Vec<String>)> = Vec::new();
    for a in &report.assumptions {
        let statement = clean(&a.statement);
        let place = place(&a.r#where);
        // The property is in the statement already; the name is what tells.
        let place = place.split(": ").next().unwrap_or(&place).to_owned();
        match groups.iter_mut().find(|g| g.0 == statement) {
            Some(g) if g.1.contains(&place) => {}
            Some(g) => g.1.push(place),
            None => groups.push((statement, vec![place])),
        }
    }
    groups
}

/// The interior of an exchanger in sentences.
pub(super) fn profile(p: &ProfileReport) -> String {
    let place = |f: &Figure| {
        if f.unit == "1" { format!("{} of the duty", percent(f.value)) } else { bare_figure(f) }
    };
    let mut out = format!(
        "Duty {}; smallest difference {}, where {} meets {}.",
        figure(&p.duty),
        figure(&p.pinch.difference),
        bare_figure(&p.pinch.hot),
        bare_figure(&p.pinch.cold)
    );
    if let Some(given) = &p.given_off {
        out.push_str(&format!(" The hot side gives off {}.", figure(given)));
    }
    if let Some(c) = &p.crossed {
        out.push_str(&format!(
            " Heat would run uphill from {} to {}, with σ = {}.",
            place(&c.from),
            place(&c.to),
            figure(&c.generation)
        ));
    }
    if let Some(ua) = &p.conductance {
        out.push_str(&format!(" U A = {}.", bare_figure(ua)));
    }
    if let Some(effectiveness) = p.effectiveness {
        out.push_str(&format!(" Effectiveness {}.", percent(effectiveness)));
    }
    format!("{out} {}", clean(&p.note))
}

/// Components as they are worth looking at: violations first, then by exergy destruction.
pub(super) fn component_order(report: &Report) -> Vec<usize> {
    let rank = |word: &str| match word {
        "violated" => 0,
        "suspect" => 1,
        _ => 2,
    };
    let destruction = |k: usize| {
        report
            .components
            .0
            .get(k)
            .and_then(|c| c.1.region.exergy_balance.as_ref())
            .map_or(0.0, |e| e.destruction.value)
    };
    let mut order: Vec<usize> = (0..report.components.0.len()).collect();
    order.sort_by(|&a, &b| {
        let of = |k: usize| report.components.0.get(k).map_or(2, |c| rank(c.1.region.verdict));
        of(a).cmp(&of(b)).then(destruction(b).total_cmp(&destruction(a)))
    });
    order
}

#[cfg(test)]
mod tests {
    use super::*;

    fn shown(value: f64, u: f64) -> String {
        digits(value, u).text()
    }

    #[test]
    fn what_is_solved_together_is_named_once() {
        let one = |name: &str, what| Unchecked {
            r#where: format!("/components/{name}"),
            what,
            reason: "spent-on",
            detail: "the balance was used to find the flow of a, flow of b".to_owned(),
            would_need: String::new(),
        };
        let groups = group_unchecked(&[
            one("x", "mass-imbalance"),
            one("x", "energy-imbalance"),
            one("y", "mass-imbalance"),
        ]);
        let [group] = groups.as_slice() else { panic!("{groups:?}") };
        assert_eq!(group.heading, "2 components solved together for: flow of a, flow of b");
        assert_eq!(group.places, ["x", "y"]);
    }

    #[test]
    fn rounding_noise_is_zero() {
        assert_eq!(shown(-14.552e-15, 0.0), "0");
        assert_eq!(shown(3.0, 1e-15), "3");
    }

    #[test]
    fn digits_follow_the_uncertainty() {
        assert_eq!(shown(-369.72, 8.62), "-369.7 ± 8.6");
        assert_eq!(shown(913.47, 22.1), "913 ± 22");
        assert_eq!(shown(1_493.3, 269.0), "1490 ± 270");
        assert_eq!(shown(-0.000_035_8, 0.010_35), "0.000 ± 0.010");
        assert_eq!(shown(12.0, 0.099_6), "12.00 ± 0.10");
        assert_eq!(shown(0.0, 0.0), "0");
        assert_eq!(shown(1.013_25, 0.0), "1.0133");
        assert_eq!(shown(400.0, 1e-9), "400.000");
    }

    #[test]
    fn far_magnitudes_share_a_power_of_ten() {
        assert_eq!(shown(41_234_567.0, 230_000.0), "(41.23 ± 0.23)×10⁶");
        assert_eq!(shown(-4.2e-6, 0.0), "-4.2×10⁻⁶");
        assert_eq!(shown(1e308, 0.0), "100×10³⁰⁶");
        assert_eq!(shown(f64::NAN, f64::INFINITY), "0");
        assert!(!shown(5e-324, 1e300).contains("inf"));
    }

    #[test]
    fn pointers_are_read_out() {
        assert_eq!(place("/components/a~1b"), "a/b");
        assert_eq!(place("/flows/live/mass_flow"), "live: mass flow");
        assert_eq!(place(""), "whole plant");
        assert_eq!(place("/environment"), "environment");
    }

    #[test]
    fn control_characters_are_replaced() {
        assert_eq!(clean("a\u{1b}[31m\u{202e}b"), "a\u{fffd}[31m\u{fffd}b");
    }
}
