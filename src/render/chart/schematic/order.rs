//! Order: which things stand side by side on a line, and which lines branch from it.
//!
//! Bodies and devices are the nodes of a graph, shafts and ports its edges. A body that only
//! joins one shaft to one port is part of the device's picture and no node. The longest path is
//! the main line; what is left hangs below it.

use super::view::{Link, Port, Schematic};

/// A thing with a place of its own.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Node {
    /// A body, as a disc.
    Disc(usize),
    /// A link that is not a shaft.
    Device(usize),
}

/// What joins two nodes.
#[derive(Clone, Debug, PartialEq)]
pub struct Edge {
    /// Places of the two nodes.
    pub nodes: [usize; 2],
    /// For each node that is a device: which of its ports.
    pub ports: [Option<usize>; 2],
    /// The shaft between them, as a place in the links; `None` for a body fixed to a member.
    pub shaft: Option<usize>,
    /// Body whose colour and speed the edge shows at each end.
    pub bodies: [Option<usize>; 2],
}

/// A line of nodes, each joined to the next by an edge.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Line {
    /// Places of the nodes.
    pub nodes: Vec<usize>,
    /// Places of the edges, one less than nodes.
    pub edges: Vec<usize>,
    /// For a branch: the edge it hangs on, whose first or second node is on a line before.
    pub root: Option<usize>,
}

/// The whole order.
#[derive(Clone, Debug, PartialEq)]
pub struct Order {
    /// Nodes.
    pub nodes: Vec<Node>,
    /// Edges.
    pub edges: Vec<Edge>,
    /// The main line first, then branches.
    pub lines: Vec<Line>,
    /// Edges that close a loop.
    pub loops: Vec<usize>,
}

/// Finds the order of a train.
pub fn order(train: &Schematic) -> Order {
    let nodes = nodes(train);
    let edges = edges(train, &nodes);
    let mut order = Order { nodes, edges, lines: Vec::new(), loops: Vec::new() };
    let mut seen = vec![false; order.nodes.len()];
    let mut used = vec![false; order.edges.len()];
    while let Some(start) = (0..order.nodes.len()).find(|node| !is_set(&seen, *node)) {
        let main = order.main_line(train, start);
        order.take(main, &mut seen, &mut used);
        // Branches of what stands already, the longest first from each place.
        while let Some(branch) = order.next_branch(train, &seen, &used) {
            order.take(branch, &mut seen, &mut used);
        }
    }
    order.loops = (0..order.edges.len()).filter(|edge| !is_set(&used, *edge)).collect();
    order
}

fn is_set(flags: &[bool], place: usize) -> bool {
    flags.get(place).copied().unwrap_or(true)
}

fn set(flags: &mut [bool], place: usize) {
    if let Some(flag) = flags.get_mut(place) {
        *flag = true;
    }
}

fn touches(link: &Link, body: usize) -> bool {
    link.ports().contains(&Port::Body(body))
}

/// A body that joins exactly one shaft to exactly one device is drawn as the device's member.
pub fn is_member_only(train: &Schematic, body: usize) -> bool {
    let (devices, shafts): (Vec<&Link>, Vec<&Link>) =
        train.links.iter().filter(|link| touches(link, body)).partition(|link| link.is_device());
    devices.len() == 1
        && shafts.len() == 1
        && !shafts.iter().any(|shaft| shaft.ports().contains(&Port::Ground))
}

fn nodes(train: &Schematic) -> Vec<Node> {
    let discs =
        (0..train.bodies.len()).filter(|body| !is_member_only(train, *body)).map(Node::Disc);
    let devices = train.links.iter().enumerate().filter(|(_, link)| link.is_device());
    discs.chain(devices.map(|(place, _)| Node::Device(place))).collect()
}

fn edges(train: &Schematic, nodes: &[Node]) -> Vec<Edge> {
    let find = |node: Node| nodes.iter().position(|other| *other == node);
    // The node that shows a body, and the port where it is a member.
    let seat = |body: usize| -> Option<(usize, Option<usize>)> {
        if let Some(disc) = find(Node::Disc(body)) {
            return Some((disc, None));
        }
        train.links.iter().enumerate().filter(|(_, link)| link.is_device()).find_map(
            |(place, link)| {
                let port = link.ports().iter().position(|port| *port == Port::Body(body))?;
                Some((find(Node::Device(place))?, Some(port)))
            },
        )
    };
    let mut edges = Vec::new();
    for (place, link) in train.links.iter().enumerate() {
        if let Link::Shaft { between: [Port::Body(a), Port::Body(b)], .. } = link
            && let (Some(one), Some(two)) = (seat(*a), seat(*b))
        {
            edges.push(Edge {
                nodes: [one.0, two.0],
                ports: [one.1, two.1],
                shaft: Some(place),
                bodies: [Some(*a), Some(*b)],
            });
        }
        if !link.is_device() {
            continue;
        }
        for (port, end) in link.ports().iter().enumerate() {
            let Port::Body(body) = end else { continue };
            if let (Some(device), Some(disc)) = (find(Node::Device(place)), find(Node::Disc(*body)))
            {
                edges.push(Edge {
                    nodes: [device, disc],
                    ports: [Some(port), None],
                    shaft: None,
                    bodies: [Some(*body), Some(*body)],
                });
            }
        }
    }
    edges.retain(|edge| edge.nodes[0] != edge.nodes[1]);
    edges
}

impl Order {
    /// The other end of an edge.
    pub fn other(&self, edge: usize, node: usize) -> usize {
        self.edges
            .get(edge)
            .map_or(node, |edge| if edge.nodes[0] == node { edge.nodes[1] } else { edge.nodes[0] })
    }

    fn around(&self, node: usize) -> impl Iterator<Item = usize> + '_ {
        (0..self.edges.len()).filter(move |edge| {
            self.edges.get(*edge).is_some_and(|edge| edge.nodes.contains(&node))
        })
    }

    /// The longest line from a node over unused edges to unseen nodes.
    fn reach(&self, train: &Schematic, from: usize, seen: &[bool], used: &[bool]) -> Line {
        let mut best = Line { nodes: vec![from], ..Line::default() };
        let mut stack = vec![best.clone()];
        // Trees have one way to each node; loops are cut where a way meets itself.
        let mut budget = 2000;
        while let Some(way) = stack.pop() {
            budget -= 1;
            if self.worth(train, &way) > self.worth(train, &best) {
                best = way.clone();
            }
            let Some(end) = way.nodes.last().copied().filter(|_| budget > 0) else { continue };
            for edge in self.around(end) {
                let next = self.other(edge, end);
                if is_set(seen, next) || is_set(used, edge) || way.nodes.contains(&next) {
                    continue;
                }
                let mut longer = way.clone();
                longer.nodes.push(next);
                longer.edges.push(edge);
                stack.push(longer);
            }
        }
        best
    }

    /// The longest line through the part of the train that holds a node, motors to the left.
    fn main_line(&self, train: &Schematic, start: usize) -> Line {
        let none = vec![false; self.nodes.len()];
        let unused = vec![false; self.edges.len()];
        let mut line = Line { nodes: vec![start], ..Line::default() };
        let part = self.part(start);
        // The longest line ends where only one edge leads on, if there is such a place.
        let ends: Vec<usize> =
            part.iter().copied().filter(|node| self.around(*node).count() < 2).collect();
        let starts = if ends.is_empty() { part } else { ends };
        for from in starts {
            let next = self.reach(train, from, &none, &unused);
            if self.worth(train, &next) > self.worth(train, &line) {
                line = next;
            }
        }
        let half = line.nodes.len() / 2;
        let driven = |nodes: &[usize]| {
            nodes.iter().any(|node| match self.nodes.get(*node) {
                Some(Node::Disc(body)) => {
                    train.actors.iter().any(|actor| actor.body == *body && actor.drives)
                }
                _ => false,
            })
        };
        let (left, right) = line.nodes.split_at(half);
        if driven(right) && !driven(left) {
            line.nodes.reverse();
            line.edges.reverse();
        }
        line
    }

    /// Nodes that hang together with a node.
    fn part(&self, start: usize) -> Vec<usize> {
        let mut part = vec![start];
        let mut place = 0;
        while let Some(node) = part.get(place).copied() {
            place += 1;
            for edge in self.around(node) {
                let next = self.other(edge, node);
                if !part.contains(&next) {
                    part.push(next);
                }
            }
        }
        part
    }

    /// Length of a line; one that passes a gear by its inner member is worth some nodes more, for
    /// an inner member has no way out below.
    fn worth(&self, train: &Schematic, line: &Line) -> usize {
        const DETOUR: usize = 6;
        let by_inner = line.edges.iter().filter_map(|edge| self.edges.get(*edge)).filter(|edge| {
            edge.nodes.iter().zip(&edge.ports).any(|(node, port)| {
                let gear = match self.nodes.get(*node) {
                    Some(Node::Device(link)) => train.links.get(*link),
                    _ => None,
                };
                matches!(gear, Some(Link::MagneticGear { .. } | Link::Planetary { .. }))
                    && *port == Some(0)
            })
        });
        line.nodes.len() + DETOUR * by_inner.count()
    }

    fn next_branch(&self, train: &Schematic, seen: &[bool], used: &[bool]) -> Option<Line> {
        let mut best: Option<Line> = None;
        for (place, edge) in self.edges.iter().enumerate() {
            let inside = edge.nodes.map(|node| is_set(seen, node));
            if is_set(used, place) || inside[0] == inside[1] {
                continue;
            }
            let start = if inside[0] { edge.nodes[1] } else { edge.nodes[0] };
            let mut line = self.reach(train, start, seen, used);
            line.root = Some(place);
            if best.as_ref().is_none_or(|best| line.nodes.len() > best.nodes.len()) {
                best = Some(line);
            }
        }
        best
    }

    fn take(&mut self, line: Line, seen: &mut [bool], used: &mut [bool]) {
        for node in &line.nodes {
            set(seen, *node);
        }
        for edge in line.edges.iter().chain(&line.root) {
            set(used, *edge);
        }
        self.lines.push(line);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::chart::palette::Side;
    use crate::render::chart::schematic::view::BodyView;

    fn body(name: &str) -> BodyView {
        BodyView {
            name: name.to_owned(),
            side: Side::Inner,
            inertia: 1.0,
            inertia_text: String::new(),
            referred_text: String::new(),
            speed: None,
        }
    }

    fn shaft(a: usize, b: usize) -> Link {
        Link::Shaft {
            name: String::new(),
            between: [Port::Body(a), Port::Body(b)],
            text: String::new(),
            elastic: true,
            backlash: false,
        }
    }

    #[test]
    fn members_that_only_join_are_part_of_the_gear() {
        let train = Schematic {
            bodies: ["motor", "inner", "outer", "pump"].map(body).to_vec(),
            links: vec![
                shaft(0, 1),
                shaft(2, 3),
                Link::MagneticGear {
                    name: String::new(),
                    members: [Port::Body(1), Port::Ground, Port::Body(2)],
                    counts: Default::default(),
                    text: String::new(),
                },
            ],
            ..Schematic::default()
        };
        let order = order(&train);
        assert_eq!(order.nodes, [Node::Disc(0), Node::Disc(3), Node::Device(2)]);
        assert_eq!(order.lines.len(), 1);
        assert_eq!(order.lines[0].nodes.len(), 3);
        assert!(order.loops.is_empty());
    }

    #[test]
    fn a_third_port_is_a_branch_and_a_ring_is_a_loop() {
        let mut train = Schematic {
            bodies: ["a", "b", "c", "d"].map(body).to_vec(),
            links: vec![
                Link::MagneticGear {
                    name: String::new(),
                    members: [Port::Body(0), Port::Body(1), Port::Body(2)],
                    counts: Default::default(),
                    text: String::new(),
                },
                shaft(2, 3),
            ],
            ..Schematic::default()
        };
        let found = order(&train);
        assert_eq!(found.lines.len(), 2);
        assert!(found.lines[1].root.is_some());
        train.links.push(shaft(0, 3));
        train.links.push(shaft(0, 1));
        let found = order(&train);
        assert!(!found.loops.is_empty());
    }
}
