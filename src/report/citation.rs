//! Which places of a report quote which quantity, so that the ledger can lead back to them.

use super::ReportError;
use super::anchor::Ids;
use super::view::Backlink;
use crate::bound::Outcome;
use std::collections::BTreeMap;

/// The ledger lines of all quantities, and the places that lead to them.
#[derive(Debug, Default)]
pub(super) struct Citations {
    lines: BTreeMap<String, Line>,
}

#[derive(Debug)]
struct Line {
    id: String,
    cited: Vec<Backlink>,
}

/// A link to a ledger line, and the id of the place where it stands.
#[derive(Clone, Debug)]
pub(super) struct Citation {
    /// The id of the ledger line.
    pub(super) line: String,
    /// The id of the citing place.
    pub(super) id: String,
}

impl Citations {
    /// A ledger line for every quantity of `outcome`.
    pub(super) fn new(outcome: &Outcome, ids: &mut Ids) -> Self {
        let mut lines = BTreeMap::new();
        for run in &outcome.runs {
            for quantity in &run.quantities {
                let id = ids.take(&format!("q-{}-{}", run.name, quantity.name));
                lines.insert(format!("{}.{}", run.name, quantity.name), Line { id, cited: Vec::new() });
            }
        }
        Citations { lines }
    }

    /// A place that quotes `quantity` (`reject.z_max`); `place` says where: `text`, `Table 1`.
    ///
    /// # Errors
    /// [`ReportError::Missing`] where no run has that quantity.
    pub(super) fn cite(
        &mut self,
        quantity: &str,
        place: &str,
        ids: &mut Ids,
    ) -> Result<Citation, ReportError> {
        let line = self.lines.get_mut(quantity).ok_or_else(|| missing(quantity))?;
        let id = ids.take(&format!("cite-{}-{}", quantity.replace('.', "-"), line.cited.len() + 1));
        line.cited.push(Backlink { id: id.clone(), place: place.to_owned() });
        Ok(Citation { line: line.id.clone(), id })
    }

    /// The id of the ledger line of `quantity`.
    pub(super) fn line(&self, quantity: &str) -> Result<&str, ReportError> {
        self.lines.get(quantity).map(|line| line.id.as_str()).ok_or_else(|| missing(quantity))
    }

    /// The places that quote `quantity`, in the order of the report; several of one name are numbered.
    pub(super) fn of(&self, quantity: &str) -> Vec<Backlink> {
        let Some(Line { cited, .. }) = self.lines.get(quantity) else { return Vec::new() };
        let same = |list: &[Backlink], place: &str| list.iter().filter(|link| link.place == place).count();
        let numbered = cited.iter().enumerate().map(|(i, Backlink { id, place })| Backlink {
            id: id.clone(),
            place: match same(cited, place) {
                1 => place.clone(),
                _ => format!("{place} {}", same(&cited[..=i], place)),
            },
        });
        numbered.collect()
    }
}

fn missing(quantity: &str) -> ReportError {
    ReportError::Missing(format!("the quantity `{quantity}`"))
}
