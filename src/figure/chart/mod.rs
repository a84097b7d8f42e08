//! Charts of lines and points.

use super::axis::{Axis, can_be_drawn};
use super::clip::{Corners, Point, clip, clip_area, inside, segment};
use super::frame::{BELOW, Frame, SMALL, TOP, left_room, most_labels};
use super::labels::{self, Entry, Place};
use super::surface::{Anchor, Ink, Surface};
use super::width::{fit, text_width};
use crate::arithmetic::{larger, smaller};
use crate::run::thin::{PathThinner, thin};

/// Width of a picture, in CSS pixels at its natural size.
pub(super) const WIDTH: f64 = 760.0;
/// Height of a picture without rows of labels below it.
pub(super) const HEIGHT: f64 = 400.0;
/// Columns to a unit of the picture for thinning.
const COLUMNS: f64 = 2.0;
/// Points of a path above which it is thinned.
const PATH: usize = 6000;
/// A limit is drawn up to this many heights of the data away from the data.
const NEAR: f64 = 1.5;

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

/// What a chart may have besides.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Extras {
    /// Shaded bands.
    pub bands: Vec<Band>,
    /// Range of the horizontal axis, in place of that of the data.
    pub x_range: Option<(f64, f64)>,
    /// Range of the vertical axis, in place of that of the data.
    pub y_range: Option<(f64, f64)>,
}

/// A shaded band between two curves, such as a bound around a line.
#[derive(Clone, Debug, PartialEq)]
pub struct Band {
    /// Number of the series whose colour it has.
    pub series: usize,
    /// Abscissa, lower and upper end; where one is not finite the band has a gap.
    pub points: Vec<(f64, f64, f64)>,
}

/// Draws a chart as SVG.
///
/// What lies beyond an axis is cut off, never drawn at its edge, and what is not finite is a gap. Lines of many
/// points are thinned to what can be seen; their extremes stay.
pub fn draw(chart: &Chart) -> String {
    draw_with(chart, &Extras::default())
}

/// Draws a chart with bands or given ranges as SVG.
pub fn draw_with(chart: &Chart, extras: &Extras) -> String {
    let (low, high) = ranges(chart, extras);
    let limits = near_limits(chart, extras, low.1, high.1);
    let (mut bottom_end, mut top_end) = (low.1, high.1);
    for (limit, _) in limits.iter().filter(|(_, side)| *side == Side::Within) {
        bottom_end = smaller(bottom_end, limit.0);
        top_end = larger(top_end, limit.0);
    }
    let y = Axis::linear(bottom_end, top_end, 7, extras.y_range.is_some());
    let texts: Vec<&str> = if chart.series.len() > 1 {
        chart.series.iter().map(|series| series.label.as_str()).collect()
    } else {
        Vec::new()
    };
    // Limits far above are named over the data area.
    let far_above = limits.iter().any(|(_, side)| *side == Side::Above);
    let (top, bottom) = (TOP + if far_above { 14.0 } else { 0.0 }, HEIGHT - BELOW);
    let (place, right_room, below) = labels::lay_out(&texts, WIDTH, bottom - top);
    let (left, right) = (left_room(&y), WIDTH - right_room);
    let tight = chart.over_time || extras.x_range.is_some();
    let most = most_labels(low.0, high.0, tight, right - left);
    let x = Axis::linear(low.0, high.0, most, tight);
    let frame = Frame { left, right, top, bottom, x, y };
    let corners = frame.corners();

    let mut surface = Surface::new(WIDTH, HEIGHT + below);
    frame.draw(&mut surface, &chart.x_title, &chart.y_title);
    for band in &extras.bands {
        draw_band(&mut surface, &frame, band);
    }
    let within: Vec<&(f64, String)> =
        limits.iter().filter(|(_, side)| *side == Side::Within).map(|(limit, _)| *limit).collect();
    for (limit, _) in &within {
        let height = frame.place((low.0, *limit)).1;
        for part in clip(&[(frame.left, height), (frame.right, height)], corners) {
            surface.line(&part, Ink::Limit, 1.4);
        }
    }
    let mut lines: Vec<Vec<Point>> = Vec::new();
    for (i, series) in chart.series.iter().enumerate() {
        let placed: Vec<Point> = thinned(series, chart.over_time, &frame);
        if series.marks {
            let mut last: Option<Point> = None;
            for point in placed.into_iter().filter(|point| inside(*point, corners)) {
                let seen = last.is_some_and(|(x, y)| (x - point.0).abs() < 0.3 && (y - point.1).abs() < 0.3);
                if !seen {
                    surface.marker(i, point, 3.2);
                    last = Some(point);
                }
            }
        } else {
            for part in clip(&placed, corners) {
                surface.line(&part, Ink::Series(i), 1.9);
                lines.push(part);
            }
            // A point between two gaps is no line, but it is there.
            for point in lone_points(&placed).filter(|point| inside(*point, corners)) {
                surface.marker(i, point, 1.6);
            }
        }
    }
    label_limits(&mut surface, &frame, &within, &lines);
    note_far_limits(&mut surface, &frame, &limits);
    let entries: Vec<Entry<'_>> = chart
        .series
        .iter()
        .enumerate()
        .map(|(index, series)| Entry {
            index,
            text: &series.label,
            marks: series.marks,
            line: !series.marks,
            end: if chart.over_time { Some(end_of(series, &frame)) } else { None },
        })
        .collect();
    match place {
        Place::None => {}
        Place::Beside => labels::draw_beside(&mut surface, &frame, &entries),
        Place::Below => labels::draw_below(&mut surface, HEIGHT - 2.0, WIDTH, &entries),
    }
    surface.finish(&chart.id, &chart.title, &chart.description)
}

/// Whether a point can be shown at all.
fn drawable((x, y): Point) -> bool {
    can_be_drawn(x) && can_be_drawn(y)
}

/// The corners of the data.
fn ranges(chart: &Chart, extras: &Extras) -> (Point, Point) {
    let (mut low, mut high) = ((f64::INFINITY, f64::INFINITY), (f64::NEG_INFINITY, f64::NEG_INFINITY));
    let lines = chart.series.iter().flat_map(|series| series.points.iter().copied());
    let bands = extras.bands.iter().flat_map(|band| &band.points);
    let bands = bands.flat_map(|(x, lower, upper)| [(*x, *lower), (*x, *upper)]);
    for (x, y) in lines.chain(bands).filter(|point| drawable(*point)) {
        low = (smaller(low.0, x), smaller(low.1, y));
        high = (larger(high.0, x), larger(high.1, y));
    }
    if low.0 > high.0 {
        (low, high) = ((0.0, 0.0), (1.0, 1.0));
    }
    let usable = |range: &(f64, f64)| can_be_drawn(range.0) && can_be_drawn(range.1) && range.0 < range.1;
    if let Some(range) = extras.x_range.filter(usable) {
        (low.0, high.0) = range;
    }
    if let Some(range) = extras.y_range.filter(usable) {
        (low.1, high.1) = range;
    }
    (low, high)
}

/// Where a limit lies to the data area.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Side {
    Within,
    Above,
    Below,
}

/// The limits, and whether each is near enough to be drawn without squeezing the lines.
fn near_limits<'a>(chart: &'a Chart, extras: &Extras, low: f64, high: f64) -> Vec<(&'a (f64, String), Side)> {
    let tall = high - low;
    let size = larger(low.abs(), high.abs());
    // A constant has no height of its own.
    let room = match extras.y_range {
        Some(_) => 0.0,
        None if tall <= 1e-9 * size => size,
        None => NEAR * tall,
    };
    chart
        .limits
        .iter()
        .filter(|(limit, _)| can_be_drawn(*limit))
        .map(|limit| {
            let side = match limit.0 {
                y if y > high + room => Side::Above,
                y if y < low - room => Side::Below,
                _ => Side::Within,
            };
            (limit, side)
        })
        .collect()
}

/// The points of a series in the picture, no more than can be seen.
fn thinned(series: &Series, over_time: bool, frame: &Frame) -> Vec<Point> {
    let placed = series
        .points
        .iter()
        .map(|point| if drawable(*point) { frame.place(*point) } else { (f64::NAN, f64::NAN) });
    if over_time {
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "columns of the picture")]
        let columns = (COLUMNS * (frame.right - frame.left)) as usize;
        return thin(&placed.collect::<Vec<_>>(), columns);
    }
    if series.points.len() <= PATH {
        return placed.collect();
    }
    let mut thinner = PathThinner::new(PATH);
    for (x, y) in placed {
        thinner.push(x, y);
    }
    thinner.finish()
}

/// Points with no neighbour to be joined with.
fn lone_points(points: &[Point]) -> impl Iterator<Item = Point> + '_ {
    let there =
        |k: Option<usize>| k.and_then(|k| points.get(k)).is_some_and(|(x, y)| x.is_finite() && y.is_finite());
    (0..points.len())
        .filter(move |k| there(Some(*k)) && !there(k.checked_sub(1)) && !there(k.checked_add(1)))
        .map(|k| points[k])
}

/// Where a series ends, in the picture.
fn end_of(series: &Series, frame: &Frame) -> Point {
    series
        .points
        .iter()
        .rev()
        .find(|point| drawable(**point))
        .map_or((frame.left, frame.top), |point| frame.place(*point))
}

fn draw_band(surface: &mut Surface, frame: &Frame, band: &Band) {
    let there = |point: &(f64, f64, f64)| drawable((point.0, point.1)) && drawable((point.0, point.2));
    for part in band.points.split(|point| !there(point)) {
        // Both ends are thinned with their extremes, so that the band is never narrower than it should be.
        let columns = 1500;
        let ends = |upper: bool| -> Vec<Point> {
            let curve = part.iter().map(|(x, low, high)| frame.place((*x, if upper { *high } else { *low })));
            thin(&curve.collect::<Vec<_>>(), columns)
        };
        let mut area = ends(false);
        area.extend(ends(true).into_iter().rev());
        surface.fill(&clip_area(&area, frame.corners()), Ink::Series(band.series), 0.18);
    }
}

/// Writes the labels of limits beside their lines, where they cover as little of the curves as can be.
fn label_limits(surface: &mut Surface, frame: &Frame, limits: &[&(f64, String)], lines: &[Vec<Point>]) {
    let mut taken: Vec<Corners> = Vec::new();
    for (limit, label) in limits {
        let height = frame.bottom - frame.y.share(*limit) * (frame.bottom - frame.top);
        if !(frame.top - 0.5..=frame.bottom + 0.5).contains(&height) {
            continue;
        }
        let (text, size) = fit(label, 0.8 * (frame.right - frame.left), SMALL);
        let width = text_width(&text, size);
        let mut best: Option<(usize, f64, f64, Corners)> = None;
        for share in [0.0, 1.0, 0.5, 0.25, 0.75] {
            let left = frame.left + 6.0 + share * (frame.right - frame.left - 12.0 - width);
            for up in [true, false] {
                let y = if up { height - 9.0 } else { height + 10.0 };
                let area = ((left, y - 7.0), (left + width, y + 7.0));
                if area.0.1 < frame.top - 8.0 || area.1.1 > frame.bottom {
                    continue;
                }
                let cost =
                    crossings(lines, area) + 1000 * taken.iter().filter(|other| meet(**other, area)).count();
                if best.as_ref().is_none_or(|(least, ..)| cost < *least) {
                    best = Some((cost, left, y, area));
                }
            }
        }
        if let Some((_, left, y, area)) = best {
            surface.text(&text, (left, y), Ink::LimitText, size, Anchor::Right);
            taken.push(area);
        }
    }
}

/// Names the limits that lie too far away to be drawn.
fn note_far_limits(surface: &mut Surface, frame: &Frame, limits: &[(&(f64, String), Side)]) {
    for (side, word) in [(Side::Above, "above"), (Side::Below, "below")] {
        let names: Vec<&str> =
            limits.iter().filter(|(_, other)| *other == side).map(|(limit, _)| limit.1.as_str()).collect();
        if names.is_empty() {
            continue;
        }
        let note = format!("{} lies {word} this frame", names.join(", "));
        let note = if names.len() > 1 { note.replace(" lies ", " lie ") } else { note };
        let (text, size) = fit(&note, frame.right - frame.left - 12.0, SMALL);
        let y = if side == Side::Above { frame.top - 10.0 } else { frame.bottom - 10.0 };
        surface.text(&text, (frame.right - 6.0, y), Ink::LimitText, size, Anchor::Left);
    }
}

/// How many segments of the lines enter an area.
fn crossings(lines: &[Vec<Point>], (low, high): Corners) -> usize {
    lines
        .iter()
        .flat_map(|line| line.windows(2))
        .filter(|pair| segment(pair[0], pair[1], low, high).is_some())
        .count()
}

fn meet(a: Corners, b: Corners) -> bool {
    a.0.0 < b.1.0 && b.0.0 < a.1.0 && a.0.1 < b.1.1 && b.0.1 < a.1.1
}

#[cfg(test)]
mod tests;
