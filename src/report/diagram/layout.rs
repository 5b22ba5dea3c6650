//! Layered layout of a flow sheet, top to bottom: after Sugiyama, Tagawa and Toda, Methods for
//! visual understanding of hierarchical system structures, IEEE Trans. SMC 11 (1981) 109.
//!
//! Components stand on odd layers. The name of a flow is an item of its own on an even layer, so
//! that names overlap nothing.

/// What stands at a place.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Kind {
    /// A component.
    Component(usize),
    /// The name of a flow.
    Flow(usize),
    /// A place that a long line passes.
    Bend,
}

/// Something with a place.
#[derive(Clone, Debug)]
pub(super) struct Item {
    /// What it is.
    pub kind: Kind,
    /// Layer, from the top.
    pub layer: usize,
    /// Width.
    pub width: f64,
    /// Horizontal centre.
    pub x: f64,
    above: Vec<usize>,
    below: Vec<usize>,
}

/// The course of a flow: items from top to bottom.
#[derive(Clone, Debug)]
pub(super) struct Course {
    /// The flow.
    pub flow: usize,
    /// Items from the highest to the lowest.
    pub items: Vec<usize>,
    /// Whether it flows from the lowest to the highest: a recycle.
    pub upward: bool,
}

/// The layout.
#[derive(Clone, Debug, Default)]
pub(super) struct Layout {
    /// Everything that has a place; the components first.
    pub items: Vec<Item>,
    /// Items of each layer from left to right.
    pub layers: Vec<Vec<usize>>,
    /// The flows.
    pub courses: Vec<Course>,
}

/// A flow by the components at its ends.
pub(super) type Ends = (Option<usize>, Option<usize>);

/// Gap between neighbours.
const GAP: f64 = 16.0;

/// Rounds of ordering and of placing.
const ROUNDS: usize = 10;

impl Layout {
    /// Lays out components and flows of given widths. Flows from a component to itself have no
    /// place.
    pub fn of(components: &[f64], flows: &[Ends], widths: &[f64]) -> Layout {
        let ranks = ranks(components.len(), flows);
        let mut layout = Layout::default();
        for (k, &width) in components.iter().enumerate() {
            let layer = 2 * ranks.get(k).copied().unwrap_or(0) + 1;
            layout.add(Kind::Component(k), layer, width);
        }
        for (f, ends) in flows.iter().enumerate() {
            let width = widths.get(f).copied().unwrap_or(0.0);
            layout.thread(f, *ends, width);
        }
        layout.order();
        layout.place();
        layout
    }

    fn add(&mut self, kind: Kind, layer: usize, width: f64) -> usize {
        let id = self.items.len();
        self.items.push(Item { kind, layer, width, x: 0.0, above: Vec::new(), below: Vec::new() });
        if self.layers.len() <= layer {
            self.layers.resize(layer + 1, Vec::new());
        }
        if let Some(l) = self.layers.get_mut(layer) {
            l.push(id);
        }
        id
    }

    fn layer(&self, item: usize) -> usize {
        self.items.get(item).map_or(0, |i| i.layer)
    }

    /// Leads a flow through the layers between its ends.
    fn thread(&mut self, f: usize, ends: Ends, width: f64) {
        let (items, upward) = match ends {
            (None, Some(to)) => {
                let name = self.add(Kind::Flow(f), self.layer(to).saturating_sub(1), width);
                (vec![name, to], false)
            }
            (Some(from), None) => {
                let name = self.add(Kind::Flow(f), self.layer(from) + 1, width);
                (vec![from, name], false)
            }
            (Some(from), Some(to)) if self.layer(from) != self.layer(to) => {
                let upward = self.layer(from) > self.layer(to);
                let (high, low) = if upward { (to, from) } else { (from, to) };
                // The name stands near the source.
                let (top, bottom) = (self.layer(high) + 1, self.layer(low));
                let named = if upward { bottom - 1 } else { top };
                let mut items = vec![high];
                for layer in top..bottom {
                    let (kind, width) =
                        if layer == named { (Kind::Flow(f), width) } else { (Kind::Bend, 4.0) };
                    items.push(self.add(kind, layer, width));
                }
                items.push(low);
                (items, upward)
            }
            _ => return,
        };
        for pair in items.windows(2) {
            if let [a, b] = *pair {
                if let Some(i) = self.items.get_mut(a) {
                    i.below.push(b);
                }
                if let Some(i) = self.items.get_mut(b) {
                    i.above.push(a);
                }
            }
        }
        self.courses.push(Course { flow: f, items, upward });
    }

    /// Orders each layer by the mean place of its neighbours; keeps the order with fewest crossings.
    fn order(&mut self) {
        let mut best = (self.crossings(), self.layers.clone());
        for round in 0..ROUNDS {
            let down = round % 2 == 0;
            let count = self.layers.len();
            for step in 0..count {
                let l = if down { step } else { count - 1 - step };
                let ranks = self.ranks_in_layers();
                let mean = |list: &[usize]| {
                    let sum: f64 = list.iter().filter_map(|i| ranks.get(*i)).sum();
                    if list.is_empty() { None } else { Some(sum / list.len() as f64) }
                };
                let key = |i: usize| {
                    let item = self.items.get(i);
                    let near = item.and_then(|x| mean(if down { &x.above } else { &x.below }));
                    let far = item.and_then(|x| mean(if down { &x.below } else { &x.above }));
                    near.or(far).unwrap_or(0.5)
                };
                if let Some(mut layer) = self.layers.get(l).cloned() {
                    layer.sort_by(|&a, &b| key(a).total_cmp(&key(b)));
                    if let Some(place) = self.layers.get_mut(l) {
                        *place = layer;
                    }
                }
            }
            let crossings = self.crossings();
            if crossings < best.0 {
                best = (crossings, self.layers.clone());
            }
        }
        self.layers = best.1;
    }

    /// Place of each item within its layer, from 0 to 1.
    fn ranks_in_layers(&self) -> Vec<f64> {
        let mut out = vec![0.0; self.items.len()];
        for layer in &self.layers {
            for (n, &i) in layer.iter().enumerate() {
                if let Some(x) = out.get_mut(i) {
                    *x = (n as f64 + 0.5) / layer.len() as f64;
                }
            }
        }
        out
    }

    fn crossings(&self) -> usize {
        let ranks = self.ranks_in_layers();
        let rank = |i: usize| ranks.get(i).copied().unwrap_or(0.0);
        let mut count = 0;
        for layer in &self.layers {
            let lines: Vec<(f64, f64)> = layer
                .iter()
                .filter_map(|&i| self.items.get(i).map(|item| (i, item)))
                .flat_map(|(i, item)| item.below.iter().map(move |&b| (i, b)))
                .map(|(a, b)| (rank(a), rank(b)))
                .collect();
            for (n, a) in lines.iter().enumerate() {
                count += lines.iter().skip(n + 1).filter(|b| (a.0 - b.0) * (a.1 - b.1) < 0.0).count();
            }
        }
        count
    }

    /// Finds horizontal places: each item as near to the mean of its neighbours as those beside it
    /// allow.
    fn place(&mut self) {
        for layer in self.layers.clone() {
            let mut x = 0.0;
            for &i in &layer {
                if let Some(item) = self.items.get_mut(i) {
                    item.x = x + 0.5 * item.width;
                    x += item.width + GAP;
                }
            }
            for &i in &layer {
                if let Some(item) = self.items.get_mut(i) {
                    item.x -= 0.5 * x;
                }
            }
        }
        let count = self.layers.len();
        for round in 0..2 * ROUNDS {
            for step in 0..count {
                let l = if round % 2 == 0 { step } else { count - 1 - step };
                self.settle(l);
            }
        }
        for course in self.courses.clone() {
            self.straighten(&course.items);
        }
        let left = self.items.iter().map(|i| i.x - 0.5 * i.width).fold(f64::INFINITY, f64::min);
        if left.is_finite() {
            for item in &mut self.items {
                item.x -= left;
            }
        }
    }

    /// Brings what lies between the ends of a long line to as few places as what stands beside
    /// it allows.
    fn straighten(&mut self, items: &[usize]) {
        let inner = items.get(1..items.len().saturating_sub(1)).unwrap_or_default();
        let mut rest = inner;
        while !rest.is_empty() {
            let mut room = (f64::NEG_INFINITY, f64::INFINITY);
            let mut count = 0;
            for (low, high) in rest.iter().map_while(|&i| self.room(i)) {
                let narrower = (low.max(room.0), high.min(room.1));
                if narrower.0 > narrower.1 && count > 0 {
                    break;
                }
                room = narrower;
                count += 1;
            }
            let (run, others) = rest.split_at(count.max(1));
            rest = others;
            let sum: f64 = run.iter().filter_map(|&i| self.items.get(i)).map(|i| i.x).sum();
            // Rounding can leave one item without room; then it stays.
            let x = (sum / run.len() as f64).min(room.1).max(room.0);
            for &i in run {
                if let Some(item) = self.items.get_mut(i) {
                    item.x = x;
                }
            }
        }
    }

    /// Between which places an item can move without touching those beside it.
    fn room(&self, i: usize) -> Option<(f64, f64)> {
        let item = self.items.get(i)?;
        let layer = self.layers.get(item.layer)?;
        let n = layer.iter().position(|&j| j == i)?;
        let beside = |n: Option<usize>| n.and_then(|n| layer.get(n)).and_then(|&j| self.items.get(j));
        let apart = |other: &Item| 0.5 * (item.width + other.width) + GAP;
        let low = beside(n.checked_sub(1)).map_or(f64::NEG_INFINITY, |o| o.x + apart(o));
        let high = beside(Some(n + 1)).map_or(f64::INFINITY, |o| o.x - apart(o));
        Some((low, high))
    }

    /// Places one layer: least squares to the wanted places under the order, by pooling adjacent
    /// violators (Barlow, Bartholomew, Bremner, Brunk, 1972).
    fn settle(&mut self, l: usize) {
        let Some(layer) = self.layers.get(l).cloned() else { return };
        let mut offset = 0.0;
        let mut last = 0.0;
        let mut offsets = Vec::with_capacity(layer.len());
        // Blocks of wanted place, weight and number of members.
        let mut blocks: Vec<(f64, f64, usize)> = Vec::new();
        for (n, &i) in layer.iter().enumerate() {
            let Some(item) = self.items.get(i) else { continue };
            if n > 0 {
                offset += 0.5 * (last + item.width) + GAP;
            }
            last = item.width;
            offsets.push(offset);
            let (mut sum, mut weight) = (0.0, 0.0);
            for other in item.above.iter().chain(&item.below).filter_map(|&j| self.items.get(j)) {
                // Long lines are best straight.
                let pull = match (item.kind, other.kind) {
                    (Kind::Bend, Kind::Bend) => 8.0,
                    (Kind::Bend, _) | (_, Kind::Bend) => 3.0,
                    _ => 1.0,
                };
                sum += pull * other.x;
                weight += pull;
            }
            let wanted = if weight > 0.0 { sum / weight } else { item.x };
            let mut block = (wanted - offset, weight.max(0.1), 1);
            while let Some(&before) = blocks.last() {
                if before.0 <= block.0 {
                    break;
                }
                blocks.pop();
                let weight = before.1 + block.1;
                block = ((before.0 * before.1 + block.0 * block.1) / weight, weight, before.2 + block.2);
            }
            blocks.push(block);
        }
        let places = blocks.iter().flat_map(|b| std::iter::repeat_n(b.0, b.2));
        for ((&i, place), offset) in layer.iter().zip(places).zip(offsets) {
            if let Some(item) = self.items.get_mut(i) {
                item.x = place + offset;
            }
        }
    }
}

/// The rank of each component: longest way from where material enters, recycles left out.
fn ranks(count: usize, flows: &[Ends]) -> Vec<usize> {
    let mut next = vec![Vec::new(); count];
    let mut fed = vec![false; count];
    for ends in flows {
        if let (Some(a), Some(b)) = *ends
            && a != b
            && b < count
            && let Some(list) = next.get_mut(a)
        {
            list.push(b);
            fed[b] = true;
        }
    }
    // Depth first, from what nothing inside feeds; then whatever is left.
    let mut state = vec![0u8; count];
    let mut forward = vec![Vec::new(); count];
    let mut finished = Vec::with_capacity(count);
    let roots = (0..count).filter(|&k| !fed[k]).chain((0..count).filter(|&k| fed[k]));
    for root in roots {
        if state[root] != 0 {
            continue;
        }
        state[root] = 1;
        let mut stack = vec![(root, 0)];
        while let Some((k, n)) = stack.pop() {
            match next[k].get(n) {
                Some(&to) => {
                    stack.push((k, n + 1));
                    // A line to what is still open closes a cycle.
                    if state[to] != 1 {
                        forward[k].push(to);
                    }
                    if state[to] == 0 {
                        state[to] = 1;
                        stack.push((to, 0));
                    }
                }
                None => {
                    state[k] = 2;
                    finished.push(k);
                }
            }
        }
    }
    let mut ranks = vec![0usize; count];
    for &k in finished.iter().rev() {
        for &to in &forward[k] {
            ranks[to] = ranks[to].max(ranks[k] + 1);
        }
    }
    // What nothing inside feeds stands just above what it feeds.
    for &k in &finished {
        if !fed[k]
            && let Some(lowest) = forward[k].iter().map(|&to| ranks[to]).min()
        {
            ranks[k] = lowest.saturating_sub(1);
        }
    }
    ranks
}

#[cfg(test)]
mod tests {
    use super::*;

    fn layout(count: usize, flows: &[Ends]) -> Layout {
        Layout::of(&vec![100.0; count], flows, &vec![60.0; flows.len()])
    }

    #[test]
    fn flows_run_down_and_recycles_up() {
        let l = layout(
            3,
            &[(None, Some(0)), (Some(0), Some(1)), (Some(1), Some(2)), (Some(2), Some(0)), (Some(2), None)],
        );
        assert_eq!(
            l.courses.iter().map(|c| c.upward).collect::<Vec<_>>(),
            [false, false, false, true, false]
        );
        for c in &l.courses {
            for pair in c.items.windows(2) {
                assert_eq!(l.items[pair[0]].layer + 1, l.items[pair[1]].layer);
            }
        }
    }

    #[test]
    fn nothing_overlaps() {
        let mut flows = Vec::new();
        for a in 0..12 {
            for b in 0..12 {
                if (a * 7 + b * 5) % 6 == 0 {
                    flows.push((Some(a), Some(b)));
                }
            }
            flows.push((None, Some(a)));
        }
        let l = layout(12, &flows);
        for layer in &l.layers {
            for pair in layer.windows(2) {
                let (a, b) = (&l.items[pair[0]], &l.items[pair[1]]);
                assert!(a.x + 0.5 * a.width <= b.x - 0.5 * b.width + 1e-6, "{a:?} {b:?}");
            }
        }
        assert_eq!(l.courses.len(), flows.iter().filter(|f| f.0 != f.1).count());
    }

    #[test]
    fn a_crossing_that_can_be_undone_is_undone() {
        let l = layout(4, &[(Some(0), Some(3)), (Some(1), Some(2))]);
        assert_eq!(l.crossings(), 0);
    }
}
