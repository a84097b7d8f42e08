//! The block `table NAME`.

use super::chart::quantities;
use crate::fault::{Fault, Faults, Span};
use crate::study::Text;
use crate::study::fields::{Fields, each, expression, items, text};
use crate::study::node::Node;

/// A table as written.
#[derive(Clone, Debug, PartialEq)]
pub struct TableBlock {
    /// Its name.
    pub name: Text,
    /// `title`
    pub title: Option<Text>,
    /// What it lists.
    pub lists: Lists,
}

/// What a table lists.
#[derive(Clone, Debug, PartialEq)]
pub enum Lists {
    /// `rows: [reject.z_max, reject.t_max]`: quantities, one a row.
    Quantities(Vec<Text>),
    /// `run: reject` and `columns: [z, v]`: the rows of a run, all states where `columns` is left out.
    Rows {
        /// `run`
        run: Text,
        /// `columns`: expressions in the run's model.
        columns: Vec<Text>,
    },
}

/// Reads the body of a table block. `at` is marked where a key is missing.
pub(in crate::study) fn read(name: Text, at: Span, body: &Node, faults: &mut Faults) -> Option<TableBlock> {
    let fields = Fields::open(body, "a table", at, &["title", "rows", "run", "columns"], faults)?;
    let lists = lists(&fields, at, faults);
    let title = fields.text("title", faults);
    Some(TableBlock { name, title, lists: lists? })
}

fn lists(fields: &Fields<'_>, at: Span, faults: &mut Faults) -> Option<Lists> {
    let columns = fields.get("columns");
    match (fields.get("rows"), fields.get("run")) {
        (Some(rows), Some(run)) => {
            faults.add(
                Fault::error("one-of", run.at, "a table has both `rows` and `run`")
                    .also(rows.at, "`rows`")
                    .help("make two tables of it"),
            );
            None
        }
        (Some(rows), None) => {
            if let Some(columns) = columns {
                faults.add(
                    Fault::error("unknown-key", columns.at, "a table with `rows` takes no `columns`")
                        .help("write `run: RUN` in place of `rows` to tabulate a run over time"),
                );
            }
            quantities(rows, "`rows`", faults).map(Lists::Quantities)
        }
        (None, Some(run)) => {
            let run = text(run, "`run`", faults);
            let columns = columns.map_or(Some(Vec::new()), |node| {
                let list = items(node, "`columns`", faults)?;
                each(list, |item| expression(item, "a column", faults))
            });
            Some(Lists::Rows { run: run?, columns: columns? })
        }
        (None, None) => {
            faults.add(
                Fault::error("one-of", at, "a table lacks `rows` or `run`")
                    .help("write `rows: [RUN.QUANTITY]`, or `run: RUN` for a table over time"),
            );
            None
        }
    }
}
