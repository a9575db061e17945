//! Margin: a measure over the varied parameter, with the last good value and the design.

use super::axes::{self, Axes, Sheet};
use super::clip::Frame;
use super::drawing::{Anchor, Dash, Drawing, Group};
use super::free::Room;
use super::marks::{self, Forbidden};
use super::number::{NBSP, fixed, with_unit};
use super::palette::Ink;
use super::pen::{self, Pen};
use super::ticks;

/// What the chart shows, in display units.
#[derive(Clone, Debug, PartialEq)]
pub struct MarginChart {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// Parameter varied, in words.
    pub parameter: String,
    /// Its unit as printed.
    pub parameter_unit: String,
    /// What stands upwards, in words; empty where only the verdicts are shown.
    pub measure: String,
    /// Its unit as printed.
    pub measure_unit: String,
    /// Limit of the measure and the forbidden side.
    pub limit: Option<(f64, Forbidden)>,
    /// Every run of the search.
    pub points: Vec<MarginPoint>,
    /// Design value of the parameter.
    pub design: f64,
    /// Last value that meets all; `None` when the first one fails.
    pub found: Option<f64>,
    /// Whether a failure was found behind it.
    pub reached: bool,
    /// Distance from design to `found` over the design.
    pub margin_share: Option<f64>,
    /// Size.
    pub sheet: Sheet,
}

/// One run of the search.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MarginPoint {
    /// Value of the parameter.
    pub parameter: f64,
    /// Value of the measure.
    pub value: Option<f64>,
    /// Whether all requirements are met.
    pub met: bool,
}

const TOP: f64 = 24.0;
const FOOT: f64 = 40.0;

/// Draws the chart.
pub fn margin_chart(input: &MarginChart) -> Drawing {
    let measured = input.points.iter().any(|point| point.value.is_some());
    let sheet = input.sheet.sound();
    let height = sheet.height.unwrap_or(if measured { 280.0 } else { 150.0 });
    let parameters = input.points.iter().map(|point| point.parameter).chain([input.design]);
    let (low, high) = bounds(parameters);
    let limit = input.limit.map(|limit| limit.0);
    let values = input.points.iter().filter_map(|point| point.value).chain(limit);
    let (bottom, top) = bounds(values);
    let (bottom, top) = if bottom > 0.0 && bottom < 0.6 * top { (0.0, top) } else { (bottom, top) };
    let (bottom, top, up_ticks) = ticks::outward(bottom, top, 5);
    let frame = Frame {
        left: axes::LEFT,
        top: TOP,
        width: sheet.width - axes::LEFT - axes::RIGHT,
        height: height - TOP - FOOT,
    };
    let spare = 0.02 * (high - low).max(1e-12);
    let axes = Axes { frame, across: [low - spare, high + spare], up: [bottom, top] };
    let across_ticks = ticks::within(axes.across[0], axes.across[1], 7);
    let mut pen = Pen::new();
    let name = if measured { input.measure.as_str() } else { "Verdicts" };
    let unit = if measured { input.measure_unit.as_str() } else { "" };
    axes.heading(&mut pen, name, unit);
    pen.open(axes.group("plane"));
    let found = input.found.map(|found| axes.x(found));
    if let Some(found) = found {
        let design = axes.x(input.design);
        let (left, right) = (design.min(found), design.max(found));
        pen.rectangle([left, frame.top], [right - left, frame.height], Ink::Allowed, 0.75);
    }
    if measured {
        axes.level_grid(&mut pen, &up_ticks);
    }
    axes.upright_grid(&mut pen, &across_ticks);
    axes.base_lines(&mut pen);
    if let Some((value, forbidden)) = input.limit.filter(|_| measured) {
        marks::level_limit(&mut pen, &frame, axes.y(value), forbidden);
    }
    let mut room = Room::new(frame);
    points(&mut pen, &mut room, input, &axes, measured);
    if let Some(found) = found.filter(|_| input.reached) {
        let side = if bad_side_is_right(input) { Forbidden::Above } else { Forbidden::Below };
        marks::upright_limit(&mut pen, found, [frame.top, frame.bottom()], side);
        room.avoid(&[vec![[found, frame.top], [found, frame.bottom()]]]);
    }
    words(&mut pen, &mut room, input, &axes);
    pen.close();
    if measured {
        axes.numbers_left(&mut pen, &up_ticks);
    }
    let name = if input.parameter_unit.is_empty() {
        input.parameter.clone()
    } else {
        format!("{}, {}", input.parameter, input.parameter_unit)
    };
    axes.numbers_below(&mut pen, &across_ticks, &name);
    key(&mut pen, frame.right() + 12.0, frame.top + 10.0);
    pen.finish(&input.id, &input.title, sheet.width, height)
}

fn bounds(values: impl Iterator<Item = f64>) -> (f64, f64) {
    let (low, high) = values
        .filter(|value| value.is_finite())
        .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), value| {
            (low.min(value), high.max(value))
        });
    if low <= high { (low, high) } else { (0.0, 1.0) }
}

/// The failure nearest to the last good value tells where the bad land lies.
fn bad_side_is_right(input: &MarginChart) -> bool {
    let found = input.found.unwrap_or(input.design);
    input
        .points
        .iter()
        .filter(|point| !point.met)
        .min_by(|one, two| (one.parameter - found).abs().total_cmp(&(two.parameter - found).abs()))
        .is_none_or(|point| point.parameter >= found)
}

fn points(pen: &mut Pen, room: &mut Room, input: &MarginChart, axes: &Axes, measured: bool) {
    let mut sorted = input.points.clone();
    sorted.sort_by(|one, two| one.parameter.total_cmp(&two.parameter));
    let middle = (axes.up[0] + axes.up[1]) / 2.0;
    let height = |point: &MarginPoint| if measured { point.value } else { Some(middle) };
    let line: Vec<[f64; 2]> =
        sorted.iter().filter_map(|point| Some([point.parameter, height(point)?])).collect();
    if measured {
        pen.open(Group::class("s").with("name", "measure"));
        let pieces = axes.curve(&line);
        for piece in &pieces {
            pen.path(piece, Ink::Axis, pen::SECOND, Dash::Solid);
        }
        pen.close();
        room.avoid(&pieces);
    }
    let mut last = f64::NEG_INFINITY;
    for point in &sorted {
        let Some(value) = height(point) else { continue };
        let at = axes.at([point.parameter, value]);
        // The bisection piles its runs up at the border: those within a pixel are one mark.
        if at[0] - last < 1.0 {
            continue;
        }
        last = at[0];
        pen.open(Group::class("m").with("kind", if point.met { "met" } else { "not-met" }));
        if point.met {
            pen.disc(at, 3.0, Ink::Ink);
        } else {
            marks::not_met(pen, at);
        }
        pen.close();
    }
}

fn words(pen: &mut Pen, room: &mut Room, input: &MarginChart, axes: &Axes) {
    let frame = axes.frame;
    let x = axes.x(input.design);
    pen.path(&[[x, frame.top], [x, frame.bottom()]], Ink::Ink, 1.0, Dash::Dots);
    room.avoid(&[vec![[x, frame.top], [x, frame.bottom()]]]);
    let beside = |x: f64, text: &str, bold: bool| {
        let wide = super::font::width(text, pen::LABEL, bold);
        let mut candidates = Vec::new();
        for down in [13.0, 27.0, 41.0, frame.height - 8.0, frame.height - 22.0] {
            candidates.push([x + 8.0, frame.top + down]);
            candidates.push([x - 8.0 - wide, frame.top + down]);
        }
        candidates
    };
    let design = format!("design {}", with_unit(input.design, 4, &input.parameter_unit));
    room.set(pen, &design, pen::label(Ink::Ink, Anchor::Start), &beside(x, &design, false));
    if let Some(found) = input.found {
        let holds = if input.reached { "holds up to" } else { "holds at least up to" };
        let holds =
            if bad_side_is_right(input) { holds.to_owned() } else { holds.replace("up", "down") };
        let text = format!("{holds} {}", with_unit(found, 4, &input.parameter_unit));
        room.set(
            pen,
            &text,
            pen::bold(Ink::Ink, Anchor::Start),
            &beside(axes.x(found), &text, true),
        );
        if let Some(share) = input.margin_share {
            bracket(pen, room, [x, axes.x(found)], &frame, share);
        }
    }
}

/// A double-ended line between design and last good value, with the margin in percent.
fn bracket(pen: &mut Pen, room: &mut Room, [design, found]: [f64; 2], frame: &Frame, share: f64) {
    let y = frame.bottom() - 14.0;
    let text = format!("margin {}{NBSP}%", fixed(100.0 * share, 0));
    let wide = super::font::width(&text, pen::LABEL, true);
    let apart = (found - design).abs();
    if apart > 22.0 {
        let middle = (design + found) / 2.0;
        marks::arrow(pen, [middle, y], [design, y], Ink::Ink, 1.2);
        marks::arrow(pen, [middle, y], [found, y], Ink::Ink, 1.2);
    }
    let middle = (design + found) / 2.0 - wide / 2.0;
    let right = design.max(found) + 8.0;
    let candidates = if apart > wide + 30.0 {
        vec![[middle, y - 6.0]]
    } else {
        vec![[middle, y - 8.0], [right, y + 4.0], [right, y - 10.0]]
    };
    room.set(pen, &text, pen::bold(Ink::Ink, Anchor::Start), &candidates);
}

fn key(pen: &mut Pen, left: f64, top: f64) {
    pen.disc([left + 5.0, top], 3.0, Ink::Ink);
    pen.text([left + 15.0, top + 3.9], "all met", pen::label(Ink::Ink, Anchor::Start));
    marks::not_met(pen, [left + 5.0, top + 18.0]);
    pen.text([left + 15.0, top + 21.9], "not met", pen::label(Ink::Slip, Anchor::Start));
}
