//! The front matter: the YAML between two lines `---` at the top of a study.

use super::node::{self, Content, Excerpt};
use super::{FrontMatter, fields};
use crate::fault::{Fault, Faults, FileId, Span, clip};

/// The keys beside `study`, in the order of a title block.
const KEYS: [&str; 9] =
    ["study", "number", "revision", "date", "prepared", "checked", "approved", "client", "caution"];

/// Reads the front matter of a text from byte `start`; gives it with the byte where the prose starts, which is
/// `None` where the front matter does not end.
pub(super) fn read(
    text: &str,
    file: FileId,
    start: usize,
    faults: &mut Faults,
) -> (Option<FrontMatter>, Option<usize>) {
    let mut lines = text[start..].split_inclusive('\n');
    let first = lines.next().unwrap_or_default();
    let first_line = Span::new(file, start, start + first.trim_end().len());
    if first.trim_end() != "---" {
        faults.add(
            Fault::error("no-front-matter", first_line, "the study does not start with front matter")
                .help("start the file with the lines `---`, `study: TITLE` and `---`"),
        );
        return (None, Some(start));
    }
    let mut at = start + first.len();
    let mut excerpt = Excerpt::new(text, file, at);
    for line in lines {
        let bare = line.trim_end();
        if bare == "---" {
            return (entries(&excerpt, first_line, faults), Some(at + line.len()));
        }
        // A line end of two bytes is one for YAML.
        let kept = line.strip_suffix("\r\n").unwrap_or(line);
        excerpt.push(kept, at);
        if kept.len() < line.len() {
            excerpt.push("\n", at + line.len() - 1);
        }
        at += line.len();
    }
    faults.add(
        Fault::error("open-front-matter", first_line, "the front matter does not end")
            .label("starts here")
            .help("end it with a line `---`"),
    );
    (None, None)
}

fn entries(excerpt: &Excerpt<'_>, first_line: Span, faults: &mut Faults) -> Option<FrontMatter> {
    if excerpt.is_blank() {
        faults.add(without_title(first_line));
        return None;
    }
    let node = node::parse(excerpt, "the front matter", faults)?;
    let mut title = None;
    let mut list = Vec::new();
    let mut has_key = false;
    for (key, value) in fields::mapping(&node, "the front matter", faults)? {
        let Content::Scalar(name) = &key.content else { continue };
        let name = name.text.as_str();
        if !KEYS.contains(&name) {
            let message = format!("the front matter has no key `{}`", clip(name));
            let near = super::name::near_help(name, KEYS, faults);
            let help = near.unwrap_or_else(|| format!("the keys are {}", fields::list(&KEYS)));
            faults.add(Fault::error("unknown-key", key.at, message).help(help));
            continue;
        }
        has_key |= name == "study";
        let text = fields::text(value, &format!("`{name}`"), faults);
        if name == "study" {
            title = text;
        } else if let (Some(key), Some(text)) = (fields::text(key, "a key", faults), text) {
            list.push((key, text));
        }
    }
    if !has_key {
        faults.add(without_title(first_line));
    }
    Some(FrontMatter { title: title?, entries: list })
}

fn without_title(at: Span) -> Fault {
    Fault::error("missing-key", at, "the front matter lacks the key `study`")
        .help("add a line `study: TITLE`")
}
