//! The body of a study as markup: Markdown by `pulldown-cmark`, quotes and blocks by the templates.
//!
//! The study has been read with raw HTML and unsafe links refused; here both are made harmless once more, so
//! that no slip of a reader can put them into a page. Headings are renumbered below the title of the page so
//! that no level is left out; footnotes and tables go through templates.

use super::block::{Numbering, quote, render};
use super::citation::Citations;
use super::page::Page;
use super::view::ContentsEntry;
use super::{ReportError, block};
use crate::study::{Part, Quote};
use pulldown_cmark::{CowStr, Event, HeadingLevel, LinkType, Tag, TagEnd};
use std::collections::{BTreeMap, VecDeque};

/// The body of a report.
pub(super) struct Body {
    /// Its markup.
    pub(super) html: String,
    /// Its headings of the first level.
    pub(super) contents: Vec<ContentsEntry>,
}

/// Prose, quotes and blocks as markup.
pub(super) fn body(page: &mut Page<'_>, citations: &mut Citations) -> Result<Body, ReportError> {
    let headings = headings(page)?;
    let contents = headings
        .iter()
        .filter(|heading| heading.level == HeadingLevel::H2)
        .map(|heading| ContentsEntry { id: heading.id.clone(), text: heading.text.clone() })
        .collect();
    let targets = headings.iter().map(|heading| (heading.slug.clone(), heading.id.clone())).collect();
    let mut writer = Writer {
        page,
        citations,
        headings: headings.into(),
        targets,
        stack: vec![(Frame::Body, Vec::new())],
        kept_links: Vec::new(),
        footnotes: BTreeMap::new(),
        defined: Vec::new(),
        numbering: Numbering::default(),
    };
    let parts = &writer.page.inputs.study.body;
    for part in parts {
        match part {
            Part::Markdown(event) => writer.markdown(event.clone())?,
            Part::Quote(quote) => writer.quote(quote)?,
            Part::Block(which) => {
                let html = render(*which, writer.page, writer.citations, &mut writer.numbering)?;
                writer.push(Event::Html(format!("\n{html}\n").into()));
            }
        }
    }
    let events = writer.stack.pop().map(|(_, events)| events).unwrap_or_default();
    Ok(Body { html: to_html(events), contents })
}

/// A heading as the page has it.
struct Heading {
    level: HeadingLevel,
    id: String,
    text: String,
    slug: String,
}

/// All headings in their order. A level is never more than one below that of the heading before.
fn headings(page: &mut Page<'_>) -> Result<Vec<Heading>, ReportError> {
    let mut found = Vec::new();
    let mut open: Option<(HeadingLevel, String)> = None;
    let mut above: Vec<HeadingLevel> = Vec::new();
    let inputs = page.inputs;
    for part in &inputs.study.body {
        match part {
            Part::Markdown(Event::Start(Tag::Heading { level, .. })) => open = Some((*level, String::new())),
            Part::Markdown(Event::End(TagEnd::Heading(_))) => {
                let Some((level, text)) = open.take() else { continue };
                while above.last().is_some_and(|last| *last >= level) {
                    above.pop();
                }
                above.push(level);
                let slug = slug(&text);
                found.push(Heading {
                    // The title of the page is level 1.
                    level: LEVELS[above.len().min(LEVELS.len() - 1)],
                    id: page.ids.take(&format!("section-{slug}")),
                    text,
                    slug,
                });
            }
            Part::Markdown(Event::Text(text) | Event::Code(text)) => {
                if let Some((_, so_far)) = &mut open {
                    so_far.push_str(text);
                }
            }
            Part::Quote(quote) => {
                if let Some((_, so_far)) = &mut open {
                    so_far.push_str(&words(page, quote)?);
                }
            }
            Part::Markdown(_) | Part::Block(_) => {}
        }
    }
    Ok(found)
}

/// What is open around an event.
enum Frame {
    Body,
    Table,
    Footnote(String),
    Image(CowStr<'static>),
}

struct Writer<'p, 'a> {
    page: &'p mut Page<'a>,
    citations: &'p mut Citations,
    /// Those still to come.
    headings: VecDeque<Heading>,
    /// From the slug of a heading to its id.
    targets: BTreeMap<String, String>,
    stack: Vec<(Frame, Vec<Event<'static>>)>,
    /// For each open link whether it is kept.
    kept_links: Vec<bool>,
    /// Number and id of each footnote by its label.
    footnotes: BTreeMap<String, (usize, String)>,
    /// The labels of the footnotes that have been written.
    defined: Vec<String>,
    numbering: Numbering,
}

impl Writer<'_, '_> {
    fn markdown(&mut self, event: Event<'static>) -> Result<(), ReportError> {
        match event {
            Event::Html(text) | Event::InlineHtml(text) => self.push(Event::Text(text)),
            Event::Start(Tag::Heading { .. }) => {
                if let Some(Heading { level, id, .. }) = self.headings.front() {
                    let (level, id) = (*level, Some(id.clone().into()));
                    self.push(Event::Start(Tag::Heading {
                        level,
                        id,
                        classes: Vec::new(),
                        attrs: Vec::new(),
                    }));
                }
            }
            Event::End(TagEnd::Heading(_)) => {
                if let Some(heading) = self.headings.pop_front() {
                    self.push(Event::End(TagEnd::Heading(heading.level)));
                }
            }
            Event::Start(Tag::Link { link_type, dest_url, title, id }) => {
                let target = self.destination(link_type, dest_url);
                self.kept_links.push(target.is_some());
                if let Some(dest_url) = target {
                    self.push(Event::Start(Tag::Link { link_type, dest_url, title, id }));
                }
            }
            Event::End(TagEnd::Link) => {
                if self.kept_links.pop() == Some(true) {
                    self.push(Event::End(TagEnd::Link));
                }
            }
            Event::Start(Tag::Table(alignments)) => {
                self.open(Frame::Table);
                self.push(Event::Start(Tag::Table(alignments)));
            }
            Event::Start(Tag::FootnoteDefinition(label)) => self.open(Frame::Footnote(label.into_string())),
            Event::Start(Tag::Image { dest_url, .. }) => self.open(Frame::Image(dest_url)),
            Event::End(end @ TagEnd::Table) => {
                self.push(Event::End(end));
                self.close()?;
            }
            Event::End(TagEnd::FootnoteDefinition | TagEnd::Image) => self.close()?,
            Event::FootnoteReference(label) => {
                let (number, id) = self.footnote(&label);
                let view = BTreeMap::from([("number", number.to_string()), ("id", id)]);
                let html = self.page.templates.render("prose-footnote-mark.html", &view)?;
                self.push(Event::InlineHtml(html.trim().to_owned().into()));
            }
            other => self.push(other),
        }
        Ok(())
    }

    fn quote(&mut self, of: &Quote) -> Result<(), ReportError> {
        if self.stack.iter().any(|(frame, _)| matches!(frame, Frame::Image(_))) {
            let text = words(self.page, of)?;
            self.push(Event::Text(text.into()));
            return Ok(());
        }
        let mut view = quote(self.page, self.citations, &of.quantity.value, "text", of.plain)?;
        view.linked = !self.kept_links.contains(&true);
        let html = self.page.templates.render("prose-quote.html", &view)?;
        self.push(Event::InlineHtml(html.trim().to_owned().into()));
        Ok(())
    }

    fn push(&mut self, event: Event<'static>) {
        if let Some((_, events)) = self.stack.last_mut() {
            events.push(event);
        }
    }

    fn open(&mut self, frame: Frame) {
        self.stack.push((frame, Vec::new()));
    }

    fn close(&mut self) -> Result<(), ReportError> {
        if self.stack.len() < 2 {
            return Ok(());
        }
        let Some((frame, events)) = self.stack.pop() else { return Ok(()) };
        match frame {
            Frame::Body => {}
            Frame::Table => {
                let view = BTreeMap::from([("html", to_html(events))]);
                let html = self.page.templates.render("prose-table.html", &view)?;
                self.push(Event::Html(html.into()));
            }
            Frame::Footnote(label) => {
                let (number, id) = self.footnote(&label);
                // A label that is defined twice is written once: the second would have the same id.
                if !self.defined.contains(&label) {
                    self.defined.push(label);
                    let html = to_html(events);
                    let view = BTreeMap::from([("html", html), ("number", number.to_string()), ("id", id)]);
                    let html = self.page.templates.render("prose-footnote.html", &view)?;
                    self.push(Event::Html(html.into()));
                }
            }
            Frame::Image(dest_url) => self.image(dest_url, events),
        }
        Ok(())
    }

    /// An image that lies in the page is kept; any other is told by its text, since a report needs no network.
    fn image(&mut self, dest_url: CowStr<'static>, events: Vec<Event<'static>>) {
        if is_image_data(&dest_url) {
            let (link_type, title, id) = (LinkType::Inline, CowStr::from(""), CowStr::from(""));
            self.push(Event::Start(Tag::Image { link_type, dest_url, title, id }));
            for event in events {
                self.push(event);
            }
            self.push(Event::End(TagEnd::Image));
        } else {
            for event in events {
                if matches!(event, Event::Text(_) | Event::Code(_)) {
                    self.push(event);
                }
            }
        }
    }

    fn footnote(&mut self, label: &str) -> (usize, String) {
        let next = self.footnotes.len() + 1;
        let ids = &mut self.page.ids;
        self.footnotes
            .entry(label.to_owned())
            .or_insert_with(|| (next, ids.take(&format!("note-{next}"))))
            .clone()
    }

    /// Where a link may lead: to an address of a harmless kind, or to a heading of the study.
    fn destination(&self, link_type: LinkType, to: CowStr<'static>) -> Option<CowStr<'static>> {
        if let Some(slug) = to.strip_prefix('#') {
            return self.targets.get(slug).map(|id| format!("#{id}").into());
        }
        let lower = to.to_ascii_lowercase();
        let known = ["http://", "https://", "mailto:"].iter().any(|scheme| lower.starts_with(scheme));
        (known || matches!(link_type, LinkType::Email)).then_some(to)
    }
}

/// A quote as words, for places that hold no markup.
fn words(page: &Page<'_>, quote: &Quote) -> Result<String, ReportError> {
    let name = &quote.quantity.value;
    let (_, quantity) = page
        .inputs
        .outcome
        .quantity(name)
        .ok_or_else(|| ReportError::Missing(format!("the quantity `{name}`")))?;
    let text = block::text(page, quantity, quote.plain);
    Ok(match (quantity.value, quantity.bound) {
        (None, _) => "no value".to_owned(),
        (_, None) => format!("{text} (no bound)"),
        _ => text,
    })
}

fn to_html(events: Vec<Event<'static>>) -> String {
    let mut html = String::new();
    pulldown_cmark::html::push_html(&mut html, events.into_iter());
    html
}

/// Lower case, with a hyphen for every run of other characters than letters and digits.
fn slug(text: &str) -> String {
    let words = text.split(|c: char| !c.is_alphanumeric()).filter(|word| !word.is_empty());
    words.map(str::to_lowercase).collect::<Vec<_>>().join("-")
}

fn is_image_data(url: &str) -> bool {
    let kinds = ["png", "jpeg", "gif", "webp", "svg+xml"];
    let lower = url.to_ascii_lowercase();
    lower.strip_prefix("data:image/").is_some_and(|rest| {
        kinds.iter().any(|kind| rest.strip_prefix(kind).is_some_and(|r| r.starts_with([';', ','])))
    })
}

const LEVELS: [HeadingLevel; 6] = [
    HeadingLevel::H1,
    HeadingLevel::H2,
    HeadingLevel::H3,
    HeadingLevel::H4,
    HeadingLevel::H5,
    HeadingLevel::H6,
];
