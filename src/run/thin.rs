//! Thins a curve to what the eye can see, as it goes by, with its extremes kept.

/// Columns of a curve over time: about two a pixel of a wide chart.
const COLUMNS: usize = 1440;
/// Points of a path above which it is thinned again.
const MOST_POINTS: usize = 16_000;
/// First distance below which a point of a path is dropped, as a share of the extent so far.
const FIRST_SHARE: f64 = 1.0 / 3000.0;

/// Keeps the first, lowest, highest and last point of every column of a curve over a known span.
#[derive(Debug)]
pub struct ColumnThinner {
    from: f64,
    width: f64,
    column: usize,
    /// Of the present column: first, lowest, highest, last.
    kept: Option<[(f64, f64); 4]>,
    points: Vec<(f64, f64)>,
}

impl ColumnThinner {
    /// A thinner for abscissae from `from` to `until`, in increasing order.
    pub fn new(from: f64, until: f64) -> Self {
        ColumnThinner {
            from,
            width: (until - from) / COLUMNS as f64,
            column: 0,
            kept: None,
            points: Vec::new(),
        }
    }
    /// Takes a point.
    pub fn push(&mut self, x: f64, y: f64) {
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "saturates; a column")]
        let column = (((x - self.from) / self.width) as usize).min(COLUMNS - 1);
        if column != self.column {
            self.flush();
            self.column = column;
        }
        let point = (x, y);
        match &mut self.kept {
            None => self.kept = Some([point; 4]),
            Some([_, low, high, last]) => {
                if y < low.1 {
                    *low = point;
                }
                if y > high.1 {
                    *high = point;
                }
                *last = point;
            }
        }
    }
    fn flush(&mut self) {
        if let Some([first, low, high, last]) = self.kept.take() {
            let (a, b) = if low.0 <= high.0 { (low, high) } else { (high, low) };
            for point in [first, a, b, last] {
                if self.points.last() != Some(&point) {
                    self.points.push(point);
                }
            }
        }
    }
    /// The points.
    pub fn finish(mut self) -> Vec<(f64, f64)> {
        self.flush();
        self.points
    }
}

/// Drops points of a path that lie closer to the last one kept than the eye can tell; extremes are kept.
#[derive(Debug, Default)]
pub struct PathThinner {
    points: Vec<(f64, f64)>,
    held: Option<(f64, f64)>,
    low: (f64, f64),
    high: (f64, f64),
    share: f64,
}

impl PathThinner {
    /// An empty path.
    pub fn new() -> Self {
        PathThinner { share: FIRST_SHARE, ..Self::default() }
    }
    /// Takes a point.
    pub fn push(&mut self, x: f64, y: f64) {
        if self.points.is_empty() {
            (self.low, self.high) = ((x, y), (x, y));
            self.points.push((x, y));
            return;
        }
        let extreme = x < self.low.0 || x > self.high.0 || y < self.low.1 || y > self.high.1;
        self.low = (crate::arithmetic::smaller(self.low.0, x), crate::arithmetic::smaller(self.low.1, y));
        self.high = (crate::arithmetic::larger(self.high.0, x), crate::arithmetic::larger(self.high.1, y));
        if self.near((x, y)) && !extreme {
            self.held = Some((x, y));
            return;
        }
        if extreme && self.near((x, y)) && self.points.len() > 1 {
            // A growing extreme replaces the point before it, so that a slow rise does not keep every point.
            if self.held.is_none() {
                self.points.pop();
            }
        }
        self.held = None;
        self.points.push((x, y));
        if self.points.len() > MOST_POINTS {
            self.share *= 2.0;
            let old = std::mem::take(&mut self.points);
            for point in old {
                let extreme = point.0 == self.low.0
                    || point.0 == self.high.0
                    || point.1 == self.low.1
                    || point.1 == self.high.1;
                if self.points.is_empty() || extreme || !self.near(point) {
                    self.points.push(point);
                }
            }
        }
    }
    fn near(&self, point: (f64, f64)) -> bool {
        let Some(last) = self.points.last() else {
            return false;
        };
        let wide = (self.high.0 - self.low.0) * self.share;
        let tall = (self.high.1 - self.low.1) * self.share;
        (point.0 - last.0).abs() <= wide && (point.1 - last.1).abs() <= tall
    }
    /// The points.
    pub fn finish(mut self) -> Vec<(f64, f64)> {
        self.points.extend(self.held);
        self.points
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn extremes_and_ends_of_a_curve_are_kept() {
        let mut thinner = ColumnThinner::new(0.0, 1.0);
        for i in 0..=1_000_000 {
            let x = f64::from(i) / 1e6;
            thinner.push(x, if i == 123_456 { 50.0 } else { (x * 9.0) % 1.0 });
        }
        let points = thinner.finish();
        assert!(points.len() <= 4 * COLUMNS);
        assert_eq!((points[0].0, points[points.len() - 1].0), (0.0, 1.0));
        assert!(points.iter().any(|point| point.1 == 50.0));
    }

    #[test]
    fn a_path_stays_small_and_keeps_its_extremes() {
        let mut thinner = PathThinner::new();
        for i in 0..400_000_u32 {
            let turn = f64::from(i) * 0.01;
            let r = 1.0 + turn * 1e-4;
            // A rough circle by a triangle wave is enough here.
            thinner.push(r * ((turn % 4.0) - 2.0).abs(), r * (((turn + 1.0) % 4.0) - 2.0).abs());
        }
        let points = thinner.finish();
        assert!(points.len() <= MOST_POINTS + 1, "{}", points.len());
        let highest = points.iter().fold(0.0_f64, |high, point| if point.0 > high { point.0 } else { high });
        assert!(highest > 2.7);
    }
}
