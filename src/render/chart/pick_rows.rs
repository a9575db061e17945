//! Chooses the rows of the events strip, and windows worth a closer look.

use super::number::{capital, words};
use super::run::time_words;
use super::run_input::{BarKind, Row};
use super::train::{SignalBar, Train};
use crate::results::{Event, EventKind, GearResult, GearState, RunResult};

/// Most rows of states (stuck, in play); more would bury the slips.
const STATE_ROWS: usize = 4;

/// Rows of the strip, and the times of protections.
pub fn rows(result: &RunResult, train: &Train, window: [f64; 2]) -> (Vec<Row>, Vec<f64>) {
    let mut rows = Vec::new();
    let several = result.gears.len() > 1;
    for gear in &result.gears {
        rows.extend(gear_rows(result, gear, several, window));
    }
    rows.extend(state_rows(result, train, window));
    for (label, kind) in
        [("Protection", EventKind::Protection), ("Limit crossed", EventKind::Requirement)]
    {
        let flags: Vec<(f64, String)> =
            of_kind(result, kind).map(|event| (event.time, words(&event.of))).collect();
        if flags.iter().any(|flag| inside(flag.0, window)) {
            rows.push(Row::Flags { label: label.to_owned(), flags });
        }
    }
    for signal in &train.signals {
        let bars = signal.bars.clone();
        if bars.iter().any(|bar| bar.end > window[0] && bar.start < window[1]) {
            rows.push(Row::Bars { label: signal.label.clone(), kind: BarKind::Signal, bars });
        }
    }
    let acts = of_kind(result, EventKind::Protection).map(|event| event.time).collect();
    (rows, acts)
}

fn inside(time: f64, window: [f64; 2]) -> bool {
    time >= window[0] && time <= window[1]
}

fn of_kind(result: &RunResult, kind: EventKind) -> impl Iterator<Item = &Event> {
    result.events.iter().filter(move |event| event.kind == kind)
}

/// Time and direction of each slip.
pub fn slips(gear: &GearResult) -> Vec<(f64, i32)> {
    gear.slip_events.iter().map(|slip| (slip.time, slip.direction)).collect()
}

fn gear_rows(result: &RunResult, gear: &GearResult, several: bool, window: [f64; 2]) -> Vec<Row> {
    let mut rows = Vec::new();
    let named = |what: &str| {
        if several {
            format!("{}, {}", words(&gear.name), what.to_lowercase())
        } else {
            what.to_owned()
        }
    };
    let slips = slips(gear);
    let seen = slips.iter().any(|slip| inside(slip.0, window));
    if seen {
        rows.push(Row::Slips {
            label: named("Slips"),
            slips,
            in_step: gear.resynchronised_at,
            notes: notes(gear, window),
        });
    }
    let kinds = (EventKind::PastPeak, EventKind::ShortOfPeak);
    let bars = spans(result, &gear.name, kinds, true);
    if bars.iter().any(|bar| bar.end > window[0] && bar.start < window[1]) {
        rows.push(Row::Bars { label: named("Past peak"), kind: BarKind::PastPeak, bars });
    }
    rows
}

/// How many slips, which way, and how it ended; shorter words follow for want of room.
///
/// A window that does not hold all slips tells only what it shows.
fn notes(gear: &GearResult, window: [f64; 2]) -> Vec<String> {
    let all = gear.slip_events.iter().all(|slip| inside(slip.time, window));
    let forward = (i64::from(gear.slips) + i64::from(gear.net_slips)) / 2;
    let backward = i64::from(gear.slips) - forward;
    let word = if gear.slips == 1 { "slip" } else { "slips" };
    let ways = match (forward, backward) {
        (_, 0) => format!("{forward} {word} forward"),
        (0, _) => format!("{backward} {word} backward"),
        _ => format!("{forward} {word} forward and {backward} back"),
    };
    let (ending, short) = match (gear.resynchronised_at, gear.state_at_end) {
        (Some(time), _) if inside(time, window) => {
            let time = time_words(time, window);
            (format!("in step again at {time}"), format!("in step {time}"))
        }
        (Some(_), _) => return if all { vec![ways] } else { Vec::new() },
        (None, GearState::Slipping) => {
            ("still slipping at the end".to_owned(), "still slipping".to_owned())
        }
        (None, _) => ("not decided at the end".to_owned(), "not decided".to_owned()),
    };
    if all { vec![format!("{ways}, {ending}"), ways, short] } else { vec![short] }
}

/// Spans between two kinds of events of one thing; an open one lasts to the end of the run.
///
/// `begun`: an event that ends the state before any began it tells that the run began in it.
fn spans(
    result: &RunResult,
    of: &str,
    (opens, closes): (EventKind, EventKind),
    begun: bool,
) -> Vec<SignalBar> {
    let mut bars = Vec::new();
    let mut start = None;
    let bar = |start, end| SignalBar { start, end, text: String::new() };
    let mut first = true;
    for event in result.events.iter().filter(|event| event.of == of) {
        if event.kind == opens {
            start.get_or_insert(event.time);
        } else if event.kind == closes {
            if let Some(start) = start.take() {
                bars.push(bar(start, event.time));
            } else if first && begun && !event.turns_round() {
                // The first event ends the state, so the run began in it.
                bars.push(bar(0.0, event.time));
            }
        } else {
            continue;
        }
        first = false;
    }
    bars.extend(start.map(|start| bar(start, result.end_time)));
    bars
}

/// Stuck friction and open backlash, in order of their first event.
fn state_rows(result: &RunResult, train: &Train, window: [f64; 2]) -> Vec<Row> {
    let mut rows: Vec<Row> = Vec::new();
    let mut told: Vec<(&str, EventKind)> = Vec::new();
    for event in &result.events {
        let (opens, closes, word) = match event.kind {
            EventKind::Stuck | EventKind::Sliding => {
                (EventKind::Stuck, EventKind::Sliding, "stuck")
            }
            EventKind::Gap | EventKind::Contact => (EventKind::Gap, EventKind::Contact, "in play"),
            _ => continue,
        };
        if told.contains(&(event.of.as_str(), opens)) {
            continue;
        }
        told.push((event.of.as_str(), opens));
        let begun = !train.idle_at_start.contains(&event.of);
        let bars = spans(result, &event.of, (opens, closes), begun);
        if rows.len() < STATE_ROWS
            && bars.iter().any(|bar| bar.end > window[0] && bar.start < window[1])
        {
            let label = format!("{} {word}", capital(&words(&event.of.replace('.', " "))));
            rows.push(Row::Bars { label, kind: BarKind::State, bars });
        }
    }
    rows
}

/// Windows for a closer look, one for each cluster of slips: from three natural periods before the
/// first slip until rest.
pub fn zoom_windows(result: &RunResult) -> Vec<[f64; 2]> {
    let mut windows: Vec<[f64; 2]> = Vec::new();
    for gear in &result.gears {
        let period = gear.natural_period.max(1e-6);
        let mut cluster: Option<[f64; 2]> = None;
        for slip in &gear.slip_events {
            cluster = match cluster {
                Some([start, last]) if slip.time - last <= 8.0 * period => Some([start, slip.time]),
                done => {
                    windows.extend(done.map(|done| widen(done, period, gear)));
                    Some([slip.time, slip.time])
                }
            };
        }
        windows.extend(cluster.map(|done| widen(done, period, gear)));
    }
    windows.sort_by(|one, two| one[0].total_cmp(&two[0]));
    let mut joined: Vec<[f64; 2]> = Vec::new();
    for window in windows {
        let window = [window[0].max(0.0), window[1].min(result.end_time)];
        match joined.last_mut() {
            Some(last) if window[0] <= last[1] => last[1] = last[1].max(window[1]),
            _ => joined.push(window),
        }
    }
    // A window that is most of the run shows nothing that the run chart does not.
    joined.retain(|window| window[1] - window[0] < 0.6 * result.end_time);
    joined.truncate(3);
    joined
}

fn widen([first, last]: [f64; 2], period: f64, gear: &GearResult) -> [f64; 2] {
    let rest = gear.resynchronised_at.filter(|time| *time - last < 8.0 * period).unwrap_or(last);
    [first - 3.0 * period, rest + 5.0 * period]
}
