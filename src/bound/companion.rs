//! The companion: the error of a run as the solution of its own equation.
//!
//! With the dense output `P` of the run, the error `e = P - y` of the solution `y` solves
//! `e' = P' - f(t, P - e)`, `e(0) = 0`. Nothing is assumed of an order, a mesh or a small step. Each step of the
//! run is crossed in [`PARTS`] steps of Dormand-Prince 5(4).
//!
//! Source: Zadunaisky (1976), Numer. Math. 27, 21-39; Skeel (1986), ACM TOMS 12, 1-20 ("solving for the
//! correction"); Dormand, Duckers & Prince (1984), IMA J. Numer. Anal. 4, 169-184.

use super::outcome::Companion;
use crate::arithmetic::larger;
use crate::model::graph::NodeId;
use crate::plan::RunPlan;
use crate::run::sample::Sampler;
use crate::run::system::{System, Values};
use crate::run::watch::Watch;
use crate::run::{Accepted, Flip, Observer};
use crate::scheme::dense_output::Piece;
use crate::scheme::rates::{Rates, checked};
use crate::scheme::step::Stepper;
use crate::scheme::{self, Scheme};

/// Steps of the companion in each step of the run.
pub(super) const PARTS: usize = 2;

/// Follows a run and solves for its error.
#[derive(Debug)]
pub(super) struct Follower {
    system: System,
    stepper: Stepper,
    e: Vec<f64>,
    e_new: Vec<f64>,
    f: Vec<f64>,
    f_new: Vec<f64>,
    room: Room,
    error: Piece,
    corrected: Piece,
    switches: Values,
    /// Reads the quantities off the corrected solution `P - e`.
    pub watch: Watch,
    /// Samples the corrected solution.
    pub samplers: Vec<Sampler>,
    /// Largest error of every state at the ends of steps of the run.
    pub largest: Vec<f64>,
    /// Why the companion gave up, where it did.
    pub lost: Option<String>,
    last_h: f64,
    steps: u64,
}

#[derive(Debug)]
struct Room {
    y: Vec<f64>,
    slope: Vec<f64>,
}

/// The rates of the error inside one step of the run.
struct ErrorRates<'a> {
    piece: &'a Piece,
    system: &'a mut System,
    room: &'a mut Room,
}

impl Rates for ErrorRates<'_> {
    fn states(&self) -> usize {
        self.room.y.len()
    }
    fn rates(&mut self, t: f64, e: &[f64], out: &mut [f64]) {
        let theta = (t - self.piece.t) / self.piece.h();
        self.piece.value(theta, &mut self.room.y);
        self.piece.slope(theta, &mut self.room.slope);
        for (y, e) in self.room.y.iter_mut().zip(e) {
            *y -= e;
        }
        self.system.rates(t, &self.room.y, out);
        for (out, slope) in out.iter_mut().zip(&self.room.slope) {
            *out = slope - *out;
        }
    }
}

/// The scheme of the companion.
fn companion_scheme() -> Option<&'static Scheme> {
    scheme::find("dormand-prince")
}

impl Follower {
    /// A follower of a run; `None` where the scheme of the companion is not known.
    pub(super) fn new(plan: &RunPlan, watch: Watch, samplers: Vec<Sampler>) -> Option<Self> {
        let n = plan.start.len();
        let on: Vec<NodeId> = plan.graph.switches().iter().map(|switch| switch.on).collect();
        Some(Follower {
            system: System::new(&plan.graph, &plan.rates, &plan.parameters),
            stepper: Stepper::new(companion_scheme()?, n),
            e: vec![0.0; n],
            e_new: vec![0.0; n],
            f: vec![0.0; n],
            f_new: vec![0.0; n],
            room: Room { y: vec![0.0; n], slope: vec![0.0; n] },
            error: Piece::new(n),
            corrected: Piece::new(n),
            switches: Values::new(&plan.graph, &on, &plan.parameters),
            watch,
            samplers,
            largest: vec![0.0; n],
            lost: None,
            last_h: 0.0,
            steps: 0,
        })
    }

    /// What it cost.
    pub(super) fn cost(&self) -> Companion {
        Companion { steps: self.steps, evaluations: self.system.evaluations }
    }
}

impl Observer for Follower {
    fn step(&mut self, step: &Accepted<'_>) {
        if self.lost.is_some() {
            return;
        }
        let piece = step.piece;
        self.last_h = piece.h();
        self.system.modes.clear();
        self.system.modes.extend_from_slice(step.modes);
        let width = 1.0 / PARTS as f64;
        for part in 0..PARTS {
            let from = part as f64 * width;
            let (t, t_new) =
                (piece.time(from), piece.time(if part + 1 == PARTS { 1.0 } else { from + width }));
            let Follower { system, stepper, e, e_new, f, f_new, room, .. } = self;
            let mut rates = ErrorRates { piece, system, room };
            let done = checked(&mut rates, t, e, f)
                .and_then(|()| stepper.step(&mut rates, t, e, f, t_new, e_new, f_new));
            if done.is_err() || e_new.iter().any(|e| !e.is_finite()) {
                self.lost = Some(format!("the companion met a rate that is not finite at t = {t}"));
                return;
            }
            self.error.hermite(t, &self.e, &self.f, t_new, &self.e_new, &self.f_new);
            self.corrected.part_less(piece, from, width, &self.error);
            self.watch.see(&self.corrected, step.modes);
            for sampler in &mut self.samplers {
                sampler.see(&self.corrected, step.modes);
            }
            std::mem::swap(&mut self.e, &mut self.e_new);
            self.steps += 1;
        }
        for (largest, e) in self.largest.iter_mut().zip(&self.e) {
            *largest = larger(*largest, e.abs());
        }
    }

    /// The corrected solution passes the switch a little earlier or later than the run. Where the rates jump,
    /// that moves the error: `e_after = e - (f_before - f_after) dt` (the saltation rule; Mueller 1995, Chaos,
    /// Solitons & Fractals 5, 1671-1681).
    fn flip(&mut self, flip: &Flip<'_>) {
        if self.lost.is_some() {
            return;
        }
        let n = self.e.len();
        let y: Vec<f64> = flip.state.iter().zip(&self.e).map(|(y, e)| y - e).collect();
        let (mut before, mut after) = (vec![0.0; n], vec![0.0; n]);
        self.system.modes = flip.before.to_vec();
        self.system.rates(flip.time, &y, &mut before);
        self.system.modes = flip.after.to_vec();
        self.system.rates(flip.time, &y, &mut after);
        let mut levels = vec![0.0; self.switches.outputs];
        self.switches.at(flip.time, &y, flip.before, &mut levels);
        let level = levels[flip.switch];
        let ahead = 1e-6 * if self.last_h > 0.0 { self.last_h } else { 1e-3 };
        let moved: Vec<f64> = y.iter().zip(&before).map(|(y, f)| y + ahead * f).collect();
        self.switches.at(flip.time + ahead, &moved, flip.before, &mut levels);
        let speed = (levels[flip.switch] - level) / ahead;
        let delay = if level == 0.0 { 0.0 } else { -level / speed };
        if !delay.is_finite() || delay.abs() > larger(self.last_h, ahead) {
            self.lost = Some(format!(
                "the companion lost a kink or jump that is passed too flatly at t = {}",
                flip.time
            ));
            return;
        }
        for i in 0..n {
            self.e[i] -= (before[i] - after[i]) * delay;
        }
    }
}
