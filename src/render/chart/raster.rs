//! Filling areas on the bitmap with true coverage at their edges.
//!
//! The canvas' own polygons are exact to a whole unit only, and its thick paths cross themselves;
//! this fills by sub-scanlines (nonzero winding) and blends what is partly covered.

use super::drawing::Point;
use super::palette::Rgb;
use plotters_backend::{BackendColor, DrawingBackend};

/// Sub-scanlines to the row.
const LINES: usize = 4;

/// Fills areas on a canvas; keeps its buffers between areas.
#[derive(Debug, Default)]
pub struct Filler {
    edges: Vec<Edge>,
    crossings: Vec<(f64, i32)>,
    cover: Vec<f32>,
}

#[derive(Clone, Copy, Debug)]
struct Edge {
    top: f64,
    bottom: f64,
    x_at_top: f64,
    slope: f64,
    winding: i32,
}

impl Filler {
    /// Fills a polygon given in canvas units.
    pub fn fill<B: DrawingBackend>(
        &mut self,
        backend: &mut B,
        points: &[Point],
        rgb: Rgb,
        alpha: f64,
    ) {
        let (width, height) = backend.get_size();
        if !self.take_edges(points) {
            return;
        }
        let bound = |select: fn(f64, f64) -> f64, axis: usize, start: f64| {
            points.iter().filter_map(|point| point.get(axis)).copied().fold(start, select)
        };
        let left = bound(f64::min, 0, f64::INFINITY).floor().clamp(0.0, f64::from(width)) as usize;
        let right =
            bound(f64::max, 0, f64::NEG_INFINITY).ceil().clamp(0.0, f64::from(width)) as usize;
        let top = bound(f64::min, 1, f64::INFINITY).floor().clamp(0.0, f64::from(height)) as usize;
        let bottom =
            bound(f64::max, 1, f64::NEG_INFINITY).ceil().clamp(0.0, f64::from(height)) as usize;
        if left >= right {
            return;
        }
        for row in top..bottom {
            self.cover.clear();
            self.cover.resize(right - left + 1, 0.0);
            for line in 0..LINES {
                let y = row as f64 + (line as f64 + 0.5) / LINES as f64;
                self.cut(y);
                self.add_spans(left as f64, (right - left) as f64);
            }
            self.blend(backend, left as i32, row as i32, rgb, alpha);
        }
    }

    fn take_edges(&mut self, points: &[Point]) -> bool {
        self.edges.clear();
        let followers = points.iter().cycle().skip(1);
        for (from, to) in points.iter().zip(followers) {
            let ([x0, y0], [x1, y1], winding) =
                if from[1] <= to[1] { (*from, *to, 1) } else { (*to, *from, -1) };
            if y1 > y0 {
                let slope = (x1 - x0) / (y1 - y0);
                self.edges.push(Edge { top: y0, bottom: y1, x_at_top: x0, slope, winding });
            }
        }
        !self.edges.is_empty()
    }

    fn cut(&mut self, y: f64) {
        self.crossings.clear();
        for edge in &self.edges {
            if edge.top <= y && y < edge.bottom {
                self.crossings.push((edge.x_at_top + (y - edge.top) * edge.slope, edge.winding));
            }
        }
        self.crossings.sort_by(|one, two| one.0.total_cmp(&two.0));
    }

    fn add_spans(&mut self, left: f64, width: f64) {
        let mut winding = 0;
        let mut start = 0.0;
        for (x, turn) in &self.crossings {
            let before = winding;
            winding += turn;
            if before == 0 {
                start = *x;
            } else if winding == 0 {
                let from = (start - left).clamp(0.0, width);
                let to = (x - left).clamp(0.0, width);
                add_span(&mut self.cover, from, to);
            }
        }
    }

    fn blend<B: DrawingBackend>(&self, backend: &mut B, left: i32, row: i32, rgb: Rgb, alpha: f64) {
        let mut column = 0;
        while let Some(cover) = self.cover.get(column) {
            let share = f64::from(*cover) / LINES as f64;
            let x = left + column as i32;
            if share >= 0.999 {
                let run = self
                    .cover
                    .iter()
                    .skip(column)
                    .take_while(|next| **next >= 0.999 * LINES as f32)
                    .count();
                // Opaque runs are a fast fill; translucent ones are blended pixel by pixel, for
                // the canvas' fast blend rounds differently from its pixels and would show seams.
                if alpha >= 1.0 {
                    let _ = backend.draw_rect(
                        (x, row),
                        (x + run as i32, row + 1),
                        &BackendColor { alpha: 1.0, rgb },
                        true,
                    );
                } else {
                    for place in 0..run as i32 {
                        let _ = backend.draw_pixel((x + place, row), BackendColor { alpha, rgb });
                    }
                }
                column += run;
                continue;
            }
            if share > 0.0 {
                let _ = backend.draw_pixel((x, row), BackendColor { alpha: alpha * share, rgb });
            }
            column += 1;
        }
    }
}

fn add_span(cover: &mut [f32], from: f64, to: f64) {
    if to <= from {
        return;
    }
    let (first, last) = (from.floor() as usize, to.floor() as usize);
    let mut add = |place: usize, share: f64| {
        if let Some(cell) = cover.get_mut(place) {
            *cell += share as f32;
        }
    };
    if first == last {
        add(first, to - from);
        return;
    }
    add(first, first as f64 + 1.0 - from);
    for place in first + 1..last {
        add(place, 1.0);
    }
    add(last, to - last as f64);
}
