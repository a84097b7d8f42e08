//! The reader of a drawn tableau: for the built-in schemes, and for one that a study brings.
//!
//! A line is `label | cells`. The label is the node of a stage, `b`, `b^`, or `theta^k`; cells are integers,
//! fractions of integers and decimals, all taken exactly. Empty lines and rules of dashes say nothing.

use std::fmt;

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Zero};

use super::tableau::ExactTableau;

/// A tableau may come from outside, and exact ratios grow: more stages than schemes of order 9 need are refused.
const MOST_STAGES: usize = 24;
/// Longest cell in bytes, and with it the largest number of digits.
const LONGEST_CELL: usize = 64;

/// A line of a drawing that cannot be read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Misdrawn {
    /// Line of the drawing, from 1.
    pub line: usize,
    /// What is wrong with it.
    pub slip: Slip,
}

/// What can be wrong with a line of a drawing.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Slip {
    /// The line has no bar, or more than one.
    Bar,
    /// This is no integer, fraction or decimal.
    Cell(String),
    /// The denominator of this cell is zero.
    ZeroDenominator(String),
    /// A line has too few cells, or too many: for a stage, an explicit scheme has as many as stages above it.
    CellCount {
        /// Cells found.
        found: usize,
        /// Cells needed.
        needed: usize,
    },
    /// This label is drawn twice.
    Twice(String),
    /// A stage below the weights, or weights in a drawing of the interpolant.
    Misplaced(String),
    /// The powers of theta are 1, 2, 3, ... without a gap, and this is not the next.
    Power(String),
    /// No stage, no weights, or no power of theta is drawn.
    Missing(&'static str),
    /// More stages or longer cells than any scheme needs.
    TooLarge,
}

impl fmt::Display for Misdrawn {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "line {} of the tableau: ", self.line)?;
        match &self.slip {
            Slip::Bar => write!(f, "one `|` is needed between the label and the coefficients"),
            Slip::Cell(cell) => write!(f, "`{cell}` is no integer, fraction or decimal"),
            Slip::ZeroDenominator(cell) => write!(f, "`{cell}` divides by zero"),
            Slip::CellCount { found, needed } => {
                write!(f, "{found} coefficients where an explicit scheme has {needed}")
            }
            Slip::Twice(label) => write!(f, "`{label}` is drawn twice"),
            Slip::Misplaced(label) => write!(f, "`{label}` does not belong here"),
            Slip::Power(label) => write!(f, "`{label}` is not the next power of theta"),
            Slip::Missing(what) => write!(f, "{what} missing"),
            Slip::TooLarge => write!(f, "more stages or digits than a scheme can have"),
        }
    }
}

impl std::error::Error for Misdrawn {}

/// Reads stages, weights, and what else is drawn.
pub(super) fn read(drawing: &str) -> Result<ExactTableau, Misdrawn> {
    let mut tableau = ExactTableau { c: vec![], a: vec![], b: vec![], b_hat: None, b_theta: None };
    let mut powers = Vec::new();
    for line in lines(drawing) {
        let line = line?;
        let stages = tableau.stages();
        match line.label {
            "b" if !tableau.b.is_empty() => return line.slip(Slip::Twice("b".to_owned())),
            "b" => tableau.b = line.row(stages)?,
            "b^" if tableau.b_hat.is_some() => return line.slip(Slip::Twice("b^".to_owned())),
            "b^" => tableau.b_hat = Some(line.row(stages)?),
            label if label.starts_with("theta") => powers.push(line.power(powers.len(), stages)?),
            label if !tableau.b.is_empty() || tableau.b_hat.is_some() || !powers.is_empty() => {
                return line.slip(Slip::Misplaced(label.to_owned()));
            }
            _ if stages == MOST_STAGES => return line.slip(Slip::TooLarge),
            label => {
                let node = number(label).or_else(|slip| line.slip(slip))?;
                tableau.a.push(line.row(stages)?);
                tableau.c.push(node);
            }
        }
    }
    let end = drawing.lines().count();
    if tableau.c.is_empty() {
        return Err(Misdrawn { line: end, slip: Slip::Missing("the stages are") });
    }
    if tableau.b.is_empty() {
        return Err(Misdrawn { line: end, slip: Slip::Missing("the weights `b` are") });
    }
    if !powers.is_empty() {
        tableau.b_theta = Some(by_stage(&powers, tableau.stages()));
    }
    Ok(tableau)
}

/// Reads a drawing of `theta^k` lines alone.
pub(super) fn read_interpolant(drawing: &str, stages: usize) -> Result<Vec<Vec<BigRational>>, Misdrawn> {
    let mut powers = Vec::new();
    for line in lines(drawing) {
        let line = line?;
        if !line.label.starts_with("theta") {
            return line.slip(Slip::Misplaced(line.label.to_owned()));
        }
        powers.push(line.power(powers.len(), stages)?);
    }
    if powers.is_empty() {
        let line = drawing.lines().count();
        return Err(Misdrawn { line, slip: Slip::Missing("the powers of theta are") });
    }
    Ok(by_stage(&powers, stages))
}

/// From one row a power to one row a stage.
fn by_stage(powers: &[Vec<BigRational>], stages: usize) -> Vec<Vec<BigRational>> {
    (0..stages).map(|stage| powers.iter().map(|row| row[stage].clone()).collect()).collect()
}

struct Line<'a> {
    number: usize,
    label: &'a str,
    cells: &'a str,
}

fn lines(drawing: &str) -> impl Iterator<Item = Result<Line<'_>, Misdrawn>> {
    drawing.lines().enumerate().filter(|(_, text)| !says_nothing(text)).map(|(index, text)| {
        let number = index + 1;
        match text.split_once('|') {
            Some((label, cells)) if !cells.contains('|') => Ok(Line { number, label: label.trim(), cells }),
            _ => Err(Misdrawn { line: number, slip: Slip::Bar }),
        }
    })
}

fn says_nothing(text: &str) -> bool {
    let text = text.trim();
    text.is_empty() || (text.contains("---") && text.chars().all(|c| matches!(c, '-' | '|' | '+' | ' ')))
}

impl Line<'_> {
    fn slip<T>(&self, slip: Slip) -> Result<T, Misdrawn> {
        Err(Misdrawn { line: self.number, slip })
    }

    fn row(&self, needed: usize) -> Result<Vec<BigRational>, Misdrawn> {
        let found = self.cells.split_whitespace().count();
        if found != needed {
            return self.slip(Slip::CellCount { found, needed });
        }
        self.cells.split_whitespace().map(|cell| number(cell).or_else(|slip| self.slip(slip))).collect()
    }

    /// A row of the interpolant below `above` others: `theta` or `theta^1`, `theta^2`, ...
    fn power(&self, above: usize, stages: usize) -> Result<Vec<BigRational>, Misdrawn> {
        let next = (above == 0 && self.label == "theta") || self.label == format!("theta^{}", above + 1);
        if !next {
            return self.slip(Slip::Power(self.label.to_owned()));
        }
        if above == MOST_STAGES {
            return self.slip(Slip::TooLarge);
        }
        self.row(stages)
    }
}

/// An integer, a fraction or a decimal, exactly.
fn number(cell: &str) -> Result<BigRational, Slip> {
    if cell.len() > LONGEST_CELL {
        return Err(Slip::TooLarge);
    }
    let wrong = || Slip::Cell(cell.to_owned());
    let (negative, digits) = match cell.as_bytes().first() {
        Some(b'-') => (true, &cell[1..]),
        Some(b'+') => (false, &cell[1..]),
        _ => (false, cell),
    };
    let magnitude = if let Some((numerator, denominator)) = digits.split_once('/') {
        let denominator = whole(denominator).ok_or_else(wrong)?;
        if denominator.is_zero() {
            return Err(Slip::ZeroDenominator(cell.to_owned()));
        }
        BigRational::new(whole(numerator).ok_or_else(wrong)?, denominator)
    } else if let Some((before, after)) = digits.split_once('.') {
        let shifted = whole(before).and(whole(after)).and_then(|_| whole(&format!("{before}{after}")));
        let ten_to = after.bytes().fold(BigInt::one(), |power, _| power * 10);
        BigRational::new(shifted.ok_or_else(wrong)?, ten_to)
    } else {
        BigRational::from_integer(whole(digits).ok_or_else(wrong)?)
    };
    Ok(if negative { -magnitude } else { magnitude })
}

fn whole(digits: &str) -> Option<BigInt> {
    let plain = !digits.is_empty() && digits.bytes().all(|byte| byte.is_ascii_digit());
    plain.then(|| digits.parse().ok()).flatten()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ratio(numerator: i64, denominator: i64) -> BigRational {
        BigRational::new(numerator.into(), denominator.into())
    }

    fn check_slip(drawing: &str, line: usize, slip: Slip) {
        assert_eq!(read(drawing), Err(Misdrawn { line, slip }), "{drawing}");
    }

    #[test]
    fn cells_are_taken_exactly() {
        for (cell, expect) in [
            ("0", ratio(0, 1)),
            ("-0", ratio(0, 1)),
            ("+7", ratio(7, 1)),
            ("-25360/2187", ratio(-25360, 2187)),
            ("6/4", ratio(3, 2)),
            ("0.1", ratio(1, 10)),
            ("-12.0625", ratio(-193, 16)),
        ] {
            assert_eq!(number(cell), Ok(expect), "{cell}");
        }
        let digits = number("0.123456789012345678901234567890").unwrap();
        assert_eq!(digits * ratio(10_i64.pow(15), 1) * ratio(10_i64.pow(15), 1), {
            BigRational::from_integer("123456789012345678901234567890".parse().unwrap())
        });
    }

    #[test]
    fn what_is_no_number_is_refused() {
        for cell in
            ["", "-", "x", "1/", "/2", "1//2", "1/-2", "--1", ".5", "5.", "1.5/2", "1e3", "½", "−1", "1_0"]
        {
            assert_eq!(number(cell), Err(Slip::Cell(cell.to_owned())), "{cell}");
        }
        assert_eq!(number("1/0"), Err(Slip::ZeroDenominator("1/0".to_owned())));
        assert_eq!(number(&"1".repeat(65)), Err(Slip::TooLarge));
    }

    #[test]
    fn a_slip_names_its_line() {
        check_slip("0 |\n1/2 1/2\nb | 0 1", 2, Slip::Bar);
        check_slip("0 |\n1/2 | 1/2 | 3\nb | 0 1", 2, Slip::Bar);
        check_slip("0 |\n\n1/2 | x\nb | 0 1", 3, Slip::Cell("x".to_owned()));
        check_slip("y |\nb | 1", 1, Slip::Cell("y".to_owned()));
        check_slip("0 |\n1 | 1/2 1/2\nb | 0 1", 2, Slip::CellCount { found: 2, needed: 1 });
        check_slip("0 |\n1 | 1\nb | 1", 3, Slip::CellCount { found: 1, needed: 2 });
        check_slip("0 |\nb | 1\nb | 1", 3, Slip::Twice("b".to_owned()));
        check_slip("0 |\nb | 1\nb^ | 1\nb^ | 1", 4, Slip::Twice("b^".to_owned()));
        check_slip("0 |\nb | 1\n1 | 1", 3, Slip::Misplaced("1".to_owned()));
        check_slip("0 |\nb | 1\ntheta^2 | 1", 3, Slip::Power("theta^2".to_owned()));
        check_slip("0 |\n---|---", 2, Slip::Missing("the weights `b` are"));
        check_slip("", 0, Slip::Missing("the stages are"));
        let wide: Vec<String> = (0..25).map(|i| format!("0 | {}", "0 ".repeat(i))).collect();
        check_slip(&wide.join("\n"), 25, Slip::TooLarge);
    }

    #[test]
    fn powers_of_theta_are_turned_to_rows_of_stages() {
        let one = read("0 |\n1 | 1\nb | 1/2 1/2\ntheta | 1 0\ntheta^2 | -1/2 1/2").unwrap();
        let expect = vec![vec![ratio(1, 1), ratio(-1, 2)], vec![ratio(0, 1), ratio(1, 2)]];
        assert_eq!(one.b_theta, Some(expect.clone()));
        assert_eq!(read_interpolant("theta^1 | 1 0\ntheta^2 | -1/2 1/2", 2), Ok(expect));
        let slip = Err(Misdrawn { line: 1, slip: Slip::Misplaced("b".to_owned()) });
        assert_eq!(read_interpolant("b | 1 0", 2), slip);
    }
}
