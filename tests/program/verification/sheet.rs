//! The sheet on which checks are noted: what was expected, what came, how far apart they are.

use std::panic::{AssertUnwindSafe, catch_unwind};

/// One line of the table.
pub struct Row {
    /// Chapter of the table.
    pub chapter: &'static str,
    /// What was looked at.
    pub what: String,
    /// Where the expected value comes from.
    pub source: &'static str,
    /// The expected value with its unit.
    pub expected: String,
    /// What the program gave.
    pub got: String,
    /// How far they are apart, in words.
    pub error: String,
    /// How far they may be apart, in words.
    pub tolerance: String,
    /// Share of the tolerance that is used up.
    pub share: f64,
}

impl Row {
    /// Whether the check holds.
    pub fn holds(&self) -> bool {
        self.share <= 1.0
    }
}

/// Lines of one case.
#[derive(Default)]
pub struct Sheet {
    rows: Vec<(String, [String; 4], f64)>,
}

impl Sheet {
    fn note(&mut self, what: String, cells: [String; 4], share: f64) {
        // Not a number is as bad as can be.
        let share = if share.is_nan() { f64::INFINITY } else { share };
        self.rows.push((what, cells, share));
    }

    /// Notes a value that must agree relative to the expected one.
    pub fn relative(&mut self, what: impl Into<String>, unit: &str, values: [f64; 2], within: f64) {
        let [expected, got] = values;
        let error = (got - expected).abs() / expected.abs().max(1e-300);
        let cells = [
            figure(expected, unit),
            figure(got, unit),
            format!("{error:.1e} of it"),
            format!("{within:.0e} of it"),
        ];
        self.note(what.into(), cells, error / within);
    }

    /// Notes a value that must agree absolutely.
    pub fn absolute(&mut self, what: impl Into<String>, unit: &str, values: [f64; 2], within: f64) {
        let [expected, got] = values;
        let error = (got - expected).abs();
        let cells = [
            figure(expected, unit),
            figure(got, unit),
            format!("{error:.1e} {unit}"),
            format!("{within:.0e} {unit}"),
        ];
        self.note(what.into(), cells, error / within);
    }

    /// Notes a critical value: the outcome must differ between just below and just above it.
    ///
    /// `slips` tells the outcome at a multiple of the critical value.
    pub fn bracket(
        &mut self,
        what: impl Into<String>,
        critical: String,
        width: f64,
        slips: impl Fn(f64) -> bool,
    ) {
        let (below, above) = (slips(1.0 - width), slips(1.0 + width));
        let word = |slips: bool| if slips { "slips" } else { "holds" };
        let got = format!("{} just below, {} just above", word(below), word(above));
        let cells = [critical, got, format!("below {width:.0e}"), format!("{width:.0e} of it")];
        self.note(what.into(), cells, if below == above { f64::INFINITY } else { 0.0 });
    }

    /// Notes something that must be the same to the letter.
    pub fn exact(&mut self, what: impl Into<String>, expected: impl ToString, got: impl ToString) {
        let (expected, got) = (expected.to_string(), got.to_string());
        let same = expected == got;
        let error = if same { "none" } else { "differs" };
        let cells = [expected, got, error.to_owned(), "none".to_owned()];
        self.note(what.into(), cells, if same { 0.0 } else { f64::INFINITY });
    }
}

/// A number with its unit, as the table shows it.
fn figure(value: f64, unit: &str) -> String {
    let plain = value.abs() >= 1e-3 && value.abs() < 1e9;
    let digits = if plain {
        let whole = value.abs().log10().floor().max(0.0);
        format!("{value:.*}", (11.0 - whole).max(0.0) as usize)
    } else {
        format!("{value:.11e}")
    };
    let digits = if plain && digits.contains('.') {
        digits.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else if value == 0.0 {
        "0".to_owned()
    } else {
        digits
    };
    format!("{digits} {unit}").trim_end().to_owned()
}

/// What is to be worked out for some lines.
pub struct Case {
    chapter: &'static str,
    source: &'static str,
    work: Box<dyn Fn(&mut Sheet) + Send + Sync>,
}

impl Case {
    /// A case of a chapter with the source of its values.
    pub fn new(
        chapter: &'static str,
        source: &'static str,
        work: impl Fn(&mut Sheet) + Send + Sync + 'static,
    ) -> Self {
        Self { chapter, source, work: Box::new(work) }
    }

    /// Works it out; a run that fails is a line that does not hold.
    pub fn rows(&self) -> Vec<Row> {
        let mut sheet = Sheet::default();
        if catch_unwind(AssertUnwindSafe(|| (self.work)(&mut sheet))).is_err() {
            let cells = ["a result", "the run failed", "differs", "none"].map(str::to_owned);
            sheet.note("a run".to_owned(), cells, f64::INFINITY);
        }
        let row = |(what, cells, share): (String, [String; 4], f64)| {
            let [expected, got, error, tolerance] = cells;
            Row {
                chapter: self.chapter,
                what,
                source: self.source,
                expected,
                got,
                error,
                tolerance,
                share,
            }
        };
        sheet.rows.into_iter().map(row).collect()
    }
}
