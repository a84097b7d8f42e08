//! Wrong arguments, help and version.

use crate::tool::Tool;

#[test]
fn no_arguments_show_the_help_and_are_wrong() {
    let done = Tool::new().expect(2, "");
    assert!(done.err.contains("Usage:"), "{done:#?}");
    assert_eq!(done.out, "");
}

#[test]
fn help_and_version_go_to_standard_output() {
    let tool = Tool::new();
    for arguments in ["--help", "issue --help", "proofread --help", "schemes --help", "begin --help"] {
        let done = tool.expect(0, arguments);
        assert!(done.out.contains("Example"), "{arguments} has an example: {done:#?}");
        assert_eq!(done.err, "");
    }
    let version = tool.expect(0, "--version").out;
    assert_eq!(version, format!("halfstep {}\n", env!("CARGO_PKG_VERSION")));
}

#[test]
fn hidden_commands_are_not_in_the_help() {
    let help = Tool::new().expect(0, "--help").out;
    for command in ["issue", "proofread", "schemes", "begin"] {
        assert!(help.contains(&format!("\n  {command} ")), "{command}: {help}");
    }
    assert!(!help.contains("completions") && !help.contains("manual"), "{help}");
}

#[test]
fn wrong_arguments_give_status_2_and_write_nothing() {
    let tool = Tool::new();
    for arguments in [
        "print",
        "issue",
        "proofread",
        "begin",
        "issue --speed 3 a.md",
        "issue --jobs 0 a.md",
        "issue --limit 0 a.md",
        "issue --limit 1e9 a.md",
        "issue --out",
        "begin a.md b.md",
        "completions cobol",
    ] {
        let done = tool.expect(2, arguments);
        assert!(done.err.starts_with("error:"), "{arguments}: {done:#?}");
        assert_eq!(done.out, "", "{arguments}");
    }
    assert!(tool.files("").is_empty());
}
