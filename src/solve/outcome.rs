//! From the recorder of a finished run to its results.

use super::extremes::Extreme;
use super::gear_warnings;
use super::run::Run;
use crate::component::load::LoadLaw;
use crate::equations::frame::load_angle;
use crate::equations::{Equations, Owner, Shape, energy};
use crate::quantity::format_number;
use crate::results::{
    ChannelResult, ClutchResult, ClutchState, Energy, Event, EventKind, GearResult, GearState,
    MemberResult, MotorResult, RunResult, Warning,
};
use crate::scenario::Method;

/// Collects the results; `stored` is the energy at the start, J.
pub fn collect(mut run: Run<'_, '_>, stored: f64) -> RunResult {
    let equations = run.equations;
    let completed = run.failure.is_none();
    run.observer.settle_peak_angles(equations);
    run.observer.gears.iter_mut().for_each(|track| track.spells.end(run.time));
    let gears = gears(&run);
    for gear in &gears {
        if let Some(time) = gear.resynchronised_at {
            run.observer.events.push(Event {
                time,
                kind: EventKind::Resynchronised,
                of: gear.name.clone(),
                value: f64::from(gear.slips),
                unit: "1",
                text: format!("`{}` is in step again", gear.name),
            });
        }
    }
    run.observer.events.sort_by(|a, b| a.time.total_cmp(&b.time));
    let channels = channels(&run);
    let scenario = &equations.model.scenario;
    let requirements = run
        .observer
        .windows
        .iter()
        .filter_map(|window| {
            let place = window.requirement?;
            let unit = equations.model.channels[window.channel].unit;
            Some(window.verdict(&scenario.requirements[place], unit, run.time, completed))
        })
        .collect();
    for event in &mut run.observer.events {
        if event.kind == EventKind::Requirement {
            let of = scenario.requirements.iter().find(|requirement| requirement.name == event.of);
            let channel = of.and_then(|of| {
                equations.model.channels.iter().find(|channel| channel.name == of.of)
            });
            event.unit = channel.map_or("", |channel| channel.unit);
        }
    }
    let audit = audit(equations, &run, stored);
    warn_of_ranges(&mut run);
    warn_of_rotors(&mut run);
    gear_warnings::add(&mut run);
    warn_of_propellers(&mut run);
    let mut warnings: Vec<Warning> = equations
        .model
        .warnings
        .warnings()
        .map(|warning| Warning { path: warning.path.clone(), text: warning.message.clone() })
        .collect();
    warnings.extend(
        run.warnings.iter().map(|(path, text)| Warning { path: path.clone(), text: text.clone() }),
    );
    let stages = match scenario.solver.method {
        Method::Dopri5 => Some((6, 0)),
        Method::Dop853 => Some((12, 1)),
        Method::Rk4 => None,
    };
    let mut work = run.work.clone();
    // The library miscounts rejections; they follow from the calls, but for those of restarts and cuts.
    if let Some((calls, _)) = stages {
        work.rejected = (work.evaluations / calls).saturating_sub(work.steps + 2 * work.events + 2);
    }
    RunResult {
        title: scenario.title.clone(),
        completed,
        failure: run.failure.clone(),
        end_time: run.time,
        gears,
        channels,
        requirements,
        energy: audit,
        motors: motors(&run),
        clutches: clutches(&run),
        warnings,
        solver: work,
        events: std::mem::take(&mut run.observer.events),
        traces: run.observer.tracer.take().map(|tracer| tracer.finish(equations)),
    }
}

fn channels(run: &Run<'_, '_>) -> Vec<ChannelResult> {
    run.observer
        .wanted
        .iter()
        .map(|&place| {
            let channel = &run.equations.model.channels[place];
            let extreme = run.observer.extremes[place];
            ChannelResult {
                name: channel.name.clone(),
                unit: channel.unit,
                min: extreme.min,
                min_time: extreme.min_time,
                max: extreme.max,
                max_time: extreme.max_time,
                last: extreme.last,
            }
        })
        .collect()
}

fn gears(run: &Run<'_, '_>) -> Vec<GearResult> {
    let equations = run.equations;
    let model = &equations.model;
    model
        .magnets
        .iter()
        .enumerate()
        .map(|(index, magnet)| {
            let track = &run.observer.gears[index];
            let period = magnet.natural_period();
            let (state, resynchronised_at, run_longer) = track.judge(run.time, period);
            let place = equations.phase_state[index];
            let share = model
                .channels
                .iter()
                .position(|channel| channel.name == format!("{}.pull_out_share", magnet.name))
                .map(|channel| run.observer.extremes[channel]);
            GearResult {
                name: magnet.name.clone(),
                coupling: magnet.coupling,
                slips: run.observer.counters.slips[index],
                net_slips: run.observer.counters.net_slips[index],
                state_at_end: state,
                run_longer: run_longer.filter(|_| state == GearState::Undecided),
                resynchronised_at,
                peak_pull_out_share: share.map_or(0.0, |share| share.max.clamp(0.0, 1.0)),
                peak_pull_out_share_time: share.map_or(0.0, |share| share.max_time),
                peak_load_angle: track.peak_angle,
                peak_load_angle_time: track.peak_angle_time,
                final_load_angle: load_angle(run.state[place] * equations.scale[place]),
                ratio: magnet.ratio(),
                law_peaks: magnet.law.peaks(),
                members: magnet
                    .members
                    .iter()
                    .map(|member| MemberResult {
                        member: member.name,
                        body: member.body.map_or_else(
                            || "ground".to_owned(),
                            |body| model.scenario.bodies[body].name.clone(),
                        ),
                        count: member.count,
                        pull_out_torque: magnet.pull_out_at(member.count),
                    })
                    .collect(),
                natural_period: period,
                time_past_peak: track.time_past
                    + if track.past { run.time - track.past_since } else { 0.0 },
                slipping_time: track.spells.total,
                longest_slipping: track.spells.longest,
                longest_slipping_from: track.spells.longest_start,
                slip_events: track.slips.clone(),
            }
        })
        .collect()
}

fn motors(run: &Run<'_, '_>) -> Vec<MotorResult> {
    let equations = run.equations;
    equations
        .model
        .scenario
        .motors
        .iter()
        .enumerate()
        .filter_map(|(index, motor)| {
            let heat = equations.heats.iter().position(|(motor, _)| *motor == index)?;
            let watch =
                run.observer.windows.iter().filter(|window| window.requirement.is_none()).nth(heat);
            Some(MotorResult {
                name: motor.name.clone(),
                run_up_time: watch.and_then(super::windows::Window::reached),
                rotor_heat: Some(run.observer.heats[heat]),
            })
        })
        .collect()
}

fn clutches(run: &Run<'_, '_>) -> Vec<ClutchResult> {
    let equations = run.equations;
    let frictions = equations.frictions.iter().enumerate();
    frictions
        .filter_map(|(index, friction)| {
            let Owner::Clutch(clutch) = friction.owner else { return None };
            let clutch = equations.model.scenario.clutches.get(clutch)?;
            let count = |free: bool| {
                let sliding = |event: &&Event| {
                    event.kind == EventKind::Sliding
                        && event.of == clutch.name
                        && clutch.runs_free(event.value) == free
                };
                u32::try_from(run.observer.events.iter().filter(sliding).count())
                    .unwrap_or(u32::MAX)
            };
            Some(ClutchResult {
                name: clutch.name.clone(),
                slips: count(false),
                releases: count(true),
                heat: friction.heat.and_then(|heat| run.observer.heats.get(heat)).copied()?,
                state_at_end: match run.mode.frictions[index].direction() {
                    0.0 => ClutchState::Locked,
                    way if clutch.runs_free(way) => ClutchState::Free,
                    _ => ClutchState::Slipping,
                },
            })
        })
        .collect()
}

fn audit(equations: &Equations, run: &Run<'_, '_>, stored: f64) -> Energy {
    let sums = run.observer.energy;
    let stored_change = energy::stored(equations, &run.mode.contacts, &run.state) - stored;
    let residual = sums.supplied - sums.absorbed - sums.lost - stored_change;
    let turned_over = sums.supplied + sums.absorbed + sums.lost;
    Energy {
        supplied: sums.supplied,
        absorbed: sums.absorbed,
        lost: sums.lost,
        stored_change,
        residual_share: if turned_over > 0.0 { residual.abs() / turned_over } else { 0.0 },
    }
}

/// Warns of rotors without flow, at standstill or in reverse, or driven by the train.
fn warn_of_rotors(run: &mut Run<'_, '_>) {
    let equations = run.equations;
    for load in &equations.model.scenario.loads {
        let LoadLaw::AxialRotor { coefficient, .. } = &load.law else { continue };
        let extreme = |what: &str| {
            let name = format!("{}.{what}", load.name);
            let place = equations.model.channels.iter().position(|channel| channel.name == name)?;
            let extreme = run.observer.extremes[place];
            (extreme.max >= extreme.min).then_some(extreme)
        };
        let mut texts = Vec::new();
        if extreme("flow").is_some_and(|flow| flow.min <= 0.0) {
            texts.push("the flow is not positive at times: the rotor then gives no torque");
        }
        if extreme("tip_speed_ratio").is_some_and(|ratio| ratio.min < 1e-6) {
            texts.push("the rotor stands still or turns backwards at times: its torque near standstill is used there");
        }
        if extreme("power_coefficient").is_some_and(|power| power.min < 0.0) {
            texts.push("the power coefficient is negative at times: the train drives the rotor");
        }
        let last = coefficient.boundaries().last();
        if extreme("tip_speed_ratio").zip(last).is_some_and(|(ratio, last)| ratio.max > *last) {
            texts.push("the tip speed ratio leaves the rows of the power coefficient; the last one is held there");
        }
        let path = format!("loads.{}.law.axial_rotor", load.name);
        run.warnings.extend(texts.into_iter().map(|text| (path.clone(), text.to_owned())));
    }
}

/// Warns of propellers read outside their open-water data, or turning astern.
fn warn_of_propellers(run: &mut Run<'_, '_>) {
    let equations = run.equations;
    for load in &equations.model.scenario.loads {
        let LoadLaw::Propeller { coefficient, .. } = &load.law else { continue };
        let extreme = |name: String| {
            let place = equations.model.channels.iter().position(|channel| channel.name == name)?;
            let extreme = run.observer.extremes[place];
            (extreme.max >= extreme.min).then_some(extreme)
        };
        let mut texts = Vec::new();
        let ratio = extreme(format!("{}.advance_ratio", load.name));
        if let (Some(ratio), Some([low, high])) = (ratio, coefficient.range()) {
            let room = 1e-9 * (high - low).abs();
            if ratio.min < low - room || ratio.max > high + room {
                let shown = |value: f64| format_number(value, 4);
                texts.push(format!(
                    "the advance ratio runs from {} to {}, the data of the torque coefficient from {} to {}; \
                     its end values are held beyond",
                    shown(ratio.min),
                    shown(ratio.max),
                    shown(low),
                    shown(high)
                ));
            }
        }
        let speed = extreme(format!("{}.speed", load.body));
        let astern = |speed: Extreme| if load.reversed { speed.max > 0.0 } else { speed.min < 0.0 };
        if speed.is_some_and(astern) {
            texts.push(
                "the propeller turns astern at times: its torque coefficient at J = 0 is used there, a rough guess"
                    .to_owned(),
            );
        }
        let path = format!("loads.{}.law.propeller", load.name);
        run.warnings.extend(texts.into_iter().map(|text| (path.clone(), text)));
    }
}

/// Warns of laws that were read beyond the data they stand on.
fn warn_of_ranges(run: &mut Run<'_, '_>) {
    let equations = run.equations;
    let scenario = &equations.model.scenario;
    for term in &equations.terms {
        let Shape::Law(law) = &term.shape else { continue };
        let Some([low, high]) = law.warn_range() else { continue };
        let (path, name, reversed) = match term.owner {
            Owner::Motor(index) => {
                let motor = &scenario.motors[index];
                let name = format!("{}.speed", motor.body);
                (format!("motors.{}.law", motor.name), name, motor.reversed)
            }
            Owner::Load(index) => {
                let load = &scenario.loads[index];
                let name = format!("{}.speed", load.body);
                (format!("loads.{}.law", load.name), name, load.reversed)
            }
            Owner::Shaft(index) => {
                let shaft = &scenario.shafts[index].name;
                (format!("shafts.{shaft}.stiffness"), format!("{shaft}.twist"), false)
            }
            _ => continue,
        };
        let Some(place) = equations.model.channels.iter().position(|channel| channel.name == name)
        else {
            continue;
        };
        let extreme = run.observer.extremes[place];
        if extreme.max < extreme.min {
            continue;
        }
        let (from, to) =
            if reversed { (-extreme.max, -extreme.min) } else { (extreme.min, extreme.max) };
        let room = 1e-9 * (high - low).abs();
        if from < low - room || to > high + room {
            run.warnings.push((path, law.warn_text().to_owned()));
        }
    }
}
