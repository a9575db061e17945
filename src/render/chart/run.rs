//! The run chart: panels over one time axis, and the strip of events.

use super::axes::{self, Axes};
use super::clip::{self, Frame};
use super::drawing::{Dash, Drawing, Group};
use super::labels::{self, EndLabel};
use super::marks;
use super::number;
use super::palette::{Ink, Side};
use super::pen::{self, Pen};
use super::run_input::{Curve, Hue, Panel, PanelKind, RunChart, Weight};
use super::strip;
use super::ticks::{self, Ticks};

const TOP: f64 = 24.0;
const GAP: f64 = 34.0;
const FOOT: f64 = 38.0;
/// Radius of a measured point, px.
const DOT: f64 = 1.2;

/// Draws a chart over time.
pub fn run_chart(input: &RunChart) -> Drawing {
    let layout = Layout::of(input);
    let clock = Clock::of(input.window, layout.width);
    let mut pen = Pen::new();
    for (panel, axes) in input.panels.iter().zip(&layout.axes) {
        draw_panel(&mut pen, input, panel, axes, &clock, layout.margin);
    }
    let top = layout.top(input.panels.len());
    let frame = Frame { left: layout.left, top, width: layout.width, height: layout.strip };
    let axes = Axes { frame, across: clock.window, up: [0.0, 1.0] };
    pen.open(Group::class("x"));
    axes.upright_grid(&mut pen, &clock.ticks);
    pen.close();
    steps_and_acts(&mut pen, input, &axes);
    strip::draw(&mut pen, &axes, &input.rows);
    axes.floor(&mut pen);
    pen.open(Group::class("x").id("time"));
    clock.numbers(&mut pen, &axes);
    pen.close();
    let height = (top + layout.strip + FOOT).ceil();
    pen.finish(&input.id, &input.title, input.sheet.sound().width, height)
}

/// The axes of each panel, as drawn.
pub fn panel_axes(input: &RunChart) -> Vec<Axes> {
    Layout::of(input).axes
}

/// Width of a curve's stroke, px.
pub fn stroke(curve: &Curve) -> f64 {
    match curve.weight {
        Weight::Main if curve.hue == Hue::Side(Side::Modulator) => pen::MAIN - 0.4,
        Weight::Main => pen::MAIN,
        Weight::Second => pen::SECOND,
    }
}

/// The time axis: seconds, or milliseconds where the window is short.
struct Clock {
    window: [f64; 2],
    ticks: Ticks,
    per_second: f64,
    name: &'static str,
}

impl Clock {
    fn of([start, end]: [f64; 2], width: f64) -> Self {
        let (per_second, name) =
            if end - start < 0.1 { (1000.0, "Time, ms") } else { (1.0, "Time, s") };
        let most = ((width / 80.0) as usize).clamp(3, 8);
        let shown = ticks::within(start * per_second, end * per_second, most);
        let values = shown.values.iter().map(|value| value / per_second).collect();
        let ticks = Ticks { step: shown.step / per_second, values };
        Self { window: [start, end], ticks, per_second, name }
    }

    fn numbers(&self, pen: &mut Pen, axes: &Axes) {
        let scale = |value: &f64| value * self.per_second;
        let [start, end] = self.window;
        let axes = Axes { across: [scale(&start), scale(&end)], ..*axes };
        let values = self.ticks.values.iter().map(scale).collect();
        let ticks = Ticks { step: self.ticks.step * self.per_second, values };
        axes.numbers_below(pen, &ticks, self.name);
    }
}

struct Layout {
    left: f64,
    width: f64,
    margin: f64,
    panel: f64,
    strip: f64,
    axes: Vec<Axes>,
}

impl Layout {
    fn of(input: &RunChart) -> Self {
        let sheet = input.sheet.sound();
        let strip = strip::height(&input.rows);
        let count = input.panels.len().max(1) as f64;
        let panel = match sheet.height {
            Some(height) => ((height - TOP - FOOT - strip) / count - GAP).max(36.0),
            None if input.panels.len() > 3 => 88.0,
            None => 111.5,
        };
        let labels: Vec<EndLabel> = input.panels.iter().flat_map(all_labels).collect();
        let margin = labels::margin(labels.iter(), axes::RIGHT, sheet.width);
        let left = strip::margin(&input.rows);
        let width = sheet.width - left - margin;
        let axes = input
            .panels
            .iter()
            .enumerate()
            .map(|(place, each)| {
                let top = TOP + (panel + GAP) * place as f64;
                let frame = Frame { left, top, width, height: panel };
                Axes { frame, across: input.window, up: range(each, input.window, panel).0 }
            })
            .collect();
        Self { left, width, margin, panel, strip, axes }
    }
}

impl Layout {
    /// Upper edge of the panel in a place; the strip comes after the last one.
    fn top(&self, place: usize) -> f64 {
        TOP + (self.panel + GAP) * place as f64
    }
}

/// Range of a panel's axis and its ticks.
fn range(panel: &Panel, window: [f64; 2], height: f64) -> ([f64; 2], Ticks) {
    if let PanelKind::LoadAngle { .. } = panel.kind {
        let step = if height < 60.0 { 180.0 } else { 90.0 };
        return ([-180.0, 180.0], ticks::at_step(-180.0, 180.0, step));
    }
    let drawn = panel.curves.iter().flat_map(|curve| &curve.pieces).flatten().map(|pair| pair[1]);
    let limits = panel.limits.iter().filter(|limit| limit.always_seen).map(|limit| limit.value);
    let bands = panel.allowed.into_iter().flatten();
    let dots = panel.dots.iter().flat_map(|dots| &dots.points);
    let [start, end] = window;
    let seen = dots.filter(|point| (start..=end).contains(&point[0])).map(|point| point[1]);
    let (low, high) = drawn
        .chain(limits)
        .chain(bands)
        .chain(seen)
        .filter(|value| value.is_finite())
        .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), value| {
            (low.min(value), high.max(value))
        });
    let (low, high) = seen_in_proportion(low, high);
    let most = ((height / 21.0) as usize).clamp(2, 6);
    let (low, high, ticks) = ticks::outward(low, high, most);
    ([low, high], ticks)
}

/// Takes zero in where the data come near it, and keeps wiggles of a nearly constant value small:
/// less than a twentieth of the value never fills a panel.
fn seen_in_proportion(low: f64, high: f64) -> (f64, f64) {
    let least = 0.05 * low.abs().max(high.abs());
    if low > 0.0 && low < 0.6 * high {
        (0.0, high)
    } else if high < 0.0 && high > 0.6 * low {
        (low, 0.0)
    } else if high - low < least {
        let middle = (low + high) / 2.0;
        (middle - least / 2.0, middle + least / 2.0)
    } else {
        (low, high)
    }
}

fn draw_panel(
    pen: &mut Pen,
    input: &RunChart,
    panel: &Panel,
    axes: &Axes,
    clock: &Clock,
    margin: f64,
) {
    let (_, ticks) = range(panel, input.window, axes.frame.height);
    axes.heading(pen, &panel.name, &panel.unit);
    pen.open(axes.group(&panel.id));
    if let Some(allowed) = panel.allowed {
        axes.band(pen, allowed, Ink::Allowed, 0.55);
    }
    if let PanelKind::LoadAngle { peaks, .. } = panel.kind {
        axes.band(pen, [peaks[1], 180.0], Ink::PastPeak, 1.0);
        axes.band(pen, [-180.0, peaks[0]], Ink::PastPeak, 1.0);
    }
    axes.level_grid(pen, &ticks);
    pen.open(Group::class("x"));
    axes.upright_grid(pen, &clock.ticks);
    pen.close();
    axes.base_lines(pen);
    steps_and_acts(pen, input, axes);
    draw_dots(pen, axes, panel);
    for curve in panel.curves.iter().rev() {
        draw_curve(pen, axes, curve);
    }
    for limit in &panel.limits {
        marks::level_limit(pen, &axes.frame, axes.y(limit.value), limit.forbidden);
    }
    if let PanelKind::LoadAngle { slips, .. } = &panel.kind {
        strip::slip_marks(pen, axes, slips, |forward| axes.y(if forward { 180.0 } else { -180.0 }));
    }
    pen.close();
    axes.numbers_left(pen, &ticks);
    labels::draw(pen, &axes.frame, &placed_labels(panel, axes), margin);
}

fn draw_curve(pen: &mut Pen, axes: &Axes, curve: &Curve) {
    let width = stroke(curve);
    pen.open(
        Group::class("s").with("channel", curve.channel.clone()).number("factor", curve.factor),
    );
    for piece in &curve.pieces {
        axes.draw(pen, piece, curve.hue.ink(), width, curve.dash);
    }
    pen.close();
}

/// Measured points; those that would cover one another are one.
fn draw_dots(pen: &mut Pen, axes: &Axes, panel: &Panel) {
    for dots in &panel.dots {
        pen.open(Group::class("d").with("record", dots.label.clone()));
        for point in clip::apart(dots.points.iter().map(|pair| axes.at(*pair)), &axes.frame, DOT) {
            pen.disc(point, DOT, Ink::Axis);
        }
        pen.close();
    }
}

fn steps_and_acts(pen: &mut Pen, input: &RunChart, axes: &Axes) {
    let Frame { top, .. } = axes.frame;
    let bottom = axes.frame.bottom();
    let [start, end] = axes.across;
    let inside = |time: &&f64| **time > start && **time < end;
    for (times, dash, ink, kind) in
        [(&input.steps, Dash::Dots, Ink::Sub, "step"), (&input.acts, Dash::Short, Ink::Ink, "act")]
    {
        for time in times.iter().filter(inside) {
            let x = axes.x(*time);
            pen.open(Group::class("m").number("t", *time).with("kind", kind));
            pen.path(&[[x, top], [x, bottom]], ink, 1.0, dash);
            pen.close();
        }
    }
}

/// Labels with a height in the panel's own axes.
fn placed_labels(panel: &Panel, axes: &Axes) -> Vec<EndLabel> {
    let mut labels = Vec::new();
    for curve in &panel.curves {
        let Some(last) = curve.pieces.last().and_then(|piece| piece.last()) else { continue };
        labels.push(EndLabel {
            y: axes.y(last[1]),
            text: curve.label.clone(),
            bold: curve.weight == Weight::Main,
            ink: curve.hue.text(),
            leader: curve.hue.ink(),
        });
    }
    for dots in &panel.dots {
        let Some(last) = dots.points.iter().rfind(|point| point[0] <= axes.across[1]) else {
            continue;
        };
        labels.push(EndLabel {
            y: axes.y(last[1]),
            text: format!("measured, {}", dots.label),
            bold: false,
            ink: Ink::Sub,
            leader: Ink::Axis,
        });
    }
    for limit in panel.limits.iter().filter(|limit| !limit.label.is_empty()) {
        if (axes.up[0]..=axes.up[1]).contains(&limit.value) {
            labels.push(EndLabel {
                y: axes.y(limit.value),
                text: limit.label.clone(),
                bold: false,
                ink: Ink::Ink,
                leader: Ink::Ink,
            });
        }
    }
    if let PanelKind::LoadAngle { peaks, .. } = panel.kind {
        labels.push(EndLabel {
            y: axes.y((peaks[1] + 180.0) / 2.0),
            text: "Past the peak".to_owned(),
            bold: false,
            ink: Ink::Slip,
            leader: Ink::Slip,
        });
    }
    labels
}

fn all_labels(panel: &Panel) -> Vec<EndLabel> {
    let frame = Frame { left: 0.0, top: 0.0, width: 1.0, height: 1.0 };
    let up = match panel.kind {
        PanelKind::LoadAngle { .. } => [-180.0, 180.0],
        PanelKind::Values => [f64::MIN / 4.0, f64::MAX / 4.0],
    };
    placed_labels(panel, &Axes { frame, across: [0.0, 1.0], up })
}

/// Words for a time, with as many decimals as the window asks for.
pub fn time_words(time: f64, window: [f64; 2]) -> String {
    let step = ticks::nice_step((window[1] - window[0]).abs() / 200.0);
    let decimals = (-step.log10().floor()).clamp(0.0, 6.0) as usize;
    format!("{}{}s", number::fixed(time, decimals), number::NBSP)
}
