//! Who may import whom.

use std::fs;
use std::path::{Path, PathBuf};

/// Each module with the modules of the crate that it may name.
const LAYERS: &[(&str, &[&str])] = &[
    ("diagnostic", &[]),
    ("quantity", &["diagnostic"]),
    ("document", &["diagnostic", "quantity"]),
    ("fluid", &["diagnostic", "document", "quantity"]),
    ("process", &["diagnostic", "document", "fluid", "quantity"]),
    ("model", &["fluid", "process"]),
    ("balance", &["fluid", "model", "process"]),
    ("rules", &["balance", "fluid", "model", "process", "quantity"]),
    ("evidence", &["model", "process"]),
    ("assessment", &["balance", "evidence", "fluid", "model", "process", "quantity", "rules"]),
    (
        "report",
        &[
            "assessment", "balance", "diagnostic", "evidence", "fluid", "model", "process", "quantity", "rules",
        ],
    ),
    (
        "claim",
        &["balance", "diagnostic", "document", "evidence", "fluid", "pipeline", "process", "quantity", "report", "rules"],
    ),
    (
        "pipeline",
        &[
            "assessment", "balance", "claim", "diagnostic", "document", "evidence", "fluid", "model", "process",
            "quantity", "report", "rules",
        ],
    ),
];

/// Words that the core must not contain outside of its tests: frameworks, input and output,
/// clocks, threads.
const FORBIDDEN: &[&str] = &[
    "axum", "tokio", "hyper", "tower_http", "StatusCode", "std::fs", "std::net", "std::time", "std::thread",
    "std::env", "std::io", "println!", "eprintln!",
];

fn sources(module: &str) -> Vec<PathBuf> {
    let src = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut out = Vec::new();
    let file = src.join(format!("{module}.rs"));
    if file.exists() {
        out.push(file);
    }
    collect(&src.join(module), &mut out);
    assert!(!out.is_empty(), "there is no module {module}");
    out
}

fn collect(folder: &Path, out: &mut Vec<PathBuf>) {
    let Ok(entries) = fs::read_dir(folder) else { return };
    for entry in entries {
        let path = entry.unwrap().path();
        if path.is_dir() {
            collect(&path, out);
        } else if path.extension().is_some_and(|e| e == "rs") {
            out.push(path);
        }
    }
}

/// The part of a file that ships: tests may look further.
fn shipped(path: &Path) -> String {
    if path.file_name().is_some_and(|n| n == "tests.rs") {
        return String::new();
    }
    let text = fs::read_to_string(path).unwrap();
    let end = text.find("#[cfg(test)]\nmod ").unwrap_or(text.len());
    text[..end].lines().filter(|l| !l.trim_start().starts_with("//")).collect::<Vec<_>>().join("\n")
}

#[test]
fn modules_import_only_what_lies_below_them() {
    for (module, allowed) in LAYERS {
        for path in sources(module) {
            let text = shipped(&path);
            for (at, _) in text.match_indices("crate::") {
                let rest = &text[at + "crate::".len()..];
                let name: String =
                    rest.chars().take_while(|c| c.is_ascii_alphanumeric() || *c == '_').collect();
                assert!(
                    name == *module || allowed.contains(&name.as_str()),
                    "{} names crate::{name}, which does not lie below {module}",
                    path.display()
                );
            }
        }
    }
}

#[test]
fn the_core_does_no_input_output_and_knows_no_framework() {
    for (module, _) in LAYERS {
        for path in sources(module) {
            let text = shipped(&path);
            for word in FORBIDDEN {
                assert!(!text.contains(word), "{} names {word}", path.display());
            }
        }
    }
}

/// Wire types derive their schema behind the feature; nothing else of the core may know of it.
#[test]
fn only_reports_and_claims_know_the_schema_library() {
    for (module, _) in LAYERS.iter().filter(|(m, _)| !matches!(*m, "report" | "claim")) {
        for path in sources(module) {
            assert!(!shipped(&path).contains("utoipa"), "{} names utoipa", path.display());
        }
    }
}
