//! Free places for labels inside a panel: the candidate that crosses least.

use super::clip::{self, Frame};
use super::drawing::{Anchor, Point, TextStyle};
use super::font;
use super::palette::Ink;
use super::pen::Pen;

/// What is already drawn in a panel.
#[derive(Debug)]
pub struct Room {
    frame: Frame,
    lines: Vec<Vec<Point>>,
    taken: Vec<Frame>,
}

impl Room {
    /// An empty panel.
    pub fn new(frame: Frame) -> Self {
        Self { frame, lines: Vec::new(), taken: Vec::new() }
    }

    /// Lines that labels should not cross.
    pub fn avoid(&mut self, pieces: &[Vec<Point>]) {
        self.lines.extend_from_slice(pieces);
    }

    /// A place that labels must not cover.
    pub fn take(&mut self, place: Frame) {
        self.taken.push(place);
    }

    /// Sets a text at the best of the candidates (left ends of the baseline) and takes the place.
    ///
    /// `wanted` weighs how far a candidate is from where one would look first: they come in order.
    pub fn set(
        &mut self,
        pen: &mut Pen,
        text: &str,
        style: TextStyle,
        candidates: &[Point],
    ) -> Option<Point> {
        let wide = font::width(text, style.size, style.bold);
        let box_at = |[x, y]: Point| Frame {
            left: x - 3.0,
            top: y - 0.85 * style.size - 2.0,
            width: wide + 6.0,
            height: style.size + 5.0,
        };
        let count = candidates.len().max(1) as f64;
        let best = candidates
            .iter()
            .enumerate()
            .map(|(order, place)| (self.cost(&box_at(*place)) + 0.9 * order as f64 / count, *place))
            .min_by(|one, two| one.0.total_cmp(&two.0))?;
        let place = best.1;
        let style = TextStyle { anchor: Anchor::Start, ..style };
        if best.0 >= 1.0 {
            pen.text_on_plate(place, text, style);
        } else {
            pen.text(place, text, style);
        }
        self.taken.push(box_at(place));
        Some(place)
    }

    /// A text with a leader from a mark, set round it where there is room.
    pub fn call_out(&mut self, pen: &mut Pen, mark: Point, text: &str, style: TextStyle) {
        let [x, y] = mark;
        if !(x.is_finite() && y.is_finite()) {
            return;
        }
        let wide = font::width(text, style.size, style.bold);
        let mut candidates = Vec::new();
        for reach in [34.0, 52.0, 74.0] {
            for (across, up) in [
                (-0.55, 1.0),
                (0.55, 1.0),
                (-0.55, -1.0),
                (0.55, -1.0),
                (-1.0, 0.45),
                (1.0, 0.45),
                (-1.0, -0.45),
                (1.0, -0.45),
            ] {
                let (dx, dy): (f64, f64) = (reach * across, reach * up);
                let left = if across < 0.0 { x + dx - wide } else { x + dx };
                candidates.push([left, y + dy + if up > 0.0 { 10.0 } else { -2.0 }]);
            }
        }
        let quiet = TextStyle { anchor: Anchor::Start, ..style };
        let mut leader = Pen::new();
        let Some([left, baseline]) = self.set(&mut leader, text, quiet, &candidates) else {
            return;
        };
        let near_x = x.max(left).min(left + wide);
        let near_y = if baseline > y { baseline - 10.5 } else { baseline + 3.5 };
        let (dx, dy) = (near_x - x, near_y - y);
        let length = dx.hypot(dy).max(1e-9);
        pen.line([x + 4.0 * dx / length, y + 4.0 * dy / length], [near_x, near_y], Ink::Ink, 0.9);
        pen.append(leader);
    }

    fn cost(&self, place: &Frame) -> f64 {
        let inside = self.frame.holds([place.left, place.top])
            && self.frame.holds([place.right(), place.bottom()]);
        let crossed = self.lines.iter().filter(|line| !clip::line(line, place).is_empty()).count();
        let covered = self.taken.iter().filter(|taken| overlap(taken, place)).count();
        (if inside { 0.0 } else { 8.0 }) + crossed as f64 + 4.0 * covered as f64
    }
}

fn overlap(one: &Frame, two: &Frame) -> bool {
    one.left < two.right()
        && two.left < one.right()
        && one.top < two.bottom()
        && two.top < one.bottom()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::chart::pen;

    #[test]
    fn the_candidate_without_a_crossing_wins() {
        let frame = Frame { left: 0.0, top: 0.0, width: 300.0, height: 100.0 };
        let mut room = Room::new(frame);
        room.avoid(&[vec![[0.0, 30.0], [300.0, 30.0]]]);
        let style = pen::label(Ink::Ink, Anchor::Start);
        let place = room.set(&mut Pen::new(), "Motor", style, &[[10.0, 33.0], [10.0, 60.0]]);
        assert_eq!(place, Some([10.0, 60.0]));
        let place = room.set(&mut Pen::new(), "Load", style, &[[12.0, 62.0], [10.0, 85.0]]);
        assert_eq!(place, Some([10.0, 85.0]), "a label does not cover another");
    }
}
