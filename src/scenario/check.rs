//! Rules that reach across the file: names, references, who may stand where.
//!
//! All faults are told at once, and none that merely follows from another: a thing that
//! could not be read is asked nothing more, and where the bodies themselves could not be
//! read nobody misses one.

use super::{Scenario, Start, signals};
use crate::component::load::LoadLaw;
use crate::diagnostic::{Diagnostics, closest};
use crate::tree::Node;
use std::collections::BTreeMap;

const GROUND: &str = "ground";

/// The sections whose entries are named by the user.
const NAMED_SECTIONS: [&str; 17] = [
    "bodies",
    "shafts",
    "magnetic_gears",
    "magnetic_couplings",
    "gear_pairs",
    "planetary_gears",
    "overrunning_clutches",
    "torque_limiters",
    "fluid_couplings",
    "motors",
    "loads",
    "brakes",
    "protections",
    "signals",
    "requirements",
    "measured",
    "studies",
];

/// Checks what no single value shows.
pub(super) fn check(scenario: &Scenario, node: &Node, faults: &mut Diagnostics) {
    let names = check_names(node, faults);
    let bodies_known = is_known("bodies", node, faults);
    let mut check = Check { scenario, names, bodies_known, faults };
    check.train();
    check.acting();
    check.start();
    if is_known("signals", node, faults) {
        signals::check(scenario, faults);
    }
    super::records::check(scenario, faults);
    refuse_not_finite(node, faults);
}

/// Names follow the rule and are unique; returns each with its section.
fn check_names<'n>(root: &'n Node, faults: &mut Diagnostics) -> BTreeMap<&'n str, &'static str> {
    let mut names = BTreeMap::new();
    for section in NAMED_SECTIONS {
        let Some(Node::Map(entries)) = root.get(section) else { continue };
        for (name, _) in entries {
            let path = format!("{section}.{name}");
            if name == GROUND {
                faults.error_at_key(
                    path,
                    "`ground` is the immovable frame; nothing else may have this name",
                    None,
                );
                continue;
            }
            if !is_name(name) {
                let hint = near_name(name).map(|near| format!("for example `{near}`"));
                faults.error_at_key(
                    path,
                    format!("`{name}` cannot be a name: a small letter first, then small letters, digits and _"),
                    hint,
                );
                continue;
            }
            if let Some(first) = names.get(name.as_str()) {
                faults.error_at_key(
                    path,
                    format!("the name `{name}` is taken by `{first}.{name}`"),
                    Some("names are unique over the whole file".to_owned()),
                );
            } else {
                names.insert(name.as_str(), section);
            }
        }
    }
    names
}

/// True for a name as things of the file may have: a small letter, then small letters, digits and `_`.
pub fn is_name(text: &str) -> bool {
    text.starts_with(|letter: char| letter.is_ascii_lowercase())
        && text.chars().all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '_')
}

/// The nearest allowed name: small letters, everything else an underscore.
fn near_name(text: &str) -> Option<String> {
    let near: String = text
        .to_lowercase()
        .chars()
        .map(|c| if c.is_ascii_lowercase() || c.is_ascii_digit() { c } else { '_' })
        .collect();
    let near = near.trim_matches('_');
    (is_name(near) && near != GROUND).then(|| near.to_owned())
}

/// False when a section itself is at fault or its key misspelt: then nobody misses its entries.
fn is_known(section: &str, root: &Node, faults: &Diagnostics) -> bool {
    let Node::Map(entries) = root else { return false };
    let misspelt = || {
        root.get(section).is_none()
            && entries.iter().any(|(key, _)| closest(key, [section]).is_some())
    };
    !(faults.iter().any(|fault| fault.severity.is_error() && fault.path == section) || misspelt())
}

/// NaN and infinity in the parts that are kept as a tree.
fn refuse_not_finite(root: &Node, faults: &mut Diagnostics) {
    fn walk(node: &Node, path: &str, faults: &mut Diagnostics) {
        match node {
            Node::Number(value) if !value.is_finite() => {
                faults.error(path, "a finite number is needed here");
            }
            Node::List(items) => {
                for (index, item) in items.iter().enumerate() {
                    walk(item, &format!("{path}.{index}"), faults);
                }
            }
            Node::Map(entries) => {
                for (key, inside) in entries {
                    walk(inside, &format!("{path}.{key}"), faults);
                }
            }
            _ => {}
        }
    }
    if let Some(studies) = root.get("studies") {
        walk(studies, "studies", faults);
    }
}

/// A member of a thing: its path, its name and the words that say what it does there.
struct Member<'a> {
    path: String,
    name: &'a str,
    /// For example "shaft `main` ends at".
    words: String,
}

struct Check<'a> {
    scenario: &'a Scenario,
    names: BTreeMap<&'a str, &'static str>,
    bodies_known: bool,
    faults: &'a mut Diagnostics,
}

impl<'a> Check<'a> {
    /// Members of shafts, gears and couplings.
    fn train(&mut self) {
        let scenario = self.scenario;
        if scenario.bodies.is_empty() && self.bodies_known {
            self.faults.error_hint(
                "bodies",
                "the train has no bodies",
                "for example bodies: { rotor: { inertia: 0.2 kg*m2 } }",
            );
            self.bodies_known = false;
        }
        for shaft in &scenario.shafts {
            let path = format!("shafts.{}", shaft.name);
            let words = |at| format!("shaft `{}` {at}", shaft.name);
            let members = [
                member(&path, "between.0", &shaft.between[0], words("begins at")),
                member(&path, "between.1", &shaft.between[1], words("ends at")),
            ];
            self.members(&path, &members, true);
        }
        for gear in &scenario.magnetic_gears {
            let path = format!("magnetic_gears.{}", gear.name);
            let words = |what| format!("magnetic gear `{}` has its {what} on", gear.name);
            let members = [
                member(&path, "inner", &gear.inner, words("inner rotor")),
                member(&path, "modulator", &gear.modulator, words("modulator")),
                member(&path, "outer", &gear.outer, words("outer rotor")),
            ];
            self.members(&path, &members, true);
        }
        for coupling in &scenario.magnetic_couplings {
            let path = format!("magnetic_couplings.{}", coupling.name);
            let words = || format!("magnetic coupling `{}` has a half on", coupling.name);
            let members = [
                member(&path, "between.0", &coupling.between[0], words()),
                member(&path, "between.1", &coupling.between[1], words()),
            ];
            self.members(&path, &members, true);
        }
        for pair in &scenario.gear_pairs {
            let path = format!("gear_pairs.{}", pair.name);
            let words = || format!("gear pair `{}` has a wheel on", pair.name);
            let members = [
                member(&path, "between.0", &pair.between[0], words()),
                member(&path, "between.1", &pair.between[1], words()),
            ];
            self.members(&path, &members, false);
        }
        for set in &scenario.planetary_gears {
            let path = format!("planetary_gears.{}", set.name);
            let words = |what| format!("planetary gear `{}` has its {what} on", set.name);
            let members = [
                member(&path, "sun", &set.sun, words("sun")),
                member(&path, "carrier", &set.carrier, words("carrier")),
                member(&path, "ring", &set.ring, words("ring")),
            ];
            self.members(&path, &members, true);
        }
        for coupling in &scenario.fluid_couplings {
            let path = format!("fluid_couplings.{}", coupling.name);
            let words =
                |wheel| format!("fluid coupling `{}` has its {wheel} wheel on", coupling.name);
            let members = [
                member(&path, "between.0", &coupling.between[0], words("pump")),
                member(&path, "between.1", &coupling.between[1], words("turbine")),
            ];
            self.members(&path, &members, true);
        }
        for clutch in &scenario.clutches {
            let path = format!("{}.{}", clutch.section(), clutch.name);
            let words = || format!("{} `{}` has a half on", clutch.label(), clutch.name);
            let members = [
                member(&path, "between.0", &clutch.between[0], words()),
                member(&path, "between.1", &clutch.between[1], words()),
            ];
            self.members(&path, &members, true);
        }
    }

    /// Bodies of motors, loads and brakes.
    fn acting(&mut self) {
        let scenario = self.scenario;
        for motor in &scenario.motors {
            let path = format!("motors.{}", motor.name);
            let words = format!("motor `{}` drives", motor.name);
            self.members(&path, &[member(&path, "body", &motor.body, words)], false);
        }
        for load in &scenario.loads {
            let path = format!("loads.{}", load.name);
            let mut members =
                vec![member(&path, "body", &load.body, format!("load `{}` acts on", load.name))];
            if let Some(against) = &load.against
                && matches!(load.law, LoadLaw::Friction { .. } | LoadLaw::Viscous { .. })
            {
                let words = format!("load `{}` acts against", load.name);
                members.push(member(&path, "against", against, words));
            }
            self.members(&path, &members, false);
            if let LoadLaw::AxialRotor { pitch_loop: Some(pitch_loop), .. } = &load.law
                && let Some(body) = &pitch_loop.body
            {
                let path = format!("{path}.law.axial_rotor.pitch_loop");
                let words = format!("the pitch loop of `{}` holds", load.name);
                self.members(&path, &[member(&path, "body", body, words)], false);
            }
        }
        for brake in &scenario.brakes {
            let path = format!("brakes.{}", brake.name);
            let words = |does| format!("brake `{}` {does}", brake.name);
            let mut members = vec![member(&path, "body", &brake.body, words("holds"))];
            if let Some(against) = &brake.against {
                members.push(member(&path, "against", against, words("holds against")));
            }
            self.members(&path, &members, false);
        }
    }

    /// A steady start finds its own load angles.
    fn start(&mut self) {
        if self.scenario.start != Start::Steady {
            return;
        }
        let gears = self
            .scenario
            .magnetic_gears
            .iter()
            .map(|gear| ("magnetic_gears", &gear.name, &gear.field));
        let couplings = self
            .scenario
            .magnetic_couplings
            .iter()
            .map(|coupling| ("magnetic_couplings", &coupling.name, &coupling.field));
        for (section, name, field) in gears.chain(couplings) {
            if field.initial_load_angle.is_some() {
                self.faults.error_hint(
                    format!("{section}.{name}.initial_load_angle"),
                    "a steady start finds the load angle itself",
                    "leave `initial_load_angle` out, or write `start: as_given`",
                );
            }
        }
    }

    /// The members of one thing: each known, none twice, not all of them ground.
    fn members(&mut self, thing: &str, members: &[Member<'a>], ground: bool) {
        let mut sound = true;
        for (index, member) in members.iter().enumerate() {
            if member.name.is_empty() {
                sound = false;
            } else if member.name == GROUND {
                if !ground {
                    sound = false;
                    self.faults.error(
                        member.path.as_str(),
                        format!("{} ground, but only a body can stand here", member.words),
                    );
                }
            } else if !self.is_body(member) {
                sound = false;
            } else if members.iter().take(index).any(|before| before.name == member.name) {
                sound = false;
                self.faults.error_hint(
                    member.path.as_str(),
                    format!("{} `{}`, which stands in it already", member.words, member.name),
                    "the same body cannot stand twice in one thing",
                );
            }
        }
        if sound && members.iter().all(|member| member.name == GROUND) {
            self.faults.error_hint(
                thing,
                "it joins ground to ground only",
                "at least one member must be a body",
            );
        }
    }

    fn is_body(&mut self, member: &Member<'_>) -> bool {
        match self.names.get(member.name) {
            Some(&"bodies") => return true,
            Some(section) => self.faults.error_hint(
                member.path.as_str(),
                format!("{} `{}`, which is not a body", member.words, member.name),
                format!("it stands in `{section}`"),
            ),
            None if !self.bodies_known => {}
            None => {
                let message =
                    format!("{} `{}`, but no body has that name", member.words, member.name);
                let bodies = || self.scenario.bodies.iter().map(|body| body.name.as_str());
                let hint = match closest(member.name, bodies().chain([GROUND])) {
                    Some(near) => format!("did you mean `{near}`?"),
                    None => {
                        let list: Vec<_> = bodies().take(12).collect();
                        format!("the bodies are {}", list.join(", "))
                    }
                };
                self.faults.error_hint(member.path.as_str(), message, hint);
            }
        }
        false
    }
}

fn member<'a>(thing: &str, key: &str, name: &'a str, words: String) -> Member<'a> {
    Member { path: format!("{thing}.{key}"), name, words }
}
