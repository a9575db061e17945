//! Faults and warnings as values: what is wrong, where in the file (by path), and a hint.
//!
//! Every stage collects them; only the command line prints them. A diagnostic knows
//! the dotted path of the value it speaks of; lines are looked up by the reader of the
//! scenario, which alone has seen the text (only its own syntax errors come with a line).

use std::fmt;

/// Whether the file can still be run.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// The file or the command is at fault; nothing runs.
    Error,
    /// The file runs, but a reader of the results must know this.
    Warning,
}

impl Severity {
    /// True for an error.
    pub fn is_error(self) -> bool {
        self == Self::Error
    }
}

impl fmt::Display for Severity {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(match self {
            Self::Error => "error",
            Self::Warning => "warning",
        })
    }
}

/// Which spot of the text a fault or warning points at.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Spot {
    /// The value at the path.
    #[default]
    Value,
    /// The key that ends the path: a misspelt one.
    Key,
    /// A line and a column: a fault of the text itself, such as a syntax error.
    Text {
        /// From 1.
        line: usize,
        /// From 1.
        column: usize,
    },
}

/// One fault or warning.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// Error or warning.
    pub severity: Severity,
    /// Dotted path of the value in the scenario, list entries from 0; empty for the whole file.
    pub path: String,
    /// One sentence, lower case at the start, without a full stop.
    pub message: String,
    /// What to type instead, where that can be said.
    pub hint: Option<String>,
    /// Where to point.
    pub spot: Spot,
}

/// A list of faults and warnings in the order in which they were found.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Diagnostics {
    list: Vec<Diagnostic>,
}

impl Diagnostics {
    /// An empty list.
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds an error.
    pub fn error(&mut self, path: impl Into<String>, message: impl Into<String>) {
        self.add(Severity::Error, path, message, None);
    }

    /// Adds an error with a hint.
    pub fn error_hint(
        &mut self,
        path: impl Into<String>,
        message: impl Into<String>,
        hint: impl Into<String>,
    ) {
        self.add(Severity::Error, path, message, Some(hint.into()));
    }

    /// Adds a warning.
    pub fn warning(&mut self, path: impl Into<String>, message: impl Into<String>) {
        self.add(Severity::Warning, path, message, None);
    }

    /// Adds a diagnostic with every part given.
    pub fn add(
        &mut self,
        severity: Severity,
        path: impl Into<String>,
        message: impl Into<String>,
        hint: Option<String>,
    ) {
        self.push(Diagnostic {
            severity,
            path: path.into(),
            message: message.into(),
            hint,
            spot: Spot::Value,
        });
    }

    /// Adds a finished diagnostic.
    pub fn push(&mut self, diagnostic: Diagnostic) {
        self.list.push(diagnostic);
    }

    /// Adds an error that points at the key which ends the path, not at its value.
    pub fn error_at_key(
        &mut self,
        path: impl Into<String>,
        message: impl Into<String>,
        hint: Option<String>,
    ) {
        self.add(Severity::Error, path, message, hint);
        if let Some(last) = self.list.last_mut() {
            last.spot = Spot::Key;
        }
    }

    /// True when at least one error is in the list.
    pub fn has_errors(&self) -> bool {
        self.list.iter().any(|entry| entry.severity == Severity::Error)
    }

    /// True when an error stands at `path` or below it, so that rules which follow from it keep quiet.
    pub fn has_error_under(&self, path: &str) -> bool {
        self.list.iter().any(|entry| {
            entry.severity == Severity::Error
                && (entry.path == path
                    || entry.path.strip_prefix(path).is_some_and(|rest| rest.starts_with('.')))
        })
    }

    /// The entries in the order found.
    pub fn iter(&self) -> std::slice::Iter<'_, Diagnostic> {
        self.list.iter()
    }

    /// The number of entries.
    pub fn len(&self) -> usize {
        self.list.len()
    }

    /// True when nothing was found.
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }

    /// Appends the entries of another list.
    pub fn extend(&mut self, other: Diagnostics) {
        self.list.extend(other.list);
    }

    /// The warnings alone.
    pub fn warnings(&self) -> impl Iterator<Item = &Diagnostic> {
        self.list.iter().filter(|entry| entry.severity == Severity::Warning)
    }
}

impl IntoIterator for Diagnostics {
    type Item = Diagnostic;
    type IntoIter = std::vec::IntoIter<Diagnostic>;

    fn into_iter(self) -> Self::IntoIter {
        self.list.into_iter()
    }
}

/// The candidate nearest to a misspelt word, if one is near enough to be meant.
pub fn closest<'a>(word: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let longest_guess = ((word.chars().count() + 1) / 3).max(1);
    candidates
        .into_iter()
        .map(|candidate| (strsim::damerau_levenshtein(word, candidate), candidate))
        .filter(|(distance, _)| *distance <= longest_guess)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, candidate)| candidate)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_nearest_name_is_offered_and_a_far_one_is_not() {
        assert_eq!(closest("rotr", ["rotor", "stator"]), Some("rotor"));
        assert_eq!(closest("impeller", ["rotor", "stator"]), None);
    }

    #[test]
    fn an_error_covers_the_paths_below_it() {
        let mut found = Diagnostics::new();
        found.error("bodies.a", "wrong");
        assert!(found.has_error_under("bodies.a"));
        assert!(found.has_error_under("bodies"));
        assert!(!found.has_error_under("bodies.ab"));
        assert!(!found.has_error_under("bodies.a.inertia"));
    }
}
