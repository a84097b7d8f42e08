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
fn a_scheme_is_shown_with_its_coefficients_order_and_stability() {
    let tool = Tool::new();
    let page = tool.expect(0, "schemes rk4").out;
    // Kutta's weights (1901); the ends of the stable axes, -2.785 and 2 sqrt(2), in Hairer & Wanner II
    // (2nd ed. 1996), sect. IV.2.
    for text in ["1/6  1/3  1/3  1/6", "Order: 4", "Stages: 4", "from -2.7853 to 0", "to 2.8284 i"] {
        assert!(page.contains(text), "{text}: {page}");
    }
    assert!(tool.expect(0, "schemes").out.contains("\nrk4 "), "its key is in the list");
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
