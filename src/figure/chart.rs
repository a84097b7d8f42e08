//! Charts of lines and points.

use super::axis::Axis;
use super::digits::superscript;
use super::surface::{Anchor, Ink, Surface, clip};
use super::width::text_width;
use crate::arithmetic::{larger, smaller};

/// Width of a picture, in CSS pixels at its natural size.
pub(super) const WIDTH: f64 = 760.0;
/// Height of a picture.
pub(super) const HEIGHT: f64 = 400.0;
/// Font size of tick labels.
pub(super) const SMALL: f64 = 12.0;
/// Font size of titles and labels.
pub(super) const PLAIN: f64 = 13.0;
/// Distance between direct labels.
const LABEL_GAP: f64 = 16.0;

/// A line or a set of points.
#[derive(Clone, Debug, PartialEq)]
pub struct Series {
    /// Its label.
    pub label: String,
    /// Its points in order; a point that is not finite makes a gap.
    pub points: Vec<(f64, f64)>,
    /// Whether points are marked in place of a line.
    pub marks: bool,
}

/// A chart of lines and points.
#[derive(Clone, Debug, PartialEq)]
pub struct Chart {
    /// Unique on the page; letters, digits and hyphens.
    pub id: String,
    /// Title for readers who do not see it.
    pub title: String,
    /// Description for readers who do not see it.
    pub description: String,
    /// Title of the horizontal axis: `t / s`.
    pub x_title: String,
    /// Title of the vertical axis: `z / m`.
    pub y_title: String,
    /// The series.
    pub series: Vec<Series>,
    /// Horizontal limit lines with their labels.
    pub limits: Vec<(f64, String)>,
    /// Whether the abscissa is time, so that the axis ends where the lines end.
    pub over_time: bool,
}

/// The frame of a chart: where its data area lies, and its axes.
pub(super) struct Frame {
    pub(super) left: f64,
    pub(super) right: f64,
    pub(super) top: f64,
    pub(super) bottom: f64,
    pub(super) x: Axis,
    pub(super) y: Axis,
}

impl Frame {
    pub(super) fn place(&self, (x, y): (f64, f64)) -> (f64, f64) {
        (
            self.left + self.x.share(x) * (self.right - self.left),
            self.bottom - self.y.share(y) * (self.bottom - self.top),
        )
    }

    /// Grid, axes, ticks and titles.
    pub(super) fn draw(&self, surface: &mut Surface, x_title: &str, y_title: &str) {
        let across = |share: f64| self.left + share * (self.right - self.left);
        let up = |share: f64| self.bottom - share * (self.bottom - self.top);
        for place in &self.x.minor {
            let x = across(self.x.tick_share(*place));
            surface.line(&[(x, self.top), (x, self.bottom)], Ink::Faint, 1.0);
        }
        for place in &self.y.minor {
            let y = up(self.y.tick_share(*place));
            surface.line(&[(self.left, y), (self.right, y)], Ink::Faint, 1.0);
        }
        for (place, _) in &self.x.major {
            let x = across(self.x.tick_share(*place));
            surface.line(&[(x, self.top), (x, self.bottom)], Ink::Grid, 1.0);
        }
        for (place, _) in &self.y.major {
            let y = up(self.y.tick_share(*place));
            surface.line(&[(self.left, y), (self.right, y)], Ink::Grid, 1.0);
        }
        surface.line(
            &[(self.left, self.top), (self.left, self.bottom), (self.right, self.bottom)],
            Ink::Strong,
            1.2,
        );
        for (place, text) in &self.x.major {
            let x = across(self.x.tick_share(*place));
            surface.line(&[(x, self.bottom), (x, self.bottom + 5.0)], Ink::Strong, 1.2);
            surface.text(text, (x, self.bottom + 8.0), Ink::Strong, SMALL, Anchor::Below);
        }
        for (place, text) in &self.y.major {
            let y = up(self.y.tick_share(*place));
            surface.line(&[(self.left - 5.0, y), (self.left, y)], Ink::Strong, 1.2);
            surface.text(text, (self.left - 8.0, y), Ink::Strong, SMALL, Anchor::Left);
        }
        let x_title = with_exponent(x_title, self.x.exponent);
        let y_title = with_exponent(y_title, self.y.exponent);
        surface.text(
            &x_title,
            (0.5 * (self.left + self.right), self.bottom + 28.0),
            Ink::Strong,
            PLAIN,
            Anchor::Below,
        );
        surface.text(&y_title, (12.0, 0.5 * (self.top + self.bottom)), Ink::Strong, PLAIN, Anchor::Upward);
    }
}

/// Room that the labels of a vertical axis and its title need.
pub(super) fn left_room(y: &Axis) -> f64 {
    let widest = y.major.iter().fold(0.0, |widest, (_, text)| larger(widest, text_width(text, SMALL)));
    34.0 + widest
}

/// A title with the power of ten that the labels leave out.
fn with_exponent(title: &str, exponent: Option<i32>) -> String {
    match exponent {
        Some(n) => match title.rsplit_once(" / ") {
            Some((quantity, unit)) => format!("{quantity} / 10{} {unit}", superscript(n)),
            None => format!("{title} / 10{}", superscript(n)),
        },
        None => title.to_owned(),
    }
}

/// Draws a chart as SVG.
pub fn draw(chart: &Chart) -> String {
    let (mut low, mut high) = ((f64::INFINITY, f64::INFINITY), (f64::NEG_INFINITY, f64::NEG_INFINITY));
    let all = chart.series.iter().flat_map(|series| &series.points);
    for (x, y) in all.filter(|(x, y)| x.is_finite() && y.is_finite()) {
        low = (smaller(low.0, *x), smaller(low.1, *y));
        high = (larger(high.0, *x), larger(high.1, *y));
    }
    if low.0 > high.0 {
        (low, high) = ((0.0, 0.0), (1.0, 1.0));
    }
    // A limit is drawn where it is near enough not to squeeze the lines.
    let tall = high.1 - low.1;
    let limits: Vec<&(f64, String)> = chart
        .limits
        .iter()
        .filter(|(limit, _)| *limit > low.1 - 0.6 * tall && *limit < high.1 + 0.6 * tall)
        .collect();
    for (limit, _) in &limits {
        low.1 = smaller(low.1, *limit);
        high.1 = larger(high.1, *limit);
    }
    let x = Axis::linear(low.0, high.0, 7, chart.over_time);
    let y = Axis::linear(low.1, high.1, 6, false);
    let many = chart.series.len() > 1;
    let widest =
        chart.series.iter().fold(0.0, |widest, series| larger(widest, text_width(&series.label, PLAIN)));
    let room = if many { smaller(widest + 34.0, 0.36 * WIDTH) } else { 16.0 };
    let frame = Frame { left: left_room(&y), right: WIDTH - room, top: 14.0, bottom: HEIGHT - 52.0, x, y };
    let mut surface = Surface::new(WIDTH, HEIGHT);
    frame.draw(&mut surface, &chart.x_title, &chart.y_title);
    for (limit, label) in limits {
        let (_, height) = frame.place((low.0, *limit));
        surface.line(&[(frame.left, height), (frame.right, height)], Ink::Limit, 1.4);
        // On the side away from the lines, where there is room for it.
        let middle = 0.5 * (low.1 + high.1);
        let above = *limit > middle && height > frame.top + 13.0;
        let place = (frame.left + 6.0, if above { height - 8.0 } else { height + 9.0 });
        surface.text(label, place, Ink::Limit, SMALL, Anchor::Right);
    }
    let corners = ((frame.left, frame.top), (frame.right, frame.bottom));
    for (i, series) in chart.series.iter().enumerate() {
        let placed: Vec<(f64, f64)> = series.points.iter().map(|point| frame.place(*point)).collect();
        if series.marks {
            for (x, y) in placed {
                let inside = x >= corners.0.0 - 0.5 && x <= corners.1.0 + 0.5;
                if inside && y >= corners.0.1 - 0.5 && y <= corners.1.1 + 0.5 {
                    surface.marker(i, (x, y), 3.2);
                }
            }
        } else {
            for part in clip(&placed, corners.0, corners.1) {
                surface.line(&part, Ink::Series(i), 1.9);
            }
        }
    }
    if many {
        label_series(chart, &frame, &mut surface);
    }
    surface.finish(&chart.id, &chart.title, &chart.description)
}

/// Labels at the line ends, pushed apart; each with a short sample of its line, so that none depends on colour.
fn label_series(chart: &Chart, frame: &Frame, surface: &mut Surface) {
    let mut labels: Vec<(f64, usize)> = Vec::new();
    for (i, series) in chart.series.iter().enumerate() {
        let last = series.points.iter().rev().find(|(x, y)| x.is_finite() && y.is_finite());
        let height = last.map_or(frame.top, |point| frame.place(*point).1);
        let height = if chart.over_time { height } else { frame.top + 10.0 + LABEL_GAP * i as f64 };
        labels.push((larger(smaller(height, frame.bottom), frame.top), i));
    }
    labels.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
    // Down from the top, then up from the bottom.
    for k in 1..labels.len() {
        labels[k].0 = larger(labels[k].0, labels[k - 1].0 + LABEL_GAP);
    }
    let mut floor = frame.bottom;
    for label in labels.iter_mut().rev() {
        label.0 = smaller(label.0, floor);
        floor = label.0 - LABEL_GAP;
    }
    for (height, i) in labels {
        let x = frame.right + 5.0;
        if chart.series[i].marks {
            surface.marker(i, (x + 10.0, height), 3.2);
        } else {
            surface.line(&[(x, height), (x + 20.0, height)], Ink::Series(i), 1.9);
        }
        surface.text(&chart.series[i].label, (x + 25.0, height), Ink::Strong, PLAIN, Anchor::Right);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn chart(points: Vec<(f64, f64)>) -> Chart {
        Chart {
            id: "c".to_owned(),
            title: "A & B <c>".to_owned(),
            description: "d".to_owned(),
            x_title: "t / s".to_owned(),
            y_title: "z / m".to_owned(),
            series: vec![Series { label: "<z>".to_owned(), points, marks: false }],
            limits: vec![(0.5, "limit 0.5 m".to_owned())],
            over_time: true,
        }
    }

    #[test]
    fn hostile_points_draw_nothing_outside() {
        let svg =
            draw(&chart(vec![(0.0, 0.0), (1.0, f64::NAN), (2.0, f64::INFINITY), (3.0, 1.0), (4.0, 0.2)]));
        assert!(!svg.contains("NaN") && !svg.contains("inf"), "{svg}");
        assert!(svg.contains("A &amp; B &lt;c&gt;"));
        assert!(!svg.contains("<z>"));
    }

    #[test]
    fn the_same_chart_gives_the_same_bytes() {
        let points: Vec<(f64, f64)> = (0..500).map(|i| (f64::from(i), f64::from(i * i % 97))).collect();
        assert_eq!(draw(&chart(points.clone())), draw(&chart(points)));
    }

    #[test]
    fn an_empty_chart_is_drawn() {
        assert!(draw(&chart(Vec::new())).contains("<svg"));
    }
}
