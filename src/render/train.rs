//! The figures of a train on one screen, and the same as JSON.

use super::json::named;
use super::number::{json, json_optional};
use super::poles;
use super::shown::{self, Shown};
use super::story;
use super::table::{Table, wrap};
use super::text::WIDTH;
use crate::analysis::poles::{Held, PolePairs};
use crate::analysis::train::{LossFigures, MagnetFigures, Train};
use crate::component::clutch::{Clutch, ClutchKind};
use crate::quantity::format_number;
use crate::scenario::{Method, Scenario, Start};
use serde_json::Value;
use std::f64::consts::FRAC_PI_2;
use std::fmt::Write as _;

/// The train in words and tables.
pub fn text(file: &str, scenario: &Scenario, train: &Train) -> String {
    let shown = Shown::new(&scenario.display);
    let mut text = String::new();
    if !scenario.title.trim().is_empty() {
        text.push_str(&wrap("", &scenario.title, WIDTH));
    }
    let start = match scenario.start {
        Start::AsGiven => "start as given",
        Start::Steady => "steady start",
    };
    let method = match scenario.solver.method {
        Method::Dopri5 => "dopri5",
        Method::Dop853 => "dop853",
        Method::Rk4 => "rk4",
    };
    let _ = writeln!(
        text,
        "{file}: {} to run, {start}, {method}; {} channels, {} requirements, {} studies",
        shown::time(scenario.duration),
        scenario.channels.len(),
        scenario.requirements.len(),
        scenario.studies.len()
    );
    text.push_str(&bodies(train, shown));
    for magnet in &train.magnets {
        text.push_str(&magnet_text(magnet, shown));
    }
    text.push_str(&shafts(train, shown));
    text.push_str(&joints(scenario));
    text.push_str(&drives(scenario));
    text
}

fn bodies(train: &Train, shown: Shown<'_>) -> String {
    let referred = format!("kg*m2 referred to {}", train.reference);
    let mut table = Table::new("<>>>>");
    table.row(["body", "inertia, kg*m2", "turns", &referred, "starts at"]);
    let mut total = 0.0;
    for body in &train.bodies {
        total += body.referred_inertia.unwrap_or(0.0);
        table.row([
            &body.name,
            &shown::number(body.inertia),
            &body
                .ratio
                .map_or_else(|| "freely".to_owned(), |it| format!("x {}", format_number(it, 5))),
            &body.referred_inertia.map_or_else(|| "-".to_owned(), shown::number),
            &shown.speed(body.start_speed),
        ]);
    }
    table.row(["all of these", "", "", &shown::number(total), ""]);
    format!("\n{}", table.text(2))
}

fn magnet_text(magnet: &MagnetFigures, shown: Shown<'_>) -> String {
    let kind = if magnet.coupling { "Magnetic coupling" } else { "Magnetic gear" };
    let mut head = format!("{kind} `{}`: {}", magnet.name, sense(magnet));
    if (magnet.temperature_factor - 1.0).abs() > 1e-12 {
        let _ = write!(
            head,
            "; {} of the pull-out torque left at the magnets' temperature",
            shown::percent(magnet.temperature_factor)
        );
    }
    let mut text = format!("\n{}", wrap("", &head, WIDTH));
    let mut table = Table::new("<<>>>>");
    table.row([
        "member",
        "body",
        "count",
        "pull-out",
        "stiffness, N*m/rad",
        "inertia there, kg*m2",
    ]);
    for member in &magnet.members {
        table.row([
            member.member,
            member.body.as_deref().unwrap_or("held"),
            &format_number(member.count, 9),
            &shown.torque(member.pull_out_torque),
            &shown::number(member.stiffness),
            &member.inertia.map_or_else(|| "-".to_owned(), shown::number),
        ]);
    }
    text.push_str(&table.text(2));
    if let Some(pairs) = magnet.pole_pairs {
        let [inner, outer] = pairs.ripple_orders();
        let remarks: String =
            poles::remarks(pairs).iter().map(|remark| format!("; {remark}")).collect();
        let line = format!(
            "inner : outer {} (modulator held), inner : modulator {} (outer held), outer : modulator {} \
             (inner held); ripple orders {inner} and {outer}, cogging factor {}{remarks}",
            format_number(pairs.ratio(Held::Modulator), 6),
            format_number(pairs.ratio(Held::Outer), 6),
            format_number(pairs.ratio(Held::Inner), 6),
            pairs.cogging_factor()
        );
        text.push_str(&wrap("  ", &line, WIDTH));
    }
    let swing = if magnet.natural_frequency > 0.0 && magnet.natural_frequency.is_finite() {
        format!(
            "zero-load natural frequency {} Hz, period {}, damping ratio {}",
            shown::number(magnet.natural_frequency),
            shown::time(1.0 / magnet.natural_frequency),
            shown::percent(magnet.damping_ratio)
        )
    } else {
        "no zero-load natural frequency: nothing that turns is joined to it".to_owned()
    };
    let [low, high] = magnet.law_peaks;
    let peaks = if (high - FRAC_PI_2).abs() < 1e-9 && (low + FRAC_PI_2).abs() < 1e-9 {
        String::new()
    } else {
        format!(
            "; peaks of the torque at {} and {} electrical",
            shown.angle(low),
            shown.angle(high)
        )
    };
    text.push_str(&wrap("  ", &format!("{swing}{peaks}"), WIDTH));
    if let Some(losses) = &magnet.losses {
        text.push_str(&wrap("  ", &loss_words(losses, shown), WIDTH));
    }
    for (index, time) in magnet.thermal_times.iter().enumerate() {
        let node = if magnet.thermal_times.len() > 1 { magnet_node(magnet, index) } else { "" };
        let line =
            format!("the magnets {node}warm up with a time constant of {}", shown::time(*time));
        text.push_str(&wrap("  ", &line, WIDTH));
    }
    text
}

/// Which of two thermal nodes, in words.
fn magnet_node(magnet: &MagnetFigures, index: usize) -> &'static str {
    match (magnet.coupling, index) {
        (false, 0) => "of the inner rotor, by themselves, ",
        (false, _) => "of the outer rotor, by themselves, ",
        (true, 0) => "of half a, by themselves, ",
        (true, _) => "of half b, by themselves, ",
    }
}

fn loss_words(losses: &LossFigures, shown: Shown<'_>) -> String {
    let [inner, pieces, outer] =
        losses.frequencies.map(|frequency| format!("{} Hz", shown::number(frequency)));
    format!(
        "loss without load {} W at {} of the {} rotor against the modulator: hysteresis {} W, eddy currents {} W; \
         the fields change at {pieces} in the pieces, {inner} in the inner rotor, {outer} in the outer one",
        shown::number(losses.hysteresis + losses.eddy),
        shown.speed(losses.speed),
        losses.rotor,
        shown::number(losses.hysteresis),
        shown::number(losses.eddy),
    )
}

fn sense(magnet: &MagnetFigures) -> String {
    let turning: Vec<_> =
        magnet.members.iter().filter_map(|it| Some((it.body.as_deref()?, it.count))).collect();
    match (turning.as_slice(), magnet.ratio) {
        ([a, b], Some(ratio)) => {
            let (fast, slow) = if a.1 <= b.1 { (a, b) } else { (b, a) };
            story::turning_words(fast.0, slow.0, ratio)
        }
        ([_], _) => "one member turns, the others are held: a magnetic spring".to_owned(),
        _ => "all three members turn: a differential".to_owned(),
    }
}

fn shafts(train: &Train, shown: Shown<'_>) -> String {
    let mut table = Table::new("<<>>>>");
    table.row(["shaft", "between", "N*m/rad", "N*m*s/rad", "own mode", "free play"]);
    for shaft in &train.shafts {
        let between = shaft.between.join(" - ");
        if shaft.rigid {
            table.row([&shaft.name, &between, "rigid", "", "", ""]);
            continue;
        }
        let mode = if shaft.own_frequency.is_finite() && shaft.own_frequency > 0.0 {
            format!("{} Hz", shown::number(shaft.own_frequency))
        } else {
            String::new()
        };
        let play = if shaft.backlash > 0.0 { shown.angle(shaft.backlash) } else { String::new() };
        let (stiffness, damping) = (shown::number(shaft.stiffness), shown::number(shaft.damping));
        table.row([&shaft.name, &between, &stiffness, &damping, &mode, &play]);
    }
    if table.len() < 2 { String::new() } else { format!("\n{}", table.text(2)) }
}

fn joints(scenario: &Scenario) -> String {
    let mut text = String::new();
    for pair in &scenario.gear_pairs {
        let [a, b] = &pair.between;
        let ratio = format_number(pair.ratio, 6);
        let _ = writeln!(text, "  gear pair `{}`: `{a}` turns at {ratio} times `{b}`", pair.name);
    }
    for set in &scenario.planetary_gears {
        let _ = writeln!(
            text,
            "  planetary set `{}`: sun `{}` {} teeth, carrier `{}`, ring `{}` {} teeth",
            set.name, set.sun, set.teeth_sun, set.carrier, set.ring, set.teeth_ring
        );
    }
    for clutch in &scenario.clutches {
        let [a, b] = &clutch.between;
        let _ = writeln!(
            text,
            "  {} `{}`: {}",
            clutch.label(),
            clutch.name,
            clutch_words(clutch, a, b)
        );
    }
    for coupling in &scenario.fluid_couplings {
        let [pump, turbine] = &coupling.between;
        let _ = writeln!(
            text,
            "  fluid coupling `{}`: pump wheel on `{pump}`, turbine wheel on `{turbine}`",
            coupling.name
        );
    }
    if text.is_empty() { text } else { format!("\n{text}") }
}

fn clutch_words(clutch: &Clutch, a: &str, b: &str) -> String {
    match clutch.kind {
        ClutchKind::Overrunning { reversed, slipping_torque, .. } => {
            let [ahead, behind] = if reversed { [a, b] } else { [b, a] };
            let slips = if slipping_torque.is_finite() {
                format!(", slips at {} N*m", format_number(slipping_torque, 6))
            } else {
                String::new()
            };
            format!("`{ahead}` may turn faster than `{behind}`{slips}")
        }
        ClutchKind::Limiter { torque, breakaway } => format!(
            "between `{a}` and `{b}`, begins to slip at {} N*m, slips at {} N*m",
            format_number(breakaway, 6),
            format_number(torque, 6)
        ),
    }
}

fn drives(scenario: &Scenario) -> String {
    let list = |items: Vec<String>| items.join(", ");
    let motors = scenario.motors.iter().map(|it| format!("`{}` on `{}`", it.name, it.body));
    let loads = scenario.loads.iter().map(|it| format!("`{}` on `{}`", it.name, it.body));
    let brakes = scenario.brakes.iter().map(|it| format!("`{}` on `{}`", it.name, it.body));
    let mut text = String::new();
    for (what, items) in [
        ("Motors", list(motors.collect())),
        ("Loads", list(loads.collect())),
        ("Brakes", list(brakes.collect())),
    ] {
        if !items.is_empty() {
            text.push_str(&wrap(&format!("{what}: "), &items, WIDTH));
        }
    }
    if text.is_empty() { text } else { format!("\n{text}") }
}

/// The train for machines: SI, rad, Hz where a key says so.
pub fn to_json(scenario: &Scenario, train: &Train) -> Value {
    let bodies = train.bodies.iter().map(|body| {
        let figures = named([
            ("inertia", json(body.inertia)),
            ("ratio_to_reference", json_optional(body.ratio)),
            ("referred_inertia", json_optional(body.referred_inertia)),
            ("start_speed", json(body.start_speed)),
        ]);
        (body.name.as_str(), figures)
    });
    let shafts = train.shafts.iter().map(|shaft| {
        let figures = named([
            ("between", Value::from(shaft.between.to_vec())),
            ("rigid", Value::from(shaft.rigid)),
            ("stiffness", if shaft.rigid { Value::Null } else { json(shaft.stiffness) }),
            ("damping", if shaft.rigid { Value::Null } else { json(shaft.damping) }),
            ("backlash", json(shaft.backlash)),
            ("own_frequency_hz", if shaft.rigid { Value::Null } else { json(shaft.own_frequency) }),
        ]);
        (shaft.name.as_str(), figures)
    });
    named([
        ("title", Value::from(scenario.title.as_str())),
        ("duration", json(scenario.duration)),
        ("channels", Value::from(scenario.channels.len())),
        ("requirements", Value::from(scenario.requirements.len())),
        ("studies", Value::from(scenario.studies.len())),
        ("reference", Value::from(train.reference.as_str())),
        ("bodies", named(bodies)),
        ("gears", named(train.magnets.iter().map(|it| (it.name.as_str(), magnet_json(it))))),
        ("shafts", named(shafts)),
    ])
}

fn magnet_json(magnet: &MagnetFigures) -> Value {
    let members = magnet.members.iter().map(|member| {
        let figures = named([
            ("body", member.body.as_deref().map_or(Value::from("ground"), Value::from)),
            ("count", json(member.count)),
            ("pull_out_torque", json(member.pull_out_torque)),
            ("stiffness", json(member.stiffness)),
            ("inertia", json_optional(member.inertia)),
        ]);
        (member.member, figures)
    });
    named([
        ("coupling", Value::from(magnet.coupling)),
        ("ratio", json_optional(magnet.ratio)),
        ("members", named(members)),
        ("ratios", magnet.pole_pairs.map_or(Value::Null, six_ratios)),
        (
            "ripple_orders",
            magnet.pole_pairs.map_or(Value::Null, |it| it.ripple_orders().to_vec().into()),
        ),
        ("cogging_factor", magnet.pole_pairs.map_or(Value::Null, |it| it.cogging_factor().into())),
        ("natural_frequency_hz", json(magnet.natural_frequency)),
        ("natural_period", json(1.0 / magnet.natural_frequency)),
        ("damping_ratio", json(magnet.damping_ratio)),
        ("phase_inertia", json(magnet.phase_inertia)),
        ("temperature_factor", json(magnet.temperature_factor)),
        ("losses", magnet.losses.as_ref().map_or(Value::Null, losses_json)),
        (
            "thermal_times",
            Value::Array(magnet.thermal_times.iter().map(|time| json(*time)).collect()),
        ),
        ("law_peaks", Value::Array(magnet.law_peaks.iter().map(|peak| json(*peak)).collect())),
    ])
}

fn losses_json(losses: &LossFigures) -> Value {
    let [inner, pieces, outer] = losses.frequencies;
    named([
        ("rotor", Value::from(losses.rotor)),
        ("speed", json(losses.speed)),
        ("hysteresis", json(losses.hysteresis)),
        ("eddy", json(losses.eddy)),
        ("inner_hz", json(inner)),
        ("pieces_hz", json(pieces)),
        ("outer_hz", json(outer)),
    ])
}

/// The six ratios of a choice of pole pairs, by what drives and what is driven.
pub fn six_ratios(pairs: PolePairs) -> Value {
    let (modulator, outer, inner) =
        (pairs.ratio(Held::Modulator), pairs.ratio(Held::Outer), pairs.ratio(Held::Inner));
    named([
        ("inner_to_outer", json(modulator)),
        ("outer_to_inner", json(1.0 / modulator)),
        ("inner_to_modulator", json(outer)),
        ("modulator_to_inner", json(1.0 / outer)),
        ("outer_to_modulator", json(inner)),
        ("modulator_to_outer", json(1.0 / inner)),
    ])
}
