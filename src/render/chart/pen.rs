//! The pen: puts marks on a drawing in CSS pixels.

use super::drawing::{Anchor, Dash, Drawing, Group, Mark, Point, TextStyle};
use super::font;
use super::palette::Ink;

/// Size of labels, px.
pub const LABEL: f64 = 11.0;
/// Size of panel headings, px.
pub const HEADING: f64 = 12.0;
/// Size of row names in the strip, px.
pub const SMALL: f64 = 10.0;
/// Main strokes, px.
pub const MAIN: f64 = 1.7;
/// Second strokes, px.
pub const SECOND: f64 = 1.1;
/// Grid strokes, px.
pub const HAIR: f64 = 0.8;

/// Style of a label.
pub const fn label(ink: Ink, anchor: Anchor) -> TextStyle {
    TextStyle { size: LABEL, bold: false, ink, anchor }
}

/// Style of a bold label.
pub const fn bold(ink: Ink, anchor: Anchor) -> TextStyle {
    TextStyle { size: LABEL, bold: true, ink, anchor }
}

/// Collects marks.
#[derive(Debug, Default)]
pub struct Pen {
    marks: Vec<Mark>,
    open: usize,
}

impl Pen {
    /// An empty sheet.
    pub fn new() -> Self {
        Self::default()
    }

    /// Opens a group.
    pub fn open(&mut self, group: Group) {
        self.open += 1;
        self.marks.push(Mark::Open(group));
    }

    /// Closes the last open group.
    pub fn close(&mut self) {
        if self.open > 0 {
            self.open -= 1;
            self.marks.push(Mark::Close);
        }
    }

    /// A line through points; anything not finite is left out.
    pub fn path(&mut self, points: &[Point], ink: Ink, width: f64, dash: Dash) {
        if points.len() > 1 && points.iter().all(is_near) {
            self.marks.push(Mark::Line { points: points.to_vec(), ink, width, dash });
        }
    }

    /// A straight solid line.
    pub fn line(&mut self, from: Point, to: Point, ink: Ink, width: f64) {
        self.path(&[from, to], ink, width, Dash::Solid);
    }

    /// A filled area.
    pub fn fill(&mut self, points: &[Point], ink: Ink, alpha: f64) {
        if points.len() > 2 && points.iter().all(is_near) {
            self.marks.push(Mark::Fill { points: points.to_vec(), ink, alpha });
        }
    }

    /// A filled rectangle from its upper left corner.
    pub fn rectangle(&mut self, corner: Point, size: [f64; 2], ink: Ink, alpha: f64) {
        if is_near(&corner) && is_near(&size) && size.iter().all(|length| *length > 0.0) {
            self.marks.push(Mark::Rectangle { corner, size, ink, alpha });
        }
    }

    /// The outline of a rectangle.
    pub fn frame(&mut self, corner: Point, size: [f64; 2], ink: Ink, width: f64) {
        let ([x, y], [w, h]) = (corner, size);
        let corners = [[x, y], [x + w, y], [x + w, y + h], [x, y + h], [x, y], [x + w, y]];
        self.path(&corners, ink, width, Dash::Solid);
    }

    /// A filled disc.
    pub fn disc(&mut self, centre: Point, radius: f64, ink: Ink) {
        if is_near(&centre) && radius > 0.0 {
            self.marks.push(Mark::Disc { centre, radius, ink });
        }
    }

    /// A ring with a paper core.
    pub fn ring(&mut self, centre: Point, radius: f64, width: f64, ink: Ink) {
        self.disc(centre, radius, ink);
        self.disc(centre, radius - width, Ink::Paper);
    }

    /// A line of text by its baseline.
    pub fn text(&mut self, at: Point, text: &str, style: TextStyle) {
        if !text.is_empty() && is_near(&at) {
            self.marks.push(Mark::Text { at, text: clean(text), style });
        }
    }

    /// Texts one after another from a point on.
    pub fn run_of_text(&mut self, at: Point, gap: f64, parts: &[(&str, TextStyle)]) {
        let runs: Vec<(String, TextStyle)> = parts
            .iter()
            .filter(|part| !part.0.is_empty())
            .map(|(text, style)| (clean(text), TextStyle { anchor: Anchor::Start, ..*style }))
            .collect();
        if !runs.is_empty() && is_near(&at) {
            self.marks.push(Mark::Runs { at, gap, runs });
        }
    }

    /// A text on a plate of paper, for labels that must cross a line.
    pub fn text_on_plate(&mut self, at: Point, text: &str, style: TextStyle) {
        let wide = font::width(text, style.size, style.bold);
        let left = match style.anchor {
            Anchor::Start => at[0],
            Anchor::Middle => at[0] - wide / 2.0,
            Anchor::End => at[0] - wide,
        };
        let size = [wide + 6.0, style.size + 4.0];
        self.rectangle([left - 3.0, at[1] - 0.83 * style.size - 1.5], size, Ink::Paper, 0.9);
        self.text(at, text, style);
    }

    /// Adds all marks of another pen.
    pub fn append(&mut self, other: Self) {
        self.marks.extend(other.marks);
        self.open += other.open;
    }

    /// Hands the finished drawing over.
    pub fn finish(mut self, id: &str, title: &str, width: f64, height: f64) -> Drawing {
        while self.open > 0 {
            self.close();
        }
        Drawing { id: id.to_owned(), title: title.to_owned(), width, height, marks: self.marks }
    }
}

/// On any sheet, or not too far beside it; the canvases count in whole numbers.
fn is_near(point: &Point) -> bool {
    point.iter().all(|part| part.abs() < 50_000.0)
}

/// Control characters have no place in SVG text; U+E000 is the writer's own sentinel.
fn clean(text: &str) -> String {
    text.replace(|letter: char| letter.is_control() || letter == '\u{E000}', " ")
}
