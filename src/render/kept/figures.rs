//! From `summary.json` and `events.csv` back to the results of a run.

use crate::results::{
    ChannelResult, ClutchResult, ClutchState, Energy, Event, EventKind, GearResult, GearState,
    MemberResult, MotorResult, RequirementResult, RunResult, SlipEvent, SolverWork, Warning,
};
use crate::scenario::Scenario;
use serde_json::Value;

/// Units that stand in results.
const UNITS: [&str; 12] =
    ["1", "s", "rad", "rad/s", "rad/s2", "N*m", "W", "J", "m/s", "A", "V", "degC"];

/// Kinds of events.
const KINDS: [EventKind; 10] = [
    EventKind::Slip,
    EventKind::PastPeak,
    EventKind::ShortOfPeak,
    EventKind::Resynchronised,
    EventKind::Stuck,
    EventKind::Sliding,
    EventKind::Contact,
    EventKind::Gap,
    EventKind::Protection,
    EventKind::Requirement,
];

/// Reads the results; `Err` names what is missing.
pub fn result(summary: &Value, events: &str, scenario: &Scenario) -> Result<RunResult, String> {
    let root = At { value: summary, path: String::new() };
    Ok(RunResult {
        title: root.text("title")?,
        completed: root.flag("completed")?,
        failure: root.value.get("failure").and_then(Value::as_str).map(str::to_owned),
        end_time: root.number("end_time")?,
        gears: root.each("gears", |name, at| gear(name, at, scenario))?,
        channels: root.each("channels", |name, at| channel(name, at, scenario))?,
        requirements: root.each("requirements", |name, at| requirement(name, at, scenario))?,
        energy: energy(&root.at("energy")?)?,
        motors: root.each("motors", |name, at| {
            Ok(MotorResult {
                name: name.to_owned(),
                run_up_time: at.optional("run_up_time"),
                rotor_heat: at.optional("rotor_heat"),
            })
        })?,
        clutches: match summary.get("clutches") {
            Some(_) => root.each("clutches", clutch)?,
            None => Vec::new(),
        },
        warnings: warnings(summary),
        solver: solver(&root.at("solver")?)?,
        events: read_events(events),
        traces: None,
    })
}

/// A place in the summary, for messages.
struct At<'v> {
    value: &'v Value,
    path: String,
}

impl<'v> At<'v> {
    fn at(&self, key: &str) -> Result<At<'v>, String> {
        let path =
            if self.path.is_empty() { key.to_owned() } else { format!("{}.{key}", self.path) };
        match self.value.get(key) {
            Some(value) => Ok(At { value, path }),
            None => Err(format!("`{path}` is missing")),
        }
    }

    fn wrong(&self, what: &str) -> String {
        format!("`{}` is not {what}", self.path)
    }

    fn number(&self, key: &str) -> Result<f64, String> {
        let at = self.at(key)?;
        // Numbers that are not finite are written as null.
        match at.value {
            Value::Null => Ok(f64::NAN),
            value => value.as_f64().ok_or_else(|| at.wrong("a number")),
        }
    }

    fn optional(&self, key: &str) -> Option<f64> {
        self.value.get(key).and_then(Value::as_f64)
    }

    fn whole(&self, key: &str) -> Result<i64, String> {
        let at = self.at(key)?;
        at.value.as_i64().ok_or_else(|| at.wrong("a whole number"))
    }

    fn text(&self, key: &str) -> Result<String, String> {
        let at = self.at(key)?;
        at.value.as_str().map(str::to_owned).ok_or_else(|| at.wrong("a text"))
    }

    fn flag(&self, key: &str) -> Result<bool, String> {
        let at = self.at(key)?;
        at.value.as_bool().ok_or_else(|| at.wrong("true or false"))
    }

    fn list(&self, key: &str) -> Result<Vec<At<'v>>, String> {
        let at = self.at(key)?;
        let items = at.value.as_array().ok_or_else(|| at.wrong("a list"))?;
        let of = |(place, value)| At { value, path: format!("{}.{place}", at.path) };
        Ok(items.iter().enumerate().map(of).collect())
    }

    fn each<T>(
        &self,
        key: &str,
        read: impl Fn(&str, &At<'v>) -> Result<T, String>,
    ) -> Result<Vec<T>, String> {
        let at = self.at(key)?;
        let map = at.value.as_object().ok_or_else(|| at.wrong("a map"))?;
        map.iter()
            .map(|(name, value)| read(name, &At { value, path: format!("{}.{name}", at.path) }))
            .collect()
    }
}

fn gear(name: &str, at: &At<'_>, scenario: &Scenario) -> Result<GearResult, String> {
    let state = match at.text("state_at_end")?.as_str() {
        "synchronous" => GearState::Synchronous,
        "slipping" => GearState::Slipping,
        _ => GearState::Undecided,
    };
    let peaks: Vec<f64> =
        at.list("law_peaks")?.iter().filter_map(|one| one.value.as_f64()).collect();
    let [low, high] = peaks.as_slice() else { return Err(at.wrong("a gear with two peaks")) };
    let members = at.each("members", |member, at| {
        Ok(MemberResult {
            member: ["inner", "modulator", "outer", "a", "b"]
                .into_iter()
                .find(|known| *known == member)
                .ok_or_else(|| at.wrong("a member of a gear"))?,
            body: at.text("body")?,
            count: at.number("count")?,
            pull_out_torque: at.number("pull_out_torque")?,
        })
    })?;
    let slip_events = at
        .list("slip_events")?
        .iter()
        .map(|slip| {
            Ok(SlipEvent {
                time: slip.number("time")?,
                direction: slip.whole("direction")? as i32,
                slip_speed: slip.number("slip_speed")?,
            })
        })
        .collect::<Result<_, String>>()?;
    Ok(GearResult {
        name: name.to_owned(),
        coupling: scenario.magnetic_couplings.iter().any(|coupling| coupling.name == name),
        slips: at.whole("slips")? as u32,
        net_slips: at.whole("net_slips")? as i32,
        state_at_end: state,
        run_longer: at.optional("run_longer"),
        resynchronised_at: at.optional("resynchronised_at"),
        peak_pull_out_share: at.number("peak_pull_out_share")?,
        peak_pull_out_share_time: at.number("peak_pull_out_share_time")?,
        peak_load_angle: at.number("peak_load_angle")?,
        peak_load_angle_time: at.number("peak_load_angle_time")?,
        final_load_angle: at.number("final_load_angle")?,
        ratio: at.optional("ratio"),
        law_peaks: [*low, *high],
        members,
        natural_period: 1.0 / at.number("natural_frequency_hz")?,
        time_past_peak: at.number("time_past_peak")?,
        slipping_time: at.optional("slipping_time").unwrap_or(0.0),
        longest_slipping: at.optional("longest_slipping").unwrap_or(0.0),
        longest_slipping_from: at.optional("longest_slipping_from").unwrap_or(0.0),
        slip_events,
    })
}

fn clutch(name: &str, at: &At<'_>) -> Result<ClutchResult, String> {
    let word = at.text("state_at_end")?;
    Ok(ClutchResult {
        name: name.to_owned(),
        slips: at.whole("slips")? as u32,
        releases: at.whole("releases")? as u32,
        heat: at.number("heat")?,
        state_at_end: ClutchState::ALL
            .into_iter()
            .find(|state| state.word() == word)
            .ok_or_else(|| at.wrong("a clutch with a known state"))?,
    })
}

fn channel(name: &str, at: &At<'_>, scenario: &Scenario) -> Result<ChannelResult, String> {
    let known = scenario.channels.iter().find(|channel| channel.name == name);
    Ok(ChannelResult {
        name: name.to_owned(),
        unit: match known {
            Some(known) => known.unit,
            None => unit(&at.text("unit")?),
        },
        min: at.number("min")?,
        min_time: at.number("min_time")?,
        max: at.number("max")?,
        max_time: at.number("max_time")?,
        last: at.number("final")?,
    })
}

fn requirement(name: &str, at: &At<'_>, scenario: &Scenario) -> Result<RequirementResult, String> {
    let text = at.text("text")?;
    let typed = scenario.requirements.iter().find(|requirement| requirement.name == name);
    Ok(RequirementResult {
        name: name.to_owned(),
        of: at.text("of")?,
        met: at.at("met")?.value.as_bool(),
        value: at.optional("value"),
        limit: at.optional("limit"),
        unit: unit(&at.text("unit")?),
        time: at.optional("time"),
        at_least: typed.is_some() && text.contains("at least"),
        text,
    })
}

fn energy(at: &At<'_>) -> Result<Energy, String> {
    Ok(Energy {
        supplied: at.number("supplied")?,
        absorbed: at.number("absorbed")?,
        lost: at.number("lost")?,
        stored_change: at.number("stored_change")?,
        residual_share: at.number("residual_share")?,
    })
}

fn solver(at: &At<'_>) -> Result<SolverWork, String> {
    let method = at.text("method")?;
    let count = |key: &str| at.whole(key).map(|count| count.unsigned_abs());
    Ok(SolverWork {
        method: ["dopri5", "dop853", "rk4"].into_iter().find(|it| *it == method).unwrap_or(""),
        steps: count("steps")?,
        rejected: count("rejected")?,
        evaluations: count("evaluations")?,
        events: count("events")?,
    })
}

fn warnings(summary: &Value) -> Vec<Warning> {
    let text = |value: &Value, key: &str| {
        value.get(key).and_then(Value::as_str).unwrap_or_default().to_owned()
    };
    let list = summary.get("warnings").and_then(Value::as_array);
    list.into_iter()
        .flatten()
        .map(|one| Warning { path: text(one, "path"), text: text(one, "text") })
        .collect()
}

fn unit(text: &str) -> &'static str {
    UNITS.into_iter().find(|unit| *unit == text).unwrap_or("1")
}

/// Events of the table; a line that is none of ours is left out.
fn read_events(text: &str) -> Vec<Event> {
    let mut reader = csv::ReaderBuilder::new().flexible(true).from_reader(text.as_bytes());
    let read = |record: &csv::StringRecord| {
        let cell = |place: usize| record.get(place).unwrap_or_default();
        Some(Event {
            time: cell(0).parse().ok()?,
            kind: KINDS.into_iter().find(|kind| kind.word() == cell(1))?,
            of: cell(2).to_owned(),
            value: cell(3).parse().unwrap_or(f64::NAN),
            unit: unit(cell(4)),
            text: cell(5).to_owned(),
        })
    };
    reader.records().flatten().filter_map(|record| read(&record)).collect()
}
