//! Where the command meets the stages: each function here calls one group of them and does nothing else.

use super::fault_text::IssueError;
use super::find::Found;
use super::pipeline::{self, Checked};
use crate::bound::{Grade, Outcome, Quantity, RunOutcome, Steps};
use crate::fault::{Failure, Faults, Sources};
use crate::figure::digits;
use crate::model::Model;
use crate::record::digest::{FileDigest, Was};
use crate::record::json::StepControl;
use crate::record::register::Entry;
use crate::report::{self, RegisterEntry, ReportInputs, ShownText, Templates};
use crate::scheme::stability::Stability;
use crate::scheme::{self, Scheme, control, order};
use crate::study::Study;
use crate::study::block::criteria::Verdict;
use std::path::PathBuf;

/// What the stages need to know beside the study.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Settings {
    /// A folder with the user's own templates.
    pub templates: Option<PathBuf>,
    /// The largest number of steps of a run.
    pub limit: u64,
}

/// An executed study: all that its report and its record are made of.
#[derive(Debug)]
pub struct Executed {
    /// The study as read.
    pub study: Study,
    /// The files that it was read from.
    pub sources: Sources,
    /// The checked models.
    pub models: Vec<Model>,
    /// What came of the runs.
    pub outcome: Outcome,
    /// Warnings and notes.
    pub faults: Faults,
    /// The files read beside the study itself.
    pub read: Vec<FileDigest>,
}

/// Reads and checks a study as far as that needs no integration: its warnings and notes, with the files that they
/// lie in.
///
/// # Errors
/// [`IssueError::Study`] with all faults where one is an error.
pub fn check(found: &Found, text: String) -> Result<(Faults, Sources), IssueError> {
    let mut sources = Sources::default();
    let file = sources.add(found.shown.as_str(), text);
    let mut faults = Faults::new();
    match pipeline::check(&sources, file, None, &mut faults) {
        Some(_) if !faults.any_error() => Ok((faults, sources)),
        _ => Err(wrong(faults, sources)),
    }
}

/// Executes a study: from its text to a bound for every quantity. `progress` is told what is being done.
///
/// # Errors
/// [`IssueError`] of any kind.
pub fn execute(
    found: &Found,
    text: String,
    settings: &Settings,
    progress: &(dyn Fn(&str) + Sync),
) -> Result<Executed, IssueError> {
    let mut sources = Sources::default();
    let file = sources.add(found.shown.as_str(), text);
    let mut faults = Faults::new();
    progress("checking");
    let Some(checked) = pipeline::check(&sources, file, Some(settings.limit), &mut faults) else {
        return Err(wrong(faults, sources));
    };
    progress("integrating");
    let outcome = pipeline::execute(&checked, &mut faults, &|run| progress(&format!("run {run} is done")));
    match outcome {
        Some(outcome) if !faults.any_error() => {
            let Checked { study, models, .. } = checked;
            let (_, read) = templates(settings)?;
            Ok(Executed { study, sources, models, outcome, faults, read })
        }
        _ => Err(wrong(faults, sources)),
    }
}

/// The faults of a study that cannot be issued. Where no stage has named one, the stage itself is wrong.
fn wrong(faults: Faults, sources: Sources) -> IssueError {
    if faults.any_error() {
        IssueError::Study(Box::new((faults, sources)))
    } else {
        IssueError::Defect("a stage gave nothing and named no error".to_owned())
    }
}

/// The templates: built in, with those of the user's folder laid over. Returns the files read beside.
///
/// # Errors
/// [`IssueError`] where the folder cannot be read or a template in it is wrong.
pub fn templates(settings: &Settings) -> Result<(Templates, Vec<FileDigest>), IssueError> {
    let Some(folder) = &settings.templates else {
        return Ok((Templates::builtin()?, Vec::new()));
    };
    let templates = Templates::with_folder(folder)?;
    let mut digests = Vec::new();
    for name in Templates::names() {
        let path = folder.join(name);
        if path.is_file() {
            let bytes = std::fs::read(&path)
                .map_err(|cause| Failure::new(format!("cannot read {}", path.display()), cause))?;
            digests.push(FileDigest::of(Was::Read, format!("templates/{name}"), &bytes));
        }
    }
    Ok((templates, digests))
}

/// The report as HTML. `files` are the digests of the study and of all files read and written but the report
/// and the record.
///
/// # Errors
/// [`IssueError`] where a template of the user's is wrong or cannot be read.
pub fn report(executed: &Executed, files: &[FileDigest], settings: &Settings) -> Result<String, IssueError> {
    let (templates, _) = templates(settings)?;
    let digests: Vec<(String, String)> =
        files.iter().map(|file| (file.path.clone(), file.sha256.clone())).collect();
    let at = executed.study.front.title.at;
    let file = executed.sources.file(at.file);
    let tool = format!("halfstep {}, numerics {}", env!("CARGO_PKG_VERSION"), crate::record::NUMERICS);
    let figures = report::figures(&executed.study, &executed.models, &executed.outcome);
    let inputs = ReportInputs {
        study: &executed.study,
        models: &executed.models,
        outcome: &executed.outcome,
        figures: &figures,
        text: &file.text,
        text_name: file.name.rsplit('/').next().unwrap_or(&file.name),
        digests: &digests,
        tool: &tool,
        norm: NORM,
        show: &show_text,
    };
    Ok(report::compose(&inputs, &templates)?)
}

/// How an adaptive run measures a local error, as a sentence.
const NORM: &str = "The local error of a step is the largest, over the states, of the error estimate over the \
    tolerance times the sum of the state's size and its typical scale.";

/// A quantity as the report writes it.
fn show_text(quantity: &Quantity) -> ShownText {
    let unit = quantity.unit.as_deref();
    let value = quantity.value.unwrap_or(0.0);
    let shown = match quantity.bound {
        Some(_) if quantity.whole => digits::shown(value, 0.0),
        Some(bound) => digits::shown(value, bound),
        None => digits::rough(value),
    };
    let joined =
        if quantity.whole || quantity.bound.is_none() { shown.value_text(unit) } else { shown.text(unit) };
    ShownText {
        value: shown.value_text(None),
        bound: quantity.bound.map(|_| shown.bound_text(None)),
        joined,
        plain: shown.value_text(unit),
    }
}

/// The text of a quantity as the report shows it: value, bound and unit.
pub fn shown(quantity: &Quantity) -> String {
    match (quantity.value, quantity.bound) {
        (Some(_), Some(_)) => show_text(quantity).joined,
        (Some(_), None) => format!("about {}, without a bound", show_text(quantity).joined),
        (None, _) => "no value".to_owned(),
    }
}

/// How an adaptive run chose its steps; `None` for a fixed step.
pub fn step_control(run: &RunOutcome) -> Option<StepControl> {
    let Steps::Adaptive { .. } = run.steps else { return None };
    let lower = run.scheme.embedded_order.map_or(run.scheme.order, |order| order.min(run.scheme.order));
    let constants = [
        ("order of the error estimate", f64::from(lower) + 1.0),
        ("safety", control::SAFETY),
        ("smallest factor", control::SMALLEST_FACTOR),
        ("largest factor", control::LARGEST_FACTOR),
        ("largest step, share of the span", control::LARGEST_SHARE),
        ("proportional", control::PROPORTIONAL),
        ("integral", control::INTEGRAL),
    ];
    Some(StepControl {
        norm: "largest over the states of |local error| / (tolerance * (larger of |y| at both ends + scale))"
            .to_owned(),
        constants: constants.map(|(name, value)| (name.to_owned(), value)).to_vec(),
    })
}

/// The register as HTML.
///
/// # Errors
/// [`IssueError`] where the template is wrong.
pub fn register(entries: &[Entry], settings: &Settings) -> Result<String, IssueError> {
    let (templates, _) = templates(settings)?;
    let list: Vec<RegisterEntry> = entries.iter().map(register_entry).collect();
    Ok(report::compose_register(&list, &templates)?)
}

fn register_entry(entry: &Entry) -> RegisterEntry {
    let verdicts = [Verdict::Met, Verdict::NotMet, Verdict::Undecided].map(|verdict| {
        let is = |found: &&(String, bool)| found.0 == verdict.words();
        let count = entry.verdicts.iter().filter(is).count();
        (verdict, count, entry.verdicts.iter().filter(is).filter(|found| found.1).count())
    });
    let weakest = [Grade::Unbounded, Grade::Indicated, Grade::Converged, Grade::Corroborated]
        .into_iter()
        .find(|grade| entry.grades.iter().any(|found| found == grade.word()));
    RegisterEntry {
        folder: entry.name.rsplit_once('/').map_or("", |(folder, _)| folder).to_owned(),
        number: entry.number.clone(),
        title: entry.title.clone(),
        revision: entry.revision.clone(),
        date: entry.date.clone(),
        verdicts: verdicts.to_vec(),
        weakest,
        link: format!("{}/report.html", percent(&entry.name)),
    }
}

/// A path as part of an address: all but unreserved characters and `/` percent-encoded (RFC 3986, 2.1).
fn percent(path: &str) -> String {
    let mut text = String::new();
    for byte in path.bytes() {
        if byte.is_ascii_alphanumeric() || b"-._~/".contains(&byte) {
            text.push(char::from(byte));
        } else {
            text.push('%');
            text.extend(
                [byte >> 4, byte & 15].map(|half| char::from(b"0123456789ABCDEF"[usize::from(half)])),
            );
        }
    }
    text
}

/// All schemes in the order in which they are listed.
pub fn schemes() -> &'static [Scheme] {
    scheme::all()
}

/// What is computed of a scheme, a line each: the error that remains, where it is stable.
pub fn properties(scheme: &Scheme) -> Vec<String> {
    let exact = &scheme.tableau.exact;
    let mut lines = Vec::new();
    if let Some(error) = order::principal_error(exact, &exact.b) {
        lines.push(format!(
            "Leading error term: two-norm {:.3e}, largest coefficient {:.3e}",
            error.two_norm, error.max_norm
        ));
    }
    let mut stable = |title: &str, weights| {
        let stability = Stability::of_weights(exact, weights);
        lines.push(format!(
            "{title}: step times eigenvalue from {:.4} to 0 on the real axis, to {:.4} i on the imaginary axis",
            stability.real_limit(),
            stability.imaginary_limit()
        ));
    };
    stable("Stable", &exact.b);
    if let Some(b_hat) = &exact.b_hat {
        stable("Stable with the embedded weights", b_hat);
    }
    lines
}
