//! Faults as text for a terminal, by the crate `annotate-snippets`.

use super::{Faults, Sources};

/// All faults as text, sorted by place, the line quoted and the fault underlined; at most `most`, then a
/// count of the rest. `colour` asks for ANSI colours.
pub fn show(_faults: &Faults, _sources: &Sources, _most: usize, _colour: bool) -> String {
    String::new()
}

/// Up to three of `known` that are near to `missed`, the nearest first; empty where none is near.
pub fn nearest<'a>(_missed: &str, _known: impl IntoIterator<Item = &'a str>) -> Vec<&'a str> {
    Vec::new()
}
