//! The text of a scenario with its name, and the printed form of faults and warnings.

use super::locate::{LineColumn, Places};
use super::yaml;
use crate::diagnostic::{Diagnostic, Diagnostics, Spot};
use crate::tree::Node;
use std::fmt::Write as _;
use std::io::Read as _;
use std::path::{Path, PathBuf};

/// The largest text that is read, in bytes: a scenario is written by hand.
const LARGEST: u64 = 16 * 1024 * 1024;

/// How many diagnostics are printed at most.
const MOST_PRINTED: usize = 500;

/// The text of a scenario, where it came from and what the command line changed in it.
#[derive(Clone, Debug, Default)]
pub struct Source {
    /// As messages call it: the path as given, or `standard input`.
    pub name: String,
    /// The folder that relative file names of the scenario start from.
    pub base: PathBuf,
    /// The text, empty when it could not be read.
    pub text: String,
    /// Values set from outside: path and value as typed.
    pub sets: Vec<(String, String)>,
    places: Places,
}

impl Source {
    /// Reads a file, or standard input for `-`.
    pub fn open(path: &Path) -> Result<Self, Box<(Self, Diagnostics)>> {
        let standard_input = path == Path::new("-");
        let mut source = Self {
            name: if standard_input {
                "standard input".to_owned()
            } else {
                path.display().to_string()
            },
            base: if standard_input {
                PathBuf::from(".")
            } else {
                path.parent().map(Path::to_path_buf).unwrap_or_default()
            },
            ..Self::default()
        };
        let bytes = if standard_input {
            read_at_most(std::io::stdin().lock())
        } else if path.is_dir() {
            Err(std::io::Error::other("it is a folder"))
        } else {
            std::fs::File::open(path).and_then(read_at_most)
        };
        let fault = match bytes {
            Err(error) => format!("cannot read `{}`: {}", source.name, told(&error)),
            Ok(bytes) if bytes.len() as u64 > LARGEST => format!(
                "`{}` is larger than {} MB; a scenario is text written by hand (long series go in a table file)",
                source.name,
                LARGEST / (1024 * 1024)
            ),
            Ok(bytes) => match String::from_utf8(bytes) {
                Ok(text) => {
                    source.text = text.strip_prefix('\u{feff}').unwrap_or(&text).to_owned();
                    return Ok(source);
                }
                Err(error) => {
                    let good = error.utf8_error().valid_up_to();
                    let before = error.as_bytes().get(..good).unwrap_or_default();
                    let line = before.iter().filter(|byte| **byte == b'\n').count() + 1;
                    format!("line {line} of `{}` is not UTF-8 text", source.name)
                }
            },
        };
        let mut faults = Diagnostics::new();
        faults.error("", fault);
        Err(Box::new((source, faults)))
    }

    /// A source from a text in memory.
    pub fn from_text(name: impl Into<String>, base: impl Into<PathBuf>, text: &str) -> Self {
        Self {
            name: name.into(),
            base: base.into(),
            text: text.strip_prefix('\u{feff}').unwrap_or(text).to_owned(),
            ..Self::default()
        }
    }

    /// The name of the file without its folder and ending: the title of a case that has none.
    pub fn stem(&self) -> String {
        Path::new(&self.name)
            .file_stem()
            .map_or_else(|| self.name.clone(), |stem| stem.to_string_lossy().into_owned())
    }

    /// Reads the text into the value tree; places are known from then on.
    pub fn parse(&mut self, faults: &mut Diagnostics) -> Option<Node> {
        let node = match yaml::parse(&self.text) {
            Ok(node) => node,
            Err(_) if is_blank(&self.text) => Node::Null,
            Err(mut fault) => {
                if fault.spot == Spot::Value
                    && let Some(line) = second_document(&self.text)
                {
                    fault.spot = Spot::Text { line, column: 1 };
                }
                faults.push(fault);
                return None;
            }
        };
        self.places = Places::scan(&self.text, faults);
        match node {
            Node::Null => faults.error_hint(
                "",
                "the file is empty",
                "`lodeshaft new` prints commented files to start from",
            ),
            Node::Map(_) => return Some(node),
            other => faults.error(
                "",
                format!("a scenario is a map of sections, but this file holds {}", other.kind()),
            ),
        }
        None
    }

    /// Line and column of a path.
    pub fn place(&self, diagnostic: &Diagnostic) -> Option<LineColumn> {
        self.places.find(&diagnostic.path, diagnostic.spot)
    }

    /// The faults and warnings as printed: in line order, each with its place, path and hint.
    pub fn render(&self, diagnostics: &Diagnostics) -> String {
        let mut list: Vec<(Option<LineColumn>, &Diagnostic)> =
            diagnostics.iter().map(|entry| (self.place(entry), entry)).collect();
        list.sort_by_key(|(place, _)| *place);
        let mut text = String::new();
        for (place, entry) in list.iter().take(MOST_PRINTED) {
            let _ = writeln!(text, "{}: {}", entry.severity, entry.message);
            let _ = writeln!(text, "  --> {}", self.whereabouts(*place, entry));
            if let Some(hint) = &entry.hint {
                let _ = writeln!(text, "  hint: {hint}");
            }
        }
        if list.len() > MOST_PRINTED {
            let _ = writeln!(text, "... and {} more", list.len() - MOST_PRINTED);
        }
        text
    }

    fn whereabouts(&self, place: Option<LineColumn>, entry: &Diagnostic) -> String {
        let path =
            if entry.path.is_empty() { String::new() } else { format!("  ({})", entry.path) };
        if matches!(entry.spot, Spot::Value | Spot::Key)
            && let Some((set, value)) =
                self.sets.iter().rev().find(|(set, _)| is_at_or_below(&entry.path, set))
        {
            return format!("--set {set}={value}{path}");
        }
        match place {
            Some((line, column)) => format!("{}:{line}:{column}{path}", self.name),
            None => format!("{}{path}", self.name),
        }
    }
}

fn is_at_or_below(path: &str, ancestor: &str) -> bool {
    path.strip_prefix(ancestor).is_some_and(|rest| rest.is_empty() || rest.starts_with('.'))
}

fn is_blank(text: &str) -> bool {
    text.lines().all(|line| {
        let line = line.trim();
        line.is_empty() || line.starts_with('#') || line == "---" || line == "..."
    })
}

/// The line on which a second document begins, from 1.
fn second_document(text: &str) -> Option<usize> {
    let mut content = false;
    text.lines().enumerate().find_map(|(index, line)| {
        let mark = line.trim_end() == "---" || line.starts_with("--- ");
        let found = mark && content;
        content |= !mark && !is_blank(line);
        found.then_some(index + 1)
    })
}

fn read_at_most(reader: impl std::io::Read) -> std::io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    reader.take(LARGEST + 1).read_to_end(&mut bytes)?;
    Ok(bytes)
}

fn told(error: &std::io::Error) -> String {
    match error.kind() {
        std::io::ErrorKind::NotFound => "no such file".to_owned(),
        std::io::ErrorKind::PermissionDenied => "permission denied".to_owned(),
        _ => error.to_string(),
    }
}
