//! The coverage study: how often bounds hold, and how tight they are, over random smooth problems whose solution
//! is known. Prints the table of DEVELOPERS.md. `cargo bench --bench coverage -- 4000` takes so many problems.

#![allow(
    unreachable_pub,
    clippy::disallowed_methods,
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    clippy::panic,
    clippy::print_stdout,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::doc_markdown,
    clippy::format_push_string,
    missing_docs,
    dead_code,
    reason = "a test: truths come from the standard library, failures are panics"
)]

#[path = "../common/mod.rs"]
mod common;

use std::collections::BTreeMap;

use common::coverage::{Case, cases};
use halfstep::bound::Grade;
use rayon::prelude::*;

fn main() {
    let problems = std::env::args().skip(1).find_map(|argument| argument.parse().ok()).unwrap_or(2200_u64);
    let both: Vec<(Vec<Case>, Vec<Case>)> = (0..problems).into_par_iter().map(cases).collect();
    let (quantities, rows): (Vec<_>, Vec<_>) = both.into_iter().unzip();
    let quantities: Vec<Case> = quantities.into_iter().flatten().collect();
    let rows: Vec<Case> = rows.into_iter().flatten().collect();
    println!("quantities:");
    table(&quantities, problems);
    println!("\nrows:");
    table(&rows, problems);
}

fn table(cases: &[Case], problems: u64) {
    println!("{} numbers from {problems} problems", cases.len());
    println!(
        "| scheme | grade | numbers | bound holds | tightness: median | 90 % | worst true error over bound |"
    );
    println!("| --- | --- | ---: | ---: | ---: | ---: | ---: |");
    let mut groups: BTreeMap<(&str, &str), Vec<&Case>> = BTreeMap::new();
    for case in cases {
        let grade = if case.floor && case.grade == Grade::Converged {
            "converged, at rounding"
        } else {
            case.grade.word()
        };
        groups.entry((case.scheme, grade)).or_default().push(case);
        groups.entry(("all schemes", grade)).or_default().push(case);
    }
    for ((scheme, grade), group) in &groups {
        if *grade == "unbounded" {
            println!("| {scheme} | {grade} | {} | | | | |", group.len());
            continue;
        }
        let held = group.iter().filter(|case| case.ratio <= 1.0).count();
        let worst = group.iter().map(|case| case.ratio).fold(0.0, f64::max);
        let mut tightness: Vec<f64> = group.iter().map(|case| 1.0 / case.ratio).collect();
        tightness.sort_by(f64::total_cmp);
        let share =
            |share: f64| tightness.get((share * (tightness.len().max(1) - 1) as f64) as usize).copied();
        let tight = |share_of: f64| {
            if grade.contains("rounding") {
                String::new()
            } else {
                share(share_of).map_or_else(String::new, |tightness| format!("{tightness:.2}"))
            }
        };
        println!(
            "| {scheme} | {grade} | {} | {:.2} % | {} | {} | {worst:.3} |",
            group.len(),
            100.0 * held as f64 / group.len() as f64,
            tight(0.5),
            tight(0.9),
        );
    }
    let mut worst: Vec<&Case> =
        cases.iter().filter(|case| case.grade <= Grade::Converged && case.ratio > 1.0).collect();
    worst.sort_by(|a, b| b.ratio.total_cmp(&a.ratio));
    println!("\nconverged or corroborated bounds that do not hold: {}", worst.len());
    for case in worst.iter().take(25) {
        println!("{:.3} {} {} {}", case.ratio, case.grade.word(), case.scheme, case.text);
    }
    let mut weak: Vec<&Case> =
        cases.iter().filter(|case| case.grade == Grade::Indicated && case.ratio > 1.0).collect();
    weak.sort_by(|a, b| b.ratio.total_cmp(&a.ratio));
    println!("\nindicated bounds that do not hold: {}", weak.len());
    for case in weak.iter().take(10) {
        println!("{:.3} {} {}", case.ratio, case.scheme, case.text);
    }
}
