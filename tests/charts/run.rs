//! The run chart and its zoom: structure of the SVG against the run it was drawn from.

use crate::gallery::show;
use crate::pendulum::{END, Run, train};
use lodeshaft::render::chart::drawing::Drawing;
use lodeshaft::render::chart::pick;
use lodeshaft::render::chart::pick_rows::zoom_windows;
use lodeshaft::render::chart::run::run_chart;
use lodeshaft::render::chart::run_input::Row;
use lodeshaft::render::chart::units::Display;
use lodeshaft::results::{Event, EventKind, RunResult};

fn draw(run: &Run, result: &RunResult, window: [f64; 2], id: &str) -> Drawing {
    run_chart(&pick::run(result, &run.traces(window), &train(), &Display::default(), id))
}

/// Points of the first polyline after a marker.
fn points(svg: &str, marker: &str) -> Vec<[f64; 2]> {
    let start = svg.find(marker).unwrap();
    let list = svg[start..].split("points=\"").nth(1).unwrap().split('"').next().unwrap();
    list.split(' ')
        .map(|pair| {
            let (x, y) = pair.split_once(',').unwrap();
            [x.parse().unwrap(), y.parse().unwrap()]
        })
        .collect()
}

#[test]
fn a_slip_burst_is_drawn_with_a_mark_for_each_slip() {
    let run = Run::of(900.0, 400.0);
    let result = run.result();
    let slips = result.gears[0].slips as usize;
    assert!(slips > 5, "{slips}");
    let whole = draw(&run, &result, [0.0, END], "run");
    show(&whole, "run");
    let svg = whole.to_inline_svg("run");
    // Once at the load angle, once in the strip.
    assert_eq!(svg.matches("data-kind=\"slip\"").count(), 2 * slips);
    assert_eq!(svg.matches("data-kind=\"resynchronised\"").count(), 1);
    assert_eq!(svg.matches("class=\"b\"").count(), slips + 1, "a past-peak bar each, one signal");
    let sentence = format!("{slips} slips forward, in step again at ");
    assert!(whole.texts().iter().any(|text| text.starts_with(&sentence)), "{:?}", whole.texts());
    for window in zoom_windows(&result) {
        show(&draw(&run, &result, window, "zoom"), "zoom");
    }
}

#[test]
fn groups_ids_and_frames_are_there_for_scripts() {
    let run = Run::of(300.0, 400.0);
    let result = run.result();
    let svg = draw(&run, &result, [0.0, END], "run").to_inline_svg("fig2");
    for id in
        ["fig2-speed", "fig2-torque-mg", "fig2-angle-mg", "fig2-strip", "fig2-time", "fig2-title"]
    {
        assert_eq!(svg.matches(&format!("id=\"{id}\"")).count(), 1, "{id}");
    }
    assert!(svg.contains("role=\"img\" aria-labelledby=\"fig2-title\""));
    assert!(svg.contains("data-channel=\"drum.speed\""));
    assert!(!svg.contains('\u{E000}') && !svg.contains("font-face"));
    assert_eq!(svg.matches("<g").count(), svg.matches("</g>").count());
    assert!(svg.contains("× \u{2212}4"), "a true minus in the heading");
}

#[test]
fn curves_begin_and_end_with_the_run() {
    let run = Run::of(300.0, 400.0);
    let result = run.result();
    let svg = draw(&run, &result, [0.0, END], "run").to_inline_svg("run");
    let frame: Vec<f64> = svg
        .split("id=\"run-speed\" class=\"p\" data-frame=\"")
        .nth(1)
        .unwrap()
        .split('"')
        .next()
        .unwrap()
        .split(' ')
        .map(|part| part.parse().unwrap())
        .collect();
    let up: Vec<f64> = svg
        .split("data-up=\"")
        .nth(1)
        .unwrap()
        .split('"')
        .next()
        .unwrap()
        .split(' ')
        .map(|part| part.parse().unwrap())
        .collect();
    let line = points(&svg, "data-channel=\"drum.speed\"");
    let (first, last) = (line.first().unwrap(), line.last().unwrap());
    assert!((first[0] - frame[0]).abs() <= 1.0 && (last[0] - frame[0] - frame[2]).abs() <= 1.0);
    // 103.45 rad/s are 987.9 rpm.
    let expected = frame[1] + frame[3] * (up[1] - 987.9) / (up[1] - up[0]);
    assert!((first[1] - expected).abs() < 2.0, "{first:?} {expected}");
}

#[test]
fn the_load_angle_never_jumps_across_the_panel() {
    let run = Run::of(900.0, 400.0);
    let result = run.result();
    let svg = draw(&run, &result, zoom_windows(&result)[0], "zoom").to_inline_svg("zoom");
    let from = svg.find("data-channel=\"mg.load_angle\"").unwrap();
    let group = &svg[from..from + svg[from..].find("</g>").unwrap()];
    assert_eq!(group.matches("<polyline").count(), result.gears[0].slips as usize + 1);
    for line in group.split("points=\"").skip(1) {
        let xs: Vec<f64> = line
            .split('"')
            .next()
            .unwrap()
            .split(' ')
            .map(|pair| pair.split_once(',').unwrap().0.parse().unwrap())
            .collect();
        assert!(xs.windows(2).all(|pair| pair[1] >= pair[0]), "time runs on");
        assert!(xs.last().unwrap() - xs[0] > 8.0, "slanted, not upright");
    }
}

#[test]
fn a_calm_run_says_no_events() {
    let run = Run::of(0.0, 400.0);
    let result = run.result();
    let mut train = train();
    train.signals.clear();
    train.signal_steps.clear();
    let chart =
        run_chart(&pick::run(&result, &run.traces([0.0, END]), &train, &Display::default(), "run"));
    show(&chart, "run-calm");
    assert!(chart.texts().contains(&"no events"));
    assert_eq!(chart.to_inline_svg("run").matches("data-kind=\"slip\"").count(), 0);
}

#[test]
fn protections_states_and_long_names_find_their_rows() {
    let run = Run::of(600.0, 400.0);
    let mut result = run.result();
    let event = |time, kind, of: &str| Event {
        time,
        kind,
        of: of.to_owned(),
        value: 0.0,
        unit: "1",
        text: String::new(),
    };
    result.events.extend([
        event(0.3, EventKind::Sliding, "gland"),
        event(1.1, EventKind::Protection, "slip_trip_with_a_long_name"),
        event(1.15, EventKind::Protection, "brake"),
        event(1.3, EventKind::Stuck, "gland"),
    ]);
    let chart = draw(&run, &result, [0.0, END], "run");
    show(&chart, "run-rows");
    let svg = chart.to_inline_svg("run");
    assert!(chart.texts().contains(&"Gland stuck"));
    assert_eq!(svg.matches("data-kind=\"flag\"").count(), 2);
    // Through three panels and the strip each.
    assert_eq!(svg.matches("data-kind=\"act\"").count(), 8);
}

#[test]
fn what_holds_nothing_at_the_start_is_not_drawn_as_stuck() {
    let run = Run::of(600.0, 400.0);
    let mut result = run.result();
    let event = |time, kind| Event {
        time,
        kind,
        of: "holding".to_owned(),
        value: 0.0,
        unit: "1",
        text: String::new(),
    };
    result.events = vec![event(0.4, EventKind::Sliding), event(0.9, EventKind::Stuck)];
    let end = result.end_time;
    let bars = |result: &RunResult, idle: Vec<String>| -> Vec<(f64, f64)> {
        let train = lodeshaft::render::chart::train::Train { idle_at_start: idle, ..train() };
        let traces = run.traces([0.0, END]);
        let chart = pick::run(result, &traces, &train, &Display::default(), "run");
        let row = chart.rows.iter().find_map(|row| match row {
            Row::Bars { label, bars, .. } if label == "Holding stuck" => Some(bars),
            _ => None,
        });
        row.unwrap().iter().map(|bar| (bar.start, bar.end)).collect()
    };
    assert_eq!(bars(&result, vec!["holding".to_owned()]), [(0.9, end)]);
    assert_eq!(bars(&result, Vec::new()), [(0.0, 0.4), (0.9, end)]);
    // What turns round without coming to rest slid before.
    result.events[0].text = format!("`holding` {}", Event::OTHER_WAY);
    assert_eq!(bars(&result, Vec::new()), [(0.9, end)]);
}

#[test]
fn the_same_run_gives_the_same_bytes() {
    let run = Run::of(300.0, 400.0);
    let result = run.result();
    let (one, two) =
        (draw(&run, &result, [0.0, END], "run"), draw(&run, &result, [0.0, END], "run"));
    assert_eq!(one.to_svg(1.0), two.to_svg(1.0));
    assert_eq!(one.to_png(1.0).unwrap(), two.to_png(1.0).unwrap());
}

#[test]
fn a_train_without_a_gear_shows_speeds_and_shaft_torques() {
    use lodeshaft::render::chart::train::TrainShaft;
    let run = Run::of(300.0, 400.0);
    let mut result = run.result();
    result.gears.clear();
    result.events.clear();
    let mut train = train();
    train.gears.clear();
    train.shafts = ["feed_shaft", "rotor_shaft"]
        .map(|name| TrainShaft {
            name: name.to_owned(),
            side: lodeshaft::render::chart::palette::Side::Inner,
            rated_torque: Some(100.0),
            peak_torque: Some(180.0),
        })
        .to_vec();
    let traces = run.traces([0.0, END]);
    let chart = run_chart(&pick::run(&result, &traces, &train, &Display::default(), "run"));
    show(&chart, "run-gearless");
    assert!(chart.texts().contains(&"Shaft torque") && chart.texts().contains(&"Speed"));
    let chart = run_chart(&pick::shafts(&result, &traces, &train, &Display::default()));
    show(&chart, "shafts");
    assert!(chart.texts().contains(&"Rated 100") && chart.texts().contains(&"Peak 180"));
}
