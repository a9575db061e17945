//! The tables of `estimates`, as plain words for terminal and page alike.

use crate::analysis::estimates::{EstimatesResult, GearEstimate, MemberEstimate, Variant};
use crate::quantity::format_number;
use crate::render::shown::{Shown, percent, time};
use crate::render::table::Table;

/// A table in plain text.
pub struct Sheet {
    /// One letter a column: `<` words, `>` numbers.
    pub sides: &'static str,
    /// Heads of the columns.
    pub head: Vec<&'static str>,
    /// Rows of as many cells.
    pub rows: Vec<Vec<String>>,
}

impl Sheet {
    /// The table for a terminal.
    pub fn table(self) -> Table {
        let mut table = Table::new(self.sides);
        table.cells(self.head.iter().map(|head| head.to_lowercase()).collect());
        for row in self.rows {
            table.cells(row);
        }
        table
    }
}

/// Inertias and limits as each turning member sees them.
pub fn members(answer: &EstimatesResult, shown: Shown<'_>) -> Sheet {
    let inertia = |value: f64| format!("{} kg*m2", format_number(value, 4));
    let row = |gear: &GearEstimate, member: &MemberEstimate, first: bool| {
        vec![
            if first { gear.gear.clone() } else { String::new() },
            format!("{}, {}", member.member, member.body),
            shown.torque(member.pull_out_torque),
            inertia(member.side_inertia),
            member.other_side_inertia.map_or_else(dash, inertia),
            percent(member.acceleration_share),
            shown.torque(member.critical_step_torque),
            shown.speed(member.jam_speed),
            member.jam_speed_at_preload.map_or_else(dash, |speed| shown.speed(speed)),
        ]
    };
    Sheet {
        sides: "<<>>>>>>>",
        head: vec![
            "Gear",
            "Member",
            "Pull-out",
            "Inertia",
            "Referred",
            "Share across",
            "Torque step",
            "Jam",
            "Jam, loaded",
        ],
        rows: answer
            .gears
            .iter()
            .flat_map(|gear| {
                let members = gear.members.iter().enumerate();
                members.map(move |(place, member)| row(gear, member, place == 0))
            })
            .collect(),
    }
}

/// What the columns of [`members`] are.
pub const MEMBERS: &str = "Inertia: of the member's own side, rigidly joined; referred: of the \
    other side, seen from here. Share across: of a torque on this member, the part that crosses \
    the gear. Torque step: the largest on this member that is survived from rest, without damping. \
    Jam: the speed of this member that is survived when the others are held at once.";

/// The figures that depend on damping, which nobody knows well: without, as given, twice as much.
pub fn damping(answer: &EstimatesResult, shown: Shown<'_>) -> Sheet {
    let mut rows = Vec::new();
    for gear in &answer.gears {
        let mut add = |figure: String, value: &dyn Fn(&Variant) -> Option<String>| {
            let cells: Vec<_> = gear.variants.iter().map(value).collect();
            if cells.iter().any(Option::is_some) && cells.len() == 3 {
                let mut row = vec![gear.gear.clone(), figure];
                row.extend(cells.into_iter().map(|cell| cell.unwrap_or_else(dash)));
                rows.push(row);
            }
        };
        let drive = gear.drive.unwrap_or("the driving member");
        add("damping ratio without load".to_owned(), &|one| Some(percent(one.damping_ratio)));
        add("load step survived, of the pull-out".to_owned(), &|one| {
            Some(percent(one.critical_step_share))
        });
        add("the same from running load, in all".to_owned(), &|one| {
            one.critical_step_share_from_preload.map(percent)
        });
        add(format!("speed of {drive} survived at a jam"), &|one| {
            one.jam_speed.map(|speed| shown.speed(speed))
        });
        add("the same at running load".to_owned(), &|one| {
            one.jam_speed_at_preload.map(|speed| shown.speed(speed))
        });
        let pulses = gear.variants.first().map_or(0, |one| one.pulses.len());
        for place in 0..pulses {
            let Some(pulse) = gear.variants[0].pulses.get(place) else { continue };
            let figure =
                format!("load of {} of the pull-out survived for", percent(pulse.overload));
            add(figure, &|one| {
                let pulse = one.pulses.get(place)?;
                Some(pulse.duration.map_or_else(|| "ever".to_owned(), time))
            });
        }
        add("catches again below, of the pull-out".to_owned(), &|one| {
            Some(percent(one.resynchronisation_share))
        });
    }
    let mut last = String::new();
    for row in &mut rows {
        if row[0] == last {
            row[0].clear();
        } else {
            last.clone_from(&row[0]);
        }
    }
    Sheet {
        sides: "<<>>>",
        head: vec!["Gear", "With the gear's damping", "None", "As given", "Doubled"],
        rows,
    }
}

fn dash() -> String {
    "-".to_owned()
}
