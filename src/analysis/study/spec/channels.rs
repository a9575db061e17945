//! `channels: [...]`: the channels whose extremes go into a study's table.

use super::context::Context;
use crate::tree::{Fields, Node, Shape};

/// Reads the optional list of channels; those of the requirements when it is absent.
pub fn read(fields: &mut Fields<'_>, context: Option<&Context<'_>>) -> Vec<String> {
    let doc = "Channels whose extremes go into the table; default those of the requirements.";
    let node = fields.raw("channels", Shape::Free, false, doc);
    let Some(context) = context else { return Vec::new() };
    match node {
        None | Some(Node::Null) => of_requirements(context),
        Some(Node::List(items)) => {
            let mut names: Vec<String> = Vec::new();
            for (index, item) in items.iter().enumerate() {
                let at = fields.path_of(&format!("channels.{index}"));
                let Node::Text(name) = item else {
                    let message =
                        format!("the name of a channel is needed here, not {}", item.kind());
                    fields.fault(&format!("channels.{index}"), message);
                    continue;
                };
                if names.contains(name) {
                    fields.fault(&format!("channels.{index}"), format!("`{name}` stands twice"));
                } else if context.known_channel(&at, name, context.channels()) {
                    names.push(name.clone());
                }
            }
            names
        }
        Some(other) => {
            let message = format!("`channels` must be a list of channels, not {}", other.kind());
            fields.fault("channels", message);
            Vec::new()
        }
    }
}

fn of_requirements(context: &Context<'_>) -> Vec<String> {
    let mut names: Vec<String> = Vec::new();
    for requirement in context.scenario.map_or(&[][..], |scenario| &scenario.requirements) {
        if !names.contains(&requirement.of) {
            names.push(requirement.of.clone());
        }
    }
    names
}
