//! Quoted quantities in prose: `[=RUN.QUANTITY]`.
//!
//! The Markdown parser splits a text at every bracket and line end: the pieces of one run of text are put
//! together again, and taken apart at the quotes. `\[=` stands for itself.

use pulldown_cmark::{CowStr, Event};

use super::name::check_quantity;
use super::{Part, Quote, Text};
use crate::fault::{Fault, Faults, FileId, Span, clip};

/// A run of text: pieces that follow each other without other events between them.
#[derive(Default)]
pub(super) struct TextRun<'a> {
    pieces: Vec<Piece<'a>>,
}

struct Piece<'a> {
    text: CowStr<'a>,
    /// Where it starts in the file.
    at: usize,
    /// Whether it is the end of a line of the source, which is a blank to the reader.
    line_end: bool,
}

impl<'a> TextRun<'a> {
    /// Adds a text that stands at byte `at`.
    pub(super) fn push(&mut self, text: CowStr<'a>, at: usize) {
        self.pieces.push(Piece { text, at, line_end: false });
    }
    /// Adds the end of a line.
    pub(super) fn push_line_end(&mut self, at: usize) {
        self.pieces.push(Piece { text: CowStr::Borrowed("\n"), at, line_end: true });
    }
    /// Hands on what was gathered, quotes taken out, and starts anew.
    pub(super) fn flush(&mut self, source: &str, file: FileId, parts: &mut Vec<Part>, faults: &mut Faults) {
        if self.pieces.is_empty() {
            return;
        }
        let pieces = std::mem::take(&mut self.pieces);
        let all: String = pieces.iter().map(|piece| piece.text.as_ref()).collect();
        if all.contains("[=") {
            let mut starts = Vec::with_capacity(pieces.len());
            let mut length = 0;
            for piece in &pieces {
                starts.push(length);
                length += piece.text.len();
            }
            Splitter { all: &all, pieces: &pieces, starts: &starts, source, file }.split(parts, faults);
        } else {
            for piece in pieces {
                emit(piece.text, piece.line_end, parts);
            }
        }
    }
}

fn emit(text: CowStr<'_>, line_end: bool, parts: &mut Vec<Part>) {
    parts.push(Part::Markdown(if line_end { Event::SoftBreak } else { Event::Text(text.into_static()) }));
}

struct Splitter<'a> {
    all: &'a str,
    pieces: &'a [Piece<'a>],
    starts: &'a [usize],
    source: &'a str,
    file: FileId,
}

impl Splitter<'_> {
    fn split(&self, parts: &mut Vec<Part>, faults: &mut Faults) {
        let (mut done, mut from) = (0, 0);
        while let Some(open) = self.all[from..].find("[=").map(|i| from + i) {
            from = open + 2;
            if !self.is_opening(open) {
                continue;
            }
            let Some(close) = self.all[from..].find(['[', ']']).map(|i| from + i) else {
                faults.add(self.unclosed(open, self.all.len()));
                break;
            };
            if self.all.as_bytes()[close] == b'[' {
                faults.add(self.unclosed(open, close));
                from = close;
                continue;
            }
            from = close + 1;
            if let Some(quote) = self.quote(open, close, faults) {
                self.text(done, open, parts);
                parts.push(Part::Quote(quote));
                done = close + 1;
            }
        }
        self.text(done, self.all.len(), parts);
    }

    /// Whether the bracket stands in the source as it is, without a backslash in front.
    fn is_opening(&self, open: usize) -> bool {
        let at = self.byte(open);
        let before = self.source.get(..at).unwrap_or_default();
        let backslashes = before.len() - before.trim_end_matches('\\').len();
        self.source.get(at..).is_some_and(|rest| rest.starts_with('[')) && backslashes % 2 == 0
    }

    fn quote(&self, open: usize, close: usize, faults: &mut Faults) -> Option<Quote> {
        let at = self.span(open, close + 1);
        let inner = &self.all[open + 2..close];
        let malformed = |message: String| {
            Fault::error("bad-quote", at, message).help(
                "write `[=RUN.QUANTITY]` or `[=RUN.QUANTITY plain]`; `\\[=` shows the characters themselves",
            )
        };
        let words: Vec<&str> = inner.split_whitespace().take(4).collect();
        let Some(&name) = words.first() else {
            faults.add(malformed("the quote names no quantity".to_string()));
            return None;
        };
        let start = open + 2 + inner.find(name).unwrap_or(0);
        let span = self.span(start, start + name.len());
        let exact = self.source.get(span.start..span.end) == Some(name);
        let quantity = Text { value: name.to_string(), at: span, exact };
        let plain = match words[1..] {
            [] => false,
            ["plain"] => true,
            ["in", ..] => {
                faults.add(
                    Fault::error("quote-unit", at, "units are not converted yet")
                        .help(format!("write `[={}]`: the quantity is quoted in its own unit", clip(name))),
                );
                return None;
            }
            [word, ..] => {
                faults
                    .add(malformed(format!("`{}` cannot stand behind the quantity of a quote", clip(word))));
                return None;
            }
        };
        check_quantity(&quantity, faults).then_some(Quote { quantity, plain, at })
    }

    fn unclosed(&self, open: usize, end: usize) -> Fault {
        let line_end = self.all[open..end].find('\n').map_or(end, |i| open + i);
        Fault::error("bad-quote", self.span(open, line_end), "the quote does not end")
            .help("close it with `]`, or write `\\[=` to show the characters themselves")
    }

    fn span(&self, start: usize, end: usize) -> Span {
        let from = self.byte(start);
        let to = if end > start { self.byte(end - 1) + 1 } else { from };
        Span::new(self.file, from, to.max(from))
    }

    /// The byte of the file for a byte of the text.
    fn byte(&self, at: usize) -> usize {
        let idx = self.starts.partition_point(|start| *start <= at).saturating_sub(1);
        self.pieces[idx].at + (at - self.starts[idx])
    }

    /// Hands on the text of `from..to`, its line ends as such.
    fn text(&self, from: usize, to: usize, parts: &mut Vec<Part>) {
        if from >= to {
            return;
        }
        let first = self.starts.partition_point(|start| *start <= from).saturating_sub(1);
        for (piece, start) in self.pieces.iter().zip(self.starts).skip(first) {
            if *start >= to {
                break;
            }
            let (begin, end) = (from.max(*start), to.min(start + piece.text.len()));
            if begin < end {
                emit(CowStr::from(self.all[begin..end].to_string()), piece.line_end, parts);
            }
        }
    }
}
