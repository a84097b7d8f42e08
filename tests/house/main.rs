//! The house rules that no compiler checks: data flows one way, every file says what it is, none grows too large,
//! the top level stays as the client has it.

#![allow(
    unreachable_pub,
    clippy::disallowed_methods,
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    clippy::panic,
    clippy::print_stdout,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::doc_markdown,
    clippy::format_push_string,
    missing_docs,
    dead_code,
    reason = "a test: truths come from the standard library, failures are panics"
)]

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

/// The folders of `src` in the order of the data flow: each may use those before it.
const FLOW: [&str; 13] = [
    "arithmetic",
    "fault",
    "unit",
    "study",
    "model",
    "scheme",
    "plan",
    "run",
    "bound",
    "figure",
    "report",
    "record",
    "cli",
];

/// A file should hold one idea.
const MOST_LINES: usize = 700;

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn rust_files(folder: &Path) -> Vec<PathBuf> {
    let walk = walkdir::WalkDir::new(folder).sort_by_file_name();
    walk.into_iter()
        .filter_map(Result::ok)
        .map(walkdir::DirEntry::into_path)
        .filter(|path| path.extension().is_some_and(|extension| extension == "rs"))
        .filter(|path| !path.components().any(|part| part.as_os_str() == "target"))
        .collect()
}

#[test]
fn no_folder_uses_one_below_it() {
    let mut wrong = Vec::new();
    for (i, folder) in FLOW.iter().enumerate() {
        for path in rust_files(&root().join("src").join(folder)) {
            let text = std::fs::read_to_string(&path).unwrap();
            // Comments may name what a folder does not know.
            for line in text.lines().filter(|line| !line.trim_start().starts_with("//")) {
                for below in &FLOW[i + 1..] {
                    if line.contains(&format!("crate::{below}::"))
                        || line.contains(&format!("crate::{below};"))
                    {
                        wrong.push(format!("{}: {}", path.display(), line.trim()));
                    }
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn model_and_scheme_do_not_know_each_other() {
    for path in rust_files(&root().join("src/scheme")) {
        let text = std::fs::read_to_string(&path).unwrap();
        assert!(
            !text.contains("use crate::model") && !text.contains("use crate::study"),
            "{}",
            path.display()
        );
    }
}

#[test]
fn every_file_says_what_it_is_and_holds_one_idea() {
    let mut wrong = Vec::new();
    for folder in ["src", "tests"] {
        for path in rust_files(&root().join(folder)) {
            let text = std::fs::read_to_string(&path).unwrap();
            if !text.starts_with("//!") {
                wrong.push(format!("{} does not begin with //!", path.display()));
            }
            let lines = text.lines().count();
            if lines > MOST_LINES {
                wrong.push(format!("{} has {lines} lines", path.display()));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn the_top_level_holds_what_it_should() {
    let allowed: BTreeSet<&str> = [
        "Cargo.toml",
        "Cargo.lock",
        "README.md",
        "DEVELOPERS.md",
        "src",
        "templates",
        "studies",
        "tests",
        "out",
        "target",
    ]
    .into();
    for entry in std::fs::read_dir(root()).unwrap() {
        let name = entry.unwrap().file_name().into_string().unwrap();
        let fine = allowed.contains(name.as_str()) || name.starts_with('.') || name.starts_with("LICENSE");
        assert!(fine, "{name} stands at the top level");
    }
}

#[test]
fn the_clients_crates_are_in_real_use() {
    let sources: String =
        rust_files(&root().join("src")).iter().map(|path| std::fs::read_to_string(path).unwrap()).collect();
    for used in ["pulldown_cmark::", "plotters::", "tera::", "meval::", "serde_yaml::", "walkdir::"] {
        assert!(sources.contains(used), "{used} is not used");
    }
}
