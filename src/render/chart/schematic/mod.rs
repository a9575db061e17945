//! The train as a picture: bodies as discs, gears in section, what drives and what brakes.

mod device;
mod layout;
mod order;
mod parts;
pub mod view;
mod words;

use super::axes::Sheet;
use super::drawing::{Anchor, Dash, Drawing, Group};
use super::palette::Ink;
use super::pen::{self, Pen};
use layout::{BELOW, DEVICE, Layout, Spot};
use order::{Node, Order, is_member_only};
use parts::SHAFT;
use view::{Link, Port, Schematic};

/// Most bodies and links that can still be told apart on a page or two.
const MOST: usize = 160;

/// Draws a train on a sheet 720 px wide.
pub fn schematic(train: &Schematic) -> Drawing {
    let width = Sheet::PAGE.width;
    if train.bodies.len() + train.links.len() > MOST {
        let mut pen = Pen::new();
        let words = format!("{} bodies: too many for a picture", train.bodies.len());
        pen.text([width / 2.0, 30.0], &words, pen::label(Ink::Sub, Anchor::Middle));
        return pen.finish(&train.id, &train.title, width, 48.0);
    }
    let order = order::order(train);
    let layout = layout::lay_out(train, &order, width);
    let mut pen = Pen::new();
    loops(&mut pen, train, &order, &layout);
    for fold in &layout.folds {
        let body = order.edges.get(fold.edge).and_then(|edge| edge.bodies[0]);
        let ink = body.map_or(Ink::Sub, |body| parts::side_of(train, body).ink());
        pen.path(&fold.points, ink, SHAFT, Dash::Solid);
    }
    for bar in &layout.bars {
        pen.open(Group::class("shaft"));
        parts::bar(&mut pen, train, &order, bar, width);
        pen.close();
    }
    for spot in &layout.spots {
        draw_spot(&mut pen, train, &order, spot, connector(&layout, spot));
    }
    if layout.spots.is_empty() {
        pen.text([width / 2.0, 30.0], "no bodies", pen::label(Ink::Sub, Anchor::Middle));
    }
    pen.finish(&train.id, &train.title, width, layout.height.max(48.0).ceil())
}

/// Where a branch runs down from a thing.
fn connector(layout: &Layout, spot: &Spot) -> Option<f64> {
    let fold = layout.folds.iter().find(|fold| spot.down.contains(&fold.edge))?;
    fold.points.first().map(|point| point[0])
}

fn draw_spot(pen: &mut Pen, train: &Schematic, order: &Order, spot: &Spot, clear: Option<f64>) {
    let width = Sheet::PAGE.width;
    let Some(node) = order.nodes.get(spot.node).copied() else { return };
    let name = match node {
        Node::Disc(body) => train.bodies.get(body).map_or("", |body| body.name.as_str()),
        Node::Device(_) => "device",
    };
    pen.open(Group::class("thing").with("name", name));
    let above = spot.y - DEVICE - 27.0;
    match node {
        Node::Disc(body) => {
            parts::disc(pen, train, body, spot);
            let top = spot.y - parts::disc_half(train, body);
            if train.actors.iter().any(|actor| actor.body == body) {
                parts::actors(pen, train, body, [spot.x, top], above, width);
            }
            held_disc(pen, train, body, spot);
        }
        Node::Device(link) => {
            device::draw(pen, train, order, spot);
            member_actors(pen, train, order, spot, link, above, width);
        }
    }
    let lines = words::lines(train, node);
    words::draw(pen, &lines, spot.x, spot.y + BELOW, clear, width);
    pen.close();
}

/// A body with a shaft to the frame is hatched at its foot.
fn held_disc(pen: &mut Pen, train: &Schematic, body: usize, spot: &Spot) {
    let held = train.links.iter().any(|link| {
        link.ports().contains(&Port::Ground)
            && link.ports().contains(&Port::Body(body))
            && !link.is_device()
    });
    if held {
        let foot = spot.y + parts::disc_half(train, body);
        pen.line([spot.x, foot], [spot.x, foot + 5.0], Ink::Ink, 2.0);
        super::marks::ground(
            pen,
            [spot.x - 11.0, foot + 5.0],
            [spot.x + 11.0, foot + 5.0],
            [0.0, 1.0],
        );
    }
}

/// Motors and loads on a body that is drawn as a member only: above its shaft.
fn member_actors(
    pen: &mut Pen,
    train: &Schematic,
    order: &Order,
    spot: &Spot,
    link: usize,
    above: f64,
    width: f64,
) {
    let Some(link) = train.links.get(link) else { return };
    for (port, end) in link.ports().iter().enumerate() {
        let Port::Body(body) = end else { continue };
        if !is_member_only(train, *body) || !train.actors.iter().any(|actor| actor.body == *body) {
            continue;
        }
        let at = |edge: Option<usize>| {
            edge.and_then(|edge| order.edges.get(edge)).is_some_and(|edge| {
                edge.nodes
                    .iter()
                    .zip(&edge.ports)
                    .any(|(node, seat)| *node == spot.node && *seat == Some(port))
            })
        };
        let x = if at(spot.left) {
            spot.x - spot.half - 10.0
        } else if at(spot.right) {
            spot.x + spot.half + 10.0
        } else {
            spot.x
        };
        let foot = if at(spot.left) || at(spot.right) { spot.y - SHAFT } else { spot.y - DEVICE };
        parts::actors(pen, train, *body, [x, foot], above, width);
    }
}

/// Edges that close a loop: thin lines below the things they join.
fn loops(pen: &mut Pen, train: &Schematic, order: &Order, layout: &Layout) {
    for (place, edge) in order.loops.iter().enumerate() {
        let Some(edge) = order.edges.get(*edge) else { continue };
        let find = |node: usize| layout.spots.iter().find(|spot| spot.node == node);
        let (Some(a), Some(b)) = (find(edge.nodes[0]), find(edge.nodes[1])) else { continue };
        let level = a.y.max(b.y) + DEVICE + 4.0 + 4.0 * place as f64;
        let shift = 4.0;
        let points =
            [[a.x + shift, a.y], [a.x + shift, level], [b.x - shift, level], [b.x - shift, b.y]];
        pen.path(&points, Ink::Axis, 2.0, Dash::Solid);
        if let Some(Link::Shaft { name, .. }) = edge.shaft.and_then(|shaft| train.links.get(shaft))
        {
            let at = [(a.x + b.x) / 2.0, level + 3.9];
            pen.text_on_plate(at, name, pen::label(Ink::Ink, Anchor::Middle));
        }
    }
}
