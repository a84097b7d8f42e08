//! The ids of a page: each given out once.

use std::collections::BTreeSet;

/// The ids that are taken.
#[derive(Debug, Default)]
pub(super) struct Ids {
    taken: BTreeSet<String>,
}

impl Ids {
    /// None but those that the templates use themselves.
    pub(super) fn new() -> Self {
        let own = ["report", "ledger", "convergence", "inputs", "study-text", "digests", "verdict", "page"];
        Ids { taken: own.into_iter().map(str::to_owned).collect() }
    }

    /// Marks the ids inside an SVG text as taken: charts bring their own.
    pub(super) fn reserve_of(&mut self, svg: &str) {
        for quote in ['"', '\''] {
            let key = format!("id={quote}");
            let mut rest = svg;
            while let Some(at) = rest.find(&key) {
                rest = &rest[at + key.len()..];
                let end = rest.find(quote).unwrap_or(rest.len());
                self.taken.insert(rest[..end].to_owned());
            }
        }
    }

    /// An id near to `wish`, made of letters, digits, `-`, `_` and `.`; not given out before.
    pub(super) fn take(&mut self, wish: &str) -> String {
        let base: String = wish
            .chars()
            .map(|c| if c.is_ascii_alphanumeric() || matches!(c, '-' | '_' | '.') { c } else { '-' })
            .collect();
        let mut id = base.clone();
        let mut count = 1;
        while !self.taken.insert(id.clone()) {
            count += 1;
            id = format!("{base}-{count}");
        }
        id
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_that_fall_together_get_different_ids() {
        let mut ids = Ids::new();
        assert_eq!(ids.take("q-a-b-c"), "q-a-b-c");
        assert_eq!(ids.take("q-a-b-c"), "q-a-b-c-2");
        assert_eq!(ids.take("q-a-b-c-2"), "q-a-b-c-2-2");
        assert_eq!(ids.take("ledger"), "ledger-2");
    }

    #[test]
    fn an_id_holds_nothing_that_ends_an_attribute() {
        assert_eq!(Ids::new().take("q-\"><b>"), "q----b-");
    }

    #[test]
    fn the_ids_of_a_chart_are_taken() {
        let mut ids = Ids::new();
        ids.reserve_of("<svg id=\"figure-level\"><g id='x'/></svg>");
        assert_eq!(ids.take("figure-level"), "figure-level-2");
        assert_eq!(ids.take("x"), "x-2");
    }
}
