//! Rainflow histogram: how many cycles of which range, and the damage-equivalent range.

use super::axes::{self, Axes, Sheet};
use super::clip::Frame;
use super::drawing::{Anchor, Dash, Drawing, Group};
use super::free::Room;
use super::number::{number, with_unit};
use super::palette::Ink;
use super::pen::{self, Pen};
use super::ticks;
use super::units::Unit;

/// What the chart shows; ranges in SI.
#[derive(Clone, Debug, PartialEq)]
pub struct RainflowChart {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// What was counted, in words, for example `torque of the pump shaft`.
    pub of: String,
    /// Range and count of each cycle.
    pub cycles: Vec<[f64; 2]>,
    /// Damage-equivalent range.
    pub damage_equivalent: f64,
    /// Slope of the life line it was found with.
    pub slope: f64,
    /// Unit of the ranges.
    pub unit: Unit,
    /// Size.
    pub sheet: Sheet,
}

const TOP: f64 = 24.0;
const FOOT: f64 = 40.0;
const BINS: f64 = 40.0;

/// Draws the chart.
pub fn rainflow_chart(input: &RainflowChart) -> Drawing {
    let sheet = input.sheet.sound();
    let height = sheet.height.unwrap_or(280.0);
    let valid = |value: f64| value.is_finite() && value > 0.0;
    let cycles: Vec<[f64; 2]> = input
        .cycles
        .iter()
        .copied()
        .filter(|[range, count]| valid(*range) && valid(*count))
        .collect();
    let largest =
        cycles.iter().map(|cycle| cycle[0]).fold(0.0, f64::max).max(input.damage_equivalent);
    let unit = input.unit.prefixed(largest);
    let (_, high, across_ticks) = ticks::outward(0.0, unit.of(largest).max(1e-12), 6);
    let width = ticks::nice_step(high / BINS);
    let bins = histogram(&cycles, &unit, width, high);
    let (low_power, high_power) = decades(&bins);
    let frame = Frame {
        left: axes::LEFT,
        top: TOP,
        width: sheet.width - axes::LEFT - axes::RIGHT,
        height: height - TOP - FOOT,
    };
    let axes = Axes { frame, across: [0.0, high], up: [low_power, high_power] };
    let mut pen = Pen::new();
    let heading = format!("Cycles in the {}", input.of);
    axes.heading(&mut pen, &heading, &format!("count per {}", with_unit(width, 3, &unit.text)));
    pen.open(axes.group("plane"));
    let powers = ticks::at_step(low_power, high_power, 1.0);
    axes.level_grid(&mut pen, &powers);
    axes.upright_grid(&mut pen, &across_ticks);
    let mut room = Room::new(frame);
    for (place, count) in bins.iter().enumerate().filter(|(_, count)| **count > 0.0) {
        let (left, right) = (axes.x(width * place as f64), axes.x(width * (place as f64 + 1.0)));
        let y = axes.y(count.log10());
        pen.open(Group::class("b").with("count", count.to_string()));
        pen.rectangle([left + 0.6, y], [right - left - 1.2, frame.bottom() - y], Ink::Sub, 1.0);
        pen.close();
        room.take(Frame { left, top: y, width: right - left, height: frame.bottom() - y });
    }
    axes.floor(&mut pen);
    equivalent(&mut pen, &mut room, input, &axes, &unit);
    pen.close();
    for power in &powers.values {
        let place = [frame.left - 7.0, axes.y(*power) + 3.9];
        pen.text(place, &number(10_f64.powf(*power), 3), pen::label(Ink::Sub, Anchor::End));
    }
    axes.numbers_below(&mut pen, &across_ticks, &format!("Range, {}", unit.text));
    pen.finish(&input.id, &input.title, sheet.width, height)
}

fn histogram(cycles: &[[f64; 2]], unit: &Unit, width: f64, high: f64) -> Vec<f64> {
    let count = (high / width).round().max(1.0) as usize;
    let mut bins = vec![0.0; count];
    for [range, number] in cycles {
        let place = ((unit.of(*range) / width) as usize).min(count - 1);
        if let Some(bin) = bins.get_mut(place) {
            *bin += number;
        }
    }
    bins
}

/// Decades that hold all counts, with the smallest bar still to be seen.
fn decades(bins: &[f64]) -> (f64, f64) {
    let filled = || bins.iter().copied().filter(|count| *count > 0.0);
    let least = filled().fold(f64::INFINITY, f64::min);
    let most = filled().fold(0.0, f64::max);
    if most <= 0.0 {
        return (0.0, 1.0);
    }
    // A count that is a power of ten would be a bar without height.
    let low = (least * 0.9).log10().floor();
    (low, most.log10().ceil().max(low + 1.0))
}

fn equivalent(pen: &mut Pen, room: &mut Room, input: &RainflowChart, axes: &Axes, unit: &Unit) {
    let value = unit.of(input.damage_equivalent);
    if !(value.is_finite() && (axes.across[0]..=axes.across[1]).contains(&value)) {
        return;
    }
    let frame = axes.frame;
    let x = axes.x(value);
    pen.open(Group::class("m").with("kind", "equivalent"));
    pen.path(&[[x, frame.top], [x, frame.bottom()]], Ink::Ink, 1.4, Dash::Long);
    pen.close();
    room.avoid(&[vec![[x, frame.top], [x, frame.bottom()]]]);
    let text = format!(
        "damage equivalent {}, slope {}",
        with_unit(value, 4, &unit.text),
        number(input.slope, 3)
    );
    let wide = super::font::width(&text, pen::LABEL, true);
    let mut candidates = Vec::new();
    for down in [14.0, 30.0, 46.0, 62.0] {
        candidates.push([x + 8.0, frame.top + down]);
        candidates.push([x - 8.0 - wide, frame.top + down]);
    }
    room.set(pen, &text, pen::bold(Ink::Ink, Anchor::Start), &candidates);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn counts_are_kept_in_all() {
        let unit = Unit::new("N·m", 1.0);
        let bins = histogram(&[[3.0, 0.5], [3.9, 1.0], [10.0, 2.5]], &unit, 1.0, 10.0);
        assert_eq!(bins.iter().sum::<f64>().to_string(), "4");
        assert_eq!(bins[3].to_string(), "1.5");
    }

    #[test]
    fn half_a_cycle_is_a_bar_with_height() {
        assert_eq!(decades(&[0.5, 120.0]), (-1.0, 3.0));
        assert_eq!(decades(&[1.0]), (-1.0, 0.0));
    }
}
