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
    format!(
        "`{name}` {when}; {end}. Slipping for {} in all, past its peak for {}.",
        time(gear.slipping_time),
        time(gear.time_past_peak)
    )
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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::results::SlipEvent;
    use crate::scenario::Display;

    fn gear(slips: &[(f64, i32)], state: GearState) -> GearResult {
        let slip_events: Vec<SlipEvent> = slips
            .iter()
            .map(|&(time, direction)| SlipEvent { time, direction, slip_speed: 10.0 })
            .collect();
        let member = |member, body: &str, count| MemberResult {
            member,
            body: body.to_owned(),
            count,
            pull_out_torque: 100.0,
        };
        GearResult {
            name: "gear".to_owned(),
            coupling: false,
            slips: slip_events.len() as u32,
            net_slips: slips.iter().map(|slip| slip.1).sum(),
            state_at_end: state,
            run_longer: None,
            resynchronised_at: None,
            peak_pull_out_share: 0.5,
            peak_pull_out_share_time: 2.0,
            peak_load_angle: 0.5,
            peak_load_angle_time: 2.0,
            final_load_angle: 0.1,
            ratio: Some(-5.5),
            law_peaks: [-1.5, 1.5],
            members: vec![
                member("inner", "fast", 4.0),
                member("modulator", "ground", -26.0),
                member("outer", "slow", 22.0),
            ],
            natural_period: 0.05,
            time_past_peak: 0.0,
            slipping_time: 0.0,
            longest_slipping: 0.0,
            longest_slipping_from: 0.0,
            slip_events,
        }
    }

    fn words(gear: &GearResult) -> String {
        let display = Display { speed: "rpm".into(), torque: "N*m".into(), angle: "deg".into() };
        told(gear, Shown::new(&display))
    }

    #[test]
    fn a_gear_in_step_tells_its_share() {
        let text = words(&gear(&[], GearState::Synchronous));
        assert!(text.contains("stayed in step: at most 50 % of its pull-out torque, at 2 s"));
    }

    #[test]
    fn slips_are_told_with_sense_and_end() {
        let mut slipped = gear(&[(1.0, 1), (1.5, 1), (1.7, -1)], GearState::Synchronous);
        slipped.resynchronised_at = Some(1.8);
        let text = words(&slipped);
        assert!(text.contains("slipped 3 times, 2 forward and 1 backward, from 1 s to 1.7 s"));
        assert!(text.contains("in step again from 1.8 s on"), "{text}");
        let text = words(&gear(&[(1.0, -1)], GearState::Slipping));
        assert!(text.contains("slipped once, backward, at 1 s; it is still slipping"), "{text}");
        let mut open = gear(&[(1.0, 1)], GearState::Undecided);
        open.run_longer = Some(0.25);
        assert!(words(&open).contains("run at least 0.25 s longer"));
    }

    #[test]
    fn the_faster_member_is_named_first() {
        let text = ratio(&gear(&[], GearState::Synchronous)).unwrap();
        assert_eq!(text, "`fast` turns 5.5 times as fast as `slow`, the other way round");
    }
}
