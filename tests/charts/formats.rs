//! Files: SVG alone and within a page, PNG with its true size, data for scripts, overlays.

use crate::gallery::show;
use crate::pendulum::{END, Run, train};
use lodeshaft::render::chart::axes::Sheet;
use lodeshaft::render::chart::compare::{overlay, overlays};
use lodeshaft::render::chart::drawing::{Anchor, Dash, Drawing};
use lodeshaft::render::chart::palette::{Ink, Theme};
use lodeshaft::render::chart::pen::{self, Pen};
use lodeshaft::render::chart::pick;
use lodeshaft::render::chart::run::run_chart;
use lodeshaft::render::chart::run_data::run_data;
use lodeshaft::render::chart::run_input::RunChart;
use lodeshaft::render::chart::units::Display;

fn chart(burst: f64, pull_out: f64) -> RunChart {
    let run = Run::of(burst, pull_out);
    let result = run.result();
    pick::run(&result, &run.traces([0.5, END]), &train(), &Display::default(), "run")
}

/// Decodes a PNG with the reference decoder of the format's crate: size, pixels, dots per metre.
fn decode(bytes: &[u8]) -> ([u32; 2], Vec<u8>, u32) {
    let mut reader = png::Decoder::new(bytes).read_info().unwrap();
    let mut pixels = vec![0; reader.output_buffer_size()];
    reader.next_frame(&mut pixels).unwrap();
    let info = reader.info();
    ([info.width, info.height], pixels, info.pixel_dims.unwrap().xppu)
}

#[test]
fn a_png_knows_its_size_in_print() {
    let mut pen = Pen::new();
    pen.rectangle([10.0, 10.0], [20.0, 20.0], Ink::Slip, 1.0);
    pen.rectangle([40.0, 10.0], [20.0, 20.0], Ink::Ink, 0.5);
    let drawing = pen.finish("square", "A square", 100.0, 50.0);
    let (size, pixels, per_metre) = decode(&drawing.to_png(2.0).unwrap());
    assert_eq!(size, [200, 100]);
    // 192 dots to the inch of 25.4 mm.
    assert_eq!(per_metre, 7559);
    let pixel = |x: usize, y: usize| {
        let place = 3 * (y * 200 + x);
        (pixels[place], pixels[place + 1], pixels[place + 2])
    };
    assert_eq!(pixel(5, 5), Ink::Paper.rgb(Theme::Light));
    assert_eq!(pixel(20, 20), Ink::Slip.rgb(Theme::Light), "the upper left corner is whole");
    assert_eq!(pixel(59, 59), Ink::Slip.rgb(Theme::Light), "and the lower right one");
    assert_eq!(pixel(60, 60), Ink::Paper.rgb(Theme::Light));
    let ink = Ink::Ink.rgb(Theme::Light);
    let half = pixel(100, 40);
    assert!((i32::from(half.0) - (255 + i32::from(ink.0)) / 2).abs() <= 2, "{half:?}");
}

#[test]
fn text_is_drawn_where_it_is_measured() {
    let mut pen = Pen::new();
    pen.text([150.0, 40.0], "HHHHHHHH", pen::bold(Ink::Ink, Anchor::End));
    let (size, pixels, _) = decode(&pen.finish("t", "t", 200.0, 60.0).to_png(4.0).unwrap());
    let dark: Vec<(usize, usize)> = (0..size[0] as usize * size[1] as usize)
        .filter(|place| pixels[3 * place] < 128)
        .map(|place| (place % size[0] as usize, place / size[0] as usize))
        .collect();
    let right = dark.iter().map(|place| place.0).max().unwrap() as f64 / 4.0;
    let bottom = dark.iter().map(|place| place.1).max().unwrap() as f64 / 4.0;
    assert!((right - 149.3).abs() < 1.0, "{right}");
    assert!((bottom - 39.8).abs() < 0.5, "the baseline: {bottom}");
}

#[test]
fn names_from_the_file_are_escaped() {
    let mut pen = Pen::new();
    pen.text([10.0, 20.0], "a<b> & \"c\" \u{E000}7 \n d", pen::label(Ink::Ink, Anchor::Start));
    let drawing = pen.finish("x", "5 < 6 & \"so\"", 100.0, 40.0);
    let svg = drawing.to_inline_svg("x");
    assert!(svg.contains("a&lt;b&gt; &amp; &quot;c&quot;"), "{svg}");
    assert!(svg.contains("<title id=\"x-title\">5 &lt; 6 &amp; &quot;so&quot;</title>"));
    assert!(!svg.contains('\u{E000}'));
    assert_eq!(svg.matches("<text").count(), svg.matches("</text>").count());
}

#[test]
fn a_file_alone_carries_its_font_and_paper() {
    let drawing = run_chart(&chart(300.0, 400.0));
    let alone = drawing.to_svg(1.0);
    assert_eq!(alone.matches("@font-face").count(), 2);
    assert!(alone.contains("font-family=\"Chart Sans, Arial, sans-serif\""));
    assert!(alone.contains("<rect width=\"100%\" height=\"100%\" fill=\"#FFFFFF\"/>"));
    assert!(alone.starts_with("<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"720\""));
    assert!(drawing.to_svg(1.35).contains("width=\"972\""));
    assert!(!alone.contains("opacity=\"1\""));
}

#[test]
fn a_slide_has_its_own_proportions() {
    let input = RunChart { sheet: Sheet::SLIDE, ..chart(900.0, 400.0) };
    let drawing = run_chart(&input);
    show(&drawing, "run-slide");
    assert!((drawing.height - 400.0).abs() < 1.0, "{}", drawing.height);
    assert!(drawing.to_svg(1.35).contains("width=\"960\""));
}

#[test]
fn the_data_hold_the_extremes_of_each_curve() {
    let input = chart(900.0, 400.0);
    let data = run_data(&input);
    let panels = data["panels"].as_array().unwrap();
    assert_eq!(panels.len(), 3);
    for (panel, drawn) in input.panels.iter().zip(panels) {
        for (curve, told) in panel.curves.iter().zip(drawn["curves"].as_array().unwrap()) {
            let largest =
                curve.pieces.iter().flatten().map(|point| point[1]).fold(f64::MIN, f64::max);
            let values = told["pieces"].as_array().unwrap().iter().flat_map(|piece| {
                piece.as_array().unwrap().chunks(2).map(|pair| pair[1].as_f64().unwrap())
            });
            let found = values.fold(f64::MIN, f64::max);
            assert!((largest - found).abs() < 1e-3 * largest.abs(), "{largest} {found}");
        }
    }
    assert!(data.to_string().len() < 200_000, "{}", data.to_string().len());
}

#[test]
fn compared_runs_differ_by_line_style() {
    let runs: Vec<(String, RunChart)> = [("gear 400", 400.0), ("gear 700", 700.0)]
        .map(|(name, pull_out)| (name.to_owned(), chart(900.0, pull_out)))
        .to_vec();
    let both = overlay(&runs).unwrap();
    let speed = &both.panels[0];
    assert_eq!(speed.curves.len(), 4);
    assert_eq!(speed.curves.iter().filter(|curve| curve.dash == Dash::Long).count(), 2);
    show(&run_chart(&both), "compare");
    assert!(overlay(&[]).is_none());
}

#[test]
fn many_runs_are_charts_of_three_with_the_first_in_each() {
    let runs: Vec<(String, RunChart)> =
        ["a", "b", "c", "d", "e", "f"].map(|name| (name.to_owned(), chart(900.0, 400.0))).to_vec();
    let charts = overlays(&runs);
    let titles: Vec<&str> = charts.iter().map(|chart| chart.title.as_str()).collect();
    assert_eq!(
        titles,
        [
            "Runs over time: solid a, dashed b, dotted c",
            "Runs over time: solid a, dashed d, dotted e",
            "Runs over time: solid a, dashed f"
        ]
    );
    let ids: Vec<&str> = charts.iter().map(|chart| chart.id.as_str()).collect();
    assert_eq!(ids, ["compare_1", "compare_2", "compare_3"]);
    assert!(overlays(&[]).is_empty());
}

#[test]
fn overlaid_panels_share_the_unit_of_the_first() {
    // The second run's torque is in kN m because it is large: 1000 N m make one.
    let small = chart(900.0, 400.0);
    let large = chart(90_000.0, 40_000.0);
    let torque = |chart: &RunChart| {
        chart.panels.iter().find(|panel| panel.id.starts_with("torque")).unwrap().clone()
    };
    let (own, far) = (torque(&small), torque(&large));
    assert_ne!(own.unit, far.unit);
    let largest = |points: &[Vec<[f64; 2]>]| {
        points.iter().flatten().fold(0.0_f64, |most, point| most.max(point[1].abs()))
    };
    let wanted = 1000.0 * largest(&far.curves[0].pieces);
    let both = overlay(&[("a".to_owned(), small), ("b".to_owned(), large)]).unwrap();
    let found = torque(&both);
    assert_eq!(found.unit, own.unit);
    let found = largest(&found.curves.last().unwrap().pieces);
    assert!((found - wanted).abs() < 1e-9 * wanted, "{found} {wanted}");
}

#[test]
fn two_gears_have_two_panels_each() {
    let run = Run::of(900.0, 400.0);
    let mut result = run.result();
    let mut second = result.gears[0].clone();
    second.name = "second_stage".to_owned();
    second.slips = 0;
    second.slip_events.clear();
    second.resynchronised_at = None;
    result.gears.push(second);
    let mut train = train();
    let mut gear = train.gears[0].clone();
    gear.name = "second_stage".to_owned();
    train.gears.push(gear);
    let mut traces = run.traces([0.5, END]);
    for trace in traces.traces.clone() {
        if trace.channel.starts_with("mg.") {
            let channel = trace.channel.replace("mg.", "second_stage.");
            traces.traces.push(lodeshaft::results::Trace { channel, ..trace });
        }
    }
    let drawing: Drawing =
        run_chart(&pick::run(&result, &traces, &train, &Display::default(), "run"));
    show(&drawing, "run-two");
    assert_eq!(
        drawing.to_inline_svg("r").matches("class=\"p\"").count(),
        6,
        "five panels, one strip"
    );
    assert!(drawing.texts().contains(&"Load angle, second stage"));
}
