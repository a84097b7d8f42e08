//! A YAML text as a tree whose nodes know their places in the study.
//!
//! Two readers see the text: the event walk of [`super::yaml`], which knows places, and `serde_yaml`, which
//! knows what a scalar is (nothing, yes or no, a number, a text). Their results are laid over each other.

use std::collections::BTreeMap;
use std::fmt;

use serde::de::{Deserialize, Deserializer, MapAccess, SeqAccess, Visitor};

use super::slip;
use super::yaml::{self, Event, What};
use crate::fault::{Fault, Faults, FileId, Span, clip};

/// A YAML text that was put together from parts of a file: a fence in a list loses its indent, and a line
/// end of two bytes one of them.
#[derive(Clone, Debug)]
pub(super) struct Excerpt<'a> {
    source: &'a str,
    file: FileId,
    text: String,
    /// Where each part starts in `text`, where in the file, and its length.
    parts: Vec<(usize, usize, usize)>,
    /// Where the excerpt stands in the file, for one without parts.
    at: usize,
}

impl<'a> Excerpt<'a> {
    /// An empty excerpt at a byte of a file with the text `source`.
    pub(super) fn new(source: &'a str, file: FileId, at: usize) -> Self {
        Excerpt { source, file, text: String::new(), parts: Vec::new(), at }
    }
    /// Adds a text that stands at byte `at` of the file.
    pub(super) fn push(&mut self, text: &str, at: usize) {
        if !text.is_empty() {
            self.parts.push((self.text.len(), at, text.len()));
            self.text.push_str(text);
        }
    }
    /// Whether it holds nothing but blanks.
    pub(super) fn is_blank(&self) -> bool {
        self.text.trim().is_empty()
    }
    /// The place in the file of bytes `start..end` of the text.
    pub(super) fn span(&self, start: usize, end: usize) -> Span {
        let from = self.byte(start);
        let to = if end > start { self.byte(end - 1) + 1 } else { from };
        Span::new(self.file, from, to.max(from))
    }
    fn byte(&self, byte: usize) -> usize {
        let idx = self.parts.partition_point(|part| part.0 <= byte);
        match idx.checked_sub(1).and_then(|idx| self.parts.get(idx)) {
            Some(&(start, at, length)) => at + (byte - start).min(length),
            None => self.at,
        }
    }
    /// Whether the bytes `start..end` stand in the file as they are.
    fn is_whole(&self, start: usize, end: usize) -> bool {
        let span = self.span(start, end);
        self.source.get(span.start..span.end) == self.text.get(start..end)
    }
    /// The end of the line that byte `start` is on, or `end` where that comes first.
    fn first_line(&self, start: usize, end: usize) -> usize {
        let end = end.clamp(start, self.text.len());
        self.text[start..end].find('\n').map_or(end, |i| start + i)
    }
}

/// A node of the tree.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Node {
    /// Where it stands: of a list or mapping, the part on its first line.
    pub(super) at: Span,
    /// What it is.
    pub(super) content: Content,
}

/// What a node is.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Content {
    /// A scalar.
    Scalar(Scalar),
    /// A list.
    List(Vec<Node>),
    /// A mapping, in the order of the text.
    Map(Vec<(Node, Node)>),
}

/// A scalar.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Scalar {
    /// What it stands for.
    pub(super) text: String,
    /// Whether `text` stands in the file byte for byte.
    pub(super) exact: bool,
    /// Whether it is written without quotes.
    pub(super) plain: bool,
    /// Whether it stands inside brackets or braces, where a comma ends it.
    pub(super) in_flow: bool,
    /// The comment behind it on its line.
    pub(super) comment: Option<Span>,
    /// What `serde_yaml` takes it for.
    pub(super) sort: Sort,
}

/// What `serde_yaml` takes a scalar for.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(super) enum Sort {
    /// `~`, `null`, or nothing at all.
    Null,
    /// `true` or `false`.
    Bool,
    /// A number.
    Number,
    /// Any other text.
    #[default]
    Text,
}

/// Reads a text; `None` with a fault where it is refused or holds nothing.
pub(super) fn parse(excerpt: &Excerpt<'_>, what: &str, faults: &mut Faults) -> Option<Node> {
    let events = match yaml::events(&excerpt.text) {
        Ok(events) => events,
        Err(refused) => {
            faults.add(slip::fault(&excerpt.text, &refused, excerpt));
            return None;
        }
    };
    if events.is_empty() {
        faults.add(
            Fault::error("empty-block", excerpt.span(0, 0), format!("{what} is empty"))
                .help("fill it or remove it"),
        );
        return None;
    }
    let before = faults.errors();
    let mut builder = Builder { excerpt, events: events.into_iter(), faults };
    let mut node = builder.node(false)?;
    if faults.errors() > before {
        return None;
    }
    let sorted =
        serde_yaml::from_str::<Sorted>(&excerpt.text).is_ok_and(|sorted| lay_over(&mut node, &sorted));
    if !sorted {
        // Both stand on the same parser: only a defect of ours leads here, and it must not pass in silence.
        let message = format!("{what} is read in two ways by the two YAML readers");
        faults.add(Fault::error("yaml-syntax", node.at, message).help("write its texts in quotes"));
        return None;
    }
    Some(node)
}

struct Builder<'a> {
    excerpt: &'a Excerpt<'a>,
    events: std::vec::IntoIter<Event>,
    faults: &'a mut Faults,
}

impl Builder<'_> {
    fn node(&mut self, in_flow: bool) -> Option<Node> {
        let event = self.events.next()?;
        self.node_from(event, in_flow)
    }

    fn node_from(&mut self, event: Event, in_flow: bool) -> Option<Node> {
        let (start, end) = (event.start, event.end);
        let text = &self.excerpt.text;
        let opens = text[start..].starts_with(['[', '{']);
        let content = match event.what {
            What::Scalar { text, plain } => {
                return Some(self.scalar(text, plain, in_flow, start, end));
            }
            What::ListStart => {
                let mut list = Vec::new();
                loop {
                    let event = self.events.next()?;
                    if event.what == What::ListEnd {
                        break Content::List(list);
                    }
                    list.push(self.node_from(event, in_flow || opens)?);
                }
            }
            What::MapStart => {
                let mut map = Vec::new();
                loop {
                    let event = self.events.next()?;
                    if event.what == What::MapEnd {
                        break Content::Map(map);
                    }
                    let key = self.node_from(event, in_flow || opens)?;
                    map.push((key, self.node(in_flow || opens)?));
                }
            }
            What::ListEnd | What::MapEnd => return None,
        };
        // The event of a list or mapping covers its first sign alone.
        let line_end = self.excerpt.first_line(start, text.len());
        let at = self.excerpt.span(start, start + text[start..line_end].trim_end().len());
        if let Content::Map(map) = &content {
            self.check_keys(map);
        }
        Some(Node { at, content })
    }

    fn scalar(&self, text: String, plain: bool, in_flow: bool, start: usize, end: usize) -> Node {
        let source = &self.excerpt.text;
        let written = source.get(start..end).unwrap_or_default();
        // Without its quotes, a quoted text without escapes stands in the file as it is.
        let inner = written.len().checked_sub(2).and_then(|_| written.get(1..written.len() - 1));
        let (from, to, same) = if !plain && inner == Some(text.as_str()) {
            (start + 1, end - 1, true)
        } else {
            (start, end, written == text)
        };
        let exact = same && self.excerpt.is_whole(from, to);
        let (from, to) = if exact { (from, to) } else { (start, self.excerpt.first_line(start, end)) };
        let blanks = source[end..].bytes().take_while(|byte| matches!(byte, b' ' | b'\t')).count();
        let comment_at = end + blanks;
        let comment = (blanks > 0 && source[comment_at..].starts_with('#')).then(|| {
            let comment = &source[comment_at..self.excerpt.first_line(comment_at, source.len())];
            self.excerpt.span(comment_at, comment_at + comment.trim_end().len())
        });
        let scalar = Scalar { text, exact, plain, in_flow, comment, sort: Sort::default() };
        Node { at: self.excerpt.span(from, to), content: Content::Scalar(scalar) }
    }

    fn check_keys(&mut self, map: &[(Node, Node)]) {
        let mut seen: BTreeMap<&str, Span> = BTreeMap::new();
        for (key, _) in map {
            let Content::Scalar(scalar) = &key.content else {
                let message = "a key is a word, not a list or mapping";
                self.faults.add(
                    Fault::error("wrong-type", key.at, message)
                        .help("put a text that starts with `[` or `{` in quotes"),
                );
                continue;
            };
            if scalar.plain && scalar.text == "<<" {
                self.faults.add(
                    Fault::error("yaml-merge", key.at, "`<<` merges mappings, which a study does not do")
                        .help("write the entries out"),
                );
            }
            if let Some(first) = seen.insert(&scalar.text, key.at) {
                let message = format!("the key `{}` stands twice", clip(&scalar.text));
                self.faults.add(
                    Fault::error("duplicate-key", key.at, message)
                        .label("again here")
                        .also(first, "first here")
                        .help("remove one of the two"),
                );
                seen.insert(&scalar.text, first);
            }
        }
    }
}

/// The tree as `serde_yaml` sees it.
enum Sorted {
    Scalar(Sort),
    List(Vec<Sorted>),
    Map(Vec<(Sorted, Sorted)>),
}

/// Gives each scalar its sort; whether both trees have the same form.
fn lay_over(node: &mut Node, sorted: &Sorted) -> bool {
    match (&mut node.content, sorted) {
        (Content::Scalar(scalar), Sorted::Scalar(sort)) => {
            scalar.sort = *sort;
            true
        }
        (Content::List(list), Sorted::List(other)) => {
            list.len() == other.len()
                && list.iter_mut().zip(other).all(|(node, sorted)| lay_over(node, sorted))
        }
        (Content::Map(map), Sorted::Map(other)) => {
            map.len() == other.len()
                && map.iter_mut().zip(other).all(|((key, node), (sorted_key, sorted))| {
                    lay_over(key, sorted_key) && lay_over(node, sorted)
                })
        }
        _ => false,
    }
}

impl<'de> Deserialize<'de> for Sorted {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(Sorter)
    }
}

struct Sorter;

impl<'de> Visitor<'de> for Sorter {
    type Value = Sorted;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("any YAML")
    }
    fn visit_unit<E>(self) -> Result<Sorted, E> {
        Ok(Sorted::Scalar(Sort::Null))
    }
    fn visit_bool<E>(self, _: bool) -> Result<Sorted, E> {
        Ok(Sorted::Scalar(Sort::Bool))
    }
    fn visit_i64<E>(self, _: i64) -> Result<Sorted, E> {
        Ok(Sorted::Scalar(Sort::Number))
    }
    fn visit_u64<E>(self, _: u64) -> Result<Sorted, E> {
        Ok(Sorted::Scalar(Sort::Number))
    }
    fn visit_i128<E>(self, _: i128) -> Result<Sorted, E> {
        Ok(Sorted::Scalar(Sort::Number))
    }
    fn visit_u128<E>(self, _: u128) -> Result<Sorted, E> {
        Ok(Sorted::Scalar(Sort::Number))
    }
    fn visit_f64<E>(self, _: f64) -> Result<Sorted, E> {
        Ok(Sorted::Scalar(Sort::Number))
    }
    fn visit_str<E>(self, _: &str) -> Result<Sorted, E> {
        Ok(Sorted::Scalar(Sort::Text))
    }
    fn visit_seq<A: SeqAccess<'de>>(self, mut list: A) -> Result<Sorted, A::Error> {
        let mut out = Vec::new();
        while let Some(item) = list.next_element()? {
            out.push(item);
        }
        Ok(Sorted::List(out))
    }
    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Sorted, A::Error> {
        let mut out = Vec::new();
        while let Some(entry) = map.next_entry()? {
            out.push(entry);
        }
        Ok(Sorted::Map(out))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn tree(text: &str) -> (Option<Node>, Faults) {
        let mut excerpt = Excerpt::new(text, FileId(0), 0);
        excerpt.push(text, 0);
        let mut faults = Faults::new();
        (parse(&excerpt, "the block", &mut faults), faults)
    }

    fn check(text: &str, code: &str, marked: &str) {
        let (_, faults) = tree(text);
        let list = faults.sorted();
        assert_eq!(list.len(), 1, "{text} {list:?}");
        assert_eq!((list[0].code, &text[list[0].at.start..list[0].at.end]), (code, marked), "{text}");
        assert!(list[0].help.is_some(), "{text}");
    }

    #[test]
    fn keys_that_stand_twice_are_marked_with_the_first() {
        check("a: 1\nb: 2\na: 3\n", "duplicate-key", "a");
        check("x: {b: 2, b: 3}\n", "duplicate-key", "b");
        check("<<: {a: 1}\n", "yaml-merge", "<<");
        check("[a]: 1\n", "wrong-type", "[a]: 1");
        check("# none\n", "empty-block", "");
    }

    #[test]
    fn sorts_come_from_the_second_reader() {
        use Sort::{Bool, Null, Number, Text};
        let (node, faults) = tree("[~, true, 3, 3 m, 1e400, 100000000000000000000000, 1e3, .inf, no, '5', ]");
        assert!(faults.is_empty(), "{:?}", faults.sorted());
        let Content::List(list) = node.unwrap().content else { panic!() };
        let sorts: Vec<Sort> = list
            .iter()
            .map(|node| match &node.content {
                Content::Scalar(scalar) => scalar.sort,
                _ => panic!(),
            })
            .collect();
        assert_eq!(sorts[..4], [Null, Bool, Number, Text]);
        assert_eq!(sorts[5..], [Number, Number, Number, Text, Text]);
    }

    #[test]
    fn places_follow_the_parts_of_the_excerpt() {
        let file = "> a: 1\r\n> b: é x\r\n> c: \"q\\n\"\r\n";
        let mut excerpt = Excerpt::new(file, FileId(0), 0);
        for (i, line) in file.split_inclusive("\r\n").enumerate() {
            let at = file.split_inclusive("\r\n").take(i).map(str::len).sum::<usize>();
            excerpt.push(line[2..].trim_end(), at + 2);
            excerpt.push("\n", at + line.len() - 1);
        }
        let mut faults = Faults::new();
        let Content::Map(map) = parse(&excerpt, "the block", &mut faults).unwrap().content else { panic!() };
        let texts: Vec<&str> =
            map.iter().flat_map(|(k, v)| [k, v]).map(|n| &file[n.at.start..n.at.end]).collect();
        assert_eq!(texts, ["a", "1", "b", "é x", "c", "\"q\\n\""]);
    }
}
