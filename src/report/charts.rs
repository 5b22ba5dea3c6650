//! Drawings of figures with their uncertainty.

use super::markup::{Drawing, at, shortened};
use super::{Figure, Finding, ProfileReport, Report, prose};

/// Most bars; the others are summed up in one.
const MOST_BARS: usize = 30;

/// The figure of a finding against its limit on a line, with two standard uncertainties to each
/// side; `None` where there is nothing to compare.
pub(super) fn strip(id: &str, f: &Finding) -> Option<String> {
    let (value, limit) = (f.value?, f.limit?);
    if f.authority != "law" || value.unit != limit.unit {
        return None;
    }
    let (spread, apart) = (2.0 * value.u, value.value - limit.value);
    if spread + apart.abs() <= 0.0 {
        return None;
    }
    // A negative z is a violation: its side of the limit is forbidden.
    let forbidden_below = (apart < 0.0) == (f.z < 0.0);
    let (low, high) =
        (value.value.min(limit.value) - spread * 1.25, value.value.max(limit.value) + spread * 1.25);
    let reach = (high - low).max(f64::MIN_POSITIVE);
    let (low, reach) = (low - 0.12 * reach, 1.24 * reach);
    const WIDTH: f64 = 520.0;
    let x = |v: f64| WIDTH * (v - low) / reach;
    let (x_value, x_limit) = (x(value.value), x(limit.value));
    let description = format!(
        "{} against the limit {}; the side {} the limit is impossible.",
        prose::figure(&value),
        prose::bare_figure(&limit),
        if forbidden_below { "below" } else { "above" }
    );
    let mut d = Drawing::new(id, "The figure and its limit", &description);
    let (a, b) = if forbidden_below { (0.0, x_limit) } else { (x_limit, WIDTH) };
    d.rectangle((a, 22.0), (b - a, 20.0), 0.0, "forbidden");
    d.line((0.0, 32.0), (WIDTH, 32.0), "axis");
    d.line((x_limit, 16.0), (x_limit, 48.0), "limit");
    let whisker = (x(value.value - spread), x(value.value + spread));
    if value.u > 0.0 {
        d.line((whisker.0, 32.0), (whisker.1, 32.0), "whisker");
        for end in [whisker.0, whisker.1] {
            d.line((end, 27.0), (end, 37.0), "whisker");
        }
    }
    d.circle((x_value, 32.0), 5.0, "dot");
    let anchor = |x: f64| {
        if x < 0.2 * WIDTH {
            "start"
        } else if x > 0.8 * WIDTH {
            "end"
        } else {
            "middle"
        }
    };
    d.text((x_value, 13.0), "strong", anchor(x_value), &prose::figure(&value));
    d.text((x_limit, 61.0), "note", anchor(x_limit), &format!("limit {}", prose::bare_figure(&limit)));
    let word = if b - a > 90.0 { "impossible" } else { "" };
    let far = if forbidden_below { 6.0 } else { WIDTH - 6.0 };
    if (far - x_limit).abs() > 130.0 {
        d.text((far, 61.0), "note forbidden-word", if forbidden_below { "start" } else { "end" }, word);
    }
    Some(d.finish((WIDTH, 66.0)))
}

/// A bar: name, verdict, figure and share.
struct Bar<'a> {
    name: &'a str,
    verdict: &'a str,
    figure: Figure,
    share: f64,
}

/// Exergy destruction by component, the largest first.
pub(super) fn destruction(report: &Report) -> Option<String> {
    let ranking = &report.plant.ranking;
    let unit = ranking.first()?.destruction.unit;
    let verdict = |name: &str| report.components.get(name).map_or("unchecked", |c| c.region.verdict);
    // Violations stay in sight however many components there are.
    let (shown, others): (Vec<_>, Vec<_>) =
        ranking.iter().enumerate().partition(|(n, r)| *n < MOST_BARS || verdict(&r.component) == "violated");
    let mut bars: Vec<Bar<'_>> = shown
        .iter()
        .map(|(_, r)| Bar {
            name: &r.component,
            verdict: verdict(&r.component),
            figure: r.destruction,
            share: r.share,
        })
        .collect();
    let rest = format!("{} others", others.len());
    if !others.is_empty() {
        let value = others.iter().map(|(_, r)| r.destruction.value).sum();
        let share = others.iter().map(|(_, r)| r.share).sum();
        let figure = Figure { value, unit, u: 0.0 };
        bars.push(Bar { name: &rest, verdict: "holds", figure, share });
    }
    let low = bars.iter().map(|b| b.figure.value - b.figure.u).fold(0.0, f64::min);
    let high = bars.iter().map(|b| b.figure.value + b.figure.u).fold(0.0, f64::max);
    if high - low <= 0.0 {
        return None;
    }
    const NAMES: f64 = 190.0;
    const PLOT: f64 = 440.0;
    const FIGURES: f64 = 210.0;
    const PITCH: f64 = 24.0;
    let x = |v: f64| NAMES + PLOT * (v - low) / (high - low);
    let height = PITCH * bars.len() as f64 + 8.0;
    let lines: Vec<String> =
        bars.iter().map(|b| format!("{}: {}", b.name, prose::figure(&b.figure))).collect();
    let mut d = Drawing::new("bars", "Exergy destruction by component", &format!("{}.", lines.join("; ")));
    if low < 0.0 {
        d.rectangle((NAMES, 0.0), (x(0.0) - NAMES, height), 0.0, "forbidden");
    }
    for (n, bar) in bars.iter().enumerate() {
        let y = PITCH * n as f64 + 4.0;
        let (value, u) = (bar.figure.value, bar.figure.u);
        d.open(&format!("bar {}", bar.verdict), &format!("{}: {}", bar.name, prose::figure(&bar.figure)));
        let name = shortened(&prose::clean(bar.name), 26);
        d.text((NAMES - 8.0, y + 13.0), "name", "end", &name);
        let (a, b) = (x(value.min(0.0)), x(value.max(0.0)));
        d.rectangle((a, y + 2.0), ((b - a).max(1.0), 14.0), 0.0, "fill");
        if u > 0.0 {
            d.line((x(value - u), y + 9.0), (x(value + u), y + 9.0), "whisker");
        }
        d.text((NAMES + PLOT + FIGURES - 56.0, y + 13.0), "figures", "end", &prose::figure(&bar.figure));
        let share = match bar.share {
            share if share < 0.0 || bar.verdict == "violated" => "–".to_owned(),
            share => prose::percent(share),
        };
        d.text((NAMES + PLOT + FIGURES, y + 13.0), "figures", "end", &share);
        d.close();
    }
    d.line((x(0.0), 0.0), (x(0.0), height), "limit");
    Some(d.finish((NAMES + PLOT + FIGURES, height)))
}

/// Temperatures over the duty of an exchanger: what gives heat above what takes it. `None` where
/// there is no line to draw.
pub(super) fn profile(id: &str, name: &str, p: &ProfileReport) -> Option<String> {
    const LEFT: f64 = 56.0;
    const TOP: f64 = 26.0;
    const PLOT: (f64, f64) = (520.0, 230.0);
    let fold = |pick: &dyn Fn(&super::ProfilePoint) -> [f64; 2]| {
        let all = || p.points.iter().flat_map(pick).filter(|x| x.is_finite());
        (all().fold(f64::INFINITY, f64::min), all().fold(f64::NEG_INFINITY, f64::max))
    };
    let (left, right) = fold(&|q| [q.duty, q.duty]);
    let (cold, hot) = fold(&|q| [q.hot, q.cold]);
    let (across, up) = (ticks(left, right)?, ticks(cold, hot)?);
    let (low, high) = (up.first()?.min(cold), up.last()?.max(hot));
    let x = |duty: f64| LEFT + PLOT.0 * (duty - left) / (right - left);
    let y = |t: f64| TOP + PLOT.1 * (high - t) / (high - low);
    let unit = prose::unit(p.pinch.hot.unit);
    let description = format!(
        "Smallest difference {} where {} meets {}. {}",
        prose::figure(&p.pinch.difference),
        prose::bare_figure(&p.pinch.hot),
        prose::bare_figure(&p.pinch.cold),
        p.note
    );
    let mut d = Drawing::new(id, &format!("Temperatures inside {name}"), &description);
    if let Some(c) = &p.crossed {
        let (a, b) = (x(c.from.value), x(c.to.value));
        d.rectangle((a.min(b), TOP), ((b - a).abs(), PLOT.1), 0.0, "forbidden");
    }
    for t in up.iter().filter(|t| (low..=high).contains(*t)) {
        d.line((LEFT, y(*t)), (LEFT + PLOT.0, y(*t)), "grid");
        d.text((LEFT - 8.0, y(*t) + 4.0), "note", "end", &prose::digits(*t, 0.0).text());
    }
    for q in across.iter().filter(|q| (left..=right).contains(*q)) {
        d.line((x(*q), TOP + PLOT.1), (x(*q), TOP + PLOT.1 + 5.0), "axis");
        d.text((x(*q), TOP + PLOT.1 + 18.0), "note", "middle", &prose::digits(*q, 0.0).text());
    }
    d.line((LEFT, TOP + PLOT.1), (LEFT + PLOT.0, TOP + PLOT.1), "axis");
    let axis = if p.axis == "duty" {
        format!("duty, {}", prose::unit(p.duty.unit))
    } else {
        "share of the duty of each side".to_owned()
    };
    d.text((LEFT + PLOT.0, TOP + PLOT.1 + 34.0), "note", "end", &axis);
    d.text((LEFT - 8.0, TOP - 14.0), "note", "end", &unit);
    let curve = |pick: &dyn Fn(&super::ProfilePoint) -> f64| {
        let points: Vec<String> =
            p.points.iter().map(|q| format!("{} {}", at(x(q.duty)), at(y(pick(q))))).collect();
        format!("M{}", points.join("L"))
    };
    d.path(&curve(&|q| q.hot), "curve hot");
    d.path(&curve(&|q| q.cold), "curve cold");
    let named = left + 0.85 * (right - left);
    let (hot, cold) = (between(p, named, &|q| q.hot)?, between(p, named, &|q| q.cold)?);
    let (over, under) = (-7.0, 16.0);
    let lifts = if hot >= cold { (over, under) } else { (under, over) };
    for (t, word, lift) in [(hot, "hot", lifts.0), (cold, "cold", lifts.1)] {
        d.text((x(named), y(t) + lift), "strong", "middle", word);
    }
    let pinch = x(p.pinch.duty.value);
    d.line((pinch, y(p.pinch.hot.value)), (pinch, y(p.pinch.cold.value)), "limit");
    let anchor = if pinch < LEFT + 0.5 * PLOT.0 { "start" } else { "end" };
    let aside = if anchor == "start" { 8.0 } else { -8.0 };
    let (a, b) = (y(p.pinch.hot.value), y(p.pinch.cold.value));
    // Where there is no room between the curves, the figure stands under them.
    let height = if (a - b).abs() > 40.0 { 0.5 * (a + b) + 4.0 } else { a.max(b) + 17.0 };
    d.text((pinch + aside, height), "strong", anchor, &prose::figure(&p.pinch.difference));
    Some(d.finish((LEFT + PLOT.0 + 24.0, TOP + PLOT.1 + 42.0)))
}

/// A temperature of a profile at a duty.
fn between(p: &ProfileReport, duty: f64, pick: &dyn Fn(&super::ProfilePoint) -> f64) -> Option<f64> {
    p.points.windows(2).find_map(|pair| match pair {
        [a, b] if a.duty <= duty && duty <= b.duty && a.duty < b.duty => {
            Some(pick(a) + (pick(b) - pick(a)) * (duty - a.duty) / (b.duty - a.duty))
        }
        _ => None,
    })
}

/// Round numbers from below the lowest to above the highest, about five; `None` without a span.
fn ticks(low: f64, high: f64) -> Option<Vec<f64>> {
    let span = high - low;
    if !span.is_finite() || span <= 0.0 {
        return None;
    }
    let power = 10f64.powf((span / 5.0).log10().floor());
    let step = [1.0, 2.0, 5.0, 10.0].map(|m| m * power).into_iter().find(|s| span / s <= 6.0)?;
    let (first, last) = ((low / step).floor(), (high / step).ceil());
    // A span far below the magnitude has no steps that could be told apart.
    if step <= 0.0 || last - first > 12.0 {
        return None;
    }
    Some((0..=(last - first) as usize).map(|n| (first + n as f64) * step).collect())
}
