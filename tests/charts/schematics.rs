//! The train's picture: every body and device is there once, and nothing leaves the sheet.

use crate::gallery::show;
use lodeshaft::render::chart::drawing::{Drawing, Mark};
use lodeshaft::render::chart::palette::Side;
use lodeshaft::render::chart::schematic::schematic;
use lodeshaft::render::chart::schematic::view::{
    Actor, BodyView, BrakeView, Link, Port, Schematic,
};

fn body(name: &str, side: Side, inertia: f64, referred: &str, speed: &str) -> BodyView {
    BodyView {
        name: name.to_owned(),
        side,
        inertia,
        inertia_text: format!("{} kg·m²", lodeshaft::render::chart::number::number(inertia, 3)),
        referred_text: referred.to_owned(),
        speed: (!speed.is_empty())
            .then(|| (speed.trim_start_matches('-').to_owned(), !speed.starts_with('-'))),
    }
}

fn shaft(name: &str, a: usize, b: usize, text: &str) -> Link {
    Link::Shaft {
        name: name.to_owned(),
        between: [Port::Body(a), Port::Body(b)],
        text: text.to_owned(),
        elastic: text != "rigid",
        backlash: name.contains("claw"),
    }
}

fn gear(members: [Port; 3], name: &str, counts: [&str; 3], text: &str) -> Link {
    Link::MagneticGear {
        name: name.to_owned(),
        members,
        counts: counts.map(str::to_owned),
        text: text.to_owned(),
    }
}

fn actor(name: &str, text: &str, body: usize, motor: bool, drives: bool) -> Actor {
    Actor { name: name.to_owned(), text: text.to_owned(), body, motor, drives }
}

fn train(id: &str, bodies: Vec<BodyView>, links: Vec<Link>, actors: Vec<Actor>) -> Schematic {
    Schematic {
        id: id.to_owned(),
        title: "The train".to_owned(),
        bodies,
        links,
        actors,
        brakes: Vec::new(),
    }
}

fn check(train: &Schematic, drawing: &Drawing) {
    show(drawing, &format!("train-{}", train.id));
    for body in &train.bodies {
        let named = drawing.texts().iter().filter(|text| text.starts_with(&body.name)).count();
        assert!(named >= 1, "{} is not named", body.name);
    }
    for mark in &drawing.marks {
        let places: Vec<[f64; 2]> = match mark {
            Mark::Line { points, .. } | Mark::Fill { points, .. } => points.clone(),
            Mark::Rectangle { corner, size, .. } => {
                vec![*corner, [corner[0] + size[0], corner[1] + size[1]]]
            }
            Mark::Text { at, .. } => vec![*at],
            _ => Vec::new(),
        };
        for [x, y] in places {
            assert!((0.0..=720.0).contains(&x) && (0.0..=drawing.height).contains(&y), "{mark:?}");
        }
    }
}

fn draw(train: &Schematic) -> Drawing {
    let drawing = schematic(train);
    check(train, &drawing);
    drawing
}

const B: fn(usize) -> Port = Port::Body;

fn pump() -> Schematic {
    let mut pump = train(
        "pump",
        vec![
            body("motor rotor", Side::Inner, 0.25, "", "1470 rpm"),
            body("inner rotor", Side::Inner, 0.02, "", "1470 rpm"),
            body("outer rotor", Side::Outer, 0.15, "", "-267 rpm"),
            body("impeller", Side::Outer, 2.5, "0.083 at the motor", "-267 rpm"),
        ],
        vec![
            shaft("motor shaft", 0, 1, "20 kN·m/rad"),
            shaft("pump shaft", 2, 3, "50 kN·m/rad"),
            gear(
                [B(1), Port::Ground, B(2)],
                "magnetic gear −5.5 : 1",
                ["4", "26", "22"],
                "pull-out 1500 N·m at the outer, 273 at the inner",
            ),
        ],
        vec![
            actor("line motor", "22 kW, 1465 rpm", 0, true, true),
            actor("pump", "700 N·m", 3, false, false),
            actor("gland", "40 N·m", 3, false, false),
        ],
    );
    pump.brakes.push(BrakeView {
        name: "holding brake".to_owned(),
        text: "900 N·m".to_owned(),
        body: 1,
        grounded: true,
    });
    pump
}

#[test]
fn a_pump_train_is_one_row() {
    let pump = pump();
    let drawing = draw(&pump);
    assert!(drawing.height < 300.0, "{}", drawing.height);
    let svg = drawing.to_inline_svg("t");
    // Two discs and the gear; the members are part of the gear.
    assert_eq!(svg.matches("class=\"thing\"").count(), 3);
    assert_eq!(svg.matches("class=\"shaft\"").count(), 2);
    assert!(drawing.texts().contains(&"modulator 26, held"));
}

#[test]
fn members_without_a_shaft_are_discs() {
    let direct = train(
        "direct",
        vec![
            body("drum", Side::Inner, 0.9, "", "988 rpm"),
            body("rotor", Side::Outer, 0.6, "0.038 at the drum", "-247 rpm"),
        ],
        vec![gear(
            [B(0), Port::Ground, B(1)],
            "magnetic gear −4 : 1",
            ["4", "20", "16"],
            "pull-out 400 N·m at the outer, 100 at the inner",
        )],
        vec![
            actor("feed", "160 N·m up to 850 rpm", 0, true, true),
            actor("grist and burst", "900 N·m for 0.25 s", 1, false, false),
        ],
    );
    let drawing = draw(&direct);
    assert_eq!(drawing.to_inline_svg("t").matches("class=\"thing\"").count(), 3);
}

#[test]
fn a_wind_train_leaves_by_modulator_and_inner() {
    let wind = train(
        "wind",
        vec![
            body("blades", Side::Modulator, 5.2e6, "88 t·m² at the machine", "17.1 rpm"),
            body("carrier", Side::Modulator, 4e4, "", "17.1 rpm"),
            body("fast rotor", Side::Inner, 30.0, "", "131 rpm"),
            body("machine", Side::Inner, 420.0, "", "131 rpm"),
        ],
        vec![
            shaft("main shaft", 0, 1, "140 MN·m/rad"),
            shaft("fast shaft with claw", 2, 3, "9 MN·m/rad"),
            gear(
                [B(2), B(1), Port::Ground],
                "magnetic gear 1 : 7.67",
                ["6", "46", "40"],
                "pull-out 1.45 MN·m at the modulator",
            ),
        ],
        vec![
            actor("wind", "radius 41 m", 0, false, true),
            actor("generator", "limit 180 kN·m", 3, true, false),
        ],
    );
    draw(&wind);
}

#[test]
fn three_free_ports_hang_the_third_below() {
    for (id, members, sides) in [
        ("three-modulator", [B(0), B(2), B(1)], [Side::Inner, Side::Outer, Side::Modulator]),
        ("three-outer", [B(0), B(1), B(2)], [Side::Inner, Side::Modulator, Side::Outer]),
    ] {
        let split = train(
            id,
            vec![
                body("engine", sides[0], 1.2, "", "1500 rpm"),
                body("wheels", sides[1], 4.0, "", "300 rpm"),
                body("control machine", sides[2], 0.4, "", "-200 rpm"),
                body("axle", sides[1], 8.0, "", "300 rpm"),
            ],
            vec![
                gear(members, "power split", ["5", "23", "18"], "pull-out 500 N·m at the outer"),
                shaft("prop shaft", 1, 3, "30 kN·m/rad"),
            ],
            vec![
                actor("engine", "200 N·m", 0, true, true),
                actor("road", "600 N·m", 3, false, false),
                actor("controller", "limit 80 N·m", 2, true, false),
            ],
        );
        let drawing = draw(&split);
        assert!(drawing.height > 350.0, "a second row");
    }
}

#[test]
fn couplings_pairs_and_planets_have_their_own_pictures() {
    let mixed = train(
        "mixed",
        vec![
            body("motor", Side::Inner, 0.1, "", "2900 rpm"),
            body("sun", Side::Inner, 0.01, "", "2900 rpm"),
            body("carrier", Side::Inner, 0.3, "", "617 rpm"),
            body("mixer", Side::Outer, 2.0, "", "617 rpm"),
            body("screw", Side::Outer, 1.0, "", "-123 rpm"),
        ],
        vec![
            shaft("input", 0, 1, "8 kN·m/rad"),
            Link::Planetary {
                name: "stage 4.7 : 1".to_owned(),
                members: [B(1), B(2), Port::Ground],
                text: "21 and 78 teeth".to_owned(),
            },
            Link::Coupling {
                name: "coupling".to_owned(),
                between: [B(2), B(3)],
                text: "6 pole pairs, pull-out 80 N·m".to_owned(),
            },
            Link::GearPair {
                name: "reducer".to_owned(),
                between: [B(3), B(4)],
                ratio: -5.0,
                text: "−5 : 1".to_owned(),
            },
        ],
        vec![actor("motor", "4 kW", 0, true, true), actor("paste", "60 N·m", 4, false, false)],
    );
    draw(&mixed);
}

#[test]
fn a_long_train_folds_and_branches_hang() {
    let names = [
        "motor",
        "wheel one",
        "wheel two",
        "wheel three",
        "inner",
        "outer",
        "drum one",
        "drum two",
        "fan",
        "pump",
    ];
    let bodies = names
        .iter()
        .enumerate()
        .map(|(place, name)| {
            body(
                name,
                if place < 5 { Side::Inner } else { Side::Outer },
                0.1 * (place + 1) as f64,
                "",
                "100 rpm",
            )
        })
        .collect();
    let mut links: Vec<Link> = [(0, 1), (1, 2), (2, 3), (3, 4), (5, 6), (6, 7), (7, 8), (2, 9)]
        .iter()
        .map(|(a, b)| shaft(&format!("shaft {a} {b}"), *a, *b, "12.5 kN·m/rad"))
        .collect();
    links.push(gear(
        [B(4), Port::Ground, B(5)],
        "magnetic gear −4 : 1",
        ["4", "20", "16"],
        "pull-out 400 N·m at the outer",
    ));
    let long = train(
        "long",
        bodies,
        links,
        vec![
            actor("drive", "5 kW", 0, true, true),
            actor("air", "20 N·m", 8, false, false),
            actor("oil", "3 N·m", 9, false, false),
        ],
    );
    draw(&long);
}

#[test]
fn odd_trains_are_drawn_without_fault() {
    draw(&train("empty", Vec::new(), Vec::new(), Vec::new()));
    draw(&train("lone", vec![body("wheel", Side::Other, 0.0, "", "")], Vec::new(), Vec::new()));
    let mut ring = train(
        "ring",
        ["a", "b", "c"].map(|name| body(name, Side::Other, 1.0, "", "")).to_vec(),
        vec![
            shaft("one", 0, 1, "rigid"),
            shaft("two", 1, 2, "rigid"),
            shaft("three", 2, 0, "rigid"),
        ],
        Vec::new(),
    );
    draw(&ring);
    ring.id = "stray".to_owned();
    ring.links.push(shaft("nowhere", 7, 9, "rigid"));
    ring.links.push(gear([B(0), Port::Ground, Port::Ground], "held", ["1", "2", "3"], ""));
    draw(&ring);
}
