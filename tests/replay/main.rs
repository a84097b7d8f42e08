//! Hostile and mangled studies: none may panic, hang, or be refused without a fault that says why.
//!
//! `*.md` in this folder are read as they are (each came from a search, or is `sound.md`); then come studies
//! made to hurt, and a few thousand mutations of the sound one by a counter-based generator.

use std::fs;
use std::path::Path;

use halfstep::cli::pipeline;
use halfstep::fault::{Faults, Sources, show};
use halfstep::study::{self, Part, Study, Text};
use pulldown_cmark::Event;

const SOUND: &str = include_str!("sound.md");
const HEAD: &str = "---\nstudy: x\n---\n";

/// Reads a text and checks what must hold of any text; gives the study and the codes of the faults.
fn read(text: &str) -> (Option<Study>, Vec<&'static str>) {
    let mut sources = Sources::default();
    let file = sources.add("study.md", text);
    let mut faults = Faults::new();
    let study = study::read(&sources, file, &mut faults);
    assert!(study.is_some() || faults.any_error(), "refused without an error: {text:.200}");
    let list = faults.sorted();
    for fault in &list {
        for at in std::iter::once(fault.at).chain(fault.also.iter().map(|also| also.0)) {
            assert!(text.get(at.start..at.end).is_some(), "{fault:?} marks no text");
        }
        assert!(fault.message.len() < 1000 && !fault.message.contains('\n'), "{fault:?}");
    }
    let shown = show(&faults, &sources, 20, false);
    assert!(shown.len() < 100_000, "{}", shown.len());
    for exact in study.iter().flat_map(texts).filter(|one| one.exact) {
        assert_eq!(sources.text(exact.at), exact.value);
    }
    check_html(study.as_ref());
    (study, list.iter().map(|fault| fault.code).collect())
}

/// The Markdown of a study, rendered, has each tag closed, and none that could reach out or run.
fn check_html(study: Option<&Study>) {
    let events = study.iter().flat_map(|study| &study.body).filter_map(|part| match part {
        Part::Markdown(event) => Some(event.clone()),
        Part::Quote(_) | Part::Block(_) => None,
    });
    let mut depth = 0_usize;
    let events: Vec<Event<'_>> = events.collect();
    for event in &events {
        match event {
            Event::Start(_) => depth += 1,
            Event::End(_) => {
                assert!(depth > 0, "an end without a start");
                depth -= 1;
            }
            other => assert!(!matches!(other, Event::Html(_) | Event::InlineHtml(_)), "raw HTML is left"),
        }
    }
    assert_eq!(depth, 0);
    let mut html = String::new();
    pulldown_cmark::html::push_html(&mut html, events.into_iter());
    for bad in ["<script", "<img", "href=\"javascript", "href=\"data", "href=\"x:"] {
        assert!(!html.contains(bad), "{bad} in {html:.500}");
    }
}

/// The texts of a study that later stages point into.
fn texts(study: &Study) -> Vec<&Text> {
    let models = study.blocks.models.iter().flat_map(|model| {
        let derived = model.derived.iter().flat_map(|entry| [&entry.name, &entry.expression]);
        model.rates.iter().flat_map(|(name, rate)| [name, rate]).chain(derived)
    });
    let runs = study.blocks.runs.iter().flat_map(|run| run.quantities.iter().map(|entry| &entry.text));
    let criteria =
        study.blocks.criteria.iter().flat_map(|block| block.criteria.iter().map(|entry| &entry.quantity));
    models.chain(runs).chain(criteria).collect()
}

/// Expects a fault of that code, and no study or one with no part that could hurt.
fn check(text: &str, code: &str) {
    let (_, codes) = read(text);
    assert!(codes.contains(&code), "{text:.80}: {codes:?}");
}

#[test]
fn every_kept_input_is_read() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/replay");
    let mut count = 0;
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_some_and(|ext| ext == "md") {
            read(&study::source::decode("study.md", fs::read(&path).unwrap()).unwrap());
            count += 1;
        }
    }
    assert!(count > 1);
    assert!(read(SOUND).1.is_empty());
}

#[test]
fn a_study_of_a_hundred_megabytes_is_refused_at_once() {
    check(&"a".repeat(100_000_000), "study-too-large");
    check(&format!("{HEAD}{}", "word ".repeat(4_000_000)), "study-too-large");
}

#[test]
fn a_large_study_within_the_limit_is_read() {
    let (study, codes) =
        read(&format!("{HEAD}{}", "Some *words* of prose, [a] and `b`.\n\n".repeat(200_000)));
    assert!(study.is_some() && codes.is_empty());
    let (study, _) = read(&format!("{HEAD}{}", "x".repeat(15_000_000)));
    assert!(study.is_some());
}

#[test]
fn nesting_in_prose_is_bounded() {
    for sign in ["[", "(", "\"", "![", "<", "*", "_", "`", "~", "[=", "<a", "&", "|", "\\", "[^", "[a](", "$"]
    {
        read(&format!("{HEAD}{}", sign.repeat(10_000)));
        read(&format!("{HEAD}{}x{}", sign.repeat(10_000), "]".repeat(10_000)));
        read(&format!("{HEAD}{}", format!("{sign} a\n").repeat(10_000)));
    }
    check(&format!("{HEAD}{}x", "> ".repeat(100_000)), "nested-too-deep");
    check(&format!("{HEAD}{}x", "- ".repeat(1_000_000)), "nested-too-deep");
    check(&format!("{HEAD}{}x", "1. ".repeat(1_000_000)), "nested-too-deep");
    let stairs =
        (0..2_000).map(|depth| format!("{}- a\n", "  ".repeat(depth))).collect::<Vec<String>>().concat();
    read(&format!("{HEAD}{stairs}"));
}

#[test]
fn floods_of_faults_are_counted() {
    read(&format!("{HEAD}{}", "[=a.b] ".repeat(200_000)));
    read(&format!("{HEAD}{}", "<b> ".repeat(200_000)));
    read(&format!("{HEAD}{}", "[a](x:y) ".repeat(100_000)));
    read(&format!("{HEAD}{}", "~~~run x\n~~~\n".repeat(100_000)));
    read(&format!("{HEAD}{}", "~~~rum x\n~~~\n".repeat(100_000)));
    let runs: String = (0..20_000)
        .map(|i| format!("~~~run r{i}\nmodel: m{i}\n~~~\n[=q{i}.x]\n\n"))
        .collect::<Vec<String>>()
        .concat();
    read(&format!("{HEAD}{runs}"));
    let keys = (0..20_000).map(|i| format!("k{i}: 1\n")).collect::<Vec<String>>().concat();
    check(&format!("{HEAD}~~~run r\n{keys}~~~\n"), "unknown-key");
    let names = (0..10_000).map(|i| format!("  q{i}: final h\n")).collect::<Vec<String>>().concat();
    let aims = (0..5_000).map(|i| format!("  p{i}: 1\n")).collect::<Vec<String>>().concat();
    let run = format!("~~~run r\nmodel: m\nscheme: s\nuntil: 1\nquantities:\n{names}aim:\n{aims}~~~\n");
    check(&format!("{HEAD}{run}{}", "[=r.nothing]\n".repeat(100_000)), "unknown-quantity");
}

#[test]
fn yaml_that_is_made_to_hurt_is_refused() {
    let block = |body: &str| format!("{HEAD}~~~model m\n{body}\n~~~\n");
    let bomb: String = (1..20)
        .map(|i| format!("a{i}: &a{i} [{}]\n", format!("*a{},", i - 1).repeat(9)))
        .collect::<Vec<String>>()
        .concat();
    check(&block(&format!("a0: &a0 x\n{bomb}")), "yaml-anchor");
    check(&block("a: *b"), "yaml-alias");
    check(&block("a: !!python/object x"), "yaml-tag");
    check(&block(&"[".repeat(200_000)), "yaml-depth");
    check(&block(&"a: [".repeat(60_000)), "yaml-depth");
    check(&block(&"- ".repeat(100_000)), "yaml-depth");
    check(&block(&"x".repeat(300_000)), "block-too-large");
    check(&block(&format!("[{}]", "1,".repeat(120_000))), "yaml-size");
    check(&block("a: 1\n---\nb: 1"), "yaml-documents");
    check(&block("<<: {a: 1}"), "yaml-merge");
    check(&block("\u{feff}a: 1"), "unknown-key");
    check(&block("a: \"\\"), "yaml-syntax");
    check(&format!("{HEAD}~~~model m\na: \0\n~~~\n"), "control-character");
    for front in ["&a x", "*a", "!t x", "[[[[", "{a: b", "\"", "'", "? x", "- x", "%YAML"] {
        let (study, codes) = read(&format!("---\nstudy: {front}\n---\ntext\n"));
        assert!(study.is_some() != codes.iter().any(|code| code.starts_with("yaml")), "{front} {codes:?}");
    }
}

#[test]
fn a_byte_order_mark_moves_no_place() {
    let (study, codes) = read(&format!("\u{feff}{SOUND}"));
    assert!(codes.is_empty());
    assert_eq!(study.unwrap().front.title.at.start, SOUND.find("Level").unwrap() + 3);
}

#[test]
fn bytes_that_are_no_text_are_refused_with_their_place() {
    let mut bytes = SOUND.as_bytes().to_vec();
    bytes[SOUND.find("HS-014").unwrap()] = 0xff;
    let error = study::source::decode("study.md", bytes).unwrap_err();
    assert_eq!((error.line, error.column), (3, 9));
}

/// The `n`th number of a fixed sequence (S. Vigna, splitmix64, public domain).
fn random(n: u64) -> u64 {
    let mut z = n.wrapping_mul(0x9e37_79b9_7f4a_7c15);
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    z ^ (z >> 31)
}

/// A text with one to four changes, the same for the same seed.
fn mutate(text: &str, seed: u64) -> String {
    const SPICE: [&str; 36] = [
        "[",
        "]",
        "{",
        "}",
        "[=",
        "```",
        "~~~",
        "---\n",
        ": ",
        "- ",
        "# ",
        "\"",
        "'",
        "&a ",
        "*a",
        "!t ",
        "|\n",
        ">\n",
        "\t",
        "\r\n",
        "\n",
        "\u{feff}",
        "é",
        "温度",
        "<b>",
        "1e999",
        ",",
        "%",
        " at ",
        " falls through ",
        "](x:y)",
        "|",
        "\\",
        "    ",
        "> ",
        "model ",
    ];
    let mut out = text.to_string();
    let mut counter = seed * 64;
    let mut next = |below: usize| {
        counter += 1;
        usize::try_from(random(counter) % below.max(1) as u64).unwrap_or_default()
    };
    for _ in 0..=next(4) {
        let mut cut = |out: &str| {
            let mut at = next(out.len() + 1);
            while !out.is_char_boundary(at) {
                at -= 1;
            }
            at
        };
        let (a, b) = (cut(&out), cut(&out));
        let (from, to) = (a.min(b), a.max(b));
        let near = (from + 20).min(to);
        let near = (near..=to).find(|i| out.is_char_boundary(*i)).unwrap_or(to);
        match next(6) {
            0 => out.insert_str(from, SPICE[next(SPICE.len())]),
            1 => out.replace_range(from..near, ""),
            2 => out.replace_range(from..near, SPICE[next(SPICE.len())]),
            3 => {
                let copy = out[from..near].to_string();
                out.insert_str(to, &copy);
            }
            4 => out.truncate(to),
            _ => {
                let copy = out[from..to].to_string();
                out.push_str(&copy);
            }
        }
    }
    out
}

#[test]
fn mutations_of_a_sound_study_are_read() {
    let mut refused = 0;
    for seed in 0..3000 {
        let (_, codes) = read(&mutate(SOUND, seed));
        refused += usize::from(!codes.is_empty());
    }
    // Were all of them sound or all refused at the first line, the mutations would test nothing.
    assert!(refused > 1000 && refused < 3000, "{refused}");
}

/// All stages: what passes the checks is executed, with few steps; no number comes without its bound or a reason.
#[test]
fn mutations_of_a_sound_study_are_checked_and_executed() {
    let mut executed = 0;
    for seed in 0..1500 {
        let text = mutate(SOUND, seed);
        let mut sources = Sources::default();
        let file = sources.add("study.md", text.as_str());
        let mut faults = Faults::new();
        let checked = pipeline::check(&sources, file, Some(2000), &mut faults);
        assert_eq!(checked.is_none(), faults.any_error(), "{}", show(&faults, &sources, 20, false));
        let Some(checked) = checked else { continue };
        let outcome = pipeline::execute(&checked, &mut faults, &|_| ());
        assert_eq!(outcome.is_none(), faults.any_error(), "{}", show(&faults, &sources, 20, false));
        for quantity in outcome.iter().flat_map(|outcome| &outcome.runs).flat_map(|run| &run.quantities) {
            assert!(quantity.value.is_none_or(f64::is_finite), "{quantity:?}");
            assert!(quantity.bound.is_none_or(|bound| bound >= 0.0 && bound.is_finite()), "{quantity:?}");
            assert!(!quantity.why.is_empty(), "{quantity:?}");
            executed += 1;
        }
    }
    assert!(executed > 100, "{executed}");
}

#[test]
fn soups_of_signs_are_read() {
    const SIGNS: [&str; 48] = [
        "\n", "\n", "\n", "\n\n", " ", "  ", "    ", "\t", "> ", "- ", "1. ", "# ", "| ", "|-|", "```",
        "~~~", "run a", "model m", "criteria", "table t", "chart c", "[=", "]", "[", "](x:y)", "![", "<b>",
        "<script>", "<!--", "-->", "`", "*", "_", "\\", "a.b", "plain", ": ", "{", "}", ", ", "\"", "'",
        "&amp;", "é", "\r\n", "[^a]", "[a]: x:y", "rows: ",
    ];
    for seed in 0..3000 {
        let length = random(seed) % 60;
        let soup: Vec<&str> =
            (0..length).map(|i| SIGNS[usize::try_from(random(seed * 64 + i) % 48).unwrap()]).collect();
        read(&format!("{HEAD}{}", soup.concat()));
    }
}
