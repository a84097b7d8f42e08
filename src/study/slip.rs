//! What to do about a YAML text that is refused: the slips that come of writing formulas in YAML.

use super::node::Excerpt;
use super::yaml::Refused;
use crate::fault::Fault;

/// The fault for a refused text, at the place where the slip is rather than where the parser noticed it.
pub(super) fn fault(text: &str, refused: &Refused, excerpt: &Excerpt<'_>) -> Fault {
    let (mut start, mut end) = (refused.start, refused.end);
    if refused.syntax {
        if let Some(inside) = refused.inside.filter(|inside| belongs_to(text, *inside, refused)) {
            (start, end) = (inside, inside + text[inside..].chars().next().map_or(0, char::len_utf8));
        }
        if let Some(tab) = tab_in_indent(text, refused.start) {
            (start, end) = (tab, tab + 1);
        }
    }
    // An empty place at the end of the text says little: mark the last line that holds something.
    if start >= text.trim_end().len() && refused.syntax {
        let trimmed = text.trim_end();
        start = trimmed.rfind('\n').map_or(0, |i| i + 1);
        end = trimmed.len();
    }
    let fault = Fault::error(refused.code, excerpt.span(start, end), refused.message.clone());
    match help(text, start, refused) {
        Some(help) => fault.help(help),
        None => fault,
    }
}

/// Whether the start of what the parser was reading is the better place: the sign that opened something
/// which did not end, or the sign at the start of a formula.
fn belongs_to(text: &str, inside: usize, refused: &Refused) -> bool {
    let sign = text[inside..].chars().next();
    match sign {
        Some('*' | '&' | '!') => true,
        Some('[' | '{' | '"' | '\'') => {
            refused.start >= text.trim_end().len() || text[inside..refused.start.max(inside)].contains('\n')
        }
        _ => false,
    }
}

fn tab_in_indent(text: &str, byte: usize) -> Option<usize> {
    let line_start = text[..byte].rfind('\n').map_or(0, |i| i + 1);
    let line = &text[line_start..];
    let indent = line.len() - line.trim_start_matches([' ', '\t']).len();
    line[..indent].find('\t').map(|i| line_start + i)
}

fn help(text: &str, start: usize, refused: &Refused) -> Option<String> {
    let quotes =
        |sign: char| Some(format!("a text that starts with `{sign}` stands in quotes: \"{sign}...\""));
    let sign = text[start..].chars().next();
    let fixed = match refused.code {
        "yaml-alias" => return quotes('*'),
        "yaml-anchor" => return quotes('&'),
        "yaml-tag" => return quotes('!'),
        "yaml-documents" => "remove the line `---`: a block is one document",
        "yaml-depth" => "no block of a study needs such nesting",
        "yaml-size" | "block-too-large" => "keep the data in a file of their own",
        _ => match sign {
            Some('\t') => "indent with blanks: YAML takes no tabs",
            Some(sign @ ('*' | '&' | '!' | '@' | '%' | '`' | '|' | '>')) => return quotes(sign),
            Some('[' | '{') => {
                "close the bracket; a text that starts with a bracket, or inside brackets contains one or a comma, \
                 stands in quotes"
            }
            Some('"' | '\'') => "close the quotation marks",
            _ if refused.message.contains("mapping values are not allowed") => {
                "a colon with a blank behind it starts an entry: put the text in quotes, and indent entries of one \
                 mapping alike"
            }
            _ if in_brackets(text, start) => {
                "inside brackets, a text that contains a bracket, a comma or a colon with a blank stands in quotes"
            }
            _ if after_quotes(text, start) => {
                "nothing may follow a text in quotes: put the whole text in quotes"
            }
            _ => "write `KEY: VALUE`, indent the entries of one mapping alike, and put odd texts in quotes",
        },
    };
    Some(fixed.to_string())
}

fn in_brackets(text: &str, byte: usize) -> bool {
    let line = &text[text[..byte].rfind('\n').map_or(0, |i| i + 1)..byte];
    line.contains(['[', '{'])
}

fn after_quotes(text: &str, byte: usize) -> bool {
    text[..byte].trim_end().ends_with(['"', '\''])
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fault::FileId;
    use crate::study::yaml::events;

    /// Expects the fault of `text` at `line:column` with `help` in its help.
    fn check(text: &str, place: (usize, usize), help: &str) {
        let mut excerpt = Excerpt::new(text, FileId(0), 0);
        excerpt.push(text, 0);
        let fault = fault(text, &events(text).unwrap_err(), &excerpt);
        let before = &text[..fault.at.start];
        let line_start = before.rfind('\n').map_or(0, |i| i + 1);
        let got = (before.matches('\n').count() + 1, before[line_start..].chars().count() + 1);
        assert_eq!(got, place, "{text} {fault:?}");
        assert!(fault.help.as_deref().unwrap_or_default().contains(help), "{text} {fault:?}");
    }

    #[test]
    fn a_formula_that_yaml_takes_for_a_sign_of_its_own_is_told_to_stand_in_quotes() {
        check("a: 1\nz: *k\n", (2, 4), "\"*...\"");
        check("a: 1\nz: *k*x + 1\n", (2, 4), "\"*...\"");
        check("z: &x y\n", (1, 4), "\"&...\"");
        check("z: !x y\n", (1, 4), "\"!...\"");
        check("z: %x\n", (1, 4), "\"%...\"");
        check("z: @x\n", (1, 4), "\"@...\"");
        check("z: [a] + 1\n", (1, 8), "inside brackets");
        check("z: {a: 1} + 1\n", (1, 11), "inside brackets");
        check("z: \"a\" + 1\n", (1, 8), "whole text in quotes");
    }

    #[test]
    fn slips_of_layout_are_named_where_they_are() {
        check("a: b: c\n", (1, 5), "colon");
        check("about: from here: there\n", (1, 17), "colon");
        check("a:\n\tb: 1\n", (2, 1), "no tabs");
        check("x: 1\na:\n  b: 1\n\tc: 2\n", (4, 1), "no tabs");
        check("lines: [a, b\nnext: 1\n", (1, 8), "close the bracket");
        check("lines: [a, b\n", (1, 8), "close the bracket");
        check("title: \"open\nnext: 1\n", (1, 8), "quotation marks");
        check("a: 1\nnot an entry\n", (2, 1), "KEY: VALUE");
        check("a: 1\n  b: 2\n", (2, 4), "indent");
        check("a: 1\n---\nb: 2\n", (2, 1), "one document");
    }
}
