//! Cutting of lines and areas at the frame, so that nothing is drawn at its edge that lies beyond it.

use crate::arithmetic::{larger, smaller};

/// A point of the picture.
pub(super) type Point = (f64, f64);

/// A rectangle: its upper left and its lower right corner.
pub(super) type Corners = (Point, Point);

/// The parts of a line inside the rectangle from `low` to `high`, split where it is not finite.
///
/// Source of the cutting: Liang & Barsky (1984), ACM Trans. Graph. 3, 1-22.
pub(super) fn clip(points: &[Point], (low, high): Corners) -> Vec<Vec<Point>> {
    let mut parts: Vec<Vec<Point>> = Vec::new();
    let mut open: Vec<Point> = Vec::new();
    for pair in points.windows(2) {
        let (a, b) = (pair[0], pair[1]);
        let finite = a.0.is_finite() && a.1.is_finite() && b.0.is_finite() && b.1.is_finite();
        let Some((from, to)) = (if finite { segment(a, b, low, high) } else { None }) else {
            parts.push(std::mem::take(&mut open));
            continue;
        };
        if open.last() != Some(&from) {
            parts.push(std::mem::take(&mut open));
            open.push(from);
        }
        open.push(to);
    }
    parts.push(open);
    parts.retain(|part| part.len() > 1);
    parts
}

/// The part of a segment inside a rectangle.
pub(super) fn segment(a: Point, b: Point, low: Point, high: Point) -> Option<(Point, Point)> {
    let (dx, dy) = (b.0 - a.0, b.1 - a.1);
    let (mut enter, mut leave) = (0.0, 1.0);
    for (p, q) in [(-dx, a.0 - low.0), (dx, high.0 - a.0), (-dy, a.1 - low.1), (dy, high.1 - a.1)] {
        if p == 0.0 {
            if q < 0.0 {
                return None;
            }
            continue;
        }
        let r = q / p;
        if p < 0.0 {
            if r > leave {
                return None;
            }
            enter = larger(enter, r);
        } else {
            if r < enter {
                return None;
            }
            leave = smaller(leave, r);
        }
    }
    let at = |s: f64| {
        if s == 0.0 {
            a
        } else if s == 1.0 {
            b
        } else {
            (a.0 + s * dx, a.1 + s * dy)
        }
    };
    Some((at(enter), at(leave)))
}

/// The part of an area inside the rectangle; where it has several parts they hang together along the edge.
///
/// Source: Sutherland & Hodgman (1974), Commun. ACM 17, 32-42.
pub(super) fn clip_area(points: &[Point], (low, high): Corners) -> Vec<Point> {
    let mut area: Vec<Point> =
        points.iter().copied().filter(|p| p.0.is_finite() && p.1.is_finite()).collect();
    // Signed distance to each side, positive inside.
    let sides: [fn(Point, Corners) -> f64; 4] = [
        |p, (low, _)| p.0 - low.0,
        |p, (_, high)| high.0 - p.0,
        |p, (low, _)| p.1 - low.1,
        |p, (_, high)| high.1 - p.1,
    ];
    for side in sides {
        let mut cut = Vec::with_capacity(area.len() + 4);
        for (k, &b) in area.iter().enumerate() {
            let a = if k == 0 { area[area.len() - 1] } else { area[k - 1] };
            let (da, db) = (side(a, (low, high)), side(b, (low, high)));
            if (da >= 0.0) != (db >= 0.0) {
                let s = da / (da - db);
                cut.push((a.0 + s * (b.0 - a.0), a.1 + s * (b.1 - a.1)));
            }
            if db >= 0.0 {
                cut.push(b);
            }
        }
        area = cut;
    }
    // Rounding at the cuts must not lead outside.
    area.iter().map(|p| (larger(low.0, smaller(p.0, high.0)), larger(low.1, smaller(p.1, high.1)))).collect()
}

/// Whether a point lies in the rectangle, its edge included.
pub(super) fn inside(point: Point, (low, high): Corners) -> bool {
    point.0 >= low.0 && point.0 <= high.0 && point.1 >= low.1 && point.1 <= high.1
}

#[cfg(test)]
mod tests {
    use super::*;

    const UNIT: Corners = ((0.0, 0.0), (1.0, 1.0));

    #[test]
    fn lines_are_cut_at_the_frame_and_at_gaps() {
        let points = [(-1.0, 0.5), (0.5, 0.5), (0.5, f64::NAN), (0.6, 0.5), (0.6, 3.0)];
        let parts = clip(&points, UNIT);
        assert_eq!(parts, vec![vec![(0.0, 0.5), (0.5, 0.5)], vec![(0.6, 0.5), (0.6, 1.0)]]);
        assert!(clip(&[(2.0, 2.0), (3.0, 5.0)], UNIT).is_empty());
        // Through the rectangle without a point in it.
        assert_eq!(clip(&[(-1.0, -1.0), (2.0, 2.0)], UNIT), vec![vec![(0.0, 0.0), (1.0, 1.0)]]);
        // Past a corner.
        assert!(clip(&[(-1.0, 0.5), (0.5, 2.0)], UNIT).is_empty());
    }

    #[test]
    fn areas_are_cut_at_the_frame() {
        let square = [(0.5, 0.5), (2.0, 0.5), (2.0, 2.0), (0.5, 2.0)];
        let cut = clip_area(&square, UNIT);
        assert_eq!(cut.len(), 4);
        assert!(cut.contains(&(0.5, 0.5)) && cut.contains(&(1.0, 1.0)) && cut.contains(&(1.0, 0.5)));
        let around = [(-9.0, -9.0), (9.0, -9.0), (9.0, 9.0), (-9.0, 9.0)];
        assert_eq!(clip_area(&around, UNIT).len(), 4);
        assert!(clip_area(&[(2.0, 2.0), (3.0, 2.0), (3.0, 3.0)], UNIT).is_empty());
        assert!(clip_area(&[], UNIT).is_empty());
    }
}
