//! The stability chart: the region of a scheme, and step times eigenvalue along a run.

use super::axis::Axis;
use super::clip::{Point, clip, clip_area, inside};
use super::frame::{BELOW, Frame, PLAIN, SMALL, TOP};
use super::surface::{Anchor, Ink, Surface};
use crate::arithmetic::{larger, smaller};

/// Width and height of the picture.
const SIZE: (f64, f64) = (520.0, 440.0);
/// Height of the row of labels at the bottom.
const ROW: f64 = 22.0;
/// Points farther out than this many times the extent of the region are left out and counted.
const FAR: f64 = 2.5;

/// A point of the complex plane.
type Complex = (f64, f64);

/// Draws the region where a scheme damps, given as closed outlines, and the points, on axes of the same scale. Returns
/// the SVG and how many points lie outside the picture or are not finite; the picture says so too.
pub fn draw(
    id: &str,
    title: &str,
    description: &str,
    outlines: &[Vec<Complex>],
    points: &[Complex],
) -> (String, usize) {
    let (mut low, mut high) = ((-1.0, -1.0), (0.5, 1.0));
    let finite = |(re, im): &&Complex| re.is_finite() && im.is_finite();
    for (re, im) in outlines.iter().flatten().filter(finite) {
        low = (smaller(low.0, *re), smaller(low.1, *im));
        high = (larger(high.0, *re), larger(high.1, *im));
    }
    let reach = (FAR * (high.0 - low.0), FAR * (high.1 - low.1));
    let around = ((low.0 - reach.0, low.1 - reach.1), (high.0 + reach.0, high.1 + reach.1));
    // A point that is not finite lies in no rectangle.
    let near: Vec<Complex> = points.iter().copied().filter(|point| inside(*point, around)).collect();
    for (re, im) in &near {
        low = (smaller(low.0, *re), smaller(low.1, *im));
        high = (larger(high.0, *re), larger(high.1, *im));
    }
    let frame = square_frame(low, high);
    let mut surface = Surface::new(SIZE.0, SIZE.1);
    frame.draw(&mut surface, "Re hλ", "Im hλ");
    let placed: Vec<Vec<Point>> =
        outlines.iter().map(|outline| outline.iter().map(|point| frame.place(*point)).collect()).collect();
    for outline in &placed {
        surface.fill(&clip_area(outline, frame.corners()), Ink::Series(0), 0.14);
    }
    let origin = frame.place((0.0, 0.0));
    surface.line(&[(frame.left, origin.1), (frame.right, origin.1)], Ink::Soft, 1.0);
    surface.line(&[(origin.0, frame.top), (origin.0, frame.bottom)], Ink::Soft, 1.0);
    for outline in &placed {
        let mut closed = outline.clone();
        closed.extend(outline.first());
        for part in clip(&closed, frame.corners()) {
            surface.line(&part, Ink::Series(0), 1.6);
        }
    }
    let mut drawn: Vec<Point> = Vec::new();
    for point in near.iter().map(|point| frame.place(*point)) {
        // Hundreds of points may lie on one another.
        if !drawn.iter().any(|(x, y)| (x - point.0).abs() < 0.5 && (y - point.1).abs() < 0.5) {
            drawn.push(point);
            surface.marker(1, point, 2.6);
        }
    }
    let y = SIZE.1 - 0.5 * ROW;
    let sample = [(66.0, y - 6.0), (88.0, y - 6.0), (88.0, y + 6.0), (66.0, y + 6.0), (66.0, y - 6.0)];
    surface.fill(&sample, Ink::Series(0), 0.14);
    surface.line(&sample, Ink::Series(0), 1.6);
    surface.text("the scheme damps, |R(hλ)| ≤ 1", (94.0, y), Ink::Strong, PLAIN, Anchor::Right);
    if !points.is_empty() {
        surface.marker(1, (330.0, y), 2.6);
        surface.text("hλ along the run", (341.0, y), Ink::Strong, PLAIN, Anchor::Right);
    }
    let outside = points.len() - near.len();
    if outside > 0 {
        let text = match outside {
            1 => "1 point lies beyond this frame".to_owned(),
            n => format!("{n} points lie beyond this frame"),
        };
        surface.text(&text, (frame.left + 8.0, frame.top + 11.0), Ink::LimitText, SMALL, Anchor::Right);
    }
    (surface.finish(id, title, description), outside)
}

/// A frame in which both axes have the same scale.
fn square_frame(low: Complex, high: Complex) -> Frame {
    let (left, right, top, bottom) = (66.0, SIZE.0 - 16.0, TOP, SIZE.1 - ROW - BELOW);
    let room = 0.08 * larger(high.0 - low.0, high.1 - low.1);
    let (low, high) = ((low.0 - room, low.1 - room), (high.0 + room, high.1 + room));
    let unit = larger((high.0 - low.0) / (right - left), (high.1 - low.1) / (bottom - top));
    let middle = (0.5 * (low.0 + high.0), 0.5 * (low.1 + high.1));
    let half = (0.5 * unit * (right - left), 0.5 * unit * (bottom - top));
    Frame {
        left,
        right,
        top,
        bottom,
        x: Axis::linear(middle.0 - half.0, middle.0 + half.0, 7, true),
        y: Axis::linear(middle.1 - half.1, middle.1 + half.1, 7, true),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::arithmetic::elementary::{cos, sin};

    /// The region of the explicit Euler scheme: |1 + z| <= 1.
    fn disc() -> Vec<Complex> {
        (0..64).map(|k| f64::from(k) * 0.0981747704).map(|a| (cos(a) - 1.0, sin(a))).collect()
    }

    #[test]
    fn points_far_out_are_counted_not_drawn_at_the_edge() {
        let points = [(-0.5, 0.0), (-1000.0, 3.0), (f64::NAN, 0.0)];
        let (svg, outside) = draw("s", "t", "d", &[disc()], &points);
        assert_eq!(outside, 2);
        assert!(svg.contains("2 points lie beyond"));
        // The region and one marker, and the same in the row of labels.
        assert_eq!(svg.matches("<polygon").count(), 4);
        assert!(draw("s", "t", "d", &[disc()], &points[..2]).0.contains("1 point lies beyond"));
    }

    #[test]
    fn both_axes_have_the_same_scale() {
        for (low, high) in
            [((-2.0, -1.0), (0.0, 1.0)), ((-40.0, -0.1), (0.2, 0.1)), ((-1.0, -3.0), (0.5, 3.0))]
        {
            let frame = square_frame(low, high);
            let (a, b) = (frame.place((0.0, 0.0)), frame.place((1.0, 1.0)));
            assert!(((b.0 - a.0) - (a.1 - b.1)).abs() < 1e-9);
            assert!(inside(frame.place(low), frame.corners()) && inside(frame.place(high), frame.corners()));
        }
    }
}
