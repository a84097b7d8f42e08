//! Names: of blocks, quantities and criteria, of the symbols of a model, and `RUN.QUANTITY`.

use super::Text;
use crate::fault::{Fault, Faults, clip, nearest};

/// The functions of expressions: no symbol may have their names.
pub(super) const FUNCTIONS: [&str; 25] = [
    "sqrt", "exp", "ln", "log10", "abs", "cbrt", "sin", "cos", "tan", "asin", "acos", "atan", "sinh", "cosh",
    "tanh", "asinh", "acosh", "atanh", "floor", "ceil", "round", "signum", "atan2", "max", "min",
];

/// Whether a text is `[A-Za-z][A-Za-z0-9_-]*`.
pub(super) fn is_name(text: &str) -> bool {
    text.starts_with(|c: char| c.is_ascii_alphabetic())
        && text.chars().all(|c| c.is_ascii_alphanumeric() || c == '_' || c == '-')
}

/// Whether a text is the name of a block, a quantity or a criterion; a fault where it is not.
pub(super) fn check_name(text: &Text, what: &str, faults: &mut Faults) -> bool {
    let fine = is_name(&text.value);
    if !fine {
        let message = format!("`{}` cannot be the name of {what}", clip(&text.value));
        faults.add(
            Fault::error("bad-name", text.at, message)
                .help("a name starts with a letter A to Z and goes on with letters, digits, `_` and `-`"),
        );
    }
    fine
}

/// Whether a text can be a symbol of a model; a fault where it cannot, a note where it hides a constant.
pub(super) fn check_symbol(text: &Text, what: &str, faults: &mut Faults) -> bool {
    let name = text.value.as_str();
    let fine = name.starts_with(|c: char| c.is_ascii_alphabetic() || c == '_')
        && name.chars().all(|c| c.is_ascii_alphanumeric() || c == '_');
    let refusal = if !fine {
        Some("a symbol starts with a letter A to Z or `_` and goes on with letters, digits and `_`")
    } else if name == "t" {
        Some("`t` is time")
    } else if FUNCTIONS.contains(&name) {
        Some("a function has this name")
    } else {
        None
    };
    if let Some(help) = refusal {
        let message = format!("`{}` cannot be the name of {what}", clip(name));
        faults.add(Fault::error("bad-name", text.at, message).help(help));
        return false;
    }
    if name == "e" || name == "pi" {
        let message = format!("{what} `{name}` hides the constant of that name");
        faults.add(
            Fault::note("hidden-constant", text.at, message)
                .help("choose another name if the constant is meant"),
        );
    }
    true
}

/// Takes `RUN.QUANTITY` apart; a fault where it is not of that form.
pub(super) fn check_quantity(text: &Text, faults: &mut Faults) -> bool {
    let fine = text.value.split_once('.').is_some_and(|(run, name)| is_name(run) && is_name(name));
    if !fine {
        let message = format!("`{}` does not name a quantity of a run", clip(&text.value));
        faults.add(
            Fault::error("bad-reference", text.at, message).help("write `RUN.QUANTITY`: `reject.z_max`"),
        );
    }
    fine
}

/// The run and the quantity of a checked `RUN.QUANTITY`, with their places.
pub(super) fn run_and_rest(text: &Text) -> Option<(Text, Text)> {
    let dot = text.value.find('.')?;
    Some((text.cut(0, dot), text.cut(dot + 1, text.value.len())))
}

/// After so many faults no near names are looked for: nobody reads them, and the search takes time.
const ENOUGH_FAULTS: usize = 200;

/// The names of `known` that are nearest to `missed`, as help; `None` where none is near.
pub(super) fn near_help<'a>(
    missed: &str,
    known: impl IntoIterator<Item = &'a str>,
    faults: &Faults,
) -> Option<String> {
    if faults.count() > ENOUGH_FAULTS {
        return None;
    }
    match nearest(missed, known)[..] {
        [] => None,
        [one] => Some(format!("the nearest name is `{one}`")),
        [one, ref rest @ ..] => {
            let rest: Vec<String> = rest.iter().map(|name| format!("`{name}`")).collect();
            Some(format!("the nearest names are `{one}` and {}", rest.join(", ")))
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fault::Span;

    fn text(value: &str) -> Text {
        Text { value: value.to_string(), at: Span::default(), exact: false }
    }

    #[test]
    fn symbols_are_words_that_are_neither_time_nor_function() {
        let check = |name: &str, expect: bool, faults: usize| {
            let mut list = Faults::new();
            assert_eq!(check_symbol(&text(name), "a state", &mut list), expect, "{name}");
            assert_eq!(list.count(), faults, "{name}");
        };
        for name in ["x", "_x", "T_2", "x1"] {
            check(name, true, 0);
        }
        for name in ["t", "sqrt", "log10", "2x", "a-b", "a b", "", "ä", "x'"] {
            check(name, false, 1);
        }
        check("e", true, 1);
        check("pi", true, 1);
    }

    #[test]
    fn a_quantity_is_two_names_with_a_dot() {
        let check = |name: &str, expect: bool| {
            assert_eq!(check_quantity(&text(name), &mut Faults::new()), expect, "{name}");
        };
        for name in ["reject.z_max", "a-b.c-d"] {
            check(name, true);
        }
        for name in ["reject", "reject.", ".z", "a.b.c", "a.b c", "a . b", "1.2"] {
            check(name, false);
        }
    }
}
