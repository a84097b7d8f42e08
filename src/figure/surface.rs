//! The drawing surface: plotters' SVG backend on a canvas ten times as fine as the picture.
//!
//! plotters rounds to whole pixels, so coordinates are scaled by ten; it draws what lies outside an axis at its edge, so
//! lines are cut beforehand. It knows no dashes and no CSS, so each ink is drawn in a colour that stands for it, and
//! gets its looks at the end: the colour as an attribute, and a CSS variable over it with which a page can give a dark
//! and a print variant.

use plotters::backend::SVGBackend;
use plotters::drawing::{DrawingArea, IntoDrawingArea};
use plotters::element::{PathElement, Polygon, Text};
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{Color, FontTransform, IntoFont, RGBColor, ShapeStyle, TextStyle};

/// Fine units in a unit of the picture.
const FINE: f64 = 10.0;
/// plotters writes a font size divided by this.
const FONT: f64 = 1.24;
/// Fonts of the system, in the order of liking.
const FAMILY: &str = "system-ui, 'Segoe UI', Roboto, Helvetica, Arial, sans-serif";

/// What a line, text or fill is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Ink {
    /// Text and axes.
    Strong,
    /// Lesser lines.
    Soft,
    /// Major grid.
    Grid,
    /// Minor grid.
    Faint,
    /// A limit that a criterion sets.
    Limit,
    /// Text on a limit, kept clear of lines below it.
    LimitText,
    /// Lesser text, kept clear of lines below it.
    Note,
    /// A series, counted from 0.
    Series(usize),
    /// A line in the colour of a series without its dashes.
    Solid(usize),
}

/// Okabe & Ito (2008), "Color universal design": colours that readers with any colour vision tell apart; black is
/// kept for the axes, and the yellow is too light for lines.
const SERIES: [(&str, &str); 7] = [
    ("--chart-1", "#0072B2"),
    ("--chart-2", "#D55E00"),
    ("--chart-3", "#009E73"),
    ("--chart-4", "#CC79A7"),
    ("--chart-5", "#56B4E9"),
    ("--chart-6", "#E69F00"),
    ("--chart-7", "#3C3C3C"),
];

/// Dashes of the series, in units of the picture.
const DASHES: [&str; 7] = ["", "7 3", "2 2.5", "9 3 2 3", "12 4", "5 2 1.5 2 1.5 2", "1.2 3"];

/// Number of colours, and of dashes.
pub(super) const STYLES: usize = SERIES.len();

/// Most series that are told apart; further ones begin anew.
const MOST_SERIES: usize = STYLES * STYLES;

impl Ink {
    /// The colour that stands for the ink on the surface: no two have the same.
    fn colour(self) -> RGBColor {
        let (kind, i) = match self {
            Ink::Strong => (1, 0),
            Ink::Soft => (2, 0),
            Ink::Grid => (3, 0),
            Ink::Faint => (4, 0),
            Ink::Limit => (5, 0),
            Ink::LimitText => (6, 0),
            Ink::Note => (7, 0),
            Ink::Series(i) => (8, i % MOST_SERIES),
            Ink::Solid(i) => (9, i % MOST_SERIES),
        };
        RGBColor(0xf7, kind, u8::try_from(i).unwrap_or(0))
    }

    /// CSS variable and colour.
    fn looks(self) -> (&'static str, &'static str) {
        match self {
            Ink::Strong => ("--chart-ink", "#222222"),
            Ink::Soft | Ink::Note => ("--chart-soft", "#555555"),
            Ink::Grid => ("--chart-grid", "#DDDDDD"),
            Ink::Faint => ("--chart-faint", "#F0F0F0"),
            Ink::Limit | Ink::LimitText => ("--chart-limit", "#B01E2F"),
            Ink::Series(i) | Ink::Solid(i) => SERIES[i % STYLES],
        }
    }

    /// Attributes of a line.
    fn line_style(self) -> String {
        let (variable, colour) = self.looks();
        let dashes = match self {
            // Series beyond the last colour have another dash.
            Ink::Series(i) => DASHES[(i + i / STYLES) % STYLES],
            Ink::Limit => "4 3",
            _ => "",
        };
        let mut text = format!("stroke=\"{colour}\" style=\"stroke:var({variable},{colour})\"");
        if !dashes.is_empty() {
            let fine: Vec<String> = dashes
                .split(' ')
                .map(|part| (part.parse::<f64>().unwrap_or(1.0) * FINE).to_string())
                .collect();
            text = format!("{text} stroke-dasharray=\"{}\"", fine.join(" "));
        }
        text
    }

    /// Attributes of an area or a text.
    fn fill_style(self) -> String {
        let (variable, colour) = self.looks();
        let halo = match self {
            Ink::LimitText | Ink::Note => {
                format!(";stroke:var(--paper,#FFFFFF);stroke-width:{};paint-order:stroke", 3.5 * FINE)
            }
            _ => String::new(),
        };
        format!("fill=\"{colour}\" style=\"fill:var({variable},{colour}){halo}\"")
    }

    fn all() -> Vec<Ink> {
        let mut list =
            vec![Ink::Strong, Ink::Soft, Ink::Grid, Ink::Faint, Ink::Limit, Ink::LimitText, Ink::Note];
        list.extend((0..MOST_SERIES).flat_map(|i| [Ink::Series(i), Ink::Solid(i)]));
        list
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
        self.marks.push(Mark::Text(printable(text), at, ink, size, anchor));
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
        let id = escape(id);
        let header = format!(
            "<svg class=\"chart\" viewBox=\"0 0 {w} {h}\" width=\"{pw}\" height=\"{ph}\" role=\"img\" font-family=\"{FAMILY}\" stroke-linejoin=\"round\" aria-labelledby=\"{id}-title {id}-desc\" xmlns=\"http://www.w3.org/2000/svg\">\n<title id=\"{id}-title\">{}</title>\n<desc id=\"{id}-desc\">{}</desc>\n",
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

/// Gives the inks their looks.
fn style(svg: &str) -> String {
    let mut text = svg.replace(" opacity=\"1\"", "");
    for ink in Ink::all() {
        let RGBColor(r, g, b) = ink.colour();
        let hex = format!("#{r:02X}{g:02X}{b:02X}");
        if text.contains(&hex) {
            text = text
                .replace(&format!("stroke=\"{hex}\""), &ink.line_style())
                .replace(&format!("fill=\"{hex}\""), &ink.fill_style());
        }
    }
    // The header names the font once.
    text.replace(" font-family=\"sans-serif\"", "")
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

/// Text without the characters that XML forbids.
fn printable(text: &str) -> String {
    text.chars()
        .map(|c| if c.is_control() || matches!(c, '\u{fffe}' | '\u{ffff}') { ' ' } else { c })
        .collect()
}

fn escape(text: &str) -> String {
    printable(text).replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;").replace('"', "&quot;")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_series_has_a_look_of_its_own() {
        let mut looks: Vec<String> = (0..STYLES * STYLES).map(|i| Ink::Series(i).line_style()).collect();
        looks.sort();
        looks.dedup();
        assert_eq!(looks.len(), STYLES * STYLES);
        let mut dashes: Vec<&str> = DASHES.to_vec();
        dashes.sort_unstable();
        dashes.dedup();
        assert_eq!(dashes.len(), STYLES);
    }

    #[test]
    fn text_of_any_kind_is_text() {
        let mut surface = Surface::new(100.0, 50.0);
        surface.text("a < b & \"c\" \u{1} 'd'", (1.0, 2.0), Ink::Strong, 12.0, Anchor::Right);
        let svg = surface.finish("x", "t <i> & \u{0}", "<script>");
        assert!(svg.contains("a &lt; b &amp; &quot;c&quot;   &apos;d&apos;"), "{svg}");
        assert!(!svg.contains("<script>") && !svg.contains("<i>") && !svg.contains('\u{0}'));
    }
}
