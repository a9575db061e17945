//! The charts of the run: what must be traced for them, and the drawings.

use super::figures::Written;
use super::sides::sides;
use crate::analysis::train::Train as TrainFigures;
use crate::render::chart::drawing::Drawing;
use crate::render::chart::number::words;
use crate::render::chart::palette::Side;
use crate::render::chart::run_input::RunChart;
use crate::render::chart::train::{Train, TrainBody, TrainGear, TrainShaft};
use crate::render::chart::{pick, pick_rows, run};
use crate::results::{RunResult, Traces};
use crate::scenario::Scenario;
use crate::solve::TraceRequest;

/// Pixel columns of a chart: two a CSS pixel of the panel.
const COLUMNS: usize = 1092;

/// The train as charts see it.
pub fn train(scenario: &Scenario, figures: &TrainFigures) -> Train {
    let sides = sides(scenario);
    let side = |name: &str| {
        let place = scenario.bodies.iter().position(|body| body.name == name);
        place.and_then(|place| sides.get(place).copied()).unwrap_or(Side::Other)
    };
    let bodies = figures.bodies.iter().map(|body| TrainBody {
        name: body.name.clone(),
        side: side(&body.name),
        referral: body.ratio.filter(|ratio| *ratio != 0.0).map(|ratio| 1.0 / ratio),
        shown: false,
    });
    let shafts = scenario.shafts.iter().map(|shaft| TrainShaft {
        name: shaft.name.clone(),
        side: shaft
            .between
            .iter()
            .map(|end| side(end))
            .find(|side| *side != Side::Other)
            .unwrap_or(Side::Other),
        rated_torque: shaft.rated_torque,
        peak_torque: shaft.peak_torque,
    });
    let mut train = Train {
        bodies: bodies.collect(),
        shafts: shafts.collect(),
        gears: gears(scenario),
        reference: words(&figures.reference),
        ..Train::default()
    };
    mark_shown(&mut train, scenario);
    train
}

/// At most four speeds: where power enters and leaves, then the members of the gears.
fn mark_shown(train: &mut Train, scenario: &Scenario) {
    let driven = scenario.motors.iter().map(|motor| motor.body.as_str());
    let loaded = scenario.loads.iter().map(|load| load.body.as_str());
    let members = scenario
        .magnetic_gears
        .iter()
        .flat_map(|gear| [gear.inner.as_str(), gear.outer.as_str(), gear.modulator.as_str()]);
    let mut left = 4;
    for name in driven.chain(loaded).chain(members) {
        if let Some(body) = train.bodies.iter_mut().find(|body| body.name == name && !body.shown) {
            body.shown = left > 0;
            left -= i32::from(left > 0);
        }
    }
}

fn gears(scenario: &Scenario) -> Vec<TrainGear> {
    let harmonics = |list: &[crate::component::magnetic_gear::Harmonic]| -> Vec<[f64; 3]> {
        list.iter().map(|one| [f64::from(one.order), one.amplitude, one.phase]).collect()
    };
    let magnetic = scenario.magnetic_gears.iter().map(|gear| {
        // The slower of the members that turn carries the larger torque.
        let members = [
            ("outer", &gear.outer, Side::Outer),
            ("modulator", &gear.modulator, Side::Modulator),
            ("inner", &gear.inner, Side::Inner),
        ];
        let shown = members.iter().find(|member| member.1 != "ground").unwrap_or(&members[0]);
        TrainGear {
            name: gear.name.clone(),
            shown_member: shown.0,
            shown_body: words(shown.1),
            side: shown.2,
            harmonics: harmonics(&gear.field.harmonics),
        }
    });
    let couplings = scenario.magnetic_couplings.iter().map(|coupling| {
        let b = coupling.between[1] != "ground";
        TrainGear {
            name: coupling.name.clone(),
            shown_member: if b { "b" } else { "a" },
            shown_body: words(&coupling.between[usize::from(b)]),
            side: if b { Side::Outer } else { Side::Inner },
            harmonics: harmonics(&coupling.field.harmonics),
        }
    });
    magnetic.chain(couplings).collect()
}

/// What a run must record for these charts over a window of time.
pub fn request(scenario: &Scenario, train: &Train, [start, end]: [f64; 2]) -> TraceRequest {
    let names = train.channels();
    let channels = scenario.channels.iter().enumerate();
    TraceRequest {
        start,
        end,
        columns: COLUMNS,
        channels: channels
            .filter(|(_, channel)| names.contains(&channel.name))
            .map(|(place, _)| place)
            .collect(),
        swings: false,
    }
}

/// Windows that deserve a closer look, after the run.
pub fn zooms(result: &RunResult) -> Vec<[f64; 2]> {
    pick_rows::zoom_windows(result)
}

/// The chart of the run over the window of the traces.
pub fn run_chart(
    result: &RunResult,
    traces: &Traces,
    train: &Train,
    written: Written<'_>,
    id: &str,
) -> RunChart {
    let mut traces = traces.clone();
    cut(&mut traces, result.end_time);
    pick::run(result, &traces, train, &written.chart_display(), id)
}

/// The shafts' torques, where there are shafts beside a gear.
pub fn shafts_chart(
    result: &RunResult,
    traces: &Traces,
    train: &Train,
    written: Written<'_>,
) -> Option<RunChart> {
    let mut traces = traces.clone();
    cut(&mut traces, result.end_time);
    let chart = pick::shafts(result, &traces, train, &written.chart_display());
    (!chart.panels.is_empty()).then_some(chart)
}

/// The drawing of a chart.
pub fn drawing(chart: &RunChart) -> Drawing {
    run::run_chart(chart)
}

/// Ends a window where the run ended early.
fn cut(traces: &mut Traces, end: f64) {
    let width = traces.end - traces.start;
    if end >= traces.end || width <= 0.0 || end <= traces.start {
        return;
    }
    let step = width / COLUMNS as f64;
    let count = (((end - traces.start) / step).ceil() as usize).clamp(1, COLUMNS);
    for trace in &mut traces.traces {
        trace.columns.truncate(count);
    }
    traces.end = traces.start + step * count as f64;
}
