//! Parts: discs, shafts, motors and loads, brakes.

use super::layout::{Bar, DISC, Spot};
use super::order::{Node, Order, is_member_only};
use super::view::{Actor, BrakeView, Link, Schematic};
use crate::render::chart::drawing::{Anchor, Dash, TextStyle};
use crate::render::chart::font;
use crate::render::chart::marks;
use crate::render::chart::palette::{Ink, Side};
use crate::render::chart::pen::{self, Pen};

/// Thickness of shafts, px.
pub const SHAFT: f64 = 5.0;
const ARROW_SLOT: f64 = 46.0;
const BRAKE_SLOT: f64 = 42.0;
const ZIGZAG: f64 = 36.0;

/// Half height of a disc: it goes with the fourth root of the inertia, as of discs of one width.
pub fn disc_half(train: &Schematic, body: usize) -> f64 {
    let inertia = |place: usize| train.bodies.get(place).map_or(0.0, |body| body.inertia.max(0.0));
    let largest = (0..train.bodies.len())
        .filter(|place| !is_member_only(train, *place))
        .map(inertia)
        .fold(0.0, f64::max);
    if largest > 0.0 { (DISC * (inertia(body) / largest).powf(0.25)).max(9.0) } else { 30.0 }
}

/// A body as a disc with a light edge.
pub fn disc(pen: &mut Pen, train: &Schematic, body: usize, spot: &Spot) {
    let half = disc_half(train, body);
    let ink = side_of(train, body).ink();
    pen.rectangle([spot.x - spot.half, spot.y - half], [2.0 * spot.half, 2.0 * half], ink, 1.0);
    pen.rectangle(
        [spot.x - spot.half + 3.0, spot.y - half + 3.0],
        [1.6, 2.0 * half - 6.0],
        Ink::Paper,
        0.5,
    );
}

/// The member a body turns with.
pub fn side_of(train: &Schematic, body: usize) -> Side {
    train.bodies.get(body).map_or(Side::Other, |body| body.side)
}

/// What a bar must hold, from left to right.
struct Slots<'a> {
    name: &'a str,
    text: &'a str,
    elastic: bool,
    backlash: bool,
    /// Body whose speed stands at the left and right end.
    arrows: [Option<usize>; 2],
    brakes: [Vec<&'a BrakeView>; 2],
}

impl<'a> Slots<'a> {
    fn of(train: &'a Schematic, order: &Order, edge: usize, flipped: bool) -> Self {
        let mut slots = Self {
            name: "",
            text: "",
            elastic: false,
            backlash: false,
            arrows: [None, None],
            brakes: [Vec::new(), Vec::new()],
        };
        let place = edge;
        let Some(edge) = order.edges.get(edge) else { return slots };
        if let Some(Link::Shaft { name, text, elastic, backlash, .. }) =
            edge.shaft.and_then(|shaft| train.links.get(shaft))
        {
            (slots.name, slots.text) = (name, text);
            (slots.elastic, slots.backlash) = (*elastic, *backlash);
        }
        let mut ends = [0, 1].map(|end| {
            let node = edge.nodes[end];
            let disc = matches!(order.nodes.get(node), Some(Node::Disc(_)));
            // What belongs to a disc is told on the first of its shafts only.
            let first = order.edges.iter().position(|edge| edge.nodes.contains(&node));
            (edge.bodies[end], disc, !disc || first == Some(place))
        });
        if flipped {
            ends.swap(0, 1);
        }
        let fixed = edge.shaft.is_none();
        let speed = |body: usize| train.bodies.get(body).and_then(|body| body.speed.clone());
        for (end, (body, disc, first)) in ends.iter().enumerate() {
            let Some(body) = body.as_ref().filter(|_| *first) else { continue };
            // A body fixed to a member is at both ends: it is told once, at its disc.
            if *disc || !fixed {
                slots.brakes[end] =
                    train.brakes.iter().filter(|brake| brake.body == *body).collect();
            }
            if *disc && speed(*body).is_some() {
                slots.arrows[end] = Some(*body);
            }
        }
        // Two ends that turn alike need one arrow.
        if let [Some(left), Some(right)] = slots.arrows
            && speed(left) == speed(right)
        {
            slots.arrows[1] = None;
        }
        slots
    }

    fn middle(&self) -> f64 {
        let words = [self.name, self.text].map(|text| font::width(text, pen::LABEL, false));
        let graphic = if self.elastic || self.backlash { ZIGZAG + 12.0 } else { 16.0 };
        words.iter().copied().fold(graphic, f64::max) + 10.0
    }

    fn end(&self, end: usize) -> f64 {
        let arrow = self.arrows.get(end).is_some_and(Option::is_some);
        let brakes = self.brakes.get(end).map_or(0, Vec::len);
        let lead = match (arrow, brakes) {
            (true, _) => ARROW_SLOT,
            (false, 0) => 6.0,
            (false, _) => 14.0,
        };
        lead + BRAKE_SLOT * brakes as f64
    }
}

/// The length a bar needs.
pub fn least_length(train: &Schematic, order: &Order, edge: usize) -> f64 {
    let slots = Slots::of(train, order, edge, false);
    slots.end(0) + slots.middle() + slots.end(1)
}

/// A shaft, with what sits on it.
pub fn bar(pen: &mut Pen, train: &Schematic, order: &Order, bar: &Bar, sheet: f64) {
    let Some(edge) = order.edges.get(bar.edge) else { return };
    // The edge's first node may stand at either end.
    let flipped = match (bar.left, bar.right) {
        (Some(left), _) => left != edge.nodes[0],
        (None, Some(right)) => right == edge.nodes[0],
        (None, None) => false,
    };
    let slots = Slots::of(train, order, bar.edge, flipped);
    let inks = {
        let mut bodies = edge.bodies;
        if flipped {
            bodies.swap(0, 1);
        }
        bodies.map(|body| body.map_or(Ink::Sub, |body| side_of(train, body).ink()))
    };
    let (start, stop) = (bar.from + slots.end(0), bar.to - slots.end(1));
    let middle = (start + stop) / 2.0;
    let y = bar.y;
    if slots.elastic {
        let half = ZIGZAG / 2.0;
        pen.line([bar.from, y], [middle - half, y], inks[0], SHAFT);
        pen.line([middle + half, y], [bar.to, y], inks[1], SHAFT);
        let mut points = vec![[middle - half - 1.0, y]];
        for turn in 0..6 {
            let x = middle - half + ZIGZAG * (f64::from(turn) + 0.5) / 6.0;
            points.push([x, y + if turn % 2 == 0 { -8.0 } else { 8.0 }]);
        }
        points.push([middle + half + 1.0, y]);
        pen.path(&points, inks[0], 2.2, Dash::Solid);
    } else {
        pen.line([bar.from, y], [middle, y], inks[0], SHAFT);
        pen.line([middle, y], [bar.to, y], inks[1], SHAFT);
    }
    if slots.backlash {
        // The play: a gap with the flanks of a claw.
        let x = if slots.elastic { middle + ZIGZAG / 2.0 + 10.0 } else { middle };
        pen.rectangle([x - 2.5, y - SHAFT], [5.0, 2.0 * SHAFT], Ink::Paper, 1.0);
        for (shift, ink) in [(-3.5, inks[0]), (3.5, inks[1])] {
            pen.line([x + shift, y - 7.0], [x + shift, y + 7.0], ink, 2.0);
        }
    }
    let middle_style = pen::label(Ink::Ink, Anchor::Middle);
    let grey = pen::label(Ink::Sub, Anchor::Middle);
    let up = if slots.elastic || slots.backlash { 16.0 } else { 12.0 };
    pen.text(
        [middle, y - up - if slots.text.is_empty() { 0.0 } else { 13.0 }],
        slots.name,
        middle_style,
    );
    pen.text([middle, y - up], slots.text, grey);
    for (end, (edge_x, sign)) in [(bar.from, 1.0), (bar.to, -1.0)].into_iter().enumerate() {
        let mut x = edge_x;
        if let Some(body) = slots.arrows.get(end).copied().flatten() {
            turning(pen, train, body, [x + sign * 22.0, y], sign);
            x += sign * ARROW_SLOT;
        } else {
            x += sign * 8.0;
        }
        for view in slots.brakes.get(end).into_iter().flatten() {
            brake(
                pen,
                view,
                [x + sign * BRAKE_SLOT / 2.0, y],
                side_of(train, view.body).ink(),
                sheet,
            );
            x += sign * BRAKE_SLOT;
        }
    }
}

/// An arrow across the shaft, up for forward, with the speed below.
fn turning(pen: &mut Pen, train: &Schematic, body: usize, at: [f64; 2], sign: f64) {
    let Some(view) = train.bodies.get(body) else { return };
    let Some((speed, forward)) = &view.speed else { return };
    let [x, y] = at;
    pen.rectangle([x - 4.0, y - SHAFT], [8.0, 2.0 * SHAFT], Ink::Paper, 1.0);
    let (tail, head) = if *forward { (y + 14.0, y - 17.0) } else { (y - 17.0, y + 14.0) };
    marks::arrow(pen, [x, tail], [x, head], view.side.ink(), 1.5);
    let wide = font::width(speed, pen::LABEL, true);
    let left = if sign > 0.0 { x - 18.0 } else { x + 18.0 - wide };
    pen.text([left, y + 28.0], speed, pen::bold(view.side.text(), Anchor::Start));
}

/// Pads on a thin disc; hatched where they are held by the frame.
fn brake(pen: &mut Pen, view: &BrakeView, at: [f64; 2], ink: Ink, sheet: f64) {
    let [x, y] = at;
    let reach = 26.0;
    pen.rectangle([x - 2.0, y - reach], [4.0, 2.0 * reach], ink, 1.0);
    for sign in [-1.0, 1.0] {
        let outer = y + sign * (reach + 7.0);
        let inner = y + sign * (reach - 8.0);
        let (top, bottom) = (outer.min(inner), outer.max(inner));
        for side in [-1.0, 1.0] {
            let left = if side < 0.0 { x - 9.0 } else { x + 3.5 };
            pen.rectangle([left, top], [5.5, bottom - top], Ink::Ink, 1.0);
        }
        let bridge = if sign < 0.0 { outer } else { outer - 4.5 };
        pen.rectangle([x - 9.0, bridge], [18.0, 4.5], Ink::Ink, 1.0);
    }
    if view.grounded {
        let floor = y + reach + 8.0;
        marks::ground(pen, [x - 10.0, floor], [x + 10.0, floor], [0.0, 1.0]);
    }
    let style = pen::label(Ink::Ink, Anchor::Start);
    for (place, (text, ink)) in
        [(&view.name, Ink::Ink), (&view.text, Ink::Sub)].into_iter().enumerate()
    {
        let wide = font::width(text, pen::LABEL, false);
        let left = (x - wide / 2.0).min(sheet - 4.0 - wide).max(4.0);
        let at = [left, y - reach - 26.0 + 13.0 * place as f64];
        pen.text(at, text, TextStyle { ink, ..style });
    }
}

/// Motors and loads of one body above a point of it.
pub fn actors(pen: &mut Pen, train: &Schematic, body: usize, foot: [f64; 2], y: f64, sheet: f64) {
    let acting: Vec<&Actor> = train.actors.iter().filter(|actor| actor.body == body).collect();
    let side = side_of(train, body);
    let shown = acting.len().min(2);
    let x = foot[0];
    for (place, actor) in acting.iter().take(2).enumerate() {
        let x = x + if shown == 2 { -11.0 + 22.0 * place as f64 } else { 0.0 };
        pen.ring([x, y], 9.0, 1.8, side.ink());
        let letter = if actor.motor { "M" } else { "L" };
        pen.text([x, y + 3.9], letter, pen::bold(side.text(), Anchor::Middle));
        let (from, to) = ([x, y + 10.0], [x, foot[1] - 1.0]);
        if actor.drives {
            marks::arrow(pen, from, to, side.ink(), 1.5);
        } else {
            marks::arrow(pen, to, from, side.ink(), 1.5);
        }
    }
    let right = x < sheet / 2.0;
    let reach = if shown == 2 { 25.0 } else { 14.0 };
    let (at, anchor) = if right { (x + reach, Anchor::Start) } else { (x - reach, Anchor::End) };
    let strong = pen::bold(side.text(), anchor);
    let grey = pen::label(Ink::Sub, anchor);
    match acting.as_slice() {
        [actor] => {
            pen.text([at, y - 1.5], &actor.name, strong);
            pen.text([at, y + 11.5], &actor.text, grey);
        }
        several => {
            let top = y + 3.5 - 6.5 * (several.len().clamp(1, 4) - 1) as f64;
            for (place, actor) in several.iter().take(4).enumerate() {
                let at_line = top + 13.0 * place as f64;
                if right {
                    pen.run_of_text(
                        [at, at_line],
                        6.0,
                        &[(&actor.name, strong), (&actor.text, grey)],
                    );
                } else {
                    let wide = font::width(&actor.text, pen::LABEL, false);
                    pen.text([at, at_line], &actor.text, grey);
                    let gap = if actor.text.is_empty() { 0.0 } else { 6.0 };
                    pen.text([at - wide - gap, at_line], &actor.name, strong);
                }
            }
        }
    }
}
