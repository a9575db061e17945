//! Charts of what was measured: each channel in a panel of its own, computed curve and record.

use super::curve;
use super::number::{capital, words};
use super::pick::Desk;
use super::run_input::{Curve, Hue, Panel, PanelKind, RunChart};
use super::train::{Train, TrainRecord};
use super::units::{Display, Unit};
use crate::results::{RunResult, Traces};

/// Panels in one chart.
const PANELS: usize = 4;

/// Charts of all records, in file order.
pub fn charts(
    result: &RunResult,
    traces: &Traces,
    train: &Train,
    display: &Display,
) -> Vec<RunChart> {
    let desk = Desk { result, traces, train, display };
    let mut channels: Vec<&TrainRecord> = Vec::new();
    for record in &train.records {
        if !channels.iter().any(|known| known.channel == record.channel) {
            channels.push(record);
        }
    }
    let panels: Vec<Panel> = channels.iter().filter_map(|record| panel(&desk, record)).collect();
    panels
        .chunks(PANELS)
        .enumerate()
        .map(|(place, panels)| {
            let id =
                if place == 0 { "measured".to_owned() } else { format!("measured_{}", place + 1) };
            desk.chart(&id, "What was measured and what was computed", panels.to_vec())
        })
        .collect()
}

fn panel(desk: &Desk<'_>, record: &TrainRecord) -> Option<Panel> {
    let channel = &record.channel;
    let (thing, what) = channel.rsplit_once('.')?;
    let name = format!("{}, {}", capital(&words(what)), words(thing));
    let id = format!("measured-{}", channel.replace('.', "-"));
    if what == "load_angle" {
        return angle(desk, record, thing, name, id);
    }
    let unit = unit(desk, record);
    let curve = desk.curve(channel, unit.per_si)?;
    let side = desk.train.bodies.iter().find(|body| body.name == thing).map(|body| body.side);
    let shaft = desk.train.shafts.iter().find(|shaft| shaft.name == thing).map(|shaft| shaft.side);
    let hue = side.or(shaft).map_or(Hue::Ink, Hue::Side);
    Some(Panel {
        id,
        name,
        unit: unit.text.clone(),
        kind: PanelKind::Values,
        curves: vec![Curve { label: "computed".to_owned(), hue, ..curve }],
        allowed: None,
        limits: desk.requirements(channel, unit.per_si),
        dots: desk.dots(channel, unit.per_si),
    })
}

/// A load angle is cut at each slip, as everywhere.
fn angle(
    desk: &Desk<'_>,
    record: &TrainRecord,
    gear: &str,
    name: String,
    id: String,
) -> Option<Panel> {
    let phase = format!("{gear}.phase");
    let curve = desk.curve(&phase, 1.0)?;
    let factor = 180.0 / std::f64::consts::PI;
    let found = desk.result.gears.iter().find(|found| found.name == gear)?;
    Some(Panel {
        id,
        name,
        unit: "electrical degrees".to_owned(),
        kind: PanelKind::LoadAngle {
            peaks: found.law_peaks.map(|peak| peak * factor),
            slips: super::pick_rows::slips(found),
        },
        curves: vec![Curve {
            channel: record.channel.clone(),
            factor,
            label: "computed".to_owned(),
            pieces: curve::wrap(&curve.pieces),
            ..curve
        }],
        allowed: None,
        limits: Vec::new(),
        dots: desk.angle_dots(gear),
    })
}

/// The unit in which a channel is shown; a prefix fits what was measured.
fn unit(desk: &Desk<'_>, record: &TrainRecord) -> Unit {
    let largest = record.rows.iter().fold(0.0_f64, |largest, row| largest.max(row[1].abs()));
    match record.unit {
        "rad/s" if record.channel.ends_with(".slip_speed") => Unit::new("rad/s", 1.0),
        "rad/s" => desk.display.speed.clone(),
        "N*m" => desk.display.torque.prefixed(largest),
        "rad" => desk.display.angle.clone(),
        "1" if record.channel.ends_with("pull_out_share") => Unit::new("%", 100.0),
        unit => Unit::new(&super::number::unit_text(unit), 1.0),
    }
}
