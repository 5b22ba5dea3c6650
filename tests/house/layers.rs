//! Who may import whom, and what the core may not name. The text of the sources is what is tested.

use std::fs;
use std::path::{Path, PathBuf};

/// The modules from the bottom up: each may import those before it.
const ORDER: &[&str] = &[
    "diagnostic",
    "quantity",
    "document",
    "fluid",
    "process",
    "model",
    "balance",
    "rules",
    "evidence",
    "assessment",
    "report",
    "pipeline",
    "claim",
    "api",
];

/// Pairs that do not know each other although their order would allow it.
const STRANGERS: &[(&str, &str)] = &[("evidence", "rules"), ("document", "fluid"), ("fluid", "document")];

/// What the core (everything but `api` and the command line) may not name: it does no input or
/// output, reads no clock, starts nothing, and knows no HTTP.
const FOREIGN: &[&str] = &[
    "axum",
    "hyper",
    "tokio",
    "StatusCode",
    "std::env",
    "std::fs",
    "std::io",
    "std::net",
    "std::process",
    "std::thread",
    "Instant",
    "SystemTime",
    "println!",
    "eprintln!",
];

fn sources(folder: &Path, found: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            sources(&path, found);
        } else if path.extension().is_some_and(|e| e == "rs") {
            found.push(path);
        }
    }
}

/// Each source file with the module it belongs to and its code, without tests and comments.
fn code() -> Vec<(PathBuf, String, String)> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut files = Vec::new();
    sources(&root, &mut files);
    let files = files.into_iter().filter(|f| !f.ends_with("src/lib.rs") && !f.ends_with("src/main.rs"));
    files
        .filter(|f| f.file_name().is_some_and(|n| n != "tests.rs"))
        .map(|file| {
            let first = file.strip_prefix(&root).unwrap().components().next().unwrap();
            let module = first.as_os_str().to_str().unwrap().trim_end_matches(".rs").to_owned();
            let text = fs::read_to_string(&file).unwrap();
            let body = text.split("#[cfg(test)]\nmod tests {").next().unwrap();
            let kept: Vec<&str> = body.lines().filter(|l| !l.trim_start().starts_with("//")).collect();
            (file, module, kept.join("\n"))
        })
        .collect()
}

/// The modules that code names after `crate::`.
fn imports(code: &str) -> Vec<String> {
    let is_word = |c: char| c.is_ascii_alphanumeric() || c == '_';
    let mut found = Vec::new();
    for (at, _) in code.match_indices("crate::") {
        let rest = &code[at + "crate::".len()..];
        match rest.strip_prefix('{') {
            Some(list) => {
                let list = list.split('}').next().unwrap();
                found.extend(list.split(',').map(|part| part.trim().split("::").next().unwrap().to_owned()));
            }
            None => found.push(rest.split(|c| !is_word(c)).next().unwrap().to_owned()),
        }
    }
    found
}

#[test]
fn each_module_imports_only_what_lies_below_it() {
    let place = |module: &str| ORDER.iter().position(|m| *m == module);
    for (file, module, code) in code() {
        let own = place(&module).unwrap_or_else(|| panic!("{module} has no place in the order"));
        for import in imports(&code).iter().filter(|import| **import != module) {
            let below = place(import).is_some_and(|other| other < own);
            let strangers = STRANGERS.contains(&(module.as_str(), import.as_str()));
            assert!(below && !strangers, "{} imports {import}", file.display());
        }
    }
}

#[test]
fn the_core_names_nothing_foreign() {
    for (file, module, code) in code() {
        for word in FOREIGN.iter().filter(|_| module != "api") {
            assert!(!code.contains(word), "{} names {word}", file.display());
        }
    }
}

#[test]
fn files_stay_short() {
    for (file, ..) in code() {
        let lines = fs::read_to_string(&file).unwrap().lines().count();
        assert!(lines <= 750, "{} has {lines} lines", file.display());
    }
}
