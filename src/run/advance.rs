//! Carries a run from its start to its end, and makes a mesh point of every kink and jump that a switch marks.
//!
//! The rates of a model may hold switches: the argument of `abs` and `signum`, the difference of the arguments
//! of `max` and `min`. During a step every switch is locked to one branch, so that the scheme sees smooth rates;
//! where the argument changes sign inside the step, the step is repeated to end there, and the branch flips.
//! Source of the idea: Mannshardt (1978), Numer. Math. 31, 131-145; Hairer, Norsett & Wanner I, sect. II.6.

use super::stop::Stop;
use super::system::{System, Values};
use super::{Accepted, Flip, Observer, Rejections};
use crate::arithmetic::{larger, root, smaller};
use crate::plan::{Nominal, RunPlan};
use crate::scheme::control::{Controller, LARGEST_SHARE};
use crate::scheme::dense_output::{Piece, Room};
use crate::scheme::rates::{NotFinite, checked};
use crate::scheme::step::Stepper;

/// Flips at one mesh interval after which a run counts as chattering.
const MOST_FLIPS: u32 = 60;
/// Places inside a step at which switches are looked at.
const LOOKS: [f64; 4] = [0.25, 0.5, 0.75, 1.0];

/// A mesh point that a switch made.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cut {
    /// The mesh interval in which it lies.
    pub interval: u64,
    /// Its time.
    pub time: f64,
    /// Which switch of the graph.
    pub switch: usize,
}

/// The mesh of a run as it came out: what a halved run refines.
#[derive(Clone, Debug, PartialEq)]
pub struct FrozenMesh {
    /// The mesh points apart from cuts.
    pub nominal: Nominal,
    /// The cuts in order of time.
    pub cuts: Vec<Cut>,
}

/// What a run cost, and how its mesh came out.
#[derive(Clone, Debug, PartialEq)]
pub struct Ran {
    /// Steps accepted.
    pub accepted: u64,
    /// Smallest and largest step.
    pub smallest: f64,
    /// Largest step.
    pub largest: f64,
    /// Steps rejected by cause.
    pub rejected: Rejections,
    /// Evaluations of all the rates.
    pub evaluations: u64,
    /// The cuts.
    pub cuts: Vec<Cut>,
    /// Whether the cuts came in another order or number than the mesh that was refined has them.
    pub irregular: bool,
}

/// Which switches of the graph the rates depend on, so that a run has to watch them.
pub fn watched(plan: &RunPlan) -> Vec<bool> {
    let reachable = plan.graph.reachable(&plan.rates);
    let mut watched: Vec<bool> = Vec::new();
    for switch in plan.graph.switches() {
        let (time, states) = plan.graph.depends(switch.on);
        watched.push(reachable.contains(&switch.on) && (time || !states.is_empty()));
    }
    watched
}

/// Carries one run.
#[derive(Debug)]
pub struct Runner<'p> {
    plan: &'p RunPlan,
    system: System,
    stepper: Stepper,
    switches: Values,
    /// The switches that are watched, as indices into those of the graph.
    watched: Vec<usize>,
    levels: Vec<Vec<f64>>,
    piece: Piece,
    room: Room,
    t: f64,
    y: Vec<f64>,
    f: Vec<f64>,
    y_new: Vec<f64>,
    f_new: Vec<f64>,
    ran: Ran,
    flips_here: u32,
    limit: u64,
}

impl<'p> Runner<'p> {
    /// Makes ready to run with at most `limit` steps.
    ///
    /// # Errors
    /// [`Stop::NotFinite`] where a rate at the start is not finite.
    pub fn new(plan: &'p RunPlan, watched: &[bool], limit: u64) -> Result<Self, Stop> {
        let n = plan.start.len();
        let indices: Vec<usize> = (0..watched.len()).filter(|i| watched[*i]).collect();
        let nodes: Vec<_> = indices.iter().map(|i| plan.graph.switches()[*i].on).collect();
        let mut runner = Runner {
            plan,
            system: System::new(&plan.graph, &plan.rates, &plan.parameters),
            stepper: Stepper::new(plan.scheme, n),
            switches: Values::new(&plan.graph, &nodes, &plan.parameters),
            levels: vec![vec![0.0; indices.len()]; LOOKS.len() + 1],
            watched: indices,
            piece: Piece::new(n),
            room: Room::new(n),
            t: plan.from,
            y: plan.start.clone(),
            f: vec![0.0; n],
            y_new: vec![0.0; n],
            f_new: vec![0.0; n],
            ran: Ran {
                accepted: 0,
                smallest: f64::INFINITY,
                largest: 0.0,
                rejected: Rejections::default(),
                evaluations: 0,
                cuts: Vec::new(),
                irregular: false,
            },
            flips_here: 0,
            limit,
        };
        runner.set_first_modes()?;
        checked(&mut runner.system, runner.t, &runner.y, &mut runner.f)?;
        Ok(runner)
    }

    /// The first branch of every switch: the side on which its argument is, or toward which it moves.
    fn set_first_modes(&mut self) -> Result<(), Stop> {
        if self.watched.is_empty() {
            return Ok(());
        }
        checked(&mut self.system, self.t, &self.y, &mut self.f)?;
        let mut here = vec![0.0; self.watched.len()];
        self.switches.at(self.t, &self.y, &self.system.modes, &mut here);
        if here.contains(&0.0) {
            let ahead = 1e-7 * (self.plan.until - self.plan.from);
            let moved: Vec<f64> = self.y.iter().zip(&self.f).map(|(y, f)| y + ahead * f).collect();
            let mut next = vec![0.0; self.watched.len()];
            self.switches.at(self.t + ahead, &moved, &self.system.modes, &mut next);
            for (level, next) in here.iter_mut().zip(&next) {
                if *level == 0.0 {
                    *level = *next;
                }
            }
        }
        for (switch, level) in self.watched.iter().zip(&here) {
            self.system.modes[*switch] = if *level < 0.0 { -1 } else { 1 };
        }
        Ok(())
    }

    /// Carries the run over a nominal mesh, every interval and every part of it between `expected` cuts divided
    /// into `2^halvings` steps.
    ///
    /// # Errors
    /// A [`Stop`] where the run ends early; the observers have then seen a part.
    pub fn over(
        mut self,
        nominal: &Nominal,
        expected: &[Cut],
        halvings: u32,
        observers: &mut [&mut dyn Observer],
    ) -> Result<Ran, Stop> {
        let parts = 1_u64 << halvings;
        let mut next = 0;
        for interval in 0..nominal.steps() {
            self.flips_here = 0;
            let mut a = nominal.point(interval);
            let end = nominal.point(interval + 1);
            let reach = (end - a) / parts as f64;
            let mut ahead = next;
            loop {
                let cut = expected.get(ahead).filter(|cut| cut.interval == interval);
                let b = cut.map_or(end, |cut| cut.time);
                for part in 1..=parts {
                    let target = if part == parts { b } else { a + (b - a) * (part as f64 / parts as f64) };
                    let guide = cut.filter(|_| part == parts);
                    if guide.is_some() && self.ran.cuts.len() > ahead {
                        // The switch was passed a little earlier than on the coarser mesh.
                        continue;
                    }
                    self.go_to(target, guide.map(|cut| (cut, reach)), interval, expected, observers)?;
                }
                a = b;
                if cut.is_none() {
                    break;
                }
                ahead += 1;
            }
            next = ahead;
        }
        if self.ran.cuts.len() != expected.len() && halvings > 0 {
            self.ran.irregular = true;
        }
        Ok(self.finish())
    }

    /// Steps to `target`, cutting at every switch on the way; with a guide, to the switch that it expects, at most so
    /// far beyond `target`.
    fn go_to(
        &mut self,
        target: f64,
        guide: Option<(&Cut, f64)>,
        interval: u64,
        expected: &[Cut],
        observers: &mut [&mut dyn Observer],
    ) -> Result<(), Stop> {
        while target > self.t {
            let start = self.t;
            self.try_step(target)?;
            match self.first_flip() {
                None => {
                    if let Some((cut, reach)) = guide {
                        // The part before the cut may be much shorter than the steps around it.
                        let further = target + larger(0.5 * (target - start), reach);
                        if further <= self.plan.until
                            && self.try_step(further).is_ok()
                            && let Some((theta, switch)) = self.first_flip()
                            && self.watched[switch] == cut.switch
                        {
                            self.cut_at(theta, switch, interval, expected, observers)?;
                            return Ok(());
                        }
                        // It lies still farther on and will be met there.
                        self.try_step(target)?;
                    }
                    self.accept(false, observers)?;
                }
                Some((theta, switch)) => {
                    let wanted = guide.is_some_and(|(cut, _)| self.watched[switch] == cut.switch);
                    self.cut_at(theta, switch, interval, expected, observers)?;
                    if wanted {
                        return Ok(());
                    }
                }
            }
        }
        Ok(())
    }

    /// Carries the run with steps that a controller chooses, and returns its mesh.
    ///
    /// # Errors
    /// A [`Stop`] where the run ends early; the observers have then seen a part.
    pub fn adaptively(
        mut self,
        tolerance: f64,
        scales: &[f64],
        observers: &mut [&mut dyn Observer],
    ) -> Result<(FrozenMesh, Ran), Stop> {
        let until = self.plan.until;
        let order = self.stepper.scheme().embedded_order.unwrap_or(self.stepper.scheme().order);
        let lower = order.min(self.stepper.scheme().order);
        let mut controller = Controller::new(lower);
        let mut points = vec![self.t];
        let mut h = self.first_step(lower, tolerance, scales);
        while self.t < until {
            let interval = points.len() as u64 - 1;
            h = smaller(h, LARGEST_SHARE * (until - self.plan.from));
            let reach = until - self.t;
            // Two steps of equal length rather than a full one and a sliver.
            let h_now = if h >= reach {
                reach
            } else if 2.0 * h > reach {
                0.5 * reach
            } else {
                h
            };
            let target = if h_now >= reach { until } else { self.t + h_now };
            if target - self.t <= 16.0 * f64::EPSILON * larger(self.t.abs(), target.abs()) {
                return Err(Stop::StepTooSmall { time: self.t, state: self.y.clone() });
            }
            if self.try_step(target).is_err() {
                self.ran.rejected.not_finite += 1;
                h = h_now * controller.not_finite();
                continue;
            }
            let error = self
                .stepper
                .local_error(target - self.t, &self.y, &self.y_new, tolerance, scales)
                .unwrap_or(0.0);
            if error.is_nan() || error > 1.0 {
                self.ran.rejected.local_error += 1;
                h = h_now * if error.is_nan() { controller.not_finite() } else { controller.rejected(error) };
                continue;
            }
            if let Some((theta, switch)) = self.first_flip() {
                self.cut_at(theta, switch, interval, &[], observers)?;
                controller.restart();
                if self.t >= until {
                    points.push(until);
                }
                continue;
            }
            self.accept(false, observers)?;
            self.flips_here = 0;
            points.push(self.t);
            h = h_now * controller.accepted(error);
        }
        let cuts = self.ran.cuts.clone();
        Ok((FrozenMesh { nominal: Nominal::Listed(points), cuts }, self.finish()))
    }

    /// A first step from the sizes of the state, its rate and the change of that over a trial Euler step.
    /// Source: Gladwell, Shampine & Brankin (1987); Hairer, Norsett & Wanner I, sect. II.4.
    fn first_step(&mut self, order: u32, tolerance: f64, scales: &[f64]) -> f64 {
        let span = self.plan.until - self.plan.from;
        let norm = |values: &[f64], y: &[f64]| {
            let mut largest = 0.0;
            for i in 0..values.len() {
                let ratio = values[i].abs() / (tolerance * (y[i].abs() + scales[i]));
                largest = larger(largest, ratio);
            }
            largest
        };
        let d0 = norm(&self.y, &self.y);
        let d1 = norm(&self.f, &self.y);
        let h0 = if d0 < 1e-5 || d1 < 1e-5 { 1e-6 * span } else { 0.01 * d0 / d1 };
        let h0 = smaller(h0, span);
        let moved: Vec<f64> = self.y.iter().zip(&self.f).map(|(y, f)| y + h0 * f).collect();
        let mut rates = vec![0.0; self.y.len()];
        if checked(&mut self.system, self.t + h0, &moved, &mut rates).is_err() {
            return 1e-3 * h0;
        }
        let change: Vec<f64> = rates.iter().zip(&self.f).map(|(new, old)| new - old).collect();
        let d2 = norm(&change, &self.y) / h0;
        let worst = larger(d1, d2);
        let h1 = if worst <= 1e-15 {
            larger(1e-6 * span, 1e-3 * h0)
        } else {
            crate::arithmetic::elementary::pow(0.01 / worst, 1.0 / (f64::from(order) + 1.0))
        };
        smaller(smaller(100.0 * h0, h1), span)
    }

    fn try_step(&mut self, target: f64) -> Result<(), NotFinite> {
        let Runner { stepper, system, t, y, f, y_new, f_new, piece, room, .. } = self;
        stepper.step(system, *t, y, f, target, y_new, f_new)?;
        piece.fill(stepper, system, *t, y, f, target, y_new, f_new, room)
    }

    /// The earliest change of sign of a watched switch inside the step just tried: theta and which of the
    /// watched.
    fn first_flip(&mut self) -> Option<(f64, usize)> {
        if self.watched.is_empty() {
            return None;
        }
        let mut first: Option<(f64, usize)> = None;
        self.look(0.0, 0);
        for (j, theta) in LOOKS.iter().enumerate() {
            self.look(*theta, j + 1);
            let before = if j == 0 { 0.0 } else { LOOKS[j - 1] };
            for k in 0..self.watched.len() {
                let side = f64::from(self.system.modes[self.watched[k]]);
                let (level_before, level) = (side * self.levels[j][k], side * self.levels[j + 1][k]);
                if level >= 0.0 || level.is_nan() {
                    continue;
                }
                let theta = if level_before <= 0.0 {
                    before
                } else {
                    let mut out = vec![0.0; self.watched.len()];
                    let mut y = vec![0.0; self.y.len()];
                    let (piece, switches, modes) = (&self.piece, &mut self.switches, &self.system.modes);
                    root::bracketed(before, level_before, *theta, level, |theta| {
                        piece.value(theta, &mut y);
                        switches.at(piece.time(theta), &y, modes, &mut out);
                        side * out[k]
                    })
                };
                if first.is_none_or(|(earliest, _)| theta < earliest) {
                    first = Some((theta, k));
                }
            }
            if first.is_some() {
                break;
            }
        }
        first
    }

    fn look(&mut self, theta: f64, row: usize) {
        let mut y = std::mem::take(&mut self.y_new);
        self.piece.value(theta, &mut y);
        self.switches.at(self.piece.time(theta), &y, &self.system.modes, &mut self.levels[row]);
        // Restores the end of the step, which the piece holds exactly.
        y.copy_from_slice(self.piece.end());
        self.y_new = y;
    }

    /// Ends the step where switch `k` passes zero by the scheme itself, accepts it, and flips the switch.
    fn cut_at(
        &mut self,
        theta: f64,
        k: usize,
        interval: u64,
        expected: &[Cut],
        observers: &mut [&mut dyn Observer],
    ) -> Result<(), Stop> {
        let switch = self.watched[k];
        self.flips_here += 1;
        if self.flips_here > MOST_FLIPS {
            return Err(Stop::Chattering { time: self.t, switch });
        }
        self.ran.rejected.switch += 1;
        let h = self.piece.h();
        let least = 4.0 * f64::EPSILON * larger(self.t.abs(), self.piece.t_new.abs());
        if theta * h > least {
            let time = self.close_in(self.piece.time(theta), k, least)?;
            if time > self.t {
                self.accept(true, observers)?;
            }
        }
        let before = self.system.modes.clone();
        self.system.modes[switch] = -self.system.modes[switch];
        for observer in observers.iter_mut() {
            observer.flip(&Flip {
                time: self.t,
                state: &self.y,
                switch,
                before: &before,
                after: &self.system.modes,
            });
        }
        let found = self.ran.cuts.len();
        if !expected.is_empty() && expected.get(found).is_none_or(|cut| cut.switch != switch) {
            self.ran.irregular = true;
        }
        self.ran.cuts.push(Cut { interval, time: self.t, switch });
        checked(&mut self.system, self.t, &self.y, &mut self.f)?;
        Ok(())
    }

    /// Repeats the step until its end is where switch `k` is zero; starts from the root on the dense output.
    /// On return the step just tried ends there.
    fn close_in(&mut self, guess: f64, k: usize, least: f64) -> Result<f64, Stop> {
        let mut out = vec![0.0; self.watched.len()];
        let mut level = |runner: &mut Self, time: f64| -> Result<f64, Stop> {
            runner.try_step(time)?;
            runner.switches.at(time, &runner.y_new, &runner.system.modes, &mut out);
            Ok(out[k])
        };
        let (start, h) = (self.t, guess - self.t);
        let mut older = guess;
        let mut level_older = level(self, older)?;
        let mut time = guess + 1e-3 * h;
        let mut level_here = level(self, time)?;
        for _ in 0..8 {
            let rise = level_here - level_older;
            if level_here == 0.0 || rise == 0.0 || (time - older).abs() <= least {
                break;
            }
            let next = time - level_here * (time - older) / rise;
            if !(next > start && next < guess + 0.5 * h) {
                break;
            }
            (older, level_older) = (time, level_here);
            time = next;
            level_here = level(self, time)?;
        }
        // The secant ended outside, or without a slope: the root on the dense output serves.
        if (time - guess).abs() > 0.01 * h {
            time = guess;
            level(self, time)?;
        }
        Ok(time)
    }

    fn accept(&mut self, cut: bool, observers: &mut [&mut dyn Observer]) -> Result<(), Stop> {
        if self.ran.accepted >= self.limit {
            return Err(Stop::TooManySteps { limit: self.limit, time: self.t });
        }
        let step =
            Accepted { piece: &self.piece, f: &self.f, f_new: &self.f_new, modes: &self.system.modes, cut };
        for observer in observers.iter_mut() {
            observer.step(&step);
        }
        let h = self.piece.h();
        self.ran.accepted += 1;
        self.ran.smallest = smaller(self.ran.smallest, h);
        self.ran.largest = larger(self.ran.largest, h);
        self.t = self.piece.t_new;
        std::mem::swap(&mut self.y, &mut self.y_new);
        std::mem::swap(&mut self.f, &mut self.f_new);
        if self.y.iter().any(|value| !value.is_finite()) {
            return Err(Stop::NotFinite(NotFinite { time: self.t, state: self.y.clone() }));
        }
        Ok(())
    }

    fn finish(mut self) -> Ran {
        self.ran.evaluations = self.system.evaluations;
        self.ran
    }
}
