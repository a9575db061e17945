//! Drives: constant power, braking, ramp of the torque, torque added to the command.

use super::helper::{head, near, run_well, same};

fn wheel(duration: f64, inertia: f64, speed: f64, law: &str, rest: &str) -> String {
    format!(
        "{}bodies:\n  wheel: {{ inertia: {inertia} kg*m2, speed: {speed} rad/s }}\n\
         motors:\n  drive: {{ body: wheel, law: {{ {law} }} }}\n{rest}",
        head(duration, duration / 80.0, 1e-10),
    )
}

// Closed form: J w' = L up to the base speed wb, then J w w' = L wb, w = sqrt(wb^2 + 2 L wb/J (t - t1)).
#[test]
fn beyond_the_base_speed_a_drive_gives_constant_power() {
    let (inertia, limit, base) = (2.0, 30.0, 15.0_f64);
    for sign in [1.0, -1.0] {
        let law = format!(
            "speed_loop: {{ speed: {} rad/s, torque_limit: {limit} N*m, gain: 500 N*m*s/rad, base_speed: {base} rad/s }}",
            sign * 200.0
        );
        let outcome = run_well(&wheel(8.0, inertia, 0.0, &law, ""));
        let series = outcome.series();
        let corner = inertia * base / limit;
        for (time, speed) in series.column("time").into_iter().zip(series.column("wheel.speed")) {
            let expected = if time <= corner {
                limit / inertia * time
            } else {
                (base * base + 2.0 * limit * base / inertia * (time - corner)).sqrt()
            };
            same(speed, sign * expected, 1e-8);
        }
        same(series.at("drive.power", 8.0), limit * base, 1e-12);
        // The work is what the wheel holds.
        let stored = 0.5 * inertia * series.at("wheel.speed", 8.0).powi(2);
        same(outcome.number(&["energy", "supplied"]), stored, 1e-8);
    }
}

// Closed form: braking at the limit Lr down to the speed wr, then J w' = -(L + (Lr - L) w/wr), whose
// solution is w = a + (wr - a) exp(b (t - t1)) with b = (L - Lr)/(J wr), a = L wr/(L - Lr).
#[test]
fn a_drive_brakes_within_its_own_limit_and_stops() {
    let (inertia, limit, braking, from, start) = (0.5, 40.0, 8.0, 4.0_f64, 20.0);
    let law = format!(
        "speed_loop: {{ speed: 0 rad/s, torque_limit: {limit} N*m, gain: 1000 N*m*s/rad, \
         regeneration_limit: {braking} N*m, regeneration_from: {from} rad/s }}"
    );
    let corner = (start - from) * inertia / braking;
    let b = (limit - braking) / (inertia * from);
    let a = limit * from / (limit - braking);
    let rest = (a / (a - from)).ln() / b;
    for sign in [1.0, -1.0] {
        let series = run_well(&wheel(1.2, inertia, sign * start, &law, "")).series();
        for (time, speed) in series.column("time").into_iter().zip(series.column("wheel.speed")) {
            let expected = if time <= corner {
                start - braking / inertia * time
            } else if time < corner + 0.9 * rest {
                a + (from - a) * (b * (time - corner)).exp()
            } else if time > corner + 1.2 * rest {
                0.0
            } else {
                continue;
            };
            near(speed, sign * expected, 2e-7);
        }
    }
}

// A drive that cannot brake leaves it to the load: J w' = -c w, w = w0 exp(-c t/J) (closed form).
#[test]
fn a_drive_that_cannot_brake_lets_the_load_do_it() {
    let law = "speed_loop: { speed: 0 rad/s, torque_limit: 40 N*m, gain: 1000 N*m*s/rad, integral_time: 1 s, \
               regeneration_limit: 0 N*m, regeneration_from: 0.01 rad/s }";
    let load = "loads:\n  oil: { body: wheel, law: { viscous: { coefficient: 2 N*m*s/rad } } }\n";
    let series = run_well(&wheel(2.0, 1.0, 30.0, law, load)).series();
    for (time, speed) in series.column("time").into_iter().zip(series.column("wheel.speed")) {
        same(speed, 30.0 * (-2.0 * time).exp(), 1e-8);
    }
}

// Closed form: the torque T climbs at its rate r to within r*lag of the torque asked for, then the
// rest decays: T = r t up to t1 = M/r - lag, then M - r lag exp(-(t - t1)/lag). The speed is its sum.
#[test]
fn the_torque_climbs_at_its_rate_and_then_by_its_lag() {
    let (inertia, torque, rate, lag) = (3.0, 60.0, 100.0, 0.2);
    let corner = torque / rate - lag;
    for sign in [1.0, -1.0] {
        let law = format!(
            "torque_loop: {{ torque: {} N*m, torque_limit: 90 N*m, lag: {lag} s, torque_rate: {rate} N*m/s }}",
            sign * torque
        );
        let series = run_well(&wheel(2.0, inertia, 0.0, &law, "")).series();
        let times = series.column("time");
        for (row, time) in times.into_iter().enumerate() {
            let after = (time - corner).max(0.0);
            let gone = (-after / lag).exp();
            let (expected, sum) = if time <= corner {
                (rate * time, 0.5 * rate * time * time)
            } else {
                let sum = 0.5 * rate * corner * corner + torque * after;
                (torque - rate * lag * gone, sum - rate * lag * lag * (1.0 - gone))
            };
            near(series.column("drive.torque")[row], sign * expected, 1e-7);
            near(series.column("wheel.speed")[row], sign * sum / inertia, 1e-8);
        }
    }
}

// Without limits: a torque loop's torque is its limit where more is asked for, at once.
#[test]
fn a_torque_loop_stays_within_its_limit() {
    let law =
        "torque_loop: { torque: { points: [[0 s, 0 N*m], [2 s, 80 N*m]] }, torque_limit: 20 N*m }";
    let series = run_well(&wheel(2.0, 1.0, 0.0, law, "")).series();
    for (time, torque) in series.column("time").into_iter().zip(series.column("drive.torque")) {
        near(torque, (40.0 * time).min(20.0), 1e-10);
    }
    // 5 rad/s at the corner after 0.5 s, then 20 rad/s2.
    near(series.at("wheel.speed", 2.0), 5.0 + 20.0 * 1.5, 1e-7);
}

// Closed form: with the torque J a of the ramp added, a loop has no error to answer along it; after
// the ramp the excess decays as exp(-g t/J).
#[test]
fn torque_added_to_the_command_leaves_no_error_along_a_ramp() {
    let law = "speed_loop: { speed: { ramp: { start: 0 s, end: 2 s, from: 0 rad/s, to: 40 rad/s } }, \
               torque_limit: 90 N*m, gain: 10 N*m*s/rad, integral_time: 0.5 s, \
               feed_forward: { pulse: { start: 0 s, end: 2 s, base: 0 N*m, peak: 60 N*m } } }";
    let series = run_well(&wheel(3.0, 3.0, 0.0, law, "")).series();
    for (time, speed) in series.column("time").into_iter().zip(series.column("wheel.speed")) {
        near(speed, (20.0 * time).min(40.0), 1e-7);
    }
}

// The limit comes after the sum: 60 N*m added to a limit of 25 N*m gives 25 N*m.
#[test]
fn torque_added_to_the_command_counts_within_the_limit() {
    let law = "speed_loop: { speed: 0 rad/s, torque_limit: 25 N*m, gain: 0.001 N*m*s/rad, feed_forward: 60 N*m }";
    let series = run_well(&wheel(1.0, 5.0, 0.0, law, "")).series();
    near(series.at("wheel.speed", 1.0), 5.0, 1e-9);
}

// Closed form. At the constant-power limit J w w' = P. The command without integral comes back to
// the limit at g (r - w) = P/w; from there it slides along the limit (Filippov) for as long as a
// running integral would push it over: until r - w = Ti w' (1 - P/(g w^2)). Then the loop is linear,
// J e'' + g e' + (g/Ti) e = 0 from that error and e' = -P/(J w).
#[test]
fn a_command_slides_along_a_limit_that_falls_with_the_speed() {
    let (inertia, limit, base, wanted, gain, time) = (10.0, 8.0, 5.0, 20.0, 2.0, 1.0_f64);
    let power = limit * base;
    let law = format!(
        "speed_loop: {{ speed: {wanted} rad/s, torque_limit: {limit} N*m, base_speed: {base} rad/s, \
         gain: {gain} N*m*s/rad, integral_time: {time} s }}"
    );
    let outcome = run_well(&wheel(70.0, inertia, 0.0, &law, ""));
    let left =
        |w: f64| time * power / (inertia * w) * (1.0 - power / (gain * w * w)) - (wanted - w);
    let (mut low, mut high) = (19.0, 20.0);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if left(middle) > 0.0 { high = middle } else { low = middle }
    }
    let corner = inertia * base / limit;
    let leaves = corner + (low * low - base * base) * inertia / (2.0 * power);
    let (decay, rate) = (0.1, (gain / time / inertia - 0.01_f64).sqrt());
    let (error, slope) = (wanted - low, -power / (inertia * low));
    let series = outcome.series();
    for (at, speed) in series.column("time").into_iter().zip(series.column("wheel.speed")) {
        let expected = if at <= corner {
            limit / inertia * at
        } else if at <= leaves {
            (base * base + 2.0 * power / inertia * (at - corner)).sqrt()
        } else {
            let after = at - leaves;
            let sine = (slope + decay * error) / rate;
            let swing = error * (rate * after).cos() + sine * (rate * after).sin();
            wanted - (-decay * after).exp() * swing
        };
        near(speed, expected, 1e-7);
    }
    assert!(outcome.number(&["solver", "events"]) < 10.0);
}

// Steady start: a drive beyond its base speed holds a fan (torque k w^2) where P/w = k w^2, or its
// speed where its limit suffices, feed-forward and all.
#[test]
fn a_steady_start_finds_the_limit_of_the_speed() {
    let fan = "loads:\n  fan: { body: wheel, law: { power_law: { torque: 10 N*m, speed: 100 rad/s, exponent: 2 } } }\n";
    for (wanted, extra) in
        [(150.0, ""), (400.0, ", integral_time: 1 s"), (60.0, ", integral_time: 1 s")]
    {
        let law = format!(
            "speed_loop: {{ speed: {wanted} rad/s, torque_limit: 20 N*m, base_speed: 50 rad/s, gain: 100 N*m*s/rad, \
             feed_forward: 4 N*m, lag: 10 ms, torque_rate: 500 N*m/s{extra} }}"
        );
        let scenario =
            wheel(5.0, 1.0, 90.0, &law, fan).replace("bodies:", "start: steady\nbodies:");
        let series = run_well(&scenario).series();
        // P = 1000 W and k = 1e-3: w = 100 rad/s; without an integral the limit acts there too.
        let expected = if wanted > 100.0 { 100.0 } else { wanted };
        for speed in series.column("wheel.speed") {
            same(speed, expected, 1e-9);
        }
        same(series.at("drive.torque", 5.0), 1e-3 * expected * expected, 1e-9);
    }
}

// Loss of a drive: a protection takes its scale away, and what is left is the load's friction:
// J w' = -M, closed form.
#[test]
fn a_drive_that_trips_gives_no_torque() {
    let law = "torque_loop: { torque: 12 N*m, torque_limit: 20 N*m, lag: 1 ms }";
    let rest = "loads:\n  belt: { body: wheel, law: { friction: { sliding: 12 N*m } } }\n\
                protections:\n  loss: { when: { time: 1 s }, then: [{ set: motors.drive.scale, to: 0 }] }\n";
    let scenario = wheel(2.0, 3.0, 10.0, law, rest).replace("bodies:", "start: steady\nbodies:");
    let series = run_well(&scenario).series();
    same(series.at("wheel.speed", 1.0), 10.0, 1e-9);
    same(series.at("wheel.speed", 2.0), 6.0, 1e-9);
    near(series.at("drive.torque", 2.0), 0.0, 1e-12);
}

// All of it together, without integral: the law as documented, written down apart and integrated with
// SciPy (DOP853, rtol and atol 1e-12, steps up to 0.2 ms): time, speed, torque of the drive.
const EVERYTHING: [[f64; 3]; 10] = [
    [0.10, 0.191924935534, 4.524515327662],
    [0.25, 0.748148522233, 23.914952201023],
    [1.00, 15.248356053508, 40.000000000000],
    [3.00, 51.835477309338, 38.838290294924],
    [4.90, 75.474997740369, 26.566265217804],
    [5.05, 76.629797497651, 6.237069311665],
    [5.30, 73.978847936756, -16.841606424166],
    [7.00, 51.684586473001, -24.050423646500],
    [9.00, 23.005502698894, -25.000000000000],
    [12.00, -24.835702091686, -40.000000000000],
];

#[test]
fn a_drive_with_every_limit_agrees_with_an_independent_integration() {
    let law = "speed_loop: { speed: { points: [[0.2 s, 0 rad/s], [0.2 s, 120 rad/s], [5 s, 120 rad/s], [5 s, -40 rad/s]] }, \
               torque_limit: 40 N*m, base_speed: 50 rad/s, regeneration_limit: 25 N*m, regeneration_from: 3 rad/s, \
               gain: 3 N*m*s/rad, feed_forward: 5 N*m, lag: 20 ms, torque_rate: 400 N*m/s }";
    let load = "loads:\n  oil: { body: wheel, law: { viscous: { coefficient: 0.1 N*m*s/rad } } }\n";
    let scenario =
        wheel(12.0, 2.0, 0.0, law, load).replace("output_step: 0.15", "output_step: 0.05");
    let series = run_well(&scenario).series();
    for [time, speed, torque] in EVERYTHING {
        near(series.at("wheel.speed", time), speed, 1e-7);
        near(series.at("drive.torque", time), torque, 1e-6);
    }
}
