//! The strip of events below the panels, on the same time axis.

use super::axes::{self, Axes};
use super::clip::Frame;
use super::drawing::{Anchor, Group, TextStyle};
use super::font;
use super::marks;
use super::palette::Ink;
use super::pen::{self, Pen};
use super::run_input::{BarKind, Row};
use super::train::SignalBar;

/// Height of a row, px.
pub const PITCH: f64 = 19.0;
/// Least height of the strip, px.
const LEAST: f64 = 62.0;

/// Height the rows need, px.
pub fn height(rows: &[Row]) -> f64 {
    (PITCH * rows.len() as f64 + 5.0).max(LEAST.min(PITCH * 2.0 + 5.0))
}

/// Left margin that the names of the rows need, up to a fifth of the usual sheet.
pub fn margin(rows: &[Row]) -> f64 {
    rows.iter()
        .map(|row| match row {
            Row::Slips { label, .. } | Row::Bars { label, .. } | Row::Flags { label, .. } => label,
        })
        .map(|label| 9.0 + 1.03 * font::width(label, pen::SMALL, false))
        .fold(axes::LEFT, f64::max)
        .min(144.0)
}

/// Draws heading and rows; the frame is that of the strip.
pub fn draw(pen: &mut Pen, axes: &Axes, rows: &[Row]) {
    let frame = axes.frame;
    axes::heading(pen, [frame.left, frame.top - 8.5], "Events", "");
    pen.open(axes.group("strip"));
    if rows.is_empty() {
        let place = [frame.left + 8.0, frame.top + frame.height / 2.0 + 3.5];
        pen.text_on_plate(place, "no events", pen::label(Ink::Sub, Anchor::Start));
    }
    for (place, row) in rows.iter().enumerate() {
        let middle = frame.top + 2.0 + PITCH * (place as f64 + 0.5);
        match row {
            Row::Slips { label, slips, in_step, notes } => {
                name(pen, &frame, middle, label);
                draw_slips(pen, axes, middle, slips, *in_step, notes);
            }
            Row::Bars { label, kind, bars } => {
                name(pen, &frame, middle, label);
                for bar in bars {
                    draw_bar(pen, axes, middle, *kind, bar);
                }
            }
            Row::Flags { label, flags } => {
                name(pen, &frame, middle, label);
                draw_flags(pen, axes, middle, flags);
            }
        }
    }
    pen.close();
}

fn name(pen: &mut Pen, frame: &Frame, middle: f64, label: &str) {
    let style = TextStyle { size: pen::SMALL, ..pen::label(Ink::Sub, Anchor::End) };
    let text = font::fit(label, pen::SMALL, false, frame.left - 9.0);
    pen.text([frame.left - 7.0, middle + 3.5], &text, style);
}

fn seen(axes: &Axes, time: f64) -> bool {
    let [start, end] = axes.across;
    let spare = 1e-9 * (end - start);
    time >= start - spare && time <= end + spare
}

/// Triangles at a place; those that would cover one another within a pixel are one.
pub fn slip_marks(pen: &mut Pen, axes: &Axes, slips: &[(f64, i32)], y: impl Fn(bool) -> f64) {
    let mut last: [Option<f64>; 2] = [None, None];
    for (time, direction) in slips.iter().filter(|slip| seen(axes, slip.0)) {
        let (x, forward) = (axes.x(*time), *direction > 0);
        let before = &mut last[usize::from(forward)];
        if before.is_some_and(|before| x - before < 1.0) {
            continue;
        }
        *before = Some(x);
        let mark = Group::class("m").number("t", *time).with("kind", "slip");
        pen.open(mark.number("direction", f64::from(*direction)));
        marks::slip(pen, [x, y(forward)], forward, 8.0);
        pen.close();
    }
}

fn draw_slips(
    pen: &mut Pen,
    axes: &Axes,
    middle: f64,
    slips: &[(f64, i32)],
    in_step: Option<f64>,
    notes: &[String],
) {
    slip_marks(pen, axes, slips, |_| middle);
    let last =
        slips.iter().map(|slip| slip.0).filter(|time| seen(axes, *time)).fold(f64::NAN, f64::max);
    let mut end = if last.is_finite() { axes.x(last) + 4.0 } else { axes.frame.left };
    let ring = in_step.filter(|time| seen(axes, *time));
    if let Some(time) = ring {
        // Beside the last triangle, where the ring would hide under it.
        let x = axes.x(time).max(end + 5.0);
        pen.open(Group::class("m").number("t", time).with("kind", "resynchronised"));
        marks::ring(pen, [x, middle]);
        pen.close();
        end = x + 4.0;
    }
    let time = in_step.unwrap_or(last);
    pen.open(Group::class("m").number("t", time).with("kind", "note"));
    let first = slips.iter().map(|slip| slip.0).find(|time| seen(axes, *time));
    let start = first.map_or(axes.frame.left, |time| axes.x(time) - 7.0);
    for note in notes {
        let wide = font::width(note, pen::LABEL, false);
        let (x, anchor) = if end + 5.0 + wide <= axes.frame.right() {
            (end + 5.0, Anchor::Start)
        } else if start - wide >= axes.frame.left {
            (start, Anchor::End)
        } else if Some(note) == notes.last() {
            // No room beside the marks: in the margin.
            (axes.frame.right() + 9.0, Anchor::Start)
        } else {
            continue;
        };
        pen.text_on_plate([x, middle + 3.9], note, pen::label(Ink::Ink, anchor));
        break;
    }
    pen.close();
}

fn draw_bar(pen: &mut Pen, axes: &Axes, middle: f64, kind: BarKind, bar: &SignalBar) {
    let [start, end] = axes.across;
    if bar.end < start || bar.start > end {
        return;
    }
    let left = axes.x(bar.start.max(start));
    // At least a pixel: a short event is seen too.
    let wide = (axes.x(bar.end.min(end)) - left).max(1.0);
    let (ink, tall) = match kind {
        BarKind::PastPeak => (Ink::Slip, 9.0),
        BarKind::State => (Ink::Axis, 9.0),
        BarKind::Signal => (Ink::Signal, 11.0),
    };
    pen.open(Group::class("b").number("t", bar.start).number("u", bar.end));
    pen.rectangle([left, middle - tall / 2.0], [wide, tall], ink, 1.0);
    pen.close();
    if bar.text.is_empty() {
        return;
    }
    let text_wide = font::width(&bar.text, pen::LABEL, false);
    let (from, to) = (bar.start.max(start), bar.end.min(end));
    let y = middle + 3.9;
    // The words hang on the time beside which they stand, so that a script can move them with it.
    let mut words = |time: f64, x: f64, anchor: Anchor, plate: bool| {
        pen.open(Group::class("m").number("t", time).with("kind", "words"));
        if plate {
            pen.text_on_plate([x, y], &bar.text, pen::label(Ink::Ink, anchor));
        } else {
            pen.text([x, y], &bar.text, pen::label(Ink::Ink, anchor));
        }
        pen.close();
    };
    if text_wide + 4.0 <= wide && kind == BarKind::Signal {
        words((from + to) / 2.0, left + wide / 2.0, Anchor::Middle, false);
    } else if left + wide + 4.0 + text_wide <= axes.frame.right() {
        words(to, left + wide + 4.0, Anchor::Start, true);
    } else if left - 4.0 - text_wide >= axes.frame.left {
        words(from, left - 4.0, Anchor::End, true);
    }
}

fn draw_flags(pen: &mut Pen, axes: &Axes, middle: f64, flags: &[(f64, String)]) {
    let visible: Vec<&(f64, String)> = flags.iter().filter(|flag| seen(axes, flag.0)).collect();
    for (place, (time, words)) in visible.iter().enumerate() {
        let x = axes.x(*time);
        let next = visible
            .get(place + 1)
            .map_or(axes.frame.right() + axes::RIGHT - 8.0, |flag| axes.x(flag.0));
        pen.open(Group::class("m").number("t", *time).with("kind", "flag"));
        marks::flag(pen, [x, middle]);
        let wide = font::width(words, pen::LABEL, false);
        if x + 11.0 + wide <= next - 3.0 {
            pen.text_on_plate([x + 11.0, middle + 3.9], words, pen::label(Ink::Ink, Anchor::Start));
        } else if place == 0 && x - 5.0 - wide >= axes.frame.left {
            pen.text_on_plate([x - 5.0, middle + 3.9], words, pen::label(Ink::Ink, Anchor::End));
        }
        pen.close();
    }
}
