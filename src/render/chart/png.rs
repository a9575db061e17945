//! PNG: the drawing through the bitmap canvas of plotters, drawn finer and averaged down.

use super::drawing::{Anchor, Drawing, Mark, Point, TextStyle};
use super::font;
use super::palette::{Ink, Theme};
use super::raster::Filler;
use plotters::prelude::BitMapBackend;
use plotters_backend::{BackendColor, DrawingBackend};

/// Why no picture could be made.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct PictureFailed(pub String);

impl std::fmt::Display for PictureFailed {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "the picture could not be made: {}", self.0)
    }
}

impl std::error::Error for PictureFailed {}

impl Drawing {
    /// The drawing as PNG with `scale` pixels to the CSS pixel; it says its own size in print.
    pub fn to_png(&self, scale: f64) -> Result<Vec<u8>, PictureFailed> {
        self.to_png_in(scale, Theme::Light)
    }

    /// The same in a theme.
    pub fn to_png_in(&self, scale: f64, theme: Theme) -> Result<Vec<u8>, PictureFailed> {
        let scale = if scale.is_finite() { scale.clamp(0.25, 8.0) } else { 2.0 };
        // Four canvas units to the CSS pixel or more; then whole averages.
        let finer = (4.0 / scale).ceil().clamp(2.0, 8.0);
        let unit = scale * finer;
        let finer = finer as usize;
        let width = (self.width * scale).round().min(20_000.0) as usize;
        let height = (self.height * scale).round().min(20_000.0) as usize;
        let (width, height) = (width.max(1), height.max(1));
        let size = (width * finer, height * finer);
        let mut buffer = vec![0_u8; 3 * size.0 * size.1];
        {
            let backend =
                BitMapBackend::with_buffer_and_format(&mut buffer, (size.0 as u32, size.1 as u32))
                    .map_err(|error| PictureFailed(error.to_string()))?;
            let mut bitmap = Bitmap { backend, filler: Filler::default(), unit, theme };
            bitmap.paper(size);
            for mark in &self.marks {
                bitmap.put(mark);
            }
            let _ = bitmap.backend.present();
        }
        encode(&average(&buffer, size.0, finer), width, height, scale)
    }
}

struct Bitmap<'a> {
    backend: BitMapBackend<'a>,
    filler: Filler,
    unit: f64,
    theme: Theme,
}

impl Bitmap<'_> {
    fn paper(&mut self, size: (usize, usize)) {
        let rgb = Ink::Paper.rgb(self.theme);
        let far = (size.0 as i32, size.1 as i32);
        let _ = self.backend.draw_rect((0, 0), far, &BackendColor { alpha: 1.0, rgb }, true);
    }

    fn put(&mut self, mark: &Mark) {
        match mark {
            Mark::Open(_) | Mark::Close => {}
            Mark::Line { points, ink, width, dash } => match dash.pattern() {
                None => self.stroke(points, *ink, *width),
                Some(pattern) => {
                    for piece in dashes(points, pattern) {
                        self.stroke(&piece, *ink, *width);
                    }
                }
            },
            Mark::Fill { points, ink, alpha } => self.fill(points, *ink, *alpha),
            Mark::Rectangle { corner: [x, y], size: [w, h], ink, alpha } => {
                self.fill(&[[*x, *y], [x + w, *y], [x + w, y + h], [*x, y + h]], *ink, *alpha);
            }
            Mark::Disc { centre, radius, ink } => self.disc(*centre, *radius, *ink),
            Mark::Text { at, text, style } => self.text(*at, text, *style),
            Mark::Runs { at, gap, runs } => {
                let mut x = at[0];
                for (text, style) in runs {
                    self.text([x, at[1]], text, *style);
                    x += font::width(text, style.size, style.bold) + gap;
                }
            }
        }
    }

    fn fill(&mut self, points: &[Point], ink: Ink, alpha: f64) {
        let unit = self.unit;
        let scaled: Vec<Point> =
            points.iter().map(|point| [point[0] * unit, point[1] * unit]).collect();
        self.filler.fill(&mut self.backend, &scaled, ink.rgb(self.theme), alpha);
    }

    /// A quad to each segment and a disc to each corner.
    fn stroke(&mut self, points: &[Point], ink: Ink, width: f64) {
        let half = width / 2.0;
        for (place, pair) in points.windows(2).enumerate() {
            let [from, to] = [pair[0], pair[1]];
            let (dx, dy) = (to[0] - from[0], to[1] - from[1]);
            let length = dx.hypot(dy);
            if length > 0.0 {
                let (nx, ny) = (-dy / length * half, dx / length * half);
                let quad = [
                    [from[0] + nx, from[1] + ny],
                    [to[0] + nx, to[1] + ny],
                    [to[0] - nx, to[1] - ny],
                    [from[0] - nx, from[1] - ny],
                ];
                self.fill(&quad, ink, 1.0);
            }
            let corner = points.get(place + 2).is_some_and(|next| bends(from, to, *next));
            if corner && half * self.unit >= 1.0 {
                self.disc(to, half, ink);
            }
        }
    }

    fn disc(&mut self, centre: Point, radius: f64, ink: Ink) {
        let corners = ((radius * self.unit).sqrt() * 5.0).ceil().clamp(8.0, 64.0) as usize;
        let points: Vec<Point> = (0..corners)
            .map(|corner| {
                let (sine, cosine) =
                    (std::f64::consts::TAU * corner as f64 / corners as f64).sin_cos();
                [centre[0] + radius * cosine, centre[1] + radius * sine]
            })
            .collect();
        self.fill(&points, ink, 1.0);
    }

    fn text(&mut self, at: Point, text: &str, style: TextStyle) {
        let wide = font::width(text, style.size, style.bold);
        let left = match style.anchor {
            Anchor::Start => at[0],
            Anchor::Middle => at[0] - wide / 2.0,
            Anchor::End => at[0] - wide,
        };
        let size = style.size * self.unit;
        let start = [left * self.unit, at[1] * self.unit];
        let rgb = style.ink.rgb(self.theme);
        for glyph in font::outlines(text, size, style.bold, start) {
            let corner = glyph.px_bounds().min;
            glyph.draw(|x, y, cover| {
                let place = (corner.x as i32 + x as i32, corner.y as i32 + y as i32);
                let colour = BackendColor { alpha: f64::from(cover.clamp(0.0, 1.0)), rgb };
                let _ = self.backend.draw_pixel(place, colour);
            });
        }
    }
}

/// True where a line turns by more than about two degrees.
fn bends(from: Point, corner: Point, to: Point) -> bool {
    let (ax, ay) = (corner[0] - from[0], corner[1] - from[1]);
    let (bx, by) = (to[0] - corner[0], to[1] - corner[1]);
    let cross = (ax * by - ay * bx).abs();
    let along = ax * bx + ay * by;
    along <= 0.0 || cross > 0.035 * along
}

/// Cuts a line into its dashes.
fn dashes(points: &[Point], [on, off]: [f64; 2]) -> Vec<Vec<Point>> {
    let mut pieces = Vec::new();
    let mut piece: Vec<Point> = points.first().copied().into_iter().collect();
    let (mut drawn, mut left) = (true, on);
    for pair in points.windows(2) {
        let [mut from, to] = [pair[0], pair[1]];
        loop {
            let length = (to[0] - from[0]).hypot(to[1] - from[1]);
            if length <= left {
                left -= length;
                if drawn {
                    piece.push(to);
                }
                break;
            }
            let share = left / length;
            from = [from[0] + share * (to[0] - from[0]), from[1] + share * (to[1] - from[1])];
            if drawn {
                piece.push(from);
                pieces.push(std::mem::take(&mut piece));
            } else {
                piece = vec![from];
            }
            drawn = !drawn;
            left = if drawn { on } else { off };
        }
    }
    if drawn && piece.len() > 1 {
        pieces.push(piece);
    }
    pieces
}

/// The mean of each square of `finer` by `finer` pixels.
fn average(fine: &[u8], fine_width: usize, finer: usize) -> Vec<u8> {
    let row_bytes = 3 * fine_width;
    let width = fine_width / finer;
    let area = (finer * finer) as u32;
    let mut coarse = Vec::with_capacity(fine.len() / (finer * finer));
    let mut sums = vec![0_u32; 3 * width];
    for rows in fine.chunks_exact(row_bytes * finer) {
        sums.fill(0);
        for row in rows.chunks_exact(row_bytes) {
            for (sum, square) in sums.chunks_exact_mut(3).zip(row.chunks_exact(3 * finer)) {
                for pixel in square.chunks_exact(3) {
                    for (total, part) in sum.iter_mut().zip(pixel) {
                        *total += u32::from(*part);
                    }
                }
            }
        }
        coarse.extend(sums.iter().map(|sum| ((sum + area / 2) / area) as u8));
    }
    coarse
}

fn encode(
    pixels: &[u8],
    width: usize,
    height: usize,
    scale: f64,
) -> Result<Vec<u8>, PictureFailed> {
    let failed = |error: png::EncodingError| PictureFailed(error.to_string());
    let mut bytes = Vec::new();
    let mut encoder = png::Encoder::new(&mut bytes, width as u32, height as u32);
    encoder.set_color(png::ColorType::Rgb);
    encoder.set_depth(png::BitDepth::Eight);
    encoder.set_compression(png::Compression::Default);
    encoder.set_filter(png::FilterType::NoFilter);
    // 96 CSS pixels to the inch of 0.0254 m: text programs lay it out at its true size.
    let per_metre = (96.0 * scale / 0.0254).round() as u32;
    encoder.set_pixel_dims(Some(png::PixelDimensions {
        xppu: per_metre,
        yppu: per_metre,
        unit: png::Unit::Meter,
    }));
    let mut writer = encoder.write_header().map_err(failed)?;
    writer.write_image_data(pixels).map_err(failed)?;
    writer.finish().map_err(failed)?;
    Ok(bytes)
}
