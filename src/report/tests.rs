//! Whole pages, read back tag by tag.

use super::markup::read;
use super::sample::{bare, body, full, quantity, run, text};
use super::{RegisterEntry, ReportError, Templates, compose_register};
use crate::arithmetic::{elementary, larger, smaller};
use crate::bound::{Grade, Steps};
use crate::study::block::criteria::Verdict;

const HOSTILE: &str =
    "\"><script>alert(1)</script><img src=x onerror=alert(1)> ' & {{ 7*7 }} </style></title>";

/// Words as a reader sees them: entities resolved, blanks as one.
fn seen(html: &str) -> String {
    let text = read(html).unwrap().text;
    let text = text.replace("&lt;", "<").replace("&gt;", ">").replace("&quot;", "\"").replace("&#x27;", "'");
    let text = text.replace("&nbsp;", " ");
    text.replace("&#39;", "'").replace("&amp;", "&").split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn a_full_page_is_sound() {
    let html = full().page();
    read(&html).unwrap().assert_sound();
    assert!(html.contains("content=\"default-src 'none'; style-src 'unsafe-inline'; img-src data:\""));
}

#[test]
fn the_same_inputs_give_the_same_bytes() {
    assert_eq!(full().page(), full().page());
}

#[test]
fn a_study_of_prose_alone_has_all_annexes_and_says_that_they_are_empty() {
    let html = bare("Title only", "Some words.").page();
    read(&html).unwrap().assert_sound();
    let seen = seen(&html);
    for words in [
        "This study states no acceptance criteria.",
        "This study reads no quantity from a run.",
        "This study has no run",
        "This study has no inputs.",
        "No file was digested.",
        "Some words.",
    ] {
        assert!(seen.contains(words), "{words} in {seen}");
    }
    assert!(!html.contains("class=\"caution\""));
}

#[test]
fn a_caution_stands_before_the_verdict_and_defers_to_codes_and_practice() {
    let html = full().page();
    let caution = html.find("class=\"caution\"").unwrap();
    assert!(caution < html.find("id=\"verdict\"").unwrap());
    assert!(seen(&html).contains("This report defers to local codes and to licensed practice"));
}

#[test]
fn a_quote_leads_to_its_ledger_line_and_back() {
    let html = full().page();
    assert!(html.contains("<span class=\"quoted\" id=\"cite-reject-z_max-1\"><a class=\"quote\" href=\"#q-reject-z_max\">12.408731\u{a0}±\u{a0}0.000029\u{a0}m</a></span>"));
    assert!(html.contains("<article class=\"line\" id=\"q-reject-z_max\">"));
    assert!(
        html.contains(
            "<a href=\"#cite-reject-z_max-1\">text</a>, <a href=\"#cite-reject-z_max-2\">Table 1</a>"
        )
    );
}

#[test]
fn a_plain_quote_leaves_the_bound_to_the_ledger() {
    assert!(full().page().contains("href=\"#q-reject-t_max\">96.1374\u{a0}s</a>"));
}

#[test]
fn every_number_without_a_bound_is_marked_and_says_why() {
    let html = full().page();
    let seen = seen(&html);
    assert!(seen.contains("it rises to 11.02 m no bound only; it passes the sill at no value."), "{seen}");
    assert!(seen.contains("rough.z_max no bound the run asks for no bound"));
    assert!(seen.contains("reject.t_low no value the level does not fall through −20 m before the run ends"));
    // The ledger's evidence stands under a line that is marked.
    let evidence = |at: usize| html[..at].ends_with("<span class=\"digits\">");
    for at in html.match_indices("11.02\u{a0}m").map(|(at, _)| at).filter(|at| !evidence(*at)) {
        assert!(html[at..at + 160].contains("class=\"no-bound\""), "{}", &html[at..at + 160]);
    }
}

#[test]
fn the_verdict_line_counts_and_names_the_weakest_grade() {
    let seen = seen(&full().page());
    assert!(seen.contains("1 met 1 not met (as the study expects) 2 undecided"), "{seen}");
    assert!(seen.contains("Weakest grade unbounded nothing is claimed about the numerical error"));
}

#[test]
fn a_criterion_shows_value_limit_margin_verdict_and_what_was_expected() {
    let seen = seen(&full().page());
    assert!(seen.contains("12.408731 ± 0.000029 m ≤ 12.5 m 0.091269 m met"), "{seen}");
    assert!(seen.contains("not met as expected: shows what too small a shaft would do"));
    assert!(seen.contains("undecided expected met: the level should pass"));
}

#[test]
fn every_grade_has_its_meaning_in_the_ledger() {
    let seen = seen(&full().page());
    for grade in [Grade::Corroborated, Grade::Converged, Grade::Indicated, Grade::Unbounded] {
        let meaning = super::summary::grade(grade).meaning;
        assert!(seen.contains(&format!("{} {meaning}", grade.word())), "{meaning}");
    }
}

#[test]
fn inputs_without_a_source_are_marked_and_counted() {
    let html = full().page();
    assert_eq!(html.matches("no source stated").count(), 2);
    assert!(seen(&html).contains("2 of 7 inputs state no source."));
}

#[test]
fn an_input_and_a_quantity_lead_to_their_lines_of_the_study() {
    let html = full().page();
    let line_of = |needle: &str| full().text.lines().position(|line| line.contains(needle)).unwrap() + 1;
    let (parameter, quantity) = (line_of("As: 78.5"), line_of("z_max: highest z"));
    assert!(html.contains(&format!("<a href=\"#line-{parameter}\">{parameter}</a>")));
    assert!(html.contains(&format!("<a href=\"#line-{quantity}\">Line {quantity} of the study</a>")));
}

#[test]
fn the_study_text_stands_there_verbatim() {
    let sample = full();
    let html = sample.page();
    let pre = &html[html.find("<pre").unwrap()..html.find("</pre>").unwrap()];
    let text = read(&format!("<!DOCTYPE html>{pre}</pre>")).unwrap().text;
    let text = text.replace("&lt;", "<").replace("&gt;", ">").replace("&quot;", "\"").replace("&amp;", "&");
    assert_eq!(text, sample.text);
}

#[test]
fn hostile_words_stay_words_wherever_a_study_can_put_them() {
    let mut sample = full();
    let hostile = || text(HOSTILE);
    sample.study.front.title = hostile();
    for (_, entry) in &mut sample.study.front.entries {
        *entry = hostile();
    }
    let model = &mut sample.models[0];
    model.name = hostile();
    model.about = Some(hostile());
    for parameter in &mut model.parameters {
        parameter.name = hostile();
        parameter.value.unit = Some(HOSTILE.into());
        parameter.value.digits = HOSTILE.into();
        parameter.source = Some(hostile());
        parameter.about = Some(hostile());
    }
    for state in &mut model.states {
        state.entry.name = hostile();
        state.rate_text = hostile();
        state.unit = Some(HOSTILE.into());
    }
    for expression in model.derived.iter_mut().chain(&mut model.invariants) {
        expression.name = hostile();
        expression.text = hostile();
    }
    for run in &mut sample.outcome.runs {
        run.overrides = vec![(HOSTILE.into(), HOSTILE.into())];
        run.caps = vec![HOSTILE.into()];
        run.time_unit = Some(HOSTILE.into());
        for quantity in &mut run.quantities {
            quantity.text = HOSTILE.into();
            quantity.why = HOSTILE.into();
            quantity.unit = Some(HOSTILE.into());
            quantity.about = Some(HOSTILE.into());
        }
    }
    sample.outcome.runs[2].name = HOSTILE.into();
    for criterion in &mut sample.outcome.criteria {
        criterion.name = HOSTILE.into();
        criterion.text = HOSTILE.into();
        criterion.limit_text = HOSTILE.into();
        criterion.expect = Some((Verdict::Met, HOSTILE.into()));
    }
    let table = &mut sample.figures.tables[0];
    table.name = HOSTILE.into();
    table.caption = HOSTILE.into();
    table.columns[0].name = HOSTILE.into();
    table.rows[0][0].text = HOSTILE.into();
    sample.figures.charts[0].name = HOSTILE.into();
    sample.figures.charts[0].caption = HOSTILE.into();
    sample.text = format!("{HOSTILE}\n</pre></code>{HOSTILE}");
    sample.digests = vec![(HOSTILE.into(), HOSTILE.into())];
    let html = sample.page();
    let markup = read(&html).unwrap();
    markup.assert_sound();
    let plain = full().page();
    let count =
        |html: &str, tag: &str| read(html).unwrap().elements.iter().filter(|(name, _)| name == tag).count();
    for tag in ["img", "style", "title", "pre", "main"] {
        assert_eq!(count(&html, tag), count(&plain, tag), "{tag}");
    }
    assert!(seen(&html).contains("{{ 7*7 }}"));
}

#[test]
fn raw_markup_and_unsafe_links_in_prose_become_words() {
    let prose = "<script>alert(1)</script>\n\nA <b onclick=x>word</b>, [a link](javascript:alert(1)), \
        [another](data:text/html;base64,AA), ![an image](https://example.org/x.png), [one](https://example.org), \
        [none](#nowhere), <jav\u{1}ascript:x>.\n";
    let html = bare("Unsafe", prose).page();
    let markup = read(&html).unwrap();
    markup.assert_sound();
    let outside: Vec<&str> =
        markup.values("href").into_iter().filter(|href| !href.starts_with('#')).collect();
    assert_eq!(outside, ["https://example.org"]);
    assert!(!markup.elements.iter().any(|(name, _)| name == "img"));
    assert!(seen(&html).contains("an image"));
}

#[test]
fn headings_of_prose_are_put_in_order_below_the_title() {
    let html = bare("Order", "#### Deep\n\n# Top\n\n### Skipped\n\n## Between\n\n# Top\n").page();
    let markup = read(&html).unwrap();
    markup.assert_sound();
    for wanted in [
        "<h2 id=\"section-deep\">",
        "<h2 id=\"section-top\">",
        "<h3 id=\"section-skipped\">",
        "<h3 id=\"section-between\">",
        "<h2 id=\"section-top-2\">",
    ] {
        assert!(html.contains(wanted), "{wanted}");
    }
    assert!(html.contains("<li><a href=\"#section-top-2\">Top</a></li>"));
}

#[test]
fn quotes_hold_in_headings_links_images_tables_and_notes() {
    let mut sample = full();
    let prose = "# Up to [=reject.z_max]\n\n[see [=reject.z_max]](https://example.org) and \
        ![rise of [=reject.z_max plain]](data:image/png;base64,AA)\n\n| a |\n|--|\n| [=reject.z_max] |\n\n\
        A note.[^n]\n\n[^n]: It is [=reject.z_max].\n\n```model shaft\n```\n";
    sample.study.body = body(prose);
    let html = sample.page();
    read(&html).unwrap().assert_sound();
    assert!(html.contains("alt=\"rise of 12.408731\u{a0}m\""));
    assert!(html.contains("Up to 12.408731\u{a0}±\u{a0}0.000029\u{a0}m</a></li>"));
    assert!(html.contains("id=\"cite-reject-z_max-4\""));
}

#[test]
fn names_that_fall_together_in_an_id_are_kept_apart() {
    let mut sample = full();
    let first = quantity("c", "final z", "m", Some(1.0), Some(0.1), Grade::Converged);
    let second = quantity("b-c", "final z", "m", Some(2.0), Some(0.1), Grade::Converged);
    sample.outcome.runs[1] = run("a-b", Steps::Fixed { step: 1.0 }, vec![first]);
    sample.outcome.runs[2] = run("a", Steps::Fixed { step: 1.0 }, vec![second]);
    sample.outcome.criteria.iter_mut().for_each(|criterion| criterion.quantity = "a.b-c".into());
    sample.figures.tables[0].rows.clear();
    sample.study.body = body("[=a-b.c] and [=a.b-c]");
    let html = sample.page();
    read(&html).unwrap().assert_sound();
    assert!(html.contains("href=\"#q-a-b-c\">1.00"));
    assert!(html.contains("href=\"#q-a-b-c-2\">2.00"));
}

#[test]
fn many_runs_make_a_sound_page() {
    let mut sample = full();
    for i in 0..200 {
        let of = quantity("z", "final z", "m", Some(1.0), Some(0.1), Grade::Converged);
        sample.outcome.runs.push(run(&format!("case-{i}"), Steps::Fixed { step: 0.5 }, vec![of]));
        let block = sample.study.blocks.runs[0].clone();
        sample.study.blocks.runs.push(block);
    }
    read(&sample.page()).unwrap().assert_sound();
}

#[test]
fn the_verdict_line_names_a_dozen_numbers_without_a_bound_and_counts_the_rest() {
    let mut sample = full();
    let of = |i: usize| quantity(&format!("n{i}"), "final z", "m", Some(1.0), None, Grade::Unbounded);
    sample.outcome.runs[2].quantities = (0..20).map(of).collect();
    let html = sample.page();
    let verdict = &html[html.find("id=\"verdict\"").unwrap()..html.find("class=\"contents\"").unwrap()];
    assert_eq!(verdict.matches("class=\"no-bound\"").count(), 12);
    assert!(verdict.contains("and 10 more"), "{verdict}");
}

/// Contrast of two colours by the definition of WCAG 2.2 (W3C 2023), "contrast ratio" and "relative luminance".
fn contrast(a: &str, b: &str) -> f64 {
    let luminance = |colour: &str| {
        let channel = |i: usize| {
            let value = f64::from(u8::from_str_radix(&colour[1 + 2 * i..3 + 2 * i], 16).unwrap()) / 255.0;
            if value <= 0.04045 { value / 12.92 } else { elementary::pow((value + 0.055) / 1.055, 2.4) }
        };
        0.2126 * channel(0) + 0.7152 * channel(1) + 0.0722 * channel(2)
    };
    let (a, b) = (luminance(a), luminance(b));
    (larger(a, b) + 0.05) / (smaller(a, b) + 0.05)
}

#[test]
fn text_stands_out_from_its_ground_on_screen_in_the_dark_and_on_paper() {
    assert!((contrast("#ffffff", "#000000") - 21.0).abs() < 1e-9);
    let css = Templates::text("style.css").unwrap();
    let schemes: Vec<&str> = css.split(":root {").skip(1).filter(|part| part.contains("--paper:")).collect();
    assert_eq!(schemes.len(), 3);
    for scheme in schemes {
        let colour = |name: &str| {
            let at = scheme.find(&format!("--{name}: ")).unwrap() + name.len() + 4;
            &scheme[at..at + 7]
        };
        for text in ["ink", "soft", "accent"] {
            for ground in ["paper", "faint"] {
                let ratio = contrast(colour(text), colour(ground));
                // WCAG 2.2, success criterion 1.4.3.
                assert!(ratio >= 4.5, "{text} on {ground}: {ratio}");
            }
        }
    }
}

#[test]
fn a_number_that_is_not_finite_is_never_shown_as_one() {
    let mut sample = full();
    let of = &mut sample.outcome.runs[0].quantities[0];
    of.estimates.observed_order = Some(f64::NAN);
    of.estimates.halving = Some(f64::INFINITY);
    let seen = seen(&sample.page());
    assert!(!seen.contains("NaN") && !seen.contains(" inf "), "{seen}");
    assert!(seen.contains("not finite"));
}

#[test]
fn a_true_error_beyond_the_bound_is_told() {
    let mut sample = full();
    sample.outcome.runs[0].quantities[0].true_error = Some(1.0);
    assert!(seen(&sample.page()).contains("The true error is larger than the estimated bound."));
}

#[test]
fn the_word_accuracy_is_never_used() {
    assert!(!full().page().to_lowercase().contains("accura"));
}

#[test]
fn inputs_that_do_not_belong_together_are_an_error() {
    let mut sample = full();
    sample.outcome.runs.pop();
    assert!(matches!(sample.try_page(), Err(ReportError::Missing(_))));
    let mut sample = full();
    sample.study.body = body("[=reject.nothing]");
    let message = sample.try_page().unwrap_err().to_string();
    assert!(message.contains("reject.nothing"), "{message}");
}

#[test]
fn the_register_lists_by_folder_and_number() {
    let entry = |folder: &str, number: Option<&str>, title: &str, link: &str| RegisterEntry {
        folder: folder.into(),
        number: number.map(str::to_owned),
        title: title.into(),
        revision: Some("B".into()),
        date: Some("2026-11-30".into()),
        verdicts: vec![(Verdict::NotMet, 2, 1), (Verdict::Met, 3, 0)],
        weakest: Some(Grade::Indicated),
        link: link.into(),
    };
    let entries = [
        entry("hydro", Some("HS-2"), "Second", "hydro/two/report.html"),
        entry("", None, HOSTILE, "//evil:x \"<b>/report.html"),
        entry("hydro", Some("HS-1"), "First", "hydro/one/report.html"),
    ];
    let html = compose_register(&entries, &Templates::builtin().unwrap()).unwrap();
    let markup = read(&html).unwrap();
    markup.assert_sound();
    let links: Vec<&str> = markup.values("href").into_iter().filter(|href| !href.starts_with('#')).collect();
    assert_eq!(
        links,
        ["evil%3Ax%20%22%3Cb%3E/report.html", "hydro/one/report.html", "hydro/two/report.html"]
    );
    assert!(seen(&html).contains("3 met 2 not met (1 as expected) indicated"), "{}", seen(&html));
    let empty = compose_register(&[], &Templates::builtin().unwrap()).unwrap();
    assert!(seen(&empty).contains("No study has been issued yet."));
}
