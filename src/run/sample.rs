//! Values of expressions at given times, and at the step ends.

use super::system::Values;
use super::{Accepted, Observer};
use crate::arithmetic::larger;
use crate::scheme::dense_output::Piece;

/// The times at which something is sampled, in increasing order.
#[derive(Clone, Debug, PartialEq)]
pub struct Times {
    from: f64,
    until: f64,
    every: f64,
    count: usize,
}

impl Times {
    /// `from`, `from + every`, ... up to `until`, which is among them where it is a multiple (up to rounding).
    pub fn every(from: f64, until: f64, every: f64) -> Self {
        let ratio = (until - from) / every;
        let whole = if (ratio - ratio.round()).abs() < 1e-6 { ratio.round() } else { ratio.floor() };
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "limited by the plan")]
        Times { from, until, every, count: whole as usize + 1 }
    }
    /// `count` intervals of equal length, ends included.
    pub fn evenly(from: f64, until: f64, count: usize) -> Self {
        Times { from, until, every: (until - from) / count as f64, count: count + 1 }
    }
    /// Number of times.
    pub fn len(&self) -> usize {
        self.count
    }
    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.count == 0
    }
    /// Time `k`.
    pub fn at(&self, k: usize) -> f64 {
        let time = self.from + k as f64 * self.every;
        if k + 1 == self.count && (time - self.until).abs() < 1e-6 * self.every { self.until } else { time }
    }
}

/// Values of some expressions at given times.
#[derive(Debug)]
pub struct Sampler {
    times: Times,
    values: Values,
    next: usize,
    /// Row `k` holds the values at time `k`.
    rows: Vec<f64>,
    y: Vec<f64>,
}

impl Sampler {
    /// A sampler of these expressions.
    pub fn new(times: Times, values: Values, states: usize) -> Self {
        Sampler { times, values, next: 0, rows: Vec::new(), y: vec![0.0; states] }
    }
    /// Sees one piece of a solution.
    pub fn see(&mut self, piece: &Piece, modes: &[i8]) {
        while self.next < self.times.len() {
            let time = self.times.at(self.next);
            if time > piece.t_new {
                break;
            }
            let theta = (time - piece.t) / piece.h();
            piece.value(if theta < 0.0 { 0.0 } else { theta }, &mut self.y);
            let start = self.rows.len();
            self.rows.resize(start + self.values.outputs, 0.0);
            self.values.at(time, &self.y, modes, &mut self.rows[start..]);
            self.next += 1;
        }
    }
    /// The number of expressions.
    pub fn width(&self) -> usize {
        self.values.outputs
    }
    /// The values, row by row.
    pub fn rows(&self) -> &[f64] {
        &self.rows
    }
    /// The times.
    pub fn times(&self) -> &Times {
        &self.times
    }
}

impl Observer for Sampler {
    fn step(&mut self, step: &Accepted<'_>) {
        self.see(step.piece, step.modes);
    }
}

/// Most step ends that are kept for comparing meshes.
const MOST_ENDS: usize = 128;

/// The states at some step ends, which refined meshes share: there no interpolation blurs a comparison.
#[derive(Debug)]
pub struct EndSampler {
    /// The ends wanted; `None` where they are chosen as the run goes by.
    wanted: Option<Vec<f64>>,
    next: usize,
    stride: usize,
    seen: usize,
    /// Time and state.
    pub rows: Vec<(f64, Vec<f64>)>,
}

impl EndSampler {
    /// Chooses evenly among all steps that do not end at a kink or jump.
    pub fn choosing() -> Self {
        EndSampler { wanted: None, next: 0, stride: 1, seen: 0, rows: Vec::new() }
    }
    /// Takes the steps that end at these times.
    pub fn at(times: Vec<f64>) -> Self {
        EndSampler { wanted: Some(times), next: 0, stride: 1, seen: 0, rows: Vec::new() }
    }
    /// The largest difference of every state to another mesh at the ends that both have.
    pub fn differences(&self, other: &EndSampler, states: usize) -> Vec<f64> {
        let mut largest = vec![0.0; states];
        let mut rest = other.rows.iter().peekable();
        for (time, state) in &self.rows {
            while rest.peek().is_some_and(|(other, _)| other < time) {
                rest.next();
            }
            if let Some((_, other)) = rest.peek().filter(|(other, _)| other == time) {
                for i in 0..states {
                    largest[i] = larger(largest[i], (state[i] - other[i]).abs());
                }
            }
        }
        largest
    }
}

impl Observer for EndSampler {
    fn step(&mut self, step: &Accepted<'_>) {
        let end = step.piece.t_new;
        let take = if let Some(times) = &self.wanted {
            while times.get(self.next).is_some_and(|time| *time < end) {
                self.next += 1;
            }
            times.get(self.next) == Some(&end)
        } else {
            self.seen += usize::from(!step.cut);
            !step.cut && self.seen.is_multiple_of(self.stride)
        };
        if take {
            self.rows.push((end, step.piece.end().to_vec()));
            if self.wanted.is_none() && self.rows.len() > MOST_ENDS {
                let mut keep = false;
                self.rows.retain(|_| {
                    keep = !keep;
                    !keep
                });
                self.stride *= 2;
            }
        }
    }
}

/// The largest distance of some expressions from their start values, at step ends.
#[derive(Debug)]
pub struct DriftWatch {
    values: Values,
    /// The values at the start.
    pub start: Vec<f64>,
    /// The largest distance.
    pub largest: Vec<f64>,
    /// The distance at the end.
    pub at_end: Vec<f64>,
    out: Vec<f64>,
}

impl DriftWatch {
    /// A watch over these expressions, starting at `(t, y)`.
    pub fn new(mut values: Values, t: f64, y: &[f64]) -> Self {
        let mut start = vec![0.0; values.outputs];
        values.at(t, y, &[], &mut start);
        let zeros = vec![0.0; values.outputs];
        DriftWatch { values, start, largest: zeros.clone(), at_end: zeros.clone(), out: zeros }
    }
}

impl Observer for DriftWatch {
    fn step(&mut self, step: &Accepted<'_>) {
        self.values.at(step.piece.t_new, step.piece.end(), &[], &mut self.out);
        for i in 0..self.out.len() {
            let off = self.out[i] - self.start[i];
            self.largest[i] = larger(self.largest[i], off.abs());
            self.at_end[i] = off;
        }
    }
}

/// The largest distance of some states from their closed forms, at step ends.
#[derive(Debug)]
pub struct ExactWatch {
    forms: Values,
    states: Vec<usize>,
    /// The largest distance and its time.
    pub largest: Vec<(f64, f64)>,
    out: Vec<f64>,
}

impl ExactWatch {
    /// A watch over `states`, whose closed forms are the outputs of `forms`.
    pub fn new(forms: Values, states: Vec<usize>, from: f64) -> Self {
        let count = forms.outputs;
        ExactWatch { forms, states, largest: vec![(0.0, from); count], out: vec![0.0; count] }
    }
}

impl Observer for ExactWatch {
    fn step(&mut self, step: &Accepted<'_>) {
        self.forms.at(step.piece.t_new, &[], &[], &mut self.out);
        for (i, state) in self.states.iter().enumerate() {
            let off = (step.piece.end()[*state] - self.out[i]).abs();
            if off > self.largest[i].0 {
                self.largest[i] = (off, step.piece.t_new);
            }
        }
    }
}
