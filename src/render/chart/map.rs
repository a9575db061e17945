//! Map of a sweep: each cell says how near to slipping the gear came, or how often it slipped.

use super::axes::{self, Axes, Sheet};
use super::clip::Frame;
use super::drawing::{Anchor, Dash, Drawing, Group};
use super::font;
use super::marks;
use super::number::{alike, fixed};
use super::palette::Ink;
use super::pen::{self, Pen};

/// What the chart shows.
#[derive(Clone, Debug, PartialEq)]
pub struct MapChart {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// Bold heading.
    pub name: String,
    /// Parameter across.
    pub across: Parameter,
    /// Parameter upwards; one value where only one parameter was varied.
    pub up: Parameter,
    /// Cells row by row from the lowest, each row from the left.
    pub cells: Vec<Cell>,
    /// Place of the design value in `across` and `up`, where it is one of the values.
    pub design: Option<[usize; 2]>,
    /// Share of the pull-out torque from which a met cell counts as near, 0 to 1.
    pub near: f64,
    /// Size.
    pub sheet: Sheet,
}

/// A varied parameter with its values in display units.
#[derive(Clone, Debug, PartialEq)]
pub struct Parameter {
    /// In words.
    pub name: String,
    /// Unit as printed; empty for none.
    pub unit: String,
    /// Values, rising.
    pub values: Vec<f64>,
}

/// What one run of the sweep gave.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cell {
    /// Verdict; `None` when it cannot be told.
    pub met: Option<bool>,
    /// Largest share of the pull-out torque, 0 to 1; `None` without a magnetic gear.
    pub peak_share: Option<f64>,
    /// Slips of all gears.
    pub slips: u32,
    /// Whether a gear was still slipping at the end.
    pub still_slipping: bool,
}

/// A fill and its words in the key.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
enum Look {
    Met,
    Near,
    OtherFault,
    Few,
    Some,
    Many,
    Unknown,
}

impl Look {
    fn of(cell: &Cell, near: f64) -> Self {
        match (cell.met, cell.slips) {
            (None, _) => Self::Unknown,
            (Some(true), _) if cell.peak_share.is_some_and(|share| share > near) => Self::Near,
            (Some(true), _) => Self::Met,
            (Some(false), 0) => Self::OtherFault,
            (Some(false), 1..=5) => Self::Few,
            (Some(false), 6..=20) => Self::Some,
            (Some(false), _) => Self::Many,
        }
    }

    fn ink(self) -> Ink {
        match self {
            Self::Met => Ink::Allowed,
            Self::Near => Ink::Near,
            Self::OtherFault | Self::Few => Ink::FewSlips,
            Self::Some => Ink::SomeSlips,
            Self::Many => Ink::ManySlips,
            Self::Unknown => Ink::Wash,
        }
    }

    fn words(self, near: f64, shares: bool) -> String {
        match self {
            Self::Met if shares => "met: peak share, %".to_owned(),
            Self::Met => "met".to_owned(),
            Self::Near => format!("met, share above {}", super::number::percent(near)),
            Self::OtherFault => "not met, no slip".to_owned(),
            Self::Few => "not met: 1 to 5 slips".to_owned(),
            Self::Some => "not met: 6 to 20 slips".to_owned(),
            Self::Many => "not met: more than 20".to_owned(),
            Self::Unknown => "cannot be told".to_owned(),
        }
    }
}

const TOP: f64 = 40.0;
const FOOT: f64 = 38.0;
const KEY: f64 = 156.0;

/// Draws the chart.
pub fn map_chart(input: &MapChart) -> Drawing {
    let (columns, rows) = (input.across.values.len().max(1), input.up.values.len().max(1));
    let usual =
        if rows == 1 { 130.0 } else { (TOP + FOOT + 26.0 * rows as f64).clamp(220.0, 430.0) };
    let sheet = input.sheet.sound();
    let height = sheet.height.unwrap_or(usual);
    let frame = Frame {
        left: axes::LEFT,
        top: TOP,
        width: sheet.width - axes::LEFT - KEY,
        height: height - TOP - FOOT,
    };
    let grid = Grid { frame, columns, rows };
    let mut pen = Pen::new();
    let shares = input.cells.iter().any(|cell| cell.peak_share.is_some());
    let note =
        if shares { "peak share in % where it holds, number of slips where not" } else { "" };
    axes::heading(&mut pen, [frame.left, 12.0], &input.name, note);
    pen.text([frame.left, 27.0], &named(&input.up), pen::label(Ink::Sub, Anchor::Start));
    let numbers = columns <= 15 && rows <= 12 && frame.width / columns as f64 >= 24.0;
    let axes = Axes { frame, across: [0.0, columns as f64], up: [0.0, rows as f64] };
    pen.open(axes.group("map"));
    for (place, cell) in input.cells.iter().take(columns * rows).enumerate() {
        grid.cell(&mut pen, place % columns, place / columns, cell, input.near, numbers);
    }
    border(&mut pen, &grid, &input.cells);
    if let Some([column, row]) = input.design {
        let [x, y] = grid.corner(column, row);
        let [w, h] = grid.size();
        pen.open(Group::class("m").with("kind", "design"));
        pen.frame([x + 1.0, y + 1.0], [w - 2.0, h - 2.0], Ink::Ink, 1.8);
        pen.close();
    }
    pen.close();
    numbers_left(&mut pen, &grid, &input.up);
    numbers_below(&mut pen, &grid, &input.across);
    key(&mut pen, input, frame.right() + 14.0, shares);
    pen.finish(&input.id, &input.title, sheet.width, height)
}

fn named(parameter: &Parameter) -> String {
    if parameter.unit.is_empty() {
        parameter.name.clone()
    } else {
        format!("{}, {}", parameter.name, parameter.unit)
    }
}

struct Grid {
    frame: Frame,
    columns: usize,
    rows: usize,
}

impl Grid {
    fn size(&self) -> [f64; 2] {
        [self.frame.width / self.columns as f64, self.frame.height / self.rows as f64]
    }

    /// Upper left corner; row 0 is the lowest.
    fn corner(&self, column: usize, row: usize) -> [f64; 2] {
        let [w, h] = self.size();
        [self.frame.left + w * column as f64, self.frame.bottom() - h * (row as f64 + 1.0)]
    }

    fn cell(
        &self,
        pen: &mut Pen,
        column: usize,
        row: usize,
        cell: &Cell,
        near: f64,
        numbers: bool,
    ) {
        let look = Look::of(cell, near);
        let ([x, y], [w, h]) = (self.corner(column, row), self.size());
        // Cells without numbers touch; each reaches a little under the next, or a seam would show.
        let (corner, size) = if numbers {
            ([x + 1.0, y + 1.0], [w - 2.0, h - 2.0])
        } else {
            let right = if column + 1 < self.columns { 0.5 } else { 0.0 };
            let above = if row + 1 < self.rows { 0.5 } else { 0.0 };
            ([x, y - above], [w + right, h + above])
        };
        pen.open(Group::class("c").with("column", column.to_string()).with("row", row.to_string()));
        pen.rectangle(corner, size, look.ink(), 1.0);
        if cell.still_slipping {
            let frame = Frame { left: corner[0], top: corner[1], width: size[0], height: size[1] };
            marks::hatch(pen, &frame, Ink::Paper);
        }
        if numbers {
            let (text, style) = match (cell.met, cell.peak_share) {
                (Some(false), _) if cell.slips > 0 => {
                    (cell.slips.to_string(), pen::bold(Ink::Ink, Anchor::Middle))
                }
                (Some(false), Some(share)) => {
                    (fixed(100.0 * share, 0), pen::bold(Ink::Ink, Anchor::Middle))
                }
                (Some(true), Some(share)) => {
                    (fixed(100.0 * share, 0), pen::label(Ink::Ink, Anchor::Middle))
                }
                (None, _) => ("–".to_owned(), pen::label(Ink::Sub, Anchor::Middle)),
                _ => (String::new(), pen::label(Ink::Ink, Anchor::Middle)),
            };
            let middle = [x + w / 2.0, y + h / 2.0];
            let place = [middle[0], middle[1] + 3.9];
            if cell.still_slipping {
                pen.text_on_plate(place, &text, style);
            } else {
                pen.text(place, &text, style);
            }
            match (text.is_empty(), cell.met) {
                (true, Some(true)) => marks::tick(pen, middle, Ink::Ink),
                (true, Some(false)) => marks::not_met(pen, middle),
                _ => {}
            }
        }
        pen.close();
    }
}

/// The staircase between met and not met.
fn border(pen: &mut Pen, grid: &Grid, cells: &[Cell]) {
    let met = |column: usize, row: usize| {
        (column < grid.columns && row < grid.rows)
            .then(|| cells.get(row * grid.columns + column))
            .flatten()
            .and_then(|cell| cell.met)
    };
    let [w, h] = grid.size();
    pen.open(Group::class("m").with("kind", "border"));
    for row in 0..grid.rows {
        for column in 0..grid.columns {
            let Some(here) = met(column, row) else { continue };
            let [x, y] = grid.corner(column, row);
            if met(column + 1, row).is_some_and(|other| other != here) {
                pen.path(&[[x + w, y - 0.8], [x + w, y + h + 0.8]], Ink::Ink, 1.6, Dash::Solid);
            }
            if met(column, row + 1).is_some_and(|other| other != here) {
                pen.path(&[[x - 0.8, y], [x + w + 0.8, y]], Ink::Ink, 1.6, Dash::Solid);
            }
        }
    }
    pen.close();
}

fn numbers_left(pen: &mut Pen, grid: &Grid, parameter: &Parameter) {
    let [_, h] = grid.size();
    let every = (13.0 / h).ceil().max(1.0) as usize;
    for (row, text) in alike(&parameter.values).iter().enumerate().step_by(every) {
        let [x, y] = grid.corner(0, row);
        let place = [x - 8.0, y + h / 2.0 + 3.9];
        pen.text(place, text, pen::label(Ink::Sub, Anchor::End));
    }
}

fn numbers_below(pen: &mut Pen, grid: &Grid, parameter: &Parameter) {
    let [w, _] = grid.size();
    let texts = alike(&parameter.values);
    let widest = texts.iter().map(|text| font::width(text, pen::LABEL, false)).fold(1.0, f64::max);
    let every = ((widest + 8.0) / w).ceil().max(1.0) as usize;
    for (column, text) in texts.iter().enumerate().step_by(every) {
        let x = grid.corner(column, 0)[0] + w / 2.0;
        let place = [x, grid.frame.bottom() + 15.0];
        pen.text(place, text, pen::label(Ink::Sub, Anchor::Middle));
    }
    let place = [grid.frame.right(), grid.frame.bottom() + 30.0];
    pen.text(place, &named(parameter), pen::label(Ink::Sub, Anchor::End));
}

fn key(pen: &mut Pen, input: &MapChart, left: f64, shares: bool) {
    let mut looks: Vec<Look> = input.cells.iter().map(|cell| Look::of(cell, input.near)).collect();
    looks.sort();
    looks.dedup();
    let mut y = TOP + 8.0;
    let mut line = |pen: &mut Pen, words: &str, swatch: &dyn Fn(&mut Pen, [f64; 2])| {
        swatch(pen, [left, y]);
        pen.text([left + 20.0, y + 10.0], words, pen::label(Ink::Ink, Anchor::Start));
        y += 19.5;
    };
    for look in looks {
        line(pen, &look.words(input.near, shares), &|pen, corner| {
            pen.rectangle(corner, [13.0, 12.0], look.ink(), 1.0);
        });
    }
    if input.cells.iter().any(|cell| cell.still_slipping) {
        line(pen, "still slipping at the end", &|pen, [x, y]| {
            pen.rectangle([x, y], [13.0, 12.0], Ink::ManySlips, 1.0);
            marks::hatch(pen, &Frame { left: x, top: y, width: 13.0, height: 12.0 }, Ink::Paper);
        });
    }
    if input.design.is_some() {
        line(pen, "design value", &|pen, [x, y]| {
            pen.frame([x + 0.5, y + 0.5], [12.0, 11.0], Ink::Ink, 1.8);
        });
    }
}
