//! The README shows what the program says, not what somebody typed.

use sigmadot::pipeline::{Cancel, check_bytes};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use std::fs;
use std::path::Path;

/// Lines of the report that are shown before it is cut.
const SHOWN: usize = 34;

#[test]
fn the_report_in_the_readme_is_generated() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let path = root.join("README.md");
    let readme = fs::read_to_string(&path).unwrap();
    let mark = "<!-- report: ";
    let start = readme.find(mark).expect("the README has a place for a report");
    let name = readme[start + mark.len()..].split(' ').next().unwrap();
    let body = fs::read(root.join(format!("openapi/examples/{name}.json"))).unwrap();
    let text =
        check_bytes(&body, &ReadLimits::default(), UnitSystem::Metric, &Cancel::new()).unwrap().to_text();
    let shown: Vec<&str> = text.lines().take(SHOWN).map(str::trim_end).collect();
    let block = format!("{mark}{name} -->\n```text\n{}\n…\n```\n", shown.join("\n").trim_end());
    let end = start + readme[start..].find("<!-- end of report -->").unwrap();
    if readme[start..end] != block {
        if std::env::var_os("SIGMADOT_REWRITE").is_some() {
            fs::write(&path, format!("{}{block}{}", &readme[..start], &readme[end..])).unwrap();
        } else {
            panic!("the report in README.md is out of date; run with SIGMADOT_REWRITE=1");
        }
    }
}

#[test]
fn the_two_commands_stand_in_the_readme() {
    let readme = fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md")).unwrap();
    for command in ["cargo run --release -- demo", "cargo test"] {
        assert!(readme.lines().any(|l| l == command), "{command}");
    }
}
