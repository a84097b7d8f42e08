//! Bounds hold: the coverage study of `tests/benches/coverage.rs` on fewer problems, held to fixed rates.

use halfstep::bound::Grade;

use crate::common::coverage::{Case, cases};

#[test]
fn converged_and_corroborated_bounds_hold_and_are_tight() {
    // Other problems than the first ones of the bench.
    let both: Vec<(Vec<Case>, Vec<Case>)> = (50_000..50_600).map(cases).collect();
    let (quantities, rows): (Vec<_>, Vec<_>) = both.into_iter().unzip();
    hold(&quantities.into_iter().flatten().collect::<Vec<_>>());
    hold(&rows.into_iter().flatten().collect::<Vec<_>>());
}

/// At least 99.5 % of the good bounds hold, none is off by more than a factor of 2, half are tighter than 2.
fn hold(cases: &[Case]) {
    let good: Vec<&Case> = cases.iter().filter(|case| case.grade <= Grade::Converged).collect();
    assert!(good.len() > 2_000, "{}", good.len());
    let broken: Vec<&&Case> = good.iter().filter(|case| case.ratio > 1.0).collect();
    let list: Vec<&str> = broken.iter().map(|case| case.text.as_str()).collect();
    // At least 99.5 % hold, and none is off by more than a factor of 2.
    assert!(broken.len() * 200 <= good.len(), "{} of {}:\n{}", broken.len(), good.len(), list.join("\n"));
    assert!(broken.iter().all(|case| case.ratio <= 2.0), "{}", list.join("\n"));
    let mut tightness: Vec<f64> =
        good.iter().filter(|case| !case.floor && case.ratio > 0.0).map(|case| 1.0 / case.ratio).collect();
    tightness.sort_by(f64::total_cmp);
    assert!(tightness[tightness.len() / 2] < 2.0, "{}", tightness[tightness.len() / 2]);
    let weak: Vec<&Case> = cases.iter().filter(|case| case.grade == Grade::Indicated).collect();
    let held = weak.iter().filter(|case| case.ratio <= 1.0).count();
    assert!(held * 100 >= weak.len() * 98, "{held} of {} indicated bounds hold", weak.len());
}
