//! Reads the text of a study.

use super::fault_text::IssueError;
use super::find::Found;
use crate::fault::Failure;

/// The bytes of a study's file as text.
///
/// # Errors
/// [`IssueError::Machine`] where it cannot be read, [`IssueError::Unreadable`] where it is not UTF-8.
pub(super) fn read(found: &Found) -> Result<String, IssueError> {
    let bytes = std::fs::read(&found.path)
        .map_err(|cause| Failure::new(format!("cannot read {}", found.path.display()), cause))?;
    text(bytes).map_err(IssueError::Unreadable)
}

fn text(bytes: Vec<u8>) -> Result<String, String> {
    String::from_utf8(bytes).map_err(|wrong| {
        let good = wrong.utf8_error().valid_up_to();
        let before = &wrong.as_bytes()[..good];
        let line = before.split(|&byte| byte == b'\n').count();
        let column = String::from_utf8_lossy(before.rsplit(|&byte| byte == b'\n').next().unwrap_or_default());
        format!(
            "line {line}, column {}: the byte {:#04x} is not UTF-8: save the file as UTF-8",
            column.chars().count() + 1,
            wrong.as_bytes()[good]
        )
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_byte_that_is_not_utf_8_is_named_with_its_line_and_column() {
        let wrong = text(b"---\nstudy: caf\xe9\n".to_vec()).unwrap_err();
        assert_eq!(wrong, "line 2, column 11: the byte 0xe9 is not UTF-8: save the file as UTF-8");
        let wrong = text("é\u{e9}\u{e9}".bytes().chain([0xff]).collect()).unwrap_err();
        assert!(wrong.starts_with("line 1, column 4:"), "{wrong}");
        assert_eq!(text(b"ok".to_vec()).unwrap(), "ok");
    }
}
