//! Direct labels at the right edge of a panel: sorted, pushed apart, with a short leader.

use super::clip::Frame;
use super::drawing::{Anchor, TextStyle};
use super::font;
use super::palette::Ink;
use super::pen::{self, Pen};

/// Least distance of two baselines, px.
pub const PITCH: f64 = 13.5;

/// A label that names what ends at a height.
#[derive(Clone, Debug, PartialEq)]
pub struct EndLabel {
    /// Height of what it names, px.
    pub y: f64,
    /// The words.
    pub text: String,
    /// Bold for main curves.
    pub bold: bool,
    /// Colour of the words.
    pub ink: Ink,
    /// Colour of the leader.
    pub leader: Ink,
}

impl EndLabel {
    fn style(&self) -> TextStyle {
        let style = if self.bold { pen::bold } else { pen::label };
        style(self.ink, Anchor::Start)
    }

    /// Room it takes right of the frame, leader and spare width included.
    pub fn room(&self) -> f64 {
        // Six in a hundred to spare: programs without the font take a wider one.
        10.0 + 1.06 * font::width(&self.text, pen::LABEL, self.bold)
    }
}

/// Heights at which labels of the given wishes stand: in the same order, at least a pitch apart,
/// each as near to its wish as the others let it, within the bounds where they fit.
pub fn spread(wishes: &[f64], low: f64, high: f64) -> Vec<f64> {
    let mut order: Vec<usize> = (0..wishes.len()).collect();
    let wish = |place: usize| wishes.get(place).copied().unwrap_or(0.0);
    // Ends that nearly coincide keep the order in which they were named.
    order.sort_by(|one, two| (wish(*one) / 2.0).round().total_cmp(&(wish(*two) / 2.0).round()));
    // Blocks of labels that touch: the sum of their shifted wishes, and how many they are.
    let mut blocks: Vec<(f64, usize)> = Vec::new();
    let start = |(sum, count): (f64, usize)| {
        let length = PITCH * (count.max(1) - 1) as f64;
        (sum / count.max(1) as f64).min(high - length).max(low)
    };
    for place in &order {
        let mut block = (wish(*place), 1);
        while let Some(before) = blocks.last().copied() {
            if start(before) + PITCH * before.1 as f64 <= start(block) {
                break;
            }
            blocks.pop();
            // The later block's wishes as wishes for the start of the joint one.
            let shift = PITCH * (before.1 * block.1) as f64;
            block = (before.0 + block.0 - shift, before.1 + block.1);
        }
        blocks.push(block);
    }
    let mut heights = vec![0.0; wishes.len()];
    let mut rest = order.into_iter();
    for block in blocks {
        for (place, index) in rest.by_ref().take(block.1).enumerate() {
            if let Some(height) = heights.get_mut(index) {
                *height = start(block) + PITCH * place as f64;
            }
        }
    }
    heights
}

/// Draws labels right of a frame, cut to `room` px.
pub fn draw(pen: &mut Pen, frame: &Frame, labels: &[EndLabel], room: f64) {
    let wishes: Vec<f64> = labels
        .iter()
        .map(|label| if label.y.is_nan() { frame.bottom() } else { label.y })
        .map(|y| y.max(frame.top).min(frame.bottom()))
        .collect();
    let heights = spread(&wishes, frame.top + 2.0, frame.bottom() - 1.0);
    for ((label, wish), height) in labels.iter().zip(&wishes).zip(&heights) {
        let right = frame.right();
        pen.line([right + 2.0, *wish], [right + 7.0, *height], label.leader, pen::HAIR + 0.2);
        let text = font::fit(&label.text, pen::LABEL, label.bold, room - 10.0);
        pen.text([right + 9.0, height + 3.9], &text, label.style());
    }
}

/// Right margin that the labels need, between the usual one and a third of the sheet.
pub fn margin<'a>(labels: impl Iterator<Item = &'a EndLabel>, usual: f64, sheet: f64) -> f64 {
    labels.map(EndLabel::room).fold(usual, f64::max).min(sheet / 3.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn labels_apart_keep_their_wish() {
        assert_eq!(spread(&[80.0, 20.0], 0.0, 100.0), vec![80.0, 20.0]);
    }

    #[test]
    fn labels_that_collide_are_pushed_apart_evenly() {
        let heights = spread(&[50.0, 50.0, 50.0], 0.0, 100.0);
        assert!((heights[1] - 50.0).abs() < 1e-9, "{heights:?}");
        assert!((heights[1] - heights[0] - PITCH).abs() < 1e-9);
        assert!((heights[2] - heights[1] - PITCH).abs() < 1e-9);
    }

    #[test]
    fn no_two_labels_come_closer_than_the_pitch() {
        let wishes = [3.0, 5.0, 4.0, 40.0, 52.0, 99.0, 98.0];
        let mut heights = spread(&wishes, 0.0, 100.0);
        assert!(
            heights.iter().all(|height| (-1e-9..=100.0 + 1e-9).contains(height)),
            "{heights:?}"
        );
        heights.sort_by(f64::total_cmp);
        assert!(heights.windows(2).all(|pair| pair[1] - pair[0] >= PITCH - 1e-9), "{heights:?}");
    }

    #[test]
    fn order_of_the_wishes_is_kept() {
        let heights = spread(&[55.0, 50.0], 0.0, 100.0);
        assert!(heights[1] < heights[0]);
        let heights = spread(&[50.2, 50.0], 0.0, 100.0);
        assert!(heights[0] < heights[1], "what nearly coincides keeps the order of naming");
    }
}
