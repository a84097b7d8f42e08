//! The first line of a fenced block: which kind of block it is, and its name.

use super::Text;
use super::name::check_name;
use crate::fault::{Fault, Faults, FileId, Span, clip, nearest};

/// The kinds of block.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Kind {
    Model,
    Run,
    Chart,
    Table,
    Criteria,
}

/// Each kind with its word.
const KINDS: [(&str, Kind); 5] = [
    ("model", Kind::Model),
    ("run", Kind::Run),
    ("chart", Kind::Chart),
    ("table", Kind::Table),
    ("criteria", Kind::Criteria),
];

/// Words of other fences that come near to a kind of ours, or are common.
const LANGUAGES: [&str; 34] = [
    "text", "txt", "plain", "console", "sh", "bash", "shell", "rust", "rs", "ron", "ruby", "rb", "r", "c",
    "cpp", "java", "js", "ts", "json", "toml", "yaml", "yml", "xml", "html", "css", "csv", "tsv", "sql",
    "python", "py", "fortran", "julia", "markdown", "md",
];

/// What a fenced block is.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Fence {
    /// One of ours; `head` is its kind and name.
    Block { kind: Kind, name: Option<Text>, head: Span },
    /// Code to show as it is.
    Code,
    /// One of ours with a fault, which was added; what it likely is, so that no reference to it is a fault too.
    Refused { likely: Option<(Kind, String)> },
}

impl Kind {
    /// The word for it.
    pub(super) fn word(self) -> &'static str {
        KINDS.iter().find(|(_, kind)| *kind == self).map_or("", |(word, _)| word)
    }
}

/// The info string of a fence whose block starts at byte `at`, with its place, and the fence's own characters.
pub(super) fn info(source: &str, file: FileId, at: usize) -> Option<(Text, &str)> {
    let line = source.get(at..)?.lines().next()?;
    let indent = line.len() - line.trim_start().len();
    let sign = line[indent..].chars().next().filter(|c| matches!(c, '`' | '~'))?;
    let bare = line[indent..].trim_start_matches(sign);
    let fence = &line[indent..line.len() - bare.len()];
    let whole = Text {
        value: bare.to_string(),
        at: Span::new(file, at + line.len() - bare.len(), at + line.len()),
        exact: true,
    };
    Some((whole.cut(0, bare.len()), fence))
}

/// Whether a fenced block ends with a fence, and not with the end of what it stands in.
pub(super) fn is_closed(block: &str, fence: &str) -> bool {
    let Some((_, rest)) = block.split_once('\n') else { return false };
    let last = rest.trim_end().lines().next_back().unwrap_or_default();
    let last = last.trim_start_matches([' ', '\t', '>']);
    last.len() >= fence.len() && fence.chars().next().is_some_and(|sign| last.chars().all(|c| c == sign))
}

/// Says what the block with an info string is.
pub(super) fn classify(info: &Text, faults: &mut Faults) -> Fence {
    let mut words = info.value.split_whitespace();
    let Some(first) = words.next() else { return Fence::Code };
    let Some(&(word, kind)) = KINDS.iter().find(|(word, _)| *word == first) else {
        return misspelt(info, first, faults);
    };
    let Some(name) = words.next() else {
        if kind == Kind::Criteria {
            return Fence::Block { kind, name: None, head: info.at };
        }
        faults.add(
            Fault::error("missing-name", info.at, format!("the {word} has no name"))
                .help(format!("write `{word} NAME`")),
        );
        return Fence::Refused { likely: None };
    };
    let start = name.as_ptr() as usize - info.value.as_ptr() as usize;
    let name = info.cut(start, start + name.len());
    if let Some(more) = words.next() {
        let start = more.as_ptr() as usize - info.value.as_ptr() as usize;
        let message = format!("`{}` follows the name of the {word}", clip(more));
        faults.add(
            Fault::error("bad-name", info.part(start, info.value.len()), message)
                .help("a name is one word: join its words by `-` or `_`"),
        );
        return Fence::Refused { likely: Some((kind, name.value)) };
    }
    if !check_name(&name, &format!("a {word}"), faults) {
        return Fence::Refused { likely: Some((kind, name.value)) };
    }
    Fence::Block { kind, name: Some(name), head: info.at }
}

fn misspelt(info: &Text, first: &str, faults: &mut Faults) -> Fence {
    if LANGUAGES.contains(&first.to_ascii_lowercase().as_str()) {
        return Fence::Code;
    }
    // `run:reject` and `model,shaft` lack the blank.
    let glued = KINDS.iter().map(|(word, _)| *word).find(|word| {
        first
            .strip_prefix(word)
            .is_some_and(|rest| rest.starts_with(|c: char| !c.is_alphanumeric() && c != '-'))
    });
    let near = nearest(first, KINDS.iter().map(|(word, _)| *word));
    // A longer word that starts like a kind is another word, and likely a language.
    let near = near.into_iter().find(|word| first.len().abs_diff(word.len()) <= 2);
    let Some(likely) = glued.or(near) else { return Fence::Code };
    let message = format!("`{}` is no kind of block", clip(first));
    faults.add(Fault::error("unknown-kind", info.part(0, first.len()), message).help(format!(
        "write `{likely} NAME` if that is meant; a fence to be shown as it is can start with `text`"
    )));
    let name = info.value.split_whitespace().nth(1);
    let kind = KINDS.iter().find(|(word, _)| *word == likely).map(|(_, kind)| *kind);
    Fence::Refused { likely: kind.zip(name.map(str::to_string)) }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Expects `kind name`, `code`, or the code of a fault and what it marks.
    fn check(input: &str, expect: &str) {
        let text = Text { value: input.to_string(), at: Span::new(FileId(0), 0, input.len()), exact: true };
        let mut faults = Faults::new();
        let got = match classify(&text, &mut faults) {
            Fence::Block { kind, name, .. } => {
                format!("{} {}", kind.word(), name.map_or_else(|| "-".to_string(), |name| name.value))
            }
            Fence::Code => "code".to_string(),
            Fence::Refused { .. } => {
                let fault = faults.sorted()[0].clone();
                format!("{}: {}", fault.code, &input[fault.at.start..fault.at.end])
            }
        };
        assert_eq!(got, expect, "{input}");
        assert_eq!(faults.is_empty(), !expect.contains(':'));
    }

    #[test]
    fn kinds_are_known_and_near_misses_named() {
        check("model shaft", "model shaft");
        check("run  a-b_2", "run a-b_2");
        check("criteria", "criteria -");
        check("criteria safety", "criteria safety");
        check("", "code");
        for code in [
            "rust",
            "text",
            "json",
            "r",
            "ron",
            "python",
            "java",
            "diff",
            "make",
            "modelling",
            "tablet-like",
            "runtime",
            "math",
            "toml",
        ] {
            check(code, "code");
        }
        check("modle shaft", "unknown-kind: modle");
        check("Run x", "unknown-kind: Run");
        check("runs x", "unknown-kind: runs");
        check("criterion", "unknown-kind: criterion");
        check("tabel x", "unknown-kind: tabel");
        check("run:x", "unknown-kind: run:x");
        check("model", "missing-name: model");
        check("chart 2x", "bad-name: 2x");
        check("chart a b", "bad-name: b");
    }
}
