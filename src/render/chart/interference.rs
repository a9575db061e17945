//! Interference diagram: natural frequencies and excitation orders over speed.

use super::axes::{self, Axes, Sheet};
use super::clip::{self, Frame};
use super::drawing::{Anchor, Dash, Drawing, Group};
use super::free::Room;
use super::labels::{self, EndLabel};
use super::marks;
use super::number::{NBSP, number};
use super::palette::Ink;
use super::pen::{self, Pen};
use super::ticks;
use super::units::Unit;

/// What the chart shows; speeds in rad/s, frequencies in Hz.
#[derive(Clone, Debug, PartialEq)]
pub struct Interference {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// Natural frequencies with a name each, rising.
    pub modes: Vec<Mode>,
    /// Separation asked for, as a share of the frequency.
    pub separation: Option<f64>,
    /// Excitations.
    pub orders: Vec<Order>,
    /// Where orders meet modes.
    pub crossings: Vec<Crossing>,
    /// Operating range.
    pub operating: [f64; 2],
    /// Whose speed runs across, in words.
    pub speed_of: String,
    /// Unit of speed.
    pub speed: Unit,
    /// Size.
    pub sheet: Sheet,
}

/// A natural frequency.
#[derive(Clone, Debug, PartialEq)]
pub struct Mode {
    /// Name, for example `blades on gear`.
    pub label: String,
    /// Hz.
    pub frequency: f64,
}

/// An excitation whose frequency grows with speed.
#[derive(Clone, Debug, PartialEq)]
pub struct Order {
    /// Name, for example `6 × rotor`.
    pub label: String,
    /// Hz at one rad/s of the speed across.
    pub per_speed: f64,
}

/// Where an order meets a mode.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Crossing {
    /// rad/s.
    pub speed: f64,
    /// Hz.
    pub frequency: f64,
    /// Inside the operating range, or closer to it than the separation allows.
    pub inside: bool,
}

const TOP: f64 = 24.0;
const FOOT: f64 = 40.0;

/// Draws the chart.
pub fn interference_chart(input: &Interference) -> Drawing {
    let sheet = input.sheet.sound();
    let height = sheet.height.unwrap_or(312.0);
    let highest = input.modes.iter().map(|mode| mode.frequency).fold(0.0, f64::max);
    let band = 1.0 + input.separation.unwrap_or(0.0);
    let reach = input
        .crossings
        .iter()
        .filter(|crossing| crossing.inside)
        .map(|crossing| crossing.frequency);
    let top = reach.fold(highest * band.max(1.08), f64::max);
    let fast = input.operating[1].max(input.operating[0]).max(1e-9);
    let (_, up_high, up_ticks) = ticks::outward(0.0, if top > 0.0 { top } else { 1.0 }, 6);
    let shown_fast = input.speed.of(fast * 1.2);
    let (_, across_high, across_ticks) = ticks::outward(0.0, shown_fast, 7);
    let draft = Axes {
        frame: Frame { left: 0.0, top: 0.0, width: 1.0, height: 1.0 },
        across: [0.0, across_high],
        up: [0.0, up_high],
    };
    let margin = labels::margin(end_labels(input, &draft).iter(), axes::RIGHT, sheet.width);
    let frame = Frame {
        left: axes::LEFT,
        top: TOP,
        width: sheet.width - axes::LEFT - margin,
        height: height - TOP - FOOT,
    };
    let axes = Axes { frame, ..draft };
    let mut pen = Pen::new();
    axes.heading(&mut pen, "Natural frequencies and excitation", "Hz");
    pen.open(axes.group("plane"));
    let [from, to] = input.operating.map(|speed| axes.x(input.speed.of(speed)));
    pen.rectangle([from, frame.top], [to - from, frame.height], Ink::Signal, 0.35);
    if let Some(separation) = input.separation {
        for mode in &input.modes {
            let range = [mode.frequency * (1.0 - separation), mode.frequency * (1.0 + separation)];
            axes.band(&mut pen, range, Ink::Allowed, 0.75);
        }
    }
    axes.level_grid(&mut pen, &up_ticks);
    axes.upright_grid(&mut pen, &across_ticks);
    axes.floor(&mut pen);
    let mut room = Room::new(frame);
    room.take(Frame {
        left: from + 2.0,
        top: frame.top,
        width: (to - from).max(0.0),
        height: 18.0,
    });
    for order in &input.orders {
        let line = order_line(input, &axes, order);
        let pieces = clip::line(&line.map(|pair| axes.at(pair)), &frame);
        pen.open(Group::class("s").with("name", order.label.clone()));
        for piece in &pieces {
            pen.path(piece, Ink::Sub, pen::SECOND, Dash::Long);
        }
        pen.close();
        room.avoid(&pieces);
    }
    for mode in &input.modes {
        let y = axes.y(mode.frequency);
        pen.open(Group::class("s").with("name", mode.label.clone()));
        pen.line([frame.left, y], [frame.right(), y], Ink::Ink, pen::MAIN);
        pen.close();
        room.avoid(&[vec![[frame.left, y], [frame.right(), y]]]);
    }
    pen.text(
        [(from + to) / 2.0, frame.top + 13.0],
        "operating range",
        pen::label(Ink::Sub, Anchor::Middle),
    );
    crossings(&mut pen, &mut room, input, &axes);
    steep_orders(&mut pen, &mut room, input, &axes);
    pen.close();
    axes.numbers_left(&mut pen, &up_ticks);
    let name = format!("{}, {}", input.speed_of, input.speed.text);
    axes.numbers_below(&mut pen, &across_ticks, &name);
    labels::draw(&mut pen, &frame, &end_labels(input, &axes), margin);
    pen.finish(&input.id, &input.title, sheet.width, height)
}

/// An order from standstill to the right edge, in display units.
fn order_line(input: &Interference, axes: &Axes, order: &Order) -> [[f64; 2]; 2] {
    let fast = axes.across[1];
    [[0.0, 0.0], [fast, order.per_speed * fast / input.speed.per_si]]
}

fn crossings(pen: &mut Pen, room: &mut Room, input: &Interference, axes: &Axes) {
    let places: Vec<[f64; 2]> = input
        .crossings
        .iter()
        .map(|crossing| axes.at([input.speed.of(crossing.speed), crossing.frequency]))
        .collect();
    for place in &places {
        room.take(Frame { left: place[0] - 7.0, top: place[1] - 7.0, width: 14.0, height: 14.0 });
    }
    for (crossing, place) in input.crossings.iter().zip(&places) {
        if !axes.frame.holds(*place) {
            continue;
        }
        let kind = if crossing.inside { "inside" } else { "outside" };
        pen.open(Group::class("m").with("kind", kind));
        if crossing.inside {
            marks::diamond(pen, *place);
        } else {
            marks::open_dot(pen, *place);
        }
        pen.close();
        if crossing.inside {
            let text =
                format!("{}{NBSP}{}", number(input.speed.of(crossing.speed), 3), input.speed.text);
            let style = pen::bold(Ink::Slip, Anchor::Start);
            let half = super::font::width(&text, pen::LABEL, true) / 2.0;
            let [x, y] = *place;
            let candidates = [
                [x - half, y + 20.0],
                [x - half, y - 12.0],
                [x + 10.0, y + 16.0],
                [x + 10.0, y - 8.0],
                [x - 2.0 * half - 10.0, y + 16.0],
                [x - 2.0 * half - 10.0, y - 8.0],
            ];
            room.set(pen, &text, style, &candidates);
        }
    }
}

/// Orders that leave through the upper edge are named there.
fn steep_orders(pen: &mut Pen, room: &mut Room, input: &Interference, axes: &Axes) {
    let high = axes.up[1];
    for order in &input.orders {
        let [_, end] = order_line(input, axes, order);
        if end[1] <= high {
            continue;
        }
        let x = axes.x(end[0] * high / end[1]);
        let wide = super::font::width(&order.label, pen::LABEL, false);
        let candidates: Vec<[f64; 2]> = (0..8)
            .flat_map(|place| {
                let down = 14.0 + 14.0 * f64::from(place);
                let at = x - (down - 2.0) * (x - axes.frame.left) / axes.frame.height;
                [[at + 8.0, axes.frame.top + down], [at - wide - 8.0, axes.frame.top + down]]
            })
            .collect();
        room.set(pen, &order.label, pen::label(Ink::Sub, Anchor::Start), &candidates);
    }
}

fn end_labels(input: &Interference, axes: &Axes) -> Vec<EndLabel> {
    let mut labels = Vec::new();
    for (place, mode) in input.modes.iter().enumerate() {
        labels.push(EndLabel {
            y: axes.y(mode.frequency),
            text: format!("{}{NBSP}{NBSP}{}", place + 1, mode.label),
            bold: true,
            ink: Ink::Ink,
            leader: Ink::Ink,
        });
    }
    for order in &input.orders {
        let [_, end] = order_line(input, axes, order);
        if end[1] <= axes.up[1] {
            labels.push(EndLabel {
                y: axes.y(end[1]),
                text: order.label.clone(),
                bold: false,
                ink: Ink::Sub,
                leader: Ink::Axis,
            });
        }
    }
    labels
}
