//! Tolerance: how the peak share of the pull-out torque spreads, and what lies behind the wall.

use super::axes::{self, Axes, Sheet};
use super::clip::Frame;
use super::drawing::{Anchor, Drawing, Group};
use super::marks::{self, Forbidden};
use super::number::{NBSP, fixed, number};
use super::palette::Ink;
use super::pen::{self, Pen};
use super::ticks;

/// What the chart shows.
#[derive(Clone, Debug, PartialEq)]
pub struct Tolerance {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// Bold heading, for example `Peak pull-out share`.
    pub name: String,
    /// Largest share in each draw that stayed short of the peak, 0 to 1.
    pub shares: Vec<f64>,
    /// Draws that went past the peak and came back without a slip.
    pub came_back: u32,
    /// Draws that slipped.
    pub slipped: u32,
    /// Confidence interval of the share of draws that slipped, 0 to 1.
    pub interval: [f64; 2],
    /// 5 %, median and 95 % of the share, 0 to 1.
    pub quantiles: [f64; 3],
    /// Size.
    pub sheet: Sheet,
}

/// Draws counted by their largest share, in percent.
#[derive(Clone, Debug, PartialEq)]
pub struct Bins {
    /// Where the first begins.
    pub low: f64,
    /// Width of each; the last ends at 100.
    pub width: f64,
    /// Draws in each.
    pub counts: Vec<u64>,
}

impl Tolerance {
    /// The bars of the histogram.
    pub fn bins(&self) -> Bins {
        let finite = self.shares.iter().filter(|share| share.is_finite());
        let percent: Vec<f64> = finite.map(|share| (100.0 * share).clamp(0.0, 100.0)).collect();
        let lowest = percent.iter().copied().fold(100.0, f64::min);
        let low = (lowest / 10.0).floor() * 10.0;
        let low = if low >= 95.0 { 90.0 } else { low };
        let width = ticks::nice_step((100.0 - low) / 60.0).max(0.5);
        Bins { low, width, counts: histogram(&percent, low, width) }
    }

    /// All draws of the chart.
    pub fn draws(&self) -> u64 {
        let short = self.shares.iter().filter(|share| share.is_finite()).count() as u64;
        short + u64::from(self.came_back) + u64::from(self.slipped)
    }
}

const TOP: f64 = 24.0;
const FOOT: f64 = 40.0;
/// Room for the two bars behind the wall, px.
const BEHIND: f64 = 46.0;
/// Room for the words right of them, px.
const WORDS: f64 = 122.0;

/// Draws the chart.
pub fn tolerance_chart(input: &Tolerance) -> Drawing {
    let sheet = input.sheet.sound();
    let height = sheet.height.unwrap_or(280.0);
    let Bins { low, width, counts: bins } = input.bins();
    let draws = input.draws();
    let tallest =
        bins.iter().copied().max().unwrap_or(0).max(u64::from(input.came_back.max(input.slipped)));
    // A fifth of the height is left for the bar of quantiles.
    let (_, up_high, up_ticks) = ticks::outward(0.0, (tallest as f64 * 1.25).max(1.0), 6);
    let frame = Frame {
        left: axes::LEFT,
        top: TOP,
        width: sheet.width - axes::LEFT - BEHIND - WORDS,
        height: height - TOP - FOOT,
    };
    let axes = Axes { frame, across: [low, 100.0], up: [0.0, up_high] };
    let across_ticks = ticks::within(low, 100.0, 6);
    let mut pen = Pen::new();
    let per = if (width - 1.0).abs() < 1e-9 {
        "draws per percent".to_owned()
    } else {
        format!("draws per {}{NBSP}%", number(width, 2))
    };
    axes.heading(&mut pen, &input.name, &format!("{}{NBSP}draws, {per}", number(draws as f64, 7)));
    pen.open(axes.group("plane"));
    axes.level_grid(&mut pen, &up_ticks);
    axes.upright_grid(&mut pen, &across_ticks);
    let bottom = frame.bottom();
    for (place, count) in bins.iter().enumerate().filter(|(_, count)| **count > 0) {
        let (left, right) =
            (axes.x(low + width * place as f64), axes.x(low + width * (place as f64 + 1.0)));
        let y = axes.y(*count as f64);
        let gap = if right - left > 4.0 { 0.6 } else { 0.0 };
        pen.open(Group::class("b").with("count", count.to_string()));
        pen.rectangle([left + gap, y], [right - left - 2.0 * gap, bottom - y], Ink::Sub, 1.0);
        pen.close();
    }
    behind_the_wall(&mut pen, input, &axes, draws);
    let end = frame.right() + BEHIND - 4.0;
    pen.line([frame.left, bottom], [end, bottom], Ink::Axis, pen::SECOND);
    marks::upright_limit(&mut pen, frame.right(), [frame.top - 4.0, bottom], Forbidden::Above);
    quantile_bar(&mut pen, input, &axes, tallest as f64);
    pen.close();
    pen.text([frame.right(), frame.top - 8.5], "pull-out", pen::label(Ink::Ink, Anchor::Middle));
    axes.numbers_left(&mut pen, &up_ticks);
    axes.numbers_below(&mut pen, &across_ticks, "Peak pull-out share, %");
    pen.finish(&input.id, &input.title, sheet.width, height)
}

/// Counts in bins of a width from `low` to 100; the upper edge belongs to the last bin.
fn histogram(percent: &[f64], low: f64, width: f64) -> Vec<u64> {
    let count = ((100.0 - low) / width).round().max(1.0) as usize;
    let mut bins = vec![0; count];
    for value in percent {
        let place = (((value - low) / width).floor().max(0.0) as usize).min(count - 1);
        if let Some(bin) = bins.get_mut(place) {
            *bin += 1;
        }
    }
    bins
}

fn behind_the_wall(pen: &mut Pen, input: &Tolerance, axes: &Axes, draws: u64) {
    let frame = axes.frame;
    let bottom = frame.bottom();
    let bars = [
        (8.0, input.came_back, Ink::SomeSlips, "came-back"),
        (25.0, input.slipped, Ink::Slip, "slipped"),
    ];
    for (shift, count, ink, kind) in bars {
        let y = axes.y(f64::from(count)).clamp(frame.top, bottom);
        pen.open(Group::class("b").with("count", count.to_string()).with("kind", kind));
        pen.rectangle([frame.right() + shift, y], [14.0, bottom - y], ink, 1.0);
        pen.close();
    }
    let left = frame.right() + BEHIND + 2.0;
    let mut y = bottom - 52.0;
    let share = if draws > 0 { f64::from(input.slipped) / draws as f64 } else { 0.0 };
    marks::slip(pen, [left + 4.0, y - 4.0], true, 7.5);
    let words = match input.slipped {
        0 => "none slips".to_owned(),
        1 => "1 slips".to_owned(),
        count => format!("{count} slip"),
    };
    pen.text([left + 13.0, y], &words, pen::bold(Ink::Slip, Anchor::Start));
    y += 14.5;
    let digits = if share < 0.1 { 1 } else { 0 };
    let part = |share: f64| fixed(100.0 * share, digits);
    let words = format!(
        "{}{NBSP}% ({} to {})",
        part(share),
        part(input.interval[0]),
        part(input.interval[1])
    );
    pen.text([left, y], &words, pen::label(Ink::Slip, Anchor::Start));
    y += 20.0;
    let words = format!("{} past the peak,", input.came_back);
    pen.text([left, y], &words, pen::label(Ink::Sub, Anchor::Start));
    pen.text([left, y + 14.5], "came back", pen::label(Ink::Sub, Anchor::Start));
}

fn quantile_bar(pen: &mut Pen, input: &Tolerance, axes: &Axes, tallest: f64) {
    let y = (axes.frame.top + 25.0).min(axes.y(tallest) - 8.0);
    let [low, middle, high] =
        input.quantiles.map(|share| axes.x((100.0 * share).clamp(axes.across[0], 100.0)));
    pen.open(Group::class("m").with("kind", "quantiles"));
    pen.line([low, y], [high, y], Ink::Ink, 1.4);
    for x in [low, high] {
        pen.line([x, y - 4.0], [x, y + 4.0], Ink::Ink, 1.4);
    }
    pen.disc([middle, y], 4.0, Ink::Ink);
    let of = |name: &str, share: f64| format!("{name}: {}", fixed(100.0 * share, 0));
    let near = |x: f64| (x - middle).abs() < 62.0;
    let texts = [
        (
            low,
            of("5\u{A0}%", input.quantiles[0]),
            if near(low) { Anchor::End } else { Anchor::Middle },
        ),
        (middle, of("median", input.quantiles[1]), Anchor::Middle),
        (high, of("95\u{A0}%", input.quantiles[2]), Anchor::End),
    ];
    for (place, (x, text, anchor)) in texts.into_iter().enumerate() {
        // Where the three stand close, the outer ones go below the bar.
        let crowded = place != 1 && near(x);
        let up = if crowded { -15.0 } else { 9.0 };
        let shift = if anchor == Anchor::End { 4.0 } else { 0.0 };
        pen.text_on_plate([x + shift, y - up], &text, pen::label(Ink::Ink, anchor));
    }
    pen.close();
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_draw_falls_into_one_bin() {
        let bins = histogram(&[50.0, 50.9, 51.0, 99.9, 100.0], 50.0, 1.0);
        assert_eq!(bins.len(), 50);
        assert_eq!((bins[0], bins[1], bins[49]), (2, 1, 2));
    }
}
