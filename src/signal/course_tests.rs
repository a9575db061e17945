//! Courses against their closed forms: values, limits from both sides, slopes, kinks, overrides.

use super::*;
use std::f64::consts::{PI, TAU};

fn bank_of(signal: Signal) -> (SignalBank, SlotId) {
    let mut bank = SignalBank::new(&[]);
    let id = bank.add("loads.a.scale", &signal);
    (bank, id)
}

fn close(found: f64, expected: f64) {
    assert!((found - expected).abs() <= 1e-12 * expected.abs().max(1.0), "{found} {expected}");
}

fn kinks(bank: &SignalBank, o: &Overrides) -> Vec<f64> {
    std::iter::successors(bank.next_kink(-100.0, o), |time| bank.next_kink(*time, o)).collect()
}

fn ramp(start: f64, end: f64, from: f64, to: f64) -> Signal {
    Signal::Ramp { start, end, from, to }
}

fn sine() -> Signal {
    Signal::Sine { mean: 2.0, amplitude: 3.0, frequency: 5.0, phase: 0.4 }
}

#[test]
fn a_step_is_continuous_from_the_right() {
    let (bank, id) = bank_of(Signal::Step { at: 1.0, from: 2.0, to: 5.0 });
    let o = bank.no_overrides();
    close(bank.value_before(id, 1.0, &o), 2.0);
    close(bank.value(id, 1.0, &o), 5.0);
    close(bank.value_in(id, 1.0, 0.3, &o), 2.0);
    close(bank.value_in(id, 1.0, 1.0, &o), 5.0);
    assert_eq!(kinks(&bank, &o), [1.0]);
    assert_eq!(bank.constant_on(id, 0.0, 1.0, &o), Some(2.0));
    assert_eq!(bank.constant_on(id, 1.0, 9.0, &o), Some(5.0));
    assert_eq!(bank.constant_on(id, 0.5, 1.5, &o), None);
}

#[test]
fn a_ramp_is_exact_at_both_corners() {
    let (from, to) = (0.1, 1.0 / 3.0);
    let (bank, id) = bank_of(ramp(0.7, 1.9, from, to));
    let o = bank.no_overrides();
    for (time, expected) in [(0.0, from), (0.7, from), (1.9, to), (5.0, to)] {
        assert_eq!(bank.value(id, time, &o).to_bits(), f64::to_bits(expected));
        assert_eq!(bank.value_before(id, time, &o).to_bits(), f64::to_bits(expected));
    }
    close(bank.value(id, 1.3, &o), 0.5 * (from + to));
    close(bank.slope(id, 0.7, &o), (to - from) / 1.2);
    close(bank.slope(id, 1.9, &o), 0.0);
    close(bank.slope_in(id, 1.9, 0.7, &o), (to - from) / 1.2);
    close(bank.value_in(id, 2.5, 0.7, &o), from + (to - from) / 1.2 * 1.8);
    assert_eq!(kinks(&bank, &o), [0.7, 1.9]);
}

#[test]
fn a_pulse_holds_its_peak_up_to_but_not_at_its_end() {
    let (bank, id) = bank_of(Signal::Pulse { start: 1.0, end: 2.0, base: 0.0, peak: 7.0 });
    let o = bank.no_overrides();
    for (time, before, value) in
        [(0.5, 0.0, 0.0), (1.0, 0.0, 7.0), (1.5, 7.0, 7.0), (2.0, 7.0, 0.0)]
    {
        close(bank.value_before(id, time, &o), before);
        close(bank.value(id, time, &o), value);
    }
    assert_eq!(kinks(&bank, &o), [1.0, 2.0]);
}

#[test]
fn points_jump_where_two_times_are_equal_and_hold_their_ends() {
    let points = vec![[0.0, 1.0], [2.0, 5.0], [2.0, 8.0], [3.0, 8.0], [4.0, 8.0], [6.0, 0.0]];
    let (bank, id) = bank_of(Signal::Points(points));
    let o = bank.no_overrides();
    close(bank.value(id, -3.0, &o), 1.0);
    close(bank.value(id, 1.0, &o), 3.0);
    close(bank.value_before(id, 2.0, &o), 5.0);
    close(bank.value(id, 2.0, &o), 8.0);
    close(bank.value(id, 5.0, &o), 4.0);
    close(bank.value(id, 99.0, &o), 0.0);
    assert_eq!(kinks(&bank, &o), [0.0, 2.0, 4.0, 6.0], "a point on a level line is no kink");
    assert_eq!(bank.constant_on(id, 2.0, 4.0, &o), Some(8.0));
    assert_eq!(bank.range_on(id, -1.0, 9.0, &o), (0.0, 8.0));
    assert_eq!(bank.range_on(id, 1.0, 2.0, &o), (3.0, 5.0), "from the left at its end");
}

// Closed form mean + A sin(2 pi f t + phase).
#[test]
fn a_sine_has_no_kinks_but_caps_the_step_at_a_sixth_of_its_period() {
    let (bank, id) = bank_of(sine());
    let o = bank.no_overrides();
    close(bank.value(id, 0.37, &o), 2.0 + 3.0 * (TAU * 5.0 * 0.37 + 0.4).sin());
    close(bank.slope(id, 0.37, &o), 3.0 * TAU * 5.0 * (TAU * 5.0 * 0.37 + 0.4).cos());
    assert_eq!(bank.next_kink(0.0, &o), None);
    close(bank.step_cap(0.0, 1.0, &o).unwrap(), 1.0 / 30.0);
    let (low, high) = bank.range_on(id, 0.0, 10.0, &o);
    assert!((low + 1.0).abs() < 1e-12 && (high - 5.0).abs() < 1e-12, "{low} {high}");
}

// IEC 61400-1: magnitude 6.475392 m/s at 12 m/s, class II A; the course by the standard.
#[test]
fn a_gust_begins_and_ends_at_the_hub_wind() {
    let (bank, id) =
        bank_of(Signal::ExtremeGust { start: 5.0, hub_wind: 12.0, magnitude: 6.475392 });
    let o = bank.no_overrides();
    for (time, wind) in [(0.0, 12.0), (5.0, 12.0), (7.0, 10.5175477305), (15.5, 12.0), (20.0, 12.0)]
    {
        assert!((bank.value(id, time, &o) - wind).abs() < 1e-9, "{time}");
    }
    assert_eq!(kinks(&bank, &o), [5.0, 15.5]);
    close(bank.step_cap(0.0, 6.0, &o).unwrap(), 0.21);
    assert_eq!(bank.step_cap(0.0, 5.0, &o), None);
    assert_eq!(bank.constant_on(id, 15.5, 30.0, &o), Some(12.0));
    let (low, high) = bank.range_on(id, 0.0, 30.0, &o);
    assert!((low - 10.2642075268).abs() < 1e-9 && (high - 16.79179008).abs() < 1e-9);
    let steepest = (0..=1050)
        .map(|step| bank.slope(id, 5.0 + 0.01 * f64::from(step), &o).abs())
        .fold(0.0, f64::max);
    assert!((steepest - 3.78303858494).abs() < 1e-3);
}

// IEC 61400-1, extreme coherent gust: V = V0 + 7.5 (1 - cos(pi t/10)); 15.0916106078 m/s after 3 s
// from 12 m/s, the steepest slope 7.5 pi/10 after 5 s.
#[test]
fn a_coherent_gust_rises_and_stays() {
    let gust = Signal::CoherentGust { start: 2.0, hub_wind: 12.0, rise: 15.0, rise_time: 10.0 };
    let (bank, id) = bank_of(gust);
    let o = bank.no_overrides();
    for (time, wind) in
        [(0.0, 12.0), (2.0, 12.0), (5.0, 15.0916106078), (7.0, 19.5), (12.0, 27.0), (99.0, 27.0)]
    {
        assert!((bank.value(id, time, &o) - wind).abs() < 1e-9, "{time}");
    }
    close(bank.slope(id, 7.0, &o), 0.75 * PI);
    assert_eq!(kinks(&bank, &o), [2.0, 12.0]);
    assert_eq!(bank.constant_on(id, 12.0, 30.0, &o), Some(27.0));
    assert_eq!(bank.constant_on(id, 0.0, 2.0, &o), Some(12.0));
    assert_eq!(bank.constant_on(id, 0.0, 2.1, &o), None);
    let (low, high) = bank.range_on(id, 0.0, 30.0, &o);
    assert!((low - 12.0).abs() < 1e-12 && (high - 27.0).abs() < 1e-12);
}

#[test]
fn sums_and_products_combine_values_slopes_kinks_and_constants() {
    let members = vec![ramp(1.0, 2.0, 0.0, 4.0), sine(), Signal::Constant(3.0)];
    let (sum, id) = bank_of(Signal::Sum(members.clone()));
    let o = sum.no_overrides();
    let (wave, rate) = (
        2.0 + 3.0 * (TAU * 5.0 * 1.5 + 0.4).sin(),
        3.0 * TAU * 5.0 * (TAU * 5.0 * 1.5 + 0.4).cos(),
    );
    close(sum.value(id, 1.5, &o), 2.0 + wave + 3.0);
    close(sum.slope(id, 1.5, &o), 4.0 + rate);
    assert_eq!(kinks(&sum, &o), [1.0, 2.0]);
    let (product, id) = bank_of(Signal::Product { members, carrier: None });
    close(product.value(id, 1.5, &o), 2.0 * wave * 3.0);
    close(product.slope(id, 1.5, &o), 3.0 * (4.0 * wave + 2.0 * rate));
    assert_eq!(product.constant_on(id, 0.0, 1.0, &o), Some(0.0), "a factor zero silences the rest");
    assert_eq!(product.constant_on(id, 0.0, 1.5, &o), None);
}

// Closed form: t(1 - t) is largest at 1/2, where it is 1/4.
#[test]
fn the_range_of_a_product_of_ramps_finds_the_peak_between_the_corners() {
    let members = vec![ramp(0.0, 1.0, 0.0, 1.0), ramp(0.0, 1.0, 1.0, 0.0)];
    let (bank, id) = bank_of(Signal::Product { members, carrier: None });
    let (low, high) = bank.range_on(id, 0.0, 1.0, &bank.no_overrides());
    assert!(low.abs() < 1e-15 && (high - 0.25).abs() < 1e-12);
}

fn named(name: &str, signal: Signal) -> NamedSignal {
    NamedSignal { name: name.to_owned(), dimension: None, signal, source: None }
}

#[test]
fn a_name_follows_its_signal_and_an_unused_signal_makes_no_kinks() {
    let demand = named("demand", ramp(1.0, 6.0, 0.0, 150.0));
    let idle = named("idle", Signal::Step { at: 3.0, from: 0.0, to: 1.0 });
    let mut bank = SignalBank::new(&[demand, idle]);
    let first = bank.add("motors.a.law.speed_loop.speed", &Signal::Named("demand".into()));
    let o = bank.no_overrides();
    close(bank.value(first, 3.5, &o), 75.0);
    assert_eq!(kinks(&bank, &o), [1.0, 6.0]);
    assert_eq!(bank.find("motors.a.law.speed_loop.speed"), Some(first));
    assert!(bank.find("signals.idle").is_some());
    assert_eq!(bank.find("signals.other"), None);
}

#[test]
fn an_override_starts_from_the_present_value_then_holds_and_a_later_one_takes_over() {
    let (bank, id) = bank_of(ramp(0.0, 10.0, 0.0, 10.0));
    let mut o = bank.no_overrides();
    o.set(&bank, id, 4.0, 0.0, 2.0);
    close(bank.value(id, 3.0, &o), 3.0);
    close(bank.value(id, 4.0, &o), 4.0);
    close(bank.value(id, 5.0, &o), 2.0);
    close(bank.slope(id, 5.0, &o), -2.0);
    close(bank.value(id, 9.0, &o), 0.0);
    assert_eq!(kinks(&bank, &o), [0.0, 4.0, 6.0]);
    assert_eq!(bank.constant_on(id, 6.0, 50.0, &o), Some(0.0));
    assert_eq!(bank.constant_on(id, 5.0, 50.0, &o), None);
    o.set(&bank, id, 5.0, 1.0, 0.0);
    close(bank.value_before(id, 5.0, &o), 2.0);
    close(bank.value(id, 5.0, &o), 1.0);
    close(bank.value_in(id, 5.0, 4.5, &o), 2.0);
    close(bank.value(id, 8.0, &o), 1.0);
}

#[test]
fn setting_a_place_leaves_the_named_signal_alone_and_setting_the_name_moves_every_place() {
    let mut bank = SignalBank::new(&[named("share", Signal::Constant(0.5))]);
    let places = ["a", "b"]
        .map(|name| bank.add(&format!("brakes.{name}.applied"), &Signal::Named("share".into())));
    let shared = bank.find("signals.share").unwrap();
    let mut o = bank.no_overrides();
    o.set(&bank, places[0], 1.0, 1.0, 0.0);
    close(bank.value(places[0], 2.0, &o), 1.0);
    close(bank.value(places[1], 2.0, &o), 0.5);
    o.set(&bank, shared, 3.0, 0.0, 1.0);
    close(bank.value(places[0], 5.0, &o), 1.0);
    close(bank.value(places[1], 5.0, &o), 0.0);
    assert_eq!(kinks(&bank, &o), [1.0, 3.0, 4.0]);
}

#[test]
fn an_overridden_sine_no_longer_caps_the_step() {
    let (bank, id) = bank_of(sine());
    let mut o = bank.no_overrides();
    o.set(&bank, id, 1.0, 0.0, 0.1);
    assert!(bank.step_cap(0.0, 0.5, &o).is_some());
    assert_eq!(bank.step_cap(1.0, 2.0, &o), None);
}

#[test]
fn a_circle_of_names_gives_no_number_instead_of_hanging() {
    let to = |name: &str| Signal::Named(name.to_owned());
    let list = [named("a", to("b")), named("b", to("a")), named("c", Signal::Sum(vec![to("a")]))];
    let mut bank = SignalBank::new(&list);
    let id = bank.add("x.y", &to("c"));
    assert!(bank.value(id, 0.0, &bank.no_overrides()).is_nan());
}

// The derivative against a central difference.
#[test]
fn slopes_are_derivatives_on_every_branch() {
    let gust = Signal::ExtremeGust { start: 1.0, hub_wind: 12.0, magnitude: 6.0 };
    let all = Signal::Sum(vec![ramp(0.5, 3.0, 0.0, PI), gust, sine()]);
    let (bank, id) = bank_of(all);
    let o = bank.no_overrides();
    for step in 0..130 {
        let t = 0.1 * f64::from(step) + 0.013;
        let h = 1e-5;
        let difference =
            (bank.value_in(id, t + h, t, &o) - bank.value_in(id, t - h, t, &o)) / (2.0 * h);
        assert!((bank.slope(id, t, &o) - difference).abs() < 1e-4, "{t}");
    }
}
