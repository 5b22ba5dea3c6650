//! The flow sheet as a drawing: components as boxes in the order of flow, flows as arrows.

mod layout;

use self::layout::{Ends, Kind, Layout};
use super::markup::{Drawing, at, shortened};
use super::{FlowReport, Report, grid, prose};
use std::collections::HashMap;
use std::fmt::Write;

/// More components than this, and flows lose their figures.
const ROOMY: usize = 40;

/// More components or flows than this, and there is no drawing that could be read.
const MOST_COMPONENTS: usize = 120;
const MOST_FLOWS: usize = 400;

/// Heights of a component and of a flow's name; room between layers; margin.
const BOX: f64 = 44.0;
const NAME: f64 = 30.0;
const SPACE: f64 = 20.0;
const MARGIN: f64 = 8.0;

/// The flow sheet as an SVG element, and whether it is too tall for one page of paper; `None` where
/// it would be too large to read.
pub(super) fn sheet(report: &Report) -> Option<(String, bool)> {
    let (components, flows) = (&report.components.0, &report.flows.0);
    if components.is_empty() || components.len() > MOST_COMPONENTS || flows.len() > MOST_FLOWS {
        return None;
    }
    let roomy = components.len() <= ROOMY;
    let index: HashMap<&str, usize> =
        components.iter().enumerate().map(|(k, (name, _))| (name.as_str(), k)).collect();
    let find = |name: &Option<String>| name.as_ref().and_then(|n| index.get(n.as_str()).copied());
    let ends: Vec<Ends> = flows.iter().map(|(_, f)| (find(&f.from), find(&f.to))).collect();
    let labels: Vec<Label> = flows.iter().map(|(name, f)| Label::of(name, f, roomy)).collect();
    let widths: Vec<f64> = labels.iter().map(Label::width).collect();
    let boxes: Vec<f64> = components
        .iter()
        .enumerate()
        .map(|(k, (name, c))| {
            let ports =
                |side: &dyn Fn(&Ends) -> Option<usize>| ends.iter().filter(|e| side(e) == Some(k)).count();
            let ports = ports(&|e| e.0).max(ports(&|e| e.1));
            let words =
                (7.4 * shown_name(name).chars().count() as f64).max(5.8 * c.kind.chars().count() as f64);
            (words + 42.0).max(104.0).max(26.0 * ports as f64)
        })
        .collect();
    let layout = Layout::of(&boxes, &ends, &widths);
    Some(Sheet { report, layout, labels }.draw())
}

fn shown_name(name: &str) -> String {
    shortened(&prose::clean(name), 24)
}

/// What stands on a flow's line.
struct Label {
    name: String,
    figures: String,
}

impl Label {
    fn of(name: &str, f: &FlowReport, roomy: bool) -> Label {
        let mut figures: Vec<String> = grid::main_figure(f).iter().map(prose::bare_figure).collect();
        if f.kind == "material" {
            figures.extend(f.figures.get("temperature").map(prose::bare_figure));
        }
        Label {
            name: shortened(&prose::clean(name), if roomy { 20 } else { 12 }),
            figures: if roomy { figures.join(" · ") } else { String::new() },
        }
    }

    fn width(&self) -> f64 {
        let name = 6.6 * self.name.chars().count() as f64;
        let figures = 5.6 * self.figures.chars().count() as f64;
        name.max(figures) + 14.0
    }
}

struct Sheet<'a> {
    report: &'a Report,
    layout: Layout,
    labels: Vec<Label>,
}

impl Sheet<'_> {
    fn draw(self) -> (String, bool) {
        let (tops, height) = self.heights();
        let width = self.layout.items.iter().map(|i| i.x + 0.5 * i.width).fold(0.0, f64::max) + 2.0 * MARGIN;
        let mut drawing = Drawing::new("sheet", "Flow sheet", &self.description());
        for course in 0..self.layout.courses.len() {
            self.draw_line(&mut drawing, course, &tops);
        }
        for item in &self.layout.items {
            let top = tops.get(item.layer).copied().unwrap_or(0.0);
            let left = item.x - 0.5 * item.width + MARGIN;
            match item.kind {
                Kind::Component(k) => self.draw_component(&mut drawing, k, (left, top), item.width),
                Kind::Flow(f) => self.draw_name(&mut drawing, f, (left, top), item.width),
                Kind::Bend => {}
            }
        }
        // Printed at a height of 250 mm, smaller letters than these could not be read.
        (drawing.finish((width, height)), height > 1600.0)
    }

    /// Upper edge of each layer, and the height of all.
    fn heights(&self) -> (Vec<f64>, f64) {
        let mut y = MARGIN;
        let mut tops = Vec::with_capacity(self.layout.layers.len());
        for (l, layer) in self.layout.layers.iter().enumerate() {
            tops.push(y);
            if !layer.is_empty() {
                y += if l % 2 == 1 { BOX } else { NAME } + SPACE;
            }
        }
        (tops, y - SPACE + MARGIN)
    }

    /// Where a line leaves or enters an item, spread along the edge of a component in the order
    /// of what the lines lead to.
    fn port(&self, item: usize, course: usize, below: bool) -> f64 {
        let Some(here) = self.layout.items.get(item) else { return 0.0 };
        if !matches!(here.kind, Kind::Component(_)) {
            return here.x + MARGIN;
        }
        let mut ports: Vec<(usize, f64)> = Vec::new();
        for (c, other) in self.layout.courses.iter().enumerate() {
            let near = if below {
                other.items.first().zip(other.items.get(1))
            } else {
                other.items.last().zip(other.items.iter().rev().nth(1))
            };
            if let Some((_, next)) = near.filter(|(end, _)| **end == item) {
                ports.push((c, self.layout.items.get(*next).map_or(0.0, |i| i.x)));
            }
        }
        ports.sort_by(|a, b| a.1.total_cmp(&b.1));
        let n = ports.iter().position(|p| p.0 == course).unwrap_or(0);
        let pitch = (here.width - 16.0) / ports.len().max(1) as f64;
        // A line that can fall straight does.
        let (low, high) = (here.x - 0.5 * here.width + 8.0 + pitch * n as f64, pitch);
        let wanted = ports.get(n).map_or(here.x, |p| p.1);
        let inset = 0.2 * high;
        wanted.clamp(low + inset, low + high - inset) + MARGIN
    }

    fn draw_line(&self, drawing: &mut Drawing, course: usize, tops: &[f64]) {
        let Some(c) = self.layout.courses.get(course) else { return };
        let kind = self.report.flows.0.get(c.flow).map_or("material", |f| f.1.kind);
        let height = |i: usize| match self.layout.items.get(i).map(|x| (x.kind, x.layer)) {
            Some((Kind::Component(_), _)) => BOX,
            Some((_, l)) if l % 2 == 1 => BOX,
            _ => NAME,
        };
        let top = |i: usize| {
            let layer = self.layout.items.get(i).map_or(0, |x| x.layer);
            tops.get(layer).copied().unwrap_or(0.0)
        };
        let (Some(&first), Some(&last)) = (c.items.first(), c.items.last()) else { return };
        // The arrow takes the last bit of the line.
        const HEAD: f64 = 7.0;
        let start = (self.port(first, course, true), top(first) + height(first));
        let end = (self.port(last, course, false), top(last));
        let mut data = format!("M{} {}", at(start.0), at(start.1 + if c.upward { HEAD } else { 0.0 }));
        let mut from = start;
        for (n, pair) in c.items.windows(2).enumerate() {
            let [_, to] = *pair else { continue };
            let is_last = n + 2 == c.items.len();
            let x = if is_last { end.0 } else { self.layout.items.get(to).map_or(0.0, |i| i.x) + MARGIN };
            let y = top(to) - if is_last && !c.upward { HEAD } else { 0.0 };
            let bend = 0.5 * (y - from.1);
            let _ = write!(
                data,
                "C{} {} {} {} {} {}",
                at(from.0),
                at(from.1 + bend),
                at(x),
                at(y - bend),
                at(x),
                at(y)
            );
            from = (x, y);
            if !is_last {
                // Through a bend, or behind a name.
                from.1 = top(to) + height(to);
                let _ = write!(data, "L{} {}", at(from.0), at(from.1));
            }
        }
        drawing.path(&data, &format!("flow {kind}"));
        let (tip, base) = if c.upward { (start, start.1 + HEAD + 1.0) } else { (end, end.1 - HEAD - 1.0) };
        let head = format!(
            "M{} {}L{} {}L{} {}Z",
            at(tip.0),
            at(tip.1),
            at(tip.0 - 4.0),
            at(base),
            at(tip.0 + 4.0),
            at(base)
        );
        drawing.path(&head, &format!("head {kind}"));
    }

    fn draw_component(&self, drawing: &mut Drawing, k: usize, (x, y): (f64, f64), width: f64) {
        let Some((name, c)) = self.report.components.0.get(k) else { return };
        let verdict = c.region.verdict;
        let title = format!("{name}: {}, {}", prose::words(c.kind), verdict);
        drawing.open(&format!("component {verdict}"), &title);
        drawing.rectangle((x, y), (width, BOX), 3.0, "box");
        drawing.rectangle((x, y), (20.0, BOX), 3.0, "tab");
        drawing.text((x + 10.0, y + 0.5 * BOX + 5.0), "sign", "middle", &prose::sign(verdict).to_string());
        drawing.text((x + 28.0, y + 19.0), "name", "start", &shown_name(name));
        drawing.text((x + 28.0, y + 34.0), "kind", "start", &prose::words(c.kind));
        drawing.close();
    }

    fn draw_name(&self, drawing: &mut Drawing, f: usize, (x, y): (f64, f64), width: f64) {
        let (Some((name, flow)), Some(label)) = (self.report.flows.0.get(f), self.labels.get(f)) else {
            return;
        };
        let mut title = format!("{name}: {}", flow.kind);
        for (quantity, figure) in &flow.figures.0 {
            let _ = write!(title, "; {} {}", prose::words(quantity), prose::figure(figure));
        }
        drawing.open("label", &title);
        drawing.rectangle((x, y), (width, NAME), NAME / 2.0, "chip");
        let middle = x + 0.5 * width;
        if label.figures.is_empty() {
            drawing.text((middle, y + 19.0), "name", "middle", &label.name);
        } else {
            drawing.text((middle, y + 13.0), "name", "middle", &label.name);
            drawing.text((middle, y + 25.0), "figures", "middle", &label.figures);
        }
        drawing.close();
    }

    /// The sheet in words, for who cannot see it.
    fn description(&self) -> String {
        let outside = |end: &Option<String>| end.clone().unwrap_or_else(|| "outside".to_owned());
        let lines =
            self.report.flows.0.iter().map(|(name, f)| {
                format!("{name} ({}) from {} to {}", f.kind, outside(&f.from), outside(&f.to))
            });
        format!("{}.", lines.collect::<Vec<_>>().join("; "))
    }
}
