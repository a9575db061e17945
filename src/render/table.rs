//! Plain tables for terminals: columns aligned, two spaces between them.

/// How a column is aligned.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Align {
    /// Words.
    Left,
    /// Numbers.
    Right,
}

/// A table in the making.
#[derive(Clone, Debug)]
pub struct Table {
    columns: Vec<Align>,
    rows: Vec<Vec<String>>,
}

impl Table {
    /// An empty table: `<` is a column of words, `>` one of numbers.
    pub fn new(columns: &str) -> Self {
        let columns = columns
            .chars()
            .map(|letter| if letter == '>' { Align::Right } else { Align::Left })
            .collect();
        Self { columns, rows: Vec::new() }
    }

    /// Adds a row.
    pub fn row<const N: usize>(&mut self, cells: [&str; N]) {
        self.rows.push(cells.iter().map(|cell| (*cell).to_owned()).collect());
    }

    /// Adds a row of as many cells as the table has columns.
    pub fn cells(&mut self, cells: Vec<String>) {
        self.rows.push(cells);
    }

    /// True without rows.
    pub fn is_empty(&self) -> bool {
        self.rows.is_empty()
    }

    /// The number of rows, the head included.
    pub fn len(&self) -> usize {
        self.rows.len()
    }

    /// The lines, each with `indent` spaces before it; empty columns are left out.
    pub fn text(&self, indent: usize) -> String {
        let width_of = |column: usize| {
            self.rows.iter().filter_map(|row| row.get(column)).map(|cell| width(cell)).max()
        };
        let widths: Vec<usize> =
            (0..self.columns.len()).map(|column| width_of(column).unwrap_or(0)).collect();
        let mut text = String::new();
        for row in &self.rows {
            let mut line = " ".repeat(indent);
            let mut first = true;
            for ((cell, align), wide) in row.iter().zip(&self.columns).zip(&widths) {
                if *wide == 0 {
                    continue;
                }
                line.push_str(if first { "" } else { "  " });
                first = false;
                let gap = " ".repeat(wide - width(cell));
                match align {
                    Align::Left => {
                        line.push_str(cell);
                        line.push_str(&gap);
                    }
                    Align::Right => {
                        line.push_str(&gap);
                        line.push_str(cell);
                    }
                }
            }
            text.push_str(line.trim_end());
            text.push('\n');
        }
        text
    }
}

fn width(cell: &str) -> usize {
    cell.chars().count()
}

/// Breaks a text into lines of at most `most` letters; the first begins with `first`, the others
/// with as many spaces.
pub fn wrap(first: &str, text: &str, most: usize) -> String {
    let indent = " ".repeat(width(first));
    let mut lines = String::from(first);
    let mut used = width(first);
    let mut fresh = true;
    for word in text.split_whitespace() {
        if !fresh && used + 1 + width(word) > most {
            lines.push('\n');
            lines.push_str(&indent);
            used = width(first);
            fresh = true;
        }
        if !fresh {
            lines.push(' ');
            used += 1;
        }
        lines.push_str(word);
        used += width(word);
        fresh = false;
    }
    lines.push('\n');
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_stand_right_and_words_left() {
        let mut table = Table::new("<>");
        table.row(["a", "1.5"]);
        table.row(["motor", "20"]);
        assert_eq!(table.text(2), "  a      1.5\n  motor   20\n");
    }

    #[test]
    fn a_long_text_is_broken_between_words() {
        assert_eq!(wrap("- ", "one two three", 9), "- one two\n  three\n");
        assert_eq!(wrap("", "unbreakable", 4), "unbreakable\n");
    }
}
