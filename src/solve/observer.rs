//! The one observer of a run: extremes, verdicts, slips, rows and traces from the continuous solution.

use super::audit::Powers;
use super::dense::DenseStep;
use super::extremes::{Extreme, gear_event, refine};
use super::gear_warnings;
use super::gears::{GearTrack, crossings};
use super::sampling::{Sample, StepView};
use super::traces::Tracer;
use super::turning::TurningWatch;
use super::windows::Window;
use super::{RowSink, RunOptions, Wanted};
use crate::component::channel::{ChannelKind, MagneticChannel};
use crate::component::requirement::{Requirement, Test};
use crate::equations::Equations;
use crate::equations::frame::{Counters, Evaluator, load_angle};
use crate::results::Event;

/// Everything that is recorded while the run goes on.
pub struct Observer<'a> {
    /// Channels followed, by place, rising.
    pub wanted: Vec<usize>,
    /// Extremes by channel; only those of `wanted` are kept.
    pub extremes: Vec<Extreme>,
    /// Requirements, and the program's own watches behind them.
    pub windows: Vec<Window>,
    /// One track a magnet.
    pub gears: Vec<GearTrack>,
    /// Events in order of time.
    pub events: Vec<Event>,
    /// Counts and sums at the time reached.
    pub counters: Counters,
    /// Traces for charts.
    pub tracer: Option<Tracer>,
    /// Turning points of one channel.
    pub turning: Option<TurningWatch<'a>>,
    /// Energies so far, J.
    pub energy: Powers,
    /// Rotor heats so far, J.
    pub heats: Vec<f64>,
    /// Scale of each independent speed, for the summed angles.
    pub speed_scale: Vec<f64>,
    pub(super) rows: Option<&'a mut dyn RowSink>,
    pub(super) next_row: u64,
    pub(super) output_step: f64,
    pub(super) duration: f64,
    discrete: Vec<bool>,
    wraps: Vec<bool>,
    /// Channels that are magnitudes: they have a corner at zero.
    pub(super) magnitudes: Vec<bool>,
    samples: Vec<Sample>,
    pub(super) scratch: Sample,
    pub(super) sums: Vec<f64>,
    names: Vec<String>,
}

impl<'a> Observer<'a> {
    /// An observer of a run that starts at a state.
    pub fn new(equations: &Equations, options: &mut RunOptions<'a>, start: &[f64]) -> Self {
        let model = &equations.model;
        let scenario = &model.scenario;
        let place = |name: &str| model.channels.iter().position(|channel| channel.name == name);
        let mut windows: Vec<Window> = scenario
            .requirements
            .iter()
            .enumerate()
            .filter_map(|(index, requirement)| {
                place(&requirement.of).map(|channel| Window::new(Some(index), requirement, channel))
            })
            .collect();
        for &(motor, speed) in &equations.heats {
            let of = format!("{}.speed", scenario.motors[motor].body);
            if let Some(channel) = place(&of) {
                let watch = Requirement {
                    name: String::new(),
                    of,
                    test: Test::Reaches { value: 0.95 * speed.abs(), within: None, band: None },
                    signed: false,
                    after: None,
                    before: None,
                    text: String::new(),
                    source: None,
                };
                windows.push(Window::new(None, &watch, channel));
            }
        }
        let hot = gear_warnings::watches(equations);
        windows.extend(hot.iter().map(|(channel, watch)| Window::new(None, watch, *channel)));
        let mut wanted: Vec<usize> = match &options.wanted {
            Wanted::All => (0..model.channels.len()).collect(),
            Wanted::Asked(channels) => {
                let shares = model.channels.iter().enumerate().filter(|(_, channel)| {
                    matches!(channel.kind, ChannelKind::Magnetic(_, MagneticChannel::PullOutShare))
                });
                let mut list: Vec<usize> = channels.clone();
                list.extend(windows.iter().map(|window| window.channel));
                list.extend(shares.map(|(place, _)| place));
                list
            }
        };
        if let Some(request) = &options.traces {
            wanted.extend(&request.channels);
        }
        if let Some(request) = &options.turning {
            wanted.push(request.channel);
        }
        wanted.sort_unstable();
        wanted.dedup();
        let gears = model
            .magnets
            .iter()
            .zip(&equations.phase_state)
            .map(|(magnet, place)| {
                let phase = start[*place] * equations.scale[*place];
                GearTrack::new(phase, magnet.law.peaks(), magnet.natural_period())
            })
            .collect();
        let is = |kind: ChannelKind, test: &[MagneticChannel]| match kind {
            ChannelKind::Magnetic(_, what) => test.contains(&what),
            _ => false,
        };
        let counts =
            [MagneticChannel::Slips, MagneticChannel::NetSlips, MagneticChannel::ShortOfPeak];
        Self {
            wanted,
            extremes: vec![Extreme::NONE; model.channels.len()],
            windows,
            gears,
            events: Vec::new(),
            counters: Counters {
                wells: vec![0; model.magnets.len()],
                slips: vec![0; model.magnets.len()],
                net_slips: vec![0; model.magnets.len()],
                angles: vec![0.0; equations.speeds],
            },
            tracer: options.traces.take().map(|request| Tracer::new(request, model.magnets.len())),
            turning: options.turning.take().map(TurningWatch::new),
            energy: Powers::default(),
            heats: vec![0.0; equations.heats.len() + equations.friction_heats],
            speed_scale: equations.scale[..equations.speeds].to_vec(),
            rows: options.rows.take(),
            next_row: 0,
            output_step: scenario.output_step,
            duration: scenario.duration,
            discrete: model.channels.iter().map(|channel| is(channel.kind, &counts)).collect(),
            wraps: model
                .channels
                .iter()
                .map(|channel| is(channel.kind, &[MagneticChannel::LoadAngle]))
                .collect(),
            magnitudes: model
                .channels
                .iter()
                .map(|channel| {
                    channel.name.ends_with("loss")
                        || channel.name.ends_with(".current")
                        || is(channel.kind, &[MagneticChannel::PullOutShare])
                })
                .collect(),
            samples: Vec::new(),
            scratch: Sample::default(),
            sums: Vec::new(),
            names: scenario
                .requirements
                .iter()
                .map(|requirement| requirement.name.clone())
                .collect(),
        }
    }

    /// Takes the values at the start of a segment, from the right; returns the time of the next window border.
    pub fn begin(&mut self, evaluator: &Evaluator<'_>, time: f64, state: &[f64]) {
        let mut scratch = std::mem::take(&mut self.scratch);
        evaluator.evaluate(time, state, &self.counters, Some(&self.wanted), &mut scratch.frame);
        self.note_all(time, &scratch.frame.channels);
        for window in &mut self.windows {
            let value = scratch.frame.channels[window.channel];
            if window.begin(time, value) {
                window.note(time, value);
            }
        }
        if let Some(tracer) = &mut self.tracer {
            tracer.note(time, &scratch.frame.channels);
        }
        if let Some(turning) = &mut self.turning {
            turning.note(time, &scratch.frame.channels);
        }
        for (index, track) in self.gears.iter_mut().enumerate() {
            let place = evaluator.equations.phase_state[index];
            track.note_angle(load_angle(state[place] * evaluator.equations.scale[place]), time);
        }
        self.scratch = scratch;
    }

    /// Takes the values at the end of a segment, from the left.
    pub fn end(&mut self, evaluator: &Evaluator<'_>, time: f64, state: &[f64]) {
        let mut scratch = std::mem::take(&mut self.scratch);
        evaluator.evaluate(time, state, &self.counters, Some(&self.wanted), &mut scratch.frame);
        self.note_all(time, &scratch.frame.channels);
        if let Some(turning) = &mut self.turning {
            turning.note(time, &scratch.frame.channels);
        }
        for window in self.windows.iter_mut().filter(|window| window.active || window.touches(time))
        {
            window.note(time, scratch.frame.channels[window.channel]);
        }
        self.scratch = scratch;
    }

    /// Takes the values from the right at the end of the run: a jump there has two sides like any other.
    pub fn finish(&mut self, evaluator: &Evaluator<'_>, time: f64, state: &[f64]) {
        let last: Vec<f64> = self.extremes.iter().map(|extreme| extreme.last).collect();
        self.begin(evaluator, time, state);
        for (extreme, last) in self.extremes.iter_mut().zip(last) {
            extreme.last = last;
        }
    }

    fn note_all(&mut self, time: f64, channels: &[f64]) {
        for &channel in &self.wanted {
            self.extremes[channel].note(channels[channel], time);
        }
    }

    /// Shares of a step at which it is looked at.
    pub fn shares(&self, step: &DenseStep, inner: usize) -> Vec<f64> {
        let mut count = inner + 1;
        if let Some(tracer) = &self.tracer
            && tracer.touches(step.start, step.start + step.length)
        {
            let columns = (step.length / tracer.column_width()).ceil();
            count = count.max((columns as usize).clamp(1, 400));
        }
        (0..=count).map(|index| index as f64 / count as f64).collect()
    }

    /// Takes one step of the continuous solution.
    pub fn step(&mut self, evaluator: Evaluator<'_>, step: &DenseStep, inner: usize) {
        let shares = self.shares(step, inner);
        let found = crossings(evaluator.equations, step, &shares);
        let scale = std::mem::take(&mut self.speed_scale);
        let counters = std::mem::take(&mut self.counters);
        let view =
            StepView { step, evaluator, counters: &counters, crossings: found, scale: &scale };
        let mut samples = std::mem::take(&mut self.samples);
        samples.resize_with(shares.len(), Sample::default);
        for (share, sample) in shares.iter().zip(&mut samples) {
            view.sample(*share, Some(&self.wanted), sample);
        }
        let mut scratch = std::mem::take(&mut self.scratch);
        self.note_slips(&view, &mut scratch);
        for sample in &samples {
            self.note_all(sample.time, &sample.frame.channels);
        }
        for &channel in &self.wanted {
            if !self.discrete[channel] {
                let wraps = self.wraps[channel];
                refine(&mut self.extremes[channel], &view, &samples, channel, wraps, &mut scratch);
            }
        }
        self.gear_events(&view);
        if let Some(turning) = &mut self.turning {
            turning.step(&view, &samples, &mut scratch);
        }
        for sample in &samples {
            self.trace(&view, sample);
        }
        for window in self.windows.iter_mut().filter(|window| window.active) {
            let name = window.requirement.map_or("", |place| self.names[place].as_str());
            window.step(&view, &samples, &mut scratch, &mut self.events, name);
        }
        self.rows_in(&view, &mut scratch);
        view.counters_at(1.0, &mut self.counters, &mut self.sums);
        self.speed_scale = scale;
        self.samples = samples;
        self.scratch = scratch;
    }

    /// Counts change at the slips themselves.
    fn note_slips(&mut self, view: &StepView<'_>, scratch: &mut Sample) {
        for crossing in view.crossings.iter().filter(|crossing| crossing.is_slip) {
            let time = view.step.time(crossing.share);
            for &channel in self.wanted.iter().filter(|channel| self.discrete[**channel]) {
                let value = view.channel(channel, crossing.share, scratch);
                self.extremes[channel].note(value, time);
            }
        }
    }

    pub(super) fn trace(&mut self, view: &StepView<'_>, sample: &Sample) {
        let Some(tracer) = &mut self.tracer else { return };
        tracer.note(sample.time, &sample.frame.channels);
        let equations = view.evaluator.equations;
        let wells = &view.counters.wells;
        tracer.swing(&|magnet| {
            let place = equations.phase_state[magnet];
            let phase = sample.state[place] * equations.scale[place];
            let rate = crate::equations::dot(&equations.phase_rows[magnet], &sample.state);
            [sample.time, phase + std::f64::consts::TAU * wells[magnet] as f64, rate]
        });
    }

    fn gear_events(&mut self, view: &StepView<'_>) {
        let equations = view.evaluator.equations;
        for crossing in &view.crossings {
            let time = view.step.time(crossing.share);
            self.gears[crossing.magnet].note(crossing, time);
            self.events.push(gear_event(equations, crossing, time));
            if crossing.is_slip {
                for (place, channel) in equations.model.channels.iter().enumerate() {
                    if channel.kind
                        == ChannelKind::Magnetic(crossing.magnet, MagneticChannel::LoadAngle)
                        && self.wanted.binary_search(&place).is_ok()
                    {
                        let side = std::f64::consts::PI * f64::from(crossing.direction);
                        let last = self.extremes[place].last;
                        self.extremes[place].note(side, time);
                        self.extremes[place].note(-side, time);
                        self.extremes[place].last = last;
                    }
                }
            } else {
                for (place, channel) in equations.model.channels.iter().enumerate() {
                    if channel.kind
                        == ChannelKind::Magnetic(crossing.magnet, MagneticChannel::ShortOfPeak)
                        && self.wanted.binary_search(&place).is_ok()
                    {
                        let last = self.extremes[place].last;
                        self.extremes[place].note(f64::from(u8::from(crossing.short)), time);
                        self.extremes[place].last = last;
                    }
                    // A crossing of a peak is where the torque stands at its full pull-out value.
                    if channel.kind
                        == ChannelKind::Magnetic(crossing.magnet, MagneticChannel::PullOutShare)
                        && self.wanted.binary_search(&place).is_ok()
                    {
                        let last = self.extremes[place].last;
                        self.extremes[place].note(1.0, time);
                        self.extremes[place].last = last;
                    }
                }
            }
        }
        for (index, track) in self.gears.iter_mut().enumerate() {
            let place = equations.phase_state[index];
            let scale = equations.scale[place];
            for sample in &self.samples {
                track.note_angle(load_angle(sample.state[place] * scale), sample.time);
            }
        }
    }

    /// Notes the turning points of load angles found while refining extremes.
    pub fn settle_peak_angles(&mut self, equations: &Equations) {
        for (place, channel) in equations.model.channels.iter().enumerate() {
            if let ChannelKind::Magnetic(magnet, MagneticChannel::LoadAngle) = channel.kind {
                let extreme = self.extremes[place];
                if extreme.max >= extreme.min {
                    let track = &mut self.gears[magnet];
                    track.note_angle(extreme.min, extreme.min_time);
                    track.note_angle(extreme.max, extreme.max_time);
                }
            }
        }
    }
}
