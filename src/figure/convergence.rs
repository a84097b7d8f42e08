//! The convergence chart: error against step, with the slope of the formal order.

use super::axis::Axis;
use super::chart::{HEIGHT, WIDTH};
use super::clip::{Point, clip};
use super::frame::{BELOW, Frame, SMALL, TOP, left_room};
use super::labels::{self, Entry, Place};
use super::surface::{Anchor, Ink, Surface};
use crate::arithmetic::{elementary, larger, smaller};

/// The errors of one quantity.
#[derive(Clone, Debug, PartialEq)]
pub struct Errors {
    /// Its label.
    pub label: String,
    /// Step and error, both positive; others are left out.
    pub points: Vec<(f64, f64)>,
    /// The order of the scheme.
    pub order: u32,
}

/// Draws the convergence chart of some quantities: errors on logarithmic axes, and for every order a triangle whose
/// slope is that order. `None` where no point can be drawn.
pub fn draw(id: &str, title: &str, description: &str, x_title: &str, list: &[Errors]) -> Option<String> {
    let list: Vec<Errors> = list
        .iter()
        .map(|errors| Errors { points: positive(&errors.points), ..errors.clone() })
        .filter(|errors| !errors.points.is_empty())
        .collect();
    let (mut low, mut high) = ((f64::INFINITY, f64::INFINITY), (0.0, 0.0));
    for (h, e) in list.iter().flat_map(|errors| &errors.points) {
        low = (smaller(low.0, *h), smaller(low.1, *e));
        high = (larger(high.0, *h), larger(high.1, *e));
    }
    if list.is_empty() {
        return None;
    }
    let texts: Vec<&str> = list.iter().map(|errors| errors.label.as_str()).collect();
    let (place, right_room, below) = labels::lay_out(&texts, WIDTH, HEIGHT - BELOW - TOP);
    let y = Axis::logarithmic(low.1, high.1);
    let frame = Frame {
        left: left_room(&y),
        right: WIDTH - right_room,
        top: TOP,
        bottom: HEIGHT - BELOW,
        x: Axis::logarithmic(low.0, high.0),
        y,
    };
    let mut surface = Surface::new(WIDTH, HEIGHT + below);
    frame.draw(&mut surface, x_title, "Relative error");
    let mut orders: Vec<u32> = Vec::new();
    for errors in &list {
        if !orders.contains(&errors.order) {
            orders.push(errors.order);
            let same = list.iter().filter(|other| other.order == errors.order);
            let points: Vec<Point> = same.flat_map(|other| other.points.iter().copied()).collect();
            draw_slope(&mut surface, &frame, errors.order, &points);
        }
    }
    let mut entries = Vec::new();
    for (index, errors) in list.iter().enumerate() {
        let placed: Vec<Point> = errors.points.iter().map(|point| frame.place(*point)).collect();
        for part in clip(&placed, frame.corners()) {
            surface.line(&part, Ink::Series(index), 1.7);
        }
        for point in &placed {
            surface.marker(index, *point, 3.6);
        }
        let end = placed.iter().copied().reduce(|a, b| if b.0 > a.0 { b } else { a });
        entries.push(Entry { index, text: &errors.label, marks: true, line: true, end });
    }
    match place {
        Place::None => {}
        Place::Beside => labels::draw_beside(&mut surface, &frame, &entries),
        Place::Below => labels::draw_below(&mut surface, HEIGHT - 2.0, WIDTH, &entries),
    }
    Some(surface.finish(id, title, description))
}

/// The points that a logarithmic axis can show, from the smallest step to the largest.
fn positive(points: &[(f64, f64)]) -> Vec<Point> {
    let shown = |x: f64| x > 0.0 && x.is_finite();
    let mut list: Vec<Point> = points.iter().copied().filter(|(h, e)| shown(*h) && shown(*e)).collect();
    list.sort_by(|a, b| a.0.total_cmp(&b.0));
    list
}

/// A triangle below the points, in the middle of their steps, whose long side has the slope of the order.
fn draw_slope(surface: &mut Surface, frame: &Frame, order: u32, points: &[Point]) {
    let (mut fine, mut coarse) = (f64::INFINITY, 0.0);
    for (h, _) in points {
        (fine, coarse) = (smaller(fine, *h), larger(coarse, *h));
    }
    let ratio = elementary::log10(coarse / fine);
    if !(ratio > 0.0 && ratio.is_finite()) {
        return;
    }
    // From a third to two thirds of the steps, on a logarithmic scale.
    let step = |share: f64| fine * elementary::pow(10.0, share * ratio);
    let (h_0, h_1) = (step(0.3), step(0.7));
    let rise = elementary::pow(h_1 / h_0, f64::from(order));
    // As high as the lowest point allows, through which the line of this slope is drawn.
    let through = |h: f64, e: f64| e * elementary::pow(h_0 / h, f64::from(order));
    let lowest = points.iter().fold(f64::INFINITY, |least, (h, e)| smaller(least, through(*h, *e)));
    let (left, right) = (frame.place((h_0, lowest)), frame.place((h_1, lowest * rise)));
    let drop = 16.0;
    let (a, b) = ((left.0, left.1 + drop), (right.0, right.1 + drop));
    let corner = (b.0, a.1);
    for part in clip(&[a, b, corner, a], frame.corners()) {
        surface.line(&part, Ink::Soft, 1.0);
    }
    if a.1 <= frame.bottom && corner.0 + 60.0 < frame.right + 60.0 {
        let place = (corner.0 + 6.0, smaller(0.5 * (corner.1 + b.1), frame.bottom - 10.0));
        surface.text(&format!("order {order}"), place, Ink::Note, SMALL, Anchor::Right);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn errors(order: u32, factor: f64) -> Errors {
        let points =
            (0..4).map(|k| 0.5 / f64::from(1 << k)).map(|h| (h, factor * elementary::power(h, order)));
        Errors { label: format!("z{order}"), points: points.collect(), order }
    }

    #[test]
    fn every_order_has_one_slope_and_every_point_a_marker() {
        let list = [errors(4, 1.0), errors(4, 3.0), errors(2, 1.0)];
        let svg = draw("c", "t", "d", "Largest step h / s", &list).unwrap();
        assert_eq!((svg.matches("order 4").count(), svg.matches("order 2").count()), (1, 1));
        // Four markers and one in the label each.
        assert_eq!(svg.matches("<polygon").count(), 15);
        assert!(svg.contains("Largest step h / s") && svg.contains("10\u{207b}\u{b3}"));
        assert_eq!(Some(svg), draw("c", "t", "d", "Largest step h / s", &list));
    }

    #[test]
    fn the_side_of_the_triangle_has_the_slope_of_the_order() {
        let svg = draw("c", "t", "d", "h", &[errors(3, 1.0)]).unwrap();
        let axis = (Axis::logarithmic(0.0625, 0.5), Axis::logarithmic(0.000244140625, 0.125));
        let lines: Vec<Vec<f64>> = svg
            .lines()
            .filter(|line| line.contains("#555555") && line.contains("<polyline"))
            .map(|line| line.split("points=\"").nth(1).unwrap())
            .map(|text| text.split(['"', ' ', ',']).map_while(|number| number.parse().ok()).collect())
            .collect();
        let triangle = &lines[0];
        let frame_width = 10.0 * (WIDTH - labels::lay_out(&["z3"], WIDTH, 300.0).1 - left_room(&axis.1));
        let frame_height = 10.0 * (HEIGHT - BELOW - TOP);
        let across = (triangle[2] - triangle[0]) / frame_width * (axis.0.high - axis.0.low);
        let up = (triangle[1] - triangle[3]) / frame_height * (axis.1.high - axis.1.low);
        // Whole tenths of a unit of the picture.
        assert!((up / across - 3.0).abs() < 0.01, "{up} {across}");
    }

    #[test]
    fn errors_that_have_no_logarithm_are_left_out() {
        let bad =
            Errors { label: "a".into(), points: vec![(0.1, 0.0), (f64::NAN, 1.0), (-1.0, 2.0)], order: 4 };
        assert_eq!(draw("c", "t", "d", "h", &[bad]), None);
        let one = Errors { label: "a".into(), points: vec![(0.1, 1e-17)], order: 4 };
        assert!(draw("c", "t", "d", "h", &[one]).is_some());
    }
}
