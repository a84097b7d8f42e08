//! Judges every number of a run: gathers the evidence of all its trajectories and hands it to [`judge`].

use super::judge::{Evidence, Judgement, judge, unbounded};
use super::outcome::{Curve, Estimates, Grade, Quantity, RowColumn, Rows};
use super::settle::{CURVES, ROWS, STATE_SAMPLES};
use crate::arithmetic::{larger, smaller};
use crate::plan::{Measure, QuantityPlan, RunPlan};
use crate::run::sample::Sampler;
use crate::run::system::{System, Values};
use crate::run::trace::Trace;
use crate::run::watch::Reading;

/// Samples before a time that tell whether the meshes have parted by then.
const PARTED_WINDOW: usize = 5;

/// Everything that judging needs beside the evidence of one quantity.
pub(super) struct Court<'a> {
    pub(super) plan: &'a RunPlan,
    pub(super) order: u32,
    pub(super) steps: f64,
    /// Why halving could not be done; judged quantities are then unbounded.
    pub(super) failed: Option<String>,
    pub(super) cap: Option<String>,
    /// Size that rounding may reach in every state.
    pub(super) roundings: Vec<f64>,
    /// At evenly spaced times: whether the two finer meshes differ by a large share of some state's range.
    pub(super) parted: Vec<bool>,
}

impl Court<'_> {
    #[expect(clippy::too_many_arguments, reason = "one quantity as seen by every trajectory")]
    pub(super) fn quantity(
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
                steps: self.steps,
                range: self.range(quantity, reading),
                interpolation,
                rounding,
                cap: self.cap.as_deref(),
            }),
        };
        let judgement = check_slope(judgement, quantity, reading, speed);
        let judgement = match judgement.bound {
            Some(_) if self.has_parted(reading.place.as_ref().map(|place| place.t)) => unbounded(
                "the meshes have parted by then: the run is chaotic over the span, or not resolved",
                judgement.estimates,
            ),
            _ => judgement,
        };
        let judgement = self.check_rivals(judgement, quantity, reading, others, beside);
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
            steps: self.steps,
            range: reading.range,
            interpolation: 0.0,
            rounding: self.steps * f64::EPSILON * reading.scale,
            cap: self.cap.as_deref(),
        });
        let mut estimates = margin.estimates;
        estimates.values =
            std::iter::once(reading.value).chain(others.iter().map(|other| other.value)).collect();
        let same = estimates.values.iter().all(|value| *value == reading.value)
            && beside.is_none_or(|beside| beside.value == reading.value);
        match (margin.bound, reading.margin) {
            (Some(bound), Some(distance)) if same && distance > bound => Judgement {
                bound: Some(0.0),
                grade: margin.grade,
                why: "the same on every mesh, and no turning point comes within its bound of the level"
                    .to_owned(),
                estimates: Estimates { truncation: 0.0, rounding: 0.0, ..estimates },
            },
            (None, _) => unbounded(&margin.why, estimates),
            _ => unbounded("a turning point comes within its bound of the level", estimates),
        }
    }

    /// Whether the meshes have parted at a time: at most of the samples just before it. Without a time, at a third of
    /// all samples.
    fn has_parted(&self, time: Option<f64>) -> bool {
        let span = self.plan.until - self.plan.from;
        let Some(time) = time else {
            return 3 * self.parted.iter().filter(|parted| **parted).count() > self.parted.len();
        };
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "saturates; an index")]
        let last =
            (((time - self.plan.from) / span * STATE_SAMPLES as f64) as usize + 1).min(self.parted.len());
        let window = &self.parted[last.saturating_sub(PARTED_WINDOW)..last];
        2 * window.iter().filter(|parted| **parted).count() > PARTED_WINDOW
    }

    /// The time of a peak is known only where no other peak comes within the bound of its height.
    fn check_rivals(
        &self,
        judgement: Judgement,
        quantity: &QuantityPlan,
        reading: &Reading,
        others: &[&Reading],
        beside: Option<&Reading>,
    ) -> Judgement {
        let peak = matches!(quantity.measure, Measure::TimeOfHighest | Measure::TimeOfLowest);
        let Some(lead) = reading.lead.filter(|_| peak && judgement.bound.is_some()) else {
            return judgement;
        };
        let judged = self.judge(&Evidence {
            values: triple(reading.lead, others, |other| other.lead),
            corrected: beside.and_then(|beside| beside.lead),
            order: self.order,
            scale: reading.scale,
            steps: self.steps,
            range: reading.range,
            interpolation: 0.0,
            rounding: 2.0 * self.steps * f64::EPSILON * reading.scale,
            cap: None,
        });
        if judged.bound.is_some_and(|bound| lead > bound) {
            return judgement;
        }
        unbounded(
            "another peak comes within its bound of this one, so the time is not determined",
            judgement.estimates,
        )
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
            steps: self.steps,
            range,
            interpolation: 0.0,
            rounding: self.steps * f64::EPSILON * scale,
            cap: self.cap.as_deref(),
        })
    }

    pub(super) fn rows(
        &self,
        base: &[Sampler],
        halved: &[&Vec<Sampler>],
        corrected: Option<&Vec<Sampler>>,
    ) -> Option<Rows> {
        let (_, every) = self.plan.rows.as_ref()?;
        let sampled = Sampled::new(ROWS, base, halved, corrected);
        let count = sampled.base.rows().len() / self.plan.columns.len().max(1);
        let mut columns = Vec::new();
        for (i, column) in self.plan.columns.iter().enumerate() {
            let values: Vec<f64> = (0..count).map(|k| sampled.value(k, i)).collect();
            let (scale, range) = extent(&values);
            let judged: Vec<Judgement> =
                (0..count).map(|k| self.sample(&sampled, k, i, scale, range)).collect();
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

    pub(super) fn curves(
        &self,
        base: &[Sampler],
        traces: Vec<Trace>,
        halved: &[&Vec<Sampler>],
        corrected: Option<&Vec<Sampler>>,
    ) -> Vec<Curve> {
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
pub(super) fn extent(values: &[f64]) -> (f64, f64) {
    let (mut scale, mut low, mut high) = (0.0, f64::INFINITY, f64::NEG_INFINITY);
    for value in values {
        scale = larger(scale, value.abs());
        low = smaller(low, *value);
        high = larger(high, *value);
    }
    (scale, high - low)
}

fn triple(
    first: Option<f64>,
    others: &[&Reading],
    pick: impl Fn(&Reading) -> Option<f64>,
) -> [Option<f64>; 3] {
    [first, others.first().and_then(|other| pick(other)), others.get(1).and_then(|other| pick(other))]
}

/// The slope of a passage below this share of the steepest slope of the run is noise.
const FLAT: f64 = 1e-7;

/// A passage that is too flat has no time; one whose bound exceeds a step is at most indicated.
fn check_slope(
    mut judgement: Judgement,
    quantity: &QuantityPlan,
    reading: &Reading,
    speed: Option<f64>,
) -> Judgement {
    let (Some(speed), Some(place), Some(bound)) = (speed, &reading.place, judgement.bound) else {
        return judgement;
    };
    if speed <= FLAT * reading.steepest {
        return unbounded("the expression passes the level too flatly to tell when", judgement.estimates);
    }
    if bound > place.h
        && judgement.grade < Grade::Indicated
        && matches!(quantity.measure, Measure::TimeWhen { .. })
    {
        judgement.grade = Grade::Indicated;
        judgement.why = format!("{}; the bound exceeds a step", judgement.why);
        judgement.bound = Some(bound * super::judge::SAFETY_INDICATED / judgement.estimates.safety);
    }
    judgement
}
