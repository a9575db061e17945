//! Marks: one shape for one meaning, in all charts.

use super::clip::{self, Frame};
use super::drawing::{Dash, Point};
use super::palette::Ink;
use super::pen::Pen;

/// A slip: a filled triangle, up for forward, down for backward, its base or tip at the place.
pub fn slip(pen: &mut Pen, at: Point, forward: bool, size: f64) {
    let [x, y] = at;
    let half = size / 2.0;
    let rise = if forward { -0.9 * size } else { 0.9 * size };
    let base = y - rise / 2.0;
    pen.fill(&[[x - half, base], [x + half, base], [x, base + rise]], Ink::Slip, 1.0);
}

/// In step again, or a point of operation or rest.
pub fn ring(pen: &mut Pen, at: Point) {
    pen.ring(at, 4.0, 1.7, Ink::Ink);
}

/// An unstable point.
pub fn cross(pen: &mut Pen, at: Point) {
    let [x, y] = at;
    let arm = 4.0;
    pen.line([x - arm, y - arm], [x + arm, y + arm], Ink::Ink, 1.8);
    pen.line([x - arm, y + arm], [x + arm, y - arm], Ink::Ink, 1.8);
}

/// A crossing inside the operating range.
pub fn diamond(pen: &mut Pen, at: Point) {
    let [x, y] = at;
    let reach = 6.2;
    // A paper rim keeps it apart from the lines that meet there.
    let shape = |reach: f64| [[x - reach, y], [x, y - reach], [x + reach, y], [x, y + reach]];
    pen.fill(&shape(reach + 1.2), Ink::Paper, 1.0);
    pen.fill(&shape(reach), Ink::Slip, 1.0);
}

/// A crossing outside the operating range.
pub fn open_dot(pen: &mut Pen, at: Point) {
    pen.ring(at, 3.4, 1.3, Ink::Ink);
}

/// A small filled flag on its pole's foot.
pub fn flag(pen: &mut Pen, at: Point) {
    let [x, y] = at;
    pen.line([x, y - 5.0], [x, y + 5.0], Ink::Ink, 1.2);
    pen.fill(&[[x, y - 5.0], [x + 7.0, y - 2.4], [x, y + 0.2]], Ink::Ink, 1.0);
}

/// A tick: met.
pub fn tick(pen: &mut Pen, at: Point, ink: Ink) {
    let [x, y] = at;
    pen.path(&[[x - 4.0, y], [x - 1.3, y + 3.0], [x + 4.2, y - 3.6]], ink, 1.9, Dash::Solid);
}

/// A cross: not met.
pub fn not_met(pen: &mut Pen, at: Point) {
    let [x, y] = at;
    let arm = 3.3;
    pen.line([x - arm, y - arm], [x + arm, y + arm], Ink::Slip, 1.9);
    pen.line([x - arm, y + arm], [x + arm, y - arm], Ink::Slip, 1.9);
}

/// A dash: not judged.
pub fn not_judged(pen: &mut Pen, at: Point) {
    pen.line([at[0] - 4.0, at[1]], [at[0] + 4.0, at[1]], Ink::Axis, 1.9);
}

/// On which side of a line is the forbidden land, seen along the line.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Forbidden {
    /// Above a level line; right of an upright one.
    Above,
    /// Below a level line; left of an upright one.
    Below,
}

/// A limit: a level ink line with slanted ticks on the forbidden side, cut at the frame.
pub fn level_limit(pen: &mut Pen, frame: &Frame, y: f64, forbidden: Forbidden) {
    if !(frame.top - 0.01..=frame.bottom() + 0.01).contains(&y) {
        return;
    }
    pen.line([frame.left, y], [frame.right(), y], Ink::Ink, 1.2);
    let rise = if forbidden == Forbidden::Above { -5.0 } else { 5.0 };
    let mut x = frame.left + 3.0;
    while x < frame.right() - 5.0 {
        let tick = [[x, y], [x + 4.2, y + rise]];
        for piece in clip::line(
            &tick,
            &Frame { top: frame.top - 6.0, height: frame.height + 12.0, ..*frame },
        ) {
            pen.path(&piece, Ink::Ink, 0.9, Dash::Solid);
        }
        x += 10.0;
    }
}

/// A wall: an upright ink line with slanted ticks on the forbidden side.
pub fn upright_limit(pen: &mut Pen, x: f64, [top, bottom]: [f64; 2], forbidden: Forbidden) {
    pen.line([x, top], [x, bottom], Ink::Ink, 1.4);
    let reach = if forbidden == Forbidden::Above { 5.0 } else { -5.0 };
    let mut y = top + 4.0;
    while y < bottom - 4.0 {
        pen.line([x, y], [x + reach, y + 4.2], Ink::Ink, 0.9);
        y += 8.0;
    }
}

/// Ground: a line with slanted ticks on the side the normal points to.
pub fn ground(pen: &mut Pen, from: Point, to: Point, normal: Point) {
    pen.line(from, to, Ink::Ink, 1.3);
    let (dx, dy) = (to[0] - from[0], to[1] - from[1]);
    let length = dx.hypot(dy);
    if length <= 0.0 {
        return;
    }
    let (ux, uy) = (dx / length, dy / length);
    let count = (length / 4.5).ceil().max(2.0) as usize;
    for place in 0..=count {
        let along = length * place as f64 / count as f64;
        let foot = [from[0] + along * ux, from[1] + along * uy];
        let head = [foot[0] + 5.0 * normal[0] - 4.0 * ux, foot[1] + 5.0 * normal[1] - 4.0 * uy];
        pen.line(foot, head, Ink::Ink, 0.9);
    }
}

/// White hatching over a coloured rectangle: not finished.
pub fn hatch(pen: &mut Pen, frame: &Frame, ink: Ink) {
    let mut start = frame.left - frame.height;
    while start < frame.right() {
        let stroke = [[start, frame.bottom()], [start + frame.height, frame.top]];
        for piece in clip::line(&stroke, frame) {
            pen.path(&piece, ink, 1.3, Dash::Solid);
        }
        start += 5.0;
    }
}

/// An arrow: a shaft with a filled head at its end.
pub fn arrow(pen: &mut Pen, from: Point, to: Point, ink: Ink, width: f64) {
    let (dx, dy) = (to[0] - from[0], to[1] - from[1]);
    let length = dx.hypot(dy);
    if length <= 0.0 {
        return;
    }
    let (ux, uy) = (dx / length, dy / length);
    let (long, half) = (6.5, 3.0);
    let neck = [to[0] - long * ux, to[1] - long * uy];
    pen.line(from, [neck[0] + ux, neck[1] + uy], ink, width);
    let wing = |side: f64| [neck[0] - side * half * uy, neck[1] + side * half * ux];
    pen.fill(&[to, wing(1.0), wing(-1.0)], ink, 1.0);
}
