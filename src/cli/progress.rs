//! One line of progress on standard error, for runs that a person waits for.

use super::streams;
use std::time::{Duration, Instant};

/// Silence before the first line.
const PATIENCE: Duration = Duration::from_secs(1);

/// Time between two lines.
const PERIOD: Duration = Duration::from_millis(200);

/// Shows how far a run has come.
#[derive(Debug)]
pub struct Progress {
    shown: bool,
    watched: bool,
    started: Instant,
    last: Instant,
    duration: f64,
}

impl Progress {
    /// For a run of `duration` seconds; nothing is shown when nobody watches.
    pub fn new(duration: f64, quiet: bool) -> Self {
        let now = Instant::now();
        let watched = !quiet && streams::is_watched();
        Self { shown: false, watched, started: now, last: now, duration }
    }

    /// Told the time reached.
    pub fn at(&mut self, time: f64) {
        if !self.watched {
            return;
        }
        let now = Instant::now();
        if now - self.started < PATIENCE || (self.shown && now - self.last < PERIOD) {
            return;
        }
        self.last = now;
        self.shown = true;
        let share = (time / self.duration).clamp(0.0, 1.0);
        let left = if share > 0.0 {
            let seconds = (now - self.started).as_secs_f64() * (1.0 - share) / share;
            format!(", about {seconds:.0} s to go")
        } else {
            String::new()
        };
        let percent = 100.0 * share;
        streams::tell(&format!("\r{percent:3.0} % of {} s{left}    ", self.duration));
    }

    /// Takes the line away.
    pub fn end(self) {
        if self.shown {
            streams::tell(&format!("\r{:60}\r", ""));
        }
    }
}
