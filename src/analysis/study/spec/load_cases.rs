//! `load_cases: { cases: { NAME: { changes, requirements } } }` as typed.

use super::channels;
use super::context::Context;
use crate::diagnostic::{Diagnostic, Diagnostics, Spot};
use crate::scenario::{Scenario, is_name, patch};
use crate::tree::{Fields, Node, Shape};

/// One train and many cases, each judged by its requirements.
#[derive(Clone, Debug, PartialEq)]
pub struct LoadCases {
    /// The cases in the order of the file.
    pub cases: Vec<Case>,
    /// Channels whose extremes go into the table.
    pub channels: Vec<String>,
}

/// One case: the file with its changes.
#[derive(Clone, Debug, PartialEq)]
pub struct Case {
    /// Its name.
    pub name: String,
    /// What it is about.
    pub about: Option<String>,
    /// The whole tree with the changes made and the requirements replaced or added.
    pub tree: Node,
    /// The same, read.
    pub scenario: Scenario,
    /// What is changed, as typed: path and value.
    pub changes: Vec<(String, String)>,
}

impl LoadCases {
    /// Reads the inside of `load_cases:`; `None` when it is at fault.
    pub fn read(fields: &mut Fields<'_>, context: Option<&Context<'_>>) -> Option<Self> {
        let cases = fields.section("cases", "The cases by name.", |case| read_case(case, context));
        let channels = channels::read(fields, context);
        let _ = fields.source();
        context?;
        let typed = match fields.entries().iter().find(|(key, _)| key == "cases") {
            Some((_, Node::Map(entries))) => entries.len(),
            Some((_, Node::Null)) => 0,
            Some(_) => return None,
            None => {
                fields.miss("cases", "for example cases: { hot: { changes: { magnetic_gears.gear.pull_out.torque: 1290 N*m } } }");
                return None;
            }
        };
        if typed == 0 {
            fields.fault("cases", "there is no case");
            return None;
        }
        let cases: Vec<Case> = cases.into_iter().flatten().collect();
        (cases.len() == typed).then_some(Self { cases, channels })
    }
}

fn read_case(fields: &mut Fields<'_>, context: Option<&Context<'_>>) -> Option<Case> {
    let about = fields.text("about", "What the case is about.");
    let _ = fields.source();
    let changes = fields.raw(
        "changes",
        Shape::Free,
        false,
        "Values of the file by their dotted paths, as they are in this case.",
    );
    let requirements = fields.raw(
        "requirements",
        Shape::Free,
        false,
        "Requirements of this case; they replace those of the file by name, or add to them.",
    );
    let context = context?;
    let name = fields.own_name().to_owned();
    if !is_name(&name) {
        context.fault(
            fields.path(),
            Spot::Key,
            format!(
                "`{name}` cannot be a name: a small letter first, then small letters, digits and _"
            ),
            None,
        );
        return None;
    }
    let at = fields.path().to_owned();
    let mut tree = context.base().clone();
    let (changed, sound) = change(fields, changes, &mut tree, context)?;
    require(fields, requirements, &mut tree)?;
    if !context.is_sound() {
        return None;
    }
    let scenario = match context.try_tree(&tree) {
        Ok(scenario) => scenario,
        Err(found) => {
            tell(&at, &changed, found, context);
            return None;
        }
    };
    if !sound {
        return None;
    }
    if scenario.requirements.is_empty() {
        fields.fault_here_hint(
            "this case has no requirement to be judged by",
            "for example requirements: { no_slip: { of: gear.slips, at_most: 0 } }",
        );
        return None;
    }
    Some(Case { name, about, tree, scenario, changes: changed })
}

/// Makes the changes; returns those made, as typed, and whether they are all.
fn change(
    fields: &Fields<'_>,
    node: Option<&Node>,
    tree: &mut Node,
    context: &Context<'_>,
) -> Option<(Vec<(String, String)>, bool)> {
    let entries = match node {
        None | Some(Node::Null) => return Some((Vec::new(), true)),
        Some(Node::Map(entries)) => entries,
        Some(other) => {
            fields
                .fault("changes", format!("`changes` must be a map of keys, not {}", other.kind()));
            return None;
        }
    };
    let mut changed = Vec::with_capacity(entries.len());
    for (path, value) in entries {
        let at = fields.path_of(&format!("changes.{path}"));
        let section = path.split('.').next().unwrap_or_default();
        if matches!(section, "studies" | "lodeshaft") {
            context.fault(&at, Spot::Key, format!("a case cannot change `{section}`"), None);
            continue;
        }
        match patch::set(tree, path, value.clone()) {
            Ok(()) => changed.push((path.clone(), typed(value))),
            Err((message, hint)) => {
                if context.is_sound() {
                    context.fault(&at, Spot::Key, message, hint);
                }
            }
        }
    }
    let sound = changed.len() == entries.len();
    Some((changed, sound))
}

/// Replaces and adds requirements.
fn require(fields: &Fields<'_>, node: Option<&Node>, tree: &mut Node) -> Option<()> {
    let own = match node {
        None | Some(Node::Null) => return Some(()),
        Some(Node::Map(entries)) => entries,
        Some(other) => {
            let message = format!("`requirements` must be a map of keys, not {}", other.kind());
            fields.fault("requirements", message);
            return None;
        }
    };
    let Node::Map(sections) = tree else { return None };
    if !sections.iter().any(|(key, _)| key == "requirements") {
        sections.push(("requirements".to_owned(), Node::Null));
    }
    let section = sections.iter_mut().find(|(key, _)| key == "requirements");
    let (_, all) = section?;
    if !matches!(all, Node::Map(_)) {
        *all = Node::Map(Vec::new());
    }
    let Node::Map(all) = all else { return None };
    for (name, requirement) in own {
        match all.iter_mut().find(|(known, _)| known == name) {
            Some((_, there)) => *there = requirement.clone(),
            None => all.push((name.clone(), requirement.clone())),
        }
    }
    Some(())
}

/// Tells the faults of a changed file at the change that makes them.
fn tell(at: &str, changed: &[(String, String)], found: Diagnostics, context: &Context<'_>) {
    for fault in found.into_iter().filter(|fault| fault.severity.is_error()) {
        let change = changed.iter().map(|(path, _)| path).find(|path| {
            fault
                .path
                .strip_prefix(path.as_str())
                .is_some_and(|rest| rest.is_empty() || rest.starts_with('.'))
        });
        let (path, message) = if change.is_some() {
            (format!("{at}.changes.{}", fault.path), fault.message)
        } else if fault.path.starts_with("requirements.") {
            // A requirement of the file may fail to fit the changed train as well.
            (format!("{at}.{}", fault.path), fault.message)
        } else if fault.path.is_empty() {
            (at.to_owned(), fault.message)
        } else {
            (at.to_owned(), format!("with these changes {}: {}", fault.path, fault.message))
        };
        let spot = if matches!(fault.spot, Spot::Text { .. }) { Spot::Value } else { fault.spot };
        let fault = Diagnostic { path, message, spot, ..fault };
        context.faults.borrow_mut().push(fault);
    }
}

/// A value as it was typed, as far as one line can show it.
fn typed(node: &Node) -> String {
    match node {
        Node::Null => String::new(),
        Node::Bool(value) => value.to_string(),
        Node::Number(value) => value.to_string(),
        Node::Text(text) => text.clone(),
        Node::List(items) => {
            format!("[{}]", items.iter().map(typed).collect::<Vec<_>>().join(", "))
        }
        Node::Map(entries) => {
            let inside: Vec<_> =
                entries.iter().map(|(key, value)| format!("{key}: {}", typed(value))).collect();
            format!("{{ {} }}", inside.join(", "))
        }
    }
}
