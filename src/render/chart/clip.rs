//! Cutting lines and areas at a frame, and thinning lines that say no more than fewer points.

use super::drawing::Point;

/// A rectangle in CSS px.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Frame {
    /// Left edge.
    pub left: f64,
    /// Upper edge.
    pub top: f64,
    /// Width.
    pub width: f64,
    /// Height.
    pub height: f64,
}

impl Frame {
    /// Right edge.
    pub fn right(&self) -> f64 {
        self.left + self.width
    }

    /// Lower edge.
    pub fn bottom(&self) -> f64 {
        self.top + self.height
    }

    /// True within, border included.
    pub fn holds(&self, point: Point) -> bool {
        (self.left - 1e-6..=self.right() + 1e-6).contains(&point[0])
            && (self.top - 1e-6..=self.bottom() + 1e-6).contains(&point[1])
    }
}

/// The parts of a line within the frame, cut exactly at its border (Liang and Barsky 1984).
///
/// What is outside is gone, not pressed to the border: a cut peak looks cut.
pub fn line(points: &[Point], frame: &Frame) -> Vec<Vec<Point>> {
    let mut pieces: Vec<Vec<Point>> = Vec::new();
    let mut open = false;
    for pair in points.windows(2) {
        let Some(kept) = segment(pair[0], pair[1], frame) else {
            open = false;
            continue;
        };
        match pieces.last_mut() {
            Some(piece) if open && !kept.enters => piece.push(kept.to),
            _ => pieces.push(vec![kept.from, kept.to]),
        }
        open = !kept.leaves;
    }
    pieces
}

/// The part of a segment within a frame, and whether it crosses the border on its way.
struct Kept {
    from: Point,
    to: Point,
    enters: bool,
    leaves: bool,
}

fn segment(from: Point, to: Point, frame: &Frame) -> Option<Kept> {
    if ![from, to].iter().flatten().all(|part| part.is_finite()) {
        return None;
    }
    let (dx, dy) = (to[0] - from[0], to[1] - from[1]);
    let (mut enter, mut leave) = (0.0_f64, 1.0_f64);
    let borders = [
        (-dx, from[0] - frame.left),
        (dx, frame.right() - from[0]),
        (-dy, from[1] - frame.top),
        (dy, frame.bottom() - from[1]),
    ];
    for (against, room) in borders {
        if against == 0.0 {
            if room < 0.0 {
                return None;
            }
        } else if against < 0.0 {
            enter = enter.max(room / against);
        } else {
            leave = leave.min(room / against);
        }
    }
    if enter > leave {
        return None;
    }
    let at = |share: f64| [from[0] + share * dx, from[1] + share * dy];
    let (enters, leaves) = (enter > 0.0, leave < 1.0);
    Some(Kept {
        from: if enters { at(enter) } else { from },
        to: if leaves { at(leave) } else { to },
        enters,
        leaves,
    })
}

/// The part of an area within the frame (Sutherland and Hodgman 1974).
pub fn area(points: &[Point], frame: &Frame) -> Vec<Point> {
    let mut corners = points.to_vec();
    let borders: [(usize, f64, f64); 4] = [
        (0, frame.left, 1.0),
        (0, frame.right(), -1.0),
        (1, frame.top, 1.0),
        (1, frame.bottom(), -1.0),
    ];
    for (axis, border, sign) in borders {
        let inside = |point: &Point| sign * (point[axis] - border) >= 0.0;
        let mut kept = Vec::with_capacity(corners.len() + 4);
        let followers = corners.iter().cycle().skip(1);
        for (from, to) in corners.iter().zip(followers) {
            if inside(from) {
                kept.push(*from);
            }
            if inside(from) != inside(to) {
                let share = (border - from[axis]) / (to[axis] - from[axis]);
                kept.push([
                    from[0] + share * (to[0] - from[0]),
                    from[1] + share * (to[1] - from[1]),
                ]);
            }
        }
        corners = kept;
    }
    corners
}

/// Drops points that lie within `tolerance` px of the line through the others (Douglas and
/// Peucker 1973); the ends stay.
pub fn thin(points: &[Point], tolerance: f64) -> Vec<Point> {
    let Some(last) = points.len().checked_sub(1) else { return Vec::new() };
    let mut keep = vec![false; points.len()];
    for place in [0, last] {
        if let Some(flag) = keep.get_mut(place) {
            *flag = true;
        }
    }
    // Short runs keep the work linear: what is farther apart than this is not told apart anyway.
    const RUN: usize = 256;
    let mut stack: Vec<(usize, usize)> =
        (0..last).step_by(RUN).map(|start| (start, (start + RUN).min(last))).collect();
    for (_, end) in &stack {
        if let Some(flag) = keep.get_mut(*end) {
            *flag = true;
        }
    }
    while let Some((from, to)) = stack.pop() {
        let (Some(a), Some(b)) = (points.get(from), points.get(to)) else { continue };
        let farthest = (from + 1..to)
            .filter_map(|place| points.get(place).map(|point| (place, distance(*point, *a, *b))))
            .fold((0, tolerance), |best, next| if next.1 > best.1 { next } else { best });
        if farthest.0 > 0 {
            if let Some(flag) = keep.get_mut(farthest.0) {
                *flag = true;
            }
            stack.push((from, farthest.0));
            stack.push((farthest.0, to));
        }
    }
    points.iter().zip(keep).filter_map(|(point, kept)| kept.then_some(*point)).collect()
}

fn distance(point: Point, from: Point, to: Point) -> f64 {
    let (dx, dy) = (to[0] - from[0], to[1] - from[1]);
    let (px, py) = (point[0] - from[0], point[1] - from[1]);
    let length = dx * dx + dy * dy;
    let share = if length > 0.0 { ((px * dx + py * dy) / length).clamp(0.0, 1.0) } else { 0.0 };
    (px - share * dx).hypot(py - share * dy)
}

/// Points within a frame, none within `least` px of the one before it.
pub fn apart(points: impl Iterator<Item = Point>, frame: &Frame, least: f64) -> Vec<Point> {
    let mut kept: Vec<Point> = Vec::new();
    for point in points {
        let inside = (frame.left..=frame.right()).contains(&point[0])
            && (frame.top..=frame.bottom()).contains(&point[1]);
        let near = |last: &Point| (last[0] - point[0]).hypot(last[1] - point[1]) < least;
        if inside && !kept.last().is_some_and(near) {
            kept.push(point);
        }
    }
    kept
}

#[cfg(test)]
mod tests {
    use super::*;

    const FRAME: Frame = Frame { left: 0.0, top: 0.0, width: 10.0, height: 10.0 };

    #[test]
    fn a_peak_outside_is_cut_and_not_pressed_to_the_border() {
        let pieces = line(&[[0.0, 5.0], [4.0, -3.0], [8.0, 5.0]], &FRAME);
        assert_eq!(pieces, vec![vec![[0.0, 5.0], [2.5, 0.0]], vec![[5.5, 0.0], [8.0, 5.0]]]);
    }

    #[test]
    fn a_line_within_stays_one_piece() {
        let points = [[1.0, 1.0], [2.0, 3.0], [9.0, 9.0]];
        assert_eq!(line(&points, &FRAME), vec![points.to_vec()]);
        assert!(line(&[[20.0, 0.0], [30.0, 5.0]], &FRAME).is_empty());
        assert!(line(&[[1.0, f64::NAN], [3.0, 5.0]], &FRAME).is_empty());
    }

    #[test]
    fn an_area_is_cut_at_the_frame() {
        let cut = area(&[[-5.0, -5.0], [5.0, -5.0], [5.0, 5.0], [-5.0, 5.0]], &FRAME);
        let (mut doubled, followers) = (0.0, cut.iter().cycle().skip(1));
        for (a, b) in cut.iter().zip(followers) {
            doubled += a[0] * b[1] - b[0] * a[1];
        }
        assert!((doubled.abs() / 2.0 - 25.0).abs() < 1e-9, "5 by 5 stay");
    }

    #[test]
    fn thinning_keeps_ends_and_corners() {
        let mut points: Vec<Point> =
            (0..=600).map(|place| [f64::from(place) / 100.0, 0.0]).collect();
        points.push([6.0, 8.0]);
        let thinned = thin(&points, 0.05);
        assert_eq!(thinned.first(), Some(&[0.0, 0.0]));
        assert_eq!(thinned.last(), Some(&[6.0, 8.0]));
        assert!(thinned.contains(&[6.0, 0.0]) && thinned.len() < 8);
    }
}
