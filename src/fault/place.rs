//! Where a text stands: a file and a range of its bytes.

/// Which file of [`Sources`].
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub struct FileId(pub u32);

/// A range of bytes of one file; `start == end` is a place between two characters.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub struct Span {
    /// The file.
    pub file: FileId,
    /// First byte.
    pub start: usize,
    /// One past the last byte.
    pub end: usize,
}

impl Span {
    /// A span of `file` from byte `start` up to but without byte `end`.
    pub fn new(file: FileId, start: usize, end: usize) -> Self {
        Span { file, start, end }
    }
    /// The part of this span that starts `from` bytes and ends `to` bytes behind its start, kept inside it.
    #[must_use]
    pub fn part(self, from: usize, to: usize) -> Self {
        let start = (self.start + from).min(self.end);
        Span { file: self.file, start, end: (self.start + to).clamp(start, self.end) }
    }
}

/// The text of one file, with the name under which messages show it.
#[derive(Clone, Debug)]
pub struct SourceFile {
    /// The path as the user gave it, or as it was found, with forward slashes.
    pub name: String,
    /// The whole text.
    pub text: String,
}

/// All files that a study was read from.
#[derive(Clone, Debug, Default)]
pub struct Sources {
    files: Vec<SourceFile>,
}

impl Sources {
    /// Adds a file and returns its number.
    pub fn add(&mut self, name: impl Into<String>, text: impl Into<String>) -> FileId {
        self.files.push(SourceFile { name: name.into(), text: text.into() });
        FileId(u32::try_from(self.files.len() - 1).unwrap_or(u32::MAX))
    }
    /// The file of that number.
    pub fn file(&self, id: FileId) -> &SourceFile {
        &self.files[id.0 as usize]
    }
    /// The text of a span; empty where the span lies outside the file or splits a character.
    pub fn text(&self, span: Span) -> &str {
        self.file(span.file).text.get(span.start..span.end).unwrap_or("")
    }
    /// Line and column of a byte, both from 1; the column counts characters.
    pub fn line_column(&self, file: FileId, byte: usize) -> (usize, usize) {
        let text = &self.file(file).text;
        let mut byte = byte.min(text.len());
        while !text.is_char_boundary(byte) {
            byte -= 1;
        }
        let before = &text[..byte];
        let line_start = before.rfind('\n').map_or(0, |i| i + 1);
        (before.matches('\n').count() + 1, before[line_start..].chars().count() + 1)
    }
}
