//! No number, however odd, stops a chart: it is drawn without what cannot be drawn.

use lodeshaft::render::chart::axes::Sheet;
use lodeshaft::render::chart::drawing::{Dash, Drawing};
use lodeshaft::render::chart::interference::{
    Crossing, Interference, Mode, Order, interference_chart,
};
use lodeshaft::render::chart::map::{Cell, MapChart, Parameter, map_chart};
use lodeshaft::render::chart::margin::{MarginChart, MarginPoint, margin_chart};
use lodeshaft::render::chart::marks::Forbidden;
use lodeshaft::render::chart::palette::Side;
use lodeshaft::render::chart::rainflow::{RainflowChart, rainflow_chart};
use lodeshaft::render::chart::run::run_chart;
use lodeshaft::render::chart::run_data::run_data;
use lodeshaft::render::chart::run_input::{
    Curve, Dots, Hue, Limit, Panel, PanelKind, Row, RunChart, Weight,
};
use lodeshaft::render::chart::swing::{SwingChart, swing_chart};
use lodeshaft::render::chart::tolerance::{Tolerance, tolerance_chart};
use lodeshaft::render::chart::torque_speed::{Characteristic, TorqueSpeed, torque_speed_chart};
use lodeshaft::render::chart::units::{Display, Unit};
use lodeshaft::results::{Separatrix, Swing};

const ODD: [f64; 10] =
    [0.0, -0.0, 1.0, -3.5, f64::NAN, f64::INFINITY, f64::NEG_INFINITY, 1e300, -1e300, 5e-324];

fn sound(drawing: &Drawing) {
    for text in [drawing.to_inline_svg("odd"), drawing.to_svg(1.0)] {
        assert!(!text.contains("NaN") && !text.contains("inf\""), "{text}");
    }
    assert!(drawing.to_png(0.25).is_ok());
}

fn name() -> String {
    "odd".to_owned()
}

fn draw_all(a: f64, b: f64, c: f64) {
    let sheet = Sheet { width: a, height: Some(b) };
    let pairs = vec![[a, b], [b, c], [c, a]];
    let curve = Curve {
        channel: name(),
        factor: a,
        label: name(),
        hue: Hue::Ink,
        weight: Weight::Main,
        dash: Dash::Solid,
        pieces: vec![pairs.clone(), Vec::new()],
    };
    let limit = Limit { value: c, forbidden: Forbidden::Above, label: name(), always_seen: true };
    let panel = |kind| Panel {
        id: name(),
        name: name(),
        unit: name(),
        kind,
        curves: vec![curve.clone()],
        allowed: Some([a, b]),
        limits: vec![limit.clone()],
        dots: vec![Dots { label: name(), points: vec![[a, b], [b, c], [c, a]] }],
    };
    let run = RunChart {
        id: name(),
        title: name(),
        window: [a, b],
        panels: vec![
            panel(PanelKind::Values),
            panel(PanelKind::LoadAngle { peaks: [a, b], slips: vec![(c, 1)] }),
        ],
        rows: vec![Row::Slips {
            label: name(),
            slips: vec![(a, 1), (b, -1)],
            in_step: Some(c),
            notes: vec![name()],
        }],
        steps: vec![a, b],
        acts: vec![c],
        sheet,
    };
    sound(&run_chart(&run));
    let _ = run_data(&run);
    let line = |points: Vec<[f64; 2]>| Characteristic { label: name(), side: Side::Inner, points };
    sound(&torque_speed_chart(&TorqueSpeed {
        id: name(),
        title: name(),
        at: name(),
        motor: line(pairs.clone()),
        load: Some(line(pairs.clone())),
        pull_out: Some(a),
        operating_point: Some([b, c]),
        path: Some(line(Vec::new())),
        display: Display::default(),
        sheet,
    }));
    sound(&swing_chart(&SwingChart {
        id: name(),
        title: name(),
        gear: name(),
        swing: Swing {
            gear: name(),
            path: vec![[0.0, a, b], [1.0, b, c], [2.0, c, a]],
            separatrix: Some(Separatrix {
                load: name(),
                saddle: a,
                rest: b,
                upper: pairs.clone(),
                lower: Vec::new(),
            }),
        },
        peaks: [a, b],
        slips: vec![(a, 1), (b, 1)],
        in_step: true,
        sheet,
    }));
    let parameter = || Parameter { name: name(), unit: String::new(), values: vec![a, b] };
    sound(&map_chart(&MapChart {
        id: name(),
        title: name(),
        name: name(),
        across: parameter(),
        up: parameter(),
        cells: vec![
            Cell { met: Some(false), peak_share: Some(c), slips: 3, still_slipping: true };
            3
        ],
        design: Some([7, 9]),
        near: b,
        sheet,
    }));
    sound(&interference_chart(&Interference {
        id: name(),
        title: name(),
        modes: vec![Mode { label: name(), frequency: a }],
        separation: Some(b),
        orders: vec![Order { label: name(), per_speed: c }],
        crossings: vec![Crossing { speed: a, frequency: b, inside: true }],
        operating: [a, b],
        speed_of: name(),
        speed: Unit::new("rpm", c),
        sheet,
    }));
    sound(&tolerance_chart(&Tolerance {
        id: name(),
        title: name(),
        name: name(),
        shares: vec![a, b, c],
        came_back: 1,
        slipped: u32::MAX,
        interval: [a, b],
        quantiles: [a, b, c],
        sheet,
    }));
    sound(&margin_chart(&MarginChart {
        id: name(),
        title: name(),
        parameter: name(),
        parameter_unit: name(),
        measure: name(),
        measure_unit: name(),
        limit: Some((c, Forbidden::Above)),
        points: vec![
            MarginPoint { parameter: a, value: Some(b), met: true },
            MarginPoint { parameter: b, value: None, met: false },
        ],
        design: b,
        found: Some(c),
        reached: true,
        margin_share: Some(a),
        sheet,
    }));
    sound(&rainflow_chart(&RainflowChart {
        id: name(),
        title: name(),
        of: name(),
        cycles: pairs,
        damage_equivalent: a,
        slope: b,
        unit: Unit::new("N·m", c),
        sheet,
    }));
}

#[test]
fn odd_numbers_are_left_out_and_stop_nothing() {
    for (place, a) in ODD.iter().enumerate() {
        let b = ODD[(place * 3 + 2) % ODD.len()];
        let c = ODD[(place * 7 + 4) % ODD.len()];
        draw_all(*a, b, c);
        draw_all(b, c, *a);
    }
}
