//! Layout: lines of the train become rows on the sheet, with a place for every thing.

use super::order::{Line, Node, Order};
use super::parts;
use super::view::{Link, Schematic};
use super::words;

/// Half height of the largest disc, px.
pub const DISC: f64 = 58.0;
/// Half height of a device, px.
pub const DEVICE: f64 = 61.0;
/// Half width of a disc, px.
const DISC_HALF: f64 = 12.0;
/// Free margin left and right, px.
const MARGIN: f64 = 14.0;
/// From the axis to the first baseline below, px.
pub const BELOW: f64 = DEVICE + 20.0;
/// Room that a connector to the next row takes at the side, px.
const FOLD: f64 = 18.0;
/// Room above a device for its motors and loads, px.
const ACTORS: f64 = 44.0;

/// A node on the sheet.
#[derive(Clone, Debug, PartialEq)]
pub struct Spot {
    /// Place in the order's nodes.
    pub node: usize,
    /// Centre.
    pub x: f64,
    /// Axis.
    pub y: f64,
    /// Half width.
    pub half: f64,
    /// Edge that leaves to the left.
    pub left: Option<usize>,
    /// Edge that leaves to the right.
    pub right: Option<usize>,
    /// Edges that leave downwards.
    pub down: Vec<usize>,
}

/// An edge on the sheet, level from `from` to `to` (from < to).
#[derive(Clone, Debug, PartialEq)]
pub struct Bar {
    /// Place in the order's edges.
    pub edge: usize,
    /// Left end.
    pub from: f64,
    /// Right end.
    pub to: f64,
    /// Axis.
    pub y: f64,
    /// Node at the left end; `None` where it comes from a fold or a branch.
    pub left: Option<usize>,
    /// Node at the right end.
    pub right: Option<usize>,
}

/// A connector between rows.
#[derive(Clone, Debug, PartialEq)]
pub struct Fold {
    /// Place in the order's edges.
    pub edge: usize,
    /// Corners.
    pub points: Vec<[f64; 2]>,
}

/// Everything with its place.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Layout {
    /// Nodes.
    pub spots: Vec<Spot>,
    /// Level edges.
    pub bars: Vec<Bar>,
    /// Connectors.
    pub folds: Vec<Fold>,
    /// Height of the sheet.
    pub height: f64,
}

/// A row before it has a place.
#[derive(Clone, Debug)]
struct Row {
    nodes: Vec<usize>,
    edges: Vec<usize>,
    entry: Option<usize>,
    branch: bool,
    folds: bool,
    to_the_right: bool,
}

/// Lays a train out on a sheet of a width.
pub fn lay_out(train: &Schematic, order: &Order, width: f64) -> Layout {
    let desk = Desk { train, order, width };
    let mut layout = Layout::default();
    let mut top = 8.0;
    for line in order.lines.iter().filter(|line| line.root.is_none()) {
        top = desk.place_line(&mut layout, line, top);
    }
    layout.height = top;
    layout
}

struct Desk<'a> {
    train: &'a Schematic,
    order: &'a Order,
    width: f64,
}

impl Desk<'_> {
    fn node(&self, place: usize) -> Option<Node> {
        self.order.nodes.get(place).copied()
    }

    fn half(&self, node: usize) -> f64 {
        match self.node(node) {
            Some(Node::Device(link)) => match self.train.links.get(link) {
                Some(Link::MagneticGear { .. } | Link::Planetary { .. }) => 62.0,
                _ => 20.0,
            },
            _ => DISC_HALF,
        }
    }

    fn label_half(&self, node: usize) -> f64 {
        self.node(node).map_or(0.0, |node| words::width(self.train, node) / 2.0)
    }

    /// Least distance of the centres of two neighbours.
    fn pitch(&self, left: usize, right: usize, edge: usize) -> f64 {
        let bar =
            self.half(left) + parts::least_length(self.train, self.order, edge) + self.half(right);
        bar.max(self.label_half(left) + self.label_half(right) + 12.0)
    }

    fn margin(&self, node: usize) -> f64 {
        MARGIN + self.half(node).max(self.label_half(node))
    }

    /// A line as one row, or as several where it is too long.
    fn rows(&self, line: &Line) -> Vec<Row> {
        let pitches: Vec<f64> = line
            .nodes
            .windows(2)
            .zip(&line.edges)
            .map(|(pair, edge)| self.pitch(pair[0], pair[1], *edge))
            .collect();
        // Rows of about equal length, none longer than the sheet.
        let whole: f64 = pitches.iter().sum();
        let ends = [line.nodes.first(), line.nodes.last()];
        let margins: f64 = ends.iter().flatten().map(|node| self.margin(**node)).sum();
        let room = (self.width - margins - 2.0 * FOLD).max(1.0);
        let one = whole + margins <= self.width;
        let share = if one { whole } else { whole / (whole / room).ceil() };
        let mut rows = Vec::new();
        let mut row = Row {
            nodes: line.nodes.first().copied().into_iter().collect(),
            edges: Vec::new(),
            entry: line.root,
            branch: line.root.is_some(),
            folds: false,
            to_the_right: true,
        };
        let mut length = 0.0;
        let followers = line.nodes.iter().skip(1);
        for ((node, edge), pitch) in followers.zip(&line.edges).zip(&pitches) {
            length += pitch;
            let full = row.nodes.first().map_or(0.0, |first| self.margin(*first))
                + length
                + self.margin(*node)
                + 2.0 * FOLD
                > self.width;
            if !one && row.nodes.len() > 1 && (length > share + 1e-9 || full) {
                let to_the_right = !row.to_the_right;
                row.folds = true;
                let full = std::mem::replace(
                    &mut row,
                    Row {
                        nodes: vec![*node],
                        edges: Vec::new(),
                        entry: Some(*edge),
                        branch: false,
                        folds: false,
                        to_the_right,
                    },
                );
                rows.push(full);
                length = 0.0;
            } else {
                row.nodes.push(*node);
                row.edges.push(*edge);
            }
        }
        rows.push(row);
        rows
    }

    /// Places the rows of a line, each followed by the branches that hang on it.
    fn place_line(&self, layout: &mut Layout, line: &Line, top: f64) -> f64 {
        let mut top = top;
        for row in self.rows(line) {
            top = self.place(layout, &row, top);
            for branch in &self.order.lines {
                let (Some(root), Some(first)) = (branch.root, branch.nodes.first()) else {
                    continue;
                };
                if row.nodes.contains(&self.order.other(root, *first)) {
                    top = self.place_line(layout, branch, top);
                }
            }
        }
        top
    }

    /// Gives a row its place below `top`; returns where the next one begins.
    fn place(&self, layout: &mut Layout, row: &Row, top: f64) -> f64 {
        let y = top + self.room_above(row);
        let entry = row.entry.and_then(|edge| self.start(layout, row, edge, y));
        let to_the_right = entry.as_ref().map_or(row.to_the_right, |entry| entry.to_the_right);
        // Distances from the left for rows that run right, mirrored for those that run left.
        let first = row.nodes.first().copied().unwrap_or(0);
        let last = row.nodes.last().copied().unwrap_or(0);
        let lead = entry.as_ref().map_or(0.0, |entry| {
            let least = parts::least_length(self.train, self.order, entry.edge) + self.half(first);
            least.max(self.label_half(first) + 12.0)
        });
        let start = match &entry {
            Some(entry) if to_the_right => entry.x,
            Some(entry) => self.width - entry.x,
            None => self.margin(first),
        };
        let pitches: Vec<f64> = row
            .nodes
            .windows(2)
            .zip(&row.edges)
            .map(|(pair, edge)| self.pitch(pair[0], pair[1], *edge))
            .collect();
        let needed = start
            + lead
            + pitches.iter().sum::<f64>()
            + self.margin(last)
            + if row.folds || row.branch { FOLD } else { 0.0 };
        let stretches = pitches.len() as f64 + if entry.is_some() { 1.0 } else { 0.0 };
        // A branch does not spread over the sheet for its own sake.
        let most = if row.branch { 40.0 } else { 400.0 };
        let stretch = ((self.width - needed) / stretches.max(1.0)).min(most);
        let lone = stretches == 0.0;
        let mut along = if lone { self.width / 2.0 } else { start };
        if entry.is_some() {
            along += lead + stretch;
        }
        let mirror = |along: f64| if to_the_right { along } else { self.width - along };
        let first_spot = layout.spots.len();
        for (place, node) in row.nodes.iter().enumerate() {
            if place > 0 {
                along += pitches.get(place - 1).copied().unwrap_or(0.0) + stretch;
            }
            let before = if place > 0 {
                row.edges.get(place - 1).copied()
            } else {
                entry.as_ref().map(|e| e.edge)
            };
            let after = row.edges.get(place).copied();
            let (left, right) = if to_the_right { (before, after) } else { (after, before) };
            let half = self.half(*node);
            layout.spots.push(Spot {
                node: *node,
                x: mirror(along),
                y,
                half,
                left,
                right,
                down: Vec::new(),
            });
        }
        let placed: Vec<Spot> = layout.spots.iter().skip(first_spot).cloned().collect();
        for (pair, edge) in placed.windows(2).zip(&row.edges) {
            let (a, b) = if to_the_right { (&pair[0], &pair[1]) } else { (&pair[1], &pair[0]) };
            layout.bars.push(Bar {
                edge: *edge,
                from: a.x + a.half,
                to: b.x - b.half,
                y,
                left: Some(a.node),
                right: Some(b.node),
            });
        }
        if let (Some(entry), Some(spot)) = (entry, placed.first()) {
            layout.bars.push(if to_the_right {
                Bar {
                    edge: entry.edge,
                    from: entry.x,
                    to: spot.x - spot.half,
                    y,
                    left: None,
                    right: Some(spot.node),
                }
            } else {
                Bar {
                    edge: entry.edge,
                    from: spot.x + spot.half,
                    to: entry.x,
                    y,
                    left: Some(spot.node),
                    right: None,
                }
            });
            layout.folds.push(Fold { edge: entry.edge, points: entry.points });
        }
        y + BELOW + self.lines_below(row) * words::PITCH + 4.0
    }

    fn room_above(&self, row: &Row) -> f64 {
        let acted = row.nodes.iter().any(|node| match self.node(*node) {
            Some(Node::Disc(body)) => self.train.actors.iter().any(|actor| actor.body == body),
            Some(Node::Device(link)) => self.train.links.get(link).is_some_and(|link| {
                link.ports().iter().any(|port| {
                    self.train
                        .actors
                        .iter()
                        .any(|actor| *port == super::view::Port::Body(actor.body))
                })
            }),
            None => false,
        });
        DEVICE + 8.0 + if acted { ACTORS } else { 0.0 }
    }

    fn lines_below(&self, row: &Row) -> f64 {
        row.nodes
            .iter()
            .filter_map(|node| self.node(*node))
            .map(|node| words::lines(self.train, node).len())
            .max()
            .unwrap_or(0) as f64
    }

    /// Where a row's first bar begins, and the connector that leads there.
    fn start(&self, layout: &mut Layout, row: &Row, edge: usize, y: f64) -> Option<Entry> {
        let first = row.nodes.first().copied()?;
        let parent = self.order.other(edge, first);
        let place = layout.spots.iter().position(|spot| spot.node == parent)?;
        let spot = layout.spots.get_mut(place)?;
        if !row.branch {
            // A fold: out to the side, down, and back.
            let x = if row.to_the_right { 8.0 } else { self.width - 8.0 };
            let side = if row.to_the_right { spot.x - spot.half } else { spot.x + spot.half };
            if row.to_the_right {
                spot.left = Some(edge);
            } else {
                spot.right = Some(edge);
            }
            let points = vec![[side, spot.y], [x, spot.y], [x, y]];
            return Some(Entry { edge, x, points, to_the_right: row.to_the_right });
        }
        let to_the_right = spot.x < self.width / 2.0 + 1.0;
        let from = super::device::hanging_point(self.train, self.order, spot, edge);
        spot.down.push(edge);
        // Several branches of one node stand side by side.
        let shift = 9.0 * (spot.down.len() - 1) as f64;
        let x = from[0] + if to_the_right { -shift } else { shift };
        let points = vec![[x, from[1]], [x, y]];
        Some(Entry { edge, x, points, to_the_right })
    }
}

struct Entry {
    edge: usize,
    x: f64,
    points: Vec<[f64; 2]>,
    to_the_right: bool,
}
