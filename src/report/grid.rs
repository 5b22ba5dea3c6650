//! The tables of a report, before they are set as text or as a page.

use super::{Figure, FlowReport, RegionReport, Report, prose};

/// How a column is aligned.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Align {
    /// Words.
    Left,
    /// Numbers.
    Right,
    /// `value ± u`, aligned at ±.
    Figure,
}

/// A table of readable cells; the first column names the row.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Grid {
    /// What it shows.
    pub title: &'static str,
    /// Columns.
    pub heads: Vec<(String, Align)>,
    /// Rows of as many cells.
    pub rows: Vec<Vec<String>>,
    /// Number of rows at the end that sum up the others.
    pub sums: usize,
}

impl Grid {
    /// Whether its rows are flows.
    pub fn is_of_flows(&self) -> bool {
        self.heads.first().is_some_and(|h| h.0 == "Flow")
    }
}

/// What stands where there is no figure.
const NOTHING: &str = "–";

fn heads(list: &[(&str, Align)]) -> Vec<(String, Align)> {
    list.iter().map(|(text, align)| ((*text).to_owned(), *align)).collect()
}

fn with_unit(symbol: &str, code: Option<&str>) -> String {
    format!("{symbol} {}", prose::unit(code.unwrap_or_default())).trim_end().to_owned()
}

fn pair(f: Option<Figure>) -> String {
    // How many times its value an uncertainty may be before the value says nothing.
    const DROWNED: f64 = 10.0;
    let Some(f) = f else { return NOTHING.to_owned() };
    let drowned = !f.unit.starts_with("deg") && f.u > DROWNED * f.value.abs();
    prose::digits(if drowned { 0.0 } else { f.value }, f.u).text()
}

/// Every table, those without rows left out.
pub(super) fn all(report: &Report) -> Vec<Grid> {
    let mut grids = vec![
        components(report),
        purposes(report),
        performance(report),
        causes(report),
        material(report),
        transfers(report),
        contents(report),
    ];
    grids.retain(|g| !g.rows.is_empty());
    grids
}

fn components(report: &Report) -> Grid {
    let plant = &report.plant.region;
    let regions = || report.components.0.iter().map(|c| &c.1.region).chain([plant]);
    let entropy = regions().find_map(|r| r.entropy_balance.map(|e| e.generation.unit));
    let exergy = regions().find_map(|r| r.exergy_balance.as_ref().map(|e| e.destruction.unit));
    let mut rows = Vec::new();
    let mut row = |name: &str, kind: &str, region: &RegionReport, share: Option<f64>| {
        let verdict = if region.at_limit {
            "✓ reversible".to_owned()
        } else {
            format!("{} {}", prose::sign(region.verdict), region.verdict)
        };
        rows.push(vec![
            prose::clean(name),
            prose::words(kind),
            verdict,
            pair(region.entropy_balance.map(|e| e.generation)),
            pair(region.exergy_balance.as_ref().map(|e| e.destruction)),
            share.map_or_else(String::new, |share| {
                // What is destroyed against the law is no share of what is destroyed.
                if share < 0.0 || region.verdict == "violated" {
                    NOTHING.to_owned()
                } else {
                    prose::percent(share)
                }
            }),
        ]);
    };
    for k in prose::component_order(report) {
        if let Some((name, c)) = report.components.0.get(k) {
            let share = report.plant.ranking.iter().find(|r| r.component == *name).map(|r| r.share);
            row(name, c.kind, &c.region, share);
        }
    }
    let mut sums = 0;
    for (name, group) in &report.groups.0 {
        row(name, "group", group, None);
        sums += 1;
    }
    if report.components.0.len() > 1 {
        row("whole plant", "", plant, None);
        sums += 1;
    }
    Grid {
        title: "Entropy generation and exergy destruction",
        heads: heads(&[
            ("Component", Align::Left),
            ("Kind", Align::Left),
            ("Verdict", Align::Left),
            (&with_unit("σ", entropy), Align::Figure),
            (&with_unit("T0σ", exergy), Align::Figure),
            ("Share", Align::Right),
        ]),
        rows,
        sums,
    }
}

/// Every region by its name, the plant last.
fn regions(report: &Report) -> impl Iterator<Item = (&str, &RegionReport)> {
    let components = report.components.0.iter().map(|(n, c)| (n.as_str(), &c.region));
    let groups = report.groups.0.iter().map(|(n, g)| (n.as_str(), g));
    components.chain(groups).chain([("whole plant", &report.plant.region)])
}

/// What exergy is spent on what.
fn purposes(report: &Report) -> Grid {
    let balances = || regions(report).filter_map(|(n, r)| r.exergy_balance.as_ref().map(|e| (n, e)));
    let unit = balances().find_map(|(_, e)| e.fuel.or(e.loss)).map(|f| f.unit);
    let rows: Vec<Vec<String>> = balances()
        .filter(|(_, e)| e.fuel.is_some() || e.efficiency.is_some())
        .map(|(name, e)| {
            let efficiency =
                e.efficiency.map(|f| Figure { value: 100.0 * f.value, u: 100.0 * f.u, unit: f.unit });
            vec![prose::clean(name), pair(e.fuel), pair(e.product), pair(e.loss), pair(efficiency)]
        })
        .collect();
    let sums = usize::from(
        rows.len() > 1 && report.plant.region.exergy_balance.as_ref().is_some_and(|e| e.fuel.is_some()),
    );
    Grid {
        title: "Exergy spent and gained",
        heads: heads(&[
            ("Component", Align::Left),
            (&with_unit("Fuel", unit), Align::Figure),
            (&with_unit("Product", unit), Align::Figure),
            (&with_unit("Loss", unit), Align::Figure),
            ("Efficiency %", Align::Figure),
        ]),
        rows,
        sums,
    }
}

/// A cause that is less than this of the largest is rounding, or as good as none.
const LEAST_CAUSE: f64 = 1e-4;

/// Entropy generation by its causes.
fn causes(report: &Report) -> Grid {
    let rows = report.components.0.iter().flat_map(|(name, c)| {
        let parts = &c.decomposition.0;
        let largest = parts.iter().filter(|p| p.1.unit != "1").map(|p| p.1.value.abs()).fold(0.0, f64::max);
        let counts = move |f: &Figure| f.value.abs().max(f.u) >= LEAST_CAUSE * largest;
        parts.iter().filter(move |(_, f)| counts(f)).map(move |(cause, f)| {
            vec![prose::clean(name), prose::qualified(cause), pair(Some(*f)), prose::unit(f.unit)]
        })
    });
    Grid {
        title: "Causes of entropy generation",
        heads: heads(&[
            ("Component", Align::Left),
            ("Cause", Align::Left),
            ("σ", Align::Figure),
            ("Unit", Align::Left),
        ]),
        rows: rows.collect(),
        sums: 0,
    }
}

/// A figure of merit as engineers call it: by heating value, and a heat rate per kilowatt hour.
fn merit(quantity: &str, f: Figure) -> (String, Figure) {
    let words = match (quantity.strip_suffix("_lower"), quantity.strip_suffix("_higher")) {
        (Some(of), _) => format!("{} (LHV)", prose::words(of)),
        (_, Some(of)) => format!("{} (HHV)", prose::words(of)),
        _ => prose::qualified(quantity),
    };
    if quantity.starts_with("heat_rate_") && f.unit == "1" {
        return (words, Figure { value: 3600.0 * f.value, u: 3600.0 * f.u, unit: "kJ/kWh" });
    }
    (words, f)
}

fn performance(report: &Report) -> Grid {
    let mut rows = Vec::new();
    for (name, region) in regions(report) {
        for (quantity, f) in &region.performance.0 {
            let (words, f) = merit(quantity, *f);
            rows.push(vec![prose::clean(name), words, pair(Some(f)), prose::unit(f.unit)]);
        }
    }
    Grid {
        title: "Performance",
        heads: heads(&[
            ("Of", Align::Left),
            ("Quantity", Align::Left),
            ("Value", Align::Figure),
            ("Unit", Align::Left),
        ]),
        rows,
        sums: 0,
    }
}

/// Columns of the table of states, by the names of their figures; the last is the exergy.
const STATE: [(&str, &[&str]); 7] = [
    ("m", &["mass_flow", "mass"]),
    ("T", &["temperature"]),
    ("p", &["pressure"]),
    ("x", &["quality"]),
    ("h", &["enthalpy"]),
    ("s", &["entropy"]),
    ("e", &[]),
];

fn state_figure(f: &FlowReport, keys: &[&str]) -> Option<Figure> {
    match keys {
        [] => f.exergy.get("total").copied(),
        keys => keys.iter().find_map(|k| f.figures.get(k).copied()),
    }
}

fn material(report: &Report) -> Grid {
    let flows = || report.flows.0.iter().filter(|(_, f)| f.kind == "material");
    let mut columns = heads(&[("Flow", Align::Left), ("Fluid", Align::Left)]);
    let wet = flows().any(|(_, f)| f.figures.get("quality").is_some());
    let columns_of = || STATE.iter().filter(move |(symbol, _)| wet || *symbol != "x");
    for (symbol, keys) in columns_of() {
        let unit = flows().find_map(|(_, f)| state_figure(f, keys)).map(|f| f.unit);
        let unit = unit.filter(|code| *code != "1");
        columns.push((with_unit(symbol, unit), Align::Right));
    }
    let rows = flows().map(|(name, f)| {
        let mut row = vec![prose::clean(name), prose::clean(f.fluid.as_deref().unwrap_or(""))];
        row.extend(columns_of().map(|(_, keys)| {
            state_figure(f, keys).map_or_else(|| NOTHING.to_owned(), |x| prose::digits(x.value, x.u).bare())
        }));
        row
    });
    Grid {
        title: "Flows of material (digits as the uncertainty warrants)",
        heads: columns,
        rows: rows.collect(),
        sums: 0,
    }
}

fn transfers(report: &Report) -> Grid {
    let rows = report.flows.0.iter().filter(|(_, f)| f.kind != "material").map(|(name, f)| {
        let rate = main_figure(f);
        let at = f.figures.get("temperature").or_else(|| f.figures.get("mean_temperature"));
        let kind = f.form.map_or_else(|| f.kind.to_owned(), |form| format!("{form} {}", f.kind));
        vec![
            prose::clean(name),
            prose::clean(&kind),
            pair(rate),
            rate.map_or_else(String::new, |r| prose::unit(r.unit)),
            at.map_or_else(String::new, prose::bare_figure),
            f.origin.to_owned(),
        ]
    });
    Grid {
        title: "Heat and work",
        heads: heads(&[
            ("Flow", Align::Left),
            ("Kind", Align::Left),
            ("Rate", Align::Figure),
            ("Unit", Align::Left),
            ("At", Align::Right),
            ("Origin", Align::Left),
        ]),
        rows: rows.collect(),
        sums: 0,
    }
}

/// How much a flow carries: its mass, heat or work.
pub(super) fn main_figure(f: &FlowReport) -> Option<Figure> {
    ["mass_flow", "mass", "power", "rate"].iter().find_map(|k| f.figures.get(k).copied())
}

/// What components hold before and after a batch.
fn contents(report: &Report) -> Grid {
    let held = report.components.0.iter().filter_map(|(n, c)| c.holdup.as_ref().map(|h| (n, h)));
    let rows = held.flat_map(|(name, h)| {
        let line = move |when: &str, quantity: &str, f: Figure| {
            vec![
                prose::clean(name),
                when.to_owned(),
                prose::words(quantity),
                pair(Some(f)),
                prose::unit(f.unit),
            ]
        };
        let totals =
            [("before", &h.initial), ("after", &h.r#final)].into_iter().flat_map(move |(when, held)| {
                held.totals.0.iter().map(move |(quantity, f)| line(when, quantity, *f))
            });
        totals.chain(h.boundary_work.map(|w| line("during", "boundary work", w)))
    });
    Grid {
        title: "Contents before and after",
        heads: heads(&[
            ("Component", Align::Left),
            ("When", Align::Left),
            ("Quantity", Align::Left),
            ("Value", Align::Figure),
            ("Unit", Align::Left),
        ]),
        rows: rows.collect(),
        sums: 0,
    }
}
