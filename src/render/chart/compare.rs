//! Several runs over one time axis: colour stays with the member, the line style tells the run.

use super::drawing::Dash;
use super::run_input::{PanelKind, Row, RunChart, Weight};

/// Most runs in one chart; more belong into charts side by side.
pub const MOST: usize = 3;

/// Joins the charts of several runs of one train into one; each with the name of its run.
///
/// Panels are matched by their id; a panel that only some runs have is kept with what it has.
pub fn overlay(runs: &[(String, RunChart)]) -> Option<RunChart> {
    let styles = [Dash::Solid, Dash::Long, Dash::Dots];
    let mut runs = runs.iter().zip(styles).take(MOST);
    let ((name, first), _) = runs.next()?;
    let mut chart = first.clone();
    chart.id = "compare".to_owned();
    name_all(&mut chart, name, Dash::Solid);
    for ((name, next), dash) in runs {
        let mut next = next.clone();
        name_all(&mut next, name, dash);
        chart.window[0] = chart.window[0].min(next.window[0]);
        chart.window[1] = chart.window[1].max(next.window[1]);
        for panel in next.panels {
            match chart
                .panels
                .iter_mut()
                .find(|other| other.id == panel.id && other.unit == panel.unit)
            {
                Some(same) => {
                    same.curves.extend(panel.curves);
                    for limit in panel.limits {
                        if !same.limits.contains(&limit) {
                            same.limits.push(limit);
                        }
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
