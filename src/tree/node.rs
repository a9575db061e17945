//! A value of the scenario file.

/// A value of the scenario file.
#[derive(Clone, Debug, PartialEq)]
pub enum Node {
    /// Nothing: an empty section.
    Null,
    /// `true` or `false`.
    Bool(bool),
    /// A number (never NaN or infinite once the reader has accepted the file).
    Number(f64),
    /// Text, quantities with units included.
    Text(String),
    /// A list.
    List(Vec<Node>),
    /// A map in the order of the file.
    Map(Vec<(String, Node)>),
}

impl Node {
    /// The value under `key` when this is a map.
    pub fn get(&self, key: &str) -> Option<&Node> {
        match self {
            Self::Map(entries) => {
                entries.iter().find(|(name, _)| name == key).map(|(_, node)| node)
            }
            _ => None,
        }
    }

    /// What a message calls this value.
    pub fn kind(&self) -> &'static str {
        match self {
            Self::Null => "nothing",
            Self::Bool(_) => "true or false",
            Self::Number(_) => "a number",
            Self::Text(_) => "text",
            Self::List(_) => "a list",
            Self::Map(_) => "a map",
        }
    }
}
