//! The operating point of the train, over the values of one number if asked.

use super::results::{SteadyAnswer, SteadyPoint};
use super::spec::{Steady, without_studies};
use super::work::Stop;
use crate::analysis::operating_point::{self, OperatingPoint};
use crate::analysis::transient;
use crate::diagnostic::Diagnostics;
use crate::scenario::{Loaded, Scenario, read_node};
use std::sync::atomic::{AtomicBool, Ordering};

/// Finds the points one after the other; each takes a few milliseconds.
///
/// # Errors
/// [`Stop`] when it was interrupted, or when there is no point at all.
pub fn run(study: &Steady, loaded: &Loaded, interrupt: &AtomicBool) -> Result<SteadyAnswer, Stop> {
    let Some(axis) = &study.axis else {
        let point = find(&loaded.scenario).map_err(Stop::NoAnswer)?;
        let points = vec![SteadyPoint { value: None, point: Ok(point) }];
        return Ok(SteadyAnswer { varied: None, points });
    };
    let base = without_studies(&loaded.node);
    let mut tables = loaded.tables.clone();
    let mut points = Vec::with_capacity(axis.values.len());
    for value in &axis.values {
        if interrupt.load(Ordering::Relaxed) {
            return Err(Stop::Interrupted);
        }
        let mut tree = base.clone();
        axis.varied.set(&mut tree, *value);
        let point = read_node(&tree, &mut tables)
            .map_err(|found| first(&found))
            .and_then(|(scenario, _)| find(&scenario));
        points.push(SteadyPoint { value: Some(*value), point });
    }
    if let Some(Err(reason)) = points
        .first()
        .map(|first| &first.point)
        .filter(|_| points.iter().all(|it| it.point.is_err()))
    {
        return Err(Stop::NoAnswer(reason.clone()));
    }
    Ok(SteadyAnswer { varied: Some(axis.varied.clone()), points })
}

fn find(scenario: &Scenario) -> Result<OperatingPoint, String> {
    let equations = transient::prepare(scenario).map_err(|found| first(&found))?;
    operating_point::find(&equations)
}

fn first(found: &Diagnostics) -> String {
    let fault = found.iter().find(|entry| entry.severity.is_error());
    fault.map_or_else(String::new, |fault| format!("{} ({})", fault.message, fault.path))
}
