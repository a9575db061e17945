//! The run chart and its zoom.

use crate::gallery::show;
use crate::pendulum::{END, Run, train};
use lodeshaft::render::chart::pick;
use lodeshaft::render::chart::pick_rows::zoom_windows;
use lodeshaft::render::chart::run::run_chart;
use lodeshaft::render::chart::units::Display;

#[test]
fn a_slip_burst_is_drawn_with_a_mark_for_each_slip() {
    let run = Run::of(900.0, 400.0);
    let result = run.result();
    assert!(result.gears[0].slips > 5, "{}", result.gears[0].slips);
    let traces = run.traces([0.5, END]);
    let chart = run_chart(&pick::run(&result, &traces, &train(), &Display::default(), "run"));
    show(&chart, "run");
    for window in zoom_windows(&result) {
        let traces = run.traces(window);
        let chart = run_chart(&pick::run(&result, &traces, &train(), &Display::default(), "zoom"));
        show(&chart, "zoom");
    }
}
