//! The events of a YAML text with their places, by the parser that `serde_yaml` uses too.
//!
//! This walk comes before `serde_yaml` sees the text. It refuses what a study has no use for and what makes
//! YAML dangerous (aliases, anchors, merge keys, tags, deep nesting, floods of events, several documents), so
//! that what follows takes a time in proportion to the text. It is the one place with unsafe code: the parser
//! has the interface of the C library that it was translated from.
#![allow(unsafe_code, reason = "the YAML parser has the interface of a C library")]

use std::ffi::CStr;
use std::mem::MaybeUninit;

use unsafe_libyaml as unsafe_sys;

/// The largest block in bytes.
pub(super) const LARGEST_BLOCK: usize = 256 * 1024;
/// The most events of a block: a list of 100,000 numbers is data, and belongs in a file.
const MOST_EVENTS: usize = 100_000;
/// The deepest nesting.
const DEEPEST: usize = 32;

/// An event with the bytes of the text that it comes from.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Event {
    /// What it is.
    pub(super) what: What,
    /// First byte.
    pub(super) start: usize,
    /// One past the last byte.
    pub(super) end: usize,
}

/// The kinds of event that are left after the check.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum What {
    /// A scalar: what it stands for, and whether it is written without quotes on one line.
    Scalar { text: String, plain: bool },
    /// `[` or the first `-`
    ListStart,
    /// The end of a list.
    ListEnd,
    /// `{` or the first key
    MapStart,
    /// The end of a mapping.
    MapEnd,
}

/// Why a text is refused.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Refused {
    /// The code of the fault.
    pub(super) code: &'static str,
    /// What is wrong.
    pub(super) message: String,
    /// Where, in bytes of the text.
    pub(super) start: usize,
    /// One past the last byte.
    pub(super) end: usize,
    /// Where the thing starts that the parser was reading, where it says so.
    pub(super) inside: Option<usize>,
    /// Whether the parser refused it (and not a rule of ours), so that the usual slips should be looked for.
    pub(super) syntax: bool,
}

/// The events of the only document of a text; none where it is empty.
pub(super) fn events(text: &str) -> Result<Vec<Event>, Refused> {
    if text.len() > LARGEST_BLOCK {
        let message =
            format!("the block has {} KiB where at most 256 KiB are read", text.len().div_ceil(1024));
        return Err(Refused {
            code: "block-too-large",
            message,
            start: 0,
            end: 0,
            inside: None,
            syntax: false,
        });
    }
    let mut parser = Parser::new(text)?;
    let mut events = Vec::new();
    let (mut depth, mut documents) = (0_usize, 0);
    loop {
        let raw = parser.next()?;
        let refuse = |code, message: &str| {
            Err(Refused {
                code,
                message: message.to_string(),
                start: raw.start,
                end: raw.end,
                inside: None,
                syntax: false,
            })
        };
        if raw.anchor {
            return refuse("yaml-anchor", "`&` names a node for repetition, which a study does not do");
        }
        if raw.tag {
            return refuse("yaml-tag", "`!` gives a node a type, which a study does not do");
        }
        let what = match raw.kind {
            Kind::Alias => return refuse("yaml-alias", "`*` repeats a node, which a study does not do"),
            Kind::DocumentStart => {
                documents += 1;
                if documents > 1 {
                    return refuse("yaml-documents", "the block holds more than one YAML document");
                }
                continue;
            }
            Kind::Other => continue,
            Kind::StreamEnd => return Ok(events),
            Kind::Event(what) => what,
        };
        match what {
            What::ListStart | What::MapStart => depth += 1,
            What::ListEnd | What::MapEnd => depth = depth.saturating_sub(1),
            What::Scalar { .. } => {}
        }
        if depth > DEEPEST {
            return refuse("yaml-depth", "the block is nested more than 32 deep");
        }
        if events.len() >= MOST_EVENTS {
            return refuse("yaml-size", "the block has more than 100,000 entries");
        }
        events.push(Event { what, start: raw.start, end: raw.end });
    }
}

/// An event as it comes from the parser.
struct Raw {
    kind: Kind,
    anchor: bool,
    tag: bool,
    start: usize,
    end: usize,
}

enum Kind {
    Event(What),
    Alias,
    DocumentStart,
    StreamEnd,
    Other,
}

/// The parser with the text that it points into. It lives on the heap: it must not move.
struct Parser<'text> {
    sys: Box<MaybeUninit<unsafe_sys::yaml_parser_t>>,
    text: &'text str,
}

impl<'text> Parser<'text> {
    fn new(text: &'text str) -> Result<Self, Refused> {
        let mut sys = Box::new(MaybeUninit::<unsafe_sys::yaml_parser_t>::uninit());
        // SAFETY: `yaml_parser_initialize` writes the whole structure. The text outlives the parser by the
        // lifetime of `Parser`, and the box keeps the address.
        unsafe {
            if unsafe_sys::yaml_parser_initialize(sys.as_mut_ptr()).fail {
                return Err(Refused {
                    code: "yaml-syntax",
                    message: "the YAML parser did not start".to_string(),
                    start: 0,
                    end: 0,
                    inside: None,
                    syntax: false,
                });
            }
            unsafe_sys::yaml_parser_set_encoding(sys.as_mut_ptr(), unsafe_sys::YAML_UTF8_ENCODING);
            unsafe_sys::yaml_parser_set_input_string(sys.as_mut_ptr(), text.as_ptr(), text.len() as u64);
        }
        Ok(Parser { sys, text })
    }

    fn next(&mut self) -> Result<Raw, Refused> {
        let mut event = MaybeUninit::<unsafe_sys::yaml_event_t>::uninit();
        // SAFETY: the parser was initialized in `new`. `yaml_parser_parse` writes the event where it does not
        // fail; it is read before it is deleted, and deleted once.
        unsafe {
            if unsafe_sys::yaml_parser_parse(self.sys.as_mut_ptr(), event.as_mut_ptr()).fail {
                return Err(self.problem());
            }
            let event = event.as_mut_ptr();
            let raw = self.convert(&*event);
            unsafe_sys::yaml_event_delete(event);
            Ok(raw)
        }
    }

    /// Copies what is needed of an event.
    ///
    /// # Safety
    /// `event` was written by `yaml_parser_parse` and not deleted.
    unsafe fn convert(&self, event: &unsafe_sys::yaml_event_t) -> Raw {
        let start = self.byte(event.start_mark.index);
        let end = self.byte(event.end_mark.index).max(start);
        // SAFETY: the field of the union that is read is the one of the event's type.
        let (kind, anchor, tag) = unsafe {
            match event.type_ {
                unsafe_sys::YAML_ALIAS_EVENT => (Kind::Alias, false, false),
                unsafe_sys::YAML_SCALAR_EVENT => {
                    let scalar = &event.data.scalar;
                    let length = usize::try_from(scalar.length).unwrap_or(0);
                    let bytes = std::slice::from_raw_parts(scalar.value, length);
                    let text = String::from_utf8_lossy(bytes).into_owned();
                    let plain = scalar.style == unsafe_sys::YAML_PLAIN_SCALAR_STYLE;
                    let tag = !scalar.tag.is_null();
                    (Kind::Event(What::Scalar { text, plain }), !scalar.anchor.is_null(), tag)
                }
                unsafe_sys::YAML_SEQUENCE_START_EVENT => {
                    let list = &event.data.sequence_start;
                    (Kind::Event(What::ListStart), !list.anchor.is_null(), !list.tag.is_null())
                }
                unsafe_sys::YAML_MAPPING_START_EVENT => {
                    let map = &event.data.mapping_start;
                    (Kind::Event(What::MapStart), !map.anchor.is_null(), !map.tag.is_null())
                }
                unsafe_sys::YAML_SEQUENCE_END_EVENT => (Kind::Event(What::ListEnd), false, false),
                unsafe_sys::YAML_MAPPING_END_EVENT => (Kind::Event(What::MapEnd), false, false),
                unsafe_sys::YAML_DOCUMENT_START_EVENT => (Kind::DocumentStart, false, false),
                unsafe_sys::YAML_STREAM_END_EVENT | unsafe_sys::YAML_NO_EVENT => {
                    (Kind::StreamEnd, false, false)
                }
                _ => (Kind::Other, false, false),
            }
        };
        Raw { kind, anchor, tag, start, end }
    }

    /// Why the parser stopped.
    fn problem(&self) -> Refused {
        // SAFETY: the parser was initialized in `new`; its texts are static strings that end in a zero.
        let (problem, context, index, offset, inside) = unsafe {
            let parser = &*self.sys.as_ptr();
            let text = |pointer: *const std::ffi::c_char| {
                if pointer.is_null() {
                    String::new()
                } else {
                    CStr::from_ptr(pointer).to_string_lossy().into_owned()
                }
            };
            (
                text(parser.problem.cast()),
                text(parser.context.cast()),
                parser.problem_mark.index,
                parser.problem_offset,
                parser.context_mark.index,
            )
        };
        let start = self.byte(if index == 0 { offset } else { index });
        let length = self.text[start..].chars().next().filter(|c| *c != '\n').map_or(0, char::len_utf8);
        let inside = (!context.is_empty()).then(|| self.byte(inside));
        let message = match (problem.as_str(), context.as_str()) {
            ("", _) => "this is no YAML".to_string(),
            (problem, "") => format!("this is no YAML: {problem}"),
            (problem, context) => format!("this is no YAML: {problem} {context}"),
        };
        Refused { code: "yaml-syntax", message, start, end: start + length, inside, syntax: true }
    }

    /// A byte of the text, at the start of a character.
    fn byte(&self, index: u64) -> usize {
        let mut byte = usize::try_from(index).unwrap_or(usize::MAX).min(self.text.len());
        while !self.text.is_char_boundary(byte) {
            byte -= 1;
        }
        byte
    }
}

impl Drop for Parser<'_> {
    fn drop(&mut self) {
        // SAFETY: the parser was initialized in `new` and is deleted once.
        unsafe { unsafe_sys::yaml_parser_delete(self.sys.as_mut_ptr()) }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn refused(text: &str, code: &str, start: usize) {
        let error = events(text).unwrap_err();
        assert_eq!((error.code, error.start), (code, start), "{text:.60} {error:?}");
    }

    #[test]
    fn events_carry_their_bytes() {
        let text = "é: {value: 3 m}\nlist: [a, \"b\\n\"]\n";
        let list = events(text).unwrap();
        let scalars: Vec<&str> = list
            .iter()
            .filter(|event| matches!(event.what, What::Scalar { .. }))
            .map(|event| &text[event.start..event.end])
            .collect();
        assert_eq!(scalars, ["é", "value", "3 m", "list", "a", "\"b\\n\""]);
    }

    #[test]
    fn what_a_study_has_no_use_for_is_refused() {
        refused("a: &x 1\nb: *x\n", "yaml-anchor", 3);
        refused("b: *x\n", "yaml-alias", 3);
        refused("a: !t 1\n", "yaml-tag", 3);
        refused("a: !!binary aGk=\n", "yaml-tag", 3);
        refused("a: 1\n---\nb: 2\n", "yaml-documents", 5);
        refused("a: b: c\n", "yaml-syntax", 4);
        refused("a: @x\n", "yaml-syntax", 3);
        refused("a:\n\tb: 1\n", "yaml-syntax", 3);
        refused("a: [1, 2\n", "yaml-syntax", 9);
        refused("a: \0\n", "yaml-syntax", 3);
    }

    #[test]
    fn floods_are_refused_in_a_short_time() {
        refused(&"[".repeat(LARGEST_BLOCK), "yaml-depth", 32);
        refused(&"a: [".repeat(30_000), "yaml-depth", 64);
        refused(&"[0,".repeat(10_000), "yaml-depth", 96);
        refused(&format!("[{}]", "0,".repeat(110_000)), "yaml-size", 199_999);
        refused(&"x".repeat(LARGEST_BLOCK + 1), "block-too-large", 0);
        refused(&"- ".repeat(100_000), "yaml-depth", 64);
        refused(&"{".repeat(100_000), "yaml-depth", 32);
        let bomb = "a: &a [x]\nb: &b [*a,*a]\nc: [*b,*b]\n";
        refused(bomb, "yaml-anchor", 3);
    }

    #[test]
    fn an_empty_text_has_no_events() {
        assert!(events("").unwrap().is_empty());
        assert!(events("# nothing\n").unwrap().is_empty());
    }
}
