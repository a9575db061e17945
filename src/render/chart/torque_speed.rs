//! Torque over speed at the motor shaft: what drives, what brakes, what the gear carries.

use super::axes::{self, Axes, Sheet};
use super::clip::Frame;
use super::drawing::{Anchor, Dash, Drawing, Group};
use super::free::Room;
use super::labels::{self, EndLabel};
use super::marks::{self, Forbidden};
use super::number::{NBSP, number};
use super::palette::{Ink, Side};
use super::pen::{self, Pen};
use super::ticks;
use super::units::Display;

/// What the chart shows; speeds in rad/s, torques in N*m, all referred to one shaft.
#[derive(Clone, Debug, PartialEq)]
pub struct TorqueSpeed {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// The shaft, for example `motor shaft`.
    pub at: String,
    /// The driving curve.
    pub motor: Characteristic,
    /// The braking curve, positive where it brakes.
    pub load: Option<Characteristic>,
    /// Pull-out torque referred to the shaft.
    pub pull_out: Option<f64>,
    /// Where the run came to rest: speed and torque.
    pub operating_point: Option<[f64; 2]>,
    /// Torque through the gear over speed in this run.
    pub path: Option<Characteristic>,
    /// Units.
    pub display: Display,
    /// Size.
    pub sheet: Sheet,
}

/// A curve of torque over speed.
#[derive(Clone, Debug, PartialEq)]
pub struct Characteristic {
    /// Its name.
    pub label: String,
    /// Side it belongs to.
    pub side: Side,
    /// `[rad/s, N*m]` in order.
    pub points: Vec<[f64; 2]>,
}

const TOP: f64 = 24.0;
const FOOT: f64 = 40.0;

/// Draws the chart.
pub fn torque_speed_chart(input: &TorqueSpeed) -> Drawing {
    let sheet = input.sheet.sound();
    let height = sheet.height.unwrap_or(328.0);
    let all = || {
        let curves = [Some(&input.motor), input.load.as_ref(), input.path.as_ref()];
        curves.into_iter().flatten().flat_map(|curve| curve.points.iter().copied())
    };
    let extent = |axis: usize| {
        let values =
            all().chain(input.operating_point).filter_map(move |point| point.get(axis).copied());
        values
            .filter(|value| value.is_finite())
            .fold((0.0_f64, 0.0_f64), |(low, high), value| (low.min(value), high.max(value)))
    };
    let (slow, fast) = extent(0);
    let (low, high) = extent(1);
    // A dip of a hundredth is no reason for a range below zero.
    let low = if low > -0.01 * high { 0.0 } else { low };
    let pull_out = input.pull_out.filter(|torque| torque.is_finite());
    let unit = input.display.torque.prefixed(high.max(-low));
    let speed = &input.display.speed;
    let scaled = |points: &[[f64; 2]]| -> Vec<[f64; 2]> {
        points.iter().map(|[s, t]| [speed.of(*s), unit.of(*t)]).collect()
    };
    // A pull-out far above all curves would press them flat: then it is named, not drawn.
    let seen = pull_out.filter(|torque| *torque <= 2.5 * high.max(1e-9));
    let top_of_axis = seen.map_or(high, |torque| high.max(torque * 1.02));
    let (low, high, up_ticks) = ticks::outward(unit.of(low), unit.of(top_of_axis), 6);
    // The axis ends where the curves end, so that their ends meet their labels.
    let (slow, fast) = (speed.of(slow), speed.of(if fast > slow { fast } else { slow + 1.0 }));
    let across_ticks = ticks::within(slow, fast, 8);
    let labels_of =
        |axes: &Axes| end_labels(input, axes, &unit.text, seen.map(|t| unit.of(t)), &scaled);
    let draft = Axes {
        frame: Frame { left: 0.0, top: 0.0, width: 1.0, height: 1.0 },
        across: [slow, fast],
        up: [low, high],
    };
    let margin = labels::margin(labels_of(&draft).iter(), axes::RIGHT, sheet.width);
    let frame = Frame {
        left: axes::LEFT,
        top: TOP,
        width: sheet.width - axes::LEFT - margin,
        height: height - TOP - FOOT,
    };
    let axes = Axes { frame, ..draft };
    let mut pen = Pen::new();
    axes.heading(&mut pen, &format!("Torque over speed, at the {}", input.at), &unit.text);
    pen.open(axes.group("plane"));
    let motor = scaled(&input.motor.points);
    let load = input.load.as_ref().map(|load| scaled(&load.points));
    for area in accelerating(&motor, load.as_deref().unwrap_or(&[])) {
        axes.area(&mut pen, &area, Ink::Allowed, 0.75);
    }
    axes.level_grid(&mut pen, &up_ticks);
    axes.upright_grid(&mut pen, &across_ticks);
    axes.base_lines(&mut pen);
    let mut room = Room::new(frame);
    if let Some(path) = &input.path {
        let ink = path.side.ink();
        draw(&mut pen, &mut room, &axes, "path", &scaled(&path.points), (ink, pen::SECOND));
    }
    if let (Some(points), Some(load)) = (&load, &input.load) {
        draw(&mut pen, &mut room, &axes, "load", points, (load.side.ink(), pen::MAIN));
    }
    draw(&mut pen, &mut room, &axes, "motor", &motor, (input.motor.side.ink(), pen::MAIN));
    if let Some(torque) = seen {
        let y = axes.y(unit.of(torque));
        marks::level_limit(&mut pen, &frame, y, Forbidden::Above);
        room.take(Frame { left: frame.left, top: y - 6.0, width: frame.width, height: 8.0 });
    }
    pen.close();
    words(&mut pen, &mut room, input, &axes, (&motor, load.as_deref()), &unit.text, &scaled);
    axes.numbers_left(&mut pen, &up_ticks);
    axes.numbers_below(&mut pen, &across_ticks, &format!("Speed, {}", speed.text));
    labels::draw(&mut pen, &frame, &labels_of(&axes), margin);
    pen.finish(&input.id, &input.title, sheet.width, height)
}

type Scale<'a> = dyn Fn(&[[f64; 2]]) -> Vec<[f64; 2]> + 'a;

fn draw(
    pen: &mut Pen,
    room: &mut Room,
    axes: &Axes,
    name: &str,
    points: &[[f64; 2]],
    (ink, width): (Ink, f64),
) {
    let pieces = axes.curve(points);
    pen.open(Group::class("s").with("name", name));
    for piece in &pieces {
        pen.path(piece, ink, width, Dash::Solid);
    }
    pen.close();
    room.avoid(&pieces);
}

fn words(
    pen: &mut Pen,
    room: &mut Room,
    input: &TorqueSpeed,
    axes: &Axes,
    (motor, load): (&[[f64; 2]], Option<&[[f64; 2]]>),
    torque_unit: &str,
    scaled: &Scale<'_>,
) {
    if let Some(point) = input.operating_point {
        let shown = scaled(&[point]);
        let Some(value) = shown.first() else { return };
        let at = axes.at(*value);
        room.take(Frame { left: at[0] - 6.0, top: at[1] - 6.0, width: 12.0, height: 12.0 });
        let text = format!(
            "{}{NBSP}{}, {}{NBSP}{torque_unit}",
            number(value[0], 4),
            input.display.speed.text,
            number(value[1], 3)
        );
        room.call_out(pen, at, &text, pen::label(Ink::Ink, Anchor::Start));
        pen.open(Group::class("m").with("kind", "operating"));
        marks::ring(pen, at);
        pen.close();
    }
    let along = |points: &[[f64; 2]], up: f64| {
        let places = axes.curve(points);
        let mut candidates = Vec::new();
        for place in places.iter().flatten() {
            for dx in [-20.0, 4.0, -46.0] {
                candidates.push([place[0] + dx, place[1] - up]);
            }
        }
        candidates
    };
    let top = motor
        .iter()
        .copied()
        .fold([0.0, f64::MIN], |best, point| if point[1] > best[1] { point } else { best });
    let peak = axes.at(top);
    let mut candidates = vec![[peak[0] - 36.0, peak[1] - 8.0], [peak[0] - 60.0, peak[1] - 4.0]];
    candidates.extend(along(motor, 7.0));
    room.set(
        pen,
        &input.motor.label,
        pen::bold(input.motor.side.text(), Anchor::Start),
        &candidates,
    );
    if let Some(path) = &input.path {
        let points = scaled(&path.points);
        let candidates: Vec<[f64; 2]> =
            [7.0, 12.0, 18.0, 26.0, -14.0].iter().flat_map(|up| along(&points, *up)).collect();
        room.set(pen, &path.label, pen::bold(path.side.text(), Anchor::Start), &candidates);
    }
    if let Some(load) = load {
        let candidates: Vec<[f64; 2]> = (1..8)
            .flat_map(|share| {
                let across =
                    axes.across[0] + (axes.across[1] - axes.across[0]) * f64::from(share) / 10.0;
                let (drive, brake) = (at(motor, across), at(load, across));
                [0.55, 0.75, 0.35].map(|part| axes.at([across, brake + part * (drive - brake)]))
            })
            .collect();
        room.set(pen, "accelerates the train", pen::label(Ink::Sub, Anchor::Start), &candidates);
    }
}

fn end_labels(
    input: &TorqueSpeed,
    axes: &Axes,
    unit: &str,
    seen: Option<f64>,
    scaled: &Scale<'_>,
) -> Vec<EndLabel> {
    let mut labels = Vec::new();
    let plain =
        |y: f64, text: String| EndLabel { y, text, bold: false, ink: Ink::Ink, leader: Ink::Ink };
    match (seen, input.pull_out) {
        (Some(torque), _) => {
            labels.push(plain(axes.y(torque), format!("Pull-out, referred {}", number(torque, 3))));
        }
        (None, Some(torque)) if torque.is_finite() => {
            let text = format!("Pull-out {}{NBSP}{unit}, above", number(torque, 3));
            labels.push(plain(axes.frame.top, text));
        }
        _ => {}
    }
    if let Some(load) = &input.load
        && let Some(last) = scaled(&load.points).last()
    {
        labels.push(EndLabel {
            y: axes.y(last[1]),
            text: load.label.clone(),
            bold: true,
            ink: load.side.text(),
            leader: load.side.ink(),
        });
    }
    labels
}

/// Value of a curve by straight lines; 0 beyond its ends.
fn at(curve: &[[f64; 2]], across: f64) -> f64 {
    curve.windows(2).find(|pair| (pair[0][0]..=pair[1][0]).contains(&across)).map_or(0.0, |pair| {
        let width = pair[1][0] - pair[0][0];
        let share = if width > 0.0 { (across - pair[0][0]) / width } else { 0.0 };
        pair[0][1] + share * (pair[1][1] - pair[0][1])
    })
}

/// Areas in which the motor drives harder than the load brakes.
fn accelerating(motor: &[[f64; 2]], load: &[[f64; 2]]) -> Vec<Vec<[f64; 2]>> {
    let mut stops: Vec<f64> = motor.iter().chain(load).map(|point| point[0]).collect();
    stops.sort_by(f64::total_cmp);
    stops.dedup();
    let mut areas: Vec<Vec<[f64; 2]>> = Vec::new();
    let (mut upper, mut lower) = (Vec::new(), Vec::new());
    let mut close = |upper: &mut Vec<[f64; 2]>, lower: &mut Vec<[f64; 2]>| {
        if upper.len() > 1 {
            areas.push(upper.iter().copied().chain(lower.iter().rev().copied()).collect());
        }
        upper.clear();
        lower.clear();
    };
    let mut before: Option<(f64, f64)> = None;
    for across in stops {
        let (drive, brake) = (at(motor, across), at(load, across));
        let excess = drive - brake;
        if let Some((last, last_excess)) =
            before.filter(|(_, last)| (*last > 0.0) != (excess > 0.0))
        {
            let crossing = last + (across - last) * last_excess / (last_excess - excess);
            upper.push([crossing, at(motor, crossing)]);
            lower.push([crossing, at(load, crossing)]);
            if excess <= 0.0 {
                close(&mut upper, &mut lower);
            }
        }
        if excess > 0.0 {
            upper.push([across, drive]);
            lower.push([across, brake]);
        }
        before = Some((across, excess));
    }
    close(&mut upper, &mut lower);
    areas
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_accelerating_area_ends_where_the_curves_cross() {
        let areas = accelerating(&[[0.0, 4.0], [4.0, 0.0]], &[[0.0, 0.0], [4.0, 4.0]]);
        assert_eq!(areas.len(), 1);
        let far = areas[0].iter().map(|point| point[0]).fold(0.0, f64::max);
        assert!((far - 2.0).abs() < 1e-12, "x = 4 - x at 2");
    }
}
