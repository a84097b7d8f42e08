//! `record.json`: what the report says, for programs, as canonical JSON (RFC 8785).

use super::digest::{self, FileDigest};
use super::number::{Number, RecordError, bits, finite, finite_option};
use super::{NUMERICS, shape};
use crate::bound::{CriterionOutcome, Outcome, Quantity, RunOutcome, Steps};
use crate::model::Model;
use crate::study::Study;
use crate::study::block::criteria::Relation;
use crate::study::block::model::{ParameterEntry, Start};
use crate::unit::Value;

/// The name of this shape of record. A reader refuses a name that it does not know.
pub const FORMAT: &str = "halfstep-record/1";

/// What a record is made of.
#[derive(Clone, Copy)]
pub struct Subject<'a> {
    /// The study as read.
    pub study: &'a Study,
    /// SHA-256 of the study's file.
    pub study_digest: &'a str,
    /// The text of each model block, in the order of `models` ([`digest::block_text`]).
    pub model_texts: &'a [String],
    /// The checked models.
    pub models: &'a [Model],
    /// What came of the runs.
    pub outcome: &'a Outcome,
    /// The text of a quantity as the report shows it: value, bound and unit.
    pub shown: &'a dyn Fn(&Quantity) -> String,
    /// How an adaptive run chose its steps; `None` for a run with a fixed step.
    pub control: &'a dyn Fn(&RunOutcome) -> Option<StepControl>,
    /// The files read and written, but for the record itself.
    pub files: &'a [FileDigest],
}

/// How the steps of an adaptive run were chosen.
#[derive(Clone, Debug, PartialEq)]
pub struct StepControl {
    /// The norm of the local error, in words.
    pub norm: String,
    /// The constants of the controller by name.
    pub constants: Vec<(String, f64)>,
}

/// The record as canonical JSON.
///
/// # Errors
/// [`RecordError::NotFinite`] with the place of a NaN or an infinity.
pub fn compose(subject: &Subject<'_>) -> Result<Vec<u8>, RecordError> {
    let Subject { models, outcome, .. } = *subject;
    let mut files = subject.files.to_vec();
    files.sort();
    let record = shape::Record {
        format: FORMAT,
        tool: shape::Tool { name: env!("CARGO_PKG_NAME"), version: env!("CARGO_PKG_VERSION") },
        numerics: NUMERICS,
        study: study(subject),
        models: models
            .iter()
            .zip(subject.model_texts)
            .map(|(model, text)| self::model(model, text))
            .collect(),
        runs: outcome.runs.iter().map(|run| self::run(run, subject)).collect::<Result<_, _>>()?,
        quantities: outcome
            .runs
            .iter()
            .flat_map(|run| run.quantities.iter().map(move |quantity| (run, quantity)))
            .map(|(run, quantity)| self::quantity(run, quantity, subject))
            .collect::<Result<_, _>>()?,
        criteria: outcome.criteria.iter().map(criterion).collect::<Result<_, _>>()?,
        inputs: inputs(models, outcome)?,
        files,
    };
    serde_json_canonicalizer::to_vec(&record).map_err(|cause| RecordError::Json(cause.to_string()))
}

fn study<'a>(subject: &Subject<'a>) -> shape::Study<'a> {
    let front = &subject.study.front;
    shape::Study {
        title: &front.title.value,
        number: front.get("number"),
        revision: front.get("revision"),
        date: front.get("date"),
        prepared: front.get("prepared"),
        checked: front.get("checked"),
        approved: front.get("approved"),
        client: front.get("client"),
        caution: front.get("caution"),
        digest: subject.study_digest,
    }
}

fn model<'a>(model: &'a Model, text: &str) -> shape::Model<'a> {
    let named = |entry: &'a crate::model::Expression| shape::Named {
        name: &entry.name.value,
        is: &entry.text.value,
        unit: entry.unit.as_deref(),
        about: entry.about.as_ref().map(|about| about.value.as_str()),
    };
    shape::Model {
        name: &model.name.value,
        about: model.about.as_ref().map(|about| about.value.as_str()),
        digest: digest::sha256(text.as_bytes()),
        states: model.states.iter().map(state).collect(),
        derived: model.derived.iter().map(named).collect(),
        invariants: model.invariants.iter().map(named).collect(),
    }
}

fn state(state: &crate::model::State) -> shape::State<'_> {
    let entry = &state.entry;
    shape::State {
        name: &entry.name.value,
        about: entry.about.as_ref().map(|about| about.value.as_str()),
        unit: state.unit.as_deref(),
        start: match &entry.start {
            Start::Value(value) => as_written(value),
            Start::Expression(text) => text.value.clone(),
        },
        scale: entry.scale.as_ref().map(as_written),
        source: entry.source.as_ref().map(|source| source.value.as_str()),
        rate: &state.rate_text.value,
        exact: state.exact.as_ref().map(|(text, _)| text.value.as_str()),
    }
}

fn as_written(value: &Value) -> String {
    match &value.unit {
        Some(unit) => format!("{} {unit}", value.digits),
        None => value.digits.clone(),
    }
}

fn run<'a>(run: &'a RunOutcome, subject: &Subject<'a>) -> Result<shape::Run<'a>, RecordError> {
    let name = run.name.as_str();
    let place = |what: &str| format!("{what} of run {name}");
    let model = subject.models.get(run.model);
    let states = || model.into_iter().flat_map(|model| &model.states);
    let parameters = model.into_iter().flat_map(|model| &model.parameters);
    let (mut step, mut tolerance, mut scales, mut aim) = (None, None, None, None);
    match &run.steps {
        Steps::Fixed { step: h } => step = Some(Number::new(*h, &place("step"))?),
        Steps::Adaptive { tolerance: relative, scales: of_states } => {
            tolerance = Some(Number::new(*relative, &place("tolerance"))?);
            let scale = |(state, &scale): (&'a crate::model::State, &f64)| {
                let scale = Number::new(scale, &place("scale"))?;
                Ok(shape::Scale { state: &state.entry.name.value, scale })
            };
            scales = Some(states().zip(of_states).map(scale).collect::<Result<_, _>>()?);
        }
        Steps::Aimed { step: h, aims, trials } => {
            step = Some(Number::new(*h, &place("step"))?);
            aim = Some(shape::Aim { aims, trials: *trials });
        }
    }
    let control = (subject.control)(run);
    let controller = control.as_ref().map(|control| {
        let constant = |(name, value): &(String, f64)| {
            Ok(shape::Constant { name: name.clone(), value: finite(*value, &place(name))? })
        };
        control.constants.iter().map(constant).collect::<Result<Vec<_>, _>>()
    });
    Ok(shape::Run {
        name,
        model: model.map_or("", |model| model.name.value.as_str()),
        scheme: run.scheme.key,
        tableau: digest::sha256(run.scheme.tableau.digest_text().as_bytes()),
        order: run.scheme.order,
        embedded_order: run.scheme.embedded_order,
        step,
        tolerance,
        scales,
        norm: control.map(|control| control.norm),
        controller: controller.transpose()?,
        aim,
        span: shape::Span {
            from: Number::new(run.span.0, &place("start"))?,
            until: Number::new(run.span.1, &place("end"))?,
            unit: run.time_unit.as_deref(),
        },
        overrides: run.overrides.iter().map(|(name, value)| shape::Override { name, value }).collect(),
        parameters: parameters
            .zip(&run.parameters)
            .map(|(entry, &value)| setting(&entry.name.value, value, entry.value.unit.as_deref(), name))
            .collect::<Result<_, _>>()?,
        start: states()
            .zip(&run.start)
            .map(|(state, &value)| setting(&state.entry.name.value, value, state.unit.as_deref(), name))
            .collect::<Result<_, _>>()?,
        meshes: meshes(run)?,
        companion: run
            .companion
            .as_ref()
            .map(|companion| shape::Companion { steps: companion.steps, evaluations: companion.evaluations }),
        cost: cost(run),
        invariants: run
            .invariants
            .iter()
            .map(|drift| {
                Ok(shape::Drift {
                    name: &drift.name,
                    expression: &drift.expression,
                    start: finite(drift.start, &place(&drift.name))?,
                    largest: finite(drift.largest, &place(&drift.name))?,
                    at_end: finite(drift.at_end, &place(&drift.name))?,
                })
            })
            .collect::<Result<_, _>>()?,
        exact: run
            .exact
            .iter()
            .map(|error| {
                Ok(shape::ExactError {
                    state: &error.state,
                    largest: finite(error.largest, &place(&error.state))?,
                    time: finite(error.time, &place(&error.state))?,
                })
            })
            .collect::<Result<_, _>>()?,
        rows: run.rows.as_ref().map(|rows| shape::Rows {
            every: &rows.every,
            file: data_path(name),
            count: rows.times.len(),
            columns: rows.columns.iter().map(|column| column.name.as_str()).collect(),
        }),
        caps: &run.caps,
        remarks: &run.remarks,
    })
}

/// Where the rows of a run stand in the report folder.
pub fn data_path(run: &str) -> String {
    format!("data/{run}.csv")
}

fn setting<'a>(
    name: &'a str,
    value: f64,
    unit: Option<&'a str>,
    run: &str,
) -> Result<shape::Setting<'a>, RecordError> {
    Ok(shape::Setting { name, number: Number::new(value, &format!("{name} in run {run}"))?, unit })
}

fn meshes(run: &RunOutcome) -> Result<Vec<shape::Mesh>, RecordError> {
    let mesh = |mesh: &crate::bound::Mesh| {
        Ok(shape::Mesh {
            steps: mesh.accepted,
            smallest: finite(mesh.smallest, &format!("smallest step of run {}", run.name))?,
            largest: finite(mesh.largest, &format!("largest step of run {}", run.name))?,
            rejected: shape::Rejected {
                local_error: mesh.rejected.local_error,
                not_finite: mesh.rejected.not_finite,
                switch: mesh.rejected.switch,
            },
            evaluations: mesh.evaluations,
            switches: mesh.switches,
        })
    };
    run.meshes.iter().map(mesh).collect()
}

fn cost(run: &RunOutcome) -> shape::Cost {
    let (steps, evaluations) =
        run.companion.as_ref().map_or((0, 0), |companion| (companion.steps, companion.evaluations));
    let rejected = |mesh: &crate::bound::Mesh| {
        mesh.rejected.local_error + mesh.rejected.not_finite + mesh.rejected.switch
    };
    shape::Cost {
        steps: steps + run.meshes.iter().map(|mesh| mesh.accepted).sum::<u64>(),
        rejected: run.meshes.iter().map(rejected).sum(),
        evaluations: evaluations + run.meshes.iter().map(|mesh| mesh.evaluations).sum::<u64>(),
    }
}

fn quantity<'a>(
    run: &RunOutcome,
    quantity: &'a Quantity,
    subject: &Subject<'_>,
) -> Result<shape::Quantity<'a>, RecordError> {
    let name = format!("{}.{}", run.name, quantity.name);
    let place = |what: &str| format!("{what} of {name}");
    let estimates = &quantity.estimates;
    let values = estimates.values.iter();
    Ok(shape::Quantity {
        about: quantity.about.as_deref(),
        text: &quantity.text,
        unit: quantity.unit.as_deref(),
        value: finite_option(quantity.value, &place("value"))?,
        bits: quantity.value.map(bits),
        bound: finite_option(quantity.bound, &place("bound"))?,
        bound_bits: quantity.bound.map(bits),
        bound_parts: shape::BoundParts {
            truncation: finite(estimates.truncation, &place("truncation"))?,
            safety: finite(estimates.safety, &place("safety"))?,
            interpolation: finite(estimates.interpolation, &place("interpolation"))?,
            rounding: finite(estimates.rounding, &place("rounding"))?,
        },
        grade: quantity.grade.word(),
        why: &quantity.why,
        shown: (subject.shown)(quantity),
        time: finite_option(quantity.time, &place("time"))?,
        order: shape::Order {
            formal: estimates.formal_order,
            observed: finite_option(estimates.observed_order, &place("observed order"))?,
        },
        meshes: values
            .map(|value| value.map(|value| Number::new(value, &place("mesh value"))).transpose())
            .collect::<Result<_, _>>()?,
        estimates: shape::Estimates {
            halving: finite_option(estimates.halving, &place("halving"))?,
            companion: finite_option(estimates.companion, &place("companion"))?,
        },
        true_error: finite_option(quantity.true_error, &place("true error"))?,
        name,
    })
}

fn criterion(criterion: &CriterionOutcome) -> Result<shape::Criterion<'_>, RecordError> {
    let place = |what: &str| format!("{what} of criterion {}", criterion.name);
    Ok(shape::Criterion {
        name: &criterion.name,
        text: &criterion.text,
        quantity: &criterion.quantity,
        relation: match criterion.relation {
            Relation::Less => "<",
            Relation::LessOrEqual => "<=",
            Relation::Greater => ">",
            Relation::GreaterOrEqual => ">=",
        },
        limit: Number::new(criterion.limit, &place("limit"))?,
        limit_text: &criterion.limit_text,
        verdict: criterion.verdict.words(),
        margin: finite_option(criterion.margin, &place("margin"))?,
        expect: criterion
            .expect
            .as_ref()
            .map(|(verdict, because)| shape::Expect { verdict: verdict.words(), because }),
    })
}

fn inputs<'a>(models: &'a [Model], outcome: &'a Outcome) -> Result<Vec<shape::Input<'a>>, RecordError> {
    let mut list = Vec::new();
    for (index, model) in models.iter().enumerate() {
        for entry in &model.parameters {
            let overrides =
                |run: &RunOutcome| run.overrides.iter().any(|(name, _)| *name == entry.name.value);
            let of_model = || outcome.runs.iter().filter(|run| run.model == index);
            list.push(shape::Input {
                runs: of_model().filter(|run| !overrides(run)).map(|run| run.name.as_str()).collect(),
                overridden: of_model().filter(|run| overrides(run)).map(|run| run.name.as_str()).collect(),
                ..input(&model.name.value, entry)?
            });
        }
    }
    Ok(list)
}

fn input<'a>(model: &'a str, entry: &'a ParameterEntry) -> Result<shape::Input<'a>, RecordError> {
    let name = entry.name.value.as_str();
    Ok(shape::Input {
        model,
        parameter: name,
        written: &entry.value.digits,
        number: Number::new(entry.value.number, &format!("parameter {name} of model {model}"))?,
        unit: entry.value.unit.as_deref(),
        plusminus: entry.plusminus.as_ref().map(as_written),
        sd: entry.sd.as_ref().map(as_written),
        source: entry.source.as_ref().map(|source| source.value.as_str()),
        about: entry.about.as_ref().map(|about| about.value.as_str()),
        runs: Vec::new(),
        overridden: Vec::new(),
    })
}

#[cfg(test)]
mod tests {
    use super::super::example;
    use super::*;
    use serde_json::Value as Json;

    fn composed(outcome: &Outcome) -> Result<Vec<u8>, RecordError> {
        let (study, models) = (example::study(), example::models());
        compose(&Subject {
            study: &study,
            study_digest: "00ff",
            model_texts: &["x: 1\n".to_owned()],
            models: &models,
            outcome,
            shown: &|quantity| format!("{} shown", quantity.name),
            control: &|_| None,
            files: &[FileDigest::of(digest::Was::Written, "report.html", b"abc")],
        })
    }

    fn record() -> Json {
        serde_json::from_slice(&composed(&example::outcome()).unwrap()).unwrap()
    }

    #[test]
    fn the_top_level_has_the_promised_keys() {
        let record = record();
        let keys: Vec<_> = record.as_object().unwrap().keys().map(String::as_str).collect();
        let promised = "criteria files format inputs models numerics quantities runs study tool";
        assert_eq!(keys.join(" "), promised);
        assert_eq!(record["format"], "halfstep-record/1");
        assert_eq!(record["study"]["title"], "A study");
        assert_eq!(record["study"]["number"], "HS-1");
        assert_eq!(record["study"]["revision"], Json::Null);
    }

    #[test]
    fn a_quantity_says_value_bits_bound_grade_and_what_is_shown() {
        let quantity = &record()["quantities"][0];
        assert_eq!(quantity["name"], "reject.z_end");
        assert_eq!(quantity["value"], 0.1);
        assert_eq!(quantity["bits"], "3fb999999999999a");
        assert_eq!(quantity["bound"], 0.5);
        assert_eq!(quantity["bound_bits"], "3fe0000000000000");
        assert_eq!(quantity["grade"], "converged");
        assert_eq!(quantity["shown"], "z_end shown");
        assert_eq!(quantity["order"], serde_json::json!({"formal": 1, "observed": 0.98}));
        assert_eq!(quantity["meshes"][2], serde_json::json!({"value": 0.5, "bits": "3fe0000000000000"}));
    }

    #[test]
    fn a_run_says_scheme_step_meshes_and_cost() {
        let run = &record()["runs"][0];
        assert_eq!((&run["scheme"], &run["model"]), (&"euler".into(), &"shaft".into()));
        assert_eq!(run["step"]["value"], 0.5);
        assert_eq!(run["tolerance"], Json::Null);
        assert_eq!(run["meshes"][0]["rejected"]["switch"], 1);
        assert_eq!(run["cost"], serde_json::json!({"steps": 7, "rejected": 1, "evaluations": 7}));
        assert_eq!(run["tableau"], digest::sha256(b"c 0/1\na\nb 1/1\n"));
        assert_eq!(run["parameters"][0]["name"], "L");
    }

    #[test]
    fn an_input_says_where_its_value_is_used() {
        let input = &record()["inputs"][0];
        assert_eq!((&input["parameter"], &input["written"]), (&"L".into(), &"3200".into()));
        assert_eq!(input["plusminus"], "50 m");
        assert_eq!(input["runs"], serde_json::json!(["reject"]));
        assert_eq!(input["overridden"], serde_json::json!([]));
    }

    #[test]
    fn the_text_is_canonical() {
        let bytes = composed(&example::outcome()).unwrap();
        // RFC 8785, section 3.2: no white space between tokens, keys sorted by UTF-16 code units, numbers
        // as ECMAScript prints them.
        let text = String::from_utf8(bytes.clone()).unwrap();
        assert!(text.starts_with(r#"{"criteria":[{"expect":null,"limit":{"bits":"#), "{text}");
        assert!(text.contains(r#""margin":1e+21"#), "{text}");
        assert!(!text.contains('\n') && !text.contains(": "));
        let again: Json = serde_json::from_slice(&bytes).unwrap();
        assert_eq!(serde_json_canonicalizer::to_vec(&again).unwrap(), bytes);
    }

    #[test]
    fn the_same_outcome_gives_the_same_bytes() {
        assert_eq!(composed(&example::outcome()), composed(&example::outcome()));
    }

    #[test]
    fn a_number_that_is_not_finite_is_refused_wherever_it_stands() {
        type Spoil = fn(&mut Outcome, f64);
        let spoils: [(Spoil, &str); 12] = [
            (|o, x| o.runs[0].quantities[0].value = Some(x), "value of reject.z_end"),
            (|o, x| o.runs[0].quantities[0].bound = Some(x), "bound of reject.z_end"),
            (|o, x| o.runs[0].quantities[0].time = Some(x), "time of reject.z_end"),
            (|o, x| o.runs[0].quantities[0].estimates.rounding = x, "rounding of reject.z_end"),
            (|o, x| o.runs[0].quantities[0].estimates.values[1] = Some(x), "mesh value of reject.z_end"),
            (|o, x| o.runs[0].quantities[0].true_error = Some(x), "true error of reject.z_end"),
            (|o, x| o.runs[0].span.1 = x, "end of run reject"),
            (|o, x| o.runs[0].start[0] = x, "z in run reject"),
            (|o, x| o.runs[0].meshes[0].smallest = x, "smallest step of run reject"),
            (|o, x| o.runs[0].steps = Steps::Fixed { step: x }, "step of run reject"),
            (|o, x| o.criteria[0].limit = x, "limit of criterion freeboard"),
            (|o, x| o.criteria[0].margin = Some(x), "margin of criterion freeboard"),
        ];
        for (spoil, place) in spoils {
            for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
                let mut outcome = example::outcome();
                spoil(&mut outcome, bad);
                assert_eq!(composed(&outcome), Err(RecordError::NotFinite(place.to_owned())));
            }
        }
    }
}
