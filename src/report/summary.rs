//! The head of a report: title block and verdict line.

use super::ReportError;
use super::citation::Citations;
use super::view::{GradeView, Sheet, SheetCell, Unbounded, VerdictCount, VerdictLine};
use crate::bound::{Grade, Outcome};
use crate::study::FrontMatter;
use crate::study::block::criteria::Verdict;

/// The title block.
pub(super) fn sheet(front: &FrontMatter) -> Sheet {
    let mut cells: Vec<SheetCell> = [
        ("number", "Number"),
        ("revision", "Revision"),
        ("date", "Date"),
        ("prepared", "Prepared by"),
        ("checked", "Checked by"),
        ("approved", "Approved by"),
    ]
    .into_iter()
    .map(|(key, label)| SheetCell { key, label, text: stated(front, key) })
    .collect();
    if let Some(client) = stated(front, "client") {
        cells.push(SheetCell { key: "client", label: "Client", text: Some(client) });
    }
    Sheet { title: front.title.value.clone(), cells, caution: stated(front, "caution") }
}

/// The verdict line.
pub(super) fn verdict(outcome: &Outcome, citations: &Citations) -> Result<VerdictLine, ReportError> {
    let mut unbounded = Vec::new();
    for run in &outcome.runs {
        for quantity in run.quantities.iter().filter(|q| q.bound.is_none() || q.value.is_none()) {
            let name = format!("{}.{}", run.name, quantity.name);
            unbounded.push(Unbounded {
                line: citations.line(&name)?.to_owned(),
                name,
                has_value: quantity.value.is_some(),
                why: quantity.why.clone(),
            });
        }
    }
    let unbounded_more = unbounded.len().saturating_sub(UNBOUNDED_SHOWN);
    unbounded.truncate(UNBOUNDED_SHOWN);
    let criteria = outcome.criteria.iter().map(|c| (c.verdict, c.expect.as_ref().map(|(v, _)| *v)));
    Ok(VerdictLine {
        criteria: outcome.criteria.len(),
        counts: counts(&criteria),
        in_order: outcome.criteria.iter().all(crate::bound::CriterionOutcome::is_in_order),
        weakest: outcome.weakest_grade().map(grade),
        quantities: outcome.runs.iter().map(|run| run.quantities.len()).sum(),
        unbounded,
        unbounded_more,
    })
}

/// Counts verdicts, each given with the one that the study expects: met, not met, undecided.
pub(super) fn counts(
    verdicts: &(impl Iterator<Item = (Verdict, Option<Verdict>)> + Clone),
) -> Vec<VerdictCount> {
    [Verdict::Met, Verdict::NotMet, Verdict::Undecided]
        .into_iter()
        .map(|verdict| {
            let of = verdicts.clone().filter(|(came, _)| *came == verdict);
            VerdictCount {
                word: verdict.words(),
                class: class(verdict),
                count: of.clone().count(),
                expected: of.filter(|(came, expected)| *expected == Some(*came)).count(),
            }
        })
        .collect()
}

/// A verdict in one word.
pub(super) fn class(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Met => "met",
        Verdict::NotMet => "not-met",
        Verdict::Undecided => "undecided",
    }
}

/// A grade with its plain meaning.
pub(super) fn grade(grade: Grade) -> GradeView {
    let meaning = match grade {
        Grade::Corroborated => "two estimates of the error that share no assumption agree",
        Grade::Converged => "on three meshes the error shrinks as the order of the scheme predicts",
        Grade::Indicated => "the error shrinks from mesh to mesh, but not yet as regularly as theory expects",
        Grade::Unbounded => "nothing is claimed about the numerical error",
    };
    GradeView { word: grade.word(), meaning }
}

/// How many quantities without a bound the verdict line names: more would push the study off the first page.
const UNBOUNDED_SHOWN: usize = 12;

fn stated(front: &FrontMatter, key: &str) -> Option<String> {
    front.get(key).map(str::trim).filter(|text| !text.is_empty()).map(str::to_owned)
}
