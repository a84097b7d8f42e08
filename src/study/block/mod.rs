//! The kinds of block: one file a kind, each with its data and its reader.

pub mod chart;
pub mod criteria;
pub mod model;
pub mod quantity;
pub mod run;
pub mod table;

#[cfg(test)]
mod tests;

/// The blocks of a study by kind, each list in the order of the file.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Blocks {
    /// `model NAME`
    pub models: Vec<model::ModelBlock>,
    /// `run NAME`
    pub runs: Vec<run::RunBlock>,
    /// `chart NAME`
    pub charts: Vec<chart::ChartBlock>,
    /// `table NAME`
    pub tables: Vec<table::TableBlock>,
    /// `criteria`
    pub criteria: Vec<criteria::CriteriaBlock>,
}
