//! Chooses what the run chart shows from what a run found.

use super::axes::Sheet;
use super::curve::{self, Law};
use super::drawing::Dash;
use super::marks::Forbidden;
use super::number::{capital, number, words};
use super::palette::Side;
use super::pick_rows;
use super::run_input::{Curve, Dots, Hue, Limit, Panel, PanelKind, RunChart, Weight};
use super::train::{Train, TrainGear};
use super::units::Display;
use crate::results::{Column, GearResult, RunResult, Traces};

/// Gears with panels of their own; more have rows in the strip only.
const GEARS_SHOWN: usize = 2;

/// The chart of a whole run or, as `zoom`, of a window of it: `traces` tell which.
pub fn run(
    result: &RunResult,
    traces: &Traces,
    train: &Train,
    display: &Display,
    id: &str,
) -> RunChart {
    let desk = Desk { result, traces, train, display };
    let mut panels: Vec<Panel> = desk.speed_panel().into_iter().collect();
    let gears = desk.shown_gears();
    let several = gears.len() > 1;
    for (gear, found) in &gears {
        panels.extend(desk.torque_panel(gear, found, several));
        panels.extend(desk.angle_panel(gear, found, several));
    }
    if gears.is_empty() {
        panels.extend(desk.shaft_panel());
    }
    desk.chart(id, "Speeds, torques, load angles and events over time", panels)
}

/// The torques of the shafts over time, each in a panel of its own up to four.
pub fn shafts(result: &RunResult, traces: &Traces, train: &Train, display: &Display) -> RunChart {
    let desk = Desk { result, traces, train, display };
    let panels = train
        .shafts
        .iter()
        .take(4)
        .filter_map(|shaft| {
            let curve = desk.curve(&format!("{}.torque", shaft.name), 1.0)?;
            let curve = Curve { hue: Hue::Side(shaft.side), ..curve };
            let mut panel = desk.torques(&shaft.name, vec![curve]);
            panel.name = format!("Torque in {}", words(&shaft.name));
            let factor = panel.curves.first().map_or(1.0, |curve| curve.factor);
            for (name, torque) in [("Rated", shaft.rated_torque), ("Peak", shaft.peak_torque)] {
                let Some(torque) = torque else { continue };
                panel.limits.extend(both_ways(name, torque * factor));
            }
            let channel = format!("{}.torque", shaft.name);
            panel.limits.extend(desk.requirements(&channel, factor));
            panel.dots = desk.dots(&channel, factor);
            Some(panel)
        })
        .collect();
    desk.chart("shafts", "Shaft torques and events over time", panels)
}

pub(super) struct Desk<'a> {
    pub(super) result: &'a RunResult,
    pub(super) traces: &'a Traces,
    pub(super) train: &'a Train,
    pub(super) display: &'a Display,
}

impl<'a> Desk<'a> {
    pub(super) fn chart(&self, id: &str, title: &str, panels: Vec<Panel>) -> RunChart {
        let window = [self.traces.start, self.traces.end];
        let (rows, acts) = pick_rows::rows(self.result, self.train, window);
        RunChart {
            id: id.to_owned(),
            title: format!("{}: {title}", self.result.title),
            window,
            panels,
            rows,
            steps: self.train.signal_steps.clone(),
            acts,
            sheet: Sheet::PAGE,
        }
    }

    fn columns(&self, channel: &str) -> Option<&'a [Option<Column>]> {
        let found = self.traces.traces.iter().find(|trace| trace.channel == channel)?;
        Some(&found.columns)
    }

    pub(super) fn curve(&self, channel: &str, factor: f64) -> Option<Curve> {
        let window = [self.traces.start, self.traces.end];
        let pieces = curve::pieces(self.columns(channel)?, window, factor);
        (!pieces.is_empty()).then(|| Curve {
            channel: channel.to_owned(),
            factor,
            label: capital(&words(channel.split('.').next().unwrap_or(channel))),
            hue: Hue::Ink,
            weight: Weight::Main,
            dash: Dash::Solid,
            pieces,
        })
    }

    fn speed_panel(&self) -> Option<Panel> {
        let unit = &self.display.speed;
        let mut curves = Vec::new();
        let mut limits = Vec::new();
        let mut dots = Vec::new();
        let mut referred = Vec::new();
        for body in self.train.speed_bodies() {
            let referral = body.referral.unwrap_or(1.0);
            let channel = format!("{}.speed", body.name);
            let factor = unit.per_si * referral;
            let Some(mut curve) = self.curve(&channel, factor) else { continue };
            curve.hue = Hue::Side(body.side);
            if (referral - 1.0).abs() > 1e-9 {
                curve.label.push_str(", referred");
                referred.push((words(&body.name), referral));
            }
            limits.extend(self.requirements(&channel, factor));
            dots.extend(self.dots(&channel, factor));
            curves.push(curve);
        }
        lighten_repeated(&mut curves);
        let to = &self.train.reference;
        let told = match referred.as_slice() {
            [] => String::new(),
            [(body, factor)] => {
                format!(", {body} referred to the {to} (× {})", number(*factor, 4))
            }
            _ => format!(", referred to the {to}"),
        };
        (!curves.is_empty()).then(|| Panel {
            id: "speed".to_owned(),
            name: "Speed".to_owned(),
            unit: format!("{}{told}", unit.text),
            kind: PanelKind::Values,
            curves,
            allowed: None,
            limits,
            dots,
        })
    }

    /// Gears with panels: all, or those that slipped and came nearest to it.
    fn shown_gears(&self) -> Vec<(&'a TrainGear, &'a GearResult)> {
        let mut pairs: Vec<(usize, &TrainGear, &GearResult)> = Vec::new();
        for (place, gear) in self.train.gears.iter().enumerate() {
            if let Some(found) = self.result.gears.iter().find(|found| found.name == gear.name) {
                pairs.push((place, gear, found));
            }
        }
        pairs.sort_by(|one, two| {
            let rank = |gear: &GearResult| (gear.slips, gear.peak_pull_out_share);
            let (a, b) = (rank(one.2), rank(two.2));
            b.0.cmp(&a.0).then(b.1.total_cmp(&a.1))
        });
        pairs.truncate(GEARS_SHOWN);
        pairs.sort_by_key(|pair| pair.0);
        pairs.into_iter().map(|(_, gear, found)| (gear, found)).collect()
    }

    fn torque_panel(&self, gear: &TrainGear, found: &GearResult, several: bool) -> Option<Panel> {
        let member = found.members.iter().find(|member| member.member == gear.shown_member)?;
        let pull_out = member.pull_out_torque;
        let phase = self.columns(&format!("{}.phase", gear.name))?;
        let law = Law { harmonics: &gear.harmonics, peaks: found.law_peaks };
        // The gear pushes back on a member that leads: the member's factor carries the sign.
        let synchronous = law.columns(phase, -member.count.signum() * pull_out);
        let channel = format!("{}.torque_{}", gear.name, gear.shown_member);
        let whole = self.columns(&channel).unwrap_or(&[]);
        let largest = largest(whole).max(pull_out);
        let unit = self.display.torque.prefixed(largest);
        let window = [self.traces.start, self.traces.end];
        let main = Curve {
            channel: format!("{}.synchronous", gear.name),
            factor: unit.per_si,
            label: "Synchronous".to_owned(),
            hue: Hue::Side(gear.side),
            weight: Weight::Main,
            dash: Dash::Solid,
            pieces: curve::pieces(&synchronous, window, unit.per_si),
        };
        let mut curves = vec![main];
        if differ(&synchronous, whole, 0.003 * pull_out)
            && let Some(curve) = self.curve(&channel, unit.per_si)
        {
            let label = "with damping".to_owned();
            curves.push(Curve { label, hue: Hue::Grey, weight: Weight::Second, ..curve });
        }
        let bound = unit.of(pull_out);
        let limits =
            [(bound, Forbidden::Above), (-bound, Forbidden::Below)].map(|(value, forbidden)| {
                let label = if value > 0.0 {
                    format!("Pull-out ±{}", number(bound, 4))
                } else {
                    String::new()
                };
                Limit { value, forbidden, label, always_seen: true }
            });
        let of = if several { format!(", {}", words(&gear.name)) } else { String::new() };
        Some(Panel {
            id: format!("torque-{}", gear.name),
            name: format!("Torque at the {}{of}", gear.shown_body),
            unit: unit.text,
            kind: PanelKind::Values,
            curves,
            allowed: Some([-bound, bound]),
            limits: limits.to_vec(),
            dots: self.dots(&channel, unit.per_si),
        })
    }

    fn angle_panel(&self, gear: &TrainGear, found: &GearResult, several: bool) -> Option<Panel> {
        let channel = format!("{}.phase", gear.name);
        let window = [self.traces.start, self.traces.end];
        let pieces = curve::load_angle(self.columns(&channel)?, window);
        let factor = 180.0 / std::f64::consts::PI;
        let curve = Curve {
            channel: format!("{}.load_angle", gear.name),
            factor,
            label: "Load angle".to_owned(),
            hue: Hue::Ink,
            weight: Weight::Main,
            dash: Dash::Solid,
            pieces,
        };
        let of = if several { format!(", {}", words(&gear.name)) } else { String::new() };
        Some(Panel {
            id: format!("angle-{}", gear.name),
            name: format!("Load angle{of}"),
            unit: "electrical degrees".to_owned(),
            kind: PanelKind::LoadAngle {
                peaks: found.law_peaks.map(|peak| peak * factor),
                slips: pick_rows::slips(found),
            },
            curves: vec![curve],
            allowed: None,
            limits: Vec::new(),
            dots: self.angle_dots(&gear.name),
        })
    }

    /// All shafts in one panel, for trains without a magnetic gear.
    fn shaft_panel(&self) -> Option<Panel> {
        let mut curves = Vec::new();
        for shaft in self.train.shafts.iter().take(4) {
            let Some(curve) = self.curve(&format!("{}.torque", shaft.name), 1.0) else { continue };
            curves.push(Curve { hue: Hue::Side(shaft.side), ..curve });
        }
        lighten_repeated(&mut curves);
        let mut panel = self.torques("torque", curves);
        let single = panel.curves.len() == 1;
        if let (true, Some(shaft)) = (single, self.train.shafts.first()) {
            let factor = panel.curves.first().map_or(1.0, |curve| curve.factor);
            for (name, torque) in [("Rated", shaft.rated_torque), ("Peak", shaft.peak_torque)] {
                panel
                    .limits
                    .extend(torque.iter().flat_map(|torque| both_ways(name, torque * factor)));
            }
        }
        (!panel.curves.is_empty()).then_some(panel)
    }

    /// A torque panel whose unit fits its curves (given in N*m).
    fn torques(&self, id: &str, mut curves: Vec<Curve>) -> Panel {
        let points = curves.iter().flat_map(|curve| &curve.pieces).flatten();
        let largest = points.fold(0.0_f64, |largest, point| largest.max(point[1].abs()));
        let unit = self.display.torque.prefixed(largest);
        for curve in &mut curves {
            curve.factor *= unit.per_si;
            for point in curve.pieces.iter_mut().flatten() {
                point[1] *= unit.per_si;
            }
        }
        Panel {
            id: id.to_owned(),
            name: "Shaft torque".to_owned(),
            unit: unit.text,
            kind: PanelKind::Values,
            curves,
            allowed: None,
            limits: Vec::new(),
            dots: Vec::new(),
        }
    }

    /// What was measured at a channel, in the unit shown.
    pub(super) fn dots(&self, channel: &str, factor: f64) -> Vec<Dots> {
        let records = self.train.records.iter().filter(|record| record.channel == channel);
        records
            .map(|record| Dots {
                label: words(&record.name),
                points: record.rows.iter().map(|row| [row[0], row[1] * factor]).collect(),
            })
            .collect()
    }

    /// Measured load angles, brought into the turn that the panel shows.
    pub(super) fn angle_dots(&self, gear: &str) -> Vec<Dots> {
        let mut dots = self.dots(&format!("{gear}.load_angle"), 180.0 / std::f64::consts::PI);
        for point in dots.iter_mut().flat_map(|one| &mut one.points) {
            point[1] -= 360.0 * (point[1] / 360.0).round();
        }
        dots
    }

    /// Limits that requirements put on a channel; they compare magnitudes, so the limit stands on
    /// the side of zero where the channel is.
    pub(super) fn requirements(&self, channel: &str, factor: f64) -> Vec<Limit> {
        let found = self.result.channels.iter().find(|each| each.name == channel);
        let Some(found) = found else { return Vec::new() };
        let sign = if found.max.abs() >= found.min.abs() {
            found.max.signum()
        } else {
            found.min.signum()
        };
        self.result
            .requirements
            .iter()
            .filter(|each| each.of == channel && each.unit == found.unit)
            .filter_map(|each| {
                let value = each.limit? * sign * factor;
                let outwards = if value >= 0.0 { Forbidden::Above } else { Forbidden::Below };
                let inwards = if value >= 0.0 { Forbidden::Below } else { Forbidden::Above };
                let (forbidden, word) =
                    if each.at_least { (inwards, "At least") } else { (outwards, "At most") };
                let label = format!("{word} {}", number(value, 4));
                Some(Limit { value, forbidden, label, always_seen: true })
            })
            .collect()
    }
}

/// A limit and its mirror image; only the first carries words and widens the axis.
fn both_ways(name: &str, value: f64) -> Vec<Limit> {
    let label = format!("{name} {}", number(value, 4));
    vec![
        Limit { value, forbidden: Forbidden::Above, label, always_seen: true },
        Limit {
            value: -value,
            forbidden: Forbidden::Below,
            label: String::new(),
            always_seen: false,
        },
    ]
}

/// Curves that share a colour with one before them are lighter; the modulator's are anyway.
fn lighten_repeated(curves: &mut [Curve]) {
    let mut seen: Vec<Hue> = Vec::new();
    for curve in curves {
        if seen.contains(&curve.hue) || curve.hue == Hue::Side(Side::Other) && !seen.is_empty() {
            curve.weight = Weight::Second;
        }
        seen.push(curve.hue);
    }
}

fn largest(columns: &[Option<Column>]) -> f64 {
    columns
        .iter()
        .flatten()
        .fold(0.0, |largest, column| largest.max(column.min.abs()).max(column.max.abs()))
}

fn differ(one: &[Option<Column>], two: &[Option<Column>], tolerance: f64) -> bool {
    one.iter().zip(two).any(|pair| match pair {
        (Some(a), Some(b)) => {
            (a.min - b.min).abs() > tolerance || (a.max - b.max).abs() > tolerance
        }
        _ => false,
    })
}
