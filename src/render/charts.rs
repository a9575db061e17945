//! The charts of a run: which traces they need, and the files they become.

use super::chart::axes::Sheet;
use super::chart::palette::Side;
use super::chart::plane_tables;
use super::chart::swing::{SwingChart, swing_chart};
use super::chart::torque_speed::{Characteristic, TorqueSpeed, torque_speed_chart};
use super::chart::train::{Train, TrainBody, TrainGear, TrainRecord, TrainShaft};
use super::chart::units::{Display, Unit};
use super::chart::{number, pick, pick_records, pick_rows};
use super::chart_signals::{bars, idle_at_start};
use super::pictures::Picture;
use crate::analysis::train::{self, Train as Figures};
use crate::analysis::{characteristics, separatrix};
use crate::equations::Equations;
use crate::quantity::{self, Dimension};
use crate::results::{GearResult, RunResult, Traces};
use crate::scenario::Scenario;
use crate::solve::TraceRequest;

/// Columns of a chart: two for each CSS pixel of a panel.
const COLUMNS: usize = 1092;

/// What a run must record for its charts.
pub fn request(equations: &Equations) -> TraceRequest {
    window(equations, 0.0, equations.model.scenario.duration, true)
}

fn window(equations: &Equations, start: f64, end: f64, swings: bool) -> TraceRequest {
    let figures = train::figures(&equations.model);
    let train = describe(equations, &figures);
    let mut names = train.channels();
    let scenario = &equations.model.scenario;
    names.extend(scenario.motors.iter().map(|motor| format!("{}.speed", motor.body)));
    for magnet in &equations.model.magnets {
        let members = magnet.members.iter().filter(|member| member.body.is_some());
        names.extend(members.map(|member| format!("{}.torque_{}", magnet.name, member.name)));
    }
    let mut channels: Vec<usize> = names
        .iter()
        .filter_map(|name| scenario.channels.iter().position(|channel| channel.name == *name))
        .collect();
    channels.sort_unstable();
    channels.dedup();
    TraceRequest { start, end, columns: COLUMNS, channels, swings }
}

/// The drawings of a run in the order of a report; `again` traces a window of the same run anew.
pub fn drawings(
    equations: &Equations,
    result: &RunResult,
    again: &mut dyn FnMut(TraceRequest) -> Option<Traces>,
    sheet: Sheet,
) -> Vec<Picture> {
    let Some(traces) = &result.traces else { return Vec::new() };
    let scenario = &equations.model.scenario;
    let figures = train::figures(&equations.model);
    let train = describe(equations, &figures);
    let display = display(scenario);
    let over_time = |chart| Picture::over_time(chart, sheet);
    let mut list = vec![over_time(pick::run(result, traces, &train, &display, "run"))];
    for (number, [start, end]) in clusters(result).into_iter().enumerate() {
        if let Some(zoomed) = again(window(equations, start, end, false)) {
            let id = format!("zoom_{}", number + 1);
            list.push(over_time(pick::run(result, &zoomed, &train, &display, &id)));
        }
    }
    list.extend(torque_speed(equations, &figures, &train, result, traces, &display, sheet));
    for (index, gear) in result.gears.iter().enumerate() {
        list.extend(swing(equations, result, traces, gear, index, sheet));
    }
    if !train.shafts.is_empty() && !result.gears.is_empty() {
        list.push(over_time(pick::shafts(result, traces, &train, &display)));
    }
    let measured = pick_records::charts(result, traces, &train, &display);
    list.extend(measured.into_iter().map(over_time));
    list
}

/// Clusters of slips worth a picture of their own: three at most, none that is most of the run.
fn clusters(result: &RunResult) -> Vec<[f64; 2]> {
    let mut windows = pick_rows::zoom_windows(result);
    for window in &mut windows {
        // A long slide is shown at its beginning: forty periods of it tell the story.
        let period = result.gears.iter().map(|gear| gear.natural_period).fold(0.0, f64::max);
        if period.is_finite() && period > 0.0 {
            window[1] = window[1].min(window[0] + 40.0 * period);
        }
    }
    windows.retain(|[start, end]| end > start && end - start < 0.8 * result.end_time);
    windows.truncate(3);
    windows
}

/// The units that a scenario asks for, as charts write them.
pub fn display(scenario: &Scenario) -> Display {
    display_of(&scenario.display)
}

/// The same from the section of the file.
pub fn display_of(typed: &crate::scenario::Display) -> Display {
    let unit = |text: &str, dimension: Dimension| {
        let per_si = quantity::to_unit(1.0, dimension, text).unwrap_or(1.0);
        Unit::new(&number::unit_text(text), per_si)
    };
    Display {
        speed: unit(&typed.speed, Dimension::Speed),
        torque: unit(&typed.torque, Dimension::Torque),
        angle: unit(&typed.angle, Dimension::Angle),
    }
}

/// Which member each body turns with: the first magnet reached over shafts and rigid joints.
fn sides(equations: &Equations) -> Vec<Side> {
    let model = &equations.model;
    let mut sides = vec![Side::Other; model.scenario.bodies.len()];
    for magnet in &model.magnets {
        for member in &magnet.members {
            let Some(body) = member.body else { continue };
            if sides[body] == Side::Other {
                sides[body] = match member.name {
                    "inner" | "a" => Side::Inner,
                    "modulator" => Side::Modulator,
                    _ => Side::Outer,
                };
            }
        }
    }
    let joints: Vec<Vec<usize>> = model
        .shafts
        .iter()
        .map(|shaft| shaft.ends.iter().flatten().copied().collect())
        .chain(
            model.constraints.iter().map(|joint| joint.row.iter().map(|(body, _)| *body).collect()),
        )
        .collect();
    for _ in 0..sides.len() {
        for joint in &joints {
            if let Some(known) =
                joint.iter().map(|body| sides[*body]).find(|side| *side != Side::Other)
            {
                for &body in joint {
                    if sides[body] == Side::Other {
                        sides[body] = known;
                    }
                }
            }
        }
    }
    sides
}

/// The train as the charts see it.
pub fn describe(equations: &Equations, figures: &Figures) -> Train {
    let model = &equations.model;
    let scenario = &model.scenario;
    let sides = sides(equations);
    let acted = |name: &str| {
        scenario.motors.iter().any(|motor| motor.body == name)
            || scenario.loads.iter().any(|load| load.body == name)
    };
    let bodies = figures
        .bodies
        .iter()
        .zip(&sides)
        .map(|(body, side)| TrainBody {
            name: body.name.clone(),
            side: *side,
            referral: body.ratio.filter(|ratio| *ratio != 0.0).map(|ratio| 1.0 / ratio),
            shown: acted(&body.name),
        })
        .collect();
    let shafts = scenario
        .shafts
        .iter()
        .zip(&model.shafts)
        .map(|(typed, shaft)| TrainShaft {
            name: typed.name.clone(),
            side: shaft
                .ends
                .iter()
                .flatten()
                .map(|body| sides[*body])
                .next()
                .unwrap_or(Side::Other),
            rated_torque: typed.rated_torque,
            peak_torque: typed.peak_torque,
        })
        .collect();
    let gears = model
        .magnets
        .iter()
        .enumerate()
        .map(|(index, magnet)| {
            // The slow member, where the torque is large, is the one that engineers speak of.
            let turning = magnet.members.iter().filter(|member| member.body.is_some());
            let shown = turning.max_by(|a, b| a.count.abs().total_cmp(&b.count.abs()));
            let (name, body, side) = match shown {
                Some(member) => (
                    member.name,
                    member.body.map_or_else(String::new, |body| {
                        scenario.bodies[body].name.replace('_', " ")
                    }),
                    match member.name {
                        "inner" | "a" => Side::Inner,
                        "modulator" => Side::Modulator,
                        _ => Side::Outer,
                    },
                ),
                None => ("outer", String::new(), Side::Outer),
            };
            let field = match scenario.magnetic_gears.get(index) {
                Some(gear) => Some(&gear.field),
                None => {
                    let place = index - scenario.magnetic_gears.len();
                    scenario.magnetic_couplings.get(place).map(|coupling| &coupling.field)
                }
            };
            let harmonics = field.map_or_else(Vec::new, |field| {
                field
                    .harmonics
                    .iter()
                    .map(|one| [f64::from(one.order), one.amplitude, one.phase])
                    .collect()
            });
            TrainGear {
                name: magnet.name.clone(),
                shown_member: name,
                shown_body: body,
                side,
                harmonics,
            }
        })
        .collect();
    let (signals, signal_steps) = bars(scenario, equations);
    let records = scenario
        .measured
        .iter()
        .filter_map(|record| {
            let channel = scenario.channels.iter().find(|channel| channel.name == record.of)?;
            Some(TrainRecord {
                name: record.name.clone(),
                channel: record.of.clone(),
                unit: channel.unit,
                rows: record.rows.clone(),
            })
        })
        .collect();
    Train {
        bodies,
        shafts,
        gears,
        reference: figures.reference.replace('_', " "),
        signals,
        signal_steps,
        idle_at_start: idle_at_start(scenario, figures),
        records,
    }
}

fn torque_speed(
    equations: &Equations,
    figures: &Figures,
    train: &Train,
    result: &RunResult,
    traces: &Traces,
    display: &Display,
    sheet: Sheet,
) -> Option<Picture> {
    let found = characteristics::find(equations, figures, result)?;
    let scenario = &equations.model.scenario;
    let own = train.bodies.iter().find(|body| body.name == found.body)?;
    // The gear on the motor's side: its member and what it stands for at the motor shaft.
    let near = equations.model.magnets.iter().find_map(|magnet| {
        let member = magnet.members.iter().find(|member| {
            member
                .body
                .is_some_and(|body| train.bodies[body].side == own.side && own.side != Side::Other)
        })?;
        let body = member.body?;
        let referral = train.bodies[body].referral?;
        Some((magnet, member, referral / own.referral?))
    });
    let pull_out =
        near.map(|(magnet, member, referral)| magnet.pull_out_at(member.count) / referral.abs());
    let path = near.and_then(|(magnet, member, referral)| {
        let torque = format!("{}.torque_{}", magnet.name, member.name);
        let speed = format!("{}.speed", found.body);
        let trace = |name: &str| traces.traces.iter().find(|trace| trace.channel == name);
        let (torque, speed) = (trace(&torque)?, trace(&speed)?);
        let sense = found.drive.last().map_or(1.0, |point| point[0].signum());
        let points: Vec<[f64; 2]> = speed
            .columns
            .iter()
            .zip(&torque.columns)
            .filter_map(|(speed, torque)| {
                Some([sense * speed.as_ref()?.last, -sense * torque.as_ref()?.last / referral])
            })
            .collect();
        let slips = result.gears.iter().any(|gear| gear.slips > 0);
        (!slips && points.len() > 2).then(|| Characteristic {
            label: "through the gear, this run".to_owned(),
            side: Side::Modulator,
            points,
        })
    });
    let load_side = scenario
        .loads
        .first()
        .and_then(|load| train.bodies.iter().find(|body| body.name == load.body))
        .map_or(Side::Outer, |body| body.side);
    let chart = TorqueSpeed {
        id: "torque_speed".to_owned(),
        title: format!("{}: torque over speed at {}", result.title, found.body.replace('_', " ")),
        at: found.body.replace('_', " "),
        motor: Characteristic { label: "Motor".to_owned(), side: own.side, points: found.drive },
        load: found.load.map(|points| Characteristic {
            label: "Load".to_owned(),
            side: load_side,
            points,
        }),
        pull_out,
        operating_point: found.operating_point,
        path,
        display: display.clone(),
        sheet,
    };
    let table = Some(plane_tables::torque_speed(&chart));
    Some(Picture { drawing: torque_speed_chart(&chart), chart: None, table })
}

fn swing(
    equations: &Equations,
    result: &RunResult,
    traces: &Traces,
    gear: &GearResult,
    index: usize,
    sheet: Sheet,
) -> Option<Picture> {
    let mut swing = traces.swings.iter().find(|swing| swing.gear == gear.name)?.clone();
    if swing.path.len() < 2 {
        return None;
    }
    swing.separatrix = separatrix::find(equations, result, index);
    let several = result.gears.len() > 1;
    let chart = SwingChart {
        id: if several { format!("swing_{}", gear.name) } else { "swing".to_owned() },
        title: format!("{}: slip speed over load angle", result.title),
        gear: if several { gear.name.replace('_', " ") } else { String::new() },
        swing,
        peaks: gear.law_peaks,
        slips: gear.slip_events.iter().map(|slip| (slip.time, slip.direction)).collect(),
        in_step: gear.state_at_end == crate::results::GearState::Synchronous,
        sheet,
    };
    let table = Some(plane_tables::swing(&chart));
    Some(Picture { drawing: swing_chart(&chart), chart: None, table })
}
