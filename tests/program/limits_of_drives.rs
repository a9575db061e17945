//! A speed loop at its torque limit: held, sliding along it, and free again.

use super::helper::{head, near, run_well};

// Closed form. With the limit L acting the error falls at L/J. The command without integral comes
// back to the limit at e = L/g; from there to e = Ti L/J a running integral would push it over the
// limit and a held one below it, so that it stays there (Filippov), I = L - g e. Then
// J e'' + g e' + (g/Ti) e = 0 from e = Ti L/J and e' = -L/J.
#[test]
fn a_command_slides_along_its_limit_where_the_integral_neither_runs_nor_rests() {
    let (inertia, limit, gain, time, wanted) = (10.0, 8.0, 2.0, 1.0, 20.0);
    for sign in [1.0, -1.0] {
        let scenario = format!(
            "{}bodies:\n  wheel: {{ inertia: {inertia} kg*m2, speed: 0 rad/s }}\n\
             motors:\n  drive: {{ body: wheel, law: {{ speed_loop: {{ speed: {} rad/s, torque_limit: {limit} N*m, \
             gain: {gain} N*m*s/rad, integral_time: {time} s }} }} }}\n",
            head(40.0, 0.5, 1e-10),
            sign * wanted
        );
        let outcome = run_well(&scenario);
        let series = outcome.series();
        let leaves = (wanted - time * limit / inertia) / (limit / inertia);
        near(leaves, 24.0, 1e-12);
        let (decay, rate) = (0.1, 0.19_f64.sqrt());
        for (at, speed) in series.column("time").into_iter().zip(series.column("wheel.speed")) {
            let error = if at <= leaves {
                wanted - limit / inertia * at
            } else {
                let after = at - leaves;
                let sine = (-0.8 + decay * 0.8) / rate;
                (-decay * after).exp() * (0.8 * (rate * after).cos() + sine * (rate * after).sin())
            };
            near(speed, sign * (wanted - error), 2e-8);
        }
        // Few changes: it does not chatter.
        assert!(outcome.number(&["solver", "events"]) < 8.0);
    }
}
