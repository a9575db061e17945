//! What the reading of a study may ask: the file around it, and whether changed values can be.

use super::varied::Varied;
use crate::component::channel::Channel;
use crate::diagnostic::{Diagnostic, Diagnostics, Severity, Spot, closest};
use crate::model;
use crate::quantity;
use crate::scenario::{Display, Scenario, Tables, read_node};
use crate::tree::Node;
use std::cell::RefCell;

/// Sections of the file in which a study changes nothing.
const NOT_VARIED: [&str; 6] = ["lodeshaft", "studies", "title", "about", "document", "display"];

/// The file around a study.
pub struct Context<'a> {
    /// The whole tree.
    node: &'a Node,
    /// The checked scenario; `None` when the file has other faults.
    pub scenario: Option<&'a Scenario>,
    /// Where faults go.
    pub faults: &'a RefCell<Diagnostics>,
    /// The tree without its studies: what is read again with changed values.
    base: Node,
    tables: RefCell<Tables>,
    display: Display,
    /// Whether the train as typed can be built at all.
    builds: bool,
}

impl<'a> Context<'a> {
    /// The surroundings of the studies of a file.
    pub fn new(
        node: &'a Node,
        scenario: Option<&'a Scenario>,
        tables: Tables,
        faults: &'a RefCell<Diagnostics>,
    ) -> Self {
        Self {
            node,
            scenario,
            faults,
            base: without_studies(node),
            tables: RefCell::new(tables),
            display: scenario.map_or_else(Display::default, |scenario| scenario.display.clone()),
            builds: scenario.is_some_and(|scenario| model::build(scenario).is_ok()),
        }
    }

    /// The tree without its studies.
    pub fn base(&self) -> &Node {
        &self.base
    }

    /// Channels of the train as typed; empty when the file has other faults.
    pub fn channels(&self) -> &'a [Channel] {
        self.scenario.map_or(&[], |scenario| &scenario.channels)
    }

    /// True when nothing else is wrong with the file, so that what is not found is missing.
    pub fn is_sound(&self) -> bool {
        self.scenario.is_some()
    }

    /// The number at a path; a path that is none is a fault at `at`.
    pub fn varied(&self, at: &str, spot: Spot, path: &str) -> Option<Varied> {
        if path.is_empty() {
            return None;
        }
        let section = path.split('.').next().unwrap_or(path);
        if NOT_VARIED.contains(&section) {
            self.fault(at, spot, format!("a study cannot change `{section}`"), None);
            return None;
        }
        match Varied::find(self.node, path, &self.display) {
            Ok(varied) => Some(varied),
            Err((message, hint)) => {
                // In a file with other faults only what was read well can be missed.
                let readable = self.node.get(section).is_some()
                    && !self.faults.borrow().has_error_under(section);
                if self.is_sound() || readable {
                    self.fault(at, spot, message, hint);
                }
                None
            }
        }
    }

    /// A value in the dimension of a number of the file; `None` when it is faulty.
    pub fn quantity(&self, at: &str, node: &Node, varied: &Varied) -> Option<f64> {
        let before = self.faults.borrow().len();
        let value = quantity::read(at, node, varied.dimension, &mut self.faults.borrow_mut());
        if !value.is_finite() {
            if self.faults.borrow().len() == before {
                self.fault(at, Spot::Value, "a finite number is needed here".to_owned(), None);
            }
            return None;
        }
        if varied.whole && value.fract() != 0.0 {
            let message = format!("`{}` takes whole values only", varied.path);
            self.fault(at, Spot::Value, message, None);
            return None;
        }
        Some(value)
    }

    /// Tells what is wrong with changed values, if anything is: the first fault, at `at`.
    pub fn try_values(
        &self,
        at: &str,
        spot: Spot,
        words: &str,
        changes: &[(&Varied, f64)],
    ) -> bool {
        if !self.builds {
            return true;
        }
        let mut tree = self.base.clone();
        for (varied, value) in changes {
            varied.set(&mut tree, *value);
        }
        match self.try_tree(&tree) {
            Ok(_) => true,
            Err(found) => {
                if let Some(first) = found.iter().find(|entry| entry.severity.is_error()) {
                    let place = match changes {
                        [(varied, _)] if varied.path == first.path => String::new(),
                        _ if first.path.is_empty() => String::new(),
                        _ => format!(" ({})", first.path),
                    };
                    let message = format!("{words} cannot be: {}{place}", first.message);
                    self.fault(at, spot, message, first.hint.clone());
                }
                false
            }
        }
    }

    /// Reads and builds a changed tree.
    ///
    /// # Errors
    /// All its faults.
    pub fn try_tree(&self, tree: &Node) -> Result<Scenario, Diagnostics> {
        let (scenario, _) = read_node(tree, &mut self.tables.borrow_mut())?;
        if self.builds {
            model::build(&scenario)?;
        }
        Ok(scenario)
    }

    /// Checks a channel's name against the channels of a scenario.
    pub fn known_channel(&self, at: &str, name: &str, channels: &[Channel]) -> bool {
        if !self.is_sound() || channels.iter().any(|channel| channel.name == name) {
            return true;
        }
        let names = channels.iter().map(|channel| channel.name.as_str());
        let hint = match closest(name, names) {
            Some(near) => format!("did you mean `{near}`?"),
            None => "a channel is a thing of the train, a dot and one of its quantities, for example rotor.speed".to_owned(),
        };
        self.fault(at, Spot::Value, format!("no channel is named `{name}`"), Some(hint));
        false
    }

    /// Records a fault.
    pub fn fault(&self, at: &str, spot: Spot, message: String, hint: Option<String>) {
        self.faults.borrow_mut().push(Diagnostic {
            severity: Severity::Error,
            path: at.to_owned(),
            message,
            hint,
            spot,
        });
    }

    /// Records a warning.
    pub fn warn(&self, at: &str, message: String) {
        self.faults.borrow_mut().warning(at, message);
    }
}

/// A tree without its studies.
pub fn without_studies(node: &Node) -> Node {
    match node {
        Node::Map(entries) => {
            Node::Map(entries.iter().filter(|(key, _)| key != "studies").cloned().collect())
        }
        other => other.clone(),
    }
}
