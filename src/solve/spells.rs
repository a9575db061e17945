//! How long a gear slips at a stretch.
//!
//! A spell begins with a slip and ends when the gear has come back short of its peak for good:
//! it stays there for two zero-load periods and for twice the interval between the last two
//! slips, the same rule that says whether it is in step again at the end. A gear that has not
//! come back at the end of the run counts as slipping up to there.

/// The spells of slipping of one gear so far.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Spells {
    /// Zero-load natural period, s.
    period: f64,
    /// First slip of the spell that goes on.
    begun: Option<f64>,
    /// Its last slip.
    last: f64,
    /// Interval between its last two slips.
    interval: Option<f64>,
    /// Since when it is short of the peak, after its last slip.
    returned: Option<f64>,
    /// Start of the longest spell, s.
    pub longest_start: f64,
    /// Its length, s; 0 when it never slipped.
    pub longest: f64,
    /// Length of all spells, s.
    pub total: f64,
}

impl Spells {
    /// No spell yet, for a gear with this zero-load natural period.
    pub fn new(period: f64) -> Self {
        Self { period: if period.is_finite() { period } else { 0.0 }, ..Self::default() }
    }

    /// Notes a slip.
    pub fn slip(&mut self, time: f64) {
        self.settle(time);
        match self.begun {
            Some(_) => self.interval = Some(time - self.last),
            None => {
                self.begun = Some(time);
                self.interval = None;
            }
        }
        self.last = time;
        self.returned = None;
    }

    /// Notes that the load angle has come back short of the peak.
    pub fn short(&mut self, time: f64) {
        if self.begun.is_some() {
            self.returned = Some(time);
        }
    }

    /// Notes that the load angle has gone past the peak.
    pub fn past(&mut self, time: f64) {
        self.settle(time);
        self.returned = None;
    }

    /// Ends the spell that goes on at the end of the run.
    pub fn end(&mut self, time: f64) {
        self.settle(time);
        self.close(time);
    }

    /// Ends the spell where the gear has been back long enough.
    fn settle(&mut self, time: f64) {
        let needed = 2.0 * self.period.max(self.interval.unwrap_or(0.0));
        if let Some(returned) = self.returned.filter(|returned| time - returned >= needed) {
            self.close(returned);
        }
    }

    fn close(&mut self, end: f64) {
        let Some(begun) = self.begun.take() else { return };
        self.returned = None;
        let length = end - begun;
        self.total += length;
        if length > self.longest {
            self.longest = length;
            self.longest_start = begun;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn two_spells_are_told_apart_and_the_longest_kept() {
        let mut spells = Spells::new(0.1);
        for time in [1.0, 1.25] {
            spells.slip(time);
            spells.short(time + 0.05);
            spells.past(time + 0.2);
        }
        spells.short(1.5);
        // Back for 3 s: a new spell. Seen only when the next one begins.
        spells.past(4.5);
        spells.slip(4.75);
        spells.short(4.875);
        spells.end(20.0);
        assert_eq!((spells.longest_start, spells.longest, spells.total), (1.0, 0.5, 0.625));
    }

    #[test]
    fn a_gear_that_slips_on_counts_to_the_end() {
        let mut spells = Spells::new(0.1);
        spells.slip(2.0);
        spells.short(2.25);
        spells.end(2.3125);
        assert_eq!((spells.longest_start, spells.longest), (2.0, 0.3125));
        assert_eq!(Spells::new(f64::INFINITY).longest, 0.0);
    }
}
