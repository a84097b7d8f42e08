//! The block `table NAME`.

use crate::study::Text;

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
