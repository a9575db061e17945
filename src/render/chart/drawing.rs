//! A drawing: what a chart is made of, before it is written as SVG or PNG.

use super::palette::Ink;

/// A point in CSS pixels, y downwards.
pub type Point = [f64; 2];

/// A finished drawing; the same drawing always gives the same bytes.
#[derive(Clone, Debug, PartialEq)]
pub struct Drawing {
    /// Name of the file and head of all ids within, for example `run`.
    pub id: String,
    /// What it shows, for readers that cannot see it.
    pub title: String,
    /// Width, CSS px.
    pub width: f64,
    /// Height, CSS px.
    pub height: f64,
    /// Marks of the pen in order.
    pub marks: Vec<Mark>,
}

/// One mark of the pen, lengths in CSS px.
#[derive(Clone, Debug, PartialEq)]
pub enum Mark {
    /// Opens a group.
    Open(Group),
    /// Closes the last open group.
    Close,
    /// An opaque line through the points.
    Line {
        /// Corners.
        points: Vec<Point>,
        /// Colour.
        ink: Ink,
        /// Stroke width.
        width: f64,
        /// Broken or not.
        dash: Dash,
    },
    /// A filled area.
    Fill {
        /// Corners; the border closes by itself.
        points: Vec<Point>,
        /// Colour.
        ink: Ink,
        /// 1 is opaque.
        alpha: f64,
    },
    /// A filled rectangle.
    Rectangle {
        /// Upper left corner.
        corner: Point,
        /// Width and height.
        size: [f64; 2],
        /// Colour.
        ink: Ink,
        /// 1 is opaque.
        alpha: f64,
    },
    /// A filled disc.
    Disc {
        /// Centre.
        centre: Point,
        /// Radius.
        radius: f64,
        /// Colour.
        ink: Ink,
    },
    /// A line of text.
    Text {
        /// Where the baseline meets the anchor.
        at: Point,
        /// The words.
        text: String,
        /// How they look.
        style: TextStyle,
    },
    /// Texts of different looks one after another on a line; they stay apart in any font.
    Runs {
        /// Where the baseline begins.
        at: Point,
        /// Gap between two of them.
        gap: f64,
        /// Words and looks.
        runs: Vec<(String, TextStyle)>,
    },
}

/// How a line of text looks.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TextStyle {
    /// Height of the em, px.
    pub size: f64,
    /// The heavier of the two weights.
    pub bold: bool,
    /// Colour.
    pub ink: Ink,
    /// Which end of the text the point names.
    pub anchor: Anchor,
}

/// Which end of the text a point names.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Anchor {
    /// Its left end.
    Start,
    /// Its middle.
    Middle,
    /// Its right end.
    End,
}

/// How a line is broken; only calm reference lines and compared runs are.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Dash {
    /// Not at all.
    #[default]
    Solid,
    /// 7 on, 3.5 off.
    Long,
    /// 4 on, 2 off.
    Short,
    /// 2 on, 3 off.
    Dots,
}

impl Dash {
    /// Lengths of mark and gap, px.
    pub fn pattern(self) -> Option<[f64; 2]> {
        match self {
            Self::Solid => None,
            Self::Long => Some([7.0, 3.5]),
            Self::Short => Some([4.0, 2.0]),
            Self::Dots => Some([2.0, 3.0]),
        }
    }
}

/// A group of marks that scripts and tests can find again.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Group {
    /// `p` panel, `s` series, `m` mark, `b` bar, `x` time axis; empty for none.
    pub class: &'static str,
    /// Id within the drawing; empty for none.
    pub id: String,
    /// `data-...` attributes: name after the hyphen, value.
    pub data: Vec<(&'static str, String)>,
}

impl Group {
    /// A group of a class.
    pub fn class(class: &'static str) -> Self {
        Self { class, ..Self::default() }
    }

    /// The same with an id.
    pub fn id(mut self, id: impl Into<String>) -> Self {
        self.id = id.into();
        self
    }

    /// The same with a number as attribute; what is not finite is left out.
    pub fn number(self, name: &'static str, value: f64) -> Self {
        if value.is_finite() { self.with(name, value.to_string()) } else { self }
    }

    /// The same with one more `data-` attribute.
    pub fn with(mut self, name: &'static str, value: impl Into<String>) -> Self {
        self.data.push((name, value.into()));
        self
    }
}

impl Drawing {
    /// All texts in order, for tests and for folded tables.
    pub fn texts(&self) -> Vec<&str> {
        self.marks
            .iter()
            .flat_map(|mark| match mark {
                Mark::Text { text, .. } => vec![text.as_str()],
                Mark::Runs { runs, .. } => runs.iter().map(|run| run.0.as_str()).collect(),
                _ => Vec::new(),
            })
            .collect()
    }
}
