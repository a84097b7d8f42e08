//! Faults as text for a terminal, by the crate `annotate-snippets`.

use annotate_snippets::{AnnotationKind, Group, Level, Renderer, Snippet};

use super::{Fault, Faults, Severity, Sources, Span};

/// Of a quoted line, this many bytes are kept behind its marks: more than a terminal is wide.
const MARGIN: usize = 400;
/// Of a long marked text, this many bytes are underlined.
const LONGEST_MARK: usize = 200;
/// Two marked lines of a file that are at most this far apart are shown in one piece.
const SAME_PIECE: usize = 100;
/// Names longer than this have no near ones: a typing slip is not at work.
const LONGEST_NAME: usize = 64;

/// All faults as text, sorted by place, the line quoted and the fault underlined; at most `most`, then a
/// count of the rest, errors before warnings where not all can be shown. `colour` asks for ANSI colours.
///
/// The column counts characters. A long line is cut around the marked text; a text of several lines is
/// marked on its first one.
pub fn show(faults: &Faults, sources: &Sources, most: usize, colour: bool) -> String {
    let renderer = if colour { Renderer::styled() } else { Renderer::plain() };
    let mut out = String::new();
    let mut list = faults.sorted();
    if list.len() > most {
        // A flood of warnings must not hide an error.
        list.sort_by_key(|fault| fault.severity);
        list.truncate(most);
        list.sort_by_key(|fault| (fault.at, fault.code));
    }
    for fault in list {
        out.push_str(&show_one(fault, sources, &renderer));
        out.push_str("\n\n");
    }
    let more = faults.count().saturating_sub(most);
    if more > 0 {
        let word = if more == 1 { "fault" } else { "faults" };
        out.extend(["and ", more.to_string().as_str(), " more ", word, "\n"]);
    }
    out
}

fn show_one(fault: &Fault, sources: &Sources, renderer: &Renderer) -> String {
    let level = match fault.severity {
        Severity::Error => Level::ERROR,
        Severity::Warning => Level::WARNING,
        Severity::Note => Level::NOTE,
    };
    let mut group: Group<'_> = Group::with_title(level.primary_title(fault.message.as_str()).id(fault.code));
    let mut marks = vec![(fault.at, fault.label.as_str(), true)];
    marks.extend(fault.also.iter().map(|(at, label)| (*at, label.as_str(), false)));
    for piece in pieces(&marks, sources) {
        let mut snippet = Snippet::source(piece.text).line_start(piece.first_line).path(piece.path);
        for (range, label, primary) in piece.marks {
            let kind = if primary { AnnotationKind::Primary } else { AnnotationKind::Context };
            let annotation = kind.span(range);
            snippet = snippet.annotation(if label.is_empty() {
                annotation
            } else {
                annotation.label(label.to_string())
            });
        }
        group = group.element(snippet);
    }
    if let Some(help) = &fault.help {
        group = group.element(Level::HELP.message(help.as_str()));
    }
    renderer.render(&[group])
}

/// Lines of one file with marked texts in them.
struct Piece<'a> {
    path: &'a str,
    first_line: usize,
    text: String,
    marks: Vec<(std::ops::Range<usize>, &'a str, bool)>,
}

/// A marked text on its line.
struct Marked<'a> {
    at: Span,
    line: usize,
    label: &'a str,
    primary: bool,
}

fn pieces<'a>(marks: &[(Span, &'a str, bool)], sources: &'a Sources) -> Vec<Piece<'a>> {
    let mut marked: Vec<Marked<'a>> = marks
        .iter()
        .map(|&(at, label, primary)| Marked {
            at,
            line: sources.line_column(at.file, at.start).0,
            label,
            primary,
        })
        .collect();
    marked.sort_by_key(|mark| (mark.at.file, mark.line, mark.at.start));

    let mut groups: Vec<Vec<Marked<'a>>> = Vec::new();
    for mark in marked {
        match groups.last_mut().and_then(|group| group.last().map(|last| (last.at.file, last.line))) {
            Some((file, line)) if file == mark.at.file && mark.line - line <= SAME_PIECE => {
                if let Some(group) = groups.last_mut() {
                    group.push(mark);
                }
            }
            _ => groups.push(vec![mark]),
        }
    }
    // The piece with the fault itself stands right below its place.
    groups.sort_by_key(|group| !group.iter().any(|mark| mark.primary));
    groups.iter().map(|group| piece(group, sources)).collect()
}

fn piece<'a>(group: &[Marked<'a>], sources: &'a Sources) -> Piece<'a> {
    let file = sources.file(group[0].at.file);
    let (first, last) = (group[0].line, group[group.len() - 1].line);
    let start = line_start(&file.text, group[0].at.start);
    let mut text = String::new();
    let mut ranges = Vec::new();
    let mut from = start;
    for line in first..=last {
        let rest = &file.text[from..];
        let length = rest.find('\n').unwrap_or(rest.len());
        let whole = rest[..length].strip_suffix('\r').unwrap_or(&rest[..length]);
        let here: Vec<&Marked<'a>> = group.iter().filter(|mark| mark.line == line).collect();
        let cut = right_end(whole, from, &here);
        for mark in here {
            let begin = floor(whole, mark.at.start.saturating_sub(from));
            let end = ceil(whole, mark.at.end.saturating_sub(from).min(begin + LONGEST_MARK)).max(begin);
            ranges.push((begin + text.len()..end + text.len(), mark.label, mark.primary));
        }
        text.push_str(&whole[..cut]);
        text.push('\n');
        from += length + 1;
    }
    Piece { path: file.name.as_str(), first_line: first, text, marks: ranges }
}

/// Where to cut a line on its right; its left is needed to count columns, and cut by the renderer.
fn right_end(line: &str, line_at: usize, marks: &[&Marked<'_>]) -> usize {
    let start = marks.iter().map(|mark| mark.at.start.saturating_sub(line_at)).max().unwrap_or(0);
    ceil(line, start + LONGEST_MARK + MARGIN)
}

fn line_start(text: &str, byte: usize) -> usize {
    let byte = floor(text, byte);
    text[..byte].rfind('\n').map_or(0, |i| i + 1)
}

fn floor(text: &str, byte: usize) -> usize {
    let mut byte = byte.min(text.len());
    while !text.is_char_boundary(byte) {
        byte -= 1;
    }
    byte
}

fn ceil(text: &str, byte: usize) -> usize {
    let mut byte = byte.min(text.len());
    while !text.is_char_boundary(byte) {
        byte += 1;
    }
    byte
}

/// Up to three of `known` that are near to `missed`, the nearest first; empty where none is near.
///
/// Near means: the same but for case, or at most a third of the letters (one at least) wrong, missing, too
/// many or swapped with their neighbour (Damerau-Levenshtein distance), or alike by their beginnings
/// (Jaro-Winkler similarity of at least 0.9, for names of four letters and more).
pub fn nearest<'a>(missed: &str, known: impl IntoIterator<Item = &'a str>) -> Vec<&'a str> {
    if missed.is_empty() || missed.len() > LONGEST_NAME {
        return Vec::new();
    }
    let wanted = missed.to_lowercase();
    let length = wanted.chars().count();
    let mut near: Vec<(usize, &'a str)> = known
        .into_iter()
        .filter(|name| name.len() <= LONGEST_NAME)
        .filter_map(|name| {
            let candidate = name.to_lowercase();
            let distance = strsim::damerau_levenshtein(&wanted, &candidate);
            // One letter for another says nothing: `x` is not a slip for `y`.
            let by_letters = distance == 0 || (length > 1 && distance <= (length / 3).max(1));
            let by_beginning = length >= 4 && strsim::jaro_winkler(&wanted, &candidate) >= 0.9;
            (by_letters || by_beginning).then_some((distance, name))
        })
        .collect();
    near.sort_unstable();
    near.dedup();
    near.into_iter().map(|(_, name)| name).take(3).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn shown(text: &str, mark: &str, most: usize) -> String {
        let mut sources = Sources::default();
        let file = sources.add("studies/level.md", text);
        let start = text.find(mark).unwrap();
        let mut faults = Faults::new();
        faults.add(
            Fault::error("unknown-name", Span::new(file, start, start + mark.len()), "no such name")
                .label("here")
                .help("write another"),
        );
        show(&faults, &sources, most, false)
    }

    #[test]
    fn a_fault_is_quoted_underlined_and_helped() {
        let out = shown("a: 1\nb: zz*2\n", "zz", 9);
        let expected = "error[unknown-name]: no such name
 --> studies/level.md:2:4
  |
2 | b: zz*2
  |    ^^ here
  |
  = help: write another

";
        assert_eq!(out, expected, "{out}");
    }

    #[test]
    fn a_second_place_is_marked_too() {
        let mut sources = Sources::default();
        let file = sources.add("s.md", "first: 1\n\nfirst: 2\n");
        let mut faults = Faults::new();
        faults.add(
            Fault::error("duplicate-key", Span::new(file, 10, 15), "the key stands twice")
                .label("second")
                .also(Span::new(file, 0, 5), "first here"),
        );
        let out = show(&faults, &sources, 9, false);
        assert!(out.contains("s.md:3:1"), "{out}");
        assert!(out.contains("----- first here"), "{out}");
        assert!(out.contains("^^^^^ second"), "{out}");
    }

    #[test]
    fn the_underline_stands_below_its_text_after_tabs_and_wide_characters() {
        for text in ["\tzz\n", "é zz\n", "温度 zz\r\n", "😀 zz\r\nx", "\r\nab\tzz\r\n"] {
            let out = shown(text, "zz", 9);
            let lines: Vec<&str> = out.lines().collect();
            let quoted = lines.iter().position(|line| line.contains("zz")).unwrap();
            let width = |text: &str| -> usize {
                text.chars()
                    .map(|c| if ('\u{1100}'..='\u{ffff}').contains(&c) || c >= '\u{1f000}' { 2 } else { 1 })
                    .sum()
            };
            let text_at = width(&lines[quoted][..lines[quoted].find("zz").unwrap()]);
            let mark_at = width(&lines[quoted + 1][..lines[quoted + 1].find("^^").unwrap()]);
            assert_eq!(text_at, mark_at, "{text:?}\n{out}");
            assert!(!out.contains('\r'), "{out:?}");
        }
    }

    #[test]
    fn a_long_line_is_cut_around_the_fault() {
        let text = format!("{}zz{}", "é".repeat(500_000), "ü".repeat(500_000));
        let out = shown(&text, "zz", 9);
        assert!(out.len() < 3_000, "{}", out.len());
        assert!(out.contains("studies/level.md:1:500001"), "{out}");
        assert!(out.contains("zz") && out.contains("^^ here"), "{out}");
    }

    #[test]
    fn faults_beyond_the_most_are_counted() {
        let mut sources = Sources::default();
        let file = sources.add("s.md", "abcdef");
        let mut faults = Faults::new();
        for i in [4, 2, 0, 1] {
            faults.add(Fault::warning("odd", Span::new(file, i, i + 1), format!("letter {i}")));
        }
        let out = show(&faults, &sources, 2, false);
        assert!(out.find("letter 0").unwrap() < out.find("letter 1").unwrap());
        assert!(!out.contains("letter 2") && out.ends_with("and 2 more faults\n"), "{out}");
        faults.add(Fault::error("bad", Span::new(file, 5, 6), "letter 5"));
        let out = show(&faults, &sources, 2, false);
        assert!(out.find("letter 0").unwrap() < out.find("letter 5").unwrap());
    }

    #[test]
    fn colours_come_only_when_asked_for() {
        let mut sources = Sources::default();
        let file = sources.add("s.md", "");
        let mut faults = Faults::new();
        faults.add(Fault::note("empty", Span::new(file, 0, 0), "nothing here"));
        assert!(!show(&faults, &sources, 1, false).contains('\u{1b}'));
        assert!(show(&faults, &sources, 1, true).contains('\u{1b}'));
    }

    #[test]
    fn places_at_the_end_and_beyond_are_harmless() {
        let mut sources = Sources::default();
        let file = sources.add("s.md", "é\n");
        let mut faults = Faults::new();
        for at in [(0, 1), (1, 2), (3, 3), (7, 9), (0, 3)] {
            faults.add(Fault::error("odd", Span::new(file, at.0, at.1), "odd"));
        }
        assert_eq!(show(&faults, &sources, 9, false).matches("error[odd]").count(), 5);
    }

    #[test]
    fn near_names_are_found() {
        let check = |missed: &str, expect: &[&str]| {
            let known = ["model", "run", "chart", "table", "criteria", "z_max", "z_min", "Loss"];
            assert_eq!(nearest(missed, known), expect, "{missed}");
        };
        check("modle", &["model"]);
        check("Run", &["run"]);
        check("runs", &["run"]);
        check("criterion", &["criteria"]);
        check("loss", &["Loss"]);
        check("z_mx", &["z_max"]);
        check("z_nax", &["z_max"]);
        check("python", &[]);
        check("q", &[]);
        check("", &[]);
        check(&"z_max".repeat(100_000), &[]);
    }
}
