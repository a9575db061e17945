//! Devices in section: magnetic gear, planetary set, coupling, pair of wheels.

use super::layout::{DEVICE, Spot};
use super::order::{Node, Order};
use super::parts::{SHAFT, side_of};
use super::view::{Link, Port, Schematic};
use super::words::MEMBERS;
use crate::render::chart::marks;
use crate::render::chart::palette::Ink;
use crate::render::chart::pen::Pen;

/// Half length of a gear's rotors, px.
const LONG: f64 = 50.0;
/// Radii: inner rotor; modulator from, to; outer rotor from, to.
const INNER: f64 = 22.0;
const MODULATOR: [f64; 2] = [29.0, 41.0];
const OUTER: [f64; 2] = [48.0, DEVICE];

/// Where a member leaves the device.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Way {
    Left,
    Right,
    Down,
    Held,
    Nowhere,
}

fn port_of(order: &Order, edge: usize, node: usize) -> Option<usize> {
    let edge = order.edges.get(edge)?;
    let end = edge.nodes.iter().position(|other| *other == node)?;
    edge.ports.get(end).copied().flatten()
}

fn ways(order: &Order, spot: &Spot, ports: &[Port]) -> Vec<Way> {
    let leaves = |edge: Option<usize>, port: usize| {
        edge.is_some_and(|edge| port_of(order, edge, spot.node) == Some(port))
    };
    ports
        .iter()
        .enumerate()
        .map(|(port, end)| match end {
            Port::Ground => Way::Held,
            _ if leaves(spot.left, port) => Way::Left,
            _ if leaves(spot.right, port) => Way::Right,
            _ if spot.down.iter().any(|edge| leaves(Some(*edge), port)) => Way::Down,
            _ => Way::Nowhere,
        })
        .collect()
}

fn link_of<'a>(train: &'a Schematic, order: &Order, spot: &Spot) -> Option<&'a Link> {
    match order.nodes.get(spot.node)? {
        Node::Device(link) => train.links.get(*link),
        Node::Disc(_) => None,
    }
}

/// The side on which a hanging modulator comes out: where the outer's cup is not.
fn stub_side(order: &Order, spot: &Spot, ports: &[Port]) -> f64 {
    if ways(order, spot, ports).get(2) == Some(&Way::Left) { 1.0 } else { -1.0 }
}

/// Where an edge leaves a node downwards.
pub fn hanging_point(train: &Schematic, order: &Order, spot: &Spot, edge: usize) -> [f64; 2] {
    let link = link_of(train, order, spot);
    let port = port_of(order, edge, spot.node);
    match (link, port) {
        (Some(Link::MagneticGear { members, .. } | Link::Planetary { members, .. }), Some(1)) => {
            let side = stub_side(order, spot, members);
            [spot.x + side * (LONG + 9.0), spot.y + (MODULATOR[0] + MODULATOR[1]) / 2.0]
        }
        (Some(Link::MagneticGear { .. } | Link::Planetary { .. }), Some(0)) => [spot.x, spot.y],
        (Some(Link::MagneticGear { .. } | Link::Planetary { .. }), _) => {
            [spot.x, spot.y + OUTER[1]]
        }
        (Some(_), _) => [spot.x, spot.y],
        (None, _) => [spot.x, spot.y],
    }
}

/// Draws the device of a spot.
pub fn draw(pen: &mut Pen, train: &Schematic, order: &Order, spot: &Spot) {
    match link_of(train, order, spot) {
        Some(Link::MagneticGear { members, .. }) => {
            let inks = MEMBERS.map(|(_, side)| side.ink());
            gear(pen, &Section { spot, inks, ways: ways(order, spot, members), magnetic: true });
        }
        Some(Link::Planetary { members, .. }) => {
            let inks = [0, 1, 2].map(|member: usize| match members.get(member) {
                Some(Port::Body(body)) => side_of(train, *body).ink(),
                _ => Ink::Sub,
            });
            gear(pen, &Section { spot, inks, ways: ways(order, spot, members), magnetic: false });
        }
        Some(Link::Coupling { between, .. }) => {
            coupling(pen, spot, &halves(train, order, spot, between));
        }
        Some(Link::GearPair { between, ratio, .. }) => {
            let halves = halves(train, order, spot, between);
            let a_is_left = halves[0].1 == Some(0) || halves[1].1 == Some(1);
            pair(pen, spot, &halves, if a_is_left { *ratio } else { 1.0 / ratio });
        }
        _ => {}
    }
}

struct Section<'a> {
    spot: &'a Spot,
    inks: [Ink; 3],
    ways: Vec<Way>,
    magnetic: bool,
}

impl Section<'_> {
    fn way(&self, member: usize) -> Way {
        self.ways.get(member).copied().unwrap_or(Way::Nowhere)
    }

    fn side(&self, member: usize) -> Option<f64> {
        match self.way(member) {
            Way::Left => Some(-1.0),
            Way::Right => Some(1.0),
            _ => None,
        }
    }
}

fn gear(pen: &mut Pen, section: &Section<'_>) {
    let (x, y) = (section.spot.x, section.spot.y);
    let [inner, modulator, outer] = section.inks;
    let edge = section.spot.half;
    // Shafts first: rotors lie over their ends.
    if let Some(side) = section.side(0) {
        pen.line([x + side * (LONG - 2.0), y], [x + side * edge, y], inner, SHAFT);
    }
    for (member, radius) in
        [(1, (MODULATOR[0] + MODULATOR[1]) / 2.0), (2, (OUTER[0] + OUTER[1]) / 2.0)]
    {
        if let Some(side) = section.side(member) {
            let ink = section.inks[member];
            let cup = x + side * (LONG + 7.0);
            pen.line([cup, y - radius - 2.5], [cup, y + radius + 2.5], ink, SHAFT);
            for sign in [-1.0, 1.0] {
                let level = y + sign * radius;
                pen.line([x + side * (LONG - 3.0), level], [cup, level], ink, SHAFT);
            }
            pen.line([cup, y], [x + side * edge, y], ink, SHAFT);
        }
    }
    pen.rectangle([x - LONG, y - INNER], [2.0 * LONG, 2.0 * INNER], inner, 1.0);
    for sign in [-1.0, 1.0] {
        ring(pen, [x, y], sign, OUTER, outer);
        pieces(pen, [x, y], sign, modulator, section.magnetic);
        if section.magnetic {
            magnets(pen, x, y + sign * (INNER - 2.5), 5.0, 25.0);
            magnets(pen, x, y + sign * (OUTER[0] + 2.5), 5.0, 12.5);
        }
    }
    held(pen, section);
    hanging(pen, section);
}

fn ring(pen: &mut Pen, [x, y]: [f64; 2], sign: f64, [from, to]: [f64; 2], ink: Ink) {
    let top = if sign < 0.0 { y - to } else { y + from };
    pen.rectangle([x - LONG, top], [2.0 * LONG, to - from], ink, 1.0);
}

/// Modulator pieces, or one planet of a planetary set on its pin.
fn pieces(pen: &mut Pen, [x, y]: [f64; 2], sign: f64, ink: Ink, magnetic: bool) {
    let [from, to] = MODULATOR;
    let top = if sign < 0.0 { y - to } else { y + from };
    if magnetic {
        let pitch = 2.0 * LONG / 7.0;
        for place in 0..7 {
            let left = x - LONG + pitch * f64::from(place) + 1.2;
            pen.rectangle([left, top], [pitch - 2.4, to - from], ink, 1.0);
        }
    } else {
        let (low, high) = (INNER + 1.5, OUTER[0] - 1.5);
        let top = if sign < 0.0 { y - high } else { y + low };
        pen.rectangle([x - 26.0, top], [52.0, high - low], Ink::Signal, 1.0);
        let pin = y + sign * (from + to) / 2.0;
        pen.line([x - LONG, pin], [x + LONG, pin], ink, SHAFT);
    }
}

/// Paper-toned magnets along the air gap, each second pole.
fn magnets(pen: &mut Pen, x: f64, level: f64, thick: f64, pitch: f64) {
    let count = (LONG / pitch).round() as i32;
    for place in 0..count {
        let left = x - LONG + 2.0 * pitch * f64::from(place);
        pen.rectangle([left, level - thick / 2.0], [pitch, thick], Ink::Paper, 0.5);
    }
}

fn held(pen: &mut Pen, section: &Section<'_>) {
    let (x, y) = (section.spot.x, section.spot.y);
    if section.way(2) == Way::Held {
        for sign in [-1.0, 1.0] {
            let level = y + sign * (OUTER[1] + 1.0);
            marks::ground(pen, [x - LONG, level], [x + LONG, level], [0.0, sign]);
        }
    }
    if section.way(1) == Way::Held {
        let side = if section.way(2) == Way::Left { 1.0 } else { -1.0 };
        let middle = (MODULATOR[0] + MODULATOR[1]) / 2.0;
        for sign in [-1.0, 1.0] {
            let level = y + sign * middle;
            let wall = x + side * (LONG + 9.0);
            pen.line([x + side * (LONG - 3.0), level], [wall, level], section.inks[1], SHAFT - 1.0);
            marks::ground(pen, [wall, level - 7.0], [wall, level + 7.0], [side, 0.0]);
        }
    }
    if section.way(0) == Way::Held {
        let side =
            if section.side(1) == Some(-1.0) || section.side(2) == Some(-1.0) { 1.0 } else { -1.0 };
        let cup = section.side(1) == Some(side) || section.side(2) == Some(side);
        // Within a cup there is no room for a stub: the face itself is hatched.
        let wall = x + side * if cup { LONG } else { LONG + 9.0 };
        if !cup {
            pen.line([x + side * (LONG - 2.0), y], [wall, y], section.inks[0], SHAFT);
        }
        let reach = if cup { INNER - 6.0 } else { 9.0 };
        let normal = if cup { -side } else { side };
        marks::ground(pen, [wall, y - reach], [wall, y + reach], [normal, 0.0]);
    }
}

/// The stub of a member whose branch hangs below.
fn hanging(pen: &mut Pen, section: &Section<'_>) {
    let (x, y) = (section.spot.x, section.spot.y);
    if section.way(1) == Way::Down {
        let side = if section.way(2) == Way::Left { 1.0 } else { -1.0 };
        let level = y + (MODULATOR[0] + MODULATOR[1]) / 2.0;
        pen.line(
            [x + side * (LONG - 3.0), level],
            [x + side * (LONG + 9.0 + SHAFT / 2.0), level],
            section.inks[1],
            SHAFT,
        );
    }
    if section.way(0) == Way::Down {
        pen.line([x, y + INNER], [x, y + OUTER[1]], Ink::Paper, SHAFT + 3.0);
        pen.line([x, y], [x, y + OUTER[1]], section.inks[0], SHAFT);
    }
}

/// Ink and port of what stands left and right in a two-port device.
type Halves = [(Ink, Option<usize>); 2];

fn halves(train: &Schematic, order: &Order, spot: &Spot, between: &[Port; 2]) -> Halves {
    let mut seats =
        [spot.left, spot.right].map(|edge| edge.and_then(|edge| port_of(order, edge, spot.node)));
    // A free side shows the other port: held, or hanging below.
    match seats {
        [Some(port), None] => seats[1] = Some(1 - port.min(1)),
        [None, Some(port)] => seats[0] = Some(1 - port.min(1)),
        [None, None] => seats = [Some(0), Some(1)],
        _ => {}
    }
    seats.map(|port| match port.and_then(|port| between.get(port)) {
        Some(Port::Body(body)) => (side_of(train, *body).ink(), port),
        _ => (Ink::Sub, port),
    })
}

fn coupling(pen: &mut Pen, spot: &Spot, halves: &Halves) {
    let (x, y) = (spot.x, spot.y);
    let reach = 40.0;
    for (side, (ink, _)) in [-1.0, 1.0].into_iter().zip(halves) {
        pen.line([x + side * 10.0, y], [x + side * spot.half, y], *ink, SHAFT);
        let left = if side < 0.0 { x - 14.0 } else { x + 3.0 };
        pen.rectangle([left, y - reach], [11.0, 2.0 * reach], *ink, 1.0);
        let face = if side < 0.0 { x - 8.0 } else { x + 3.0 };
        for place in 0..4 {
            let top = y - reach + 20.0 * f64::from(place) + if side < 0.0 { 0.0 } else { 10.0 };
            pen.rectangle([face, top], [5.0, 10.0], Ink::Paper, 0.5);
        }
    }
}

fn pair(pen: &mut Pen, spot: &Spot, halves: &Halves, left_over_right: f64) {
    let (x, y) = (spot.x, spot.y);
    let largest = 50.0;
    let ratio =
        if left_over_right.is_finite() { left_over_right.abs().clamp(1e-3, 1e3) } else { 1.0 };
    // The faster wheel is the smaller one.
    let reaches = [(largest / ratio).min(largest), (largest * ratio).min(largest)]
        .map(|reach: f64| reach.max(15.0));
    for ((side, (ink, _)), reach) in [-1.0, 1.0].into_iter().zip(halves).zip(reaches) {
        pen.line([x + side * 10.0, y], [x + side * spot.half, y], *ink, SHAFT);
        let left = if side < 0.0 { x - 13.0 } else { x + 1.0 };
        pen.rectangle([left, y - reach], [12.0, 2.0 * reach], *ink, 1.0);
        let teeth = (2.0 * reach / 6.0).floor() as i32;
        for tooth in 0..teeth {
            let top = y - reach + 2.0 + 6.0 * f64::from(tooth);
            let face = if side < 0.0 { x - 6.0 } else { x + 1.0 };
            pen.rectangle([face, top], [5.0, 1.6], Ink::Paper, 0.65);
        }
    }
}
