//! What a run found: plain data with units, for writers, charts and studies.

mod traces;

pub use traces::{Column, Separatrix, Swing, Trace, Traces};

/// Everything a run found, SI and rad.
#[derive(Clone, Debug, PartialEq)]
pub struct RunResult {
    /// Title of the scenario.
    pub title: String,
    /// False when the numerics gave up or the run was interrupted.
    pub completed: bool,
    /// Why it was not completed, in words.
    pub failure: Option<String>,
    /// Last time reached, s.
    pub end_time: f64,
    /// Magnetic gears, then couplings, in file order.
    pub gears: Vec<GearResult>,
    /// Channels in file order.
    pub channels: Vec<ChannelResult>,
    /// Requirements in file order.
    pub requirements: Vec<RequirementResult>,
    /// Energy audit.
    pub energy: Energy,
    /// Motors in file order.
    pub motors: Vec<MotorResult>,
    /// Overrunning clutches, then torque limiters, in file order.
    pub clutches: Vec<ClutchResult>,
    /// Warnings of the reader, the model and the run.
    pub warnings: Vec<Warning>,
    /// Work of the integrator.
    pub solver: SolverWork,
    /// Located events in order of time.
    pub events: Vec<Event>,
    /// Traces for charts, when asked for.
    pub traces: Option<Traces>,
}

/// What happened in a magnetic gear or coupling.
#[derive(Clone, Debug, PartialEq)]
pub struct GearResult {
    /// Its name.
    pub name: String,
    /// True for a coupling (members a and b).
    pub coupling: bool,
    /// All slips.
    pub slips: u32,
    /// Forward minus backward.
    pub net_slips: i32,
    /// synchronous, slipping or undecided.
    pub state_at_end: GearState,
    /// When undecided: how much longer to run, s.
    pub run_longer: Option<f64>,
    /// Time after which it stayed in step, s.
    pub resynchronised_at: Option<f64>,
    /// Largest share of the pull-out torque, 0 to 1, and when.
    pub peak_pull_out_share: f64,
    /// s.
    pub peak_pull_out_share_time: f64,
    /// Load angle of the largest magnitude with its sign, electrical rad, and when.
    pub peak_load_angle: f64,
    /// s.
    pub peak_load_angle_time: f64,
    /// Load angle at the end, electrical rad.
    pub final_load_angle: f64,
    /// Speed of the faster over the slower turning member in step; `None` when three or one turn.
    pub ratio: Option<f64>,
    /// The law's peaks, electrical rad: backward (negative) and forward.
    pub law_peaks: [f64; 2],
    /// Members with the body name (or `ground`), count (signed as in the phase) and pull-out torque, N*m.
    pub members: Vec<MemberResult>,
    /// Natural period at no load, s.
    pub natural_period: f64,
    /// Time spent past the peak, s.
    pub time_past_peak: f64,
    /// Time spent slipping, from each first slip to being back in step or the end, s.
    pub slipping_time: f64,
    /// The longest of these stretches, s.
    pub longest_slipping: f64,
    /// When that one began, s.
    pub longest_slipping_from: f64,
    /// Each slip.
    pub slip_events: Vec<SlipEvent>,
}

/// One member of a magnetic gear.
#[derive(Clone, Debug, PartialEq)]
pub struct MemberResult {
    /// inner, modulator, outer, a or b.
    pub member: &'static str,
    /// Body or `ground`.
    pub body: String,
    /// Poles pairs, or minus the pieces: its factor in the phase.
    pub count: f64,
    /// Pull-out torque seen there, N*m.
    pub pull_out_torque: f64,
}

/// State of a gear at the end of a run.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum GearState {
    /// Never slipped, or in step again.
    Synchronous,
    /// Still slipping.
    Slipping,
    /// Cannot be told yet.
    Undecided,
}

impl GearState {
    /// The word of the contract.
    pub fn word(self) -> &'static str {
        match self {
            Self::Synchronous => "synchronous",
            Self::Slipping => "slipping",
            Self::Undecided => "undecided",
        }
    }
}

/// One slip.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SlipEvent {
    /// s.
    pub time: f64,
    /// +1 or -1.
    pub direction: i32,
    /// Electrical rad/s.
    pub slip_speed: f64,
}

/// Extremes of one channel on the continuous solution.
#[derive(Clone, Debug, PartialEq)]
pub struct ChannelResult {
    /// For example `motor_shaft.torque`.
    pub name: String,
    /// SI unit as written in files.
    pub unit: &'static str,
    /// Smallest value and when.
    pub min: f64,
    /// s.
    pub min_time: f64,
    /// Largest value and when.
    pub max: f64,
    /// s.
    pub max_time: f64,
    /// Value at the end, from the left.
    pub last: f64,
}

/// A verdict.
#[derive(Clone, Debug, PartialEq)]
pub struct RequirementResult {
    /// Its name.
    pub name: String,
    /// In words.
    pub text: String,
    /// Channel.
    pub of: String,
    /// `None`: cannot be told.
    pub met: Option<bool>,
    /// Extreme found, or the time for `reaches`.
    pub value: Option<f64>,
    /// Limit in the same unit as `value`.
    pub limit: Option<f64>,
    /// Unit of `value` and `limit`.
    pub unit: &'static str,
    /// When the extreme stood, s.
    pub time: Option<f64>,
    /// True for `at_least`: larger is better.
    pub at_least: bool,
}

/// Energy audit, J.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Energy {
    /// Put in by motors and loads.
    pub supplied: f64,
    /// Taken out by motors and loads.
    pub absorbed: f64,
    /// Turned to heat in the train.
    pub lost: f64,
    /// Change of kinetic, elastic and magnetic energy.
    pub stored_change: f64,
    /// What is missing, relative to the sum.
    pub residual_share: f64,
}

/// Start-up figures of a motor with a synchronous speed.
#[derive(Clone, Debug, PartialEq)]
pub struct MotorResult {
    /// Its name.
    pub name: String,
    /// When 95 % of synchronous speed is first reached, s.
    pub run_up_time: Option<f64>,
    /// Integral of torque times (synchronous speed minus speed), J.
    pub rotor_heat: Option<f64>,
}

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

/// A warning that stands in the results.
#[derive(Clone, Debug, PartialEq)]
pub struct Warning {
    /// Dotted path in the scenario, or empty.
    pub path: String,
    /// The sentence.
    pub text: String,
}

/// Work of the integrator.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct SolverWork {
    /// dopri5, dop853 or rk4.
    pub method: &'static str,
    /// Accepted steps.
    pub steps: u64,
    /// Rejected steps.
    pub rejected: u64,
    /// Evaluations of the right-hand side.
    pub evaluations: u64,
    /// Located events.
    pub events: u64,
}

/// A located event.
#[derive(Clone, Debug, PartialEq)]
pub struct Event {
    /// s.
    pub time: f64,
    /// What happened.
    pub kind: EventKind,
    /// The thing it happened to.
    pub of: String,
    /// A figure that goes with it.
    pub value: f64,
    /// Unit of `value`.
    pub unit: &'static str,
    /// In words.
    pub text: String,
}

impl Event {
    /// How a friction element's event ends that turned round without coming to rest.
    pub const OTHER_WAY: &str = "slides the other way";

    /// True for a friction element that slid before, the other way: it did not break loose.
    pub fn turns_round(&self) -> bool {
        self.kind == EventKind::Sliding && self.text.ends_with(Self::OTHER_WAY)
    }
}

/// Kinds of events.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EventKind {
    /// The phase crossed an odd multiple of pi.
    Slip,
    /// The load angle left the interval between the law's peaks.
    PastPeak,
    /// It came back.
    ShortOfPeak,
    /// In step again for good.
    Resynchronised,
    /// A friction element stuck.
    Stuck,
    /// A friction element began to slide.
    Sliding,
    /// A backlash closed.
    Contact,
    /// A backlash opened.
    Gap,
    /// A protection acted.
    Protection,
    /// A requirement's limit was crossed.
    Requirement,
}

impl EventKind {
    /// The word of the contract.
    pub fn word(self) -> &'static str {
        match self {
            Self::Slip => "slip",
            Self::PastPeak => "past_peak",
            Self::ShortOfPeak => "short_of_peak",
            Self::Resynchronised => "resynchronised",
            Self::Stuck => "stuck",
            Self::Sliding => "sliding",
            Self::Contact => "contact",
            Self::Gap => "gap",
            Self::Protection => "protection",
            Self::Requirement => "requirement",
        }
    }
}
