//! Schemes, completion scripts and manual pages.

use crate::tool::Tool;

#[test]
fn schemes_are_listed_under_their_heads() {
    let done = Tool::new().expect(0, "schemes");
    let head: Vec<&str> = done.out.lines().next().unwrap().split_whitespace().collect();
    assert_eq!(head, ["KEY", "NAME", "ORDER", "EMBEDDED", "STAGES", "SOURCE"]);
    assert_eq!(done.err, "");
}

#[test]
fn a_scheme_that_is_not_there_is_wrong() {
    let done = Tool::new().expect(2, "schemes no-such-scheme");
    assert!(done.err.starts_with("error: there is no scheme `no-such-scheme`"), "{done:#?}");
    assert_eq!(done.out, "");
}

#[test]
fn completion_scripts_know_the_commands() {
    let tool = Tool::new();
    for shell in ["bash", "zsh", "fish", "powershell", "elvish"] {
        let done = tool.expect(0, &format!("completions {shell}"));
        assert!(done.out.contains("proofread"), "{shell}");
    }
}

#[test]
fn manual_pages_are_roff() {
    let tool = Tool::new();
    let page = tool.expect(0, "manual").out;
    assert!(page.contains(".TH halfstep 1") && page.contains("Exit status"), "{page}");
    let page = tool.expect(0, "manual issue").out;
    assert!(page.contains("\\-\\-jobs"), "{page}");
    tool.expect(2, "manual nothing");
}
