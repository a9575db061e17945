//! The run-time form of all signals of a file: values, limits, slopes and kinks.
//!
//! [`SignalBank`] holds one slot for each named signal and one for each place of the file where
//! a signal stands. A place that names a signal refers to its slot. Protections override slots
//! through [`Overrides`], which belong to a run, so that the bank itself never changes.
//!
//! Within a segment between kinks an integrator asks [`SignalBank::value_in`], which stays on
//! the branch that is live just after the segment's start, up to and beyond its end.

pub use super::overrides::Overrides;
use super::shape::{Lines, Moment, Shape};
use super::{NamedSignal, Signal};
use std::collections::BTreeMap;

/// A slot of a [`SignalBank`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct SlotId(pub usize);

/// All signals of a file that the equations use.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct SignalBank {
    courses: Vec<Course>,
    paths: BTreeMap<String, SlotId>,
    named: usize,
}

/// A course with its members.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Course {
    Plain(Shape),
    Reference(SlotId),
    Sum(Vec<Course>),
    Product(Vec<Course>),
}

impl SignalBank {
    /// A bank with the named signals of the file and no places yet.
    pub fn new(named: &[NamedSignal]) -> Self {
        let mut bank = Self { courses: Vec::new(), paths: BTreeMap::new(), named: named.len() };
        for (index, entry) in named.iter().enumerate() {
            bank.paths.insert(format!("signals.{}", entry.name), SlotId(index));
        }
        bank.courses = named.iter().map(|entry| bank.course(&entry.signal)).collect();
        // A circle of names is refused where the file is checked; here it must only not hang.
        let circles: Vec<usize> = (0..named.len()).filter(|index| bank.circular(*index)).collect();
        for index in circles {
            bank.courses[index] = Course::Plain(Shape::Constant(f64::NAN));
        }
        bank
    }

    /// Adds a place of the file (a path like `motors.line_motor.scale`) and its signal.
    pub fn add(&mut self, path: &str, signal: &Signal) -> SlotId {
        let id = SlotId(self.courses.len());
        self.courses.push(self.course(signal));
        self.paths.insert(path.to_owned(), id);
        id
    }

    /// The slot of a place or of `signals.NAME`.
    pub fn find(&self, path: &str) -> Option<SlotId> {
        self.paths.get(path).copied()
    }

    /// The paths of all slots, named signals included.
    pub fn paths(&self) -> impl Iterator<Item = &str> {
        self.paths.keys().map(String::as_str)
    }

    /// The overrides of a run that begins.
    pub fn no_overrides(&self) -> Overrides {
        Overrides::default()
    }

    /// The value at `t`, continuous from the right.
    pub fn value(&self, id: SlotId, t: f64, o: &Overrides) -> f64 {
        self.slot_value(id, t, Moment::after(t), o)
    }

    /// The limit of the value at `t` from the left.
    pub fn value_before(&self, id: SlotId, t: f64, o: &Overrides) -> f64 {
        self.slot_value(id, t, Moment::before(t), o)
    }

    /// The value at `t` of the branch that is live just after `segment_start`.
    #[inline]
    pub fn value_in(&self, id: SlotId, t: f64, segment_start: f64, o: &Overrides) -> f64 {
        self.slot_value(id, t, Moment::after(segment_start), o)
    }

    /// The derivative at `t` from the right.
    pub fn slope(&self, id: SlotId, t: f64, o: &Overrides) -> f64 {
        self.slot_slope(id, t, Moment::after(t), o)
    }

    /// The derivative at `t` of the branch that is live just after `segment_start`.
    pub fn slope_in(&self, id: SlotId, t: f64, segment_start: f64, o: &Overrides) -> f64 {
        self.slot_slope(id, t, Moment::after(segment_start), o)
    }

    /// The first corner or jump after `t` of any place in use.
    pub fn next_kink(&self, t: f64, o: &Overrides) -> Option<f64> {
        self.places().filter_map(|id| self.slot_next_kink(id, t, o)).reduce(f64::min)
    }

    /// The first corner or jump after `t` of one slot.
    pub fn next_kink_of(&self, id: SlotId, t: f64, o: &Overrides) -> Option<f64> {
        self.slot_next_kink(id, t, o)
    }

    /// The value where it does not change between `from` and `to`.
    pub fn constant_on(&self, id: SlotId, from: f64, to: f64, o: &Overrides) -> Option<f64> {
        if let Some(kink) = o.next_kink(id, from)
            && kink < to
        {
            return None;
        }
        if let Some(entry) = o.live(id, Moment::after(from)) {
            let line = entry.line(Moment::after(from));
            return (line.slope() == 0.0).then(|| line.value(from));
        }
        self.course_of(id).and_then(|course| self.course_constant(course, from, to, o))
    }

    /// The largest step that sees every sine (a sixth of its period) and gust (a fiftieth of its
    /// length) that is live between `from` and `to`.
    pub fn step_cap(&self, from: f64, to: f64, o: &Overrides) -> Option<f64> {
        self.places().filter_map(|id| self.step_cap_of(id, from, to, o)).reduce(f64::min)
    }

    /// The same for one slot.
    pub(super) fn step_cap_of(&self, id: SlotId, from: f64, to: f64, o: &Overrides) -> Option<f64> {
        if o.live(id, Moment::after(from)).is_some() {
            return None;
        }
        self.course_of(id).and_then(|course| self.course_cap(course, from, to, o))
    }

    pub(super) fn course_of(&self, id: SlotId) -> Option<&Course> {
        self.courses.get(id.0)
    }

    fn places(&self) -> impl Iterator<Item = SlotId> {
        (self.named..self.courses.len()).map(SlotId)
    }

    fn course(&self, signal: &Signal) -> Course {
        let members = |list: &[Signal]| list.iter().map(|member| self.course(member)).collect();
        Course::Plain(match signal {
            Signal::Named(name) => match self.find(&format!("signals.{name}")) {
                Some(id) => return Course::Reference(id),
                None => Shape::Constant(f64::NAN),
            },
            Signal::Sum(list) => return Course::Sum(members(list)),
            Signal::Product { members: list, .. } => return Course::Product(members(list)),
            Signal::Constant(value) => Shape::Constant(*value),
            Signal::Step { at, from, to } => {
                Shape::Lines(Lines::through(&[[*at, *from], [*at, *to]]))
            }
            Signal::Ramp { start, end, from, to } => {
                Shape::Lines(Lines::through(&[[*start, *from], [*end, *to]]))
            }
            Signal::Pulse { start, end, base, peak } => Shape::Lines(Lines::through(&[
                [*start, *base],
                [*start, *peak],
                [*end, *peak],
                [*end, *base],
            ])),
            Signal::Points(points) | Signal::Table { rows: points, .. } => {
                Shape::Lines(Lines::through(points))
            }
            Signal::Sine { mean, amplitude, frequency, phase } => {
                Shape::sine(*mean, *amplitude, *frequency, *phase)
            }
            Signal::Turbulence(spectrum) => Shape::turbulence(spectrum),
            Signal::CoherentGust { start, hub_wind, rise, rise_time } => Shape::CoherentGust {
                start: *start,
                end: start + rise_time,
                hub_wind: *hub_wind,
                rise: *rise,
            },
            Signal::ExtremeGust { start, hub_wind, magnitude } => {
                Shape::gust(*start, *hub_wind, *magnitude)
            }
        })
    }

    fn circular(&self, start: usize) -> bool {
        let mut seen = vec![false; self.courses.len()];
        let mut pending = vec![&self.courses[start]];
        while let Some(course) = pending.pop() {
            match course {
                Course::Plain(_) => {}
                Course::Sum(list) | Course::Product(list) => pending.extend(list),
                Course::Reference(SlotId(index)) if *index == start => return true,
                Course::Reference(SlotId(index)) => {
                    if !std::mem::replace(&mut seen[*index], true) {
                        pending.push(&self.courses[*index]);
                    }
                }
            }
        }
        false
    }

    #[inline]
    fn slot_value(&self, id: SlotId, t: f64, at: Moment, o: &Overrides) -> f64 {
        if let Some(entry) = o.live(id, at) {
            return entry.line(at).value(t);
        }
        self.course_of(id).map_or(f64::NAN, |course| self.course_value(course, t, at, o))
    }

    #[inline]
    fn course_value(&self, course: &Course, t: f64, at: Moment, o: &Overrides) -> f64 {
        match course {
            Course::Plain(shape) => shape.value(t, at),
            Course::Reference(id) => self.slot_value(*id, t, at, o),
            Course::Sum(list) => {
                list.iter().map(|member| self.course_value(member, t, at, o)).sum()
            }
            Course::Product(list) => {
                list.iter().map(|member| self.course_value(member, t, at, o)).product()
            }
        }
    }

    fn slot_slope(&self, id: SlotId, t: f64, at: Moment, o: &Overrides) -> f64 {
        if let Some(entry) = o.live(id, at) {
            return entry.line(at).slope();
        }
        self.course_of(id).map_or(f64::NAN, |course| self.course_slope(course, t, at, o))
    }

    fn course_slope(&self, course: &Course, t: f64, at: Moment, o: &Overrides) -> f64 {
        match course {
            Course::Plain(shape) => shape.slope(t, at),
            Course::Reference(id) => self.slot_slope(*id, t, at, o),
            Course::Sum(list) => {
                list.iter().map(|member| self.course_slope(member, t, at, o)).sum()
            }
            Course::Product(list) => {
                // The product rule, carried from member to member.
                let (_, slope) = list.iter().fold((1.0, 0.0), |(value, slope), member| {
                    let factor = self.course_value(member, t, at, o);
                    (value * factor, slope * factor + value * self.course_slope(member, t, at, o))
                });
                slope
            }
        }
    }

    fn slot_next_kink(&self, id: SlotId, t: f64, o: &Overrides) -> Option<f64> {
        let overriding = o.next_kink(id, t);
        if o.live(id, Moment::after(t)).is_some() {
            return overriding;
        }
        let own = self.course_of(id).and_then(|course| self.course_next_kink(course, t, o));
        own.into_iter().chain(overriding).reduce(f64::min)
    }

    fn course_next_kink(&self, course: &Course, t: f64, o: &Overrides) -> Option<f64> {
        match course {
            Course::Plain(shape) => shape.next_kink(t),
            Course::Reference(id) => self.slot_next_kink(*id, t, o),
            Course::Sum(list) | Course::Product(list) => list
                .iter()
                .filter_map(|member| self.course_next_kink(member, t, o))
                .reduce(f64::min),
        }
    }

    pub(super) fn course_constant(
        &self,
        course: &Course,
        from: f64,
        to: f64,
        o: &Overrides,
    ) -> Option<f64> {
        let member = |member| self.course_constant(member, from, to, o);
        match course {
            Course::Plain(shape) => shape.constant_on(from, to),
            Course::Reference(id) => self.constant_on(*id, from, to, o),
            Course::Sum(list) => list.iter().map(member).sum(),
            Course::Product(list) => {
                if list.iter().any(|factor| member(factor) == Some(0.0)) {
                    return Some(0.0);
                }
                list.iter().map(member).product()
            }
        }
    }

    fn course_cap(&self, course: &Course, from: f64, to: f64, o: &Overrides) -> Option<f64> {
        match course {
            Course::Plain(shape) => shape.cap(from, to),
            Course::Reference(id) => self.step_cap_of(*id, from, to, o),
            Course::Sum(list) | Course::Product(list) => list
                .iter()
                .filter_map(|member| self.course_cap(member, from, to, o))
                .reduce(f64::min),
        }
    }
}

#[cfg(test)]
#[path = "course_tests.rs"]
mod tests;
