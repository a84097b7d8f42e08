//! From Markdown text to front matter, prose and blocks, each with its place in the file.
//!
//! Enters: the text of a study. Leaves: a [`Study`]. This stage knows the grammar of the blocks and of
//! quantities, and nothing of expressions: a [`Text`] that holds one is handed on as it stands.
//!
//! Invariants: what leaves is safe to render (no raw HTML, no image, no link that could run something), and its
//! blocks are without errors of their own. Where no error at all was found, every run, quantity and model that
//! a block or a quote names is in the study.

pub mod block;
pub mod source;

mod fence;
mod fields;
mod front;
mod link;
mod name;
mod node;
mod prose;
mod quote;
mod read;
mod refer;
mod slip;
mod yaml;

pub use read::read;

use crate::fault::Span;
use block::Blocks;

/// A text of a study with its place.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Text {
    /// The text itself: for a quoted or folded YAML scalar, what it stands for.
    pub value: String,
    /// Where it stands.
    pub at: Span,
    /// Whether byte `i` of `value` is byte `at.start + i` of the file. Where it is not (quoted or folded
    /// scalars), faults point at the whole scalar.
    pub exact: bool,
}

impl Text {
    /// The place of bytes `from..to` of the text, or of the whole where bytes do not match.
    pub fn part(&self, from: usize, to: usize) -> Span {
        if self.exact { self.at.part(from, to) } else { self.at }
    }
    /// The text of bytes `from..to` without surrounding blanks, with its place.
    #[must_use]
    pub fn cut(&self, from: usize, to: usize) -> Text {
        let piece = self.value.get(from..to).unwrap_or_default();
        let from = from + piece.len() - piece.trim_start().len();
        let piece = piece.trim();
        Text { value: piece.to_string(), at: self.part(from, from + piece.len()), exact: self.exact }
    }
}

/// The front matter of a study.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FrontMatter {
    /// `study`: the title.
    pub title: Text,
    /// The other entries in the order of the file: `number`, `revision`, `date`, `prepared`, `checked`,
    /// `approved`, `client`, `caution`.
    pub entries: Vec<(Text, Text)>,
}

impl FrontMatter {
    /// The entry of that key.
    pub fn get(&self, key: &str) -> Option<&str> {
        self.entries.iter().find(|(name, _)| name.value == key).map(|(_, text)| text.value.as_str())
    }
}

/// A quantity quoted in prose: `[=reject.z_max]`, `[=reject.z_max plain]`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Quote {
    /// `reject.z_max`, with its place.
    pub quantity: Text,
    /// Whether the bound is left to the ledger.
    pub plain: bool,
    /// The whole `[=...]`.
    pub at: Span,
}

/// A part of the body of a study, in the order of the file.
#[derive(Clone, Debug, PartialEq)]
pub enum Part {
    /// A Markdown event that is safe to render: no raw HTML, no link outside the allowed schemes.
    Markdown(pulldown_cmark::Event<'static>),
    /// A quoted quantity; stands where a text event would.
    Quote(Quote),
    /// A block of ours; stands between two paragraphs.
    Block(BlockRef),
}

/// Which block a [`Part::Block`] means: the index into the list of its kind in [`Blocks`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum BlockRef {
    /// `blocks.models[i]`
    Model(usize),
    /// `blocks.runs[i]`
    Run(usize),
    /// `blocks.charts[i]`
    Chart(usize),
    /// `blocks.tables[i]`
    Table(usize),
    /// `blocks.criteria[i]`
    Criteria(usize),
}

/// A study as read.
#[derive(Clone, Debug)]
pub struct Study {
    /// The front matter.
    pub front: FrontMatter,
    /// Prose and blocks in the order of the file.
    pub body: Vec<Part>,
    /// The blocks by kind.
    pub blocks: Blocks,
}
