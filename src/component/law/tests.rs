//! What holds for every law: derivatives, pieces, smoothness beyond their ends.

use super::*;
use crate::component::load::periodic::TurnHarmonic;
use crate::component::load::power_coefficient::{DEFAULT, PowerCoefficient, Rows};
use crate::component::load::propeller::TorqueCoefficient;
use crate::component::magnetic_gear::Harmonic;
use crate::component::motor::Plate;
use crate::component::motor::circuit::CircuitFigures;
use crate::component::motor::optimal_power::{GeneratorFigures, Rated};
use crate::component::motor::torque_limit::TorqueLimits;

fn rotor(coefficient: PowerCoefficient) -> AxialRotor {
    AxialRotor::new(40.0, 1.225, coefficient)
}

/// A law whose pieces hang on signals too.
fn laws_cut_by_signals() -> Vec<(&'static str, Law, [f64; 2], f64)> {
    let rows = Rows::new(
        vec![2.0, 6.0, 10.0],
        vec![0.0, 0.1],
        vec![vec![0.1, 0.08], vec![0.45, 0.3], vec![0.25, 0.1]],
    );
    let lines = TorqueCoefficient::points(&[[0.0, 0.07], [0.5, 0.05], [1.0, 0.01]]);
    let circuit = Circuit::new(CircuitFigures {
        line_voltage: 460.0,
        frequency: 60.0,
        pole_pairs: 2,
        stator_resistance: 0.641,
        stator_reactance: 1.106,
        rotor_resistance: 0.332,
        rotor_reactance: 0.464,
        magnetising_reactance: 26.3,
    });
    vec![
        ("rotor by rows", Law::AxialRotor(rotor(PowerCoefficient::Rows(rows))), [11.0, 0.05], 5.0),
        ("propeller", Law::Propeller(Propeller::new(4.0, 1025.0, lines)), [6.0, 0.0], 40.0),
        ("circuit", Law::Circuit(circuit.clone()), [1.0, 0.0], 400.0),
        ("open circuit", Law::Circuit(circuit), [0.4, 0.0], 400.0),
        ("contactor", Law::Contactor, [1.0, 0.8], 1.0),
    ]
}

#[test]
fn laws_cut_by_signals_are_smooth_within_a_piece_and_meet_at_its_ends() {
    for (name, law, p, reach) in laws_cut_by_signals() {
        assert!(law.piece_follows_signals(), "{name}");
        for step in 0..401 {
            let x = reach * (f64::from(step) - 200.3) / 200.0;
            let piece = law.piece(x, p);
            let h = 1e-7 * reach;
            let (below, above) = (law.value(x - h, p, piece), law.value(x + h, p, piece));
            let slope = law.slope(x, p, piece);
            let size = (law.value(x, p, piece) / reach).abs() + slope.abs();
            // A rotor's torque has a corner at standstill, where it is held.
            let corner = name.starts_with("rotor") && x.abs() < 1e-3;
            let off = ((above - below) / (2.0 * h) - slope).abs();
            assert!(corner || off < 1e-4 * size + 1e-9, "{name} at {x}: {slope}");
            let next = x + reach / 200.0;
            if law.piece(next, p) == piece + 1 && !name.contains("circuit") {
                // The boundary lies between: both formulas agree at it.
                let (mut low, mut high) = (x, next);
                for _ in 0..80 {
                    let middle = 0.5 * (low + high);
                    if law.piece(middle, p) == piece { low = middle } else { high = middle }
                }
                let (one, other) = (law.value(low, p, piece), law.value(low, p, piece + 1));
                assert!((one - other).abs() < 1e-9 * one.abs().max(1.0), "{name}: {one} {other}");
            }
        }
    }
}

const LIMITS: TorqueLimits =
    TorqueLimits { torque_limit: 300.0, base_speed: Some(150.0), regeneration: Some([60.0, 5.0]) };

const RATED: Rated =
    Rated { speed: 80.0, torque: 900.0, transition_slip: 0.1, constant_power: true };

fn generator(cut_in: Option<[f64; 2]>, torque_limit: Option<f64>, rated: Option<Rated>) -> Law {
    let figures = GeneratorFigures { coefficient: 0.12, torque_limit, cut_in, rated };
    Law::OptimalPower(OptimalPower::new(&figures))
}

fn every_law() -> Vec<(&'static str, Law, [f64; 2], f64)> {
    let harmonics = [Harmonic { order: 3, amplitude: 0.04, phase: 0.3 }];
    let plate = Plate {
        power: 22e3,
        speed: 153.4,
        synchronous_speed: 157.08,
        starting: 2.2,
        pull_up: 1.8,
        breakdown: 2.9,
    };
    let backward = Plate { speed: -153.4, synchronous_speed: -157.08, ..plate };
    let points = [[-10.0, 5.0], [0.0, 300.0], [140.0, 450.0], [157.0, 0.0]];
    let load = [[0.0, 50.0], [10.0, 20.0], [40.0, 90.0]];
    let none = [0.0, 0.0];
    let beat = [TurnHarmonic { order: 3, amplitude: 30.0, phase: 0.3 }];
    vec![
        ("unit", Law::Unit, none, 10.0),
        ("magnet", Law::Magnet(MagnetLaw::new(75.0, &[]).unwrap()), none, 4.0),
        ("harmonic magnet", Law::Magnet(MagnetLaw::new(75.0, &harmonics).unwrap()), none, 4.0),
        ("damper", Law::FadingDamper { coefficient: 24.2, peak_at: 12.0 }, none, 60.0),
        ("heat", Law::LossHeat { constant: 3.0, coefficient: 0.4, peak_at: 12.0 }, none, 60.0),
        ("field", Law::MagnetEnergy(MagnetLaw::new(75.0, &harmonics).unwrap()), none, 4.0),
        ("cogging", Law::Cogging { order: 104.0, torque: 2.0, phase: 0.4 }, none, 0.5),
        ("induction", Law::Induction(Induction::new(157.0, 450.0, 0.12)), none, 400.0),
        ("plate", Law::RatingPlate(RatingPlate::new(&plate)), none, 400.0),
        ("plate backward", Law::RatingPlate(RatingPlate::new(&backward)), none, 400.0),
        ("motor curve", Law::MotorCurve(MotorCurve::new(&points)), none, 200.0),
        ("generator", generator(None, Some(900.0), None), none, 200.0),
        ("rated generator", generator(Some([20.0, 40.0]), None, Some(RATED)), none, 200.0),
        ("square load", Law::PowerLaw(PowerLaw::new(700.0, 28.0, 2.0)), none, 60.0),
        ("cubic load", Law::PowerLaw(PowerLaw::new(700.0, 28.0, 3.0)), none, 60.0),
        ("odd load", Law::PowerLaw(PowerLaw::new(700.0, 28.0, 1.6)), none, 60.0),
        ("load curve", Law::LoadCurve(LoadCurve::new(&load)), none, 60.0),
        ("rotor", Law::AxialRotor(rotor(PowerCoefficient::Formula(DEFAULT))), [11.0, 0.05], 5.0),
        ("beat", Law::Periodic(Periodic::new(&beat)), none, 4.0),
        ("saturation", Law::saturation(3.0), none, 9.0),
        ("scheduled", Law::Scheduled { halves_at: 0.2 }, [0.05, 0.0], 3.0),
        ("upper limit", Law::TorqueLimit(TorqueLimit::new(&LIMITS, 1.0)), none, 500.0),
        ("lower limit", Law::TorqueLimit(TorqueLimit::new(&LIMITS, -1.0)), none, 500.0),
    ]
}

// The derivative against a central difference, an independent computation.
#[test]
fn every_slope_is_the_derivative_of_its_value() {
    for (name, law, p, reach) in every_law() {
        for step in 0..401 {
            let x = reach * (f64::from(step) - 200.3) / 200.0;
            let piece = law.piece_at(x);
            let h = 1e-6 * reach;
            let difference = (law.value(x + h, p, piece) - law.value(x - h, p, piece)) / (2.0 * h);
            let slope = law.slope(x, p, piece);
            let size = (law.value(x, p, piece) / reach).abs() + slope.abs();
            assert!(
                (difference - slope).abs() < 1e-4 * size + 1e-9,
                "{name} at {x}: {slope} {difference}"
            );
        }
    }
}

#[test]
fn boundaries_rise_and_each_belongs_to_the_piece_above_it() {
    for (name, law, ..) in every_law() {
        let boundaries = law.boundaries();
        assert!(boundaries.windows(2).all(|pair| pair[0] < pair[1]), "{name}: {boundaries:?}");
        for (index, boundary) in boundaries.iter().enumerate() {
            assert_eq!(law.piece_at(*boundary), index + 1, "{name}");
            assert_eq!(law.piece_at(boundary.next_down()), index, "{name}");
        }
    }
}

#[test]
fn neighbouring_pieces_meet_except_where_a_load_sticks() {
    for (name, law, p, _) in every_law() {
        for (index, boundary) in law.boundaries().iter().enumerate() {
            let (below, above) =
                (law.value(*boundary, p, index), law.value(*boundary, p, index + 1));
            if name == "load curve" && boundary.abs() < 1e-12 {
                assert!((below - above - 100.0).abs() < 1e-9, "twice the torque at rest");
            } else {
                let size = below.abs().max(above.abs()).max(1.0);
                assert!(
                    (below - above).abs() < 1e-9 * size,
                    "{name} at {boundary}: {below} {above}"
                );
            }
        }
    }
}

// Closed form: c x/(1 + (x/peak)^2) is largest at `peak`, and is c*peak/2 there.
#[test]
fn the_fading_damper_is_strongest_where_it_says() {
    let damper = Law::FadingDamper { coefficient: 24.2, peak_at: 12.0 };
    assert!((damper.value(12.0, [0.0; 2], 0) - 24.2 * 6.0).abs() < 1e-12);
    assert!(damper.slope(12.0, [0.0; 2], 0).abs() < 1e-12);
    assert!(damper.value(40.0, [0.0; 2], 0) < damper.value(12.0, [0.0; 2], 0));
}

#[test]
fn only_laws_from_data_have_a_range_to_warn_of() {
    for (name, law, ..) in every_law() {
        let warned = matches!(name, "induction" | "motor curve" | "load curve");
        assert_eq!(law.warn_range().is_some(), warned, "{name}");
        assert_eq!(!law.warn_text().is_empty(), warned, "{name}");
    }
}

// The derivative over a parameter against a central difference.
#[test]
fn every_slope_over_a_parameter_is_the_derivative_too() {
    let rows = Rows::new(
        vec![2.0, 6.0, 10.0],
        vec![0.0, 0.1, 0.25],
        vec![vec![0.1, 0.08, 0.02], vec![0.45, 0.3, 0.1], vec![0.25, 0.1, -0.1]],
    );
    let command = Law::PitchCommand { limits: [0.0, 9.0], halves_at: 0.2 };
    for (law, x, p) in [
        (Law::AxialRotor(rotor(PowerCoefficient::Formula(DEFAULT))), 1.7, [11.0, 0.05]),
        (Law::AxialRotor(rotor(PowerCoefficient::Formula(DEFAULT))), 1.2, [16.0, 0.3]),
        (Law::AxialRotor(rotor(PowerCoefficient::Rows(rows.clone()))), 1.7, [11.0, 0.03]),
        (Law::AxialRotor(rotor(PowerCoefficient::Rows(rows))), 2.2, [11.0, 0.21]),
        (Law::Scheduled { halves_at: 0.2 }, 1.5, [0.1, 0.0]),
        (command, 1.5, [0.1, 0.3]),
    ] {
        let piece = law.piece(x, p);
        let slopes = law.parameter_slopes(x, p, piece);
        let turned = matches!(law, Law::AxialRotor(_));
        for place in (0..2).filter(|place| !turned || *place == 1) {
            let moved = |by: f64| {
                let mut p = p;
                p[place] += by;
                law.value(x, p, piece)
            };
            let difference = (moved(1e-6) - moved(-1e-6)) / 2e-6;
            let size = difference.abs().max(slopes[place].abs()).max(1e-3);
            assert!((difference - slopes[place]).abs() < 1e-5 * size, "{law:?} {place}");
        }
    }
}
