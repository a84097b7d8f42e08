//! The drawing surface: plotters' SVG backend on a canvas ten times as fine as the picture.
//!
//! plotters rounds to whole pixels and draws what lies outside an axis at its edge, so coordinates are scaled by
//! ten, and lines are cut at the frame here. Colours stand in for styles while drawing and become CSS variables at
//! the end, so that a page can give a dark and a print variant.

use plotters::backend::SVGBackend;
use plotters::drawing::{DrawingArea, IntoDrawingArea};
use plotters::element::{PathElement, Polygon, Text};
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{Color, FontTransform, IntoFont, RGBColor, ShapeStyle, TextStyle};

/// Fine units in a unit of the picture.
const FINE: f64 = 10.0;
/// plotters writes a font size divided by this.
const FONT: f64 = 1.24;

/// What a line, text or fill is; each is a colour and a CSS variable.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Ink {
    /// Text and axes.
    Strong,
    /// Lesser text.
    Soft,
    /// Major grid.
    Grid,
    /// Minor grid.
    Faint,
    /// A limit that a criterion sets.
    Limit,
    /// A series, counted from 0.
    Series(usize),
}

/// Okabe & Ito (2008), "Color universal design": colours that readers with any colour vision tell apart, without
/// the yellow, which is too light for lines.
const SERIES: [(u8, u8, u8); 7] = [
    (0, 114, 178),
    (213, 94, 0),
    (0, 158, 115),
    (204, 121, 167),
    (86, 180, 233),
    (230, 159, 0),
    (60, 60, 60),
];

/// Dashes of the series, in units of the picture.
const DASHES: [&str; 7] = ["", "7 3", "2 2.5", "9 3 2 3", "12 4", "5 2 1.5 2 1.5 2", "1.2 3"];

/// Number of series that differ in both colour and dash.
pub(super) const STYLES: usize = SERIES.len();

impl Ink {
    fn colour(self) -> RGBColor {
        match self {
            Ink::Strong => RGBColor(0x22, 0x22, 0x23),
            Ink::Soft => RGBColor(0x55, 0x55, 0x56),
            Ink::Grid => RGBColor(0xdd, 0xdd, 0xde),
            Ink::Faint => RGBColor(0xf0, 0xf0, 0xf1),
            Ink::Limit => RGBColor(0xb0, 0x1e, 0x2f),
            Ink::Series(i) => {
                let (r, g, b) = SERIES[i % STYLES];
                RGBColor(r, g, b)
            }
        }
    }
    fn hex(self) -> String {
        let RGBColor(r, g, b) = self.colour();
        format!("#{r:02X}{g:02X}{b:02X}")
    }
    fn variable(self) -> String {
        match self {
            Ink::Strong => "--chart-ink".to_owned(),
            Ink::Soft => "--chart-soft".to_owned(),
            Ink::Grid => "--chart-grid".to_owned(),
            Ink::Faint => "--chart-faint".to_owned(),
            Ink::Limit => "--chart-limit".to_owned(),
            Ink::Series(i) => format!("--chart-{}", i % STYLES + 1),
        }
    }
}

/// Where a text stands to its point.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Anchor {
    /// Right of it, centred in height.
    Right,
    /// Left of it, centred in height.
    Left,
    /// Below it, centred.
    Below,
    /// Turned by a quarter, reading upward, centred.
    Upward,
}

/// A picture in the making. Coordinates are in units of the picture, from the upper left.
pub(super) struct Surface {
    width: f64,
    height: f64,
    marks: Vec<Mark>,
}

enum Mark {
    Line(Vec<(f64, f64)>, Ink, f64),
    Fill(Vec<(f64, f64)>, Ink, f64),
    Text(String, (f64, f64), Ink, f64, Anchor),
}

impl Surface {
    pub(super) fn new(width: f64, height: f64) -> Self {
        Surface { width, height, marks: Vec::new() }
    }
    pub(super) fn line(&mut self, points: &[(f64, f64)], ink: Ink, width: f64) {
        if points.len() > 1 {
            self.marks.push(Mark::Line(points.to_vec(), ink, width));
        }
    }
    pub(super) fn fill(&mut self, points: &[(f64, f64)], ink: Ink, opacity: f64) {
        if points.len() > 2 {
            self.marks.push(Mark::Fill(points.to_vec(), ink, opacity));
        }
    }
    pub(super) fn text(&mut self, text: &str, at: (f64, f64), ink: Ink, size: f64, anchor: Anchor) {
        self.marks.push(Mark::Text(text.to_owned(), at, ink, size, anchor));
    }
    /// The marker of series `i`: a shape of its own for each.
    pub(super) fn marker(&mut self, i: usize, (x, y): (f64, f64), r: f64) {
        let ink = Ink::Series(i);
        let shape: Vec<(f64, f64)> = match i % 5 {
            0 => (0..16)
                .map(|k| {
                    let angle = f64::from(k) * std::f64::consts::PI / 8.0;
                    (
                        x + r * crate::arithmetic::elementary::cos(angle),
                        y + r * crate::arithmetic::elementary::sin(angle),
                    )
                })
                .collect(),
            1 => vec![(x - r, y - r), (x + r, y - r), (x + r, y + r), (x - r, y + r)],
            2 => vec![(x, y - 1.3 * r), (x + 1.2 * r, y + r), (x - 1.2 * r, y + r)],
            3 => vec![(x, y - 1.4 * r), (x + 1.4 * r, y), (x, y + 1.4 * r), (x - 1.4 * r, y)],
            _ => vec![(x - 1.2 * r, y - r), (x + 1.2 * r, y - r), (x, y + 1.3 * r)],
        };
        self.fill(&shape, ink, 1.0);
    }

    /// The SVG, with title and description for readers who do not see it. `id` must be unique on the page.
    pub(super) fn finish(self, id: &str, title: &str, description: &str) -> String {
        let mut svg = String::new();
        {
            let size = (to_pixels(self.width * FINE), to_pixels(self.height * FINE));
            let root = SVGBackend::with_string(&mut svg, size).into_drawing_area();
            for mark in &self.marks {
                draw(&root, mark);
            }
            // The backend writes to a string, which cannot fail.
            let _ = root.present();
        }
        let header = format!(
            "<svg class=\"chart\" viewBox=\"0 0 {w} {h}\" width=\"{pw}\" height=\"{ph}\" role=\"img\" aria-labelledby=\"{id}-title {id}-desc\" xmlns=\"http://www.w3.org/2000/svg\">\n<title id=\"{id}-title\">{}</title>\n<desc id=\"{id}-desc\">{}</desc>\n",
            escape(title),
            escape(description),
            w = self.width * FINE,
            h = self.height * FINE,
            pw = self.width,
            ph = self.height,
        );
        let body = svg.split_once('>').map_or("", |(_, body)| body);
        style(&format!("{header}{}", body.trim_start()))
    }
}

/// Replaces the colours by styles.
fn style(svg: &str) -> String {
    let mut text = svg.to_owned();
    let mut inks = vec![Ink::Strong, Ink::Soft, Ink::Grid, Ink::Faint, Ink::Limit];
    inks.extend((0..STYLES).map(Ink::Series));
    for ink in inks {
        let (hex, variable) = (ink.hex(), ink.variable());
        let dash = match ink {
            Ink::Series(i) if !DASHES[i].is_empty() => {
                let fine: Vec<String> = DASHES[i]
                    .split(' ')
                    .map(|part| format!("{}", part.parse::<f64>().unwrap_or(1.0) * FINE))
                    .collect();
                format!(";stroke-dasharray:{}", fine.join(" "))
            }
            Ink::Limit => format!(";stroke-dasharray:{} {}", 4.0 * FINE, 3.0 * FINE),
            _ => String::new(),
        };
        text = text
            .replace(&format!("stroke=\"{hex}\""), &format!("style=\"stroke:var({variable},{hex}){dash}\""))
            .replace(&format!("fill=\"{hex}\""), &format!("style=\"fill:var({variable},{hex})\""));
    }
    text.replace(
        "font-family=\"sans-serif\"",
        "font-family=\"system-ui, 'Segoe UI', Roboto, Helvetica, Arial, sans-serif\"",
    )
}

fn draw(root: &DrawingArea<SVGBackend<'_>, plotters::coord::Shift>, mark: &Mark) {
    let fine = |(x, y): &(f64, f64)| (to_fine(*x), to_fine(*y));
    // Drawing to a string cannot fail, so results are of no interest.
    match mark {
        Mark::Line(points, ink, width) => {
            let style = ink.colour().stroke_width(to_pixels(width * FINE));
            let _ = root.draw(&PathElement::new(points.iter().map(fine).collect::<Vec<_>>(), style));
        }
        Mark::Fill(points, ink, opacity) => {
            let style: ShapeStyle = ink.colour().mix(*opacity).filled();
            let _ = root.draw(&Polygon::new(points.iter().map(fine).collect::<Vec<_>>(), style));
        }
        Mark::Text(text, at, ink, size, anchor) => {
            let mut font = ("sans-serif", size * FONT * FINE).into_font();
            if *anchor == Anchor::Upward {
                font = font.transform(FontTransform::Rotate270);
            }
            let pos = match anchor {
                Anchor::Right => Pos::new(HPos::Left, VPos::Center),
                Anchor::Left => Pos::new(HPos::Right, VPos::Center),
                Anchor::Below => Pos::new(HPos::Center, VPos::Top),
                Anchor::Upward => Pos::new(HPos::Center, VPos::Center),
            };
            let colour = ink.colour();
            let style = TextStyle::from(font).color(&colour).pos(pos);
            let _ = root.draw(&Text::new(text.clone(), fine(at), style));
        }
    }
}

#[expect(clippy::cast_possible_truncation, reason = "coordinates of a picture")]
fn to_fine(x: f64) -> i32 {
    (x * FINE).round() as i32
}

#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "sizes of a picture")]
fn to_pixels(x: f64) -> u32 {
    x.round() as u32
}

fn escape(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;")
}

/// The parts of a line inside the rectangle from `low` to `high`, split where it is not finite.
///
/// Source of the cutting: Liang & Barsky (1984), ACM Trans. Graph. 3, 1-22.
pub(super) fn clip(points: &[(f64, f64)], low: (f64, f64), high: (f64, f64)) -> Vec<Vec<(f64, f64)>> {
    let mut parts: Vec<Vec<(f64, f64)>> = Vec::new();
    let mut open: Vec<(f64, f64)> = Vec::new();
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

fn segment(
    a: (f64, f64),
    b: (f64, f64),
    low: (f64, f64),
    high: (f64, f64),
) -> Option<((f64, f64), (f64, f64))> {
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
            enter = crate::arithmetic::larger(enter, r);
        } else {
            if r < enter {
                return None;
            }
            leave = crate::arithmetic::smaller(leave, r);
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_are_cut_at_the_frame_and_at_gaps() {
        let points = [(-1.0, 0.5), (0.5, 0.5), (0.5, f64::NAN), (0.6, 0.5), (0.6, 3.0)];
        let parts = clip(&points, (0.0, 0.0), (1.0, 1.0));
        assert_eq!(parts, vec![vec![(0.0, 0.5), (0.5, 0.5)], vec![(0.6, 0.5), (0.6, 1.0)]]);
        assert!(clip(&[(2.0, 2.0), (3.0, 5.0)], (0.0, 0.0), (1.0, 1.0)).is_empty());
    }
}
