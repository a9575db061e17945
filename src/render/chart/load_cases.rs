//! Load cases: how much of its limit each case uses, worst requirement each.

use super::axes::{self, Sheet};
use super::clip::Frame;
use super::drawing::{Anchor, Drawing, Group};
use super::font;
use super::marks::{self, Forbidden};
use super::number::{NBSP, fixed};
use super::palette::Ink;
use super::pen::{self, Pen};

/// What the chart shows.
#[derive(Clone, Debug, PartialEq)]
pub struct LoadCases {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// Cases in file order.
    pub cases: Vec<CaseBar>,
    /// Size.
    pub sheet: Sheet,
}

/// One case.
#[derive(Clone, Debug, PartialEq)]
pub struct CaseBar {
    /// Name in words.
    pub name: String,
    /// Verdict over all its requirements; `None`: cannot be told.
    pub met: Option<bool>,
    /// Use of the limit by the requirement that comes nearest to it or exceeds it most; 1 is at
    /// the limit. `None` where no requirement has a share, for example a count of slips.
    pub use_of_limit: Option<f64>,
    /// That requirement in a few words, for example `gear share 92 % of 85 %`.
    pub text: String,
    /// Slips of all gears.
    pub slips: u32,
}

const TOP: f64 = 26.0;
const FOOT: f64 = 30.0;
const PITCH: f64 = 36.0;
/// Uses beyond this are cut with a break, 1 is the limit.
const LONGEST: f64 = 1.6;

/// Draws the chart.
pub fn load_cases_chart(input: &LoadCases) -> Drawing {
    let sheet = input.sheet.sound();
    let names = input.cases.iter().map(|case| font::width(&case.name, pen::LABEL, true) + 12.0);
    let left = names.fold(axes::LEFT, f64::max).min(170.0);
    let frame = Frame {
        left,
        top: TOP,
        width: sheet.width - left - axes::RIGHT,
        height: PITCH * input.cases.len().max(1) as f64,
    };
    let height = TOP + frame.height + FOOT;
    let x = |share: f64| frame.left + frame.width * share / LONGEST;
    let mut pen = Pen::new();
    axes::heading(
        &mut pen,
        [frame.left, 12.0],
        "Use of the limit",
        "worst requirement of each case, %",
    );
    for percent in [0, 25, 50, 75, 125, 150] {
        let at = x(f64::from(percent) / 100.0);
        pen.line([at, frame.top], [at, frame.bottom()], Ink::Grid, pen::HAIR);
    }
    pen.line([frame.left, frame.top], [frame.left, frame.bottom()], Ink::Axis, pen::SECOND);
    marks::upright_limit(&mut pen, x(1.0), [frame.top, frame.bottom()], Forbidden::Above);
    for (place, case) in input.cases.iter().enumerate() {
        let middle = frame.top + PITCH * (place as f64 + 0.5);
        draw_case(&mut pen, &frame, middle, case, &x);
    }
    for percent in [0, 50, 100, 150] {
        let at = [x(f64::from(percent) / 100.0), frame.bottom() + 15.0];
        pen.text(at, &percent.to_string(), pen::label(Ink::Sub, Anchor::Middle));
    }
    pen.finish(&input.id, &input.title, sheet.width, height)
}

fn draw_case(pen: &mut Pen, frame: &Frame, middle: f64, case: &CaseBar, x: &dyn Fn(f64) -> f64) {
    let verdict = match case.met {
        Some(true) => "met",
        Some(false) => "not-met",
        None => "not-judged",
    };
    pen.open(Group::class("b").with("case", case.name.clone()).with("verdict", verdict));
    let name = font::fit(&case.name, pen::LABEL, true, frame.left - 10.0);
    pen.text([frame.left - 8.0, middle + 3.9], &name, pen::bold(Ink::Ink, Anchor::End));
    let used = case.use_of_limit.filter(|used| used.is_finite()).map(|used| used.max(0.0));
    if let Some(used) = used {
        let end = x(used.min(LONGEST));
        pen.rectangle([frame.left, middle - 11.0], [end - frame.left, 9.0], Ink::Ink, 1.0);
        if used > LONGEST {
            // Two slanted cuts: the bar goes on.
            for shift in [14.0, 20.0] {
                let at = end - shift;
                pen.line([at - 2.0, middle], [at + 2.0, middle - 13.0], Ink::Paper, 2.0);
            }
        }
    }
    words(pen, frame, middle, case, used);
    let right = frame.right() + 12.0;
    let at = [right + 5.0, middle];
    match case.met {
        Some(true) => marks::tick(pen, at, Ink::Modulator),
        Some(false) => marks::not_met(pen, at),
        None => marks::not_judged(pen, at),
    }
    let (word, ink) = match case.met {
        Some(true) => ("met", Ink::ModulatorText),
        Some(false) => ("not met", Ink::Slip),
        None => ("not judged", Ink::Sub),
    };
    pen.text([right + 16.0, middle + 3.9], word, pen::bold(ink, Anchor::Start));
    pen.close();
}

/// Words below the bar.
fn words(pen: &mut Pen, frame: &Frame, middle: f64, case: &CaseBar, used: Option<f64>) {
    let mut text = case.text.clone();
    if case.slips > 0 {
        let word = if case.slips == 1 { "slip" } else { "slips" };
        let head = format!("{}{NBSP}{word}", case.slips);
        text = if text.is_empty() { head } else { format!("{head}, {text}") };
    } else if text.is_empty() {
        text = used.map_or_else(String::new, |used| format!("{}{NBSP}%", fixed(100.0 * used, 0)));
    }
    if !text.is_empty() {
        let text = font::fit(&text, pen::LABEL, false, frame.width - 8.0);
        let at = [frame.left + 5.0, middle + 11.0];
        pen.text_on_plate(at, &text, pen::label(Ink::Sub, Anchor::Start));
    }
}
