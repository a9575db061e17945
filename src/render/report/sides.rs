//! Which member of a magnetic gear each body turns with.

use crate::render::chart::palette::Side;
use crate::scenario::Scenario;

/// The side of each body, in file order.
///
/// Shafts, gear pairs and planetary sets join bodies into groups; the first magnetic gear or
/// coupling that touches a group names its side.
pub fn sides(scenario: &Scenario) -> Vec<Side> {
    let groups = groups(scenario);
    let place = |name: &str| scenario.bodies.iter().position(|body| body.name == name);
    let mut named: Vec<Option<Side>> = vec![None; scenario.bodies.len()];
    let mut name = |body: &str, side: Side| {
        let Some(group) = place(body).and_then(|place| groups.get(place)) else { return };
        if let Some(known) = named.get_mut(*group) {
            known.get_or_insert(side);
        }
    };
    for gear in &scenario.magnetic_gears {
        name(&gear.inner, Side::Inner);
        name(&gear.outer, Side::Outer);
        name(&gear.modulator, Side::Modulator);
    }
    for coupling in &scenario.magnetic_couplings {
        name(&coupling.between[0], Side::Inner);
        name(&coupling.between[1], Side::Outer);
    }
    groups.iter().map(|group| named.get(*group).copied().flatten().unwrap_or(Side::Other)).collect()
}

/// The group of each body: the smallest place of a body that it is joined to without a magnet.
fn groups(scenario: &Scenario) -> Vec<usize> {
    let mut groups: Vec<usize> = (0..scenario.bodies.len()).collect();
    let mut joints: Vec<Vec<&str>> = Vec::new();
    for shaft in &scenario.shafts {
        joints.push(shaft.between.iter().map(String::as_str).collect());
    }
    for pair in &scenario.gear_pairs {
        joints.push(pair.between.iter().map(String::as_str).collect());
    }
    for set in &scenario.planetary_gears {
        joints.push(vec![set.sun.as_str(), set.carrier.as_str(), set.ring.as_str()]);
    }
    for joint in joints {
        let joined: Vec<usize> = joint
            .iter()
            .filter_map(|name| scenario.bodies.iter().position(|body| body.name == *name))
            .filter_map(|place| groups.get(place).copied())
            .collect();
        let Some(first) = joined.iter().min().copied() else { continue };
        for group in &mut groups {
            if joined.contains(group) {
                *group = first;
            }
        }
    }
    groups
}
