//! `begin`: a first study, and nothing overwritten.

use crate::tool::Tool;

#[test]
fn a_first_study_is_written_once() {
    let tool = Tool::new();
    let done = tool.expect(0, "begin tank.md");
    assert_eq!(done.out, "wrote tank.md; next: halfstep issue tank.md\n");
    let first = tool.files("");
    let text = String::from_utf8(first["tank.md"].clone()).unwrap();
    assert!(text.starts_with("---\nstudy: "), "{text}");
    assert!(text.contains("invented"), "the scenario says that it is invented");
    let done = tool.expect(2, "begin tank.md");
    assert_eq!(done.err, "error: tank.md is there already, and is left as it is\n");
    assert_eq!(tool.files(""), first);
}

#[test]
fn a_file_of_the_user_is_never_overwritten() {
    let tool = Tool::new();
    tool.file("mine.md", "mine");
    tool.file("folder.md/x", "mine");
    tool.expect(2, "begin mine.md");
    tool.expect(2, "begin folder.md");
    assert_eq!(tool.files("").into_values().collect::<Vec<_>>(), [b"mine", b"mine"]);
}

#[test]
fn a_study_ends_in_md() {
    let tool = Tool::new();
    let done = tool.expect(2, "begin tank.txt");
    assert!(done.err.contains("tank.txt does not end in .md"), "{done:#?}");
    assert!(tool.files("").is_empty());
}

#[test]
fn a_folder_that_is_not_there_is_a_failure_with_its_path() {
    let tool = Tool::new();
    let done = tool.expect(4, "begin none/tank.md");
    assert!(done.err.starts_with("error: cannot write none/tank.md: "), "{done:#?}");
    assert!(tool.files("").is_empty());
}
