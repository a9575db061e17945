//! The train as charts see it: who turns with which member, and by what factor.

use super::palette::Side;

/// A train as the run chart needs it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Train {
    /// Bodies in file order.
    pub bodies: Vec<TrainBody>,
    /// Shafts in file order.
    pub shafts: Vec<TrainShaft>,
    /// Magnetic gears and couplings in file order.
    pub gears: Vec<TrainGear>,
    /// Body the speeds are referred to, as words; empty when none is.
    pub reference: String,
    /// Bars of signals, one row each.
    pub signals: Vec<SignalBars>,
    /// Times at which a signal jumps or breaks, s.
    pub signal_steps: Vec<f64>,
    /// Brakes and frictions that hold nothing at the start, for want of pressure.
    pub idle_at_start: Vec<String>,
    /// Measured records in file order.
    pub records: Vec<TrainRecord>,
}

/// A measured record.
#[derive(Clone, Debug, PartialEq)]
pub struct TrainRecord {
    /// Name in the file.
    pub name: String,
    /// The channel it was measured at.
    pub channel: String,
    /// SI unit of the channel.
    pub unit: &'static str,
    /// `[time of the run, value]`, SI.
    pub rows: Vec<[f64; 2]>,
}

/// A rotating body.
#[derive(Clone, Debug, PartialEq)]
pub struct TrainBody {
    /// Name in the file; its channel is `<name>.speed`.
    pub name: String,
    /// The member it turns with.
    pub side: Side,
    /// Speed of the reference body over the speed of this body in step; `None` when no fixed
    /// ratio joins them (one of three free ports). 1 for the reference body.
    pub referral: Option<f64>,
    /// Whether the speed panel shows it; when no body is marked, the first four are.
    pub shown: bool,
}

/// A shaft.
#[derive(Clone, Debug, PartialEq)]
pub struct TrainShaft {
    /// Name in the file; its channel is `<name>.torque`.
    pub name: String,
    /// The member it turns with.
    pub side: Side,
    /// Rated torque, N*m.
    pub rated_torque: Option<f64>,
    /// Peak torque, N*m.
    pub peak_torque: Option<f64>,
}

/// A magnetic gear or coupling; counts, pull-out torques and peaks come from the results.
#[derive(Clone, Debug, PartialEq)]
pub struct TrainGear {
    /// Name in the file.
    pub name: String,
    /// Member whose torque is shown: inner, outer, modulator, a or b.
    pub shown_member: &'static str,
    /// Body of that member as words.
    pub shown_body: String,
    /// Side of that member.
    pub side: Side,
    /// Harmonics of the law: order, relative amplitude, phase in rad.
    pub harmonics: Vec<[f64; 3]>,
}

/// A signal as bars in the strip.
#[derive(Clone, Debug, PartialEq)]
pub struct SignalBars {
    /// Words at the left of the row.
    pub label: String,
    /// The bars.
    pub bars: Vec<SignalBar>,
}

/// One bar.
#[derive(Clone, Debug, PartialEq)]
pub struct SignalBar {
    /// Start, s.
    pub start: f64,
    /// End, s.
    pub end: f64,
    /// Words on the bar, for example `900 N·m`.
    pub text: String,
}

impl Train {
    /// Channels whose traces the run chart draws, each once.
    pub fn channels(&self) -> Vec<String> {
        let mut names: Vec<String> =
            self.speed_bodies().iter().map(|body| format!("{}.speed", body.name)).collect();
        for gear in &self.gears {
            names.push(format!("{}.phase", gear.name));
            names.push(format!("{}.torque_{}", gear.name, gear.shown_member));
        }
        names.extend(self.shafts.iter().map(|shaft| format!("{}.torque", shaft.name)));
        names.extend(self.records.iter().map(|record| record.channel.clone()));
        names
    }

    /// Bodies of the speed panel, four at most.
    pub fn speed_bodies(&self) -> Vec<&TrainBody> {
        let marked: Vec<&TrainBody> = self.bodies.iter().filter(|body| body.shown).collect();
        let all = if marked.is_empty() { self.bodies.iter().collect() } else { marked };
        all.into_iter().take(4).collect()
    }
}
