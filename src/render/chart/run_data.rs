//! The data behind a chart over time, for the script that reads values out and zooms.

use super::axes::Axes;
use super::clip::Frame;
use super::curve::Pieces;
use super::palette::Ink;
use super::run;
use super::run_input::{Curve, Dots, Panel, PanelKind, RunChart, Weight};
use serde_json::{Value, json};

/// All curves with their points in display units.
///
/// ```text
/// { "window": [s, s], "panels": [ { "id", "name", "unit", "frame": [left, top, width, height],
///   "up": [low, high], "curves": [ { "label", "ink", "width", "pieces": [[t, v, t, v, ...], ...] } ],
///   "slips": [ [t, direction], ... ] or null, "dots": [ { "label", "points": [t, v, ...] } ] } ] }
/// ```
///
/// Frames are in CSS pixels. The points are those of the drawing before it is thinned to its
/// size, so zooming shows more than the drawing; extremes of the run are among them.
pub fn run_data(input: &RunChart) -> Value {
    let panels: Vec<Value> = input
        .panels
        .iter()
        .zip(run::panel_axes(input))
        .map(|(panel, axes)| panel_data(panel, &axes))
        .collect();
    json!({ "window": input.window, "panels": panels })
}

fn panel_data(panel: &Panel, axes: &Axes) -> Value {
    let Frame { left, top, width, height } = axes.frame;
    let curves: Vec<Value> = panel.curves.iter().map(|curve| curve_data(curve, axes)).collect();
    let slips = match &panel.kind {
        PanelKind::LoadAngle { slips, .. } => {
            slips.iter().map(|(time, direction)| json!([time, direction])).collect()
        }
        PanelKind::Values => Value::Null,
    };
    json!({
        "id": panel.id,
        "name": panel.name,
        "unit": panel.unit,
        "frame": [left, top, width, height],
        "up": axes.up,
        "curves": curves,
        "slips": slips,
        "dots": panel.dots.iter().map(|dots| dots_data(dots, axes)).collect::<Vec<_>>(),
    })
}

fn dots_data(dots: &Dots, axes: &Axes) -> Value {
    let [start, end] = axes.across;
    let [low, high] = axes.up;
    let inside = dots.points.iter().filter(|point| (start..=end).contains(&point[0]));
    let points: Vec<Value> = inside
        .flat_map(|point| [short(point[0], end - start), short(point[1], high - low)])
        .collect();
    json!({ "label": dots.label, "points": points })
}

fn curve_data(curve: &Curve, axes: &Axes) -> Value {
    let ink: Ink = curve.hue.ink();
    json!({
        "label": curve.label,
        "ink": ink.hex(),
        "width": run::stroke(curve),
        "main": curve.weight == Weight::Main,
        "pieces": pieces(&curve.pieces, axes),
    })
}

fn pieces(pieces: &Pieces, axes: &Axes) -> Vec<Vec<Value>> {
    pieces
        .iter()
        .map(|piece| {
            super::clip::thin(&piece.iter().map(|pair| axes.at(*pair)).collect::<Vec<_>>(), 0.01)
                .iter()
                .flat_map(|place| {
                    let [start, end] = axes.across;
                    let time =
                        start + (place[0] - axes.frame.left) / axes.frame.width * (end - start);
                    let [low, high] = axes.up;
                    let share = (axes.frame.bottom() - place[1]) / axes.frame.height;
                    [short(time, end - start), short(low + share * (high - low), high - low)]
                })
                .collect()
        })
        .collect()
}

/// A number with no more digits than a hundred-thousandth of the range asks for.
fn short(value: f64, range: f64) -> Value {
    let decimals = (5.0 - range.abs().max(1e-12).log10().ceil()).clamp(0.0, 12.0) as usize;
    let rounded = format!("{value:.decimals$}").parse::<f64>().unwrap_or(0.0) + 0.0;
    // Whole numbers are written without a point: it is a third of the page otherwise.
    if rounded.fract().abs() < 1e-12 && rounded.abs() < 1e15 {
        json!(rounded as i64)
    } else {
        json!(rounded)
    }
}
