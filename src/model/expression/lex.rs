//! The tokens of an expression with their places, which `meval` does not tell.

use crate::fault::{Fault, Faults};
use crate::study::Text;

/// What a token is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Kind {
    Number,
    Name,
    Operator,
    Open,
    Close,
    Comma,
}

/// A token, the bytes it takes, and the parentheses around it.
#[derive(Clone, Copy, Debug)]
pub(super) struct Token {
    pub(super) kind: Kind,
    pub(super) start: usize,
    pub(super) end: usize,
    /// Number of parentheses open around it.
    pub(super) level: u32,
    /// The innermost open parenthesis around it.
    pub(super) open: Option<usize>,
    /// For an open parenthesis: its partner.
    pub(super) close: usize,
}

/// Splits an expression. `None` with a fault where something in it is no part of the language.
pub(super) fn lex(text: &Text, faults: &mut Faults) -> Option<Vec<Token>> {
    let source = text.value.as_str();
    let bytes = source.as_bytes();
    let mut tokens: Vec<Token> = Vec::new();
    let mut opens: Vec<usize> = Vec::new();
    let mut i = 0;
    while i < bytes.len() {
        let start = i;
        let kind = match bytes[i] {
            b' ' | b'\t' | b'\r' | b'\n' => {
                i += 1;
                continue;
            }
            b'0'..=b'9' => {
                i = number_end(bytes, i);
                Kind::Number
            }
            b'A'..=b'Z' | b'a'..=b'z' | b'_' => {
                while i < bytes.len() && (bytes[i].is_ascii_alphanumeric() || bytes[i] == b'_') {
                    i += 1;
                }
                Kind::Name
            }
            b'+' | b'-' | b'*' | b'/' | b'%' | b'^' => {
                i += 1;
                Kind::Operator
            }
            b'(' => {
                i += 1;
                Kind::Open
            }
            b')' => {
                i += 1;
                Kind::Close
            }
            b',' => {
                i += 1;
                Kind::Comma
            }
            _ => {
                foreign(text, source, i, faults);
                return None;
            }
        };
        if let (Some(last), Kind::Number | Kind::Name | Kind::Open) = (tokens.last(), kind)
            && (matches!(last.kind, Kind::Number | Kind::Close)
                || (last.kind == Kind::Name && kind != Kind::Open))
        {
            faults.add(
                Fault::error(
                    "missing-operator",
                    text.part(last.start, i),
                    "an operator is missing between two parts",
                )
                .help("write products with `*`: `2*x`, not `2x` or `2 x`"),
            );
            return None;
        }
        let mut token = Token { kind, start, end: i, level: 0, open: opens.last().copied(), close: 0 };
        if kind == Kind::Close {
            let Some(open) = opens.pop() else {
                faults.add(Fault::error(
                    "parenthesis",
                    text.part(start, i),
                    "this closing parenthesis has no opening one",
                ));
                return None;
            };
            tokens[open].close = tokens.len();
            token.open = opens.last().copied();
        }
        token.level = u32::try_from(opens.len()).unwrap_or(u32::MAX);
        if kind == Kind::Open {
            opens.push(tokens.len());
        }
        tokens.push(token);
    }
    if let Some(open) = opens.last() {
        let token = tokens[*open];
        faults.add(Fault::error(
            "parenthesis",
            text.part(token.start, token.end),
            "this parenthesis is not closed",
        ));
        return None;
    }
    Some(tokens)
}

fn number_end(bytes: &[u8], start: usize) -> usize {
    let digits = |mut i: usize| {
        while i < bytes.len() && bytes[i].is_ascii_digit() {
            i += 1;
        }
        i
    };
    let mut i = digits(start);
    if i < bytes.len() && bytes[i] == b'.' {
        i = digits(i + 1);
    }
    if i < bytes.len() && (bytes[i] == b'e' || bytes[i] == b'E') {
        let sign = usize::from(i + 1 < bytes.len() && (bytes[i + 1] == b'+' || bytes[i + 1] == b'-'));
        let end = digits(i + 1 + sign);
        if end > i + 1 + sign {
            i = end;
        }
    }
    i
}

fn foreign(text: &Text, source: &str, at: usize, faults: &mut Faults) {
    let rest = &source[at..];
    let character = rest.chars().next().unwrap_or(' ');
    let place = text.part(at, at + character.len_utf8());
    let help = match character {
        '<' | '>' | '=' | '!' | '&' | '|' | '?' | ':' => {
            "comparisons are no part of an expression: write a jump with `signum`, a limit with `min` or `max`"
        }
        '.' => "write a digit before the decimal point: `0.5`; a dot is no part of a name",
        '[' | ']' | '{' | '}' => "group with round parentheses",
        '\u{d7}' | '\u{b7}' | '\u{22c5}' => "write products with `*`",
        '\u{2212}' | '\u{2013}' => "write the minus sign as `-`",
        '\u{b2}' | '\u{b3}' => "write powers with `^`: `x^2`",
        '\'' => "a prime is no part of a name; the left side of a rate is the name of its state",
        _ => {
            "an expression is made of numbers, names of ASCII letters, digits and `_`, functions, + - * / % ^ ( ) and commas"
        }
    };
    faults.add(
        Fault::error("foreign-character", place, format!("`{character}` is no part of an expression"))
            .help(help),
    );
}
