//! Descriptions and claims spoilt at random, with a fixed seed: whatever comes in, what comes out is
//! a sound report or located faults, in finite time. `SIGMADOT_FUZZ=200000` makes it longer.

use serde_json::{Map, Value, json};
use sigmadot::diagnostic::Diagnostic;
use sigmadot::document::Limits;
use sigmadot::pipeline::{Cancel, Failure, check_bytes, state_bytes};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use std::collections::BTreeMap;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::time::{Duration, Instant};

/// How many spoilt documents are tried where the environment does not say.
const COUNT: u64 = 1_500;
/// What one document may take, generously: debug builds on a busy machine.
const LONGEST: Duration = Duration::from_secs(20);

/// Pseudo-random numbers by a 64-bit permuted congruential generator (splitmix64).
struct Dice(u64);

impl Dice {
    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    fn below(&mut self, n: usize) -> usize {
        (self.next() % n.max(1) as u64) as usize
    }

    fn one<'a, T>(&mut self, items: &'a [T]) -> &'a T {
        &items[self.below(items.len())]
    }
}

const NUMBERS: &[&str] = &[
    "0",
    "-0",
    "1",
    "-1",
    "0.5",
    "2",
    "1e-300",
    "1e300",
    "-1e300",
    "1e-12",
    "1e12",
    "1e308",
    "4.9e-324",
    "1e999",
    "-1e-9",
    "1e6",
    "1000",
    "273.15",
    "-273.15",
    "373.946",
    "647.096",
    "220.64",
    "0.0061",
    "100",
    "99.974",
    "NaN",
    "inf",
    "1e-6",
    "0.99999999",
    "1.0000001",
    "1e4",
    "3e7",
];
const UNITS: &[&str] = &[
    "K",
    "degC",
    "degF",
    "Pa",
    "bar",
    "bar(g)",
    "MPa",
    "kPa",
    "psi",
    "mbar",
    "kg/s",
    "t/h",
    "kg",
    "mol/s",
    "m3/s",
    "Nm3/h",
    "kW",
    "MW",
    "W",
    "kJ",
    "kWh",
    "kJ/kg",
    "kJ/(kg K)",
    "%",
    "g/kg",
    "m",
    "m/s",
    "s",
    "h",
    "m2",
    "m3",
    "",
    "furlong",
];
const WORDS: &[&str] = &[
    "valve",
    "turbine",
    "compressor",
    "pump",
    "fan",
    "mixer",
    "splitter",
    "heat_exchanger",
    "heater",
    "combustor",
    "generator",
    "motor",
    "heat_engine",
    "refrigerator",
    "heat_pump",
    "control_volume",
    "pipe",
    "separator",
    "drum",
    "deaerator",
    "condenser",
    "evaporator",
    "hrsg",
    "boiler",
    "engine",
    "gearbox",
    "shaft",
    "storage",
    "reactor",
    "absorption_machine",
    "ejector",
    "cooling_tower",
    "cooling_coil",
    "fuel_cell",
    "electrolyser",
    "separation",
    "dryer",
    "material",
    "heat",
    "work",
    "radiation",
    "environment",
    "water",
    "air",
    "humid air",
    "R134a",
    "ammonia",
    "CO2",
    "propane",
    "nitrogen",
    "seawater",
    "ethylene glycol",
    "rate",
    "amount",
    "design",
    "measured",
    "vapour",
    "liquid",
    "hydrogen",
    "methane",
    "helium",
    "R410A",
    "steam",
    "oxygen",
    "engine oil",
    "counterflow",
    "parallel",
    "szargut-2007",
    "ahrendts",
    "compressor",
    "expander",
    "heat_transfer",
    "heat_transformer",
    "true",
    "",
];
const MEMBERS: &[&str] = &[
    "temperature",
    "pressure",
    "quality",
    "enthalpy",
    "entropy",
    "mass_flow",
    "mass",
    "volume_flow",
    "power",
    "heat",
    "work",
    "rate",
    "superheat",
    "subcooling",
    "relative_humidity",
    "from",
    "to",
    "fluid",
    "same_state_as",
    "state",
    "kind",
    "role",
    "phase",
    "holdup",
    "given",
    "heat_loss",
    "heat_transfer",
    "velocity",
    "elevation",
    "duration",
    "basis",
    "environment",
    "ends",
    "ports",
    "arrangement",
    "barometric_pressure",
    "policy",
    "groups",
    "exergy",
    "chemistry",
    "wet_bulb",
    "dew_point",
    "humidity_ratio",
    "mole_fractions",
    "mass_fractions",
    "side",
    "purpose",
];

/// Every place of a document, as JSON Pointers.
fn places(value: &Value, here: &str, out: &mut Vec<String>) {
    out.push(here.to_owned());
    match value {
        Value::Object(map) => {
            for (name, inner) in map {
                places(inner, &format!("{here}/{}", name.replace('~', "~0").replace('/', "~1")), out);
            }
        }
        Value::Array(items) => {
            for (i, inner) in items.iter().enumerate() {
                places(inner, &format!("{here}/{i}"), out);
            }
        }
        _ => {}
    }
}

/// Another number, or another unit, in place of what a text holds.
fn another_quantity(text: &str, dice: &mut Dice) -> String {
    let (number, unit) = text.split_once(' ').unwrap_or((text, ""));
    let old: Option<f64> = number.parse().ok();
    match (dice.below(8), old) {
        (0, _) => format!("{} {unit}", dice.one(NUMBERS)),
        (1, _) => format!("{number} {}", dice.one(UNITS)),
        (2, Some(x)) => format!("{} {unit}", -x),
        (3, Some(x)) => format!("{} {unit}", x * 10f64.powi(dice.below(13) as i32 - 6)),
        (4, Some(x)) => format!("{} {unit}", x * (1.0 + 1e-9 * dice.below(1000) as f64)),
        (5, Some(x)) => format!("{:.4} {unit}", x * (dice.below(2000) as f64 / 1000.0)),
        (6, Some(_)) => format!("{} {unit}", dice.below(1000)),
        (7, _) => format!("{} {}", dice.one(NUMBERS), dice.one(UNITS)),
        _ => (*dice.one(WORDS)).to_owned(),
    }
}

fn another_scalar(old: &Value, dice: &mut Dice) -> Value {
    match (dice.below(10), old) {
        (0, _) => Value::Null,
        (1, _) => json!(true),
        (2, _) => json!([]),
        (3, _) => json!({}),
        (4, _) => json!(*dice.one(WORDS)),
        (5, _) => json!(format!("{} {}", dice.one(NUMBERS), dice.one(UNITS))),
        (6, _) => dice.one(NUMBERS).parse::<f64>().map_or(Value::Null, |x| json!(x)),
        (_, Value::String(text)) => json!(another_quantity(text, dice)),
        (_, Value::Number(n)) => json!(-n.as_f64().unwrap_or(1.0) * 10f64.powi(dice.below(7) as i32 - 3)),
        (_, other) => other.clone(),
    }
}

/// Spoils one place of a document.
fn spoil(document: &mut Value, dice: &mut Dice) {
    let mut all = Vec::new();
    places(document, "", &mut all);
    let place = dice.one(&all).clone();
    let other = document.pointer(&dice.one(&all).clone()).cloned().unwrap_or(Value::Null);
    let Some(value) = document.pointer_mut(&place) else { return };
    match value {
        Value::Object(map) => object(map, other, dice),
        Value::Array(items) => match dice.below(4) {
            0 => items.clear(),
            1 => items.extend(items.clone()),
            2 => items.push(other),
            _ => {
                items.pop();
            }
        },
        scalar => {
            *scalar = if dice.below(8) == 0 { other } else { another_scalar(scalar, dice) };
        }
    }
}

fn object(map: &mut Map<String, Value>, other: Value, dice: &mut Dice) {
    let names: Vec<String> = map.keys().cloned().collect();
    let member = if names.is_empty() { String::new() } else { dice.one(&names).clone() };
    match dice.below(7) {
        0 => {
            map.remove(&member);
        }
        1 => {
            if let Some(value) = map.remove(&member) {
                map.insert((*dice.one(MEMBERS)).to_owned(), value);
            }
        }
        2 => {
            if let Some(value) = map.get(&member).cloned() {
                map.insert(format!("{member}-2"), value);
            }
        }
        3 => {
            let second = if names.is_empty() { String::new() } else { dice.one(&names).clone() };
            if let (Some(a), Some(b)) = (map.get(&member).cloned(), map.get(&second).cloned()) {
                map.insert(member, b);
                map.insert(second, a);
            }
        }
        4 => {
            let text = format!("{} {}", dice.one(NUMBERS), dice.one(UNITS));
            map.insert((*dice.one(MEMBERS)).to_owned(), json!(text));
        }
        5 => {
            if map.contains_key("kind") {
                map.insert("kind".to_owned(), json!(*dice.one(WORDS)));
            }
        }
        _ => {
            map.insert((*dice.one(MEMBERS)).to_owned(), other);
        }
    }
}

/// Spoils the bytes of a document: what no tree can express.
fn spoil_bytes(bytes: &mut Vec<u8>, dice: &mut Dice) {
    let at = dice.below(bytes.len());
    match dice.below(4) {
        0 => bytes.truncate(at),
        1 => bytes[at] = (dice.next() & 0xff) as u8,
        2 => {
            bytes.remove(at);
        }
        _ => {
            let piece: &[u8] =
                dice.one::<&[u8]>(&[b"1e999", b"\"", b"{", b"[", b",", b"\\u0000", b"\xff", b"e", b"null"]);
            bytes.splice(at..at, piece.iter().copied());
        }
    }
}

fn assert_no_null(value: &Value, here: &str, told: bool) {
    match value {
        Value::Null => panic!("null at {here}"),
        Value::Object(map) => map.iter().for_each(|(k, v)| assert_no_null(v, &format!("{here}/{k}"), told)),
        Value::Array(items) => items.iter().for_each(|v| assert_no_null(v, here, told)),
        Value::String(text) if !told => {
            let words = || text.split(|c: char| !c.is_ascii_alphanumeric());
            assert!(!words().any(|w| w == "NaN" || w == "inf"), "{here}: {text}");
        }
        _ => {}
    }
}

fn assert_faults(faults: &[Diagnostic]) {
    assert!(!faults.is_empty(), "refused without a fault");
    for fault in faults {
        assert!(fault.pointer.is_empty() || fault.pointer.starts_with('/'), "{fault}");
        assert!(!fault.message.is_empty());
    }
}

fn assert_verdict(report: &Value) {
    let count = |name: &str| report["counts"][name].as_u64().unwrap();
    let expected = if count("violated") > 0 {
        "violated"
    } else if count("suspect") > 0 {
        "suspect"
    } else if count("undecided") > 0 {
        "undecided"
    } else if count("holds") > 0 {
        "holds"
    } else {
        "unchecked"
    };
    assert_eq!(report["verdict"], expected, "{}", report["counts"]);
    let listed = |list: &str, verdict: &str| {
        report[list].as_array().unwrap().iter().filter(|f| f["verdict"] == verdict).count()
    };
    assert_eq!(count("violated") > 0, listed("violations", "violated") > 0, "violations and counts");
    if report["complete"] == true {
        assert_eq!(count("unchecked"), 0, "complete with unchecked tests");
    }
}

#[derive(Clone, Copy, PartialEq)]
enum What {
    Description,
    Claim,
    State,
}

fn examine(what: What, body: &[u8]) {
    let cancel = Cancel::new();
    let units = UnitSystem::Metric;
    let limits = ReadLimits::default();
    // A report repeats names, and a document may name something so.
    let told = body.windows(3).any(|w| w == b"NaN" || w == b"inf");
    let answer = match what {
        What::Description => check_bytes(body, &limits, units, &cancel).map(|report| {
            let value: Value = serde_json::from_slice(&report.to_json()).unwrap();
            assert_verdict(&value);
            for page in [report.to_text(), report.to_csv(), report.to_html()] {
                assert!(!page.is_empty() && (told || !page.contains("NaN")), "{page}");
            }
            value
        }),
        What::Claim => sigmadot::claim::judge_bytes(body, &Limits::default(), units, &cancel)
            .map(|report| serde_json::from_slice(&report.to_json()).unwrap()),
        What::State => state_bytes(body, &limits, units, &cancel)
            .map(|report| serde_json::from_slice(&report.to_json()).unwrap()),
    };
    match answer {
        Ok(report) => assert_no_null(&report, "", told),
        Err(Failure::Rejected(faults)) => assert_faults(&faults),
        Err(Failure::Cancelled) => panic!("cancelled by nobody"),
    }
}

/// Every document to begin from.
fn seeds() -> Vec<(What, Value)> {
    let read = |folder: &str, what: What| {
        let mut files: Vec<_> = std::fs::read_dir(format!("{}/{folder}", env!("CARGO_MANIFEST_DIR")))
            .unwrap()
            .map(|entry| entry.unwrap().path())
            .filter(|path| path.extension().is_some_and(|e| e == "json"))
            .collect();
        files.sort();
        files.into_iter().map(move |path| {
            let mut value: Value = serde_json::from_str(&std::fs::read_to_string(path).unwrap()).unwrap();
            // A worked case wraps its description.
            (what, value.get_mut("description").map(Value::take).unwrap_or(value))
        })
    };
    let mut all: Vec<(What, Value)> = read("openapi/examples", What::Description).collect();
    all.extend(read("openapi/examples/claims", What::Claim));
    all.extend(read("tests/cases", What::Description));
    all.extend(read("benches/data", What::Description));
    for state in [
        json!({"fluid": "water", "pressure": "40 bar", "temperature": "400 degC"}),
        json!({"fluid": "R134a", "pressure": "2 bar", "quality": 0.4}),
        json!({"fluid": "humid air", "pressure": "1 bar", "temperature": "25 degC", "relative_humidity": 0.5}),
        json!({"fluid": "seawater", "pressure": "1 bar", "temperature": "25 degC"}),
        json!({"fluid": "CO2", "pressure": "80 bar", "entropy": "1.5 kJ/(kg K)"}),
    ] {
        all.push((What::State, state));
    }
    all
}

#[test]
fn whatever_comes_in_something_sound_comes_out() {
    let count = std::env::var("SIGMADOT_FUZZ").ok().and_then(|n| n.parse().ok()).unwrap_or(COUNT);
    let seed = std::env::var("SIGMADOT_FUZZ_SEED").ok().and_then(|n| n.parse().ok()).unwrap_or(1);
    let seeds = seeds();
    let mut dice = Dice(seed);
    let mut slowest = (Duration::ZERO, String::new());
    let mut failures: Vec<(String, String)> = Vec::new();
    for _ in 0..count {
        let (what, document) = dice.one(&seeds);
        let mut document = document.clone();
        for _ in 0..=dice.below(4) {
            spoil(&mut document, &mut dice);
        }
        let mut body = document.to_string().into_bytes();
        if dice.below(25) == 0 {
            spoil_bytes(&mut body, &mut dice);
        }
        let begun = Instant::now();
        let outcome = catch_unwind(AssertUnwindSafe(|| examine(*what, &body)));
        let taken = begun.elapsed();
        let shown = || String::from_utf8_lossy(&body).into_owned();
        if taken > slowest.0 {
            slowest = (taken, shown());
        }
        if let Err(panic) = outcome {
            let words = panic.downcast_ref::<String>().cloned();
            let words = words.or_else(|| panic.downcast_ref::<&str>().map(|s| (*s).to_owned()));
            failures.push((words.unwrap_or_default(), shown()));
        }
    }
    println!("{count} documents, the slowest took {:?}: {}", slowest.0, slowest.1);
    // Three of a kind are enough.
    let mut kinds: BTreeMap<String, Vec<String>> = BTreeMap::new();
    for (words, body) in &failures {
        kinds.entry(words.chars().take(40).collect()).or_default().push(format!("{words}\n  {body}"));
    }
    let told: Vec<&str> = kinds.values().flat_map(|k| k.iter().take(3)).map(String::as_str).collect();
    assert!(told.is_empty(), "{} unsound answers, among them:\n{}", failures.len(), told.join("\n"));
    assert!(slowest.0 < LONGEST, "{slowest:?}");
}
