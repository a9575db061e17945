//! Section 5: how far to trust the answers.

use super::Material;
use super::figures::{percent, plain, tidy, time};
use super::html::{HtmlTable, escape, list, paragraph, rich};
use super::limits;
use super::verdict::small;
use crate::render::shown;
use crate::results::{Energy, RunResult};

/// Changes below this share are the rounding of the figures shown.
const ROUNDING: f64 = 1e-12;

/// The section's content.
pub fn section(material: &Material<'_>) -> String {
    let mut html = String::new();
    html.push_str("<h3>Numerical accuracy</h3>\n");
    html.push_str(&accuracy(material));
    html.push_str("<h3>Energy audit</h3>\n");
    html.push_str(&energy(&material.result.energy));
    html.push_str("<h3>Limits of the model in this case</h3>\n");
    html.push_str(&list(&limits::limits(material)));
    html.push_str("<h3>Warnings</h3>\n");
    html.push_str(&warnings(material.result));
    html.push_str("<h3>Cautions for safety</h3>\n");
    html.push_str(&list(&limits::cautions(material)));
    html
}

/// The same run at a tenth of the tolerance: how much each headline figure moved.
fn accuracy(material: &Material<'_>) -> String {
    let work = &material.result.solver;
    let solver = &material.scenario.solver;
    let setting = match solver.step {
        Some(step) if work.method == "rk4" => format!("a fixed step of {}", time(step)),
        _ => format!("a tolerance of {}", small(solver.tolerance)),
    };
    let mut html = paragraph(&format!(
        "Integrated with <code>{}</code> at {setting}: {} steps, {} rejected, {} evaluations, {} located events.",
        escape(work.method),
        work.steps,
        work.rejected,
        work.evaluations,
        work.events
    ));
    let Some(sharper) = &material.sharper else {
        html.push_str(&paragraph("The comparison at a sharper setting was not made."));
        return html;
    };
    if let Some(failure) = &sharper.failure {
        html.push_str(&paragraph(&format!(
            "The same run at a tenth of it was not completed: {}.",
            rich(failure)
        )));
        return html;
    }
    let comparison = Comparison::of(material, sharper);
    let setting = if work.method == "rk4" { "step" } else { "tolerance" };
    html.push_str(&paragraph(&comparison.sentence(setting)));
    html.push_str(&comparison.table.html());
    html
}

struct Comparison {
    table: HtmlTable,
    worst: f64,
    changed: Vec<String>,
}

impl Comparison {
    fn of(material: &Material<'_>, sharper: &RunResult) -> Self {
        let head = ["Figure", "This run", "At a tenth", "Moved by"];
        let table = HtmlTable::new("<>>>", &head);
        let mut it = Self { table, worst: 0.0, changed: Vec::new() };
        let (one, two) = (material.result, sharper);
        for gear in &one.gears {
            let Some(other) = two.gears.iter().find(|other| other.name == gear.name) else {
                continue;
            };
            it.count(&format!("{}: slips", gear.name), gear.slips, other.slips);
            it.figure(
                &format!("{}: peak share of pull-out", gear.name),
                [Some(gear.peak_pull_out_share), Some(other.peak_pull_out_share)],
                &percent,
            );
            if gear.slips > 0 || other.slips > 0 {
                let name = format!("{}: in step again", gear.name);
                it.figure(&name, [gear.resynchronised_at, other.resynchronised_at], &time);
            }
        }
        for requirement in &one.requirements {
            let Some(other) = two.requirements.iter().find(|it| it.name == requirement.name) else {
                continue;
            };
            if requirement.met != other.met {
                it.changed.push(format!("the verdict on `{}`", requirement.name));
            }
            if requirement.of.ends_with("slips") {
                continue;
            }
            let shown =
                |value: f64| material.written.value(&requirement.of, requirement.unit, value);
            it.figure(&requirement.name, [requirement.value, other.value], &shown);
        }
        for channel in &one.channels {
            let wanted = [".torque", ".speed"].iter().any(|end| channel.name.ends_with(end));
            let shaft = material
                .scenario
                .shafts
                .iter()
                .any(|shaft| channel.name.strip_suffix(".torque") == Some(shaft.name.as_str()));
            let body = material
                .scenario
                .bodies
                .iter()
                .any(|body| channel.name.strip_suffix(".speed") == Some(body.name.as_str()));
            let Some(other) = two.channels.iter().find(|it| it.name == channel.name) else {
                continue;
            };
            if !wanted || !(shaft || body) {
                continue;
            }
            let largest = |min: f64, max: f64| if max.abs() >= min.abs() { max } else { min };
            let shown = |value: f64| material.written.value(&channel.name, channel.unit, value);
            it.figure(
                &format!("{}, largest", channel.name),
                [Some(largest(channel.min, channel.max)), Some(largest(other.min, other.max))],
                &shown,
            );
        }
        it
    }

    fn count(&mut self, name: &str, one: u32, two: u32) {
        let moved = if one == two {
            "no change".to_owned()
        } else {
            format!("{}", i64::from(two) - i64::from(one))
        };
        if one != two {
            self.changed.push(format!("the number of slips ({one} and {two})"));
        }
        self.table.row([escape(name), one.to_string(), two.to_string(), moved]);
    }

    fn figure(&mut self, name: &str, pair: [Option<f64>; 2], shown: &dyn Fn(f64) -> String) {
        let told =
            |value: Option<f64>| value.map_or_else(|| "never".to_owned(), |it| escape(&shown(it)));
        let moved = match pair {
            [Some(one), Some(two)] => {
                let share = (two - one).abs() / one.abs().max(two.abs()).max(f64::MIN_POSITIVE);
                self.worst = self.worst.max(share);
                if share <= ROUNDING { "no change".to_owned() } else { share_text(share) }
            }
            [None, None] => "no change".to_owned(),
            _ => {
                self.changed.push(format!("whether there is a figure for {name}"));
                "appears or vanishes".to_owned()
            }
        };
        self.table.row([escape(name), told(pair[0]), told(pair[1]), moved]);
    }

    fn sentence(&self, setting: &str) -> String {
        if !self.changed.is_empty() {
            return format!(
                "<b>At a tenth of the {setting} the outcome differs:</b> {}. The case is sensitive, or the \
                 {setting} too coarse: do not rely on the figures that moved.",
                rich(&self.changed.join(", "))
            );
        }
        format!(
            "The same run at a tenth of the {setting} gives the same slips and verdicts; no figure moves by more \
             than {} of itself. This tells the error of the integration, not that of the model or its inputs.",
            share_text(self.worst)
        )
    }
}

fn share_text(share: f64) -> String {
    if share >= 1e-3 { escape(&percent(share)) } else { small(share) }
}

fn energy(energy: &Energy) -> String {
    let mut table = HtmlTable::new("<>", &["Energy", "Amount"]);
    let shown = |value: f64| escape(&tidy(&shown::energy(value)));
    for (name, value) in [
        ("Put in by motors and loads", energy.supplied),
        ("Taken out by motors and loads", energy.absorbed),
        ("Turned to heat in the train", energy.lost),
        ("More stored at the end than at the start", energy.stored_change),
    ] {
        table.row([name.to_owned(), shown(value)]);
    }
    let sentence = format!(
        "Every element keeps its own account; {} of the energy is unaccounted for.",
        if energy.residual_share.abs() < 1e-3 {
            format!("a share of {}", small(energy.residual_share))
        } else {
            escape(&percent(energy.residual_share))
        }
    );
    format!("{}{}", paragraph(&sentence), table.html())
}

fn warnings(result: &RunResult) -> String {
    if result.warnings.is_empty() {
        return paragraph("None.");
    }
    let items: Vec<String> = result
        .warnings
        .iter()
        .map(|warning| {
            if warning.path.is_empty() {
                rich(&warning.text)
            } else {
                format!("<code>{}</code>: {}", escape(&warning.path), rich(&warning.text))
            }
        })
        .collect();
    list(&items)
}

/// Figures that other parts of the page use in sentences.
pub fn number_of(count: usize, one: &str, many: &str) -> String {
    if count == 1 { format!("1 {one}") } else { format!("{} {many}", plain(count as f64)) }
}
