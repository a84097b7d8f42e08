//! The frame of a chart: where its data area lies, its grid and its axes.

use super::axis::{Axis, with_exponent};
use super::clip::{Corners, Point};
use super::surface::{Anchor, Ink, Surface};
use super::width::{fit_title, text_width};
use crate::arithmetic::larger;

/// Font size of tick labels.
pub(super) const SMALL: f64 = 12.0;
/// Font size of titles and labels.
pub(super) const PLAIN: f64 = 13.0;
/// Room above the data area.
pub(super) const TOP: f64 = 14.0;
/// Room below it, for labels and title.
pub(super) const BELOW: f64 = 52.0;

/// Where the data area lies, and its axes.
pub(super) struct Frame {
    pub(super) left: f64,
    pub(super) right: f64,
    pub(super) top: f64,
    pub(super) bottom: f64,
    pub(super) x: Axis,
    pub(super) y: Axis,
}

impl Frame {
    /// Where a point of the data lies in the picture.
    pub(super) fn place(&self, (x, y): Point) -> Point {
        (
            self.left + self.x.share(x) * (self.right - self.left),
            self.bottom - self.y.share(y) * (self.bottom - self.top),
        )
    }

    /// The corners of the data area.
    pub(super) fn corners(&self) -> Corners {
        ((self.left, self.top), (self.right, self.bottom))
    }

    /// Grid, axes, ticks and titles.
    pub(super) fn draw(&self, surface: &mut Surface, x_title: &str, y_title: &str) {
        let across = |place: f64| self.left + self.x.tick_share(place) * (self.right - self.left);
        let up = |place: f64| self.bottom - self.y.tick_share(place) * (self.bottom - self.top);
        let major = |axis: &Axis| -> Vec<f64> { axis.major.iter().map(|(place, _)| *place).collect() };
        for (ink, x, y) in [
            (Ink::Faint, self.x.minor.clone(), self.y.minor.clone()),
            (Ink::Grid, major(&self.x), major(&self.y)),
        ] {
            for x in x.into_iter().map(across) {
                surface.line(&[(x, self.top), (x, self.bottom)], ink, 1.0);
            }
            for y in y.into_iter().map(up) {
                surface.line(&[(self.left, y), (self.right, y)], ink, 1.0);
            }
        }
        surface.line(
            &[(self.left, self.top), (self.left, self.bottom), (self.right, self.bottom)],
            Ink::Strong,
            1.2,
        );
        for x in self.x.minor.iter().copied().map(across) {
            surface.line(&[(x, self.bottom), (x, self.bottom + 3.0)], Ink::Strong, 0.8);
        }
        for y in self.y.minor.iter().copied().map(up) {
            surface.line(&[(self.left - 3.0, y), (self.left, y)], Ink::Strong, 0.8);
        }
        for (place, text) in &self.x.major {
            let x = across(*place);
            surface.line(&[(x, self.bottom), (x, self.bottom + 6.0)], Ink::Strong, 1.2);
            surface.text(text, (x, self.bottom + 9.0), Ink::Strong, SMALL, Anchor::Below);
        }
        for (place, text) in &self.y.major {
            let y = up(*place);
            surface.line(&[(self.left - 6.0, y), (self.left, y)], Ink::Strong, 1.2);
            surface.text(text, (self.left - 9.0, y), Ink::Strong, SMALL, Anchor::Left);
        }
        let (title, size) = fit_title(&with_exponent(x_title, self.x.exponent), self.right - 10.0, PLAIN);
        // Centred below the axis, unless it is too long for that.
        let half = 0.5 * text_width(&title, size);
        let x = larger(0.5 * (self.left + self.right), half + 4.0);
        surface.text(&title, (x, self.bottom + 29.0), Ink::Strong, size, Anchor::Below);
        let (title, size) = fit_title(&with_exponent(y_title, self.y.exponent), self.bottom - 4.0, PLAIN);
        let half = 0.5 * text_width(&title, size);
        let y = larger(0.5 * (self.top + self.bottom), half + 4.0);
        surface.text(&title, (12.0, y), Ink::Strong, size, Anchor::Upward);
    }
}

/// Room that the labels of a vertical axis and its title need.
pub(super) fn left_room(y: &Axis) -> f64 {
    let widest = y.major.iter().fold(0.0, |widest, (_, text)| larger(widest, text_width(text, SMALL)));
    35.0 + widest
}

/// How many labels fit on a horizontal axis: at most seven.
pub(super) fn most_labels(low: f64, high: f64, tight: bool, room: f64) -> usize {
    let axis = Axis::linear(low, high, 7, tight);
    let widest = axis.major.iter().fold(0.0, |widest, (_, text)| larger(widest, text_width(text, SMALL)));
    (3..7).rev().fold(7, |most, fewer| if (widest + 14.0) * most as f64 > room { fewer } else { most })
}
