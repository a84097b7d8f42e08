//! The body of a study: Markdown events that are safe to render, quotes and blocks.
//!
//! What a report must not contain is taken out here: raw HTML becomes text, images become their texts, and
//! links go to allowed places only. Nothing downstream needs to check again.

use std::collections::{BTreeMap, BTreeSet};
use std::ops::Range;

use pulldown_cmark::{CodeBlockKind, CowStr, Event, Options, Parser, Tag, TagEnd};

use super::block::{self, Blocks, chart, criteria, model, run, table};
use super::fence::{self, Fence, Kind};
use super::node::{self, Excerpt};
use super::quote::TextRun;
use super::{BlockRef, Part, Text, link};
use crate::fault::{Fault, Faults, FileId, Span, clip};

/// The deepest nesting of lists, quotes and emphasis.
const DEEPEST: usize = 100;

/// What the body of a study holds.
#[derive(Debug, Default)]
pub(super) struct Body {
    /// Prose and blocks in the order of the file.
    pub(super) parts: Vec<Part>,
    /// The blocks without an error.
    pub(super) blocks: Blocks,
    /// Kinds and names of the blocks with an error: what refers to them is not wrong for that.
    pub(super) broken: BTreeSet<(Kind, String)>,
    /// Whether the body was read to its end.
    pub(super) whole: bool,
}

/// Reads the body of a study, which starts at byte `start` of the file.
pub(super) fn read(source: &str, file: FileId, start: usize, faults: &mut Faults) -> Body {
    let options = Options::ENABLE_TABLES | Options::ENABLE_FOOTNOTES | Options::ENABLE_STRIKETHROUGH;
    let mut reader = Reader {
        source,
        file,
        faults,
        body: Body::default(),
        run: TextRun::default(),
        kept: Vec::new(),
        code: None,
        html: None,
        names: BTreeMap::new(),
        depth: 0,
    };
    for (event, range) in Parser::new_ext(&source[start..], options).into_offset_iter() {
        if !reader.take(event, range.start + start..range.end + start) {
            reader.body.parts.clear();
            return reader.body;
        }
    }
    reader.flush();
    reader.body.whole = true;
    reader.body
}

/// A code block that is being read.
struct Code<'a> {
    kind: CodeBlockKind<'a>,
    range: Range<usize>,
    pieces: Vec<(CowStr<'a>, usize)>,
}

struct Reader<'a, 'f> {
    source: &'a str,
    file: FileId,
    faults: &'f mut Faults,
    body: Body,
    run: TextRun<'a>,
    /// For each open link or image, whether it is kept.
    kept: Vec<bool>,
    code: Option<Code<'a>>,
    html: Option<(String, usize)>,
    names: BTreeMap<(Kind, String), Span>,
    depth: usize,
}

impl<'a> Reader<'a, '_> {
    /// Takes an event; whether reading can go on.
    fn take(&mut self, event: Event<'a>, range: Range<usize>) -> bool {
        match &event {
            Event::Start(_) => self.depth += 1,
            Event::End(_) => self.depth = self.depth.saturating_sub(1),
            _ => {}
        }
        if self.depth > DEEPEST {
            let at = Span::new(self.file, range.start, range.start);
            self.faults.add(
                Fault::error(
                    "nested-too-deep",
                    at,
                    "lists, quotes and emphasis are nested more than 100 deep",
                )
                .help("no report needs such nesting: check the start of the line"),
            );
            return false;
        }
        match event {
            Event::Text(text) => self.take_text(text, range.start),
            Event::SoftBreak => self.run.push_line_end(range.start),
            Event::Html(text) => {
                if let Some((html, _)) = &mut self.html {
                    html.push_str(&text);
                } else {
                    self.take_html(&text, range.start, false);
                }
            }
            other => {
                self.flush();
                self.take_other(other, range);
            }
        }
        true
    }

    fn take_text(&mut self, text: CowStr<'a>, at: usize) {
        if let Some(code) = &mut self.code {
            code.pieces.push((text, at));
        } else if let Some((html, _)) = &mut self.html {
            html.push_str(&text);
        } else {
            self.run.push(text, at);
        }
    }

    fn take_other(&mut self, event: Event<'a>, range: Range<usize>) {
        match event {
            Event::Start(Tag::CodeBlock(kind)) => self.code = Some(Code { kind, range, pieces: Vec::new() }),
            Event::End(TagEnd::CodeBlock) => {
                if let Some(code) = self.code.take() {
                    self.take_code(code);
                }
            }
            Event::Start(Tag::HtmlBlock) => self.html = Some((String::new(), range.start)),
            Event::End(TagEnd::HtmlBlock) => {
                if let Some((html, at)) = self.html.take() {
                    self.take_html(&html, at, true);
                }
            }
            Event::InlineHtml(text) => self.take_html(&text, range.start, false),
            Event::Start(Tag::Link { link_type, dest_url, title, id }) => {
                let safe = self.take_link(&dest_url, &range);
                self.kept.push(safe);
                if safe {
                    self.push(Event::Start(Tag::Link { link_type, dest_url, title, id }));
                }
            }
            Event::Start(Tag::Image { .. }) => {
                let at = Span::new(self.file, range.start, range.end);
                self.faults.add(
                    Fault::warning(
                        "image-left-out",
                        at,
                        "an image is not shown: a report holds no file from outside",
                    )
                    .help("its text is shown in its place"),
                );
                self.kept.push(false);
            }
            Event::End(TagEnd::Link | TagEnd::Image) => {
                if self.kept.pop() == Some(true) {
                    self.push(Event::End(TagEnd::Link));
                }
            }
            other => self.push(other),
        }
    }

    /// Whether a link is kept; a fault where it is not, or where it swallowed a quote.
    fn take_link(&mut self, target: &str, range: &Range<usize>) -> bool {
        let at = Span::new(self.file, range.start, range.end);
        if self.source[range.start..].starts_with("[=") {
            self.faults.add(
                Fault::error("bad-quote", at, "a quote cannot be a link itself")
                    .help("put the link around it: `[[=RUN.QUANTITY]](TARGET)`"),
            );
        }
        let safe = link::is_safe(target);
        if !safe {
            let message = format!("the link to `{}` is left out", clip(target));
            self.faults.add(
                Fault::warning("link-left-out", at, message)
                    .help("a link goes to `http:`, `https:`, `mailto:`, `#PLACE` or a relative path"),
            );
        }
        safe
    }

    /// Raw HTML: a comment is left out as every viewer does, anything else is shown as text.
    fn take_html(&mut self, html: &str, at: usize, is_block: bool) {
        let trimmed = html.trim();
        let comment = trimmed.strip_prefix("<!--").and_then(|rest| rest.find("-->").map(|i| &rest[i + 3..]));
        if comment.is_some_and(str::is_empty) {
            return;
        }
        let end = at + trimmed.lines().next().unwrap_or_default().len();
        self.faults.add(
            Fault::warning("raw-html", Span::new(self.file, at, end), "HTML is shown as text")
                .help("write Markdown, or put the text between backquotes"),
        );
        if is_block {
            self.push(Event::Start(Tag::Paragraph));
        }
        self.push(Event::Text(CowStr::from(if is_block { trimmed } else { html }.to_string())));
        if is_block {
            self.push(Event::End(TagEnd::Paragraph));
        }
    }

    fn take_code(&mut self, code: Code<'a>) {
        let mut meaning = Fence::Code;
        if code.kind.is_fenced() {
            if let Some((info, fence)) = fence::info(self.source, self.file, code.range.start) {
                meaning = fence::classify(&info, self.faults);
                let block = self.source.get(code.range.clone()).unwrap_or_default();
                if meaning != Fence::Code && !fence::is_closed(block, fence) {
                    self.faults
                        .add(Fault::error("open-fence", info.at, "the block does not end").help(format!(
                            "end it with a line {fence} that is indented like its first line"
                        )));
                    if let Fence::Block { kind, name: Some(name), .. } = meaning {
                        self.body.broken.insert((kind, name.value));
                    }
                    return;
                }
            }
        } else {
            self.check_indented(&code);
        }
        match meaning {
            Fence::Block { kind, name, head } => self.take_block(kind, name, head, &code),
            Fence::Code => {
                self.push(Event::Start(Tag::CodeBlock(code.kind)));
                for (text, _) in code.pieces {
                    self.push(Event::Text(text));
                }
                self.push(Event::End(TagEnd::CodeBlock));
            }
            Fence::Refused { likely } => self.body.broken.extend(likely),
        }
    }

    /// A fence that is indented by four blanks is code for Markdown, and no block.
    fn check_indented(&mut self, code: &Code<'a>) {
        let Some((first, at)) = code.pieces.first() else { return };
        let Some((info, _)) = fence::info(self.source, self.file, *at) else { return };
        if !first.starts_with("```") && !first.starts_with("~~~") {
            return;
        }
        if let Fence::Block { .. } = fence::classify(&info, &mut Faults::new()) {
            self.faults.add(
                Fault::warning("indented-fence", info.at, "an indented fence is shown as it is")
                    .help("remove the blanks in front of the fence to make a block of it"),
            );
        }
    }

    fn take_block(&mut self, kind: Kind, name: Option<Text>, head: Span, code: &Code<'a>) {
        let key = name.as_ref().map(|name| (kind, name.value.clone()));
        let mut twice = false;
        if let (Some(key), Some(name)) = (&key, &name) {
            if let Some(first) = self.names.get(key) {
                twice = true;
                let message = format!("the {} `{}` stands twice", kind.word(), name.value);
                self.faults.add(
                    Fault::error("duplicate-name", name.at, message)
                        .label("again here")
                        .also(*first, "first here")
                        .help("give one of them another name"),
                );
            } else {
                self.names.insert(key.clone(), name.at);
            }
        }
        let mut excerpt = Excerpt::new(self.source, self.file, head.end);
        for (text, at) in &code.pieces {
            excerpt.push(text, *at);
        }
        let errors = self.faults.errors();
        let what = match &name {
            Some(name) => format!("the {} `{}`", kind.word(), name.value),
            None => "the list of criteria".to_string(),
        };
        let made = if excerpt.is_blank() {
            self.faults.add(
                Fault::error("empty-block", head, format!("{what} is empty")).help("fill it or remove it"),
            );
            None
        } else {
            node::parse(&excerpt, &what, self.faults)
                .and_then(|node| make(kind, name, head, &node, self.faults))
        };
        match made {
            Some(made) if self.faults.errors() == errors && !twice => {
                let reference = made.store(&mut self.body.blocks);
                self.body.parts.push(Part::Block(reference));
            }
            _ => self.body.broken.extend(key.filter(|_| !twice)),
        }
    }

    fn push(&mut self, event: Event<'a>) {
        self.body.parts.push(Part::Markdown(event.into_static()));
    }

    fn flush(&mut self) {
        self.run.flush(self.source, self.file, &mut self.body.parts, self.faults);
    }
}

/// A block as read.
enum Made {
    Model(model::ModelBlock),
    Run(Box<run::RunBlock>),
    Chart(chart::ChartBlock),
    Table(table::TableBlock),
    Criteria(criteria::CriteriaBlock),
}

fn make(kind: Kind, name: Option<Text>, head: Span, node: &node::Node, faults: &mut Faults) -> Option<Made> {
    use block::{chart, criteria, model, run, table};
    if kind == Kind::Criteria {
        return criteria::read(name, head, node, faults).map(Made::Criteria);
    }
    let name = name?;
    match kind {
        Kind::Model => model::read(name, head, node, faults).map(Made::Model),
        Kind::Run => run::read(name, head, node, faults).map(|run| Made::Run(Box::new(run))),
        Kind::Chart => chart::read(name, head, node, faults).map(Made::Chart),
        Kind::Table | Kind::Criteria => table::read(name, head, node, faults).map(Made::Table),
    }
}

impl Made {
    fn store(self, blocks: &mut Blocks) -> BlockRef {
        match self {
            Made::Model(block) => BlockRef::Model(push(&mut blocks.models, block)),
            Made::Run(block) => BlockRef::Run(push(&mut blocks.runs, *block)),
            Made::Chart(block) => BlockRef::Chart(push(&mut blocks.charts, block)),
            Made::Table(block) => BlockRef::Table(push(&mut blocks.tables, block)),
            Made::Criteria(block) => BlockRef::Criteria(push(&mut blocks.criteria, block)),
        }
    }
}

fn push<T>(list: &mut Vec<T>, item: T) -> usize {
    list.push(item);
    list.len() - 1
}
