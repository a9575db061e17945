//! What stands in the SVG of a run: groups, labels, and points at their places.

use crate::pendulum::{END, Run, train};
use lodeshaft::render::chart::pick;
use lodeshaft::render::chart::run::run_chart;
use lodeshaft::render::chart::run_input::{Dots, PanelKind, RunChart};
use lodeshaft::render::chart::units::Display;

/// An element of the SVG: its name and the text of its tag.
struct Element<'s> {
    name: &'s str,
    tag: &'s str,
    depth: usize,
}

/// All elements in order, with how many groups they stand in.
fn elements(svg: &str) -> Vec<Element<'_>> {
    let mut found = Vec::new();
    let mut depth = 0;
    for part in svg.split('<').skip(1) {
        let tag = part.split('>').next().unwrap();
        if tag.starts_with('/') {
            depth -= usize::from(tag == "/g");
            continue;
        }
        let name = tag.split([' ', '/']).next().unwrap();
        found.push(Element { name, tag, depth });
        depth += usize::from(name == "g");
    }
    assert_eq!(depth, 0, "every group is closed");
    found
}

fn attribute<'s>(tag: &'s str, name: &str) -> Option<&'s str> {
    tag.split(&format!(" {name}=\"")).nth(1)?.split('"').next()
}

fn numbers(text: &str) -> Vec<f64> {
    text.split([' ', ',']).filter_map(|part| part.parse().ok()).collect()
}

/// The elements inside the group whose tag holds these words.
fn inside<'e, 's>(all: &'e [Element<'s>], words: &str) -> &'e [Element<'s>] {
    let start = all.iter().position(|one| one.name == "g" && one.tag.contains(words)).unwrap();
    let depth = all[start].depth;
    let rest = &all[start + 1..];
    let end = rest.iter().position(|one| one.depth <= depth).unwrap_or(rest.len());
    &rest[..end]
}

fn chart() -> RunChart {
    let run = Run::of(900.0, 400.0);
    pick::run(&run.result(), &run.traces([0.5, END]), &train(), &Display::default(), "run")
}

/// Where a point belongs, from the frame and the ranges that the group tells.
fn place(panel: &str, point: [f64; 2]) -> [f64; 2] {
    let of = |name: &str| numbers(attribute(panel, name).unwrap());
    let (frame, across, up) = (of("data-frame"), of("data-across"), of("data-up"));
    let share = |range: &[f64], value: f64| (value - range[0]) / (range[1] - range[0]);
    [
        frame[0] + frame[2] * share(&across, point[0]),
        frame[1] + frame[3] * (1.0 - share(&up, point[1])),
    ]
}

#[test]
fn each_panel_holds_its_curves_from_the_first_point_to_the_last() {
    let chart = chart();
    let svg = run_chart(&chart).to_inline_svg("it");
    let all = elements(&svg);
    let panels = all.iter().filter(|one| one.tag.contains("class=\"p\"")).count();
    assert_eq!(panels, chart.panels.len() + 1, "and the strip");
    for panel in &chart.panels {
        let head = format!("id=\"it-{}\"", panel.id);
        let tag = all.iter().find(|one| one.tag.contains(&head)).unwrap().tag;
        let content = inside(&all, &head);
        let groups: Vec<&Element<'_>> =
            content.iter().filter(|one| one.tag.contains("class=\"s\"")).collect();
        assert_eq!(groups.len(), panel.curves.len(), "{}", panel.id);
        for curve in &panel.curves {
            let channel = format!("data-channel=\"{}\"", curve.channel);
            let lines: Vec<Vec<f64>> = inside(content, &channel)
                .iter()
                .filter_map(|one| attribute(one.tag, "points"))
                .map(numbers)
                .collect();
            assert!(!lines.is_empty(), "{channel}");
            let first = curve.pieces.first().unwrap().first().unwrap();
            let last = curve.pieces.last().unwrap().last().unwrap();
            let (begin, end) = (lines.first().unwrap(), lines.last().unwrap());
            for (wanted, drawn) in
                [(place(tag, *first), &begin[..2]), (place(tag, *last), &end[end.len() - 2..])]
            {
                // Whole eighths of a pixel.
                let off = (wanted[0] - drawn[0]).abs().max((wanted[1] - drawn[1]).abs());
                assert!(off <= 1.0, "{channel}: {wanted:?} {drawn:?}");
            }
        }
    }
}

#[test]
fn every_slip_is_a_triangle_at_its_time_and_edge() {
    let chart = chart();
    let svg = run_chart(&chart).to_inline_svg("it");
    let all = elements(&svg);
    let panel = chart.panels.iter().find(|one| matches!(one.kind, PanelKind::LoadAngle { .. }));
    let panel = panel.unwrap();
    let PanelKind::LoadAngle { slips, .. } = &panel.kind else { panic!("a load angle") };
    assert!(!slips.is_empty());
    let head = format!("id=\"it-{}\"", panel.id);
    let tag = all.iter().find(|one| one.tag.contains(&head)).unwrap().tag;
    let content = inside(&all, &head);
    for (time, direction) in slips {
        let data = format!("data-t=\"{time}\" data-kind=\"slip\" data-direction=\"{direction}\"");
        let mark = inside(content, &data);
        let corners =
            mark.iter().find_map(|one| attribute(one.tag, "points")).map(numbers).unwrap();
        let edge = if *direction > 0 { 180.0 } else { -180.0 };
        let wanted = place(tag, [*time, edge]);
        let (across, up): (Vec<f64>, Vec<f64>) = (
            corners.iter().step_by(2).copied().collect(),
            corners.iter().skip(1).step_by(2).copied().collect(),
        );
        let middle = across.iter().sum::<f64>() / across.len() as f64;
        assert!((middle - wanted[0]).abs() < 8.0, "{middle} {wanted:?}");
        assert!(up.iter().any(|y| (y - wanted[1]).abs() <= 64.0), "{up:?} {wanted:?}");
    }
}

#[test]
fn headings_labels_and_the_axis_are_in_words() {
    let chart = chart();
    let drawing = run_chart(&chart);
    let texts = drawing.texts();
    let mut from = 0;
    for wanted in ["Speed", "Torque at the rotor", "Load angle", "Events", "Time, s"] {
        let at = texts.iter().skip(from).position(|text| *text == wanted);
        from += at.unwrap_or_else(|| panic!("{wanted} in {texts:?}"));
    }
    for wanted in ["Drum", "Rotor, referred", "Past the peak", "Slips", "Burst load"] {
        assert!(texts.contains(&wanted), "{wanted}: {texts:?}");
    }
    assert!(texts.iter().any(|text| text.starts_with("Pull-out ±400")), "{texts:?}");
}

#[test]
fn measured_points_stand_at_their_places_under_the_curve() {
    let mut chart = chart();
    let points = vec![[1.0, 100.0], [2.0, 200.0], [2.4, 0.0], [99.0, 0.0]];
    chart.panels[0].dots.push(Dots { label: "tacho".to_owned(), points: points.clone() });
    let svg = run_chart(&chart).to_inline_svg("it");
    let all = elements(&svg);
    let head = format!("id=\"it-{}\"", chart.panels[0].id);
    let tag = all.iter().find(|one| one.tag.contains(&head)).unwrap().tag;
    let content = inside(&all, &head);
    let drawn: Vec<[f64; 2]> = inside(content, "data-record=\"tacho\"")
        .iter()
        .filter(|one| one.name == "circle")
        .map(|one| ["cx", "cy"].map(|name| attribute(one.tag, name).unwrap().parse().unwrap()))
        .collect();
    assert_eq!(drawn.len(), 3, "the fourth lies beyond the end");
    for (point, dot) in points.iter().zip(drawn) {
        let wanted = place(tag, *point);
        assert!((wanted[0] - dot[0]).abs() <= 1.0 && (wanted[1] - dot[1]).abs() <= 1.0);
    }
    let dots = content.iter().position(|one| one.tag.contains("class=\"d\"")).unwrap();
    let curve = content.iter().position(|one| one.tag.contains("class=\"s\"")).unwrap();
    assert!(dots < curve, "drawn before the curves");
}
