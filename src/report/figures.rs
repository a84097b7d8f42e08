//! The figures of a report as they enter this folder: charts as SVG text, tables as text cells.

/// All figures of a study.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Figures {
    /// One a `chart` block, in the order of the study.
    pub charts: Vec<ChartFigure>,
    /// One a `table` block, in the order of the study.
    pub tables: Vec<TableFigure>,
    /// One a run, in the order of the study; may be shorter than the list of runs.
    pub runs: Vec<RunFigures>,
}

/// A chart.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct ChartFigure {
    /// The name of the block, or of the run.
    pub name: String,
    /// An SVG element, put into the page as it stands: its maker escapes every text in it.
    pub svg: String,
    /// What it shows, in a sentence.
    pub caption: String,
    /// What the reader must know of it: the largest bound over the curves.
    pub note: Option<String>,
}

/// The charts of one run for the annex.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct RunFigures {
    /// Error against step.
    pub convergence: Option<ChartFigure>,
    /// Step times eigenvalue in the region of stability.
    pub stability: Option<ChartFigure>,
}

/// A table.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct TableFigure {
    /// The name of the block.
    pub name: String,
    /// What it lists, in a sentence.
    pub caption: String,
    /// What the reader must know of it.
    pub note: Option<String>,
    /// The heads of the columns.
    pub columns: Vec<ColumnHead>,
    /// The rows, each as long as `columns`; the first cell heads its row.
    pub rows: Vec<Vec<TableCell>>,
}

/// The head of a column.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct ColumnHead {
    /// The words.
    pub name: String,
    /// The unit as text.
    pub unit: Option<String>,
    /// Whether its cells are numbers, which are set to the right.
    pub number: bool,
}

/// A cell.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct TableCell {
    /// The text; empty for a number that is withheld.
    pub text: String,
    /// The quantity whose ledger line the cell leads to: `reject.z_max`.
    pub quantity: Option<String>,
    /// Why the number in it has no bound, where it has none: the cell is then marked.
    pub unbounded: Option<String>,
}
