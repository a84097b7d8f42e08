//! `issue`: executes studies and writes their reports and records.

use super::arguments::Issue;
use super::console::Console;
use super::fault_text::{IssueError, MOST_FAULTS, tell, tell_troubles};
use super::find::{Found, find};
use super::guard::guard;
use super::progress::Progress;
use super::stages::{self, Executed, Settings};
use super::{source, status::Status};
use crate::bound::{Grade, Outcome};
use crate::fault::{Failure, Faults, Sources, show};
use crate::record::digest::{self, FileDigest, Was};
use crate::record::timing::Timing;
use crate::record::write::{self, NewFile};
use crate::record::{csv, json, register};
use crate::study::block::criteria::Verdict;
use rayon::prelude::*;
use std::path::{Path, PathBuf};
use std::time::Instant;

/// What `issue_one` needs to know beside the study.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Options {
    /// The folder for the reports.
    pub out: PathBuf,
    /// How many studies are issued at a time.
    pub jobs: usize,
    /// What the stages need to know.
    pub settings: Settings,
}

/// An issued study.
#[derive(Debug)]
pub struct Issued {
    /// Where the report stands.
    pub report: PathBuf,
    /// The verdicts of the criteria.
    pub verdicts: Verdicts,
    /// The weakest grade of all quantities; `None` where there is none.
    pub weakest: Option<Grade>,
    /// Warnings and notes, with the files that they lie in.
    pub faults: Faults,
    /// The files that the study was read from.
    pub sources: Sources,
}

/// How many criteria have which verdict.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Verdicts {
    /// Met.
    pub met: usize,
    /// Not met.
    pub not_met: usize,
    /// Undecided.
    pub undecided: usize,
    /// Those that are neither met nor as the study expects.
    pub out_of_order: usize,
}

impl Verdicts {
    fn of(outcome: &Outcome) -> Self {
        let count =
            |verdict| outcome.criteria.iter().filter(|criterion| criterion.verdict == verdict).count();
        Verdicts {
            met: count(Verdict::Met),
            not_met: count(Verdict::NotMet),
            undecided: count(Verdict::Undecided),
            out_of_order: outcome.criteria.iter().filter(|criterion| !criterion.is_in_order()).count(),
        }
    }

    fn words(self) -> String {
        let Verdicts { met, not_met, undecided, out_of_order } = self;
        if met + not_met + undecided == 0 {
            return "no criteria".to_owned();
        }
        let mut text = format!("{met} met, {not_met} not met, {undecided} undecided");
        if not_met + undecided > 0 && out_of_order == 0 {
            text.push_str(" (as expected)");
        }
        text
    }
}

/// The command `issue`.
pub(super) fn issue(asked: &Issue, console: &Console) -> Status {
    let studies = match find(&asked.paths) {
        Ok(studies) => studies,
        Err(troubles) => return tell_troubles(&troubles, console),
    };
    let processors = || std::thread::available_parallelism().map_or(1, std::num::NonZero::get);
    let jobs = asked.jobs.map_or_else(processors, std::num::NonZero::get);
    let options = Options {
        out: asked.out.clone(),
        jobs,
        settings: Settings { templates: asked.templates.clone(), limit: asked.limit.get() },
    };
    let progress = Progress::new(console, asked.quiet);
    let outcomes = match all(&studies, jobs, &progress, &|found, doing| issue_one(found, &options, doing)) {
        Ok(outcomes) => outcomes,
        Err(failure) => {
            console.failure(&failure);
            return Status::Failed;
        }
    };
    let mut status = Status::Well;
    for (found, outcome) in studies.iter().zip(&outcomes) {
        status = status.worst(match outcome {
            Ok(issued) => summarise(found, issued, console),
            Err(error) => tell(error, &found.shown, console),
        });
    }
    if outcomes.iter().any(Result::is_ok)
        && let Err(error) = write_register(&options.out, &options.settings)
    {
        status = status.worst(tell(&error, "register", console));
    }
    status
}

/// Issues a study and tells what is being done.
type IssueOne<'a> = dyn Fn(&Found, &(dyn Fn(&str) + Sync)) -> Result<Issued, IssueError> + Sync + 'a;

/// Does `issue_one` with all studies, `jobs` at a time; the outcomes in the order of the studies.
fn all(
    studies: &[Found],
    jobs: usize,
    progress: &Progress<'_>,
    issue_one: &IssueOne<'_>,
) -> Result<Vec<Result<Issued, IssueError>>, Failure> {
    let pool = rayon::ThreadPoolBuilder::new()
        .num_threads(jobs)
        .build()
        .map_err(|cause| Failure::new("cannot start threads", std::io::Error::other(cause)))?;
    let one = |found: &Found| {
        let started = Instant::now();
        let line = progress.begin(&found.shown);
        let outcome = guard(|| issue_one(found, &|what| line.doing(what)));
        let outcome = outcome.unwrap_or_else(|defect| Err(IssueError::Defect(defect)));
        line.end(started.elapsed(), outcome.is_ok());
        outcome
    };
    Ok(pool.install(|| studies.par_iter().map(one).collect()))
}

/// Issues one study: executes it and writes its report folder. `progress` is told what is being done.
///
/// # Errors
/// [`IssueError`]; the last good report is then as it was.
pub fn issue_one(
    found: &Found,
    options: &Options,
    progress: &(dyn Fn(&str) + Sync),
) -> Result<Issued, IssueError> {
    let started = Instant::now();
    let text = source::read(found)?;
    let study = FileDigest::of(Was::Read, file_name(&found.path), text.as_bytes());
    let executed = stages::execute(found, text, &options.settings, progress)?;
    progress("writing the report");
    let mut files =
        compose(&executed, &study, &|digests| stages::report(&executed, digests, &options.settings))?;
    let timing = Timing { taken: started.elapsed(), jobs: options.jobs };
    files.push(NewFile { path: Timing::FILE.to_owned(), bytes: timing.text().into_bytes() });
    let place = options.out.join(&found.name);
    write::folder(&place, &files)?;
    Ok(Issued {
        report: place.join(REPORT),
        verdicts: Verdicts::of(&executed.outcome),
        weakest: executed.outcome.weakest_grade(),
        faults: executed.faults,
        sources: executed.sources,
    })
}

/// The data files, the report and the record. The report knows the digests of all but itself and the record, the
/// record knows the digests of all but itself.
fn compose(
    executed: &Executed,
    study: &FileDigest,
    report: &dyn Fn(&[FileDigest]) -> Result<String, IssueError>,
) -> Result<Vec<NewFile>, IssueError> {
    let mut files = data_files(&executed.outcome)?;
    let mut digests = executed.read.clone();
    digests.push(study.clone());
    digests.extend(files.iter().map(|file| FileDigest::of(Was::Written, &file.path, &file.bytes)));
    digests.sort();
    let report = report(&digests)?;
    digests.push(FileDigest::of(Was::Written, REPORT, report.as_bytes()));
    let record = record(executed, &study.sha256, &digests)?;
    files.push(NewFile { path: "record.json".to_owned(), bytes: record });
    files.push(NewFile { path: REPORT.to_owned(), bytes: report.into_bytes() });
    Ok(files)
}

const REPORT: &str = "report.html";

/// The name of the study's file: where it stands on this machine is nobody's business.
fn file_name(path: &Path) -> String {
    path.file_name().unwrap_or_default().to_string_lossy().into_owned()
}

fn data_files(outcome: &Outcome) -> Result<Vec<NewFile>, IssueError> {
    let mut files = Vec::new();
    for run in &outcome.runs {
        if let Some(rows) = &run.rows {
            let text = csv::compose(&run.name, rows, run.time_unit.as_deref())?;
            files.push(NewFile { path: json::data_path(&run.name), bytes: text.into_bytes() });
        }
    }
    Ok(files)
}

fn record(executed: &Executed, study_digest: &str, files: &[FileDigest]) -> Result<Vec<u8>, IssueError> {
    let text_of = |model: &crate::model::Model| {
        let at = model.name.at;
        digest::block_text(executed.sources.file(at.file), at).ok_or_else(|| {
            IssueError::Defect(format!("the block of the model {} is not found again", model.name.value))
        })
    };
    let model_texts = executed.models.iter().map(text_of).collect::<Result<Vec<_>, _>>()?;
    Ok(json::compose(&json::Subject {
        study: &executed.study,
        study_digest,
        model_texts: &model_texts,
        models: &executed.models,
        outcome: &executed.outcome,
        shown: &stages::shown,
        control: &stages::step_control,
        files,
    })?)
}

/// Prints the warnings of an issued study and its summary line.
fn summarise(found: &Found, issued: &Issued, console: &Console) -> Status {
    if !issued.faults.is_empty() {
        console.error_text(&show(&issued.faults, &issued.sources, MOST_FAULTS, console.colour));
    }
    let grade = issued
        .weakest
        .map_or_else(|| "no quantities".to_owned(), |grade| format!("weakest grade {}", grade.word()));
    let report = issued.report.display();
    console.print(&format!("{}: {}; {grade}; {report}\n", found.name, issued.verdicts.words()));
    if issued.verdicts.out_of_order == 0 { Status::Well } else { Status::NotInOrder }
}

fn write_register(out: &Path, settings: &Settings) -> Result<(), IssueError> {
    let page = stages::register(&register::collect(out)?, settings)?;
    Ok(write::file(&out.join("index.html"), page.as_bytes())?)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::bound::{RowColumn, Rows};
    use crate::cli::console::Console;
    use crate::record::example;

    fn executed() -> Executed {
        let mut sources = Sources::default();
        sources.add("shaft.md", "```model shaft\nx: 1\n```\n");
        let mut outcome = example::outcome();
        outcome.runs[0].rows = Some(Rows {
            every: "1 s".to_owned(),
            columns: vec![RowColumn {
                name: "z".to_owned(),
                unit: None,
                values: vec![0.5],
                bounds: vec![None],
                grades: vec![Grade::Unbounded],
            }],
            times: vec![0.0],
        });
        Executed {
            study: example::study(),
            sources,
            models: example::models(),
            outcome,
            faults: Faults::new(),
            read: vec![FileDigest::of(Was::Read, "templates/report.html", b"")],
        }
    }

    #[test]
    fn the_report_knows_all_digests_but_its_own_and_the_record_all_but_its_own() {
        let study = FileDigest::of(Was::Read, "shaft.md", b"text");
        let names = |digests: &[FileDigest]| {
            digests.iter().map(|file| file.path.clone()).collect::<Vec<_>>().join(" ")
        };
        let files = compose(&executed(), &study, &|digests| Ok(names(digests))).unwrap();
        let paths: Vec<_> = files.iter().map(|file| file.path.as_str()).collect();
        assert_eq!(paths, ["data/reject.csv", "record.json", "report.html"]);
        let report = String::from_utf8(files[2].bytes.clone()).unwrap();
        assert_eq!(report, "shaft.md templates/report.html data/reject.csv");
        let record: serde_json::Value = serde_json::from_slice(&files[1].bytes).unwrap();
        let listed: Vec<_> = record["files"].as_array().unwrap().iter().map(|file| &file["path"]).collect();
        assert_eq!(listed, ["shaft.md", "templates/report.html", "data/reject.csv", "report.html"]);
        assert_eq!(record["files"][3]["sha256"], digest::sha256(&files[2].bytes).as_str());
        assert_eq!(record["study"]["digest"], digest::sha256(b"text").as_str());
        assert_eq!(record["models"][0]["digest"], digest::sha256(b"x: 1\n").as_str());
    }

    #[test]
    fn a_defect_in_one_study_loses_no_other_and_keeps_the_order() {
        let console = Console::new();
        let found = |name: &str| Found { path: name.into(), shown: name.to_owned(), name: name.to_owned() };
        let studies: Vec<Found> = ["a", "b", "c", "d", "e"].map(found).into();
        let issue_one = |found: &Found, doing: &(dyn Fn(&str) + Sync)| {
            doing("nothing");
            assert!(found.name != "b" && found.name != "e", "study {}", found.name);
            Ok(Issued {
                report: found.path.clone(),
                verdicts: Verdicts::default(),
                weakest: None,
                faults: Faults::new(),
                sources: Sources::default(),
            })
        };
        for jobs in [1, 3] {
            let outcomes = all(&studies, jobs, &Progress::new(&console, true), &issue_one).unwrap();
            let words: Vec<String> = outcomes
                .iter()
                .map(|outcome| match outcome {
                    Ok(issued) => issued.report.display().to_string(),
                    Err(IssueError::Defect(what)) => what.clone(),
                    Err(other) => panic!("{other:?}"),
                })
                .collect();
            assert_eq!(words, ["a", "study b", "c", "d", "study e"]);
        }
    }

    #[test]
    fn verdicts_are_counted_in_words() {
        let verdicts = |met, not_met, undecided, out_of_order| {
            Verdicts { met, not_met, undecided, out_of_order }.words()
        };
        assert_eq!(verdicts(0, 0, 0, 0), "no criteria");
        assert_eq!(verdicts(2, 0, 0, 0), "2 met, 0 not met, 0 undecided");
        assert_eq!(verdicts(2, 1, 1, 1), "2 met, 1 not met, 1 undecided");
        assert_eq!(verdicts(0, 1, 0, 0), "0 met, 1 not met, 0 undecided (as expected)");
    }
}
