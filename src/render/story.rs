//! What happened in a magnetic gear, in words.

use super::shown::{Shown, percent, time};
use crate::quantity::format_number;
use crate::results::{GearResult, GearState, MemberResult};

/// What the gear did, one or more sentences.
pub fn told(gear: &GearResult, shown: Shown<'_>) -> String {
    let name = &gear.name;
    let share = format!(
        "at most {} of its pull-out torque, at {}",
        percent(gear.peak_pull_out_share),
        time(gear.peak_pull_out_share_time)
    );
    let Some((first, last)) = gear.slip_events.first().zip(gear.slip_events.last()) else {
        if gear.time_past_peak > 0.0 {
            return format!(
                "`{name}` went past its peak for {} in all, without a slip; largest load angle {} at {}.",
                time(gear.time_past_peak),
                shown.electrical_angle(gear.peak_load_angle),
                time(gear.peak_load_angle_time)
            );
        }
        return format!(
            "`{name}` stayed in step: {share}; largest load angle {}, {} at the end.",
            shown.electrical_angle(gear.peak_load_angle),
            shown.angle(gear.final_load_angle)
        );
    };
    let forward = gear.slip_events.iter().filter(|slip| slip.direction > 0).count();
    let backward = gear.slip_events.len() - forward;
    let sense = match (forward, backward) {
        (_, 0) => "forward".to_owned(),
        (0, _) => "backward".to_owned(),
        _ => format!("{forward} forward and {backward} backward"),
    };
    let when = if gear.slip_events.len() == 1 {
        format!("slipped once, {sense}, at {}", time(first.time))
    } else {
        format!(
            "slipped {} times, {sense}, from {} to {}",
            gear.slips,
            time(first.time),
            time(last.time)
        )
    };
    let end = match (gear.state_at_end, gear.resynchronised_at) {
        (GearState::Synchronous, Some(again)) => {
            format!("it is in step again from {} on", time(again))
        }
        (GearState::Synchronous, None) => "it is in step at the end".to_owned(),
        (GearState::Slipping, _) => "it is still slipping at the end".to_owned(),
        (GearState::Undecided, _) => match gear.run_longer {
            Some(longer) => format!(
                "whether it is back in step cannot be told yet: run at least {} longer",
                time(longer)
            ),
            None => "whether it is back in step cannot be told yet".to_owned(),
        },
    };
    format!("`{name}` {when}; {end}. Past its peak for {} in all.", time(gear.time_past_peak))
}

/// Which member turns how fast against which; `None` when the gear has no fixed ratio.
pub fn ratio(gear: &GearResult) -> Option<String> {
    let ratio = gear.ratio?;
    let turning: Vec<&MemberResult> =
        gear.members.iter().filter(|member| member.body != "ground").collect();
    let [a, b] = turning.as_slice() else { return None };
    let (fast, slow) = if a.count.abs() <= b.count.abs() { (a, b) } else { (b, a) };
    Some(turning_words(&fast.body, &slow.body, ratio))
}

/// `a` turns so many times as fast as `b`, in which sense.
pub fn turning_words(fast: &str, slow: &str, ratio: f64) -> String {
    let sense = if ratio < 0.0 { ", the other way round" } else { ", the same way round" };
    let size = format_number(ratio.abs(), 6);
    if size == "1" {
        return format!("`{fast}` turns as fast as `{slow}`{sense}");
    }
    format!("`{fast}` turns {size} times as fast as `{slow}`{sense}")
}

/// The pull-out torque at each member.
pub fn pull_out(gear: &GearResult, shown: Shown<'_>) -> String {
    let list: Vec<String> = gear
        .members
        .iter()
        .map(|member| {
            let torque = shown.torque(member.pull_out_torque);
            if member.body == "ground" {
                format!("{torque} at the held {}", member.member)
            } else {
                format!("{torque} at {} `{}`", member.member, member.body)
            }
        })
        .collect();
    list.join(", ")
}
