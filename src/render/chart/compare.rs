//! Several runs over one time axis: colour stays with the member, the line style tells the run.

use super::drawing::Dash;
use super::run_input::{Limit, Panel, PanelKind, Row, RunChart, Weight};

/// Most runs in one chart; more belong into charts side by side.
pub const MOST: usize = 3;

/// Joins the charts of several runs of one train into one; each with the name of its run.
///
/// Panels are matched by their id; a panel that only some runs have is kept with what it has.
pub fn overlay(runs: &[(String, RunChart)]) -> Option<RunChart> {
    let names = runs.iter().take(MOST).map(|(name, _)| name.as_str());
    let styles = [Dash::Solid, Dash::Long, Dash::Dots];
    let mut runs = runs.iter().zip(styles).take(MOST);
    let ((name, first), _) = runs.next()?;
    let mut chart = first.clone();
    chart.id = "compare".to_owned();
    chart.title = format!("Runs over time: {}", line_styles(names));
    name_all(&mut chart, name, Dash::Solid);
    for ((name, next), dash) in runs {
        let mut next = next.clone();
        name_all(&mut next, name, dash);
        chart.window[0] = chart.window[0].min(next.window[0]);
        chart.window[1] = chart.window[1].max(next.window[1]);
        for mut panel in next.panels {
            match chart.panels.iter_mut().find(|other| other.id == panel.id) {
                Some(same) => {
                    bring_to_unit_of(&mut panel, same);
                    same.curves.extend(panel.curves);
                    for mut limit in panel.limits {
                        let known = |other: &Limit| {
                            (other.value - limit.value).abs() <= 1e-9 * limit.value.abs()
                                && other.forbidden == limit.forbidden
                        };
                        if !same.limits.iter().any(known) {
                            if !limit.label.is_empty() {
                                limit.label = format!("{}, {name}", limit.label);
                            }
                            same.limits.push(limit);
                        }
                    }
                    if same.allowed != panel.allowed {
                        // Two bands over each other would show neither.
                        same.allowed = None;
                    }
                    if let (
                        PanelKind::LoadAngle { slips, .. },
                        PanelKind::LoadAngle { slips: more, .. },
                    ) = (&mut same.kind, panel.kind)
                    {
                        slips.extend(more);
                        slips.sort_by(|one, two| one.0.total_cmp(&two.0));
                    }
                }
                None => chart.panels.push(panel),
            }
        }
        for row in next.rows {
            if !chart.rows.contains(&row) {
                chart.rows.push(row);
            }
        }
        chart.acts.extend(next.acts);
        chart.steps.extend(next.steps.iter().filter(|step| !first.steps.contains(step)));
    }
    Some(chart)
}

/// Which line is which run, in words.
fn line_styles<'n>(names: impl Iterator<Item = &'n str>) -> String {
    let styled = ["solid", "dashed", "dotted"].into_iter().zip(names);
    styled.map(|(style, name)| format!("{style} {name}")).collect::<Vec<_>>().join(", ")
}

/// Charts of any number of runs: each shows the first run and at most two others.
pub fn overlays(runs: &[(String, RunChart)]) -> Vec<RunChart> {
    let Some((first, others)) = runs.split_first() else { return Vec::new() };
    let groups: Vec<&[(String, RunChart)]> = others.chunks(MOST - 1).collect();
    let several = groups.len() > 1;
    groups
        .iter()
        .enumerate()
        .filter_map(|(place, group)| {
            let mut together = vec![first.clone()];
            together.extend(group.iter().cloned());
            let mut chart = overlay(&together)?;
            if several {
                chart.id = format!("compare_{}", place + 1);
            }
            Some(chart)
        })
        .collect()
}

/// Gives a panel the unit of another that shows the same: a prefix is chosen by size.
fn bring_to_unit_of(panel: &mut Panel, other: &Panel) {
    if panel.unit == other.unit {
        return;
    }
    let factor = |panel: &Panel| panel.curves.first().map(|curve| curve.factor);
    let (Some(own), Some(wanted)) = (factor(panel), factor(other)) else { return };
    let same_channel = panel.curves.first().map(|curve| &curve.channel)
        == other.curves.first().map(|curve| &curve.channel);
    let scale = wanted / own;
    if !same_channel || !scale.is_finite() || scale <= 0.0 {
        return;
    }
    for curve in &mut panel.curves {
        curve.factor *= scale;
        for point in curve.pieces.iter_mut().flatten() {
            point[1] *= scale;
        }
    }
    for limit in &mut panel.limits {
        limit.value *= scale;
    }
    panel.allowed = panel.allowed.map(|band| band.map(|edge| edge * scale));
    panel.unit.clone_from(&other.unit);
}

/// Gives curves and rows the name of their run; second curves go, they would bury the others.
fn name_all(chart: &mut RunChart, name: &str, dash: Dash) {
    for panel in &mut chart.panels {
        panel.curves.retain(|curve| curve.hue != super::run_input::Hue::Grey);
        for curve in &mut panel.curves {
            curve.label = if curve.label == "Load angle" || curve.label == "Synchronous" {
                name.to_owned()
            } else {
                format!("{}, {name}", curve.label)
            };
            curve.dash = dash;
            if dash != Dash::Solid {
                curve.weight = Weight::Second;
            }
        }
    }
    for row in &mut chart.rows {
        match row {
            Row::Slips { label, .. } | Row::Flags { label, .. } => {
                *label = format!("{label}, {name}");
            }
            Row::Bars { label, kind, .. } if *kind != super::run_input::BarKind::Signal => {
                *label = format!("{label}, {name}");
            }
            Row::Bars { .. } => {}
        }
    }
}
