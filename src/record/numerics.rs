//! The version of the numerical definitions.

/// The version of everything that decides the bits of a result: the order of operations, the elementary
/// functions, the coefficients, the way in which bounds are found. Two records with the same number were
/// made by the same definitions, so that the same study has the same bits in both.
///
/// | version | what changed | which results move |
/// | --- | --- | --- |
/// | 1 | first definitions | all |
pub const NUMERICS: u32 = 1;
