//! The block `run NAME`, and the grammar of quantities.

use crate::study::Text;
use crate::unit::Value;

/// A run as written.
#[derive(Clone, Debug, PartialEq)]
pub struct RunBlock {
    /// Its name.
    pub name: Text,
    /// `model`
    pub model: Text,
    /// `scheme`
    pub scheme: Text,
    /// `step`, `tolerance` or `aim`: exactly one of them.
    pub control: Control,
    /// `from`: where time starts; 0 where it is left out.
    pub from: Option<Value>,
    /// `until`
    pub until: Value,
    /// `with`: overrides of parameters and of start values.
    pub with: Vec<(Text, Value)>,
    /// `rows`: the interval of the tabulated output, from `rows: every 1 s`.
    pub rows: Option<Value>,
    /// `quantities`, in the order of the file.
    pub quantities: Vec<QuantityEntry>,
    /// `bound`
    pub bound: BoundAsked,
    /// `limit`: the largest number of steps of the run, 100 million where it is left out.
    pub limit: Option<Value>,
}

/// How the steps are chosen.
#[derive(Clone, Debug, PartialEq)]
pub enum Control {
    /// `step: 0.5 s`
    Step(Value),
    /// `tolerance: 1e-6`: relative, for an adaptive pair.
    Tolerance(Value),
    /// `aim: 0.01 m` or `aim: {z_max: 0.01 m, t_max: 0.1 s}`: the largest step whose bounds meet it.
    Aim(Vec<Aim>),
}

/// What a bound should be at most.
#[derive(Clone, Debug, PartialEq)]
pub struct Aim {
    /// The quantity; `None` means every quantity of the same unit.
    pub quantity: Option<Text>,
    /// The wanted bound.
    pub bound: Value,
}

/// `bound`: which estimates a run makes.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum BoundAsked {
    /// `bound: halving and companion`, and where the entry is left out.
    #[default]
    HalvingAndCompanion,
    /// `bound: halving`
    Halving,
    /// `bound: none`
    None,
}

/// An entry of `quantities`: `highest z`, or a mapping with `take`.
#[derive(Clone, Debug, PartialEq)]
pub struct QuantityEntry {
    /// Its name.
    pub name: Text,
    /// The text that says what is read from the run: `time when z falls through 2 m`.
    pub text: Text,
    /// That text, taken apart.
    pub reading: Reading,
    /// `unit`, where it does not follow from the expression.
    pub unit: Option<Text>,
    /// `about`
    pub about: Option<Text>,
}

/// What is read from a run.
#[derive(Clone, Debug, PartialEq)]
pub enum Reading {
    /// `final EXPRESSION`
    Final(Text),
    /// `highest EXPRESSION`
    Highest(Text),
    /// `lowest EXPRESSION`
    Lowest(Text),
    /// `mean EXPRESSION`
    Mean(Text),
    /// `integral of EXPRESSION`
    Integral(Text),
    /// `EXPRESSION at 35 s`
    At(Text, Value),
    /// `time of highest EXPRESSION`
    TimeOfHighest(Text),
    /// `time of lowest EXPRESSION`
    TimeOfLowest(Text),
    /// `time when EXPRESSION falls through LEVEL`, `last time when ...`, `3rd time when ...`
    TimeWhen(Occurrence, Passage),
    /// `count of EXPRESSION falls through LEVEL`
    Count(Passage),
}

/// Which of several passages.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Occurrence {
    /// The nth, from 1.
    Nth(u32),
    /// The last.
    Last,
}

/// `EXPRESSION falls through LEVEL`
#[derive(Clone, Debug, PartialEq)]
pub struct Passage {
    /// What passes.
    pub expression: Text,
    /// In which direction.
    pub direction: Direction,
    /// The level.
    pub level: Level,
}

/// The direction of a passage.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Direction {
    /// `falls through`
    Falls,
    /// `rises through`
    Rises,
    /// `crosses`
    Crosses,
}

/// The level that is passed.
#[derive(Clone, Debug, PartialEq)]
pub enum Level {
    /// `2 m`
    Value(Value),
    /// An expression of parameters.
    Expression(Text),
}
