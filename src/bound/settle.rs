//! Carries out a run with all that its bounds need: the run, its two halved meshes and the companion.

use super::companion::Follower;
use super::court::{Court, extent};
use super::judge::PARTED;
use super::outcome::{Drift, ExactError, Mesh, RunOutcome, SpectrumPoint, Steps};
use super::rough::RoughWatch;
use crate::arithmetic::larger;
use crate::model::graph::{Graph, NodeId};
use crate::plan::{Nominal, RunPlan};
use crate::run::advance::{FrozenMesh, Ran, Runner, watched};
use crate::run::path::ExactPath;
use crate::run::sample::{DriftWatch, EndSampler, ExactWatch, Sampler, Times};
use crate::run::spectrum::SpectrumWatch;
use crate::run::stop::Stop;
use crate::run::system::{System, Values};
use crate::run::trace::Trace;
use crate::run::watch::{Reading, Watch};
use crate::run::{Accepted, Observer};
use crate::study::block::run::BoundAsked;

/// Intervals at which the states are compared between meshes.
pub(super) const STATE_SAMPLES: usize = 64;
/// Intervals at which the curves are compared between meshes.
const CURVE_SAMPLES: usize = 240;
/// Tolerance of the pilot run that finds the typical scale of every state.
const PILOT_TOLERANCE: f64 = 1e-3;
/// An impact of a hidden jump above this share of a state's error counts.
const ROUGH_SHARE: f64 = 0.1;

/// Places of the samplers in [`samplers`].
const STATES: usize = 0;
pub(super) const ROWS: usize = 1;
pub(super) const CURVES: usize = 2;

/// How the steps of one attempt are chosen.
#[derive(Clone, Debug, PartialEq)]
pub enum Chosen {
    /// By a fixed step.
    Step(f64),
    /// By a tolerance, with the scales that the study gives.
    Tolerance(f64, Vec<Option<f64>>),
}

/// Carries out a run and settles its bounds.
///
/// # Errors
/// A [`Stop`] where the run itself ends early: no number of it may be reported. A halved mesh that ends early
/// leaves its quantities unbounded instead.
pub fn settle(plan: &RunPlan, chosen: &Chosen) -> Result<RunOutcome, Stop> {
    let watched = watched(plan);
    let mut graph = plan.graph.clone();
    let mut base = Base::new(plan, &mut graph, &watched);
    let (steps, mesh, ran) = base.run(plan, chosen, &watched)?;
    let bounded = plan.bound != BoundAsked::None;
    let mut halved: Vec<Result<Halved, Stop>> = Vec::new();
    if bounded {
        let ends: Vec<f64> = base.ends.rows.iter().map(|(time, _)| *time).collect();
        let make = |halvings: u32| {
            let mut graph = plan.graph.clone();
            let watch =
                Watch::new(&mut graph, &plan.quantities, &plan.rates, &plan.parameters, &watched, plan.from);
            Halved::run(plan, &watched, &mesh, halvings, ends.clone(), watch)
        };
        let (half, quarter) = rayon::join(|| make(1), || make(2));
        halved = vec![half, quarter];
    }
    Ok(gather(plan, &mut graph, base, steps, &ran, &halved))
}

/// The observers of the run itself.
struct Base {
    watch: Watch,
    samplers: Vec<Sampler>,
    ends: EndSampler,
    drift: DriftWatch,
    exact: ExactWatch,
    exact_track: Option<ExactTrack>,
    follower: Option<Follower>,
    traces: Vec<Trace>,
    spectrum: Option<SpectrumWatch>,
}

impl Base {
    fn new(plan: &RunPlan, graph: &mut Graph, watched: &[bool]) -> Self {
        let watch = |graph: &mut Graph| {
            Watch::new(graph, &plan.quantities, &plan.rates, &plan.parameters, watched, plan.from)
        };
        let nodes: Vec<NodeId> = plan.invariants.iter().map(|(_, _, node)| *node).collect();
        let forms: Vec<NodeId> = plan.exact.iter().map(|(_, node)| *node).collect();
        let exact_states = plan.exact.iter().map(|(state, _)| *state).collect();
        let exact_track = (plan.exact.len() == plan.start.len()).then(|| {
            let mut ordered = plan.exact.clone();
            ordered.sort_by_key(|(state, _)| *state);
            let nodes: Vec<NodeId> = ordered.iter().map(|(_, node)| *node).collect();
            ExactTrack { forms: Values::new(graph, &nodes, &plan.parameters), watch: watch(graph) }
        });
        let follower = if plan.bound == BoundAsked::HalvingAndCompanion {
            Follower::new(plan, watch(graph), samplers(plan))
        } else {
            None
        };
        Base {
            watch: watch(graph),
            samplers: samplers(plan),
            ends: EndSampler::choosing(),
            drift: DriftWatch::new(Values::new(graph, &nodes, &plan.parameters), plan.from, &plan.start),
            exact: ExactWatch::new(Values::new(graph, &forms, &plan.parameters), exact_states, plan.from),
            exact_track,
            follower,
            traces: plan.curves.iter().map(|curve| Trace::new(plan, curve)).collect(),
            spectrum: SpectrumWatch::new(plan),
        }
    }

    fn run(
        &mut self,
        plan: &RunPlan,
        chosen: &Chosen,
        watched: &[bool],
    ) -> Result<(Steps, FrozenMesh, Ran), Stop> {
        let mut observers: Vec<&mut dyn Observer> =
            vec![&mut self.watch, &mut self.ends, &mut self.drift, &mut self.exact];
        observers.extend(self.samplers.iter_mut().map(|sampler| sampler as &mut dyn Observer));
        observers.extend(self.traces.iter_mut().map(|trace| trace as &mut dyn Observer));
        if let Some(track) = &mut self.exact_track {
            observers.push(track);
        }
        if let Some(follower) = &mut self.follower {
            observers.push(follower);
        }
        if let Some(spectrum) = &mut self.spectrum {
            observers.push(spectrum);
        }
        match chosen {
            Chosen::Step(step) => {
                let nominal = Nominal::uniform(plan.from, plan.until, *step);
                let ran = Runner::new(plan, watched, plan.limit)?.over(&nominal, &[], 0, &mut observers)?;
                let mesh = FrozenMesh { nominal, cuts: ran.cuts.clone() };
                Ok((Steps::Fixed { step: *step }, mesh, ran))
            }
            Chosen::Tolerance(tolerance, given) => {
                let scales = typical_scales(plan, watched, given);
                let (mesh, ran) = Runner::new(plan, watched, plan.limit)?.adaptively(
                    *tolerance,
                    &scales,
                    &mut observers,
                )?;
                Ok((Steps::Adaptive { tolerance: *tolerance, scales }, mesh, ran))
            }
        }
    }
}

/// The typical scale of every state: what the study gives, else the largest size over a pilot run.
fn typical_scales(plan: &RunPlan, watched: &[bool], given: &[Option<f64>]) -> Vec<f64> {
    let largest_start = plan.start.iter().fold(0.0, |size, y| larger(size, y.abs()));
    let guess = |i: usize| {
        let start = plan.start[i].abs();
        if start > 0.0 {
            start
        } else if largest_start > 0.0 {
            largest_start
        } else {
            1.0
        }
    };
    let mut scales: Vec<f64> =
        given.iter().enumerate().map(|(i, scale)| scale.unwrap_or_else(|| guess(i))).collect();
    if given.iter().all(Option::is_some) {
        return scales;
    }
    let mut pilot = Sizes { largest: plan.start.iter().map(|y| y.abs()).collect() };
    if let Ok(runner) = Runner::new(plan, watched, plan.limit) {
        // A pilot that stops early has still seen sizes; the run itself will tell why.
        let _ = runner.adaptively(PILOT_TOLERANCE, &scales, &mut [&mut pilot]);
    }
    for (i, scale) in scales.iter_mut().enumerate() {
        if given[i].is_none() && pilot.largest[i] > 0.0 && pilot.largest[i].is_finite() {
            *scale = pilot.largest[i];
        }
    }
    scales
}

struct Sizes {
    largest: Vec<f64>,
}

impl Observer for Sizes {
    fn step(&mut self, step: &Accepted<'_>) {
        for (largest, y) in self.largest.iter_mut().zip(step.piece.end()) {
            *largest = larger(*largest, y.abs());
        }
    }
}

/// Reads the quantities off the closed forms.
struct ExactTrack {
    forms: Values,
    watch: Watch,
}

impl Observer for ExactTrack {
    fn step(&mut self, step: &Accepted<'_>) {
        let path = ExactPath { forms: &mut self.forms, t: step.piece.t, t_new: step.piece.t_new };
        self.watch.see(path, step.modes);
    }
}

/// The states, the rows and the ordinates of the curves, sampled on any mesh at the same times.
fn samplers(plan: &RunPlan) -> Vec<Sampler> {
    let n = plan.start.len();
    let make = |times: Times, nodes: &[NodeId]| {
        Sampler::new(times, Values::new(&plan.graph, nodes, &plan.parameters), n)
    };
    let mut graph = plan.graph.clone();
    let states: Vec<NodeId> = (0..n).map(|i| graph.state(i)).collect();
    let state_values = Values::new(&graph, &states, &plan.parameters);
    let columns: Vec<NodeId> = plan.columns.iter().map(|column| column.node).collect();
    let curves: Vec<NodeId> = plan.curves.iter().map(|curve| curve.node).collect();
    let rows =
        plan.rows.as_ref().map(|(every, _)| make(Times::every(plan.from, plan.until, *every), &columns));
    let none = || make(Times::evenly(plan.from, plan.until, 1), &[]);
    vec![
        Sampler::new(Times::evenly(plan.from, plan.until, STATE_SAMPLES), state_values, n),
        rows.unwrap_or_else(none),
        if curves.is_empty() {
            none()
        } else {
            make(Times::evenly(plan.from, plan.until, CURVE_SAMPLES), &curves)
        },
    ]
}

/// What a halved mesh gives.
struct Halved {
    ran: Ran,
    readings: Vec<Reading>,
    samplers: Vec<Sampler>,
    ends: EndSampler,
    rough: RoughWatch,
}

impl Halved {
    fn run(
        plan: &RunPlan,
        watched: &[bool],
        mesh: &FrozenMesh,
        halvings: u32,
        ends: Vec<f64>,
        mut watch: Watch,
    ) -> Result<Self, Stop> {
        let mut samplers = samplers(plan);
        let mut rough = RoughWatch::new(plan);
        let mut ends = EndSampler::at(ends);
        let mut observers: Vec<&mut dyn Observer> = vec![&mut watch, &mut ends];
        observers.extend(samplers.iter_mut().map(|sampler| sampler as &mut dyn Observer));
        if halvings == 2 {
            observers.push(&mut rough);
        }
        let limit = plan.limit.saturating_mul(1 << (halvings + 1));
        let ran =
            Runner::new(plan, watched, limit)?.over(&mesh.nominal, &mesh.cuts, halvings, &mut observers)?;
        Ok(Halved { ran, readings: watch.readings(), samplers, ends, rough })
    }
}

fn gather(
    plan: &RunPlan,
    graph: &mut Graph,
    mut base: Base,
    steps: Steps,
    ran: &Ran,
    halved: &[Result<Halved, Stop>],
) -> RunOutcome {
    let mut remarks = Vec::new();
    if let Some(lost) = base.follower.as_ref().and_then(|follower| follower.lost.clone()) {
        remarks.push(lost);
    }
    let mut failed = (plan.bound == BoundAsked::None).then(|| "no bound was asked for".to_owned());
    let mut done: Vec<&Halved> = Vec::new();
    for half in halved {
        match half {
            Ok(half) => done.push(half),
            Err(_) => failed = Some("a run with halved steps ended early, where this one did not".to_owned()),
        }
    }
    let mut caps = plan.caps.clone();
    if let [half, quarter] = done.as_slice() {
        if half.ran.irregular || quarter.ran.irregular {
            caps.push("kinks or jumps come in another order on the halved meshes".to_owned());
        }
        caps.extend(hidden_jump(plan, &base, half, quarter));
    }
    let court = Court {
        plan,
        order: plan.scheme.order,
        steps: ran.accepted as f64,
        failed,
        cap: caps.first().cloned(),
        parted: parted(plan, &base, &done),
        roundings: base
            .watch
            .state_scales
            .iter()
            .map(|size| ran.accepted as f64 * f64::EPSILON * size)
            .collect(),
    };
    let mut system = System::new(graph, &plan.rates, &plan.parameters);
    let readings = base.watch.readings();
    let corrected_readings = base
        .follower
        .as_mut()
        .filter(|follower| follower.lost.is_none())
        .map(|follower| follower.watch.readings());
    let exact_readings = base.exact_track.as_mut().map(|track| track.watch.readings());
    let corrected = base.follower.as_ref().filter(|follower| follower.lost.is_none());
    let mut quantities = Vec::new();
    for (i, quantity) in plan.quantities.iter().enumerate() {
        let others: Vec<&Reading> = done.iter().map(|half| &half.readings[i]).collect();
        let beside = corrected_readings.as_ref().map(|readings| &readings[i]);
        let truth = exact_readings.as_ref().map(|readings| &readings[i]);
        let index = base.watch.index(i);
        let watch = &mut base.watch;
        quantities.push(court.quantity(
            quantity,
            &readings[i],
            &others,
            beside,
            truth,
            watch.values(),
            index,
            &mut system,
        ));
    }
    let sampled: Vec<&Vec<Sampler>> = done.iter().map(|half| &half.samplers).collect();
    let corrected_samples = corrected.map(|follower| &follower.samplers);
    RunOutcome {
        name: plan.name.clone(),
        model: plan.model,
        scheme: plan.scheme,
        steps,
        span: (plan.from, plan.until),
        time_unit: plan.time_unit.clone(),
        parameters: plan.parameters.clone(),
        start: plan.start.clone(),
        overrides: plan.overrides.clone(),
        meshes: std::iter::once(mesh(ran)).chain(done.iter().map(|half| mesh(&half.ran))).collect(),
        companion: base.follower.as_ref().map(Follower::cost),
        quantities,
        rows: court.rows(&base.samplers, &sampled, corrected_samples),
        curves: court.curves(&base.samplers, std::mem::take(&mut base.traces), &sampled, corrected_samples),
        invariants: (plan.invariants.iter().enumerate())
            .map(|(i, (name, expression, _))| Drift {
                name: name.clone(),
                expression: expression.clone(),
                start: base.drift.start[i],
                largest: base.drift.largest[i],
                at_end: base.drift.at_end[i],
            })
            .collect(),
        exact: (plan.exact.iter().enumerate())
            .map(|(i, (state, _))| ExactError {
                state: plan.columns[*state].name.clone(),
                largest: base.exact.largest[i].0,
                time: base.exact.largest[i].1,
            })
            .collect(),
        spectrum: base.spectrum.map_or_else(Vec::new, |spectrum| {
            spectrum.points.into_iter().map(|(time, re, im)| SpectrumPoint { time, re, im }).collect()
        }),
        caps,
        remarks,
    }
}

fn mesh(ran: &Ran) -> Mesh {
    Mesh {
        accepted: ran.accepted,
        smallest: ran.smallest,
        largest: ran.largest,
        rejected: ran.rejected,
        evaluations: ran.evaluations,
        switches: ran.cuts.len() as u64,
    }
}

/// At the sampled times: whether the halved and the twice halved mesh differ by more than [`PARTED`] of the range of
/// some state over the run.
fn parted(plan: &RunPlan, base: &Base, done: &[&Halved]) -> Vec<bool> {
    let [half, quarter] = done else {
        return Vec::new();
    };
    let n = plan.start.len();
    let rows = [&base.samplers[STATES], &half.samplers[STATES], &quarter.samplers[STATES]].map(Sampler::rows);
    let count = rows.iter().map(|rows| rows.len() / n).min().unwrap_or(0);
    let ranges: Vec<f64> = (0..n)
        .map(|i| {
            let values: Vec<f64> = (0..count).map(|k| rows[0][k * n + i]).collect();
            let (scale, range) = extent(&values);
            if range > 1e-9 * scale { range } else { f64::INFINITY }
        })
        .collect();
    (0..count)
        .map(|k| (0..n).any(|i| (rows[1][k * n + i] - rows[2][k * n + i]).abs() > PARTED * ranges[i]))
        .collect()
}

/// A jump or kink inside a step that is large beside the error of the state it acts on.
fn hidden_jump(plan: &RunPlan, base: &Base, half: &Halved, quarter: &Halved) -> Option<String> {
    let n = plan.start.len();
    let mut errors = base.ends.differences(&half.ends, n);
    for (error, other) in errors.iter_mut().zip(base.ends.differences(&quarter.ends, n)) {
        *error = larger(*error, other);
    }
    if let Some(follower) = &base.follower {
        for (error, other) in errors.iter_mut().zip(&follower.largest) {
            *error = larger(*error, *other);
        }
    }
    let found =
        quarter.rough.worst.iter().flatten().find(|rough| rough.impact > ROUGH_SHARE * errors[rough.state]);
    if let Some(found) = found {
        return Some(format!(
            "the rate of {} jumps or bends inside a step near t = {:.6}, where no mesh point marks it",
            plan.columns[found.state].name, found.time
        ));
    }
    let unseen = quarter.rough.probed.iter().flatten().find(|rough| rough.impact > errors[rough.state])?;
    Some(format!(
        "the rate of {} changes inside the steps near t = {:.6} in a way that the meshes do not see",
        plan.columns[unseen.state].name, unseen.time
    ))
}
