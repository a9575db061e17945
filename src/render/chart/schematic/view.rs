//! What the schematic shows, as plain data.

use crate::render::chart::palette::Side;

/// A train to be drawn.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Schematic {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// Bodies; links and actors name them by their place here.
    pub bodies: Vec<BodyView>,
    /// What joins them.
    pub links: Vec<Link>,
    /// What drives and brakes them.
    pub actors: Vec<Actor>,
    /// Brakes.
    pub brakes: Vec<BrakeView>,
}

/// A rotating body.
#[derive(Clone, Debug, PartialEq)]
pub struct BodyView {
    /// Name in words.
    pub name: String,
    /// Member it turns with.
    pub side: Side,
    /// Moment of inertia, kg*m2, for the size of the disc.
    pub inertia: f64,
    /// The same as text, for example `0.25 kg·m²`.
    pub inertia_text: String,
    /// Inertia referred elsewhere, for example `0.040 at the motor`; empty for none.
    pub referred_text: String,
    /// Speed as text and whether it turns forward; `None` where it stands or is not known.
    pub speed: Option<(String, bool)>,
}

/// An end of a link: a body by its place, or the frame.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Port {
    /// A body.
    Body(usize),
    /// Held.
    Ground,
}

/// What joins bodies.
#[derive(Clone, Debug, PartialEq)]
pub enum Link {
    /// A shaft.
    Shaft {
        /// Name in words.
        name: String,
        /// Its ends.
        between: [Port; 2],
        /// Stiffness as text, or `rigid`.
        text: String,
        /// Elastic shafts have a zigzag.
        elastic: bool,
        /// Play: a gap.
        backlash: bool,
    },
    /// A magnetic gear.
    MagneticGear {
        /// Name and ratio, for example `magnetic gear −5.5 : 1`.
        name: String,
        /// Inner, modulator, outer.
        members: [Port; 3],
        /// Pole pairs or pieces of the three as text.
        counts: [String; 3],
        /// Pull-out as text.
        text: String,
    },
    /// A magnetic coupling.
    Coupling {
        /// Name in words.
        name: String,
        /// a and b.
        between: [Port; 2],
        /// Pull-out as text.
        text: String,
    },
    /// A rigid pair of wheels.
    GearPair {
        /// Name in words.
        name: String,
        /// a and b.
        between: [Port; 2],
        /// Speed of a over speed of b.
        ratio: f64,
        /// Ratio as text.
        text: String,
    },
    /// A rigid planetary set.
    Planetary {
        /// Name in words.
        name: String,
        /// Sun, carrier, ring.
        members: [Port; 3],
        /// Teeth or ratio as text.
        text: String,
    },
}

impl Link {
    /// Its ends in the order of the file.
    pub fn ports(&self) -> &[Port] {
        match self {
            Self::Shaft { between, .. }
            | Self::Coupling { between, .. }
            | Self::GearPair { between, .. } => between,
            Self::MagneticGear { members, .. } | Self::Planetary { members, .. } => members,
        }
    }

    /// True for everything that is drawn as a thing of its own.
    pub fn is_device(&self) -> bool {
        !matches!(self, Self::Shaft { .. })
    }
}

/// A motor or a load.
#[derive(Clone, Debug, PartialEq)]
pub struct Actor {
    /// Name in words.
    pub name: String,
    /// Main figures as text.
    pub text: String,
    /// The body it acts on.
    pub body: usize,
    /// M in the ring, else L.
    pub motor: bool,
    /// Power goes into the body: the arrow points to it.
    pub drives: bool,
}

/// A brake.
#[derive(Clone, Debug, PartialEq)]
pub struct BrakeView {
    /// Name in words.
    pub name: String,
    /// Torque as text.
    pub text: String,
    /// The body it holds.
    pub body: usize,
    /// Against the frame, else against another body.
    pub grounded: bool,
}
