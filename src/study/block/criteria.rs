//! The block `criteria`.

use crate::fault::Span;
use crate::study::Text;
use crate::unit::Value;

/// A list of acceptance criteria.
#[derive(Clone, Debug, PartialEq)]
pub struct CriteriaBlock {
    /// The name of the block, where it has one.
    pub name: Option<Text>,
    /// Where the block stands.
    pub at: Span,
    /// The criteria in the order of the file.
    pub criteria: Vec<CriterionEntry>,
}

/// A criterion: `- freeboard: reject.z_max <= 12.5 m`, or a mapping with `holds`.
#[derive(Clone, Debug, PartialEq)]
pub struct CriterionEntry {
    /// Its name.
    pub name: Text,
    /// The criterion as text.
    pub text: Text,
    /// `reject.z_max`
    pub quantity: Text,
    /// The comparison.
    pub relation: Relation,
    /// The limit.
    pub limit: Value,
    /// `expect`: a verdict that the study shows on purpose, with its reason from `because`.
    pub expect: Option<(Verdict, Text)>,
}

/// The comparison of a criterion.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Relation {
    /// `<`
    Less,
    /// `<=`
    LessOrEqual,
    /// `>`
    Greater,
    /// `>=`
    GreaterOrEqual,
}

/// What came of a criterion.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Verdict {
    /// The value and its bound lie on the right side of the limit.
    Met,
    /// The limit lies within the bound, or the quantity has none.
    Undecided,
    /// The value and its bound lie on the wrong side.
    NotMet,
}

impl Verdict {
    /// The words for it: `met`, `undecided`, `not met`.
    pub fn words(self) -> &'static str {
        match self {
            Verdict::Met => "met",
            Verdict::Undecided => "undecided",
            Verdict::NotMet => "not met",
        }
    }
}
