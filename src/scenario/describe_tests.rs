//! Tests of the description of the file and of looking paths up in it.

use super::*;
use crate::scenario::load;
use std::path::Path;

/// Every path of a tree, the root left out.
fn paths(node: &Node, path: &str, list: &mut Vec<String>) {
    let join =
        |step: &str| if path.is_empty() { step.to_owned() } else { format!("{path}.{step}") };
    match node {
        Node::Map(entries) => {
            for (key, inside) in entries {
                list.push(join(key));
                paths(inside, &join(key), list);
            }
        }
        Node::List(items) => {
            for (index, inside) in items.iter().enumerate() {
                list.push(join(&index.to_string()));
                paths(inside, &join(&index.to_string()), list);
            }
        }
        _ => {}
    }
}

#[test]
fn every_value_of_a_sound_file_is_found_by_its_path() {
    for file in ["tests/accepted/contract.yaml", "tests/accepted/every_part.yaml"] {
        let loaded =
            load(Path::new(file), &[]).unwrap_or_else(|fault| panic!("{}", fault.render()));
        let mut list = Vec::new();
        paths(&loaded.node, "", &mut list);
        assert!(list.len() > 100);
        for path in list {
            match find(&loaded.node, &path) {
                Ok(found) => assert!(found.node.is_some(), "{path}"),
                // `source` stands beside the one key of a named signal.
                Err(_) if path == "signals.gusty.source" => {}
                Err((message, _)) => panic!("{path}: {message}"),
            }
        }
    }
}

fn check_documentation(fields: &[FieldDescription], path: &str, count: &mut usize) {
    for (index, field) in fields.iter().enumerate() {
        *count += 1;
        let here = format!("{path}.{}", field.key);
        assert!(!fields[..index].iter().any(|before| before.key == field.key), "{here} twice");
        let first = field.doc.chars().next().unwrap_or('?');
        assert!(!first.is_lowercase() && field.doc.ends_with('.'), "{here}: {}", field.doc);
        match &field.shape {
            Shape::Group(inside)
            | Shape::List(inside)
            | Shape::Section(inside)
            | Shape::Paths(inside)
            | Shape::Choice(inside)
            | Shape::QuantityOrGroup(_, _, inside) => check_documentation(inside, &here, count),
            _ => {}
        }
    }
}

#[test]
fn every_key_is_described_once_in_one_plain_line() {
    let mut count = 0;
    check_documentation(&root(), "", &mut count);
    assert!(count > 120, "only {count} keys");
}

#[test]
fn the_name_of_a_channel_tells_its_dimension() {
    use crate::component::channel::dimension_of;
    let loaded = load(Path::new("tests/accepted/every_part.yaml"), &[]).unwrap();
    assert!(loaded.scenario.channels.len() > 60);
    for channel in &loaded.scenario.channels {
        assert_eq!(dimension_of(&channel.name), Some(channel.dimension), "{}", channel.name);
    }
    assert_eq!(dimension_of("rotor.colour"), None);
}
