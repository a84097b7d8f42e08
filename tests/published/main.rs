//! Compares bounded numbers with what others printed: abs(ours - printed) <= bound + half a unit of the last digit.
//!
//! Every `*.toml` here lists printed values with their sources, every `*.md` is the study that computes them.
//! Differences are exact ratios, so that thirty printed digits count for thirty. `cargo test --test published --
//! --nocapture` prints the true error over the bound of every number, the worst first.

mod decimal;
mod sheet;

use decimal::Printed;
use halfstep::bound::{Grade, Outcome, Quantity};
use sheet::{Check, Sheet};
use std::collections::{BTreeMap, BTreeSet};

/// True errors below so many units in the last place say nothing about a bound's looseness.
const ROUNDINGS: f64 = 100.0;

/// Issues a study of this folder as far as its numbers.
fn evaluate(name: &str) -> Result<Outcome, String> {
    let path = sheet::folder().join(format!("{name}.md"));
    let text = std::fs::read_to_string(&path).map_err(|error| format!("{}: {error}", path.display()))?;
    let (_, outcome) = halfstep::cli::pipeline::evaluate(&format!("{name}.md"), &text)?;
    Ok(outcome)
}

/// The outcomes of all studies that the sheets name, each computed once.
fn outcomes(sheets: &[(String, Sheet)], exact: bool) -> Result<BTreeMap<String, Outcome>, String> {
    let wanted = sheets.iter().filter(|(_, sheet)| sheet.relative.is_some() == exact);
    let names: BTreeSet<&String> =
        wanted.flat_map(|(_, sheet)| sheet.checks.iter().map(|check| &check.study)).collect();
    names.into_iter().map(|name| Ok((name.clone(), evaluate(name)?))).collect()
}

/// The quantity of an entry, its value and its printed value.
fn find<'a>(
    outcomes: &'a BTreeMap<String, Outcome>,
    check: &Check,
) -> Result<(&'a Quantity, f64, Printed), String> {
    let outcome = outcomes.get(&check.study).ok_or("the study was not computed")?;
    let (_, quantity) = outcome.quantity(&check.quantity).ok_or("the study has no such quantity")?;
    let value = quantity.value.ok_or_else(|| format!("there is no value: {}", quantity.why))?;
    Ok((quantity, value, decimal::read(&check.printed)?))
}

/// One line of the table.
struct Line {
    ratio: f64,
    text: String,
}

/// Holds one bounded number against its printed value.
fn compare(sheet: &Sheet, check: &Check, outcomes: &BTreeMap<String, Outcome>) -> Result<Line, String> {
    let (quantity, value, printed) = find(outcomes, check)?;
    if check.unit != quantity.unit {
        return Err(format!("it is printed in {:?}, we give {:?}", check.unit, quantity.unit));
    }
    let bound = match quantity.bound {
        Some(bound) if quantity.grade < Grade::Unbounded => bound,
        _ => return Err(format!("it has no bound: {}", quantity.why)),
    };
    let error = decimal::distance(value, &printed)?;
    if error > decimal::exact(bound)? + printed.half_unit.clone() {
        let error = decimal::near(&error);
        return Err(format!("{value:e} is {error:e} away from {}, its bound is {bound:e}", check.printed));
    }
    let error = decimal::near(&error);
    let loose = check.loose.or(sheet.loose).ok_or("no looseness is given")?;
    let tells = error > ROUNDINGS * f64::EPSILON * value.abs()
        && error > quantity.estimates.rounding
        && error > decimal::near(&printed.half_unit);
    if tells && bound > loose * error {
        let times = bound / error;
        return Err(format!(
            "its bound {bound:e} is {times:.1} times the true error {error:e}, at most {loose} is asked"
        ));
    }
    let mark = if tells { "" } else { "  (true error at rounding level)" };
    let grade = quantity.grade.word();
    let name = format!("{} {}", check.study, check.quantity);
    Ok(Line { ratio: error / bound, text: format!("{name:44} {error:10.2e} {bound:10.2e}  {grade}{mark}") })
}

#[test]
fn every_entry_names_its_source_and_counts_its_digits() {
    let mut wrong = Vec::new();
    for (name, sheet) in sheet::read().unwrap() {
        for check in &sheet.checks {
            for flaw in sheet::flaws(&sheet, check) {
                wrong.push(format!("{name}.toml: {} {}: {flaw}", check.study, check.quantity));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn every_study_here_is_checked() {
    let sheets = sheet::read().unwrap();
    let checked: BTreeSet<&str> =
        sheets.iter().flat_map(|(_, sheet)| sheet.checks.iter().map(|check| check.study.as_str())).collect();
    let studies = sheet::names("md").unwrap();
    let studies: BTreeSet<&str> = studies.iter().map(String::as_str).collect();
    assert_eq!(studies, checked);
}

#[test]
fn printed_values_lie_within_our_bounds_and_the_bounds_are_tight() {
    let sheets = sheet::read().unwrap();
    let outcomes = outcomes(&sheets, false).unwrap();
    let (mut lines, mut wrong) = (Vec::new(), Vec::new());
    for (name, sheet) in sheets.iter().filter(|(_, sheet)| sheet.relative.is_none()) {
        for check in &sheet.checks {
            match compare(sheet, check, &outcomes) {
                Ok(line) => lines.push(line),
                Err(why) => wrong.push(format!("{name}.toml: {} {}: {why}", check.study, check.quantity)),
            }
        }
    }
    lines.sort_by(|a, b| b.ratio.total_cmp(&a.ratio));
    println!("{:>8}  {:44} {:>10} {:>10}  grade", "ratio", "quantity", "true error", "bound");
    for line in &lines {
        println!("{:8.4}  {}", line.ratio, line.text);
    }
    assert!(wrong.is_empty(), "{} of {} fail:\n{}", wrong.len(), wrong.len() + lines.len(), wrong.join("\n"));
}

#[test]
fn every_scheme_takes_its_steps_as_its_formula_says() {
    let sheets = sheet::read().unwrap();
    let outcomes = outcomes(&sheets, true).unwrap();
    let mut wrong = Vec::new();
    for (name, sheet) in &sheets {
        let Some(relative) = sheet.relative else { continue };
        for check in &sheet.checks {
            let found = find(&outcomes, check).and_then(|(_, value, printed)| {
                let size = check.size.map_or_else(|| decimal::near(&printed.value).abs(), f64::abs);
                Ok((value, decimal::near(&decimal::distance(value, &printed)?) / size))
            });
            match found {
                Ok((_, far)) if far <= relative => (),
                Ok((value, far)) => wrong.push(format!(
                    "{name}.toml: {} {}: {value:e} is {far:e} of its size away from {}",
                    check.study, check.quantity, check.printed
                )),
                Err(why) => wrong.push(format!("{name}.toml: {} {}: {why}", check.study, check.quantity)),
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
