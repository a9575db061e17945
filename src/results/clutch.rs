//! What clutches that act by themselves did in a run.

/// What an overrunning clutch or a torque limiter did.
#[derive(Clone, Debug, PartialEq)]
pub struct ClutchResult {
    /// Its name.
    pub name: String,
    /// How often it began to slip under its torque.
    pub slips: u32,
    /// How often it began to run free: overrunning clutches only.
    pub releases: u32,
    /// Heat of slipping and drag, J.
    pub heat: f64,
    /// What it does at the end.
    pub state_at_end: ClutchState,
}

/// What a clutch does.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ClutchState {
    /// Both sides turn as one.
    Locked,
    /// The driven side runs ahead.
    Free,
    /// It slips under its torque.
    Slipping,
}

impl ClutchState {
    /// All of them.
    pub const ALL: [Self; 3] = [Self::Locked, Self::Free, Self::Slipping];

    /// The word of the results.
    pub fn word(self) -> &'static str {
        match self {
            Self::Locked => "locked",
            Self::Free => "free",
            Self::Slipping => "slipping",
        }
    }
}
