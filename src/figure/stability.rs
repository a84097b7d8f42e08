//! The stability chart: the region of a scheme, and step times eigenvalue along a run.

use super::axis::Axis;
use super::chart::{Frame, SMALL};
use super::surface::{Anchor, Ink, Surface, clip};
use crate::arithmetic::{larger, smaller};

/// Width and height of the picture.
const SIZE: (f64, f64) = (520.0, 420.0);
/// Points farther out than this many times the extent of the region are left out and counted.
const FAR: f64 = 2.5;

/// A point of the complex plane.
type Complex = (f64, f64);

/// Draws the region, given as closed outlines, and the points. Returns the SVG and how many points lie outside
/// the picture.
pub fn draw(
    id: &str,
    title: &str,
    description: &str,
    outlines: &[Vec<Complex>],
    points: &[Complex],
) -> (String, usize) {
    let (mut low, mut high) = ((-1.0, -1.0), (0.5, 1.0));
    let mut take = |(re, im): &Complex| {
        low = (smaller(low.0, *re), smaller(low.1, *im));
        high = (larger(high.0, *re), larger(high.1, *im));
    };
    outlines.iter().flatten().for_each(&mut take);
    let reach = (high.0 - low.0, high.1 - low.1);
    let (region_low, region_high) = (low, high);
    let near = |(re, im): &Complex| {
        *re > region_low.0 - FAR * reach.0
            && *re < region_high.0 + FAR * reach.0
            && *im > region_low.1 - FAR * reach.1
            && *im < region_high.1 + FAR * reach.1
    };
    let outside = points.iter().filter(|point| !near(point)).count();
    for (re, im) in points.iter().filter(|point| near(point)) {
        low = (smaller(low.0, *re), smaller(low.1, *im));
        high = (larger(high.0, *re), larger(high.1, *im));
    }
    let frame = square_frame(low, high);
    let mut surface = Surface::new(SIZE.0, SIZE.1);
    frame.draw(&mut surface, "Re hλ", "Im hλ");
    let corners = ((frame.left, frame.top), (frame.right, frame.bottom));
    for outline in outlines {
        let placed: Vec<(f64, f64)> = outline.iter().map(|point| frame.place(*point)).collect();
        surface.fill(&placed, Ink::Series(0), 0.12);
    }
    for outline in outlines {
        let placed: Vec<(f64, f64)> = outline.iter().map(|point| frame.place(*point)).collect();
        for part in clip(&placed, corners.0, corners.1) {
            surface.line(&part, Ink::Series(0), 1.6);
        }
    }
    let origin = frame.place((0.0, 0.0));
    surface.line(&[(frame.left, origin.1), (frame.right, origin.1)], Ink::Soft, 1.0);
    surface.line(&[(origin.0, frame.top), (origin.0, frame.bottom)], Ink::Soft, 1.0);
    for point in points.iter().filter(|point| near(point)) {
        surface.marker(1, frame.place(*point), 2.6);
    }
    if outside > 0 {
        let text = format!("{outside} points lie beyond this frame");
        surface.text(&text, (frame.left + 8.0, frame.top + 10.0), Ink::Limit, SMALL, Anchor::Right);
    }
    (surface.finish(id, title, description), outside)
}

/// A frame in which both axes have the same scale.
fn square_frame(low: Complex, high: Complex) -> Frame {
    let (left, right, top, bottom) = (64.0, SIZE.0 - 14.0, 14.0, SIZE.1 - 52.0);
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
        x: Axis::linear(middle.0 - half.0, middle.0 + half.0, 6, true),
        y: Axis::linear(middle.1 - half.1, middle.1 + half.1, 6, true),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::arithmetic::elementary::{cos, sin};

    #[test]
    fn points_far_out_are_counted_not_drawn_at_the_edge() {
        let circle: Vec<Complex> =
            (0..=64).map(|k| f64::from(k) * 0.0981747704).map(|a| (cos(a) - 1.0, sin(a))).collect();
        let (svg, outside) = draw("s", "t", "d", &[circle], &[(-0.5, 0.0), (-1000.0, 3.0)]);
        assert_eq!(outside, 1);
        assert!(svg.contains("1 points lie beyond"));
    }
}
