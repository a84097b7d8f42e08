//! `issue` and `proofread` of whole studies: what is left behind, and when nothing may change.

use crate::tool::{Done, Tool, files_below};
use halfstep::record::digest::sha256;
use std::collections::BTreeMap;
use std::path::Path;
use std::time::Duration;

/// A short study; `{K}` stands for the rate, `{LIMIT}` for the limit of the criterion, `{STEP}` for the step.
const COOLING: &str = "\
---
study: Cooling of an invented cup
number: T-1
date: 2026-12-01
---

It ends at [=cool.end].

```model cup
parameters:
  k: {K}
states:
  T: 60
rates:
  T: -k*T
```

```run cool
model: cup
scheme: rk4
step: {STEP}
until: 10
rows: every 1
quantities:
  end: final T
```

```criteria
- cold: cool.end <= {LIMIT}
```
";

fn cooling() -> String {
    cooling_with("0.1", "30", "0.5")
}

fn cooling_with(k: &str, limit: &str, step: &str) -> String {
    COOLING.replace("{K}", k).replace("{LIMIT}", limit).replace("{STEP}", step)
}

/// The files of an output folder but for what varies.
fn lasting(mut files: BTreeMap<String, Vec<u8>>) -> BTreeMap<String, Vec<u8>> {
    files.retain(|path, _| !path.ends_with("timing.txt"));
    files
}

fn record(folder: &Path) -> serde_json::Value {
    serde_json::from_slice(&std::fs::read(folder.join("record.json")).unwrap()).unwrap()
}

/// Asserts that the record of a report folder lists the files that stand in it, with their digests.
fn assert_whole(folder: &Path) {
    let mut files = files_below(folder);
    files.remove("timing.txt").unwrap();
    files.remove("record.json").unwrap();
    let record = record(folder);
    let mut written = 0;
    for file in record["files"].as_array().unwrap() {
        if file["was"] == "written" {
            let path = file["path"].as_str().unwrap();
            assert_eq!(file["sha256"], sha256(&files[path]).as_str(), "{path}");
            written += 1;
        }
    }
    assert_eq!(written, files.len(), "{:?}", files.keys());
}

#[test]
fn the_first_study_of_begin_can_be_issued_as_it_is() {
    let tool = Tool::new();
    tool.expect(0, "begin tank.md");
    tool.expect(0, "proofread tank.md");
    assert!(!tool.folder.path().join("out").exists(), "proofread writes nothing");
    let done = tool.expect(0, "issue tank.md");
    assert!(done.out.starts_with("tank: 1 met, 0 not met, 0 undecided; weakest grade "), "{done:#?}");
    assert!(done.out.ends_with("; out/tank/report.html\n"), "{done:#?}");
    assert_eq!(done.err.lines().next(), Some("issuing tank.md"));
    let folder = tool.folder.path().join("out/tank");
    assert_whole(&folder);
    // Torricelli's law, integrated by hand: sqrt(h) falls by c*a/A*sqrt(g/2) a second, so that the level has
    // fallen from 2 m to 0.5 m after (sqrt(2) - sqrt(0.5)) / (c*a/A*sqrt(g/2)) seconds.
    let fall = 0.62 * 0.002 / 1.5 * (9.80665_f64 / 2.0).sqrt();
    let time = (2.0_f64.sqrt() - 0.5_f64.sqrt()) / fall;
    let left = (2.0_f64.sqrt() - fall * 600.0) * (2.0_f64.sqrt() - fall * 600.0);
    let record = record(&folder);
    for (name, truth) in [("drain.half_metre", time), ("drain.left", left)] {
        let all = record["quantities"].as_array().unwrap();
        let quantity = all.iter().find(|quantity| quantity["name"] == name).unwrap();
        let (value, bound) = (quantity["value"].as_f64().unwrap(), quantity["bound"].as_f64().unwrap());
        assert!((value - truth).abs() <= bound, "{name}: {value} +- {bound}, true {truth}");
        assert_eq!(quantity["bits"], format!("{:016x}", value.to_bits()).as_str());
    }
}

#[test]
fn a_quiet_issue_of_a_clean_study_says_one_line() {
    let tool = Tool::new();
    tool.file("cup.md", cooling());
    let done = tool.expect(0, "issue --quiet cup.md");
    assert_eq!(done.err, "");
    assert_eq!(done.out.lines().count(), 1, "{done:#?}");
}

#[test]
fn no_path_and_no_user_of_this_machine_reaches_an_output() {
    let tool = Tool::new();
    tool.file("studies/cup.md", cooling());
    let path = tool.folder.path().join("studies");
    let done = tool.expect(0, &format!("issue {} --out out", path.display()));
    assert_eq!(done.status, 0);
    let here = tool.folder.path().to_str().unwrap().as_bytes();
    for (path, bytes) in lasting(tool.files("out")) {
        assert!(!bytes.windows(here.len()).any(|window| window == here), "{path}");
    }
}

#[test]
fn the_place_and_the_way_of_issuing_change_no_byte() {
    let tool = Tool::new();
    for study in ["a", "b", "deep/c", "deep/d"] {
        tool.file(&format!("studies/{study}.md"), cooling_with("0.2", "30", "0.25"));
    }
    tool.expect(0, "issue studies --jobs 1 --out one");
    tool.expect(0, "issue studies --jobs 2 --out two");
    tool.expect(0, "issue studies --jobs 2 --out two --quiet");
    let one = lasting(tool.files("one"));
    assert_eq!(one, lasting(tool.files("two")));
    assert!(one.contains_key("deep/c/report.html"), "{:?}", one.keys());
    tool.expect(0, "issue studies/deep/c.md --out alone");
    let alone = lasting(tool.files("alone"));
    for file in ["report.html", "record.json", "data/cool.csv"] {
        assert_eq!(alone[&format!("c/{file}")], one[&format!("deep/c/{file}")], "{file}");
    }
}

#[test]
fn a_criterion_that_is_not_met_gives_status_1_and_a_report() {
    let tool = Tool::new();
    tool.file("cup.md", cooling_with("0.1", "20", "0.5"));
    let done = tool.expect(1, "issue cup.md");
    assert!(done.out.starts_with("cup: 0 met, 1 not met, 0 undecided; "), "{done:#?}");
    assert_whole(&tool.folder.path().join("out/cup"));
    let expected = cooling_with("0.1", "20", "0.5")
        .replace("cool.end <= 20", "{holds: \"cool.end <= 20\", expect: not met, because: shown on purpose}");
    tool.file("cup.md", expected);
    let done = tool.expect(0, "issue cup.md");
    assert!(done.out.contains("1 not met, 0 undecided (as expected)"), "{done:#?}");
}

/// Studies that are wrong, with the text that must stand in the message.
fn wrong_studies() -> Vec<(&'static str, Vec<u8>, &'static str)> {
    let spoilt = |from: &str, to: &str| {
        assert!(cooling().contains(from), "{from}");
        cooling().replacen(from, to, 1).into_bytes()
    };
    vec![
        ("empty", Vec::new(), "wrong.md"),
        ("blank", b"\n\n\n".to_vec(), "wrong.md"),
        ("no front matter", b"# A text\n".to_vec(), "wrong.md"),
        ("front matter without end", b"---\nstudy: S\n".to_vec(), "wrong.md"),
        ("no title", b"---\nnumber: 1\n---\n".to_vec(), "study"),
        ("not UTF-8", b"---\nstudy: caf\xe9\n---\n".to_vec(), "line 2, column 11"),
        ("broken YAML", spoilt("states:\n", "states: {\n"), "wrong.md:"),
        ("duplicate key", spoilt("until: 10\n", "until: 10\nuntil: 20\n"), "until"),
        ("unknown key", spoilt("until: 10", "untill: 10"), "untill"),
        ("unknown name", spoilt("-k*T", "-q*T"), "q"),
        ("unknown model", spoilt("model: cup", "model: cap"), "cap"),
        ("unknown scheme", spoilt("rk4", "rk44"), "rk44"),
        ("unknown quantity", spoilt("[=cool.end]", "[=cool.ende]"), "cool.ende"),
        ("misspelt kind", spoilt("```run cool", "```rum cool"), "rum"),
        ("not a number", spoilt("step: 0.5", "step: NaN"), "NaN"),
        ("infinite", spoilt("step: 0.5", "step: .inf"), "inf"),
        ("too large", spoilt("until: 10", "until: 1e400"), "1e400"),
        ("no step", spoilt("step: 0.5", "step: 0"), "step"),
        ("step back", spoilt("step: 0.5", "step: -0.5"), "step"),
        ("no rates", spoilt("rates:\n  T: -k*T\n", ""), "lacks the key `rates`"),
    ]
}

#[test]
fn a_wrong_study_gives_status_2_and_leaves_nothing() {
    for (what, text, expected) in wrong_studies() {
        for command in ["issue --quiet", "proofread"] {
            let tool = Tool::new();
            tool.file("wrong.md", &text);
            let done = tool.run(&format!("{command} wrong.md"));
            assert_eq!(done.status, 2, "{what}, {command}: {done:#?}");
            assert!(done.err.contains(expected), "{what}, {command}: {done:#?}");
            assert_eq!(done.out, "", "{what}, {command}");
            assert!(!done.err.contains('\x1b'), "{what}: no colour");
            assert_eq!(tool.files("").len(), 1, "{what}, {command}: only the study is there");
        }
    }
}

#[test]
fn the_last_good_report_outlives_a_wrong_study() {
    for (what, text, _) in wrong_studies() {
        let tool = Tool::new();
        tool.file("wrong.md", cooling());
        tool.expect(0, "issue --quiet wrong.md");
        let good = tool.files("out");
        tool.file("wrong.md", text);
        tool.expect(2, "issue --quiet wrong.md");
        assert_eq!(tool.files("out"), good, "{what}");
    }
}

#[test]
fn a_wrong_study_keeps_no_other_from_being_issued() {
    let tool = Tool::new();
    tool.file("studies/a.md", "---\nstudy: A\nnumbr: 1\n---\n");
    tool.file("studies/b.md", cooling());
    tool.file("studies/c.md", "---\nstudy: C\nnumbr: 1\n---\n");
    let done = tool.expect(2, "issue --quiet studies");
    assert!(done.out.starts_with("b: 1 met"), "{done:#?}");
    assert_whole(&tool.folder.path().join("out/b"));
    let place = |name: &str| done.err.find(name).unwrap_or_else(|| panic!("{name}: {done:#?}"));
    assert!(place("studies/a.md") < place("studies/c.md"), "in the order of the studies: {done:#?}");
    assert!(!tool.folder.path().join("out/a").exists());
}

#[test]
fn a_new_issue_removes_the_data_of_a_run_that_is_gone_and_nothing_else() {
    let tool = Tool::new();
    tool.file("cup.md", cooling());
    tool.expect(0, "issue --quiet cup.md");
    tool.file("out/cup/note.txt", "mine");
    tool.file("out/cup/data/mine.csv", "mine");
    tool.file("cup.md", cooling().replace("run cool", "run chill").replace("cool.", "chill."));
    tool.expect(0, "issue --quiet cup.md");
    let files: Vec<String> = tool.files("out/cup").into_keys().collect();
    let expected =
        ["data/chill.csv", "data/mine.csv", "note.txt", "record.json", "report.html", "timing.txt"];
    assert_eq!(files, expected);
}

#[test]
fn an_output_folder_that_cannot_be_made_is_a_failure_with_its_path() {
    let tool = Tool::new();
    tool.file("cup.md", cooling());
    tool.file("taken", "mine");
    tool.file("out/cup", "mine");
    let done = tool.expect(4, "issue --quiet cup.md --out taken");
    assert!(done.err.contains("taken"), "{done:#?}");
    let done = tool.expect(4, "issue --quiet cup.md");
    assert!(done.err.contains("out/cup: a file stands where the report folder belongs"), "{done:#?}");
    assert_eq!(tool.files("out").len(), 1);
}

#[cfg(unix)]
#[test]
fn a_report_that_is_read_only_is_kept() {
    use std::os::unix::fs::PermissionsExt;
    let tool = Tool::new();
    tool.file("cup.md", cooling());
    tool.expect(0, "issue --quiet cup.md");
    let good = tool.files("out");
    let folder = tool.folder.path().join("out/cup");
    std::fs::set_permissions(&folder, std::fs::Permissions::from_mode(0o555)).unwrap();
    let done = tool.expect(4, "issue --quiet cup.md");
    std::fs::set_permissions(&folder, std::fs::Permissions::from_mode(0o755)).unwrap();
    assert!(done.err.contains("out/cup: the folder is read-only"), "{done:#?}");
    assert_eq!(tool.files("out"), good);
}

/// A limit on the size of files stands for a full disk: writing beyond it fails as there.
#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_a_failure_that_leaves_the_last_report() {
    let tool = Tool::new();
    tool.file("cup.md", cooling());
    tool.expect(0, "issue --quiet cup.md");
    let good = tool.files("out");
    tool.file("cup.md", cooling_with("0.3", "30", "0.5"));
    let output = std::process::Command::new("bash")
        .args(["-c", "trap '' XFSZ; ulimit -f 1; exec \"$0\" issue --quiet cup.md"])
        .arg(env!("CARGO_BIN_EXE_halfstep"))
        .current_dir(tool.folder.path())
        .output()
        .unwrap();
    let done = Done::of(output);
    assert_eq!(done.status, 4, "{done:#?}");
    assert!(done.err.contains("cannot write out/cup"), "{done:#?}");
    assert_eq!(tool.files("out"), good);
}

#[cfg(unix)]
#[test]
fn a_stop_at_any_moment_leaves_the_old_report_or_the_new_one() {
    let tool = Tool::new();
    tool.file("cup.md", cooling());
    let started = std::time::Instant::now();
    tool.expect(0, "issue --quiet cup.md");
    let whole = started.elapsed();
    let folder = tool.folder.path().join("out/cup");
    let (mut stopped, shots) = (0, 60);
    for shot in 0..shots {
        let k = if shot % 2 == 0 { "0.2" } else { "0.1" };
        tool.file("cup.md", cooling_with(k, "30", "0.5"));
        let mut child = tool.command("issue --quiet cup.md").spawn().unwrap();
        std::thread::sleep(whole * shot / shots + Duration::from_micros(200));
        child.kill().unwrap();
        stopped += u32::from(!child.wait().unwrap().success());
        assert_whole(&folder);
    }
    assert!(stopped > 0, "no shot came in time");
    tool.file("cup.md", cooling());
    tool.expect(0, "issue --quiet cup.md");
    assert_whole(&folder);
    let beside: Vec<String> = tool.files("out").into_keys().filter(|path| path.starts_with('.')).collect();
    assert_eq!(beside, Vec::<String>::new(), "what the stops have left is swept");
}
