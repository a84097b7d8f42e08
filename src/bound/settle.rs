//! Carries out a run with all that its bounds need: the run, its two halved meshes and the companion.

use super::companion::Follower;
use super::judge::{Evidence, Judgement, judge, unbounded};
use super::outcome::{
    Curve, Drift, Estimates, ExactError, Grade, Mesh, Quantity, RowColumn, Rows, RunOutcome, SpectrumPoint, Steps,
};
use super::rough::RoughWatch;
use crate::arithmetic::{larger, smaller};
use crate::model::graph::{Graph, NodeId};
use crate::plan::{Measure, Nominal, QuantityPlan, RunPlan};
use crate::run::advance::{FrozenMesh, Ran, Runner, watched};
use crate::run::path::ExactPath;
use crate::run::sample::{DriftWatch, ExactWatch, Sampler, Times};
use crate::run::spectrum::SpectrumWatch;
use crate::run::stop::Stop;
use crate::run::system::{System, Values};
use crate::run::trace::Trace;
use crate::run::watch::{Reading, Watch};
use crate::run::{Accepted, Observer};
use crate::study::block::run::BoundAsked;

/// Intervals at which the states are compared between meshes.
const STATE_SAMPLES: usize = 64;
/// Intervals at which the curves are compared between meshes.
const CURVE_SAMPLES: usize = 240;
/// Tolerance of the pilot run that finds the typical scale of every state.
const PILOT_TOLERANCE: f64 = 1e-3;
/// An impact of a hidden jump above this share of a state's error counts.
const ROUGH_SHARE: f64 = 0.1;

/// Places of the samplers in [`samplers`].
const STATES: usize = 0;
const ROWS: usize = 1;
const CURVES: usize = 2;

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
        let make = |halvings: u32| {
            let mut graph = plan.graph.clone();
            let watch = Watch::new(&mut graph, &plan.quantities, &plan.rates, &plan.parameters, &watched, plan.from);
            Halved::run(plan, &graph, &watched, &mesh, halvings, watch)
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
            drift: DriftWatch::new(Values::new(graph, &nodes, &plan.parameters), plan.from, &plan.start),
            exact: ExactWatch::new(Values::new(graph, &forms, &plan.parameters), exact_states, plan.from),
            exact_track,
            follower,
            traces: plan.curves.iter().map(|curve| Trace::new(plan, curve)).collect(),
            spectrum: SpectrumWatch::new(plan),
        }
    }

    fn run(&mut self, plan: &RunPlan, chosen: &Chosen, watched: &[bool]) -> Result<(Steps, FrozenMesh, Ran), Stop> {
        let mut observers: Vec<&mut dyn Observer> = vec![&mut self.watch, &mut self.drift, &mut self.exact];
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
                let (mesh, ran) =
                    Runner::new(plan, watched, plan.limit)?.adaptively(*tolerance, &scales, &mut observers)?;
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
    let rows = plan.rows.as_ref().map(|(every, _)| make(Times::every(plan.from, plan.until, *every), &columns));
    let none = || make(Times::evenly(plan.from, plan.until, 1), &[]);
    vec![
        Sampler::new(Times::evenly(plan.from, plan.until, STATE_SAMPLES), state_values, n),
        rows.unwrap_or_else(none),
        if curves.is_empty() { none() } else { make(Times::evenly(plan.from, plan.until, CURVE_SAMPLES), &curves) },
    ]
}

/// What a halved mesh gives.
struct Halved {
    ran: Ran,
    readings: Vec<Reading>,
    samplers: Vec<Sampler>,
    rough: RoughWatch,
}

impl Halved {
    fn run(
        plan: &RunPlan,
        _graph: &Graph,
        watched: &[bool],
        mesh: &FrozenMesh,
        halvings: u32,
        mut watch: Watch,
    ) -> Result<Self, Stop> {
        let mut samplers = samplers(plan);
        let mut rough = RoughWatch::new(plan.start.len());
        let mut observers: Vec<&mut dyn Observer> = vec![&mut watch];
        observers.extend(samplers.iter_mut().map(|sampler| sampler as &mut dyn Observer));
        if halvings == 2 {
            observers.push(&mut rough);
        }
        let limit = plan.limit.saturating_mul(1 << (halvings + 1));
        let ran = Runner::new(plan, watched, limit)?.over(&mesh.nominal, &mesh.cuts, halvings, &mut observers)?;
        Ok(Halved { ran, readings: watch.readings(), samplers, rough })
    }
}

/// Everything that judging needs beside the evidence of one quantity.
struct Court<'a> {
    plan: &'a RunPlan,
    order: u32,
    steps: f64,
    /// Why halving could not be done; judged quantities are then unbounded.
    failed: Option<String>,
    cap: Option<String>,
    /// Size that rounding may reach in every state.
    roundings: Vec<f64>,
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
        roundings: base.watch.state_scales.iter().map(|size| ran.accepted as f64 * f64::EPSILON * size).collect(),
    };
    let mut system = System::new(graph, &plan.rates, &plan.parameters);
    let readings = base.watch.readings();
    let corrected = base.follower.as_ref().filter(|follower| follower.lost.is_none());
    let corrected_readings = corrected.map(|follower| follower.watch.readings());
    let exact_readings = base.exact_track.as_ref().map(|track| track.watch.readings());
    let mut quantities = Vec::new();
    for (i, quantity) in plan.quantities.iter().enumerate() {
        let others: Vec<&Reading> = done.iter().map(|half| &half.readings[i]).collect();
        let beside = corrected_readings.as_ref().map(|readings| &readings[i]);
        let truth = exact_readings.as_ref().map(|readings| &readings[i]);
        let index = base.watch.index(i);
        let watch = &mut base.watch;
        quantities.push(court.quantity(quantity, &readings[i], &others, beside, truth, watch.values(), index, &mut system));
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

/// A jump or kink inside a step that is large beside the error of the state it acts on.
fn hidden_jump(plan: &RunPlan, base: &Base, half: &Halved, quarter: &Halved) -> Option<String> {
    let n = plan.start.len();
    let mut errors = vec![0.0; n];
    let rows = |sampler: &Sampler, k: usize, i: usize| sampler.rows().get(k * n + i).copied().unwrap_or(0.0);
    for (i, error) in errors.iter_mut().enumerate() {
        for k in 0..=STATE_SAMPLES {
            let here = rows(&base.samplers[STATES], k, i);
            *error = larger(*error, (here - rows(&quarter.samplers[STATES], k, i)).abs());
            *error = larger(*error, (here - rows(&half.samplers[STATES], k, i)).abs());
        }
        if let Some(follower) = &base.follower {
            *error = larger(*error, follower.largest[i]);
        }
    }
    let found = quarter.rough.worst.iter().flatten().find(|rough| rough.impact > ROUGH_SHARE * errors[rough.state])?;
    Some(format!(
        "the rate of {} jumps or bends inside a step near t = {:.6}, where no mesh point marks it",
        plan.columns[found.state].name, found.time
    ))
}

impl Court<'_> {
    #[expect(clippy::too_many_arguments, reason = "one quantity as seen by every trajectory")]
    fn quantity(
        &self,
        quantity: &QuantityPlan,
        reading: &Reading,
        others: &[&Reading],
        beside: Option<&Reading>,
        truth: Option<&Reading>,
        values: &mut Values,
        index: usize,
        system: &mut System,
    ) -> Quantity {
        let (interpolation, rounding, speed) = self.local_errors(quantity, reading, values, index, system);
        let judgement = match quantity.measure {
            Measure::Count { .. } => self.count(reading, others, beside),
            _ => self.judge(&Evidence {
                values: triple(reading.value, others, |other| other.value),
                corrected: beside.and_then(|beside| beside.value),
                order: self.order,
                scale: self.scale(quantity, reading),
                range: self.range(quantity, reading),
                interpolation,
                rounding,
                cap: self.cap.as_deref(),
            }),
        };
        let judgement = check_slope(judgement, quantity, reading, speed);
        let value = reading.value;
        Quantity {
            name: quantity.name.clone(),
            text: quantity.text.clone(),
            about: quantity.about.clone(),
            unit: quantity.unit.clone(),
            whole: matches!(quantity.measure, Measure::Count { .. }),
            value,
            bound: judgement.bound,
            grade: judgement.grade,
            why: judgement.why,
            estimates: judgement.estimates,
            time: match quantity.measure {
                Measure::Highest | Measure::Lowest => reading.place.as_ref().map(|place| place.t),
                _ => None,
            },
            true_error: truth.and_then(|truth| Some(value? - truth.value?)),
            at: quantity.at,
        }
    }

    fn judge(&self, evidence: &Evidence<'_>) -> Judgement {
        match &self.failed {
            Some(why) => {
                let estimates = Estimates {
                    values: vec![evidence.values[0]],
                    formal_order: self.order,
                    ..Estimates::default()
                };
                unbounded(why, estimates)
            }
            None => judge(evidence),
        }
    }

    /// A count is exact where no turning point comes within its own bound of the level.
    fn count(&self, reading: &Reading, others: &[&Reading], beside: Option<&Reading>) -> Judgement {
        let margin = self.judge(&Evidence {
            values: triple(reading.margin, others, |other| other.margin),
            corrected: beside.and_then(|beside| beside.margin),
            order: self.order,
            scale: reading.scale,
            range: reading.range,
            interpolation: 0.0,
            rounding: self.steps * f64::EPSILON * reading.scale,
            cap: self.cap.as_deref(),
        });
        let mut estimates = margin.estimates;
        estimates.values = std::iter::once(reading.value).chain(others.iter().map(|other| other.value)).collect();
        let same = estimates.values.iter().all(|value| *value == reading.value)
            && beside.is_none_or(|beside| beside.value == reading.value);
        match (margin.bound, reading.margin) {
            (Some(bound), Some(distance)) if same && distance > bound => Judgement {
                bound: Some(0.0),
                grade: margin.grade,
                why: "the same on every mesh, and no turning point comes within its bound of the level".to_owned(),
                estimates: Estimates { truncation: 0.0, rounding: 0.0, ..estimates },
            },
            (None, _) => unbounded(&margin.why, estimates),
            _ => unbounded("a turning point comes within its bound of the level", estimates),
        }
    }

    fn is_time(measure: Measure) -> bool {
        matches!(measure, Measure::TimeOfHighest | Measure::TimeOfLowest | Measure::TimeWhen { .. })
    }

    fn scale(&self, quantity: &QuantityPlan, reading: &Reading) -> f64 {
        if Self::is_time(quantity.measure) {
            larger(self.plan.from.abs(), self.plan.until.abs())
        } else if quantity.measure == Measure::Integral {
            reading.scale * (self.plan.until - self.plan.from)
        } else {
            reading.scale
        }
    }

    fn range(&self, quantity: &QuantityPlan, reading: &Reading) -> f64 {
        let span = self.plan.until - self.plan.from;
        if Self::is_time(quantity.measure) {
            span
        } else if quantity.measure == Measure::Integral {
            reading.scale * span
        } else {
            reading.range
        }
    }

    /// Interpolation, rounding, and for times how fast the located expression passes its level.
    fn local_errors(
        &self,
        quantity: &QuantityPlan,
        reading: &Reading,
        values: &mut Values,
        index: usize,
        system: &mut System,
    ) -> (f64, f64, Option<f64>) {
        let (value, rate) = (2 * index, 2 * index + 1);
        let ulps = 4.0 * f64::EPSILON;
        match (&reading.place, quantity.measure) {
            (Some(place), Measure::TimeWhen { .. }) => {
                let speed = place.value(values, rate).abs();
                let off = place.sensitivity(values, value, &self.roundings);
                let interpolation = place.interpolation(values, value, system) / speed;
                (interpolation, off / speed + ulps * place.t.abs(), Some(speed))
            }
            (Some(place), Measure::TimeOfHighest | Measure::TimeOfLowest) => {
                if place.t <= self.plan.from || place.t >= self.plan.until {
                    return (0.0, ulps * place.t.abs(), None);
                }
                let speed = place.rate_of_change(values, rate).abs();
                let off = place.sensitivity(values, rate, &self.roundings);
                let interpolation = place.interpolation(values, rate, system) / speed;
                (interpolation, off / speed + ulps * place.t.abs(), None)
            }
            (Some(place), _) => {
                let interpolation = place.interpolation(values, value, system);
                let rounding = place.sensitivity(values, value, &self.roundings);
                (interpolation, rounding + ulps * reading.value.unwrap_or(0.0).abs(), None)
            }
            (None, _) => {
                let size = self.steps * f64::EPSILON * self.scale(quantity, reading);
                (0.0, size, None)
            }
        }
    }

    /// Bounds of single numbers that are only sampled: rows and curves.
    fn sample(&self, sampled: &Sampled<'_>, k: usize, i: usize, scale: f64, range: f64) -> Judgement {
        let value = |sampler: &Sampler| sampler.rows().get(k * sampler.width() + i).copied();
        self.judge(&Evidence {
            values: [
                value(sampled.base),
                sampled.halved.first().and_then(|s| value(s)),
                sampled.halved.get(1).and_then(|s| value(s)),
            ],
            corrected: sampled.corrected.and_then(value),
            order: self.order,
            scale,
            range,
            interpolation: 0.0,
            rounding: self.steps * f64::EPSILON * scale,
            cap: self.cap.as_deref(),
        })
    }

    fn rows(&self, base: &[Sampler], halved: &[&Vec<Sampler>], corrected: Option<&Vec<Sampler>>) -> Option<Rows> {
        let (_, every) = self.plan.rows.as_ref()?;
        let sampled = Sampled::new(ROWS, base, halved, corrected);
        let count = sampled.base.rows().len() / self.plan.columns.len().max(1);
        let mut columns = Vec::new();
        for (i, column) in self.plan.columns.iter().enumerate() {
            let values: Vec<f64> = (0..count).map(|k| sampled.value(k, i)).collect();
            let (scale, range) = extent(&values);
            let judged: Vec<Judgement> = (0..count).map(|k| self.sample(&sampled, k, i, scale, range)).collect();
            columns.push(RowColumn {
                name: column.name.clone(),
                unit: column.unit.clone(),
                values,
                bounds: judged.iter().map(|judgement| judgement.bound).collect(),
                grades: judged.iter().map(|judgement| judgement.grade).collect(),
            });
        }
        let times = (0..count).map(|k| sampled.base.times().at(k)).collect();
        Some(Rows { every: every.clone(), columns, times })
    }

    fn curves(&self, base: &[Sampler], traces: Vec<Trace>, halved: &[&Vec<Sampler>], corrected: Option<&Vec<Sampler>>) -> Vec<Curve> {
        let sampled = Sampled::new(CURVES, base, halved, corrected);
        let mut curves = Vec::new();
        for (i, (curve, trace)) in self.plan.curves.iter().zip(traces).enumerate() {
            let count = sampled.base.rows().len() / self.plan.curves.len();
            let values: Vec<f64> = (0..count).map(|k| sampled.value(k, i)).collect();
            let (scale, range) = extent(&values);
            let mut worst: Option<(f64, Grade)> = Some((0.0, Grade::Corroborated));
            for k in 0..count {
                let judged = self.sample(&sampled, k, i, scale, range);
                worst = match (worst, judged.bound) {
                    (Some((largest, _)), Some(bound)) if bound > largest => Some((bound, judged.grade)),
                    (Some(worst), Some(_)) => Some(worst),
                    _ => None,
                };
            }
            curves.push(Curve {
                expression: curve.expression.clone(),
                unit: curve.unit.clone(),
                against: curve.against.clone(),
                against_unit: curve.against_unit.clone(),
                points: trace.finish(),
                bound: worst.map(|(bound, _)| bound),
                grade: worst.map_or(Grade::Unbounded, |(_, grade)| grade),
            });
        }
        curves
    }
}

/// One sampler on every trajectory.
struct Sampled<'a> {
    base: &'a Sampler,
    halved: Vec<&'a Sampler>,
    corrected: Option<&'a Sampler>,
}

impl<'a> Sampled<'a> {
    fn new(
        which: usize,
        base: &'a [Sampler],
        halved: &[&'a Vec<Sampler>],
        corrected: Option<&'a Vec<Sampler>>,
    ) -> Self {
        Sampled {
            base: &base[which],
            halved: halved.iter().map(|samplers| &samplers[which]).collect(),
            corrected: corrected.map(|samplers| &samplers[which]),
        }
    }
    fn value(&self, k: usize, i: usize) -> f64 {
        self.base.rows()[k * self.base.width() + i]
    }
}

/// Largest absolute value, and largest minus smallest.
fn extent(values: &[f64]) -> (f64, f64) {
    let (mut scale, mut low, mut high) = (0.0, f64::INFINITY, f64::NEG_INFINITY);
    for value in values {
        scale = larger(scale, value.abs());
        low = smaller(low, *value);
        high = larger(high, *value);
    }
    (scale, high - low)
}

fn triple(first: Option<f64>, others: &[&Reading], pick: impl Fn(&Reading) -> Option<f64>) -> [Option<f64>; 3] {
    [first, others.first().and_then(|other| pick(other)), others.get(1).and_then(|other| pick(other))]
}

/// The slope of a passage below this share of the steepest slope of the run is noise.
const FLAT: f64 = 1e-7;

/// A passage that is too flat has no time; one whose bound exceeds a step is at most indicated.
fn check_slope(mut judgement: Judgement, quantity: &QuantityPlan, reading: &Reading, speed: Option<f64>) -> Judgement {
    let (Some(speed), Some(place), Some(bound)) = (speed, &reading.place, judgement.bound) else {
        return judgement;
    };
    if speed <= FLAT * reading.steepest {
        return unbounded("the expression passes the level too flatly to tell when", judgement.estimates);
    }
    if bound > place.h && judgement.grade < Grade::Indicated && matches!(quantity.measure, Measure::TimeWhen { .. }) {
        judgement.grade = Grade::Indicated;
        judgement.why = format!("{}; the bound exceeds a step", judgement.why);
        judgement.bound = Some(bound * super::judge::SAFETY_INDICATED / judgement.estimates.safety);
    }
    judgement
}
