//! Prose with quotes and blocks, as the reader of studies hands it on.

use super::text;
use crate::fault::Span;
use crate::study::{BlockRef, Part, Quote};

/// Prose with `[=RUN.NAME]` and with fences of ours, as the reader of studies would hand it on.
pub(in crate::report) fn body(markdown: &str) -> Vec<Part> {
    const MARK: char = '\u{e000}';
    let mut source = String::new();
    let mut quotes = Vec::new();
    let mut rest = markdown;
    while let Some(at) = rest.find("[=") {
        let end = at + rest[at..].find(']').unwrap();
        let inner = &rest[at + 2..end];
        source.push_str(&rest[..at]);
        source.push(MARK);
        quotes.push(Quote {
            quantity: text(inner.trim_end_matches(" plain")),
            plain: inner.ends_with(" plain"),
            at: Span::default(),
        });
        rest = &rest[end + 1..];
    }
    source.push_str(rest);
    let mut quotes = quotes.into_iter();
    let mut counts = [0_usize; 5];
    let mut inside = false;
    let mut parts = Vec::new();
    let options = pulldown_cmark::Options::ENABLE_TABLES | pulldown_cmark::Options::ENABLE_FOOTNOTES;
    for event in pulldown_cmark::Parser::new_ext(&source, options) {
        use pulldown_cmark::{CodeBlockKind, Event, Tag, TagEnd};
        match event {
            Event::Start(Tag::CodeBlock(CodeBlockKind::Fenced(ref info))) => {
                let kinds = ["model", "run", "chart", "table", "criteria"];
                let kind = info.split(' ').next().unwrap();
                let Some(k) = kinds.iter().position(|known| *known == kind) else {
                    parts.push(Part::Markdown(event.into_static()));
                    continue;
                };
                let i = counts[k];
                counts[k] += 1;
                inside = true;
                parts.push(Part::Block(match k {
                    0 => BlockRef::Model(i),
                    1 => BlockRef::Run(i),
                    2 => BlockRef::Chart(i),
                    3 => BlockRef::Table(i),
                    _ => BlockRef::Criteria(i),
                }));
            }
            Event::End(TagEnd::CodeBlock) if inside => inside = false,
            Event::Text(words) if !inside => {
                for (i, piece) in words.split(MARK).enumerate() {
                    if i > 0 {
                        parts.push(Part::Quote(quotes.next().unwrap()));
                    }
                    if !piece.is_empty() {
                        parts.push(Part::Markdown(Event::Text(piece.to_owned().into())));
                    }
                }
            }
            other => {
                if !inside {
                    parts.push(Part::Markdown(other.into_static()));
                }
            }
        }
    }
    parts
}
