//! A gear that slips under a burst, by the classical fourth-order Runge-Kutta method: two bodies,
//! a sine law and a damper (equation of a damped driven pendulum, textbook).

use lodeshaft::render::chart::palette::Side;
use lodeshaft::render::chart::train::{SignalBar, SignalBars, Train, TrainBody, TrainGear};
use lodeshaft::results::{
    ChannelResult, Column, Energy, Event, EventKind, GearResult, GearState, MemberResult,
    RunResult, SlipEvent, SolverWork, Swing, Trace, Traces,
};
use std::f64::consts::{FRAC_PI_2, PI, TAU};

const INNER: f64 = 4.0;
const OUTER: f64 = 16.0;
const STEP: f64 = 2e-5;
/// End of the run, s.
pub const END: f64 = 2.5;

/// A run: `[time, drum speed, rotor speed, phase]` at each step.
pub struct Run {
    pub states: Vec<[f64; 4]>,
    pub burst: f64,
    pub pull_out: f64,
    pub damping: f64,
}

impl Run {
    pub fn of(burst: f64, pull_out: f64) -> Self {
        let mut run = Self { states: Vec::new(), burst, pull_out, damping: 24.0 };
        let mut state = [103.45, -25.86, (52.0 / pull_out).asin()];
        let steps = (END / STEP) as usize;
        for step in 0..=steps {
            let time = step as f64 * STEP;
            run.states.push([time, state[0], state[1], state[2]]);
            let k1 = run.rates(time, state);
            let k2 = run.rates(time + STEP / 2.0, moved(state, k1, STEP / 2.0));
            let k3 = run.rates(time + STEP / 2.0, moved(state, k2, STEP / 2.0));
            let k4 = run.rates(time + STEP, moved(state, k3, STEP));
            for part in 0..3 {
                state[part] += STEP / 6.0 * (k1[part] + 2.0 * k2[part] + 2.0 * k3[part] + k4[part]);
            }
        }
        run
    }

    pub fn rate(&self, state: [f64; 3]) -> f64 {
        INNER * state[0] + OUTER * state[1]
    }

    /// Torque on the outer member.
    pub fn torque(&self, state: [f64; 3]) -> f64 {
        -self.pull_out * state[2].sin() - self.damping / OUTER * self.rate(state)
    }

    pub fn rates(&self, time: f64, state: [f64; 3]) -> [f64; 3] {
        let torque = self.torque(state);
        let motor = (32.0 * (103.85 - state[0])).clamp(-160.0, 160.0);
        let grist = 0.0777 * state[1] * state[1].abs();
        let burst = if (1.0..1.25).contains(&time) { self.burst } else { 0.0 };
        [(torque * INNER / OUTER + motor) / 0.9, (torque - grist + burst) / 0.6, self.rate(state)]
    }

    fn columns(
        &self,
        window: [f64; 2],
        count: usize,
        value: impl Fn(&[f64; 4]) -> f64,
    ) -> Vec<Option<Column>> {
        let width = (window[1] - window[0]) / count as f64;
        let at = |time: f64| ((time / STEP).round() as usize).min(self.states.len() - 1);
        (0..count)
            .map(|place| {
                let left = window[0] + width * place as f64;
                let values: Vec<f64> =
                    self.states[at(left)..=at(left + width)].iter().map(&value).collect();
                let place_of = |sign: f64| {
                    let best = (0..values.len())
                        .max_by(|a, b| (sign * values[*a]).total_cmp(&(sign * values[*b])));
                    best.unwrap_or(0)
                };
                let (low, high) = (place_of(-1.0), place_of(1.0));
                Some(Column {
                    first: *values.first()?,
                    min: values[low],
                    max: values[high],
                    last: *values.last()?,
                    min_first: low <= high,
                })
            })
            .collect()
    }

    pub fn traces(&self, window: [f64; 2]) -> Traces {
        let trace = |channel: &str, unit, value: &dyn Fn(&[f64; 4]) -> f64| Trace {
            channel: channel.to_owned(),
            unit,
            columns: self.columns(window, 1092, value),
        };
        let path = self
            .states
            .iter()
            .step_by(10)
            .map(|s| [s[0], s[3], self.rate([s[1], s[2], s[3]])])
            .collect();
        Traces {
            start: window[0],
            end: window[1],
            traces: vec![
                trace("drum.speed", "rad/s", &|s| s[1]),
                trace("rotor.speed", "rad/s", &|s| s[2]),
                trace("mg.phase", "rad", &|s| s[3]),
                trace("mg.torque_outer", "N*m", &|s| self.torque([s[1], s[2], s[3]])),
                trace("feed_shaft.torque", "N*m", &|s| {
                    -self.torque([s[1], s[2], s[3]]) * INNER / OUTER
                }),
                trace("rotor_shaft.torque", "N*m", &|s| self.torque([s[1], s[2], s[3]])),
            ],
            swings: vec![Swing { gear: "mg".to_owned(), path, separatrix: None }],
        }
    }

    pub fn result(&self) -> RunResult {
        let mut slip_events = Vec::new();
        let mut events = Vec::new();
        let event = |time, kind, text: &str| Event {
            time,
            kind,
            of: "mg".to_owned(),
            value: 0.0,
            unit: "1",
            text: text.to_owned(),
        };
        for pair in self.states.windows(2) {
            let well = |s: &[f64; 4]| (s[3] / TAU).round() as i64;
            let short = |s: &[f64; 4]| (s[3] - TAU * (s[3] / TAU).round()).abs() <= FRAC_PI_2;
            let (a, b) = (&pair[0], &pair[1]);
            if well(a) != well(b) {
                let direction = if b[3] > a[3] { 1 } else { -1 };
                let slip_speed = self.rate([b[1], b[2], b[3]]);
                slip_events.push(SlipEvent { time: b[0], direction, slip_speed });
                events.push(event(b[0], EventKind::Slip, "slip"));
            }
            if short(a) != short(b) {
                let kind = if short(a) { EventKind::PastPeak } else { EventKind::ShortOfPeak };
                events.push(event(b[0], kind, "peak"));
            }
        }
        let last_peak = events.iter().rfind(|e| e.kind == EventKind::ShortOfPeak).map(|e| e.time);
        let slips = slip_events.len() as u32;
        let net_slips = slip_events.iter().map(|slip| slip.direction).sum();
        let gear = GearResult {
            name: "mg".to_owned(),
            coupling: false,
            slips,
            net_slips,
            state_at_end: GearState::Synchronous,
            run_longer: None,
            resynchronised_at: last_peak.filter(|_| slips > 0),
            peak_pull_out_share: 1.0,
            peak_pull_out_share_time: 1.0,
            peak_load_angle: PI,
            peak_load_angle_time: 1.0,
            final_load_angle: 0.1,
            ratio: Some(-4.0),
            law_peaks: [-FRAC_PI_2, FRAC_PI_2],
            members: vec![
                member("inner", "drum", INNER, self.pull_out * INNER / OUTER),
                member("modulator", "ground", -(INNER + OUTER), self.pull_out * 1.25),
                member("outer", "rotor", OUTER, self.pull_out),
            ],
            natural_period: 0.03,
            time_past_peak: 0.1,
            slipping_time: 0.0,
            longest_slipping: 0.0,
            longest_slipping_from: 0.0,
            slip_events,
        };
        let channel = |name: &str, value: &dyn Fn(&[f64; 4]) -> f64| ChannelResult {
            name: name.to_owned(),
            unit: "rad/s",
            min: self.states.iter().map(value).fold(f64::INFINITY, f64::min),
            min_time: 0.0,
            max: self.states.iter().map(value).fold(f64::NEG_INFINITY, f64::max),
            max_time: 0.0,
            last: self.states.last().map_or(0.0, value),
        };
        RunResult {
            title: "Shredder gear".to_owned(),
            completed: true,
            failure: None,
            end_time: END,
            gears: vec![gear],
            channels: vec![channel("drum.speed", &|s| s[1]), channel("rotor.speed", &|s| s[2])],
            requirements: Vec::new(),
            energy: Energy::default(),
            motors: Vec::new(),
            clutches: Vec::new(),
            warnings: Vec::new(),
            solver: SolverWork::default(),
            events,
            traces: None,
        }
    }
}

fn member(member: &'static str, body: &str, count: f64, pull_out_torque: f64) -> MemberResult {
    MemberResult { member, body: body.to_owned(), count, pull_out_torque }
}

fn moved(state: [f64; 3], rate: [f64; 3], step: f64) -> [f64; 3] {
    [state[0] + step * rate[0], state[1] + step * rate[1], state[2] + step * rate[2]]
}

/// The train of the run.
pub fn train() -> Train {
    let body = |name: &str, side, referral| TrainBody {
        name: name.to_owned(),
        side,
        referral: Some(referral),
        shown: true,
    };
    Train {
        bodies: vec![body("drum", Side::Inner, 1.0), body("rotor", Side::Outer, -4.0)],
        shafts: Vec::new(),
        gears: vec![TrainGear {
            name: "mg".to_owned(),
            shown_member: "outer",
            shown_body: "rotor".to_owned(),
            side: Side::Outer,
            harmonics: Vec::new(),
        }],
        reference: "drum".to_owned(),
        signals: vec![SignalBars {
            label: "Burst load".to_owned(),
            bars: vec![SignalBar { start: 1.0, end: 1.25, text: "900 N·m".to_owned() }],
        }],
        signal_steps: vec![1.0, 1.25],
        idle_at_start: Vec::new(),
        records: Vec::new(),
    }
}
