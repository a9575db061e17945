//! Section 2: the run in charts, its peaks and its events.

use super::Material;
use super::figures::{plain, time};
use super::html::{Figures, HtmlTable, escape, paragraph, rich};
use super::verdict;
use crate::render::chart::curve::Pieces;
use crate::render::chart::number::capital;
use crate::render::chart::plane_tables::Columns;
use crate::render::chart::run_data::run_data;
use crate::render::chart::run_input::RunChart;
use crate::render::pictures::Picture;
use crate::render::shown;
use crate::results::ChannelResult;

/// Rows of a table behind a chart over time.
const SAMPLES: usize = 25;

/// Events shown; the file on disk has all.
const MOST_EVENTS: usize = 60;

/// Shares of a channel's size below this are rounding and shown as 0.
const ROUNDING: f64 = 1e-9;

/// The section's content.
pub fn section(material: &Material<'_>, figures: &mut Figures) -> String {
    let mut html = String::new();
    for gear in &material.result.gears {
        html.push_str(&paragraph(&verdict::told_in_full(gear, material)));
    }
    html.push_str(&chart_figures(material, figures));
    html.push_str(&super::records::section(material));
    html.push_str(&peaks(material));
    html.push_str(&motors(material));
    html.push_str(&clutches(material));
    html.push_str(&events(material));
    html
}

fn chart_figures(material: &Material<'_>, figures: &mut Figures) -> String {
    let mut html = String::new();
    for Picture { drawing, chart, table } in &material.drawings {
        let caption = caption(&drawing.id);
        let behind = match (chart, table) {
            (Some(chart), _) => samples(chart),
            (None, Some(table)) => columns(table),
            (None, None) => String::new(),
        };
        let data = chart.as_ref().map(run_data);
        html.push_str(&figures.with_data(drawing, &caption, &behind, data.as_ref()));
    }
    if html.is_empty() { paragraph("No charts were asked for.") } else { html }
}

/// What a drawing shows and how to read it.
fn caption(id: &str) -> String {
    let text = match id {
        "run" => {
            "Speeds, torque at the magnetic gear, load angle and events on one time axis. Speeds are referred \
             to one body, so that they lie on each other while the gear is in step. Triangles are slips, \
             pointing the way they go; rose is past the peak; hatched lines are limits, hatched on the side \
             that is forbidden; a ring is the moment from which it stays in step."
        }
        "torque_speed" => {
            "Torque over speed at the motor shaft. The light area is what is left to accelerate; the ring is \
             the operating point. Above the hatched line the gear would slip."
        }
        _ if id.starts_with("measured") => {
            "What was measured (dots) and what was computed (line), on the clock of the run. The table below tells \
             how far they are apart."
        }
        "shafts" => "Torques in the shafts, with rated and peak torque where they are given.",
        _ if id.starts_with("zoom") => "The same, closer, where the gear slips.",
        _ if id.starts_with("swing") => {
            "Slip speed over load angle. From inside the blue region the gear falls back into step by itself \
             under the load of the end of the run; outside it slips on."
        }
        _ => "",
    };
    escape(text)
}

/// The figures behind a chart that is not over time.
fn columns(columns: &Columns) -> String {
    let heads: Vec<&str> = columns.heads.iter().map(String::as_str).collect();
    let mut table = HtmlTable::new(&">".repeat(heads.len()), &heads).class("small");
    for row in &columns.rows {
        table.row(row.iter().map(|cell| cell.map_or_else(|| "–".to_owned(), plain)));
    }
    table.html()
}

/// The curves of a chart at evenly spaced times.
pub(in crate::render) fn samples(chart: &RunChart) -> String {
    let curves: Vec<(String, &Pieces)> = chart
        .panels
        .iter()
        .flat_map(|panel| {
            panel.curves.iter().map(move |curve| {
                let unit = panel.unit.split(',').next().unwrap_or_default();
                (format!("{}: {}, {unit}", panel.name, curve.label), &curve.pieces)
            })
        })
        .collect();
    let mut heads = vec!["Time, s".to_owned()];
    heads.extend(curves.iter().map(|(head, _)| head.clone()));
    let heads: Vec<&str> = heads.iter().map(String::as_str).collect();
    let mut table = HtmlTable::new(&">".repeat(heads.len()), &heads).class("small");
    let [start, end] = chart.window;
    for sample in 0..SAMPLES {
        let at = start + (end - start) * sample as f64 / (SAMPLES - 1) as f64;
        let values =
            curves.iter().map(|(_, pieces)| value_at(pieces, at).map_or("–".to_owned(), plain));
        table.row(std::iter::once(plain(at)).chain(values));
    }
    table.html()
}

/// Value of a curve at a time by straight lines.
fn value_at(pieces: &Pieces, at: f64) -> Option<f64> {
    let piece = pieces.iter().find(|piece| {
        let first = piece.first().is_some_and(|point| point[0] <= at + 1e-12);
        first && piece.last().is_some_and(|point| point[0] >= at - 1e-12)
    })?;
    let after = piece.iter().position(|point| point[0] >= at - 1e-12)?;
    let right = piece.get(after)?;
    let left = piece.get(after.saturating_sub(1))?;
    let width = right[0] - left[0];
    if width <= 0.0 {
        return Some(right[1]);
    }
    Some(left[1] + (right[1] - left[1]) * ((at - left[0]) / width).clamp(0.0, 1.0))
}

/// Extremes of the channels that an engineer looks at first.
fn peaks(material: &Material<'_>) -> String {
    let heads = ["Channel", "Unit", "Lowest", "at", "Highest", "at", "At the end"];
    let mut table = HtmlTable::new("<<>>>>>", &heads);
    let wanted =
        [".speed", ".torque", ".slip_speed", ".load_angle", ".flow", ".pull_out_share", ".power"];
    for channel in &material.result.channels {
        let (_, what) = channel.name.split_at(channel.name.rfind('.').unwrap_or(0));
        if wanted.contains(&what) && channel.max >= channel.min {
            table.row(peak_row(material, channel));
        }
    }
    if table.is_empty() {
        return String::new();
    }
    format!(
        "<h3>Peaks</h3>\n<p>Extremes of the continuous solution, not of rows in a file.</p>\n{}",
        table.html()
    )
}

fn peak_row(material: &Material<'_>, channel: &ChannelResult) -> Vec<String> {
    let size = channel.max.abs().max(channel.min.abs());
    let parts = |value: f64| {
        let value = if value.abs() < ROUNDING * size { 0.0 } else { value };
        material.written.parts(&channel.name, channel.unit, value)
    };
    vec![
        escape(&channel.name),
        escape(&parts(channel.max).1),
        escape(&parts(channel.min).0),
        escape(&moment(channel.min_time)),
        escape(&parts(channel.max).0),
        escape(&moment(channel.max_time)),
        escape(&parts(channel.last).0),
    ]
}

/// A time of a run; what is less than a microsecond after the start is the start.
fn moment(value: f64) -> String {
    time(if value < 1e-6 { 0.0 } else { value })
}

fn motors(material: &Material<'_>) -> String {
    let mut table = HtmlTable::new("<>>", &["Motor", "95 % of synchronous speed", "Rotor heat"]);
    for motor in &material.result.motors {
        table.row([
            escape(&motor.name),
            motor.run_up_time.map_or_else(|| "none".to_owned(), time),
            motor.rotor_heat.map_or_else(
                || "–".to_owned(),
                |heat| escape(&super::figures::tidy(&shown::energy(heat))),
            ),
        ]);
    }
    if table.is_empty() { String::new() } else { format!("<h3>Run-up</h3>\n{}", table.html()) }
}

fn clutches(material: &Material<'_>) -> String {
    let mut table =
        HtmlTable::new("<>>><", &["Clutch", "Slips", "Runs free", "Heat", "At the end"]);
    for clutch in &material.result.clutches {
        table.row([
            escape(&clutch.name),
            clutch.slips.to_string(),
            clutch.releases.to_string(),
            escape(&super::figures::tidy(&shown::energy(clutch.heat))),
            capital(clutch.state_at_end.word()),
        ]);
    }
    if table.is_empty() { String::new() } else { format!("<h3>Clutches</h3>\n{}", table.html()) }
}

fn events(material: &Material<'_>) -> String {
    let events = &material.result.events;
    let mut html = "<h3>Events</h3>\n".to_owned();
    if events.is_empty() {
        html.push_str(&paragraph("No events: nothing slipped, stuck, touched or acted."));
        return html;
    }
    let mut table =
        HtmlTable::new("><<<", &["Time", "Event", "Of", "What happened"]).class("events");
    for event in events.iter().take(MOST_EVENTS) {
        table.row([
            escape(&time(event.time)),
            capital(&event.kind.word().replace('_', " ")),
            escape(&event.of),
            rich(&event.text),
        ]);
    }
    html.push_str(&table.html());
    if events.len() > MOST_EVENTS {
        let more = events.len() - MOST_EVENTS;
        html.push_str(&paragraph(&format!(
            "And {more} more, in <code>events.csv</code> beside this page."
        )));
    }
    html
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn curves_are_read_by_straight_lines() {
        let pieces = vec![vec![[0.0, 0.0], [1.0, 10.0]], vec![[2.0, -1.0], [3.0, -1.0]]];
        assert!((value_at(&pieces, 0.25).unwrap() - 2.5).abs() < 1e-12);
        assert_eq!(value_at(&pieces, 1.5), None);
        assert!((value_at(&pieces, 3.0).unwrap() + 1.0).abs() < 1e-12);
    }
}
