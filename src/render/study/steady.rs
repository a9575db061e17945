//! The study `steady` as JSON, as a table on disk and as text.

use super::journal::line;
use crate::analysis::operating_point::OperatingPoint;
use crate::analysis::study::results::{SteadyAnswer, SteadyPoint};
use crate::render::json::named;
use crate::render::number::{json, json_optional, plain};
use crate::render::shown::{Shown, percent, power};
use crate::render::table::Table;
use serde_json::Value;

/// The keys of `steady`.
pub fn entries(answer: &SteadyAnswer) -> Vec<(&'static str, Value)> {
    let varied = answer.varied.as_ref();
    vec![
        ("vary", varied.map_or(Value::Null, |varied| Value::from(varied.path.as_str()))),
        ("unit", varied.map_or(Value::Null, |varied| Value::from(varied.dimension.si_unit()))),
        ("points", answer.points.iter().map(point).collect()),
    ]
}

fn point(point: &SteadyPoint) -> Value {
    let value = json_optional(point.value);
    let found = match &point.point {
        Ok(found) => found,
        Err(reason) => {
            return named([("value", value), ("failure", Value::from(reason.as_str()))]);
        }
    };
    let bodies =
        found.bodies.iter().map(|(name, speed)| (name.as_str(), named([("speed", json(*speed))])));
    let shafts = found.shafts.iter().map(|shaft| {
        let figures = named([
            ("torque", json(shaft.torque)),
            ("twist", json_optional(shaft.twist)),
            ("utilisation", json_optional(shaft.utilisation)),
        ]);
        (shaft.name.as_str(), figures)
    });
    let joints = found.joints.iter().map(|(name, member, torque)| {
        named([
            ("joint", Value::from(name.as_str())),
            ("member", Value::from(*member)),
            ("torque", json(*torque)),
        ])
    });
    let magnets = found.magnets.iter().map(|magnet| {
        let members = magnet.members.iter().map(|member| {
            let figures = named([
                ("body", Value::from(member.body.as_str())),
                ("torque", json(member.torque)),
                ("pull_out_torque", json(member.pull_out_torque)),
            ]);
            (member.member, figures)
        });
        let figures = named([
            ("load_angle", json(magnet.load_angle)),
            ("pull_out_share", json(magnet.pull_out_share)),
            ("margin", json(magnet.margin)),
            ("service_factor", json_optional(magnet.service_factor)),
            ("loss", json(magnet.loss)),
            ("members", named(members)),
        ]);
        (magnet.name.as_str(), figures)
    });
    let actors = found.actors.iter().map(|actor| {
        let figures = named([
            ("kind", Value::from(actor.kind)),
            ("torque", json(actor.torque)),
            ("power", json(actor.power)),
        ]);
        (actor.name.as_str(), figures)
    });
    named([
        ("value", value),
        ("failure", Value::Null),
        ("bodies", named(bodies)),
        ("shafts", named(shafts)),
        ("joints", joints.collect()),
        ("gears", named(magnets)),
        ("actors", named(actors)),
        ("supplied", json(found.supplied)),
        ("absorbed", json(found.absorbed)),
        ("lost", json(found.lost)),
        ("efficiency", json_optional(found.efficiency)),
    ])
}

/// The table on disk: one row a point.
pub fn table(answer: &SteadyAnswer) -> String {
    let Some(first) = answer.points.iter().find_map(|point| point.point.as_ref().ok()) else {
        return String::new();
    };
    let width = figures(first).len();
    let mut head: Vec<String> = answer.varied.iter().map(|varied| varied.column()).collect();
    head.extend(figures(first).into_iter().map(|(name, _)| name));
    head.push("failure".to_owned());
    let mut text = line(&head);
    for point in &answer.points {
        let mut cells: Vec<String> = point.value.iter().map(|value| plain(*value)).collect();
        match &point.point {
            Ok(found) => {
                cells.extend(figures(found).into_iter().map(|(_, value)| plain(value)));
                cells.push(String::new());
            }
            Err(reason) => {
                cells.extend(std::iter::repeat_n(String::new(), width));
                cells.push(reason.replace(['\n', '\r'], " "));
            }
        }
        text.push_str(&line(&cells));
    }
    text
}

/// Every figure of a point under the name of its channel.
fn figures(point: &OperatingPoint) -> Vec<(String, f64)> {
    let mut list = Vec::new();
    let mut add = |name: String, value: f64| list.push((name, value));
    for (body, speed) in &point.bodies {
        add(format!("{body}.speed [rad/s]"), *speed);
    }
    for shaft in &point.shafts {
        add(format!("{}.torque [N*m]", shaft.name), shaft.torque);
    }
    for (joint, member, torque) in &point.joints {
        add(format!("{joint}.torque_{member} [N*m]"), *torque);
    }
    for magnet in &point.magnets {
        add(format!("{}.load_angle [rad]", magnet.name), magnet.load_angle);
        add(format!("{}.pull_out_share [1]", magnet.name), magnet.pull_out_share);
        add(format!("{}.loss [W]", magnet.name), magnet.loss);
    }
    for actor in &point.actors {
        add(format!("{}.torque [N*m]", actor.name), actor.torque);
        add(format!("{}.power [W]", actor.name), actor.power);
    }
    add("supplied [W]".to_owned(), point.supplied);
    add("absorbed [W]".to_owned(), point.absorbed);
    add("lost [W]".to_owned(), point.lost);
    list
}

/// The answer in one sentence.
pub fn sentence(answer: &SteadyAnswer) -> String {
    let found: Vec<(&SteadyPoint, &OperatingPoint)> =
        answer.points.iter().filter_map(|it| Some((it, it.point.as_ref().ok()?))).collect();
    let highest = found
        .iter()
        .flat_map(|(point, found)| found.magnets.iter().map(move |magnet| (point, magnet)))
        .max_by(|(_, a), (_, b)| a.pull_out_share.total_cmp(&b.pull_out_share));
    let load = highest.map_or_else(String::new, |(point, magnet)| {
        let at = answer.varied.as_ref().zip(point.value);
        let at =
            at.map_or_else(String::new, |(varied, value)| format!(" (at {})", varied.shown(value)));
        format!(
            "; `{}` bears {} of its pull-out torque{at}",
            magnet.name,
            percent(magnet.pull_out_share)
        )
    });
    match (answer.points.as_slice(), &answer.varied) {
        ([_], None) => format!("The train has a stable operating point{load}."),
        (points, _) => format!("{} of {} points are stable{load}.", found.len(), points.len()),
    }
}

/// The table for people.
pub fn text(answer: &SteadyAnswer, shown: Shown<'_>) -> Table {
    match (&answer.varied, answer.points.as_slice()) {
        (None, [SteadyPoint { point: Ok(point), .. }]) => one(point, shown),
        (varied, points) => {
            let mut table = Table::new(">>>>");
            let path = varied.as_ref().map_or("", |varied| varied.path.as_str());
            table.row([path, "largest share of pull-out", "lost", ""]);
            for point in points {
                let value = varied.as_ref().zip(point.value);
                let value = value.map_or_else(String::new, |(varied, value)| varied.shown(value));
                match &point.point {
                    Ok(found) => {
                        let share = found
                            .magnets
                            .iter()
                            .map(|magnet| magnet.pull_out_share)
                            .reduce(f64::max);
                        let share = share.map_or_else(|| "-".to_owned(), percent);
                        table.row([&value, &share, &power(found.lost), ""]);
                    }
                    Err(reason) => table.row([&value, "-", "-", reason]),
                }
            }
            table
        }
    }
}

fn one(point: &OperatingPoint, shown: Shown<'_>) -> Table {
    let mut table = Table::new("<<>>>");
    table.row(["", "", "speed or angle", "torque", "power or share"]);
    for (body, speed) in &point.bodies {
        table.row(["body", body, &shown.speed(*speed), "", ""]);
    }
    for shaft in &point.shafts {
        let twist = shaft.twist.map_or_else(String::new, |twist| shown.angle(twist));
        let used = shaft.utilisation.map_or_else(String::new, percent);
        table.row(["shaft", &shaft.name, &twist, &shown.torque(shaft.torque), &used]);
    }
    for (joint, member, torque) in &point.joints {
        table.row(["joint", &format!("{joint} {member}"), "", &shown.torque(*torque), ""]);
    }
    for magnet in &point.magnets {
        let angle = shown.electrical_angle(magnet.load_angle);
        table.row(["magnets", &magnet.name, &angle, "", &percent(magnet.pull_out_share)]);
        for member in &magnet.members {
            let name = format!("{} {}", magnet.name, member.member);
            table.row(["", &name, "", &shown.torque(member.torque), ""]);
        }
    }
    for actor in &point.actors {
        table.row([actor.kind, &actor.name, "", &shown.torque(actor.torque), &power(actor.power)]);
    }
    table.row(["lost", "", "", "", &power(point.lost)]);
    table
}
