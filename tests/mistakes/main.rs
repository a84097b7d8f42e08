//! Wrong studies, and what is said of them.
//!
//! Beside each `studies/NAME.md` stands `studies/NAME.txt`: first the expected faults, one a line, as
//! `CODE LINE:COLUMN`, then, behind an empty line, all that a practitioner sees. A line that starts with `?` is
//! the reason of the entry, in words. `RENEW=1 cargo test --test mistakes` writes the second part anew; the
//! first is written by hand and never renewed.

use std::fs;
use std::path::{Path, PathBuf};

use halfstep::cli::pipeline;
use halfstep::fault::{Faults, Sources, show};

/// All faults of a text, as `CODE LINE:COLUMN` lines and as they are shown.
fn faults_of(name: &str, text: &str) -> (Vec<String>, String) {
    let mut sources = Sources::default();
    let file = sources.add(name, text);
    let mut faults = Faults::new();
    pipeline::check(&sources, file, None, &mut faults);
    let lines = faults
        .sorted()
        .iter()
        .map(|fault| {
            let (line, column) = sources.line_column(fault.at.file, fault.at.start);
            format!("{} {line}:{column}", fault.code)
        })
        .collect();
    (lines, show(&faults, &sources, 20, false))
}

#[expect(clippy::expect_used, reason = "a test without its folder tests nothing")]
fn studies() -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/mistakes/studies");
    let mut paths: Vec<PathBuf> = fs::read_dir(folder)
        .expect("the folder of wrong studies")
        .filter_map(|entry| Some(entry.ok()?.path()))
        .filter(|path| path.extension().is_some_and(|ext| ext == "md"))
        .collect();
    paths.sort();
    paths
}

#[expect(
    clippy::disallowed_methods,
    reason = "a test may be told by its environment to renew what it compares with"
)]
fn renew(path: &Path, text: &str) -> bool {
    std::env::var("RENEW").is_ok_and(|value| value == "1") && fs::write(path, text).is_ok()
}

#[test]
fn every_wrong_study_gives_its_fault_at_its_place() {
    let paths = studies();
    assert!(paths.len() >= 70);
    let mut wrong = Vec::new();
    for path in paths {
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        let beside = path.with_extension("txt");
        let text = fs::read_to_string(&path).unwrap();
        let expected = fs::read_to_string(&beside).unwrap_or_else(|_| panic!("{name} lacks its .txt"));
        let (head, shown) = expected.split_once("\n\n").unwrap_or((expected.trim_end(), ""));
        let expected_lines: Vec<&str> = head.lines().filter(|line| !line.starts_with('?')).collect();
        assert!(!expected_lines.is_empty(), "{name} expects no fault");
        let (lines, now) = faults_of(&name, &text);
        if lines != expected_lines {
            wrong.push(format!("{name}: expected {expected_lines:?}, got {lines:?}\n{now}"));
        } else if now.trim_end() != shown.trim_end()
            && !renew(&beside, &format!("{head}\n\n{}\n", now.trim_end()))
        {
            wrong.push(format!("{name}: shown differently, `RENEW=1` accepts it\n{now}"));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
