//! The grammar of quantities: what is read from a run.
//!
//! ```text
//! final E | highest E | lowest E | mean E | integral of E | E at TIME
//! time of highest E | time of lowest E
//! [first | last | 2nd | 3rd | Nth] time when E (falls through | rises through | crosses) LEVEL
//! count of E (falls through | rises through | crosses) LEVEL
//! ```
//!
//! E is an expression of states, derived quantities, parameters and `t`; LEVEL a value or an expression of
//! parameters; TIME a value. Words are parted by blanks.

use super::run::{Direction, Level, Occurrence, Passage, Reading};
use crate::fault::{Fault, Faults, clip, nearest};
use crate::study::Text;
use crate::unit::{is_value, read_value};

/// What to write, for the help of a fault.
const FORMS: &str = "write `final E`, `highest E`, `lowest E`, `mean E`, `integral of E`, `E at TIME`, `time of highest E`, \
     `time of lowest E`, `time when E falls through LEVEL` or `count of E crosses LEVEL`";

/// Takes the text of a quantity apart.
///
/// # Errors
/// `None` and a fault `bad-quantity` (or that of a value) where the text does not follow the grammar.
pub fn read_quantity(text: &Text, faults: &mut Faults) -> Option<Reading> {
    match read(text, faults) {
        Ok(reading) => Some(reading),
        Err(fault) => {
            faults.add(*fault?);
            None
        }
    }
}

/// A fault of ours, or none where one was added already.
type Refusal = Option<Box<Fault>>;

fn read(text: &Text, faults: &mut Faults) -> Result<Reading, Refusal> {
    let words = Words::of(text);
    match words.heads() {
        ["final", ..] => Ok(Reading::Final(words.expression_from(1)?)),
        ["highest", ..] => Ok(Reading::Highest(words.expression_from(1)?)),
        ["lowest", ..] => Ok(Reading::Lowest(words.expression_from(1)?)),
        ["mean", ..] => Ok(Reading::Mean(words.expression_from(1)?)),
        ["integral", "of", ..] => Ok(Reading::Integral(words.expression_from(2)?)),
        ["time", "of", "highest", ..] => Ok(Reading::TimeOfHighest(words.expression_from(3)?)),
        ["time", "of", "lowest", ..] => Ok(Reading::TimeOfLowest(words.expression_from(3)?)),
        ["time", "when", ..] => Ok(Reading::TimeWhen(Occurrence::Nth(1), words.passage_from(2, faults)?)),
        [which, "time", "when", ..] => {
            let occurrence = occurrence(which).ok_or_else(|| {
                words.refuse(
                    0,
                    1,
                    format!("`{}` does not say which time", clip(which)),
                    "write `first`, `2nd`, `3rd`, `4th` or `last`",
                )
            })?;
            Ok(Reading::TimeWhen(occurrence, words.passage_from(3, faults)?))
        }
        ["count", "of", ..] => Ok(Reading::Count(words.passage_from(2, faults)?)),
        _ => words.at_time(faults),
    }
}

/// `first`, `last`, `2nd`, `3rd`, `11th`.
fn occurrence(word: &str) -> Option<Occurrence> {
    match word {
        "first" => return Some(Occurrence::Nth(1)),
        "last" => return Some(Occurrence::Last),
        _ => {}
    }
    let digits = word.len() - word.trim_start_matches(|c: char| c.is_ascii_digit()).len();
    let (number, ending) = word.split_at(digits);
    let n: u32 = number.parse().ok().filter(|n| *n > 0)?;
    let right = match (n % 10, n % 100) {
        (_, 11..=13) => "th",
        (1, _) => "st",
        (2, _) => "nd",
        (3, _) => "rd",
        _ => "th",
    };
    (ending == right).then_some(Occurrence::Nth(n))
}

/// The words of a text with their places.
struct Words<'a> {
    text: &'a Text,
    list: Vec<&'a str>,
    starts: Vec<usize>,
}

impl<'a> Words<'a> {
    fn of(text: &'a Text) -> Self {
        let mut words = Vec::new();
        let mut starts = Vec::new();
        for word in text.value.split_ascii_whitespace() {
            words.push(word);
            starts.push(word.as_ptr() as usize - text.value.as_ptr() as usize);
        }
        Words { text, list: words, starts }
    }

    fn heads(&self) -> &[&'a str] {
        &self.list
    }

    /// The text of words `from..to`.
    fn cut(&self, from: usize, to: usize) -> Text {
        let start = self.starts.get(from).copied().unwrap_or(self.text.value.len());
        let end = to.checked_sub(1).and_then(|idx| Some(self.starts.get(idx)? + self.list.get(idx)?.len()));
        self.text.cut(start, end.unwrap_or(start).max(start))
    }

    fn refuse(&self, from: usize, to: usize, message: String, help: &str) -> Box<Fault> {
        let place = if from < to && from < self.list.len() { self.cut(from, to).at } else { self.text.at };
        Box::new(Fault::error("bad-quantity", place, message).help(help))
    }

    /// The expression in words `from..`, which must hold no word of the grammar.
    fn expression_from(&self, from: usize) -> Result<Text, Refusal> {
        self.expression(from, self.list.len())
    }

    fn expression(&self, from: usize, to: usize) -> Result<Text, Refusal> {
        if from >= to {
            let head = self.list[..from.min(self.list.len())].join(" ");
            let message =
                format!("`{}` lacks the expression behind `{}`", clip(&self.text.value), clip(&head));
            return Err(self.refuse(0, 0, message, FORMS).into());
        }
        for idx in from..to {
            let word = self.list[idx];
            let two = (word == "falls" || word == "rises") && self.list.get(idx + 1) == Some(&"through");
            if two || matches!(word, "at" | "when" | "crosses" | "of") {
                let phrase = self.list[..from].join(" ");
                let message = if phrase.is_empty() {
                    format!("`{word}` stands inside an expression")
                } else {
                    format!("`{word}` cannot stand behind `{}`", clip(&phrase))
                };
                return Err(self.refuse(idx, idx + 1, message, FORMS).into());
            }
        }
        Ok(self.cut(from, to))
    }

    /// `E falls through LEVEL` in words `from..`.
    fn passage_from(&self, from: usize, faults: &mut Faults) -> Result<Passage, Refusal> {
        let through =
            |idx: usize, word: &str| self.list[idx] == word && self.list.get(idx + 1) == Some(&"through");
        let found = (from..self.list.len()).find_map(|idx| {
            if through(idx, "falls") {
                Some((idx, Direction::Falls, 2))
            } else if through(idx, "rises") {
                Some((idx, Direction::Rises, 2))
            } else if self.list[idx] == "crosses" {
                Some((idx, Direction::Crosses, 1))
            } else {
                None
            }
        });
        let Some((idx, direction, length)) = found else {
            let message = format!("`{}` does not say what is passed", clip(&self.text.value));
            return Err(self
                .refuse(
                    0,
                    0,
                    message,
                    "write `E falls through LEVEL`, `E rises through LEVEL` or `E crosses LEVEL`",
                )
                .into());
        };
        let expression = self.expression(from, idx)?;
        let level = self.cut(idx + length, self.list.len());
        if level.value.is_empty() {
            return Err(self
                .refuse(
                    idx,
                    idx + length,
                    "the level that is passed is missing".to_string(),
                    "write a value such as `2 m`, or an expression of parameters",
                )
                .into());
        }
        let level = if is_value(&level.value) {
            Level::Value(read_value(&level.value, level.at, level.exact, faults).ok_or(None)?)
        } else {
            Level::Expression(self.expression(idx + length, self.list.len())?)
        };
        Ok(Passage { expression, direction, level })
    }

    /// `E at TIME`.
    fn at_time(&self, faults: &mut Faults) -> Result<Reading, Refusal> {
        let Some(idx) = self.list.iter().rposition(|word| *word == "at") else {
            return Err(self.unknown().into());
        };
        let expression = self.expression(0, idx)?;
        let time = self.cut(idx + 1, self.list.len());
        if time.value.is_empty() {
            return Err(self
                .refuse(
                    idx,
                    idx + 1,
                    "the time behind `at` is missing".to_string(),
                    "write a value such as `30 s`",
                )
                .into());
        }
        let time = read_value(&time.value, time.at, time.exact, faults).ok_or(None)?;
        Ok(Reading::At(expression, time))
    }

    fn unknown(&self) -> Box<Fault> {
        let first = self.list.first().copied().unwrap_or_default();
        let meant = match first.to_lowercase().as_str() {
            "maximum" | "max" | "peak" | "largest" | "greatest" => Some("highest"),
            "minimum" | "min" | "smallest" => Some("lowest"),
            "last" | "end" | "ending" => Some("final"),
            "average" | "avg" => Some("mean"),
            _ => nearest(first, ["final", "highest", "lowest", "mean", "integral", "time", "count"])
                .first()
                .copied(),
        };
        let message = format!("`{}` is no quantity", clip(&self.text.value));
        match meant {
            Some(word) => {
                self.refuse(0, 1, message, &format!("write `{word}` in place of `{}`", clip(first)))
            }
            None => self.refuse(0, self.list.len(), message, FORMS),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fault::{FileId, Span};

    fn read(input: &str) -> (Option<Reading>, Faults) {
        let text = Text { value: input.to_string(), at: Span::new(FileId(0), 0, input.len()), exact: true };
        let mut faults = Faults::new();
        (read_quantity(&text, &mut faults), faults)
    }

    /// Expects the parts of a reading, or `code: marked text`.
    fn check(input: &str, expect: &str) {
        let (reading, faults) = read(input);
        let place = |text: &Text| {
            assert_eq!(&input[text.at.start..text.at.end], text.value);
            text.value.clone()
        };
        let passage = |p: &Passage| {
            let level = match &p.level {
                Level::Value(value) => {
                    format!("value {} {}", value.digits, value.unit.as_deref().unwrap_or("-"))
                }
                Level::Expression(text) => place(text),
            };
            format!("{} | {:?} | {level}", place(&p.expression), p.direction)
        };
        let got = match &reading {
            Some(Reading::Final(e)) => format!("final | {}", place(e)),
            Some(Reading::Highest(e)) => format!("highest | {}", place(e)),
            Some(Reading::Lowest(e)) => format!("lowest | {}", place(e)),
            Some(Reading::Mean(e)) => format!("mean | {}", place(e)),
            Some(Reading::Integral(e)) => format!("integral | {}", place(e)),
            Some(Reading::At(e, time)) => format!("at {} | {}", time.digits, place(e)),
            Some(Reading::TimeOfHighest(e)) => format!("time of highest | {}", place(e)),
            Some(Reading::TimeOfLowest(e)) => format!("time of lowest | {}", place(e)),
            Some(Reading::TimeWhen(which, p)) => format!("{which:?} | {}", passage(p)),
            Some(Reading::Count(p)) => format!("count | {}", passage(p)),
            None => {
                let list = faults.sorted();
                assert_eq!(list.len(), 1, "{input} {list:?}");
                assert!(list[0].help.is_some());
                format!("{}: {}", list[0].code, &input[list[0].at.start..list[0].at.end])
            }
        };
        assert_eq!(got, expect, "{input}");
    }

    #[test]
    fn every_form_is_read() {
        check("final z", "final | z");
        check("highest  abs(z - 2*v)", "highest | abs(z - 2*v)");
        check("lowest z", "lowest | z");
        check("mean z^2", "mean | z^2");
        check("integral of v", "integral | v");
        check("z + v at 35 s", "at 35 | z + v");
        check("time of highest z", "time of highest | z");
        check("time of lowest z", "time of lowest | z");
        check("time when z falls through 2 m", "Nth(1) | z | Falls | value 2 m");
        check("first time when z falls through 2 m", "Nth(1) | z | Falls | value 2 m");
        check("last time when z rises through -h0/2", "Last | z | Rises | -h0/2");
        check("2nd time when z - 1 crosses 0", "Nth(2) | z - 1 | Crosses | value 0 -");
        check("111th time when z crosses 0", "Nth(111) | z | Crosses | value 0 -");
        check("count of z falls through 0 m", "count | z | Falls | value 0 m");
        check("highest_z at 3", "at 3 | highest_z");
    }

    #[test]
    fn what_is_no_quantity_is_refused_at_its_place() {
        check("maximum z", "bad-quantity: maximum");
        check("higest z", "bad-quantity: higest");
        check("z", "bad-quantity: z");
        check("final", "bad-quantity: final");
        check("integral z", "bad-quantity: integral");
        check("highest z at 3 s", "bad-quantity: at");
        check("z at", "bad-quantity: at");
        check("z at noon", "not-a-value: noon");
        check("z at 1e999 s", "number-range: 1e999");
        check("time when z", "bad-quantity: time when z");
        check("time when z falls through", "bad-quantity: falls through");
        check("time when falls through 2", "bad-quantity: time when falls through 2");
        check("2th time when z crosses 0", "bad-quantity: 2th");
        check("0th time when z crosses 0", "bad-quantity: 0th");
        check("99999999999th time when z crosses 0", "bad-quantity: 99999999999th");
        check("time when z crosses 1,5 m", "not-a-value: 1,5 m");
        check("time when z crosses a crosses b", "bad-quantity: crosses");
        check("count of z at 3 s", "bad-quantity: count of z at 3 s");
    }
}
