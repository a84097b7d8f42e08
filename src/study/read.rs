//! The way from the text of a study to a [`Study`].

use super::{Study, front, prose, refer, source};
use crate::fault::{Faults, FileId, Sources};

/// Reads the study in a file of `sources`.
///
/// All faults of the study are added at once. A block with an error is left out of the result, so that the
/// later stages report on the sound ones alone and no error is reported twice; what refers to such a block is
/// not reported.
///
/// # Errors
/// `None` where there is no front matter with a title, or the text as a whole is refused (too large, control
/// characters, empty). A `Study` may come with errors too: ask [`Faults::any_error`].
pub fn read(sources: &Sources, file: FileId, faults: &mut Faults) -> Option<Study> {
    let start = source::check_text(sources, file, faults)?;
    let text = &sources.file(file).text;
    let (front, prose_start) = front::read(text, file, start, faults);
    let body = prose::read(text, file, prose_start?, faults);
    if body.whole {
        refer::check(&body, faults);
    }
    Some(Study { front: front?, body: body.parts, blocks: body.blocks })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fault::show;
    use crate::study::block::model::Start;
    use crate::study::block::run::{BoundAsked, Control};
    use crate::study::{BlockRef, Part};
    use pulldown_cmark::Event;

    const HEAD: &str = "---\nstudy: A tank\n---\n";
    const TANK: &str = "```model tank\nstates: {h: 2 m}\nrates: {h: -h}\n```\n\
        ```run drain\nmodel: tank\nscheme: rk4\nstep: 1 s\nuntil: 9 s\nquantities: {h_end: final h}\n```\n";

    fn read_text(text: &str) -> (Option<Study>, Faults, Sources) {
        let mut sources = Sources::default();
        let file = sources.add("study.md", text);
        let mut faults = Faults::new();
        let study = read(&sources, file, &mut faults);
        (study, faults, sources)
    }

    /// Expects `code line:column` of every fault, in order.
    fn check(text: &str, expect: &[&str]) {
        let (_, faults, sources) = read_text(text);
        let got: Vec<String> = faults
            .sorted()
            .iter()
            .map(|fault| {
                let (line, column) = sources.line_column(fault.at.file, fault.at.start);
                assert!(fault.help.is_some(), "{fault:?}");
                format!("{} {line}:{column}", fault.code)
            })
            .collect();
        assert_eq!(got, expect, "{text}\n{}", show(&faults, &sources, 20, false));
    }

    /// The same with front matter (three lines) and a sound model and run (lines 4 to 14) in front.
    fn check_after(text: &str, expect: &[&str]) {
        check(&format!("{HEAD}{TANK}{text}"), expect);
    }

    fn prose(text: &str) -> (Vec<Part>, Faults) {
        let (study, faults, _) = read_text(&format!("{HEAD}{TANK}\n{text}"));
        (study.unwrap().body.into_iter().skip(2).collect(), faults)
    }

    /// What a reader sees of some prose: quotes as `<RUN.QUANTITY>`.
    fn seen(text: &str) -> String {
        prose(text)
            .0
            .iter()
            .map(|part| match part {
                Part::Markdown(Event::Text(text) | Event::Code(text)) => text.to_string(),
                Part::Markdown(Event::SoftBreak) => "/".to_string(),
                Part::Quote(quote) if quote.plain => format!("<{} plain>", quote.quantity.value),
                Part::Quote(quote) => format!("<{}>", quote.quantity.value),
                _ => String::new(),
            })
            .collect()
    }

    #[test]
    fn a_sound_study_is_read_with_every_place() {
        let text = include_str!("../../tests/replay/sound.md");
        let (study, faults, sources) = read_text(text);
        assert!(faults.is_empty(), "{}", show(&faults, &sources, 20, false));
        let study = study.unwrap();
        assert_eq!(study.front.get("number"), Some("HS-014"));
        assert_eq!(study.front.get("date"), Some("2026-11-30"));
        let model = &study.blocks.models[0];
        assert_eq!(model.parameters.len(), 5);
        assert_eq!(model.parameters[4].plusminus.as_ref().unwrap().digits, "0.05");
        assert!(matches!(&model.states[0].start, Start::Value(value) if value.digits == "-1.5"));
        assert!(matches!(&model.states[1].start, Start::Expression(text) if text.value == "sqrt(g*L)/60"));
        for text in model.rates.iter().flat_map(|(name, rate)| [name, rate]) {
            assert!(text.exact);
            assert_eq!(sources.text(text.at), text.value);
        }
        let run = &study.blocks.runs[0];
        assert!(matches!(&run.control, Control::Step(step) if step.digits == "0.5"));
        assert_eq!((run.bound, run.quantities.len()), (BoundAsked::Halving, 5));
        for entry in &run.quantities {
            assert_eq!(sources.text(entry.text.at), entry.text.value);
        }
        assert_eq!(study.blocks.charts.len(), 3);
        assert_eq!(study.blocks.tables.len(), 2);
        assert_eq!(study.blocks.criteria[0].criteria.len(), 2);
        let quotes: Vec<&str> = study
            .body
            .iter()
            .filter_map(|part| match part {
                Part::Quote(quote) => Some(sources.text(quote.at)),
                _ => None,
            })
            .collect();
        assert_eq!(
            quotes,
            ["[=reject.z_max]", "[=reject.t_max plain]", "[=reject.z_end]", "[=reject.z_max\n    plain]"]
        );
        assert!(study.body.contains(&Part::Block(BlockRef::Model(0))));
    }

    #[test]
    fn line_ends_of_two_bytes_change_no_place() {
        let text = include_str!("../../tests/replay/sound.md").replace('\n', "\r\n");
        let (study, faults, sources) = read_text(&text);
        assert!(faults.is_empty(), "{}", show(&faults, &sources, 20, false));
        for (name, rate) in &study.unwrap().blocks.models[0].rates {
            assert_eq!(
                (sources.text(name.at), sources.text(rate.at)),
                (name.value.as_str(), rate.value.as_str())
            );
        }
    }

    #[test]
    fn front_matter_is_needed_and_its_keys_are_known() {
        check("", &["empty-study 1:1"]);
        check("\u{feff} \n", &["empty-study 1:2"]);
        check("# A study\n", &["no-front-matter 1:1"]);
        check("---\nstudy: x\n", &["open-front-matter 1:1"]);
        check("---\n---\n", &["missing-key 1:1"]);
        check("---\nnumber: 4\n---\n", &["missing-key 1:1"]);
        check("---\nstudy:\n---\n", &["missing-value 2:7"]);
        check("---\nstudy: x\nauthor: y\ndate: [1]\n---\n", &["unknown-key 3:1", "wrong-type 4:7"]);
        check("---\r\nstudy: x: y\r\n---\r\n", &["yaml-syntax 2:9"]);
        check("\u{feff}---\nstudy: x\nrevison: B\n---\n", &["unknown-key 3:1"]);
        check("a\0b", &["control-character 1:2"]);
    }

    #[test]
    fn quotes_are_found_wherever_text_stands() {
        assert_eq!(seen("Ends at [=drain.h_end]."), "Ends at <drain.h_end>.");
        assert_eq!(seen("# [= drain.h_end  plain ]"), "<drain.h_end plain>");
        assert_eq!(seen("- a\n  - [=drain.h_end]x[=drain.h_end]"), "a<drain.h_end>x<drain.h_end>");
        assert_eq!(seen("| a |\n|---|\n| [=drain.h_end] |"), "a<drain.h_end>");
        assert_eq!(seen("**[=drain.h_end]** ~~[=drain.h_end]~~"), "<drain.h_end> <drain.h_end>");
        assert_eq!(seen("[see [=drain.h_end]](a.md)"), "see <drain.h_end>");
        assert_eq!(seen("a\n[=drain.h_end\nplain]\nb"), "a/<drain.h_end plain>/b");
        assert_eq!(seen("`[=x.y]` and \\[=x.y] and &#91;=x.y]"), "[=x.y] and [=x.y] and [=x.y]");
        assert_eq!(seen("[[=drain.h_end]]"), "[<drain.h_end>]");
        assert_eq!(seen("a [b] = [c] [=drain.h_end] é"), "a [b] = [c] <drain.h_end> é");
    }

    #[test]
    fn quotes_that_are_wrong_are_marked() {
        check_after("\nAt [=drain.h_edn].\n", &["unknown-quantity 16:12"]);
        check_after("\nAt [=drian.h_end].\n", &["unknown-run 16:6"]);
        check_after("\nAt [=].\n", &["bad-quote 16:4"]);
        check_after("\nAt [=drain.h_end in mm].\n", &["quote-unit 16:4"]);
        check_after("\nAt [=drain.h_end bare].\n", &["bad-quote 16:4"]);
        check_after("\nAt [=drain].\n", &["bad-reference 16:6"]);
        check_after(
            "\nAt [=drain.h_end of\n\n[=drain.h_end [=drain.h_end]\n",
            &["bad-quote 16:4", "bad-quote 18:1"],
        );
        check_after("\n[=drain.h_end](x.md)\n", &["bad-quote 16:1"]);
    }

    #[test]
    fn what_a_report_must_not_hold_is_taken_out() {
        let harmless = |text: &str, sees: &str, code: &str| {
            let (parts, faults) = prose(text);
            assert_eq!(seen(text), sees, "{text}");
            let mut codes: Vec<&str> = faults.sorted().iter().map(|fault| fault.code).collect();
            codes.dedup();
            assert_eq!(codes, if code.is_empty() { vec![] } else { vec![code] }, "{text}");
            let events = parts.into_iter().filter_map(|part| match part {
                Part::Markdown(event) => Some(event),
                _ => None,
            });
            let mut html = String::new();
            pulldown_cmark::html::push_html(&mut html, events);
            for bad in ["<script", "<img", "<b>", "href=\"javascript:", "href=\"data:", "src=", "<!--"] {
                assert!(!html.contains(bad), "{html}");
            }
        };
        harmless("a <script>alert(1)</script>", "a <script>alert(1)</script>", "raw-html");
        harmless("<script>\nalert(1)\n</script>", "<script>\nalert(1)\n</script>", "raw-html");
        harmless("x <b>y", "x <b>y", "raw-html");
        harmless("<!-- a note\n\nto self -->", "", "");
        harmless("x <!-- a --> y", "x  y", "");
        harmless("<!-- a --> <b>", "<!-- a --> <b>", "raw-html");
        harmless("[go](javascript:alert(1))", "go", "link-left-out");
        harmless("[go](java&#115;cript:alert(1))", "go", "link-left-out");
        harmless("[go][x]\n\n[x]: data:text/html,y", "go", "link-left-out");
        harmless("<javascript:alert(1)>", "javascript:alert(1)", "link-left-out");
        harmless("![alt *text*](http://example.org/x.png)", "alt text", "image-left-out");
        harmless("[![a](x.png)](https://example.org)", "a", "image-left-out");
        harmless("[ok](https://example.org) <a@example.org> [#](#x)", "ok a@example.org #", "");
    }

    #[test]
    fn fences_are_read_in_lists_and_quotes_and_with_tildes() {
        let block = "table x\nrows: [drain.h_edn]\n";
        check_after(&format!("\n~~~{block}~~~\n"), &["unknown-quantity 17:14"]);
        check_after("\n- a\n\n  ```table x\n  rows: [drain.h_edn]\n  ```\n", &["unknown-quantity 19:16"]);
        check_after("\n> ````table x\n> rows:\n>   - drain.h_edn\n> ````\n", &["unknown-quantity 18:13"]);
        check_after(
            "\n1. > ```table x\r\n   > rows: [é, drain.h_edn]\r\n   > ```\r\n",
            &["bad-reference 17:13"],
        );
        check_after("\n-\t```table x\n\trows: [drain.h_edn]\n\t```\n", &["unknown-quantity 17:15"]);
        check_after(&format!("\n```{block}"), &["open-fence 16:4"]);
        check_after("\n    ```table x\n    rows: [a.b]\n    ```\n", &["indented-fence 16:8"]);
        check_after("\n```python\nrows: [a.b\n```\n\n```\nplain\n```\n", &[]);
        check_after("\n```tabel x\n```\n", &["unknown-kind 16:4"]);
        check_after("\n```table x\n\n```\n", &["empty-block 16:4"]);
    }

    #[test]
    fn a_broken_block_breaks_nothing_that_refers_to_it() {
        let text = "\n```run more\nmodel: tank\nscheme: rk4\nuntil: 1 s\n```\n\
            \n[=more.z]\n\n```table x\nrows: [more.z]\n```\n";
        check_after(text, &["one-of 16:4"]);
        let text = "\n```model two\nstates: {x: [1]}\nrates: {x: 1}\n```\n\
            \n```run other\nmodel: two\nscheme: rk4\nuntil: 1\nstep: 1\n```\n";
        check_after(text, &["wrong-type 17:13"]);
    }

    #[test]
    fn names_stand_once_for_each_kind() {
        check_after("\n```table drain\nrun: drain\n```\n", &["no-rows 17:6"]);
        let run = "```run drain\nmodel: tank\nscheme: rk4\nstep: 1 s\nuntil: 9 s\n```\n";
        check_after(run, &["duplicate-name 15:8"]);
        let twice = "```criteria\n- a: drain.h_end < 1 m\n- a: drain.h_end > 0 m\n```\n";
        check_after(twice, &["duplicate-name 17:3"]);
    }
}
