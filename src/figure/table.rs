//! Tables as data: numbers to the digits that their bounds support, in parts that align at the decimal mark.
//!
//! A template renders what [`Table::lay_out`] gives; no HTML is written here.

use super::axis::with_exponent;
use super::digits::{Shown, decade, shown, shown_in};
use crate::arithmetic::larger;
use serde::Serialize;

/// A table of text and numbers.
#[derive(Clone, Debug, PartialEq)]
pub struct Table {
    /// What it shows.
    pub caption: String,
    /// Its columns.
    pub columns: Vec<Column>,
    /// Its rows, each with a cell for every column; missing ones are empty.
    pub rows: Vec<Vec<Cell>>,
}

/// A column of a table.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Column {
    /// What stands in it.
    pub title: String,
    /// The unit of its numbers.
    pub unit: Option<String>,
    /// How its cells are aligned.
    pub align: Align,
}

/// How the cells of a column are aligned.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Align {
    /// At their beginning.
    Left,
    /// At the decimal mark.
    Decimal,
}

/// A cell of a table.
#[derive(Clone, Debug, PartialEq)]
pub enum Cell {
    /// Text, or a number that is text already.
    Text(String),
    /// A number and its bound, both finite and the bound not negative.
    Number {
        /// The number.
        value: f64,
        /// The bound of its error.
        bound: f64,
    },
    /// Nothing.
    Empty,
}

/// A table ready for a template.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct LaidOut {
    /// What it shows.
    pub caption: String,
    /// Heads of the columns.
    pub heads: Vec<Head>,
    /// Cells, row by row.
    pub rows: Vec<Vec<Parts>>,
}

/// The head of a column.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Head {
    /// Title, unit and the power of ten that the numbers leave out: `Pressure / (10⁶ Pa)`.
    pub text: String,
    /// How the cells are aligned.
    pub align: Align,
    /// Whether the numbers of the column have bounds to be shown.
    pub bounds: bool,
}

/// The parts of a cell.
#[derive(Clone, Debug, Default, PartialEq, Eq, Serialize)]
pub struct Parts {
    /// The text as a whole, for a cell of one piece.
    pub text: String,
    /// Of a number, what stands before the decimal mark.
    pub before: String,
    /// Of a number, the decimal mark and what stands behind it.
    pub after: String,
    /// `before` and `after`, filled up with spaces as wide as digits on the right, so that a column set flush right
    /// aligns at the decimal mark.
    pub padded: String,
    /// The bound, filled up in the same way.
    pub bound: String,
}

/// Largest ratio of numbers in a column that share a power of ten.
const DECADES: i32 = 6;

impl Table {
    /// The table ready for a template.
    pub fn lay_out(&self) -> LaidOut {
        let powers: Vec<Option<i32>> = (0..self.columns.len()).map(|k| self.common_power(k)).collect();
        let mut rows: Vec<Vec<Parts>> = self
            .rows
            .iter()
            .map(|row| {
                powers
                    .iter()
                    .enumerate()
                    .map(|(k, power)| parts(row.get(k).unwrap_or(&Cell::Empty), *power))
                    .collect()
            })
            .collect();
        for (k, column) in self.columns.iter().enumerate() {
            if column.align == Align::Decimal {
                align(&mut rows, k, |cell| &mut cell.padded);
            }
            align(&mut rows, k, |cell| &mut cell.bound);
        }
        let heads = self
            .columns
            .iter()
            .enumerate()
            .map(|(k, column)| {
                let named = column
                    .unit
                    .as_ref()
                    .map_or_else(|| column.title.clone(), |unit| format!("{} / {unit}", column.title));
                let bounds = rows.iter().any(|row| !row[k].bound.is_empty());
                Head { text: with_exponent(&named, powers[k]), align: column.align, bounds }
            })
            .collect();
        LaidOut { caption: self.caption.clone(), heads, rows }
    }

    /// The power of ten for all numbers of a column, where one of them asks for it and all are of about one size.
    fn common_power(&self, column: usize) -> Option<i32> {
        let (mut least, mut most, mut asked) = (i32::MAX, i32::MIN, false);
        for row in &self.rows {
            if let Some(Cell::Number { value, bound }) = row.get(column) {
                let size = larger(value.abs(), *bound);
                asked |= shown(*value, *bound).exponent.is_some();
                if size > 0.0 && size.is_finite() {
                    (least, most) = (least.min(decade(size)), most.max(decade(size)));
                }
            }
        }
        (asked && most - least <= DECADES).then_some(most)
    }
}

fn parts(cell: &Cell, power: Option<i32>) -> Parts {
    match cell {
        Cell::Empty => Parts::default(),
        Cell::Text(text) => Parts { text: text.clone(), padded: text.clone(), ..Parts::default() },
        Cell::Number { value, bound } => {
            let number = power.map_or_else(|| shown(*value, *bound), |power| shown_in(*value, *bound, power));
            // A number with a power of its own keeps it: it aligns with no other.
            let own = |text: &str| match (power, number.exponent) {
                (None, Some(_)) => {
                    Shown { value: text.to_owned(), bound: String::new(), ..number.clone() }.text(None)
                }
                _ => text.to_owned(),
            };
            let (value, bound) = (own(&number.value), own(&number.bound));
            let mark = mark_of(&value);
            Parts {
                text: value.clone(),
                before: value[..mark].to_owned(),
                after: value[mark..].to_owned(),
                padded: value,
                bound: if number.bound.is_empty() { String::new() } else { bound },
            }
        }
    }
}

/// Where the decimal mark stands in a number, or would stand: after its leading digits.
fn mark_of(text: &str) -> usize {
    let leading = |c: char| c.is_ascii_digit() || c == '\u{2212}';
    text.find(|c| !leading(c)).unwrap_or(text.len())
}

/// Fills up the numbers of a column behind the decimal mark.
fn align(rows: &mut [Vec<Parts>], column: usize, of: fn(&mut Parts) -> &mut String) {
    let number = |text: &str| text.starts_with(|c: char| c.is_ascii_digit() || c == '\u{2212}');
    let behind = |text: &str| text[mark_of(text)..].chars().count();
    let mut most = 0;
    for row in rows.iter_mut() {
        let text = of(&mut row[column]);
        if number(text) {
            most = most.max(behind(text));
        }
    }
    for row in rows.iter_mut() {
        let text = of(&mut row[column]);
        if number(text) {
            for k in behind(text)..most {
                // U+2008 is as wide as a point, U+2007 as a digit.
                text.push(if k == 0 { '\u{2008}' } else { '\u{2007}' });
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn column(title: &str, unit: Option<&str>, align: Align) -> Column {
        Column { title: title.to_owned(), unit: unit.map(str::to_owned), align }
    }

    fn table(numbers: &[(f64, f64)]) -> LaidOut {
        Table {
            caption: "Extremes".to_owned(),
            columns: vec![column("Quantity", None, Align::Left), column("Level", Some("m"), Align::Decimal)],
            rows: numbers
                .iter()
                .map(|(value, bound)| {
                    vec![Cell::Text("z".to_owned()), Cell::Number { value: *value, bound: *bound }]
                })
                .collect(),
        }
        .lay_out()
    }

    #[test]
    fn numbers_align_at_the_decimal_mark() {
        let laid = table(&[(10.37953, 0.0117), (-4.2, 0.305), (1234.0, 0.0)]);
        let padded: Vec<&str> = laid.rows.iter().map(|row| row[1].padded.as_str()).collect();
        assert_eq!(padded, ["10.380", "\u{2212}4.20\u{2007}", "1234\u{2008}\u{2007}\u{2007}\u{2007}"]);
        let halves: Vec<(&str, &str)> =
            laid.rows.iter().map(|row| (row[1].before.as_str(), row[1].after.as_str())).collect();
        assert_eq!(halves, [("10", ".380"), ("\u{2212}4", ".20"), ("1234", "")]);
        let bounds: Vec<&str> = laid.rows.iter().map(|row| row[1].bound.as_str()).collect();
        assert_eq!(bounds, ["0.013", "0.31\u{2007}", "0\u{2008}\u{2007}\u{2007}\u{2007}"]);
        assert_eq!(laid.heads[1].text, "Level / m");
        assert!(laid.heads[1].bounds && !laid.heads[0].bounds);
    }

    #[test]
    fn a_column_of_one_size_shares_its_power_of_ten() {
        let laid = table(&[(1.2345e-12, 1.15e-15), (3.4e-11, 1e-14)]);
        assert_eq!(laid.heads[1].text, "Level / (10\u{207b}\u{b9}\u{b9} m)");
        assert_eq!(laid.rows[0][1].text, "0.12345");
        assert_eq!(laid.rows[1][1].text, "3.4000");
        assert_eq!(laid.rows[0][1].bound, "0.00012");
    }

    #[test]
    fn numbers_of_very_different_size_keep_powers_of_their_own() {
        let laid = table(&[(1.5e-15, 1e-18), (2.5e12, 1e9)]);
        assert_eq!(laid.heads[1].text, "Level / m");
        assert_eq!(laid.rows[0][1].text, "1.5000 × 10\u{207b}\u{b9}\u{2075}");
        assert_eq!(laid.rows[1][1].text, "2.5000 × 10\u{b9}\u{b2}");
    }

    #[test]
    fn short_rows_and_numbers_that_are_none_are_laid_out() {
        let laid = Table {
            caption: String::new(),
            columns: vec![column("a", None, Align::Decimal), column("b", None, Align::Decimal)],
            rows: vec![
                vec![Cell::Number { value: f64::NAN, bound: 1.0 }],
                vec![],
                vec![Cell::Empty, Cell::Text("c".into())],
            ],
        }
        .lay_out();
        assert!(laid.rows.iter().all(|row| row.len() == 2));
        assert_eq!(laid.rows[0][0].text, "\u{2013}");
    }
}
