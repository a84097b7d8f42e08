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

use common::problems::problem;
use common::random::Random;
use halfstep::bound::Grade;
use halfstep::cli::pipeline::evaluate;
use rayon::prelude::*;

/// One bound beside the truth.
struct Case {
    scheme: &'static str,
    grade: Grade,
    ratio: f64,
    /// Whether the meshes agreed to rounding: such a bound is a floor, and its tightness means nothing.
    floor: bool,
    text: String,
}

fn main() {
    let problems = std::env::args().skip(1).find_map(|argument| argument.parse().ok()).unwrap_or(2200_u64);
    let lists: Vec<Vec<Case>> = (0..problems).into_par_iter().map(cases).collect();
    let cases: Vec<Case> = lists.into_iter().flatten().collect();
    println!("{} numbers from {problems} problems", cases.len());
    println!(
        "| scheme | grade | numbers | bound holds | tightness: median | 90 % | worst true error over bound |"
    );
    println!("| --- | --- | ---: | ---: | ---: | ---: | ---: |");
    let mut groups: BTreeMap<(&str, &str), Vec<&Case>> = BTreeMap::new();
    for case in &cases {
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

fn cases(i: u64) -> Vec<Case> {
    let problem = problem(i);
    let mut random = Random::new(1_000_000 + i);
    let schemes = halfstep::scheme::all();
    let scheme = &schemes[random.below(schemes.len())];
    let adaptive = scheme.embedded_order.is_some() && random.below(2) == 0;
    let control = if adaptive {
        format!("tolerance: 1e-{}", 3 + random.below(6))
    } else {
        let exponent = random.between(-2.6, 0.2);
        format!("step: {:.5}", problem.scale * 10_f64.powf(exponent))
    };
    let text = problem.study(scheme.key, &control);
    let outcome = match evaluate("coverage.md", &text) {
        Ok((_, outcome)) => outcome,
        Err(faults) => {
            if faults.trim().is_empty()
                || faults.contains("step-beyond-span")
                || faults.contains("not-finite")
            {
                return Vec::new();
            }
            panic!("{faults}\n{text}");
        }
    };
    let quantities = outcome.runs.into_iter().flat_map(|run| run.quantities);
    quantities
        .filter_map(|quantity| {
            let error = quantity.true_error?.abs();
            let ratio = match quantity.bound {
                Some(bound) if bound > 0.0 => error / bound,
                _ if error == 0.0 => 0.0,
                _ => f64::INFINITY,
            };
            let text = format!(
                "{i} {} {control}: {} = {:?}, true error {error:e}, bound {:?}, {} {:?}",
                problem.family,
                quantity.text,
                quantity.value,
                quantity.bound,
                quantity.why,
                quantity.estimates
            );
            let floor = quantity.why.contains("to rounding");
            Some(Case { scheme: scheme.key, grade: quantity.grade, ratio, floor, text })
        })
        .collect()
}
