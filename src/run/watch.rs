//! Reads quantities from a run as it goes by: peaks and passages on the dense output, never off the rows.

use super::path::Path;
use super::place::Place;
use super::system::Values;
use super::{Accepted, Observer};
use crate::arithmetic::{larger, root, smaller};
use crate::model::graph::{Graph, NodeId};
use crate::plan::{Measure, QuantityPlan};
use crate::study::block::run::{Direction, Occurrence};

/// Places inside a step at which expressions are sampled before roots are sought between them.
const SAMPLES: [f64; 5] = [0.0, 0.25, 0.5, 0.75, 1.0];

/// Nodes and weights of the Gauss-Legendre rule with five points on [0, 1], exact to degree 9.
/// Source: Abramowitz & Stegun (1964), table 25.4, moved to [0, 1].
const GAUSS: [(f64, f64); 5] = [
    (0.046910077030668003601186560850304, 0.11846344252809454375713202035996),
    (0.23076534494715845448184278964990, 0.23931433524968323402064575741782),
    (0.5, 0.28444444444444444444444444444444),
    (0.76923465505284154551815721035010, 0.23931433524968323402064575741782),
    (0.95308992296933199639881343914970, 0.11846344252809454375713202035996),
];

/// A quantity as read from one trajectory.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Reading {
    /// The value; `None` where it does not occur.
    pub value: Option<f64>,
    /// Where it was found; `None` for integrals, means and counts.
    pub place: Option<Place>,
    /// For passages and counts: the smallest distance of a turning point or end from the level.
    pub margin: Option<f64>,
    /// Largest absolute value of the expression over the run.
    pub scale: f64,
    /// Largest minus smallest value of the expression at the samples.
    pub range: f64,
    /// Largest absolute rate of change of the expression over the run.
    pub steepest: f64,
    /// For the time of a peak: how far the highest other peak stays below it.
    pub lead: Option<f64>,
}

/// Reads the quantities of a plan from one trajectory.
#[derive(Debug)]
pub struct Watch {
    from: f64,
    states: usize,
    /// Outputs `2 j` and `2 j + 1`: expression `j` and its rate of change along the solution.
    values: Values,
    /// Outputs: the switches that no run watches, on which integrals are cut.
    kinks: Values,
    items: Vec<Item>,
    /// Which expressions are integrated.
    integrated: Vec<usize>,
    integrals: Vec<f64>,
    samples: Vec<Vec<f64>>,
    kink_samples: Vec<Vec<f64>>,
    y: Vec<f64>,
    scales: Vec<f64>,
    lows: Vec<f64>,
    highs: Vec<f64>,
    steepest: Vec<f64>,
    /// Largest absolute value of every state at step ends.
    pub state_scales: Vec<f64>,
    /// Number of steps seen.
    pub steps: u64,
    /// The end of the last step.
    last: Place,
}

#[derive(Debug)]
struct Item {
    /// Which expression.
    index: usize,
    measure: Measure,
    best: Option<f64>,
    /// The second best peak.
    rival: Option<f64>,
    place: Place,
    count: u32,
    margin: Option<f64>,
    /// The side of the level on which the expression was last seen off it; for peaks, whether it last rose or
    /// fell.
    side: f64,
}

impl Watch {
    /// A watch for the quantities of a run.
    ///
    /// `rates` are the nodes of the rates, `watched` tells which switches of the graph the run itself locates.
    pub fn new(
        graph: &mut Graph,
        quantities: &[QuantityPlan],
        rates: &[NodeId],
        parameters: &[f64],
        watched: &[bool],
        from: f64,
    ) -> Self {
        let mut nodes: Vec<NodeId> = Vec::new();
        let mut items = Vec::new();
        for quantity in quantities {
            let index = nodes.iter().position(|node| *node == quantity.node).unwrap_or_else(|| {
                nodes.push(quantity.node);
                nodes.len() - 1
            });
            items.push(Item {
                index,
                measure: quantity.measure,
                best: None,
                rival: None,
                place: Place::default(),
                count: 0,
                margin: None,
                side: 0.0,
            });
        }
        let mut outputs = Vec::new();
        for node in &nodes {
            outputs.push(*node);
            outputs.push(graph.along(*node, rates));
        }
        let mut integrated: Vec<usize> = items
            .iter()
            .filter(|item| matches!(item.measure, Measure::Mean | Measure::Integral))
            .map(|item| item.index)
            .collect();
        integrated.sort_unstable();
        integrated.dedup();
        let kink_nodes: Vec<NodeId> = if integrated.is_empty() {
            Vec::new()
        } else {
            let free = graph.switches().iter().enumerate();
            free.filter(|(i, _)| !watched.get(*i).copied().unwrap_or(false))
                .map(|(_, switch)| switch.on)
                .collect()
        };
        let states = rates.len();
        let count = nodes.len();
        Watch {
            from,
            states,
            values: Values::new(graph, &outputs, parameters),
            kinks: Values::new(graph, &kink_nodes, parameters),
            items,
            integrals: vec![0.0; integrated.len()],
            integrated,
            samples: vec![vec![0.0; outputs.len()]; SAMPLES.len()],
            kink_samples: vec![vec![0.0; kink_nodes.len()]; SAMPLES.len()],
            y: vec![0.0; states],
            scales: vec![0.0; count],
            lows: vec![f64::INFINITY; count],
            highs: vec![f64::NEG_INFINITY; count],
            steepest: vec![0.0; count],
            state_scales: vec![0.0; states],
            steps: 0,
            last: Place::default(),
        }
    }

    /// The compiled expressions: outputs `2 j` and `2 j + 1` are expression `j` and its rate of change.
    pub fn values(&mut self) -> &mut Values {
        &mut self.values
    }

    /// Which expression quantity `i` reads.
    pub fn index(&self, i: usize) -> usize {
        self.items[i].index
    }

    /// Sees one step of a solution.
    pub fn see(&mut self, mut path: impl Path, modes: &[i8]) {
        let first = self.steps == 0;
        self.steps += 1;
        self.last.take(&mut path, 1.0, modes, self.states);
        let Watch { values, kinks, samples, kink_samples, y, .. } = self;
        for (j, theta) in SAMPLES.iter().enumerate() {
            path.state(*theta, y);
            values.at(path.time(*theta), y, modes, &mut samples[j]);
            if kinks.outputs > 0 {
                kinks.at(path.time(*theta), y, modes, &mut kink_samples[j]);
            }
        }
        // `y` now holds the state at the end.
        for (scale, value) in self.state_scales.iter_mut().zip(&self.y) {
            *scale = larger(*scale, value.abs());
        }
        for index in 0..self.scales.len() {
            for sample in &self.samples {
                let (value, rate) = (sample[2 * index], sample[2 * index + 1]);
                self.scales[index] = larger(self.scales[index], value.abs());
                self.lows[index] = smaller(self.lows[index], value);
                self.highs[index] = larger(self.highs[index], value);
                self.steepest[index] = larger(self.steepest[index], rate.abs());
            }
        }
        let mut items = std::mem::take(&mut self.items);
        for item in &mut items {
            self.see_item(item, &mut path, modes, first);
        }
        self.items = items;
        if !self.integrated.is_empty() {
            self.integrate(&mut path, modes);
        }
    }

    fn see_item(&mut self, item: &mut Item, path: &mut impl Path, modes: &[i8], first: bool) {
        let value = 2 * item.index;
        match item.measure {
            Measure::Final => {
                item.best = Some(self.samples[4][value]);
                item.place.take(path, 1.0, modes, self.states);
            }
            Measure::At(time) => {
                let inside = time > path.t() && time <= path.t_new();
                if inside || (first && time == path.t()) {
                    let theta = (time - path.t()) / (path.t_new() - path.t());
                    item.best = Some(self.evaluate(path, theta, modes, value));
                    item.place.take(path, theta, modes, self.states);
                }
            }
            Measure::Highest | Measure::TimeOfHighest => self.see_peak(item, path, modes, 1.0, first),
            Measure::Lowest | Measure::TimeOfLowest => self.see_peak(item, path, modes, -1.0, first),
            Measure::Mean | Measure::Integral => {}
            Measure::TimeWhen { level, direction, which } => {
                self.see_passages(item, path, modes, level, direction, Some(which), first);
            }
            Measure::Count { level, direction } => {
                self.see_passages(item, path, modes, level, direction, None, first);
            }
        }
    }

    fn evaluate(&mut self, path: &mut impl Path, theta: f64, modes: &[i8], output: usize) -> f64 {
        let mut out = vec![0.0; self.values.outputs];
        let mut y = std::mem::take(&mut self.y);
        path.state(theta, &mut y);
        self.values.at(path.time(theta), &y, modes, &mut out);
        self.y = y;
        out[output]
    }

    /// The place between samples `j` and `j + 1` where `output` less `level` is zero; it differs in sign there.
    fn locate(
        &mut self,
        path: &mut impl Path,
        modes: &[i8],
        output: usize,
        level: f64,
        a: f64,
        b: f64,
    ) -> f64 {
        let fa = self.evaluate(path, a, modes, output) - level;
        let fb = self.evaluate(path, b, modes, output) - level;
        root::bracketed(a, fa, b, fb, |theta| self.evaluate(path, theta, modes, output) - level)
    }

    /// Looks for peaks: places where the rate of change along the solution turns from rising to falling, the start
    /// where it falls from there, and the end where it rises to there. `sign` -1 looks for troughs.
    fn see_peak(&mut self, item: &mut Item, path: &mut impl Path, modes: &[i8], sign: f64, first: bool) {
        let (value, rate) = (2 * item.index, 2 * item.index + 1);
        if first && sign * self.samples[0][rate] <= 0.0 {
            self.peak(item, path, modes, sign, 0.0);
        }
        for j in 0..SAMPLES.len() {
            let slope = sign * self.samples[j][rate];
            let falls = slope < 0.0 && item.side > 0.0;
            if slope != 0.0 {
                item.side = if slope > 0.0 { 1.0 } else { -1.0 };
            }
            if !falls {
                continue;
            }
            if j == 0 {
                // A kink at the end of the last step.
                self.peak(item, path, modes, sign, 0.0);
                continue;
            }
            let slope_before = sign * self.samples[j - 1][rate];
            if slope_before <= 0.0 {
                self.peak(item, path, modes, sign, SAMPLES[j - 1]);
                continue;
            }
            // No peak between the samples is higher than the tangents allow.
            let width = (SAMPLES[j] - SAMPLES[j - 1]) * (path.t_new() - path.t());
            let (before, here) = (sign * self.samples[j - 1][value], sign * self.samples[j][value]);
            let roof = larger(before + width * slope_before, here - width * slope);
            let floor = if item.measure_is_time() { item.rival } else { item.best };
            if floor.is_some_and(|floor| roof < sign * floor) {
                continue;
            }
            let theta = self.locate(path, modes, rate, 0.0, SAMPLES[j - 1], SAMPLES[j]);
            self.peak(item, path, modes, sign, theta);
        }
    }

    /// Takes down a peak at `theta`.
    fn peak(&mut self, item: &mut Item, path: &mut impl Path, modes: &[i8], sign: f64, theta: f64) {
        let top = self.evaluate(path, theta, modes, 2 * item.index);
        if item.best.is_none_or(|best| sign * top > sign * best) {
            item.rival = item.best;
            item.best = Some(top);
            item.place.take(path, theta, modes, self.states);
        } else if item.rival.is_none_or(|rival| sign * top > sign * rival) {
            item.rival = Some(top);
        }
    }

    #[expect(clippy::too_many_arguments, reason = "a passage has a level, a direction and an occurrence")]
    fn see_passages(
        &mut self,
        item: &mut Item,
        path: &mut impl Path,
        modes: &[i8],
        level: f64,
        direction: Direction,
        which: Option<Occurrence>,
        first: bool,
    ) {
        let (value, rate) = (2 * item.index, 2 * item.index + 1);
        // The places to look between: the samples, and every turning point between them.
        let mut places: Vec<(f64, f64)> = Vec::with_capacity(10);
        for j in 0..SAMPLES.len() {
            if j > 0 && self.samples[j - 1][rate] * self.samples[j][rate] < 0.0 {
                let theta = self.locate(path, modes, rate, 0.0, SAMPLES[j - 1], SAMPLES[j]);
                let off = self.evaluate(path, theta, modes, value) - level;
                places.push((theta, off));
                item.margin = Some(smaller(item.margin.unwrap_or(f64::INFINITY), off.abs()));
            }
            places.push((SAMPLES[j], self.samples[j][value] - level));
        }
        if first {
            item.side = sign(places[0].1);
            let start = places[0].1.abs();
            item.margin = Some(smaller(item.margin.unwrap_or(f64::INFINITY), start));
        }
        for pair in 1..places.len() {
            let ((a, _), (b, off)) = (places[pair - 1], places[pair]);
            let side = sign(off);
            if side == 0.0 || side == item.side {
                continue;
            }
            let falls = side < 0.0;
            let counts = item.side != 0.0
                && match direction {
                    Direction::Falls => falls,
                    Direction::Rises => !falls,
                    Direction::Crosses => true,
                };
            item.side = side;
            if !counts {
                continue;
            }
            item.count += 1;
            let wanted = match which {
                Some(Occurrence::Nth(n)) => n == item.count,
                Some(Occurrence::Last) => true,
                None => false,
            };
            if wanted {
                let theta = self.locate(path, modes, value, level, a, b);
                item.best = Some(path.time(theta));
                item.place.take(path, theta, modes, self.states);
            }
        }
    }

    fn integrate(&mut self, path: &mut impl Path, modes: &[i8]) {
        let mut cuts = vec![0.0];
        for kink in 0..self.kinks.outputs {
            for j in 1..SAMPLES.len() {
                let (fa, fb) = (self.kink_samples[j - 1][kink], self.kink_samples[j][kink]);
                if fa * fb < 0.0 {
                    let mut out = vec![0.0; self.kinks.outputs];
                    let mut y = std::mem::take(&mut self.y);
                    let kinks = &mut self.kinks;
                    cuts.push(root::bracketed(SAMPLES[j - 1], fa, SAMPLES[j], fb, |theta| {
                        path.state(theta, &mut y);
                        kinks.at(path.time(theta), &y, modes, &mut out);
                        out[kink]
                    }));
                    self.y = y;
                }
            }
        }
        cuts.push(1.0);
        cuts.sort_by(f64::total_cmp);
        let h = path.t_new() - path.t();
        let mut out = vec![0.0; self.values.outputs];
        for pair in cuts.windows(2) {
            let width = pair[1] - pair[0];
            for (node, weight) in GAUSS {
                let theta = pair[0] + node * width;
                path.state(theta, &mut self.y);
                self.values.at(path.time(theta), &self.y, modes, &mut out);
                for (sum, index) in self.integrals.iter_mut().zip(&self.integrated) {
                    *sum += h * width * weight * out[2 * index];
                }
            }
        }
    }

    /// What was read, one entry a quantity.
    pub fn readings(&mut self) -> Vec<Reading> {
        let mut items = std::mem::take(&mut self.items);
        for item in &mut items {
            self.close_peak(item);
        }
        self.items = items;
        self.items.iter().map(|item| self.reading(item)).collect()
    }

    /// The end of the run is a peak where the expression rises to there.
    fn close_peak(&self, item: &mut Item) {
        let sign = match item.measure {
            Measure::Highest | Measure::TimeOfHighest => 1.0,
            Measure::Lowest | Measure::TimeOfLowest => -1.0,
            _ => return,
        };
        if item.side < 0.0 || self.steps == 0 {
            return;
        }
        let top = self.samples[4][2 * item.index];
        if item.best.is_none_or(|best| sign * top > sign * best) {
            item.rival = item.best;
            item.best = Some(top);
            item.place.clone_from(&self.last);
        } else if item.rival.is_none_or(|rival| sign * top > sign * rival) {
            item.rival = Some(top);
        }
        // Closed only once.
        item.side = -1.0;
    }

    fn reading(&self, item: &Item) -> Reading {
        let span = self.last.t - self.from;
        let integral = || {
            let place = self.integrated.iter().position(|index| *index == item.index);
            place.map(|place| self.integrals[place])
        };
        let at_place = item.best.map(|_| item.place.clone());
        let (value, place) = match item.measure {
            Measure::TimeOfHighest | Measure::TimeOfLowest => (item.best.map(|_| item.place.t), at_place),
            Measure::Integral => (integral(), None),
            Measure::Mean => (integral().map(|sum| sum / span), None),
            Measure::Count { .. } => (Some(f64::from(item.count)), None),
            _ => (item.best, at_place),
        };
        Reading {
            value,
            place,
            margin: item.margin.map(|margin| self.last_margin(item, margin)),
            scale: self.scales[item.index],
            range: self.highs[item.index] - self.lows[item.index],
            steepest: self.steepest[item.index],
            lead: item.best.zip(item.rival).map(|(best, rival)| (best - rival).abs()),
        }
    }

    /// The margin with the distance at the end of the run taken in.
    fn last_margin(&self, item: &Item, margin: f64) -> f64 {
        let (Measure::TimeWhen { level, .. } | Measure::Count { level, .. }) = item.measure else {
            return margin;
        };
        smaller(margin, (self.samples[4][2 * item.index] - level).abs())
    }
}

impl Item {
    fn measure_is_time(&self) -> bool {
        matches!(self.measure, Measure::TimeOfHighest | Measure::TimeOfLowest)
    }
}

impl Observer for Watch {
    fn step(&mut self, step: &Accepted<'_>) {
        self.see(step.piece, step.modes);
    }
}

fn sign(x: f64) -> f64 {
    if x > 0.0 {
        1.0
    } else if x < 0.0 {
        -1.0
    } else {
        0.0
    }
}
