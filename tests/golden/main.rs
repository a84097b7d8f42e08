//! Whole studies against golden records: every bit of every number of the demo studies.
//!
//! `RENEW=1 cargo test --test golden` writes the golden records anew; read the difference before it is committed.
//! A golden number alone proves nothing: `tests/published` and `tests/property` hold numbers against the truth.
#![allow(
    clippy::unwrap_used,
    clippy::panic,
    clippy::disallowed_methods,
    clippy::print_stdout,
    reason = "a test: failures are panics"
)]

use std::path::{Path, PathBuf};
use std::process::Command;

use serde_json::{Value, json};

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

/// Issues all demo studies into a folder of its own.
fn issue(out: &Path, jobs: &str) {
    let output = Command::new(env!("CARGO_BIN_EXE_halfstep"))
        .args(["issue", "studies", "--quiet", "--jobs", jobs, "--out"])
        .arg(out)
        .current_dir(root())
        .output()
        .unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
}

fn records(out: &Path) -> Vec<(String, Value)> {
    let walk = walkdir::WalkDir::new(out).sort_by_file_name().into_iter().filter_map(Result::ok);
    walk.filter(|entry| entry.file_name() == "record.json")
        .map(|entry| {
            let folder = entry.path().parent().unwrap().strip_prefix(out).unwrap();
            let text = std::fs::read_to_string(entry.path()).unwrap();
            (folder.to_string_lossy().replace('/', "-"), serde_json::from_str(&text).unwrap())
        })
        .collect()
}

/// What a golden record keeps: all that numerics decide, nothing that the look of a report changes.
fn essence(record: &Value) -> Value {
    let pick = |value: &Value, keys: &[&str]| -> Value {
        keys.iter()
            .map(|key| ((*key).to_owned(), value[*key].clone()))
            .collect::<serde_json::Map<_, _>>()
            .into()
    };
    let list = |key: &str, keys: &[&str]| -> Vec<Value> {
        record[key].as_array().unwrap().iter().map(|value| pick(value, keys)).collect()
    };
    json!({
        "numerics": record["numerics"],
        "quantities": list("quantities", &["name", "value", "bits", "bound", "grade", "shown"]),
        "runs": list("runs", &["name", "scheme", "meshes"]),
        "criteria": list("criteria", &["name", "verdict"]),
    })
}

#[test]
fn demo_studies_give_the_golden_bits() {
    let out = tempfile::tempdir().unwrap();
    issue(out.path(), "2");
    let records = records(out.path());
    assert_eq!(records.len(), 4);
    for (name, record) in records {
        let path = root().join("tests/golden").join(format!("{name}.json"));
        let text = format!("{}\n", serde_json::to_string_pretty(&essence(&record)).unwrap());
        if std::env::var("RENEW").is_ok() {
            std::fs::write(&path, &text).unwrap();
            continue;
        }
        let golden = std::fs::read_to_string(&path).unwrap_or_default();
        assert!(
            golden == text,
            "{name} differs from its golden record:\n{}",
            first_difference(&golden, &text)
        );
    }
}

fn first_difference(golden: &str, text: &str) -> String {
    let pairs = golden.lines().zip(text.lines()).enumerate();
    for (i, (old, new)) in pairs {
        if old != new {
            return format!("line {}: golden {old}, now {new}", i + 1);
        }
    }
    "one is longer than the other".to_owned()
}

#[test]
fn every_number_of_the_demo_studies_is_converged_or_better() {
    let out = tempfile::tempdir().unwrap();
    issue(out.path(), "1");
    for (name, record) in records(out.path()) {
        for quantity in record["quantities"].as_array().unwrap() {
            let grade = quantity["grade"].as_str().unwrap();
            assert!(matches!(grade, "converged" | "corroborated"), "{name}: {quantity}");
            assert!(quantity["bound"].as_f64().unwrap() >= 0.0, "{name}: {quantity}");
        }
    }
}

/// All files below a folder but what varies by design, with their bytes.
fn files(folder: &Path) -> Vec<(String, Vec<u8>)> {
    let walk = walkdir::WalkDir::new(folder).sort_by_file_name().into_iter().filter_map(Result::ok);
    walk.filter(|entry| entry.file_type().is_file() && entry.file_name() != "timing.txt")
        .map(|entry| {
            let name = entry.path().strip_prefix(folder).unwrap().to_string_lossy().into_owned();
            (name, std::fs::read(entry.path()).unwrap())
        })
        .collect()
}

#[test]
fn one_job_and_two_give_the_same_bytes() {
    let (one, two) = (tempfile::tempdir().unwrap(), tempfile::tempdir().unwrap());
    issue(one.path(), "1");
    issue(two.path(), "2");
    let (one, two) = (files(one.path()), files(two.path()));
    assert!(one.len() >= 9, "{}", one.len());
    let names = |files: &[(String, Vec<u8>)]| files.iter().map(|(name, _)| name.clone()).collect::<Vec<_>>();
    assert_eq!(names(&one), names(&two));
    for ((name, first), (_, second)) in one.iter().zip(&two) {
        assert!(first == second, "{name} differs");
    }
}
