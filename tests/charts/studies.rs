//! The charts of the studies: counts of marks and what they say.

use crate::gallery::show;
use lodeshaft::render::chart::axes::Sheet;
use lodeshaft::render::chart::interference::{
    Crossing, Interference, Mode, Order, interference_chart,
};
use lodeshaft::render::chart::load_cases::{CaseBar, LoadCases, load_cases_chart};
use lodeshaft::render::chart::map::{Cell, MapChart, Parameter, map_chart};
use lodeshaft::render::chart::margin::{MarginChart, MarginPoint, margin_chart};
use lodeshaft::render::chart::marks::Forbidden;
use lodeshaft::render::chart::rainflow::{RainflowChart, rainflow_chart};
use lodeshaft::render::chart::tolerance::{Tolerance, tolerance_chart};
use lodeshaft::render::chart::units::{Display, Unit};
use std::f64::consts::{PI, TAU};

fn map_of(columns: usize, rows: usize) -> MapChart {
    let across: Vec<f64> =
        (0..columns).map(|c| 300.0 + 900.0 * c as f64 / (columns.max(2) - 1) as f64).collect();
    let up: Vec<f64> =
        (0..rows).map(|r| 300.0 + 1000.0 * r as f64 / (rows.max(2) - 1) as f64).collect();
    let mut cells = Vec::new();
    for burst in &up {
        for pull_out in &across {
            let share = burst / pull_out / 1.05;
            let met = share < 1.0;
            let slips = if met { 0 } else { (burst / 50.0) as u32 };
            cells.push(Cell {
                met: Some(met),
                peak_share: Some(share.min(1.0)),
                slips,
                still_slipping: share > 3.2,
            });
        }
    }
    MapChart {
        id: "map".to_owned(),
        title: "Map of pull-out torque against burst torque".to_owned(),
        name: "Pull-out against burst".to_owned(),
        across: Parameter {
            name: "Pull-out torque at the rotor".to_owned(),
            unit: "N·m".to_owned(),
            values: across,
        },
        up: Parameter { name: "Burst torque".to_owned(), unit: "N·m".to_owned(), values: up },
        cells,
        design: Some([1, rows.min(7) - 1]),
        near: 0.85,
        sheet: Sheet::PAGE,
    }
}

#[test]
fn a_map_has_a_number_in_every_cell_up_to_fifteen_by_twelve() {
    let drawing = map_chart(&map_of(13, 11));
    show(&drawing, "map");
    let svg = drawing.to_inline_svg("map");
    assert_eq!(svg.matches("class=\"c\"").count(), 13 * 11);
    assert_eq!(svg.matches("data-kind=\"design\"").count(), 1);
    assert!(drawing.texts().contains(&"still slipping at the end"));
    let large = map_chart(&map_of(40, 30));
    show(&large, "map-large");
    assert!(large.texts().len() < 80, "no numbers in cells");
    let line = map_chart(&map_of(12, 1));
    show(&line, "map-line");
}

fn random(state: &mut u64) -> f64 {
    // Linear congruential generator with the constants of Knuth's MMIX, for test data only.
    *state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
    (*state >> 11) as f64 / (1_u64 << 53) as f64
}

#[test]
fn tolerance_counts_every_draw_once() {
    let mut state = 11;
    let mut shares: Vec<f64> = (0..1950)
        .map(|_| 0.9 + 0.055 * ((0..12).map(|_| random(&mut state)).sum::<f64>() - 6.0))
        .filter(|share| *share < 1.0)
        .collect();
    shares.sort_by(f64::total_cmp);
    let at = |share: f64| shares[(share * shares.len() as f64) as usize];
    let input = Tolerance {
        id: "tolerance".to_owned(),
        title: "Peak pull-out share under tolerances".to_owned(),
        name: "Peak pull-out share".to_owned(),
        came_back: 40,
        slipped: 10,
        interval: [0.003, 0.009],
        quantiles: [at(0.05), at(0.5), at(0.95)],
        shares,
        sheet: Sheet::PAGE,
    };
    let drawing = tolerance_chart(&input);
    show(&drawing, "tolerance");
    let svg = drawing.to_inline_svg("t");
    let counted: u64 = svg
        .split("data-count=\"")
        .skip(1)
        .map(|rest| rest.split('"').next().unwrap().parse::<u64>().unwrap())
        .sum();
    assert_eq!(counted, input.shares.len() as u64 + 50);
    assert!(drawing.texts().contains(&"10 slip"));
    let narrow = Tolerance {
        shares: vec![0.981; 300],
        quantiles: [0.97, 0.98, 0.99],
        slipped: 400,
        ..input
    };
    show(&tolerance_chart(&narrow), "tolerance-narrow");
}

#[test]
fn diamonds_stand_inside_the_operating_range_only() {
    let rpm = PI / 30.0;
    let modes = [("blades on gear", 1.75), ("machine on gear", 4.85), ("carrier", 7.9)];
    let orders =
        [("6 × rotor", 6.0), ("18 × rotor", 18.0), ("3 × machine", 23.0), ("104 × ripple", 104.0)];
    let range = [12.0 * rpm, 19.6 * rpm];
    let mut crossings = Vec::new();
    for (_, frequency) in modes {
        for (_, order) in orders {
            let speed = frequency * TAU / order;
            if speed < 24.0 * rpm {
                crossings.push(Crossing {
                    speed,
                    frequency,
                    inside: (range[0]..=range[1]).contains(&speed),
                });
            }
        }
    }
    let inside = crossings.iter().filter(|crossing| crossing.inside).count();
    let input = Interference {
        id: "interference".to_owned(),
        title: "Natural frequencies and excitation over speed".to_owned(),
        modes: modes.map(|(label, frequency)| Mode { label: label.to_owned(), frequency }).to_vec(),
        separation: Some(0.1),
        orders: orders
            .map(|(label, order)| Order { label: label.to_owned(), per_speed: order / TAU })
            .to_vec(),
        crossings,
        operating: range,
        speed_of: "Rotor speed".to_owned(),
        speed: Display::default().speed,
        sheet: Sheet::PAGE,
    };
    let drawing = interference_chart(&input);
    show(&drawing, "interference");
    let svg = drawing.to_inline_svg("i");
    assert!(inside > 0);
    assert_eq!(svg.matches("data-kind=\"inside\"").count(), inside);
    assert_eq!(svg.matches("stroke-dasharray").count(), orders.len());
}

#[test]
fn a_margin_shows_design_limit_and_failures() {
    let points: Vec<MarginPoint> = (0..=25)
        .map(|place| 600.0 + 36.0 * f64::from(place))
        .chain((0..10).map(|place| 1062.0 + 6.0 / 2.0_f64.powi(place)))
        .map(|parameter| {
            let share = parameter / 1063.0 * 100.0;
            MarginPoint { parameter, value: Some(share.min(100.0)), met: share <= 100.0 }
        })
        .collect();
    let input = MarginChart {
        id: "margin".to_owned(),
        title: "Margin of the start".to_owned(),
        parameter: "Pump torque".to_owned(),
        parameter_unit: "N·m".to_owned(),
        measure: "Peak pull-out share".to_owned(),
        measure_unit: "%".to_owned(),
        limit: Some((100.0, Forbidden::Above)),
        points,
        design: 850.0,
        found: Some(1063.0),
        reached: true,
        margin_share: Some(0.25),
        sheet: Sheet::PAGE,
    };
    let drawing = margin_chart(&input);
    show(&drawing, "margin");
    let svg = drawing.to_inline_svg("m");
    assert!(svg.matches("data-kind=\"met\"").count() >= 13);
    assert!(svg.matches("data-kind=\"not-met\"").count() >= 10);
    assert!(drawing.texts().contains(&"holds up to 1063\u{a0}N·m"), "{:?}", drawing.texts());
    assert!(drawing.texts().contains(&"margin 25\u{a0}%"));
    let verdicts = MarginChart {
        points: input.points.iter().map(|point| MarginPoint { value: None, ..*point }).collect(),
        ..input
    };
    show(&margin_chart(&verdicts), "margin-verdicts");
}

#[test]
fn load_cases_stand_with_word_and_shape() {
    let case = |name: &str, met, used, text: &str, slips| CaseBar {
        name: name.to_owned(),
        met,
        use_of_limit: used,
        text: text.to_owned(),
        slips,
    };
    let input = LoadCases {
        id: "load-cases".to_owned(),
        title: "Load cases".to_owned(),
        cases: vec![
            case("as designed", Some(true), Some(0.72), "gear share, 61 % of 85 %", 0),
            case("hot magnets", Some(true), Some(0.97), "gear share, 82 % of 85 %", 0),
            case("jam", Some(false), Some(2.4), "shaft torque, 2160 N·m of 900 N·m", 18),
            case("cold start at low voltage", Some(false), Some(1.12), "run-up, 1.12 s of 1 s", 0),
            case("cut short", None, None, "", 0),
        ],
        sheet: Sheet::PAGE,
    };
    let drawing = load_cases_chart(&input);
    show(&drawing, "load-cases");
    let svg = drawing.to_inline_svg("l");
    assert_eq!(svg.matches("data-verdict=\"met\"").count(), 2);
    assert_eq!(svg.matches("data-verdict=\"not-met\"").count(), 2);
    let texts = drawing.texts();
    assert_eq!(texts.iter().filter(|text| **text == "not met").count(), 2);
    assert!(texts.contains(&"not judged"));
}

#[test]
fn rainflow_names_the_damage_equivalent() {
    let mut state = 4;
    let cycles = (0..4000)
        .map(|_| {
            let range = -90.0 * random(&mut state).max(1e-9).ln();
            [range, 1.0]
        })
        .chain([[950.0, 0.5], [1200.0, 1.0]])
        .collect();
    let input = RainflowChart {
        id: "rainflow".to_owned(),
        title: "Rainflow count of the pump shaft".to_owned(),
        of: "pump shaft".to_owned(),
        cycles,
        damage_equivalent: 412.0,
        slope: 4.0,
        unit: Unit::new("N·m", 1.0),
        sheet: Sheet::PAGE,
    };
    let drawing = rainflow_chart(&input);
    show(&drawing, "rainflow");
    assert!(drawing.texts().contains(&"damage equivalent 412\u{a0}N·m, slope 4"));
}
