//! Trains from short texts, for the tests of the studies.

use crate::equations::{Equations, build};
use crate::tree::Node;
use std::path::Path;

/// The equations of a train; title, duration and version are added.
pub fn equations(yaml: &str) -> Equations {
    let mut text = format!("lodeshaft: 1\ntitle: a test\n{yaml}\n");
    if !yaml.contains("duration:") {
        text.push_str("duration: 2 s\n");
    }
    let loaded = crate::scenario::load_text("test.yaml", Path::new("."), &text, &[])
        .unwrap_or_else(|failure| panic!("{}", failure.render()));
    let model = crate::model::build(&loaded.scenario)
        .unwrap_or_else(|found| panic!("{:?}", found.iter().collect::<Vec<_>>()));
    build::build(&model)
}

/// A value tree from a text.
pub fn node(yaml: &str) -> Node {
    let text = format!(
        "lodeshaft: 1\ntitle: a test\nduration: 1 s\nbodies: {{ a: {{ inertia: 1 }} }}\nstudies: {{ s: {yaml} }}\n"
    );
    let loaded = crate::scenario::load_text("test.yaml", Path::new("."), &text, &[])
        .unwrap_or_else(|failure| panic!("{}", failure.render()));
    loaded.node.get("studies").and_then(|studies| studies.get("s")).cloned().unwrap_or(Node::Null)
}
