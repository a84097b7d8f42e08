//! Thinning of curves to what the eye can see, with their extremes kept.
//!
//! A curve over its abscissa keeps the first, lowest, highest and last point of every column of the picture, so that
//! its envelope is that of all points. A path through a plane keeps what moves by more than a fraction of a pixel.
//! Both work on a stream in bounded memory. A point that is not finite is a gap, and stays one.

use crate::arithmetic::{larger, smaller};

/// A point of a curve.
type Point = (f64, f64);

const GAP: Point = (f64::NAN, f64::NAN);

fn finite(point: Point) -> bool {
    point.0.is_finite() && point.1.is_finite()
}

/// Thins a curve whose abscissa only grows, or only falls. Few points are given back as they are.
///
/// # Shapes and units
/// `columns`: of the picture, at least 1. At most 9 points a column are kept, 4 where the curve has no gaps.
pub fn thin(points: &[Point], columns: usize) -> Vec<Point> {
    if points.len() <= 4 * columns {
        return points.to_vec();
    }
    let mut range: Option<(f64, f64)> = None;
    for (x, _) in points.iter().copied().filter(|point| finite(*point)) {
        range = Some(range.map_or((x, x), |(low, high)| (smaller(low, x), larger(high, x))));
    }
    let (low, high) = range.unwrap_or((0.0, 1.0));
    let mut thinner = Thinner::new(low, high, columns);
    for (x, y) in points {
        thinner.push(*x, *y);
    }
    thinner.finish()
}

/// Thins a stream of points whose abscissa only grows, or only falls, over a range known beforehand.
#[derive(Clone, Debug)]
pub struct Thinner {
    low: f64,
    width: f64,
    columns: usize,
    column: usize,
    before: Bucket,
    /// A gap after `before`, and the points of the same column that follow it.
    gap: bool,
    after: Bucket,
    /// A gap after `after`.
    gap_at_end: bool,
    kept: Vec<Point>,
}

impl Thinner {
    /// A thinner for abscissas from `low` to `high`.
    pub fn new(low: f64, high: f64, columns: usize) -> Self {
        let columns = columns.max(1);
        Thinner {
            low,
            width: (high - low) / columns as f64,
            columns,
            column: 0,
            before: Bucket::default(),
            gap: false,
            after: Bucket::default(),
            gap_at_end: false,
            kept: Vec::new(),
        }
    }

    /// Takes the next point.
    pub fn push(&mut self, x: f64, y: f64) {
        if !finite((x, y)) {
            if self.after.is_empty() {
                self.gap = true;
            } else {
                self.gap_at_end = true;
            }
            return;
        }
        let column = self.column_of(x);
        if column != self.column {
            self.close();
            self.column = column;
        }
        if self.gap {
            // Gaps closer to each other than a column are one to the eye.
            self.gap_at_end = false;
            self.after.push((x, y));
        } else {
            self.before.push((x, y));
        }
    }

    /// The points kept, in order.
    pub fn finish(mut self) -> Vec<Point> {
        self.close();
        self.kept
    }

    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a column of the picture")]
    fn column_of(&self, x: f64) -> usize {
        let share = (x - self.low) / self.width;
        // The last column takes the end of the range; what is no number falls to the first.
        if share >= self.columns as f64 {
            self.columns - 1
        } else if share > 0.0 {
            share as usize
        } else {
            0
        }
    }

    fn close(&mut self) {
        self.before.empty_into(&mut self.kept);
        if self.gap {
            self.keep_gap();
        }
        self.after.empty_into(&mut self.kept);
        if self.gap_at_end {
            self.keep_gap();
        }
        self.gap = false;
        self.gap_at_end = false;
    }

    fn keep_gap(&mut self) {
        if self.kept.last().is_some_and(|point| finite(*point)) {
            self.kept.push(GAP);
        }
    }
}

/// The points of one column: first, lowest, highest and last, with their numbers in order.
#[derive(Clone, Debug, Default)]
struct Bucket {
    count: usize,
    first: Point,
    lowest: (usize, Point),
    highest: (usize, Point),
    last: Point,
}

impl Bucket {
    fn is_empty(&self) -> bool {
        self.count == 0
    }

    fn push(&mut self, point: Point) {
        let entry = (self.count, point);
        if self.count == 0 {
            self.first = point;
            (self.lowest, self.highest) = (entry, entry);
        }
        if point.1 < self.lowest.1.1 {
            self.lowest = entry;
        }
        if point.1 > self.highest.1.1 {
            self.highest = entry;
        }
        self.last = point;
        self.count += 1;
    }

    fn empty_into(&mut self, kept: &mut Vec<Point>) {
        if self.count > 0 {
            let mut entries = [(0, self.first), self.lowest, self.highest, (self.count - 1, self.last)];
            entries.sort_by_key(|(number, _)| *number);
            for (k, (number, point)) in entries.iter().enumerate() {
                if k == 0 || entries[k - 1].0 != *number {
                    kept.push(*point);
                }
            }
        }
        *self = Bucket::default();
    }
}

/// Columns and rows by which a path is measured: two to a pixel of the picture.
const FINEST: f64 = 1500.0;

/// Thins a stream of points of a path that may go anywhere, as in a phase portrait.
///
/// Keeps the first and the last point, and those at the ends of both axes. In between it drops what moves by less than
/// a fraction of a pixel, seen on the range covered so far; when memory is full, that fraction doubles.
#[derive(Clone, Debug)]
pub struct PathThinner {
    most: usize,
    /// Moves below this share of the range are dropped.
    fraction: f64,
    count: usize,
    kept: Vec<(usize, Point)>,
    last: Option<(usize, Point)>,
    /// Leftmost, rightmost, lowest and highest point.
    extremes: Option<[(usize, Point); 4]>,
}

impl PathThinner {
    /// A thinner that keeps at most about `most` points, at least 16.
    pub fn new(most: usize) -> Self {
        PathThinner {
            most: most.max(16),
            fraction: 1.0 / FINEST,
            count: 0,
            kept: Vec::new(),
            last: None,
            extremes: None,
        }
    }

    /// Takes the next point.
    pub fn push(&mut self, x: f64, y: f64) {
        let entry = (self.count, (x, y));
        self.count += 1;
        if !finite((x, y)) {
            if let Some(last) = self.last.take() {
                self.keep(last);
                self.kept.push((entry.0, GAP));
                self.halve_if_full();
            }
            return;
        }
        let extremes = self.extremes.get_or_insert([entry; 4]);
        if x < extremes[0].1.0 {
            extremes[0] = entry;
        }
        if x > extremes[1].1.0 {
            extremes[1] = entry;
        }
        if y < extremes[2].1.1 {
            extremes[2] = entry;
        }
        if y > extremes[3].1.1 {
            extremes[3] = entry;
        }
        let started = self.last.is_none();
        self.last = Some(entry);
        if started || self.kept.last().is_none_or(|(_, kept)| self.moves(*kept, (x, y))) {
            self.kept.push(entry);
            self.halve_if_full();
        }
    }

    /// The points kept, in order.
    pub fn finish(mut self) -> Vec<Point> {
        if let Some(last) = self.last {
            self.keep(last);
        }
        self.kept.extend(self.extremes.into_iter().flatten());
        self.kept.sort_by_key(|(number, _)| *number);
        self.kept.dedup_by_key(|(number, _)| *number);
        self.kept.into_iter().map(|(_, point)| point).collect()
    }

    fn keep(&mut self, entry: (usize, Point)) {
        if self.kept.last().is_none_or(|(number, _)| *number != entry.0) {
            self.kept.push(entry);
        }
    }

    fn moves(&self, a: Point, b: Point) -> bool {
        let Some([left, right, lowest, highest]) = self.extremes else {
            return true;
        };
        let across = self.fraction * (right.1.0 - left.1.0);
        let up = self.fraction * (highest.1.1 - lowest.1.1);
        !((b.0 - a.0).abs() <= across && (b.1 - a.1).abs() <= up)
    }

    fn halve_if_full(&mut self) {
        if self.kept.len() < self.most {
            return;
        }
        let goal = self.most / 2;
        while self.kept.len() > goal && self.fraction < 0.5 {
            self.fraction *= 2.0;
            let all = std::mem::take(&mut self.kept);
            for (number, point) in all {
                let stays = match self.kept.last() {
                    Some((_, kept)) if finite(*kept) && finite(point) => self.moves(*kept, point),
                    Some((_, kept)) => finite(*kept) || finite(point),
                    None => true,
                };
                if stays {
                    self.kept.push((number, point));
                }
            }
        }
        // A path of hardly anything but gaps and jumps: no picture of it is true, so only memory counts.
        if self.kept.len() > goal {
            let mut index = 0;
            self.kept.retain(|(_, point)| {
                index += 1;
                index % 2 == 0 || !finite(*point)
            });
            self.kept.dedup_by(|b, a| !finite(a.1) && !finite(b.1));
            self.kept.truncate(self.most);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::arithmetic::elementary::{cos, sin};

    fn wave(n: u32) -> Vec<Point> {
        (0..n).map(f64::from).map(|i| (i * 1e-3, sin(i * 0.037) + 0.3 * sin(i * 1.7))).collect()
    }

    #[test]
    fn every_column_keeps_its_first_lowest_highest_and_last_point() {
        let points = wave(100_000);
        let columns = 640;
        let kept = thin(&points, columns);
        assert!(kept.len() <= 4 * columns);
        let width = (points[points.len() - 1].0 - points[0].0) / columns as f64;
        for column in 0..columns {
            let of = |list: &[Point]| -> Vec<Point> {
                list.iter()
                    .copied()
                    .filter(|(x, _)| smaller((x / width).floor(), columns as f64 - 1.0) == column as f64)
                    .collect()
            };
            let (all, few) = (of(&points), of(&kept));
            let lowest = |list: &[Point]| list.iter().map(|p| p.1).fold(f64::INFINITY, smaller);
            let highest = |list: &[Point]| list.iter().map(|p| p.1).fold(f64::NEG_INFINITY, larger);
            assert_eq!((lowest(&all), highest(&all)), (lowest(&few), highest(&few)), "column {column}");
            assert_eq!((all.first(), all.last()), (few.first(), few.last()), "column {column}");
        }
        assert!(kept.windows(2).all(|pair| pair[0].0 < pair[1].0));
    }

    #[test]
    fn one_point_that_sticks_out_is_kept() {
        let mut points: Vec<Point> = (0..50_000).map(|i| (f64::from(i), 0.0)).collect();
        points[31_337].1 = 9.0;
        points[31_338].1 = -9.0;
        let kept = thin(&points, 100);
        assert!(kept.contains(&(31_337.0, 9.0)) && kept.contains(&(31_338.0, -9.0)));
        assert_eq!(kept.last(), Some(&(49_999.0, 0.0)));
    }

    #[test]
    fn a_falling_abscissa_and_a_short_curve_are_fine() {
        let mut points = wave(10_000);
        points.reverse();
        let kept = thin(&points, 50);
        assert_eq!((kept.first(), kept.last()), (points.first(), points.last()));
        assert!(kept.len() <= 200);
        assert_eq!(thin(&points[..10], 50), points[..10]);
        assert!(thin(&[], 5).is_empty());
    }

    #[test]
    fn gaps_stay_and_their_number_is_bounded() {
        let mut points = wave(10_000);
        for i in 4000..6000 {
            points[i].1 = f64::NAN;
        }
        let kept = thin(&points, 100);
        let gap = kept.iter().position(|(_, y)| y.is_nan()).unwrap();
        assert_eq!((kept[gap - 1], kept[gap + 1]), (points[3999], points[6000]));
        for i in (0..10_000).step_by(2) {
            points[i].1 = f64::INFINITY;
        }
        assert!(thin(&points, 100).len() <= 900);
        // No line may join two columns between which there was a gap.
        let mut thinner = Thinner::new(0.0, 10.0, 10);
        for (x, y) in [(0.1, 1.0), (0.2, f64::NAN), (0.3, 1.0), (0.4, f64::NAN), (7.0, 1.0)] {
            thinner.push(x, y);
        }
        let kept = thinner.finish();
        assert!(!finite(kept[kept.len() - 2]) && kept.len() == 5, "{kept:?}");
    }

    #[test]
    fn a_path_keeps_its_extremes_and_its_last_point_in_bounded_memory() {
        let mut thinner = PathThinner::new(4000);
        let mut all: Vec<Point> = Vec::new();
        for i in 0..200_000 {
            let angle = f64::from(i) * 0.003;
            let r = 1.0 + f64::from(i) * 1e-5;
            let point = (r * cos(angle), r * sin(angle));
            all.push(point);
            thinner.push(point.0, point.1);
            assert!(thinner.kept.len() <= 4000);
        }
        let kept = thinner.finish();
        assert!(kept.len() > 1500 && kept.len() <= 4008, "{}", kept.len());
        assert_eq!((kept.first(), kept.last()), (all.first(), all.last()));
        let ends = |list: &[Point]| {
            list.iter().fold((0.0, 0.0, 0.0, 0.0), |(a, b, c, d), (x, y)| {
                (smaller(a, *x), larger(b, *x), smaller(c, *y), larger(d, *y))
            })
        };
        assert_eq!(ends(&kept), ends(&all));
    }

    #[test]
    fn a_path_that_goes_nowhere_is_short() {
        let mut thinner = PathThinner::new(100);
        for _ in 0..10_000 {
            thinner.push(2.0, 3.0);
        }
        assert_eq!(thinner.finish(), [(2.0, 3.0), (2.0, 3.0)]);
        let mut thinner = PathThinner::new(64);
        for i in 0..10_000 {
            thinner.push(f64::from(i % 7), if i % 2 == 0 { f64::NAN } else { f64::from(i % 5) });
            assert!(thinner.kept.len() <= 66);
        }
    }
}
