//! Swing: slip speed over load angle, with the region from which the gear falls back into step.

use super::axes::{self, Axes, Sheet};
use super::clip::Frame;
use super::curve::wrap;
use super::drawing::{Anchor, Dash, Drawing, Group};
use super::font;
use super::free::Room;
use super::labels::{self, EndLabel};
use super::marks;
use super::palette::Ink;
use super::pen::{self, Pen};
use super::ticks;
use crate::results::{Separatrix, Swing};

/// What the chart shows.
#[derive(Clone, Debug, PartialEq)]
pub struct SwingChart {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// Name of the gear in the heading; empty where there is one only.
    pub gear: String,
    /// The path and the separatrices.
    pub swing: Swing,
    /// The law's peaks, electrical rad: backward and forward.
    pub peaks: [f64; 2],
    /// Time (s) and direction of each slip.
    pub slips: Vec<(f64, i32)>,
    /// Whether it is in step at the end.
    pub in_step: bool,
    /// Size.
    pub sheet: Sheet,
}

const TOP: f64 = 24.0;
const FOOT: f64 = 40.0;
const DEGREES: f64 = 180.0 / std::f64::consts::PI;

/// Draws the chart.
pub fn swing_chart(input: &SwingChart) -> Drawing {
    let sheet = input.sheet.sound();
    let height = sheet.height.unwrap_or(328.0);
    let (up, ticks) = range(input);
    let frame = Frame {
        left: axes::LEFT,
        top: TOP,
        width: sheet.width - axes::LEFT - axes::RIGHT,
        height: height - TOP - FOOT,
    };
    let axes = Axes { frame, across: [-180.0, 180.0], up };
    let mut pen = Pen::new();
    let name = if input.gear.is_empty() {
        "Slip speed over load angle".to_owned()
    } else {
        format!("Slip speed over load angle, {}", input.gear)
    };
    let unit = match &input.swing.separatrix {
        Some(separatrix) if !separatrix.load.is_empty() => {
            format!("electrical rad/s, region for the {}", separatrix.load)
        }
        _ => "electrical rad/s".to_owned(),
    };
    axes.heading(&mut pen, &name, &unit);
    pen.open(axes.group("plane"));
    let mut room = Room::new(frame);
    if let Some(separatrix) = &input.swing.separatrix {
        axes.area(&mut pen, &caught_region(separatrix, up), Ink::Allowed, 0.75);
    }
    axes.level_grid(&mut pen, &ticks);
    let angles = ticks::at_step(-180.0, 180.0, 90.0);
    axes.upright_grid(&mut pen, &angles);
    axes.base_lines(&mut pen);
    room.avoid(&[vec![axes.at([-180.0, 0.0]), axes.at([180.0, 0.0])]]);
    for peak in input.peaks {
        let x = axes.x(peak * DEGREES);
        pen.line([x, frame.top], [x, frame.bottom()], Ink::Slip, 0.9);
    }
    if let Some(separatrix) = &input.swing.separatrix {
        pen.open(Group::class("s").with("name", "separatrix"));
        for border in [&separatrix.upper, &separatrix.lower] {
            let pieces = axes.curve(&degrees(border));
            for piece in &pieces {
                pen.path(piece, Ink::Ink, 1.3, Dash::Short);
            }
            room.avoid(&pieces);
        }
        pen.close();
    }
    let passes = passes(input);
    let last = passes.len().saturating_sub(1);
    for (place, pass) in passes.iter().enumerate() {
        let final_pass = place == last;
        let (ink, width) = if final_pass { (Ink::Ink, 1.9) } else { (Ink::Axis, pen::HAIR + 0.1) };
        pen.open(Group::class("s").with("name", if final_pass { "last" } else { "pass" }));
        let pieces = axes.curve(pass);
        for piece in &pieces {
            pen.path(piece, ink, width, Dash::Solid);
        }
        room.avoid(&pieces);
        pen.close();
    }
    points_and_words(&mut pen, &mut room, input, &axes, &passes);
    pen.close();
    axes.numbers_left(&mut pen, &ticks);
    axes.numbers_below(&mut pen, &angles, "Load angle, electrical degrees");
    labels::draw(&mut pen, &frame, &end_labels(input, &axes, &passes), axes::RIGHT);
    pen.finish(&input.id, &input.title, sheet.width, height)
}

fn degrees(points: &[[f64; 2]]) -> Vec<[f64; 2]> {
    points.iter().map(|[angle, speed]| [angle * DEGREES, *speed]).collect()
}

/// The path cut at each slip: `[degrees, rad/s]`.
fn passes(input: &SwingChart) -> Vec<Vec<[f64; 2]>> {
    // The wrapping works on time and phase; the slip speed follows by its place on the path.
    let path = &input.swing.path;
    let phase: Vec<[f64; 2]> =
        path.iter().enumerate().map(|(place, state)| [place as f64, state[1]]).collect();
    let speed_at = |place: f64| {
        let below = place.floor().max(0.0);
        let value = |index: f64| path.get(index as usize).map(|state| state[2]);
        let low = value(below).unwrap_or(0.0);
        let high = value(below + 1.0).unwrap_or(low);
        low + (place - below) * (high - low)
    };
    wrap(&vec![phase])
        .iter()
        .map(|pass| pass.iter().map(|[place, angle]| [*angle, speed_at(*place)]).collect())
        .collect()
}

/// Range of slip speeds: the path, and as much of the caught region as leaves the path large.
fn range(input: &SwingChart) -> ([f64; 2], ticks::Ticks) {
    let speeds = input.swing.path.iter().map(|state| state[2]).filter(|speed| speed.is_finite());
    let (low, high) =
        speeds.fold((0.0_f64, 0.0_f64), |(low, high), speed| (low.min(speed), high.max(speed)));
    let largest = high.max(-low).max(1e-6);
    let (mut bottom, mut top) = (low, high);
    if let Some(separatrix) = &input.swing.separatrix {
        let room = if input.slips.is_empty() { 40.0 } else { 1.1 };
        for point in separatrix.upper.iter().chain(&separatrix.lower) {
            if point[1].is_finite() {
                bottom = bottom.min(point[1].max(-room * largest));
                top = top.max(point[1].min(room * largest));
            }
        }
        // The side that the path does not use gets less.
        if high > -4.0 * low {
            bottom = bottom.max((-0.6 * top).min(low));
        } else if -low > 4.0 * high {
            top = top.min((-0.6 * bottom).max(high));
        }
    }
    let (low, high, ticks) = ticks::outward(bottom, top, 6);
    ([low, high], ticks)
}

/// The region between the borders, `[degrees, rad/s]`.
///
/// A border that ends short of the chart's side is held level from there, unless it has left the
/// range of speeds by then.
fn caught_region(separatrix: &Separatrix, [low, high]: [f64; 2]) -> Vec<[f64; 2]> {
    let far = 10.0 * (high - low).abs();
    // Borders that meet close the region there.
    let meet = |one: Option<&[f64; 2]>, other: Option<&[f64; 2]>| {
        one.zip(other).is_some_and(|(one, other)| (one[0] - other[0]).abs() < 1e-6)
    };
    let (upper, lower) = (&separatrix.upper, &separatrix.lower);
    let closed = [meet(upper.first(), lower.first()), meet(upper.last(), lower.last())];
    let at_side = |end: [f64; 2]| (end[0].abs() - 180.0).abs() < 0.5;
    let widened = |border: &[[f64; 2]], beyond: f64| {
        let mut border = degrees(border);
        border.sort_by(|one, two| one[0].total_cmp(&two[0]));
        let held = |end: [f64; 2]| {
            if (low..=high).contains(&end[1]) { end[1] } else { beyond }
        };
        let (first, last) = (border.first().copied(), border.last().copied());
        if let (Some(first), Some(last)) = (first, last) {
            if !closed[0] || at_side(first) {
                border.insert(0, [-180.0, held(first)]);
            }
            if !closed[1] || at_side(last) {
                border.push([180.0, held(last)]);
            }
        }
        border
    };
    let mut region = widened(&separatrix.upper, high + far);
    region.extend(widened(&separatrix.lower, low - far).iter().rev());
    region
}

fn points_and_words(
    pen: &mut Pen,
    room: &mut Room,
    input: &SwingChart,
    axes: &Axes,
    passes: &[Vec<[f64; 2]>],
) {
    let frame = axes.frame;
    let last = passes.last().map_or(&[][..], Vec::as_slice);
    if let (Some(start), Some((_, direction))) = (last.first(), input.slips.last()) {
        pen.open(Group::class("m").with("kind", "slip"));
        marks::slip(pen, axes.at(*start), *direction > 0, 9.0);
        pen.close();
    }
    if let Some(separatrix) = &input.swing.separatrix {
        let saddle = axes.at([separatrix.saddle * DEGREES, 0.0]);
        pen.open(Group::class("m").with("kind", "saddle"));
        marks::cross(pen, saddle);
        pen.close();
        room.take(Frame { left: saddle[0] - 6.0, top: saddle[1] - 6.0, width: 12.0, height: 12.0 });
        if frame.right() - saddle[0] > 40.0 {
            room.call_out(pen, saddle, "tips over", pen::label(Ink::Ink, Anchor::Start));
        }
    }
    let rest = input.swing.separatrix.as_ref().map(|separatrix| [separatrix.rest * DEGREES, 0.0]);
    let rest = rest.or_else(|| last.last().copied()).filter(|_| input.in_step);
    if let Some(rest) = rest {
        let at = axes.at(rest);
        room.take(Frame { left: at[0] - 6.0, top: at[1] - 6.0, width: 12.0, height: 12.0 });
        room.call_out(pen, at, "in step", pen::label(Ink::Ink, Anchor::Start));
        pen.open(Group::class("m").with("kind", "rest"));
        marks::ring(pen, at);
        pen.close();
    }
    if !input.slips.is_empty() {
        let words = if input.in_step { "last pass, caught" } else { "last pass" };
        let candidates: Vec<[f64; 2]> = axes
            .curve(last)
            .iter()
            .flatten()
            .take(400)
            .flat_map(|[x, y]| [[x - 10.0, y - 8.0], [x + 4.0, y + 15.0]])
            .collect();
        room.set(pen, words, pen::bold(Ink::Ink, Anchor::Start), &candidates);
    }
    name_peaks(pen, room, input, axes);
    if let Some(separatrix) = &input.swing.separatrix {
        let rest = separatrix.rest * DEGREES;
        let [low, high] = axes.up;
        let candidates: Vec<[f64; 2]> = [-0.6, -0.75, -0.45, -0.3]
            .iter()
            .flat_map(|share| [-60.0, -100.0, 20.0, -20.0].map(|shift| (share, shift)))
            .map(|(share, shift)| axes.at([rest + shift, share * -low.min(-0.2 * high)]))
            .filter(|place| frame.holds(*place))
            .collect();
        room.set(pen, "caught from here", pen::label(Ink::Sub, Anchor::Start), &candidates);
    }
}

fn name_peaks(pen: &mut Pen, room: &mut Room, input: &SwingChart, axes: &Axes) {
    const WORDS: &str = "past the peak";
    let wide = font::width(WORDS, pen::LABEL, false);
    let frame = axes.frame;
    for (peak, shift) in [(input.peaks[0], -6.0 - wide), (input.peaks[1], 6.0)] {
        let left = axes.x(peak * DEGREES) + shift;
        let candidates: Vec<[f64; 2]> = (0..12)
            .flat_map(|place| {
                let away = 9.0 + 9.0 * f64::from(place);
                [[left, frame.bottom() - away], [left, frame.top + 6.0 + away]]
            })
            .collect();
        room.set(pen, WORDS, pen::label(Ink::Slip, Anchor::Start), &candidates);
    }
}

fn end_labels(input: &SwingChart, axes: &Axes, passes: &[Vec<[f64; 2]>]) -> Vec<EndLabel> {
    let mut labels = Vec::new();
    let slipping = input.slips.len().saturating_sub(1);
    if slipping > 0 {
        // The fastest pass, where most of them lie.
        let edge = passes
            .iter()
            .filter_map(|pass| pass.last().filter(|end| end[0] > 179.0).or(pass.first()))
            .map(|end| end[1])
            .filter(|speed| (axes.up[0]..=axes.up[1]).contains(speed))
            .fold(0.0_f64, |far, speed| if speed.abs() > far.abs() { speed } else { far });
        let word = if slipping == 1 { "turn" } else { "turns" };
        labels.push(EndLabel {
            y: axes.y(edge),
            text: format!("{slipping} {word} in slip"),
            bold: false,
            ink: Ink::Sub,
            leader: Ink::Axis,
        });
    }
    if let Some(separatrix) = &input.swing.separatrix
        && axes.frame.right() - axes.x(separatrix.saddle * DEGREES) <= 40.0
    {
        labels.push(EndLabel {
            y: axes.y(0.0),
            text: "tips over".to_owned(),
            bold: false,
            ink: Ink::Ink,
            leader: Ink::Ink,
        });
    }
    labels
}
