//! The block `chart NAME`.

use crate::study::Text;

/// A chart as written.
#[derive(Clone, Debug, PartialEq)]
pub struct ChartBlock {
    /// Its name.
    pub name: Text,
    /// `title`
    pub title: Option<Text>,
    /// What it shows.
    pub shows: Shows,
    /// `x axis`: the title of the horizontal axis, where the default does not serve.
    pub x_axis: Option<Text>,
    /// `y axis`: the title of the vertical axis.
    pub y_axis: Option<Text>,
}

/// What a chart shows.
#[derive(Clone, Debug, PartialEq)]
pub enum Shows {
    /// `lines` and `points` over `against`.
    Curves {
        /// `lines`: curves from the dense output.
        lines: Vec<Trace>,
        /// `points`: the rows of a run as markers.
        points: Vec<Trace>,
        /// `against`: an expression in each trace's own model; `t` where it is left out.
        against: Option<Text>,
    },
    /// `convergence: [reject.z_max]`: error against step.
    Convergence(Vec<Text>),
    /// `stability: reject`: the scheme's region and step times eigenvalue along the run.
    Stability(Text),
}

/// A trace: `reject.z`, or a mapping with `run` and `of`.
#[derive(Clone, Debug, PartialEq)]
pub struct Trace {
    /// The run.
    pub run: Text,
    /// The expression in that run's model.
    pub expression: Text,
    /// `label`
    pub label: Option<Text>,
}
