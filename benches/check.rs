//! What a check costs: evaluation on a bound model, bytes to report bytes, growth with size,
//! memory over many checks. Prints a table; asserts nothing. Run with
//! `cargo bench --bench check`, or a part of it with `-- evaluate`, `report`, `growth` or `memory`.
#![allow(clippy::expect_used, reason = "a measurement of broken input is worth nothing")]

mod data;

use data::{PLANT, without_exchangers};
use sigmadot::pipeline::{Bound, Cancel, Room, check_bytes, evaluate_and_decide};
use sigmadot::process::{ReadLimits, read};
use sigmadot::quantity::UnitSystem;
use sigmadot::rules::{ALL, Aspect, names};
use std::hint::black_box;
use std::time::Instant;

/// The allocator of the service, where it is built in.
#[cfg(feature = "server")]
#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

/// Best and median of repeated batches, µs a call.
fn measure(batches: usize, calls: usize, mut f: impl FnMut()) -> (f64, f64) {
    let mut times: Vec<f64> = (0..batches)
        .map(|_| {
            let start = Instant::now();
            for _ in 0..calls {
                f();
            }
            start.elapsed().as_secs_f64() * 1e6 / calls as f64
        })
        .collect();
    times.sort_by(f64::total_cmp);
    (times[0], times[times.len() / 2])
}

/// `n` copies of a small chain (compressor, combustor-free heater, turbine) with amounts given.
fn replicated(n: usize) -> String {
    let mut components = String::new();
    let mut flows = String::new();
    for i in 0..n {
        let comma = if i == 0 { "" } else { "," };
        components.push_str(&format!(r#"{comma}"t{i}":{{"kind":"turbine"}}"#));
        flows.push_str(&format!(
            r#"{comma}"a{i}":{{"kind":"material","to":"t{i}","fluid":"water","pressure":"40.0 bar","temperature":"400.0 degC","mass_flow":"2.0 kg/s"}},
            "b{i}":{{"kind":"material","from":"t{i}","fluid":"water","pressure":"10.0 bar","temperature":"250.0 degC","mass_flow":"2.0 kg/s"}},
            "w{i}":{{"kind":"work","from":"t{i}","power":"540 kW"}}"#
        ));
    }
    format!(r#"{{"components":{{{components}}},"flows":{{{flows}}}}}"#)
}

fn resident_kib() -> Option<u64> {
    let status = std::fs::read_to_string("/proc/self/status").ok()?;
    status.lines().find(|l| l.starts_with("VmRSS:"))?.split_whitespace().nth(1)?.parse().ok()
}

fn main() {
    let wanted: Vec<String> = std::env::args().skip(1).filter(|a| !a.starts_with('-')).collect();
    for (part, run) in
        [("evaluate", evaluate as fn()), ("report", report), ("growth", growth), ("memory", memory)]
    {
        if wanted.is_empty() || wanted.iter().any(|w| w == part) {
            println!("{:<58} {:>10} {:>10}", part, "best µs", "median µs");
            run();
        }
    }
}

fn row(name: &str, (best, median): (f64, f64)) {
    println!("{name:<58} {best:>10.2} {median:>10.2}");
}

fn limits() -> ReadLimits {
    ReadLimits { components: 5000, flows: 20_000, ..ReadLimits::default() }
}

fn check(body: &str) -> usize {
    let report = check_bytes(body.as_bytes(), &limits(), UnitSystem::Metric, &Cancel::new());
    black_box(report.expect("bench plant").to_json().len())
}

/// The plant with the rules that look into its exchangers switched off.
fn without_interiors() -> String {
    let mut plant: serde_json::Value = serde_json::from_str(PLANT).expect("bench data");
    let interior = ALL.iter().map(|rule| rule.info()).filter(|info| info.aspect == Aspect::Interior);
    plant["policy"] = serde_json::json!({"disable": interior.map(|info| info.name).collect::<Vec<_>>()});
    plant.to_string()
}

fn evaluate() {
    for (name, body) in [
        ("evaluate + decide, 5 components, 13 flows, bound model", PLANT.to_owned()),
        ("the same without the interiors of its two exchangers", without_interiors()),
    ] {
        let (process, inputs) = read(body.as_bytes(), &limits(), &names()).expect("bench plant");
        let mut room = Room::default();
        let bound = Bound::compile(process, inputs, &mut room, &Cancel::new());
        row(
            name,
            measure(200, 200, || {
                black_box(evaluate_and_decide(&bound, &bound.inputs, &mut room));
            }),
        );
    }
}

fn report() {
    let small = without_exchangers();
    println!("report bytes: {} (with two exchangers), {} (without)", check(PLANT), check(&small));
    row(
        "bytes to report bytes, without exchangers",
        measure(100, 20, || {
            check(&small);
        }),
    );
    row(
        "bytes to report bytes, with two exchangers",
        measure(100, 20, || {
            check(PLANT);
        }),
    );
}

/// Replicated components, bytes to report bytes.
fn growth() {
    let mut points = Vec::new();
    for n in [10usize, 30, 100, 300, 1000] {
        let body = replicated(n);
        let (best, median) = measure(5, (2000 / n).max(2), || {
            check(&body);
        });
        row(&format!("{n} components"), (best, median));
        points.push(((n as f64).ln(), best.ln()));
    }
    let slope = (points[points.len() - 1].1 - points[0].1) / (points[points.len() - 1].0 - points[0].0);
    println!("exponent from 10 to 1000: {slope:.3}");
}

/// Resident memory over 100,000 checks.
fn memory() {
    let small = without_exchangers();
    let mut seen = vec![resident_kib().unwrap_or(0)];
    for _ in 0..10 {
        for _ in 0..10_000 {
            check(&small);
        }
        seen.push(resident_kib().unwrap_or(0));
    }
    println!("resident KiB after each 10,000: {seen:?}");
}
