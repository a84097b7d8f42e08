//! The coverage study: how often bounds hold, and how tight they are, over random smooth problems whose solution
//! is known. Prints the table of DEVELOPERS.md. `cargo bench --bench coverage -- 4000` takes so many problems.

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
    text: String,
}

fn main() {
    let problems = std::env::args().skip(1).find_map(|argument| argument.parse().ok()).unwrap_or(2200_u64);
    let lists: Vec<Vec<Case>> = (0..problems).into_par_iter().map(cases).collect();
    let cases: Vec<Case> = lists.into_iter().flatten().collect();
    println!("{} numbers from {problems} problems", cases.len());
    println!("| scheme | grade | numbers | bound holds | tightness: median | 90 % | worst true error over bound |");
    println!("| --- | --- | ---: | ---: | ---: | ---: | ---: |");
    let mut groups: BTreeMap<(&str, &str), Vec<f64>> = BTreeMap::new();
    for case in &cases {
        groups.entry((case.scheme, case.grade.word())).or_default().push(case.ratio);
        groups.entry(("~ all schemes", case.grade.word())).or_default().push(case.ratio);
    }
    for ((scheme, grade), ratios) in &mut groups {
        if *grade == "unbounded" {
            println!("| {scheme} | {grade} | {} | | | | |", ratios.len());
            continue;
        }
        ratios.sort_by(f64::total_cmp);
        let held = ratios.iter().filter(|ratio| **ratio <= 1.0).count();
        // Tightness is bound over true error: the reciprocal of the ratio.
        let tightness = |share: f64| 1.0 / ratios[((1.0 - share) * (ratios.len() - 1) as f64) as usize];
        println!(
            "| {scheme} | {grade} | {} | {:.2} % | {:.2} | {:.3e} | {:.3} |",
            ratios.len(),
            100.0 * held as f64 / ratios.len() as f64,
            tightness(0.5),
            tightness(0.9),
            ratios.last().copied().unwrap_or(0.0)
        );
    }
    let mut worst: Vec<&Case> = cases.iter().filter(|case| case.grade <= Grade::Converged && case.ratio > 1.0).collect();
    worst.sort_by(|a, b| b.ratio.total_cmp(&a.ratio));
    println!("\nconverged or corroborated bounds that do not hold: {}", worst.len());
    for case in worst.iter().take(25) {
        println!("{:.3} {} {} {}", case.ratio, case.grade.word(), case.scheme, case.text);
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
            if faults.contains("step-beyond-span") || faults.contains("not-finite") {
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
                problem.family, quantity.text, quantity.value, quantity.bound, quantity.why, quantity.estimates
            );
            Some(Case { scheme: scheme.key, grade: quantity.grade, ratio, text })
        })
        .collect()
}
