//! What is asked of a file before it is read as a study: UTF-8, size, no control characters.

use crate::fault::{Fault, Faults, FileId, Sources, Span};

/// The largest study in bytes: 16 MiB, a thousand times a long report. Data belongs in files of its own.
pub const LARGEST_STUDY: usize = 16 * 1024 * 1024;

/// A file that is no UTF-8 text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct NotText {
    /// The file as messages show it.
    pub name: String,
    /// The line of the first wrong byte, from 1.
    pub line: usize,
    /// Its column in characters, from 1.
    pub column: usize,
    /// The byte.
    pub byte: u8,
    /// What to do.
    pub help: &'static str,
}

impl std::fmt::Display for NotText {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(
            f,
            "error[not-utf8]: the file is not UTF-8 text: byte 0x{:02x}\n --> {}:{}:{}\n  = help: {}",
            self.byte, self.name, self.line, self.column, self.help
        )
    }
}

impl std::error::Error for NotText {}

/// The bytes of a file as text.
///
/// # Errors
/// [`NotText`] with line and column of the first byte that is not UTF-8.
pub fn decode(name: &str, bytes: Vec<u8>) -> Result<String, NotText> {
    String::from_utf8(bytes).map_err(|error| {
        let good = error.utf8_error().valid_up_to();
        let bytes = error.as_bytes();
        let before = String::from_utf8_lossy(&bytes[..good]);
        let line_start = before.rfind('\n').map_or(0, |i| i + 1);
        let help = if bytes.starts_with(&[0xff, 0xfe]) || bytes.starts_with(&[0xfe, 0xff]) {
            "the file looks like UTF-16: save it as UTF-8"
        } else {
            "save the file as UTF-8"
        };
        NotText {
            name: name.to_string(),
            line: before.matches('\n').count() + 1,
            column: before[line_start..].chars().count() + 1,
            byte: bytes.get(good).copied().unwrap_or_default(),
            help,
        }
    })
}

/// Checks the text of a study as a whole; gives the place behind a byte order mark, or `None` with a fault.
pub(super) fn check_text(sources: &Sources, file: FileId, faults: &mut Faults) -> Option<usize> {
    let text = &sources.file(file).text;
    let start = if text.starts_with('\u{feff}') { '\u{feff}'.len_utf8() } else { 0 };
    if text.len() > LARGEST_STUDY {
        let megabytes = text.len().div_ceil(1024 * 1024);
        let message = format!("the study has {megabytes} MiB where at most 16 MiB are read");
        faults.add(
            Fault::error("study-too-large", Span::new(file, start, start), message)
                .help("keep the data in files of their own, or split the study"),
        );
        return None;
    }
    if let Some(at) =
        text.bytes().position(|byte| byte < 0x20 && !matches!(byte, b'\t' | b'\n' | b'\r') || byte == 0x7f)
    {
        let message = format!("a control character (byte 0x{:02x}) stands in the study", text.as_bytes()[at]);
        faults.add(
            Fault::error("control-character", Span::new(file, at, at + 1), message)
                .help("a study is plain text: remove the character"),
        );
        return None;
    }
    if text[start..].trim().is_empty() {
        faults.add(
            Fault::error("empty-study", Span::new(file, start, start), "the study is empty")
                .help("`halfstep begin` writes a study to start from"),
        );
        return None;
    }
    Some(start)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_first_wrong_byte_is_named_with_its_place() {
        let check = |bytes: &[u8], line: usize, column: usize, byte: u8| {
            let error = decode("s.md", bytes.to_vec()).unwrap_err();
            assert_eq!((error.line, error.column, error.byte), (line, column, byte), "{error}");
        };
        check(b"\xff", 1, 1, 0xff);
        check(
            "é\nü: ".as_bytes().iter().copied().chain([0xfc, 0x62]).collect::<Vec<_>>().as_slice(),
            2,
            4,
            0xfc,
        );
        check(b"ab\r\nc\xe9", 2, 2, 0xe9);
        check(b"\xff\xfea\0", 1, 1, 0xff);
        check(b"abc\xe2\x82", 1, 4, 0xe2);
        assert_eq!(decode("s.md", "温度".as_bytes().to_vec()).unwrap(), "温度");
        assert!(decode("s.md", vec![0xff, 0xfe]).unwrap_err().to_string().contains("UTF-16"));
    }
}
