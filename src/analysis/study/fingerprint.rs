//! A number that tells whether two studies are the same work.
//!
//! FNV-1a with 128 bits (Fowler, Noll and Vo, with their published offset and prime) over
//! everything that the results of a study depend on: the file without its texts, the tables
//! it names, the study itself and the version of the program.

use crate::scenario::Tables;
use crate::tree::Node;

const OFFSET: u128 = 0x6c62_272e_07bb_0142_62b8_2175_6295_c58d;
const PRIME: u128 = 0x0000_0000_0100_0000_0000_0000_0000_013b;

/// Keys of the file on which no result depends.
const TEXTS: [&str; 6] = ["title", "about", "document", "display", "measured", "studies"];

/// Takes bytes and yields their fingerprint.
#[derive(Clone, Copy, Debug)]
pub struct Fingerprint(u128);

impl Fingerprint {
    /// Of nothing.
    pub fn new() -> Self {
        Self(OFFSET)
    }

    /// Takes bytes.
    pub fn bytes(&mut self, bytes: &[u8]) {
        for byte in bytes {
            self.0 = (self.0 ^ u128::from(*byte)).wrapping_mul(PRIME);
        }
    }

    /// Takes a number bit by bit.
    pub fn number(&mut self, value: f64) {
        self.bytes(&value.to_bits().to_le_bytes());
    }

    /// Takes a tree; different trees give different bytes.
    pub fn tree(&mut self, node: &Node) {
        match node {
            Node::Null => self.bytes(b"n"),
            Node::Bool(value) => self.bytes(if *value { b"t" } else { b"f" }),
            Node::Number(value) => {
                self.bytes(b"#");
                self.number(*value);
            }
            Node::Text(text) => self.text(text),
            Node::List(items) => {
                self.bytes(b"[");
                for item in items {
                    self.tree(item);
                }
                self.bytes(b"]");
            }
            Node::Map(entries) => {
                self.bytes(b"{");
                for (key, inside) in entries {
                    self.text(key);
                    self.tree(inside);
                }
                self.bytes(b"}");
            }
        }
    }

    fn text(&mut self, text: &str) {
        self.bytes(b"\"");
        self.bytes(&(text.len() as u64).to_le_bytes());
        self.bytes(text.as_bytes());
    }

    /// As 32 hexadecimal digits.
    pub fn hex(self) -> String {
        format!("{:032x}", self.0)
    }

    /// As a number of 64 bits.
    pub fn short(self) -> u64 {
        (self.0 ^ (self.0 >> 64)) as u64
    }
}

impl Default for Fingerprint {
    fn default() -> Self {
        Self::new()
    }
}

/// The fingerprint of a study of a file.
pub fn of_study(file: &Node, study: &str, tables: &Tables) -> String {
    let mut mark = Fingerprint::new();
    mark.text(env!("CARGO_PKG_VERSION"));
    if let Node::Map(entries) = file {
        for (key, inside) in entries.iter().filter(|(key, _)| !TEXTS.contains(&key.as_str())) {
            mark.text(key);
            mark.tree(inside);
        }
    }
    if let Some(node) = file.get("studies").and_then(|studies| studies.get(study)) {
        mark.tree(node);
    }
    tables.each_row(&mut |row| {
        mark.number(row[0]);
        mark.number(row[1]);
    });
    mark.hex()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_hash_is_the_published_one() {
        // Test vectors of Fowler, Noll and Vo for the empty string and "a" (from memory).
        let mut mark = Fingerprint::new();
        assert_eq!(mark.hex(), "6c62272e07bb014262b821756295c58d");
        mark.bytes(b"a");
        assert_eq!(mark.hex(), "d228cb696f1a8caf78912b704e4a8964");
    }

    #[test]
    fn a_changed_value_changes_the_mark_and_a_text_does_not() {
        let file = |title: &str, value: f64| {
            Node::Map(vec![
                ("title".to_owned(), Node::Text(title.to_owned())),
                ("duration".to_owned(), Node::Number(value)),
            ])
        };
        let tables = Tables::default();
        let mark = |file: &Node| of_study(file, "any", &tables);
        assert_eq!(mark(&file("a", 1.0)), mark(&file("b", 1.0)));
        assert_ne!(mark(&file("a", 1.0)), mark(&file("a", 1.0 + f64::EPSILON)));
    }
}
