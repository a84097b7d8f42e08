//! Paths that are no studies: told all at once, before anything is executed or written.

use crate::tool::Tool;

const STUDY: &str = "---\nstudy: A study\n---\n";

#[test]
fn a_path_that_is_not_there_is_named() {
    let tool = Tool::new();
    for command in ["issue", "proofread"] {
        let done = tool.expect(2, &format!("{command} none.md nothing"));
        assert_eq!(
            done.err,
            "error: there is no file or folder none.md\nerror: there is no file or folder nothing\n"
        );
        assert_eq!(done.out, "");
    }
    assert!(tool.files("").is_empty());
}

#[test]
fn a_folder_without_studies_is_wrong() {
    let tool = Tool::new();
    tool.file("folder/readme.md", "# Read me\n");
    tool.file("folder/study.txt", STUDY);
    let done = tool.expect(2, "issue folder");
    assert!(done.err.starts_with("error: there is no study in folder: "), "{done:#?}");
    assert!(!tool.folder.path().join("out").exists());
}

#[test]
fn two_studies_for_one_place_are_wrong() {
    let tool = Tool::new();
    tool.file("a/tank.md", STUDY);
    tool.file("b/tank.md", STUDY);
    let done = tool.expect(2, "issue a b");
    assert!(done.err.contains("a/tank.md and b/tank.md would both be issued to tank"), "{done:#?}");
    assert!(!tool.folder.path().join("out").exists());
}

#[test]
fn a_study_that_is_not_utf_8_is_wrong_at_a_line_and_a_column() {
    let tool = Tool::new();
    tool.file("latin.md", b"---\nstudy: caf\xe9\n---\n");
    for command in ["issue --quiet", "proofread"] {
        let done = tool.expect(2, &format!("{command} latin.md"));
        assert_eq!(
            done.err,
            "error: latin.md: line 2, column 11: the byte 0xe9 is not UTF-8: save the file as UTF-8\n"
        );
    }
    assert!(!tool.folder.path().join("out").exists());
}
