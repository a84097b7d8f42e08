//! The labels of series: at the ends of their lines, in a column beside them, or in rows below.

use super::clip::Point;
use super::frame::{Frame, PLAIN};
use super::surface::{Anchor, Ink, Surface};
use super::width::{fit, text_width};
use crate::arithmetic::{larger, smaller};

/// Least distance of two labels.
const GAP: f64 = 16.0;
/// Length of the sample of a line beside its label, and what lies around it.
const SAMPLE: f64 = 22.0;
/// Widest column of labels, as a share of the picture.
const WIDEST: f64 = 0.3;
/// Height of a row of labels.
const ROW: f64 = 19.0;

/// A series to be labelled.
pub(super) struct Entry<'a> {
    /// Its number, which decides its looks.
    pub(super) index: usize,
    pub(super) text: &'a str,
    /// Whether it is drawn with markers, and with a line.
    pub(super) marks: bool,
    pub(super) line: bool,
    /// Where it ends, in the picture; no end where the label is to stand in the column in order.
    pub(super) end: Option<Point>,
}

/// Where the labels stand.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Place {
    /// Nowhere: there are no labels.
    None,
    /// Right of the data area, at the ends of lines or in order.
    Beside,
    /// In rows below the picture.
    Below,
}

/// Where labels stand in a picture, and the room they take to the right and below.
pub(super) fn lay_out(texts: &[&str], width: f64, height: f64) -> (Place, f64, f64) {
    let widest = texts.iter().fold(0.0, |widest, text| larger(widest, text_width(text, PLAIN)));
    if texts.is_empty() {
        (Place::None, 18.0, 0.0)
    } else if widest <= WIDEST * width && GAP * texts.len() as f64 <= height {
        (Place::Beside, widest + SAMPLE + 20.0, 0.0)
    } else {
        let rows = flow(texts, width).last().map_or(0.0, |(_, row, _)| row + 1.0);
        (Place::Below, 18.0, rows * ROW + 4.0)
    }
}

/// Draws labels right of a frame.
pub(super) fn draw_beside(surface: &mut Surface, frame: &Frame, entries: &[Entry<'_>]) {
    let mut wanted: Vec<(f64, usize)> = entries
        .iter()
        .enumerate()
        .map(|(k, entry)| {
            let height = entry.end.map_or(frame.top + 8.0 + GAP * k as f64, |end| end.1);
            (larger(frame.top, smaller(height, frame.bottom)), k)
        })
        .collect();
    wanted.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
    let heights: Vec<f64> = wanted.iter().map(|(height, _)| *height).collect();
    for (height, (wish, k)) in spread(&heights, GAP, frame.top, frame.bottom).into_iter().zip(&wanted) {
        let entry = &entries[*k];
        let left = frame.right + 10.0;
        // A label moved away from the end of its line is led back to it.
        if entry.end.is_some_and(|end| end.0 > frame.right - 2.0) && (height - wish).abs() > 2.0 {
            surface.line(&[(frame.right + 1.0, *wish), (left - 1.0, height)], Ink::Solid(entry.index), 0.8);
        }
        draw_entry(surface, entry, (left, height), f64::INFINITY);
    }
}

/// Draws labels in rows that begin at a height.
pub(super) fn draw_below(surface: &mut Surface, top: f64, width: f64, entries: &[Entry<'_>]) {
    let texts: Vec<&str> = entries.iter().map(|entry| entry.text).collect();
    for (entry, (x, row, room)) in entries.iter().zip(flow(&texts, width)) {
        draw_entry(surface, entry, (x, top + ROW * (row + 0.5)), room);
    }
}

fn draw_entry(surface: &mut Surface, entry: &Entry<'_>, (x, y): Point, room: f64) {
    if entry.line {
        surface.line(&[(x, y), (x + SAMPLE, y)], Ink::Series(entry.index), 1.9);
    }
    if entry.marks {
        surface.marker(entry.index, (x + 0.5 * SAMPLE, y), 3.2);
    }
    let (text, size) = fit(entry.text, room, PLAIN);
    surface.text(&text, (x + SAMPLE + 6.0, y), Ink::Strong, size, Anchor::Right);
}

/// Places in rows: abscissa, row and room for the text of each.
fn flow(texts: &[&str], width: f64) -> Vec<(f64, f64, f64)> {
    let (mut x, mut row) = (12.0, 0.0);
    let most = width - 12.0;
    let room = most - 12.0 - SAMPLE - 6.0;
    texts
        .iter()
        .map(|text| {
            let wide = smaller(text_width(text, PLAIN), room) + SAMPLE + 6.0;
            if x > 12.0 && x + wide > most {
                (x, row) = (12.0, row + 1.0);
            }
            let place = (x, row, room);
            x += wide + 22.0;
            place
        })
        .collect()
}

/// Heights at least `gap` apart, as near as can be to those wanted, which are sorted, and between `top` and `bottom`
/// where there is room for all.
fn spread(wanted: &[f64], gap: f64, top: f64, bottom: f64) -> Vec<f64> {
    // Groups of labels that touch: number of them, and the height of the first.
    let mut groups: Vec<(usize, f64)> = Vec::new();
    let limit = |count: usize, first: f64| {
        let last = bottom - gap * (count - 1) as f64;
        larger(top, smaller(first, last))
    };
    for height in wanted {
        let mut group = (1, *height);
        while let Some((count, first)) = groups.last().copied() {
            if first + gap * count as f64 <= group.1 {
                break;
            }
            groups.pop();
            // The mean of what both want, each for its first label.
            let all = count + group.0;
            let wish = (first * count as f64 + (group.1 - gap * count as f64) * group.0 as f64) / all as f64;
            group = (all, limit(all, wish));
        }
        groups.push(group);
    }
    groups.into_iter().flat_map(|(count, first)| (0..count).map(move |k| first + gap * k as f64)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn labels_that_meet_are_pushed_apart_evenly() {
        assert_eq!(spread(&[20.0, 100.0], 10.0, 0.0, 200.0), [20.0, 100.0]);
        assert_eq!(spread(&[100.0, 100.0], 10.0, 0.0, 200.0), [95.0, 105.0]);
        assert_eq!(spread(&[100.0, 100.0, 100.0], 10.0, 0.0, 200.0), [90.0, 100.0, 110.0]);
        assert_eq!(spread(&[198.0, 200.0, 200.0], 10.0, 0.0, 200.0), [180.0, 190.0, 200.0]);
        assert_eq!(spread(&[0.0, 1.0], 10.0, 0.0, 200.0), [0.0, 10.0]);
        for seed in 0..200_u32 {
            let mut wanted: Vec<f64> =
                (0..12).map(|k| f64::from((seed * 7919 + k * k * 104_729) % 200)).collect();
            wanted.sort_by(f64::total_cmp);
            let heights = spread(&wanted, 16.0, 0.0, 200.0);
            assert!(heights.windows(2).all(|pair| pair[1] - pair[0] > 15.999), "{heights:?}");
            assert!(heights[0] >= 0.0 && heights[11] <= 200.001, "{heights:?}");
        }
    }

    #[test]
    fn long_or_many_labels_go_below() {
        assert_eq!(lay_out(&[], 760.0, 330.0).0, Place::None);
        assert_eq!(lay_out(&["a", "b"], 760.0, 330.0).0, Place::Beside);
        assert_eq!(
            lay_out(&["a long label that would leave no room for the lines"], 760.0, 330.0).0,
            Place::Below
        );
        let many = vec!["label"; 30];
        let (place, _, below) = lay_out(&many, 760.0, 330.0);
        assert!(place == Place::Below && below > 3.0 * ROW);
        assert!(flow(&many, 760.0).iter().all(|(x, ..)| *x < 720.0));
    }
}
