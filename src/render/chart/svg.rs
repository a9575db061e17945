//! SVG: the drawing through the vector canvas of plotters, with groups and a quiet head.
//!
//! The canvas knows whole coordinates only, so it is laid out at eight units to the CSS pixel. It
//! knows no groups, so each group stands as a sentinel text that is replaced by its tag afterwards.

use super::drawing::{Anchor, Drawing, Group, Mark, Point, TextStyle};
use super::font;
use super::palette::Ink;
use plotters::prelude::SVGBackend;
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{FontDesc, FontFamily, FontStyle};
use plotters_backend::{BackendColor, BackendStyle, DrawingBackend};
use std::fmt::Write as _;

/// Canvas units to the CSS pixel.
pub const UNITS: f64 = 8.0;

const SENTINEL: char = '\u{E000}';

impl Drawing {
    /// A file that stands alone, with font and paper inside, `scale` times 720 px wide.
    pub fn to_svg(&self, scale: f64) -> String {
        let style = format!("<style>\n{}</style>\n", font::css());
        let paper =
            format!("<rect width=\"100%\" height=\"100%\" fill=\"{}\"/>\n", Ink::Paper.hex());
        self.write(&self.id, scale, &format!("{style}{paper}"))
    }

    /// The same for a page that brings the font and the paper; all ids begin with `prefix`.
    pub fn to_inline_svg(&self, prefix: &str) -> String {
        self.write(prefix, 1.0, "")
    }

    fn write(&self, prefix: &str, scale: f64, head: &str) -> String {
        let size = (units(self.width) as u32, units(self.height) as u32);
        let mut canvas = String::new();
        let mut tags = Vec::new();
        {
            let mut backend = SVGBackend::with_string(&mut canvas, size);
            for mark in &self.marks {
                put(&mut backend, &mut tags, mark, prefix);
            }
            let _ = backend.present();
        }
        let scale = if scale.is_finite() && scale > 0.0 { scale } else { 1.0 };
        let mut svg = format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{}\" height=\"{}\" viewBox=\"0 0 {} {}\" \
             role=\"img\" aria-labelledby=\"{prefix}-title\" font-family=\"{}, Arial, sans-serif\" \
             stroke-linejoin=\"round\" style=\"font-kerning:none\">\n<title id=\"{prefix}-title\">{}</title>\n{head}",
            plain(self.width * scale),
            plain(self.height * scale),
            size.0,
            size.1,
            font::FAMILY,
            escape(&self.title)
        );
        tidy(&canvas, &tags, &mut svg);
        svg
    }
}

struct Stroke(BackendColor, u32);

impl BackendStyle for Stroke {
    fn color(&self) -> BackendColor {
        self.0
    }

    fn stroke_width(&self) -> u32 {
        self.1
    }
}

fn put(backend: &mut SVGBackend<'_>, tags: &mut Vec<String>, mark: &Mark, prefix: &str) {
    // Writing to a string cannot fail, so there is no error to hand on.
    let _ = match mark {
        Mark::Open(group) => sentinel(backend, tags, open_tag(group, prefix)),
        Mark::Close => sentinel(backend, tags, "</g>".to_owned()),
        Mark::Line { points, ink, width, dash } => {
            let pattern = dash.pattern();
            if let Some([on, off]) = pattern {
                let tag = format!("<g stroke-dasharray=\"{} {}\">", units(on), units(off));
                let _ = sentinel(backend, tags, tag);
            }
            let stroke = Stroke(colour(*ink, 1.0), units(*width).max(1) as u32);
            let drawn = backend.draw_path(points.iter().map(|point| place(*point)), &stroke);
            if pattern.is_some() {
                let _ = sentinel(backend, tags, "</g>".to_owned());
            }
            drawn
        }
        Mark::Fill { points, ink, alpha } => {
            backend.fill_polygon(points.iter().map(|point| place(*point)), &colour(*ink, *alpha))
        }
        Mark::Rectangle { corner, size, ink, alpha } => {
            let far = [corner[0] + size[0], corner[1] + size[1]];
            backend.draw_rect(place(*corner), place(far), &colour(*ink, *alpha), true)
        }
        Mark::Disc { centre, radius, ink } => backend.draw_circle(
            place(*centre),
            units(*radius).max(1) as u32,
            &colour(*ink, 1.0),
            true,
        ),
        Mark::Text { at, text, style } => draw_text(backend, *at, text, *style),
        Mark::Runs { at, gap, runs } => {
            let tag = runs_of_text(*at, *gap, runs);
            sentinel(backend, tags, tag)
        }
    };
}

type Drawn = Result<(), plotters_backend::DrawingErrorKind<std::io::Error>>;

fn draw_text(backend: &mut SVGBackend<'_>, at: Point, text: &str, style: TextStyle) -> Drawn {
    let side = match style.anchor {
        Anchor::Start => HPos::Left,
        Anchor::Middle => HPos::Center,
        Anchor::End => HPos::Right,
    };
    let weight = if style.bold { FontStyle::Bold } else { FontStyle::Normal };
    let face = plotters::style::TextStyle {
        font: FontDesc::new(
            FontFamily::Name(font::FAMILY),
            style.size * UNITS * font::LINE,
            weight,
        ),
        color: colour(style.ink, 1.0),
        pos: Pos::new(side, VPos::Top),
    };
    backend.draw_text(text, &face, place(at))
}

/// One element for all runs: the canvas would set each at a fixed place, and they would collide
/// in a wider font.
fn runs_of_text(at: Point, gap: f64, runs: &[(String, TextStyle)]) -> String {
    let (x, y) = place(at);
    let mut tag = format!("<text x=\"{x}\" y=\"{y}\">");
    for (number, (text, style)) in runs.iter().enumerate() {
        let shift = if number > 0 { format!(" dx=\"{}\"", units(gap)) } else { String::new() };
        let weight = if style.bold { " font-weight=\"bold\"" } else { "" };
        let _ = write!(
            tag,
            "<tspan{shift} font-size=\"{}\" fill=\"{}\"{weight}>{}</tspan>",
            plain(style.size * UNITS),
            style.ink.hex(),
            escape(text)
        );
    }
    tag.push_str("</text>");
    tag
}

fn sentinel(backend: &mut SVGBackend<'_>, tags: &mut Vec<String>, tag: String) -> Drawn {
    let text = format!("{SENTINEL}{}", tags.len());
    tags.push(tag);
    let style = TextStyle { size: 1.0, bold: false, ink: Ink::Ink, anchor: Anchor::Start };
    draw_text(backend, [0.0, 0.0], &text, style)
}

fn open_tag(group: &Group, prefix: &str) -> String {
    let mut tag = "<g".to_owned();
    if !group.id.is_empty() {
        let _ = write!(tag, " id=\"{}-{}\"", escape(prefix), escape(&group.id));
    }
    if !group.class.is_empty() {
        let _ = write!(tag, " class=\"{}\"", group.class);
    }
    for (name, value) in &group.data {
        let _ = write!(tag, " data-{name}=\"{}\"", escape(value));
    }
    tag.push('>');
    tag
}

/// Drops what the canvas writes needlessly and puts the groups where their sentinels stand.
fn tidy(canvas: &str, tags: &[String], svg: &mut String) {
    let mut lines = canvas.lines();
    // The head of the canvas is replaced by ours.
    lines.next();
    while let Some(line) = lines.next() {
        let line = line.replace(" opacity=\"1\"", "").replace(" stroke=\"none\"", "");
        if !line.starts_with("<text") {
            svg.push_str(&line.replace(" \"/>", "\"/>"));
            svg.push('\n');
            continue;
        }
        let words = lines.next().unwrap_or("");
        lines.next();
        if let Some(number) = words.strip_prefix(SENTINEL) {
            let tag = number.parse::<usize>().ok().and_then(|place| tags.get(place));
            svg.push_str(tag.map_or("", String::as_str));
        } else {
            let head = line
                .replace(" dy=\"0.76em\"", "")
                .replace(" text-anchor=\"start\"", "")
                .replace(&format!(" font-family=\"{}\"", font::FAMILY), "");
            svg.push_str(&round_size(&head));
            svg.push_str(words);
            svg.push_str("</text>");
        }
        svg.push('\n');
    }
}

/// The canvas divides the size by 1.24 and shows the rounding of it.
fn round_size(head: &str) -> String {
    const KEY: &str = "font-size=\"";
    let Some((before, rest)) = head.split_once(KEY) else { return head.to_owned() };
    let Some((size, after)) = rest.split_once('"') else { return head.to_owned() };
    let size = size.parse::<f64>().unwrap_or(88.0);
    format!("{before}{KEY}{}\"{after}", plain(size))
}

fn plain(value: f64) -> String {
    let text = format!("{value:.2}");
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

fn colour(ink: Ink, alpha: f64) -> BackendColor {
    BackendColor { alpha, rgb: ink.rgb(super::palette::Theme::Light) }
}

fn units(length: f64) -> i32 {
    (length * UNITS).round() as i32
}

fn place(point: Point) -> (i32, i32) {
    (units(point[0]), units(point[1]))
}

/// Text made safe for XML.
pub fn escape(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;").replace('"', "&quot;")
}
