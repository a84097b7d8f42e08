//! The block `model NAME`.

use crate::study::Text;
use crate::unit::Value;

/// A model as written.
#[derive(Clone, Debug, PartialEq)]
pub struct ModelBlock {
    /// Its name.
    pub name: Text,
    /// `about`
    pub about: Option<Text>,
    /// `parameters`, in the order of the file.
    pub parameters: Vec<ParameterEntry>,
    /// `states`, in the order of the file.
    pub states: Vec<StateEntry>,
    /// `derived`, in the order of the file.
    pub derived: Vec<DerivedEntry>,
    /// `rates`: name of the state and expression.
    pub rates: Vec<(Text, Text)>,
    /// `invariants`: name and expression of what should stay constant.
    pub invariants: Vec<(Text, Text)>,
    /// `exact`: name of the state and closed form in `t` and parameters.
    pub exact: Vec<(Text, Text)>,
}

/// An entry of `parameters`: `3200 m`, or a mapping with `value`.
#[derive(Clone, Debug, PartialEq)]
pub struct ParameterEntry {
    /// Its name.
    pub name: Text,
    /// `value`
    pub value: Value,
    /// `plusminus`: half width of a uniform distribution.
    pub plusminus: Option<Value>,
    /// `sd`: standard uncertainty.
    pub sd: Option<Value>,
    /// `source`
    pub source: Option<Text>,
    /// `about`
    pub about: Option<Text>,
}

/// The start value of a state.
#[derive(Clone, Debug, PartialEq)]
pub enum Start {
    /// `-1.5 m`
    Value(Value),
    /// An expression of parameters: `sqrt(2*g*H)`.
    Expression(Text),
}

/// An entry of `states`: `-1.5 m`, an expression of parameters, or a mapping with `start`.
#[derive(Clone, Debug, PartialEq)]
pub struct StateEntry {
    /// Its name.
    pub name: Text,
    /// `start`
    pub start: Start,
    /// `unit`, where the start is an expression or carries none.
    pub unit: Option<Text>,
    /// `scale`: a typical size, for the error norm of adaptive runs.
    pub scale: Option<Value>,
    /// `source`
    pub source: Option<Text>,
    /// `about`
    pub about: Option<Text>,
}

/// An entry of `derived`: an expression, or a mapping with `is`.
#[derive(Clone, Debug, PartialEq)]
pub struct DerivedEntry {
    /// Its name.
    pub name: Text,
    /// `is`: the expression.
    pub expression: Text,
    /// `unit`
    pub unit: Option<Text>,
    /// `about`
    pub about: Option<Text>,
}
