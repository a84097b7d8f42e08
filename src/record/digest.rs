//! SHA-256 digests of files, and the text of model blocks.

use crate::fault::{SourceFile, Span};
use pulldown_cmark::{Event, Options, Parser, Tag};
use serde::Serialize;
use sha2::{Digest, Sha256};

/// A file that was read or written, with its digest.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize)]
pub struct FileDigest {
    /// Whether the file was read or written.
    pub was: Was,
    /// Its path with forward slashes: of a file read, relative to the folder of the study; of a file written,
    /// relative to the report folder.
    pub path: String,
    /// SHA-256 of its bytes as 64 hexadecimal digits.
    pub sha256: String,
}

/// What was done with a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Was {
    /// Read, to make the report.
    Read,
    /// Written, with the report.
    Written,
}

impl FileDigest {
    /// The digest of a file's bytes.
    pub fn of(was: Was, path: impl Into<String>, bytes: &[u8]) -> Self {
        FileDigest { was, path: path.into(), sha256: sha256(bytes) }
    }
}

/// SHA-256 (FIPS 180-4) as 64 hexadecimal digits.
pub fn sha256(bytes: &[u8]) -> String {
    let mut text = String::with_capacity(64);
    for byte in Sha256::digest(bytes) {
        for half in [byte >> 4, byte & 15] {
            text.push(char::from_digit(u32::from(half), 16).unwrap_or('0'));
        }
    }
    text
}

/// The body of the fenced block in which `at` stands, without its fences; `None` where it stands in none.
/// In a list or a quote the marks of each line are left out, as Markdown defines.
pub fn block_text(file: &SourceFile, at: Span) -> Option<String> {
    let options = Options::ENABLE_YAML_STYLE_METADATA_BLOCKS;
    let mut inside = false;
    let mut text = String::new();
    for (event, range) in Parser::new_ext(&file.text, options).into_offset_iter() {
        match event {
            Event::Start(Tag::CodeBlock(_)) => inside = range.contains(&at.start),
            Event::Text(part) if inside => text.push_str(&part),
            Event::End(_) if inside => return Some(text),
            _ => {}
        }
    }
    None
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fault::{FileId, Sources};

    #[test]
    fn digests_are_those_of_the_standard() {
        // NIST, FIPS 180-4 example values for SHA-256: the message "abc", and the message of 56 characters.
        assert_eq!(sha256(b"abc"), "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
        assert_eq!(
            sha256(b"abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq"),
            "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1"
        );
    }

    #[test]
    fn the_text_of_a_block_is_found_from_a_place_in_it() {
        let study =
            "---\nstudy: S\n---\n\n```model a\nx: 1\n```\n\n> ~~~model b\n> y: 2\n> z: 3\n> ~~~\n\nend\n";
        let mut sources = Sources::default();
        let id = sources.add("s.md", study);
        assert_eq!(id, FileId(0));
        let find = |name: &str| {
            let start = study.find(name).unwrap();
            block_text(sources.file(id), Span::new(id, start, start + 1))
        };
        assert_eq!(find("a\nx").as_deref(), Some("x: 1\n"));
        assert_eq!(find("b\n> y").as_deref(), Some("y: 2\nz: 3\n"));
        assert_eq!(find("end"), None);
    }
}
