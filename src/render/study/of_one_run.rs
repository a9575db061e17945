//! Studies of the train as typed or of its one run, as JSON and as tables.

use super::journal::line;
use super::steady;
use crate::analysis::estimates::{Comparison, EstimatesResult, GearEstimate, Variant};
use crate::analysis::modes::{Mode, ModesResult, RealRoot};
use crate::analysis::rainflow::RainflowResult;
use crate::analysis::study::results::{Answer, StudyResult};
use crate::render::json::named;
use crate::render::number::{json, json_optional, plain};
use serde_json::Value;

type Entries = Vec<(&'static str, Value)>;

/// The table of such a study, when it has one.
pub fn table(result: &StudyResult) -> Option<String> {
    match &result.answer {
        Answer::Modes(answer) => Some(modes_table(answer)),
        Answer::Rainflow(answer) => {
            let unit = answer.unit;
            let head =
                [format!("range [{unit}]"), format!("mean [{unit}]"), "count [1]".to_owned()];
            let mut text = line(&head);
            for cycle in &answer.cycles {
                text.push_str(&line(&[cycle.range, cycle.mean, cycle.count].map(plain)));
            }
            Some(text)
        }
        Answer::Steady(answer) => Some(steady::table(answer)),
        _ => None,
    }
}

fn modes_table(answer: &ModesResult) -> String {
    let mut head = ["mode", "frequency_hz [Hz]", "damped_hz [Hz]", "damping_ratio [1]"]
        .map(str::to_owned)
        .to_vec();
    let bodies = answer.modes.first().map_or(&[][..], |mode| &mode.shape.amplitude);
    head.extend(bodies.iter().map(|(body, _)| format!("{body} [1]")));
    let mut text = line(&head);
    for mode in &answer.modes {
        let mut cells = vec![mode.label.clone()];
        cells.extend([mode.frequency_hz, mode.damped_hz, mode.damping_ratio].map(plain));
        cells.extend(mode.shape.amplitude.iter().map(|(_, share)| plain(*share)));
        text.push_str(&line(&cells));
    }
    text
}

fn shares(list: &[(String, f64)]) -> Value {
    named(list.iter().map(|(name, value)| (name.as_str(), json(*value))))
}

fn texts(list: &[String]) -> Value {
    list.iter().map(|text| Value::from(text.as_str())).collect()
}

fn truth(value: Option<bool>) -> Value {
    value.map_or(Value::Null, Value::from)
}

/// The keys of `modes`.
pub fn modes(answer: &ModesResult) -> Entries {
    let diagram = answer.interference.as_ref();
    let crossings = diagram.map_or(&[][..], |diagram| &diagram.crossings).iter().map(|crossing| {
        named([
            ("order", Value::from(crossing.order.as_str())),
            ("mode", Value::from(crossing.mode)),
            ("speed", json_optional(crossing.speed)),
            ("unloaded_speed", json_optional(crossing.unloaded_speed)),
            ("frequency_hz", json(crossing.frequency_hz)),
            ("separation", json_optional(crossing.separation)),
            ("amplification", json_optional(crossing.amplification)),
            ("in_range", Value::from(crossing.in_range)),
        ])
    });
    let softening = answer.softening.iter().map(|gear| {
        let figures = named([
            ("load_angle", json(gear.load_angle)),
            ("load_share", json(gear.load_share)),
            ("stiffness", json(gear.stiffness)),
            ("unloaded_stiffness", json(gear.unloaded_stiffness)),
            ("frequency_factor", json(gear.frequency_factor)),
            ("member_stiffness", shares(&gear.member_stiffness)),
        ]);
        (gear.gear.as_str(), figures)
    });
    vec![
        ("point", Value::from(answer.point.as_str())),
        ("time", json(answer.time)),
        ("speeds", shares(&answer.speeds)),
        ("modes", answer.modes.iter().map(mode).collect()),
        ("overdamped", answer.overdamped.iter().map(root).collect()),
        ("free", answer.free.iter().map(|motion| shares(motion)).collect()),
        ("softening", named(softening)),
        ("separation", json_optional(answer.separation)),
        ("met", truth(answer.met)),
        (
            "speed_range",
            diagram
                .map_or(Value::Null, |diagram| diagram.speeds.iter().map(|it| json(*it)).collect()),
        ),
        ("crossings", crossings.collect()),
    ]
}

fn mode(mode: &Mode) -> Value {
    named([
        ("label", Value::from(mode.label.as_str())),
        ("frequency_hz", json(mode.frequency_hz)),
        ("damped_hz", json(mode.damped_hz)),
        ("damping_ratio", json(mode.damping_ratio)),
        ("unloaded_hz", json_optional(mode.unloaded_hz)),
        ("shape", shares(&mode.shape.amplitude)),
        ("phase", shares(&mode.shape.phase)),
        ("kinetic_share", shares(&mode.shape.kinetic)),
        ("elastic_share", shares(&mode.shape.elastic)),
        ("damping_share", shares(&mode.shape.damping)),
    ])
}

fn root(root: &RealRoot) -> Value {
    named([("rate", json(root.rate)), ("shape", shares(&root.shape))])
}

/// The keys of `rainflow`.
pub fn rainflow(answer: &RainflowResult) -> Entries {
    let cycles = answer.cycles.iter().map(|cycle| {
        named([
            ("range", json(cycle.range)),
            ("mean", json(cycle.mean)),
            ("count", json(cycle.count)),
        ])
    });
    let bins = answer.histogram.bins.iter().map(|bin| {
        named([("from", json(bin.from)), ("to", json(bin.to)), ("count", json(bin.count))])
    });
    let numbers = |list: &[f64]| list.iter().map(|value| json(*value)).collect::<Value>();
    let table = &answer.range_mean;
    vec![
        ("of", Value::from(answer.of.as_str())),
        ("unit", Value::from(answer.unit)),
        ("count", json(answer.count)),
        ("turning_points", Value::from(answer.turning_points)),
        ("min", json(answer.extremes[0])),
        ("max", json(answer.extremes[1])),
        ("slope", json(answer.slope)),
        ("equivalent_cycles", json(answer.equivalent_cycles)),
        ("damage_sum", json(answer.damage_sum)),
        ("damage_equivalent", json(answer.damage_equivalent)),
        ("at_most", json_optional(answer.limit)),
        ("met", truth(answer.met)),
        ("cycles", cycles.collect()),
        ("histogram", bins.collect()),
        (
            "range_mean",
            named([
                ("ranges", numbers(&table.ranges)),
                ("means", numbers(&table.means)),
                ("counts", table.counts.iter().map(|row| numbers(row)).collect()),
            ]),
        ),
    ]
}

/// The keys of `estimates`.
pub fn estimates(answer: &EstimatesResult) -> Entries {
    vec![("gears", named(answer.gears.iter().map(|it| (it.gear.as_str(), gear(it)))))]
}

fn gear(gear: &GearEstimate) -> Value {
    let given =
        |figure: fn(&Variant) -> f64| gear.given().map_or(Value::Null, |it| json(figure(it)));
    let members = gear.members.iter().map(|member| {
        let figures = named([
            ("body", Value::from(member.body.as_str())),
            ("pull_out_torque", json(member.pull_out_torque)),
            ("side_inertia", json(member.side_inertia)),
            ("other_side_inertia", json_optional(member.other_side_inertia)),
            ("acceleration_share", json(member.acceleration_share)),
            ("critical_step_torque", json(member.critical_step_torque)),
            ("jam_speed", json(member.jam_speed)),
            ("jam_speed_at_preload", json_optional(member.jam_speed_at_preload)),
        ]);
        (member.member, figures)
    });
    named([
        ("natural_frequency_hz", json(gear.natural_frequency_hz)),
        ("loaded_frequency_hz", json_optional(gear.loaded_frequency_hz)),
        ("damping_ratio", json(gear.damping_ratio)),
        ("critical_step_share", given(|it| it.critical_step_share)),
        ("jam_speed", json_optional(gear.jam_speed())),
        ("resynchronisation_share", given(|it| it.resynchronisation_share)),
        ("acceleration_share", json_optional(gear.acceleration_share)),
        ("static_service_factor", json_optional(gear.static_service_factor)),
        ("preload", json_optional(gear.preload)),
        ("phase_inertia", json(gear.phase_inertia)),
        ("members", named(members)),
        ("with_damping", named(gear.variants.iter().map(|it| (it.damping, variant(it))))),
        ("comparisons", gear.comparisons.iter().map(comparison).collect()),
        ("notes", texts(&gear.notes)),
    ])
}

fn variant(variant: &Variant) -> Value {
    let pulses = variant.pulses.iter().map(|pulse| {
        named([("overload", json(pulse.overload)), ("duration", json_optional(pulse.duration))])
    });
    named([
        ("damping_ratio", json(variant.damping_ratio)),
        ("critical_step_share", json(variant.critical_step_share)),
        (
            "critical_step_share_from_preload",
            json_optional(variant.critical_step_share_from_preload),
        ),
        ("jam_speed", json_optional(variant.jam_speed)),
        ("jam_speed_at_preload", json_optional(variant.jam_speed_at_preload)),
        ("resynchronisation_share", json(variant.resynchronisation_share)),
        ("pulses", pulses.collect()),
    ])
}

fn comparison(comparison: &Comparison) -> Value {
    named([
        ("figure", Value::from(comparison.figure)),
        ("by_hand", json(comparison.hand)),
        ("found", json_optional(comparison.found)),
        ("unit", Value::from(comparison.unit)),
        ("agree", truth(comparison.agree)),
        ("why", texts(&comparison.why)),
    ])
}
