//! Tests of the readers of all kinds: one block in, its faults out.

use crate::fault::{Faults, Sources, show};
use crate::study::block::chart::Shows;
use crate::study::block::criteria::{Relation, Verdict};
use crate::study::block::model::Start;
use crate::study::block::run::{BoundAsked, Control};
use crate::study::block::table::Lists;
use crate::study::{Study, read};

/// Reads a study with one block of that kind beside a sound model and run.
fn read_block(head: &str, body: &str) -> (Study, Faults, Sources, usize) {
    let before = "---\nstudy: x\n---\n~~~model m\nparameters: {k: 2 1/s}\nstates: {h: 1 m}\nrates: {h: -k*h}\n~~~\n\
         ~~~run a\nmodel: m\nscheme: rk4\nstep: 1 s\nuntil: 9 s\nrows: every 1 s\nquantities: {q: final h, p: mean h}\n~~~\n";
    let start = format!("~~~{head}\n");
    let mut sources = Sources::default();
    let file = sources.add("study.md", format!("{before}{start}{body}\n~~~\n"));
    let mut faults = Faults::new();
    let study = read(&sources, file, &mut faults).unwrap();
    (study, faults, sources, before.len() + start.len())
}

/// Expects `code: marked text` of all faults of a block, in order.
fn check(head: &str, body: &str, expect: &[&str]) {
    let (study, faults, sources, _) = read_block(head, body);
    let list = faults.sorted();
    let got: Vec<String> =
        list.iter().map(|fault| format!("{}: {}", fault.code, sources.text(fault.at))).collect();
    assert_eq!(got, expect, "{head}\n{body}\n{}", show(&faults, &sources, 9, false));
    assert!(list.iter().all(|fault| fault.help.is_some()));
    let blocks = &study.blocks;
    let count = blocks.models.len()
        + blocks.runs.len()
        + blocks.charts.len()
        + blocks.tables.len()
        + blocks.criteria.len();
    assert!(count == 3 || faults.any_error(), "the block is lost without an error");
}

#[test]
fn a_model_is_read_strictly() {
    let head = "model x";
    let check_after = |body: &str, expect: &[&str]| check(head, &format!("{body}\nrates: {{h: 1}}"), expect);
    check_after("states: {h: 1}", &[]);
    check_after("states: {h: sqrt(2)*k}", &[]);
    check(head, "about: x", &["missing-key: model x", "missing-key: model x"]);
    check_after("states: [h]", &["wrong-type: [h]"]);
    check_after("states: {h: }", &["missing-value: "]);
    check_after("states: {h: {begin: 1}}", &["missing-key: h", "unknown-key: begin"]);
    check_after("states: {h: {start: 1, scale: 0 m}}", &["out-of-range: 0 m"]);
    check_after("states: {h: 1e999}", &["number-range: 1e999"]);
    check_after("states: {h: 1,0}", &["bad-name: 0"]);
    check_after("states: {max: 1, 2x: 1, a-b: 1}", &["bad-name: max", "bad-name: 2x", "bad-name: a-b"]);
    check_after("states: {h: 1}\nparameters: {e: 1}", &["hidden-constant: e"]);
    check_after(
        "states: {h: 1}\nparameters: {a: x, b: [1], c: {value: 1, sd: -1}}",
        &["not-a-value: x", "wrong-type: [1], c: {value: 1, sd: -1}}", "out-of-range: -1"],
    );
    check_after("states: {h: 1}\nparameters: {a: {value: 1, sd: 1, plusminus: 2}}", &["one-of: 1"]);
    check_after("states: {h: 1}\nderived: {h: 2}", &["duplicate-name: h"]);
    check_after("states: {h: 1}\nderived: {d: {unit: m}}", &["missing-key: d"]);
    check_after("states: {h: 1}\nevents: {}", &["unknown-key: events"]);
    check_after("states: {h: 1}\nderived: {d: 1 # one\n}", &["comment-after-expression: # one"]);
    check_after("states: {h: 1}\nderived: {d: max(1, 2)}", &["cut-expression: max(1"]);
}

#[test]
fn a_comma_that_cuts_a_text_is_one_fault() {
    let check_after = |body: &str, expect: &[&str]| {
        check("model x", &format!("{body}\nrates: {{h: 1}}"), expect);
    };
    check_after("states: {h: max(1, 2)}", &["cut-expression: max(1"]);
    check_after("states: {h: {start: max(1, 2), unit: m}}", &["cut-expression: max(1"]);
    check_after(
        "states: {h: 1}\nparameters: {k: {value: 2, about: rate (see a, b)}}",
        &["cut-expression: rate (see a"],
    );
    check_after("states: {h: 1}\nparameters: {k: {value: 2, about: sad :( face}}", &[]);
    check("table x", "run: a\ncolumns: [h, max(h, 1), h]", &["cut-expression: max(h"]);
}

#[test]
fn a_run_is_read_strictly() {
    let check_with = |lines: &str, expect: &[&str]| {
        check("run x", &format!("model: m\nscheme: rk4\nuntil: 9 s\n{lines}"), expect);
    };
    check_with("step: 1 s", &[]);
    check_with("tolerance: 1e-6", &[]);
    check_with("aim: 1 mm", &[]);
    check_with("", &["one-of: run x"]);
    check_with("step: -1 s", &["out-of-range: -1 s"]);
    check_with("tolerance: 1e-6 m", &["unit-not-taken: 1e-6 m"]);
    check_with("aim: 0 m", &["out-of-range: 0 m"]);
    check_with("aim: {}", &["missing-value: {}"]);
    check_with("aim: {q: 1 m}", &["unknown-quantity: q"]);
    check_with("step: 1 s\nrows: 1 s", &["bad-rows: 1 s"]);
    check_with("step: 1 s\nrows: every 0 s", &["out-of-range: 0 s"]);
    check_with("step: 1 s\nbound: halving  and companion", &[]);
    check_with("step: 1 s\nbound: halfing", &["bad-bound: halfing"]);
    check_with("step: 1 s\nlimit: 10 s", &["unit-not-taken: 10 s"]);
    check_with("step: 1 s\nlimit: 1.5", &["out-of-range: 1.5"]);
    check_with("step: 1 s\nfrom: 9 s", &["empty-span: 9 s"]);
    check_with("step: 1 s\nfrom: 0", &["time-unit: 0"]);
    check_with("step: 1 min\nfrom: 0 s\nquantities: {q: h at 3 h}", &["time-unit: 1 min", "time-unit: 3 h"]);
    check_with("step: 1 s\nwith: {K: 1 1/s, h: 2 m, k: x}", &["not-a-value: x"]);
    check_with("step: 1 s\nwith: {K: 1 1/s, h: 2 m}", &["unknown-name: K"]);
    check_with("step: 1 s\nquantities: {q: {take: final h, unit: m}, r: {unit: m}}", &["missing-key: r"]);
    check_with("step: 1 s\nquantities: {2q: final h, q: final}", &["bad-name: 2q", "bad-quantity: final"]);
    check("run x", "", &["empty-block: run x"]);
    check("run x", "- model", &["wrong-type: - model"]);
    check("run x", "model: m", &["missing-key: run x", "missing-key: run x", "one-of: run x"]);
    let (study, ..) = read_block(
        "run x",
        "model: m\nscheme: rk4\nuntil: 9 s\naim: {q: 1 mm}\nquantities: {q: final h}\nbound: none",
    );
    let run = &study.blocks.runs[1];
    assert_eq!(run.bound, BoundAsked::None);
    assert!(matches!(&run.control, Control::Aim(aims) if aims[0].quantity.as_ref().unwrap().value == "q"));
}

#[test]
fn a_chart_shows_one_thing() {
    let head = "chart x";
    check(
        head,
        "lines: [a.h, 'a.max(h, 1)']\npoints:\n  - a.h\n  - {run: a, of: h^2, label: square}\nagainst: h",
        &[],
    );
    check(head, "convergence: [a.q]", &[]);
    check(head, "stability: a", &[]);
    check(head, "title: x", &["one-of: chart x"]);
    check(head, "stability: a\nconvergence: [a.q]", &["one-of: a"]);
    check(head, "stability: a\nagainst: t", &["unknown-key: t"]);
    check(head, "lines: a.h", &["wrong-type: a.h"]);
    check(head, "lines: []", &["missing-value: []"]);
    check(head, "lines: [h, a., 2.h, b.h]", &["bad-reference: h", "bad-reference: a.", "bad-reference: 2.h"]);
    check(head, "lines: [b.h]\npoints: [c.h]", &["unknown-run: b", "unknown-run: c"]);
    check(head, "convergence: [a.q, a.r, q]", &["bad-reference: q"]);
    check(head, "convergence: [a.q, a.r]", &["unknown-quantity: r"]);
    check(head, "lines: [{run: a}]", &["missing-key: {run: a}]"]);
    check(head, "stability: b", &["unknown-run: b"]);
    check(head, "lines: [a.h]\nxaxis: t", &["unknown-key: xaxis"]);
    let (study, ..) = read_block(head, "lines: [a.1.5*h]");
    assert!(
        matches!(&study.blocks.charts[0].shows, Shows::Curves { lines, .. } if lines[0].expression.value == "1.5*h")
    );
}

#[test]
fn a_table_lists_quantities_or_rows() {
    let head = "table x";
    check(head, "rows: [a.q, a.p]\ntitle: Levels", &[]);
    check(head, "run: a\ncolumns: [h, h^2]", &[]);
    check(head, "title: x", &["one-of: table x"]);
    check(head, "rows: [a.q]\nrun: a", &["one-of: a"]);
    check(head, "rows: [a.q]\ncolumns: [h]", &["unknown-key: [h]"]);
    check(head, "run: b", &["unknown-run: b"]);
    let (study, ..) = read_block(head, "run: a");
    assert!(matches!(&study.blocks.tables[0].lists, Lists::Rows { columns, .. } if columns.is_empty()));
}

#[test]
fn criteria_compare_a_quantity_with_a_value() {
    let head = "criteria";
    check(head, "- a: a.q <= 1 m\n- b: a.q<2 m\n- c: a.p > -1e-3 m\n- d: a.p >= 0 m", &[]);
    check(head, "a: a.q <= 1 m", &["wrong-type: a: a.q <= 1 m"]);
    check(head, "- a.q <= 1 m", &["bad-criterion: a.q <= 1 m"]);
    check(
        head,
        "- a: a.q\n- b: a.q = 1\n- c: a.q ≤ 1\n- d: 0 < a.q < 1",
        &["bad-criterion: a.q", "bad-criterion: =", "bad-criterion: ≤", "bad-criterion: 0 < a.q < 1"],
    );
    check(head, "- a: a.q <= b", &["not-a-value: b"]);
    check(head, "- a: a.q <=", &["not-a-value: "]);
    check(head, "- a: a.q < 1 m\n  expect: not met", &["bad-criterion: expect"]);
    check(head, "- a: {holds: a.q < 1 m, expect: met, because: x}", &["bad-criterion: met"]);
    check(head, "- a: {holds: a.q < 1 m, because: x}", &["missing-key: x"]);
    check(head, "- a: {expect: undecided, because: x}", &["missing-key: a"]);
    check(head, "- a b: a.q < 1 m", &["bad-name: a b"]);
    let (study, ..) = read_block(head, "- a: {holds: a.q > 1 m, expect: not  met, because: on purpose}");
    let entry = &study.blocks.criteria[0].criteria[0];
    assert_eq!((entry.relation, entry.limit.number.to_bits()), (Relation::Greater, 1.0_f64.to_bits()));
    assert!(matches!(&entry.expect, Some((Verdict::NotMet, because)) if because.value == "on purpose"));
}

#[test]
fn faults_in_folded_and_quoted_texts_mark_the_whole_text() {
    check("criteria", "- a: >\n    a.q =<\n    1 m", &["bad-criterion: >"]);
    check("criteria", "- a: \"a.q =< \\u0031 m\"", &["bad-criterion: \"a.q =< \\u0031 m\""]);
    check("criteria", "- a: \"a.q =< 1 m\"", &["bad-criterion: =<"]);
    let (study, ..) = read_block("model x", "states: {h: \"-1 m\"}\nrates: {h: >\n    1 +\n    2}");
    assert!(
        study.blocks.models.len() == 1 || matches!(study.blocks.models[1].states[0].start, Start::Value(_))
    );
}
