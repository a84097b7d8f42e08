//! Streams that are no terminal, closed or full.

use crate::tool::{Done, Tool};
use std::fs::OpenOptions;
use std::process::Stdio;

#[test]
fn no_colour_reaches_a_stream_that_is_no_terminal() {
    let tool = Tool::new();
    for arguments in ["--help", "issue none.md", "issue --jobs 0 x", "schemes nothing"] {
        let done = tool.run(arguments);
        assert!(!done.out.contains('\x1b') && !done.err.contains('\x1b'), "{arguments}: {done:#?}");
    }
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_standard_output_is_a_failure() {
    let full = OpenOptions::new().write(true).open("/dev/full").unwrap();
    let done = Done::of(Tool::new().command("schemes").stdout(full).output().unwrap());
    assert_eq!(done.status, 4, "{done:#?}");
    assert!(done.err.starts_with("error: cannot write to standard output: "), "{done:#?}");
}

#[cfg(unix)]
#[test]
fn a_reader_that_goes_away_is_no_fault() {
    let (reader, writer) = std::io::pipe().unwrap();
    drop(reader);
    let done = Done::of(Tool::new().command("manual").stdout(Stdio::from(writer)).output().unwrap());
    assert_eq!((done.status, done.err.as_str()), (0, ""));
}
