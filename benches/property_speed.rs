//! Time of one property state, for each fluid and pair. `property_speed.py` runs it beside a
//! reference library on the same states.
//!
//! Input: a file of lines `fluid,pair,a,b` (pair: pT, px, ph, ps; SI units), named as the only
//! argument. Output: lines `fluid,pair,nanoseconds,states,checksum`, the least mean of nine rounds.

use sigmadot::fluid::real_fluid::by_name;
use sigmadot::fluid::{Engine, Pair};
use std::collections::BTreeMap;
use std::time::Instant;

fn main() -> Result<(), String> {
    let Some(path) = std::env::args().skip(1).find(|a| !a.starts_with('-')) else {
        println!("give a file of lines fluid,pair,a,b; see benches/property_speed.py");
        return Ok(());
    };
    let text = std::fs::read_to_string(&path).map_err(|e| format!("{path}: {e}"))?;
    let mut sets: BTreeMap<(String, String), Vec<(f64, f64)>> = BTreeMap::new();
    for line in text.lines() {
        let cells: Vec<&str> = line.split(',').collect();
        let &[fluid, pair, a, b] = cells.as_slice() else {
            return Err(format!("not fluid,pair,a,b: {line}"));
        };
        let number = |x: &str| x.parse::<f64>().map_err(|e| format!("{line}: {e}"));
        sets.entry((fluid.to_owned(), pair.to_owned())).or_default().push((number(a)?, number(b)?));
    }
    for ((name, word), states) in &sets {
        let fluid = by_name(name).map_err(|near| format!("no fluid {name}; near: {near:?}"))?;
        let pair = match word.as_str() {
            "pT" => Pair::PressureTemperature,
            "px" => Pair::PressureQuality,
            "ph" => Pair::PressureEnthalpy,
            "ps" => Pair::PressureEntropy,
            "hs" => Pair::EnthalpyEntropy,
            other => return Err(format!("no pair {other}")),
        };
        let mut least = f64::INFINITY;
        let mut sum = 0.0;
        for _ in 0..9 {
            let clock = Instant::now();
            sum = 0.0;
            for &(a, b) in states {
                let state =
                    fluid.state(pair, a, b, 0.0).map_err(|e| format!("{name} {word} {a} {b}: {e}"))?;
                sum += state.volume + state.gradient[2][1];
            }
            least = least.min(clock.elapsed().as_secs_f64());
        }
        println!("{name},{word},{:.1},{},{sum:e}", 1e9 * least / states.len() as f64, states.len());
    }
    Ok(())
}
