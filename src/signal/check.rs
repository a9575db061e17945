//! Rules between signals: names that exist, no circles, dimensions that fit their use.

use super::{NamedSignal, Signal};
use crate::diagnostic::{Diagnostics, closest};
use crate::quantity::Dimension;

/// Checks the named signals among themselves: names, circles, sums and products.
pub fn check_named_signals(named: &[NamedSignal], faults: &mut Diagnostics) {
    let mut told: Vec<&str> = Vec::new();
    for entry in named {
        let path = format!("signals.{}", entry.name);
        if let Some(circle) = circle_from(entry, named) {
            if !circle.iter().any(|name| told.contains(name)) {
                faults.error(path, format!("the signal refers to itself: {}", circle.join(" -> ")));
                told.extend(circle);
            }
            continue;
        }
        match entry.dimension {
            Some(dimension) => check_use(&path, &entry.signal, dimension, named, faults),
            None => check_members(&path, &entry.signal, named, faults),
        }
    }
}

/// Checks a signal where it is used: its names and the dimension of what they name.
pub fn check_use(
    path: &str,
    signal: &Signal,
    dimension: Dimension,
    named: &[NamedSignal],
    faults: &mut Diagnostics,
) {
    match signal {
        Signal::Named(name) => {
            let Some(entry) = find(path, name, named, faults) else { return };
            match effective_dimension(signal, named, named.len()) {
                Some(found) if found != dimension => faults.error(
                    path,
                    format!(
                        "`{name}` is {} (signals.{name}), but {} is needed here",
                        found.with_article(),
                        dimension.with_article()
                    ),
                ),
                None if matches!(dimension, Dimension::Speed | Dimension::Angle)
                    && !is_zero(&entry.signal) =>
                {
                    faults.warning(
                        path,
                        format!(
                            "`{name}` (signals.{name}) has no unit and is read in {} here",
                            dimension.si_unit()
                        ),
                    );
                }
                _ => {}
            }
        }
        Signal::Sum(members) => {
            for (index, member) in members.iter().enumerate() {
                check_use(&format!("{path}.sum.{index}"), member, dimension, named, faults);
            }
        }
        Signal::Product { .. } => {
            check_members(path, signal, named, faults);
            let found = effective_dimension(signal, named, named.len());
            if let Some(found) = found.filter(|found| *found != dimension)
                && !faults.has_error_under(path)
            {
                faults.error(
                    path,
                    format!(
                        "this product is {}, but {} is needed here",
                        found.with_article(),
                        dimension.with_article()
                    ),
                );
            }
        }
        _ => {}
    }
}

/// Checks names, and that the members of sums and products go together.
fn check_members(path: &str, signal: &Signal, named: &[NamedSignal], faults: &mut Diagnostics) {
    match signal {
        Signal::Named(name) => {
            find(path, name, named, faults);
        }
        Signal::Sum(members) => {
            let first = members.iter().find_map(|one| effective_dimension(one, named, named.len()));
            for (index, member) in members.iter().enumerate() {
                let path = format!("{path}.sum.{index}");
                match first {
                    Some(dimension) => check_use(&path, member, dimension, named, faults),
                    None => check_members(&path, member, named, faults),
                }
            }
        }
        Signal::Product { members, carrier } => {
            let mut carriers = 0;
            for (index, member) in members.iter().enumerate() {
                let path = format!("{path}.product.{index}");
                check_members(&path, member, named, faults);
                let dimension = effective_dimension(member, named, named.len());
                if *carrier == Some(index)
                    || dimension.is_some_and(|dimension| dimension != Dimension::One)
                {
                    carriers += 1;
                    if carriers == 2 {
                        faults.error(
                            path,
                            "a product has at most one member with a dimension, and this is the second",
                        );
                    }
                }
            }
        }
        _ => {}
    }
}

fn find<'a>(
    path: &str,
    name: &str,
    named: &'a [NamedSignal],
    faults: &mut Diagnostics,
) -> Option<&'a NamedSignal> {
    let found = named.iter().find(|entry| entry.name == name);
    if found.is_none() {
        let message = format!("no signal is named `{name}`");
        match closest(name, named.iter().map(|entry| entry.name.as_str())) {
            Some(near) => faults.error_hint(path, message, format!("did you mean `{near}`?")),
            None => faults.error(path, message),
        }
    }
    found
}

/// The dimension that names give a signal; literal values have been looked at when it was read.
fn effective_dimension(signal: &Signal, named: &[NamedSignal], depth: usize) -> Option<Dimension> {
    match signal {
        Signal::Named(name) => {
            let entry = named.iter().find(|entry| entry.name == *name)?;
            entry
                .dimension
                .or_else(|| effective_dimension(&entry.signal, named, depth.checked_sub(1)?))
        }
        Signal::Sum(members) => {
            members.iter().find_map(|member| effective_dimension(member, named, depth))
        }
        Signal::Product { members, .. } => members
            .iter()
            .filter_map(|member| effective_dimension(member, named, depth))
            .find(|dimension| *dimension != Dimension::One),
        Signal::ExtremeGust { .. } | Signal::CoherentGust { .. } | Signal::Turbulence(_) => {
            Some(Dimension::LinearSpeed)
        }
        _ => None,
    }
}

/// The names of a circle that begins and ends at `start`, if there is one.
fn circle_from<'a>(start: &'a NamedSignal, named: &'a [NamedSignal]) -> Option<Vec<&'a str>> {
    let mut seen: Vec<&str> = Vec::new();
    let mut trails: Vec<Vec<&'a str>> = vec![vec![start.name.as_str()]];
    while let Some(trail) = trails.pop() {
        let last = *trail.last()?;
        let Some(entry) = named.iter().find(|entry| entry.name == last) else { continue };
        let mut next: Vec<&'a str> = Vec::new();
        entry.signal.visit("", &mut |_, inside| {
            if let Signal::Named(name) = inside {
                next.push(name);
            }
        });
        for name in next {
            let mut longer = trail.clone();
            longer.push(name);
            if name == start.name {
                return Some(longer);
            }
            if !seen.contains(&name) {
                seen.push(name);
                trails.push(longer);
            }
        }
    }
    None
}

fn is_zero(signal: &Signal) -> bool {
    matches!(signal, Signal::Constant(value) if *value == 0.0)
}

#[cfg(test)]
#[path = "check_tests.rs"]
mod tests;
