//! What the package is built from: only licences that its own licence can live with.

use std::process::Command;

use serde_json::Value;

/// Licences (SPDX) that ask for no more than their text and notices to be kept.
const ALLOWED: &[&str] = &[
    "0BSD",
    "Apache-2.0",
    "Apache-2.0 WITH LLVM-exception",
    "BSD-2-Clause",
    "BSD-3-Clause",
    "CC0-1.0",
    "ISC",
    "MIT",
    "MIT-0",
    "Unicode-3.0",
    "Unlicense",
    "Zlib",
];

/// Whether an SPDX expression can be met with allowed licences: of an OR one side, of an AND both.
fn is_allowed(expression: &str) -> bool {
    let expression = expression.trim();
    if let Some(parts) = split(expression, " OR ") {
        return parts.iter().any(|part| is_allowed(part));
    }
    if let Some(parts) = split(expression, " AND ") {
        return parts.iter().all(|part| is_allowed(part));
    }
    match expression.strip_prefix('(').and_then(|inner| inner.strip_suffix(')')) {
        Some(inner) => is_allowed(inner),
        None => ALLOWED.contains(&expression),
    }
}

/// The parts between an operator outside parentheses, if it occurs there.
fn split<'a>(expression: &'a str, operator: &str) -> Option<Vec<&'a str>> {
    let mut parts = Vec::new();
    let (mut depth, mut start) = (0_i32, 0);
    for (at, character) in expression.char_indices() {
        match character {
            '(' => depth += 1,
            ')' => depth -= 1,
            ' ' if depth == 0 && expression[at..].starts_with(operator) => {
                parts.push(&expression[start..at]);
                start = at + operator.len();
            }
            _ => {}
        }
    }
    parts.push(&expression[start..]);
    (parts.len() > 1).then_some(parts)
}

#[test]
fn expressions_are_read_as_spdx_means_them() {
    assert!(is_allowed("MIT OR GPL-3.0-only"));
    assert!(!is_allowed("MIT AND GPL-3.0-only"));
    assert!(is_allowed("(MIT OR Apache-2.0) AND Unicode-3.0"));
    assert!(!is_allowed("(MIT OR Apache-2.0) AND MPL-2.0"));
    assert!(!is_allowed(""));
}

/// The platform that is built for, so that packages of other platforms need not be at hand.
fn platform() -> String {
    let rustc = std::env::var_os("RUSTC").unwrap_or_else(|| "rustc".into());
    let output = Command::new(rustc).arg("-vV").output().unwrap();
    let text = String::from_utf8(output.stdout).unwrap();
    text.lines().find_map(|line| line.strip_prefix("host: ")).unwrap().to_owned()
}

#[test]
fn every_dependency_is_under_an_allowed_licence_from_the_registry() {
    let output = Command::new(env!("CARGO"))
        .args(["metadata", "--offline", "--locked", "--format-version", "1", "--all-features"])
        .args(["--filter-platform", &platform()])
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    let metadata: Value = serde_json::from_slice(&output.stdout).unwrap();
    let mut refused = Vec::new();
    for package in metadata["packages"].as_array().unwrap() {
        let name = package["name"].as_str().unwrap();
        // Older manifests write a slash for OR.
        let licence = package["license"].as_str().unwrap_or_default().replace('/', " OR ");
        let own = name == env!("CARGO_PKG_NAME");
        let from_registry = package["source"].as_str().is_some_and(|s| s.starts_with("registry+"));
        if !is_allowed(&licence) || !(own || from_registry) {
            refused.push(format!("{name}: {licence:?} from {}", package["source"]));
        }
    }
    assert!(refused.is_empty(), "{refused:#?}");
}
