//! The convergence chart: error against step, with the slope of the formal order.

use super::axis::Axis;
use super::chart::{Frame, HEIGHT, PLAIN, SMALL, WIDTH, left_room};
use super::surface::{Anchor, Ink, Surface, clip};
use super::width::text_width;
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

/// Draws the convergence chart of some quantities. `None` where no point can be drawn.
pub fn draw(id: &str, title: &str, description: &str, x_title: &str, list: &[Errors]) -> Option<String> {
    let list: Vec<Errors> = list
        .iter()
        .map(|errors| Errors {
            points: errors
                .points
                .iter()
                .copied()
                .filter(|(h, e)| *h > 0.0 && *e > 0.0 && h.is_finite() && e.is_finite())
                .collect(),
            ..errors.clone()
        })
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
    let y = Axis::logarithmic(low.1, high.1);
    let widest = list.iter().fold(0.0, |widest, errors| larger(widest, text_width(&errors.label, PLAIN)));
    let frame = Frame {
        left: left_room(&y),
        right: WIDTH - smaller(widest + 34.0, 0.4 * WIDTH),
        top: 14.0,
        bottom: HEIGHT - 52.0,
        x: Axis::logarithmic(low.0, high.0),
        y,
    };
    let mut surface = Surface::new(WIDTH, HEIGHT);
    frame.draw(&mut surface, x_title, "relative error");
    let corners = ((frame.left, frame.top), (frame.right, frame.bottom));
    let mut orders: Vec<u32> = Vec::new();
    for (i, errors) in list.iter().enumerate() {
        let placed: Vec<(f64, f64)> = errors.points.iter().map(|point| frame.place(*point)).collect();
        for part in clip(&placed, corners.0, corners.1) {
            surface.line(&part, Ink::Series(i), 1.6);
        }
        for point in &placed {
            surface.marker(i, *point, 3.6);
        }
        if !orders.contains(&errors.order) {
            orders.push(errors.order);
            // The slope of the order, through the coarsest point and drawn down to the finest step.
            let (h, e) = errors.points[0];
            let fine = low.0;
            let end = (fine, e * elementary::pow(fine / h, f64::from(errors.order)));
            let guide = [frame.place((h, 1.6 * e)), frame.place((end.0, 1.6 * end.1))];
            for part in clip(&guide, corners.0, corners.1) {
                surface.line(&part, Ink::Soft, 1.0);
                let (a, b) = (part[0], part[part.len() - 1]);
                let place = (0.5 * (a.0 + b.0) - 8.0, 0.5 * (a.1 + b.1) - 8.0);
                surface.text(&format!("slope {}", errors.order), place, Ink::Soft, SMALL, Anchor::Left);
            }
        }
    }
    for (i, errors) in list.iter().enumerate() {
        let height = frame.top + 10.0 + 17.0 * i as f64;
        surface.marker(i, (frame.right + 16.0, height), 3.6);
        surface.text(&errors.label, (frame.right + 27.0, height), Ink::Strong, PLAIN, Anchor::Right);
    }
    Some(surface.finish(id, title, description))
}
