//! Draws the charts of a study, and the convergence and stability charts of its runs.

use super::{ChartFigure, Figures, RunFigures, tables};
use crate::bound::{Curve, Grade, Outcome, Quantity, RowColumn, RunOutcome};
use crate::figure::chart::{self, Chart, Series};
use crate::figure::convergence::{self, Errors};
use crate::figure::{digits, stability};
use crate::model::Model;
use crate::scheme::stability::Stability;
use crate::study::Study;
use crate::study::block::chart::{ChartBlock, Shows, Trace};

/// Points on the outline of a stability region.
const OUTLINE: u32 = 240;
/// Most quantities in the convergence chart of a run.
const MOST_QUANTITIES: usize = 7;

/// A drawn chart: the SVG, and what the reader should know of the numbers in it.
struct Drawing {
    svg: String,
    note: String,
}

/// All figures of a study, from what came of its runs.
pub fn figures(study: &Study, models: &[Model], outcome: &Outcome) -> Figures {
    let charts = study.blocks.charts.iter().map(|block| {
        let drawing = draw(study, block, outcome).unwrap_or_else(|| Drawing {
            svg: String::new(),
            note: "nothing can be drawn: see the ledger".to_owned(),
        });
        figure(&block.name.value, title(block), drawing)
    });
    let runs = outcome.runs.iter().map(|run| RunFigures {
        convergence: run_convergence(run).map(|drawing| {
            let caption = "Error of each quantity against the largest step of its mesh. The thin line has the slope of the scheme's order".to_owned();
            figure(&run.name, caption, drawing)
        }),
        stability: Some(figure(
            &run.name,
            format!("Region of absolute stability of {}, with step times eigenvalues of the Jacobian along the run", run.scheme.name),
            run_stability(run),
        )),
    });
    Figures { charts: charts.collect(), tables: tables::tables(study, models, outcome), runs: runs.collect() }
}

fn figure(name: &str, caption: String, drawing: Drawing) -> ChartFigure {
    let note = (!drawing.note.is_empty()).then_some(drawing.note);
    ChartFigure { name: name.to_owned(), svg: drawing.svg, caption, note }
}

fn draw(study: &Study, block: &ChartBlock, outcome: &Outcome) -> Option<Drawing> {
    let id = format!("chart-{}", block.name.value);
    let title = title(block);
    match &block.shows {
        Shows::Curves { lines, points, against } => {
            let against = against.as_ref().map_or("t", |text| text.value.as_str());
            curves(study, block, &id, &title, (lines, points, against), outcome)
        }
        Shows::Convergence(quantities) => {
            let list: Vec<(&RunOutcome, &Quantity, String)> = quantities
                .iter()
                .filter_map(|name| outcome.quantity(&name.value).map(|(run, q)| (run, q, name.value.clone())))
                .collect();
            convergence_chart(&id, &title, &list)
        }
        Shows::Stability(run) => {
            let run = outcome.runs.iter().find(|candidate| candidate.name == run.value)?;
            Some(stability_chart(&id, &title, run))
        }
    }
}

/// The title of a chart, or its name where it has none.
fn title(block: &ChartBlock) -> String {
    block.title.as_ref().map_or_else(|| block.name.value.clone(), |title| title.value.clone())
}

fn curves(
    study: &Study,
    block: &ChartBlock,
    id: &str,
    title: &str,
    (lines, points, against): (&[Trace], &[Trace], &str),
    outcome: &Outcome,
) -> Option<Drawing> {
    let mut series = Vec::new();
    let mut notes: Vec<String> = Vec::new();
    let mut first: Option<(&RunOutcome, &Curve)> = None;
    let several_runs =
        lines.iter().chain(points).any(|trace| trace.run.value != lines.first().map_or("", |l| &l.run.value));
    let label = |trace: &Trace| {
        trace.label.as_ref().map_or_else(
            || {
                if several_runs {
                    format!("{}.{}", trace.run.value, trace.expression.value)
                } else {
                    trace.expression.value.clone()
                }
            },
            |label| label.value.clone(),
        )
    };
    for trace in lines {
        let run = outcome.runs.iter().find(|run| run.name == trace.run.value)?;
        let curve = run
            .curves
            .iter()
            .find(|curve| curve.expression == trace.expression.value && curve.against == against)?;
        first = first.or(Some((run, curve)));
        notes.push(curve_note(&label(trace), curve));
        series.push(Series { label: label(trace), points: curve.points.clone(), marks: false });
    }
    let mut x_unit = first.and_then(|(_, curve)| curve.against_unit.clone());
    let mut y_unit = first.and_then(|(_, curve)| curve.unit.clone());
    for trace in points {
        let run = outcome.runs.iter().find(|run| run.name == trace.run.value)?;
        let rows = run.rows.as_ref()?;
        let column = |name: &str| rows.columns.iter().find(|column| column.name == name);
        let y: &RowColumn = column(&trace.expression.value)?;
        let x = if against == "t" { rows.times.clone() } else { column(against)?.values.clone() };
        if first.is_none() {
            x_unit = if against == "t" { run.time_unit.clone() } else { column(against)?.unit.clone() };
            y_unit.clone_from(&y.unit);
        }
        series.push(Series {
            label: format!("{} (rows)", label(trace)),
            points: x.into_iter().zip(y.values.iter().copied()).collect(),
            marks: true,
        });
    }
    let same: Vec<&str> = lines.iter().chain(points).map(|trace| trace.expression.value.as_str()).collect();
    let y_name =
        if same.windows(2).all(|pair| pair[0] == pair[1]) { same.first().copied().unwrap_or("") } else { "" };
    let about = first.and_then(|(run, _)| {
        let model = &study.blocks.models[run.model];
        let state = model.states.iter().find(|entry| entry.name.value == y_name)?;
        state.about.as_ref().map(|about| about.value.clone())
    });
    let y_title = block.y_axis.as_ref().map_or_else(
        || axis_title(about.as_deref().unwrap_or(""), y_name, y_unit.as_deref()),
        |title| named(&title.value, y_unit.as_deref()),
    );
    let x_title = block.x_axis.as_ref().map_or_else(
        || axis_title(if against == "t" { "Time" } else { "" }, against, x_unit.as_deref()),
        |title| named(&title.value, x_unit.as_deref()),
    );
    let limits = limits(lines, outcome, y_name);
    let list: Vec<&str> = series.iter().map(|series| series.label.as_str()).collect();
    let description = format!("{}: {} against {x_title}", y_title, list.join(", "));
    let chart = Chart {
        id: id.to_owned(),
        title: title.to_owned(),
        description,
        x_title,
        y_title,
        series,
        limits,
        over_time: against == "t",
    };
    Some(Drawing { svg: chart::draw(&chart), note: notes.join("; ") })
}

/// A title as the study gives it, with the unit where it names none.
fn named(title: &str, unit: Option<&str>) -> String {
    match unit {
        Some(unit) if !title.contains('/') && !title.contains('(') => format!("{title} / {unit}"),
        _ => title.to_owned(),
    }
}

/// `Level z / m`: what, symbol, unit, as ISO 80000-1 advises.
fn axis_title(about: &str, symbol: &str, unit: Option<&str>) -> String {
    // A long explanation is no axis title.
    let about = if about.chars().count() > 36 { "" } else { about };
    let mut text = about.to_owned();
    if let Some(first) = about.chars().next() {
        text = first.to_uppercase().chain(about.chars().skip(1)).collect();
    }
    for part in [symbol, unit.map_or("", |_| "/"), unit.unwrap_or("")] {
        if !part.is_empty() {
            if !text.is_empty() {
                text.push(' ');
            }
            text.push_str(part);
        }
    }
    text
}

/// The limits of criteria on the highest or lowest value of the one expression that a chart shows.
fn limits(lines: &[Trace], outcome: &Outcome, expression: &str) -> Vec<(f64, String)> {
    let mut list: Vec<(f64, String)> = Vec::new();
    for criterion in &outcome.criteria {
        let Some((run, quantity)) = outcome.quantity(&criterion.quantity) else {
            continue;
        };
        let extreme = ["highest ", "lowest ", "final "].iter().any(|kind| {
            quantity.text.strip_prefix(kind).is_some_and(|read| !expression.is_empty() && read == expression)
        });
        if extreme && lines.iter().any(|trace| trace.run.value == run.name) {
            let entry = (
                criterion.limit,
                format!("{} {}", criterion.name, criterion.limit_text.replace('-', "\u{2212}")),
            );
            if !list.iter().any(|(limit, _)| *limit == entry.0) {
                list.push(entry);
            }
        }
    }
    list
}

fn curve_note(label: &str, curve: &Curve) -> String {
    let unit = curve.unit.as_ref().map_or_else(String::new, |unit| format!(" {unit}"));
    match (curve.bound, curve.grade) {
        (Some(bound), grade) if grade != Grade::Unbounded => {
            format!(
                "{label}: estimated bound along the curve {}{unit} ({})",
                digits::size(bound),
                grade.word()
            )
        }
        _ => format!("{label}: no bound along the whole curve"),
    }
}

/// The convergence chart of a run's quantities.
fn run_convergence(run: &RunOutcome) -> Option<Drawing> {
    let list: Vec<(&RunOutcome, &Quantity, String)> = run
        .quantities
        .iter()
        .filter(|quantity| !quantity.whole)
        .map(|quantity| (run, quantity, quantity.name.clone()))
        .take(MOST_QUANTITIES)
        .collect();
    let title = format!("Convergence of run {}", run.name);
    convergence_chart(&format!("convergence-{}", run.name), &title, &list)
}

/// Errors on each mesh relative to the value, against the largest step. The errors are those of the halving where it
/// gives one: distance from the extrapolated limit.
fn convergence_chart(id: &str, title: &str, list: &[(&RunOutcome, &Quantity, String)]) -> Option<Drawing> {
    let mut errors = Vec::new();
    let mut hidden: Vec<&str> = Vec::new();
    for (run, quantity, label) in list {
        let estimates = &quantity.estimates;
        let (Some(value), Some(error)) = (quantity.value, estimates.halving) else {
            hidden.push(label);
            continue;
        };
        let limit = value - error;
        let size = if limit == 0.0 { 1.0 } else { limit.abs() };
        let points = run
            .meshes
            .iter()
            .zip(&estimates.values)
            .filter_map(|(mesh, value)| Some((mesh.largest, ((*value)? - limit).abs() / size)))
            .collect();
        errors.push(Errors { label: label.clone(), points, order: estimates.formal_order });
    }
    let unit = list.first().and_then(|(run, ..)| run.time_unit.clone());
    let x_title = axis_title("Largest step", "h", unit.as_deref());
    let description =
        "Relative distance from the extrapolated limit on three meshes, against the largest step";
    let svg = convergence::draw(id, title, description, &x_title, &errors)?;
    let note = if hidden.is_empty() {
        String::new()
    } else {
        format!(
            "without a slope to draw (differences at rounding level or not monotone): {}",
            hidden.join(", ")
        )
    };
    Some(Drawing { svg, note })
}

/// The stability chart of a run.
fn run_stability(run: &RunOutcome) -> Drawing {
    let title = format!("Stability region of {} and run {}", run.scheme.name, run.name);
    stability_chart(&format!("stability-{}", run.name), &title, run)
}

fn stability_chart(id: &str, title: &str, run: &RunOutcome) -> Drawing {
    let exact = &run.scheme.tableau.exact;
    let region = Stability::of_weights(exact, &exact.b);
    let points: Vec<(f64, f64)> = run.spectrum.iter().map(|point| (point.re, point.im)).collect();
    let description = "The region where the scheme damps a linear problem, with step times eigenvalue of the Jacobian along the run";
    let (svg, outside) = stability::draw(id, title, description, &region.boundary(OUTLINE), &points);
    let unstable =
        points.iter().filter(|(re, im)| *re < 0.0 && region.amplification((*re, *im)) > 1.0 + 1e-9).count();
    let mut note = match (points.len(), unstable) {
        (0, _) => "the model has too many states for its eigenvalues to be shown".to_owned(),
        (all, 0) => format!(
            "all {all} damped eigenvalues sampled along the run lie in the region or decay is not asked of them"
        ),
        (all, n) => format!(
            "{n} of {all} sampled eigenvalues with a negative real part lie outside the region: there the scheme does not damp what the model damps"
        ),
    };
    if outside > 0 {
        note = format!("{note}; {outside} lie beyond the frame");
    }
    Drawing { svg, note }
}
