//! Progress of a study on standard error: how many runs, how fast, how long to go.

use super::streams;
use crate::analysis::study::work::Watch;
use std::time::{Duration, Instant};

/// Silence before the first line.
const PATIENCE: Duration = Duration::from_secs(1);

/// Time between two lines on a terminal.
const PERIOD: Duration = Duration::from_millis(200);

/// Time between two lines in a log.
const LOG_PERIOD: Duration = Duration::from_secs(10);

/// Shows how far a study has come.
#[derive(Debug)]
pub struct StudyProgress {
    name: String,
    quiet: bool,
    terminal: bool,
    started: Instant,
    last: Option<Instant>,
    done: usize,
}

impl StudyProgress {
    /// For a study; a terminal sees one line that changes, a log a line now and then.
    pub fn new(name: &str, quiet: bool) -> Self {
        Self {
            name: name.to_owned(),
            quiet,
            terminal: streams::is_watched(),
            started: Instant::now(),
            last: None,
            done: 0,
        }
    }

    /// Runs finished so far, those known from before included.
    pub fn done(&self) -> usize {
        self.done
    }

    /// Takes the line away.
    pub fn end(&self) {
        if self.terminal && self.last.is_some() {
            streams::tell(&format!("\r{:78}\r", ""));
        }
    }
}

impl Watch for StudyProgress {
    fn at(&mut self, done: usize, kept: usize, total: usize) {
        self.done = done;
        if self.quiet {
            return;
        }
        let now = Instant::now();
        let (patience, period) =
            if self.terminal { (PATIENCE, PERIOD) } else { (LOG_PERIOD, LOG_PERIOD) };
        let since = self.last.map_or(now - self.started, |last| now - last);
        let wait = if self.last.is_some() { period } else { patience };
        if since < wait {
            return;
        }
        self.last = Some(now);
        let seconds = (now - self.started).as_secs_f64();
        let made = done.saturating_sub(kept);
        let rate = made as f64 / seconds;
        let mut line = format!("{}: {done} of {total} runs", self.name);
        if made > 0 {
            let left = total.saturating_sub(done) as f64 / rate;
            let digits = usize::from(rate < 10.0);
            line.push_str(&format!(", {rate:.digits$} a second, about {} to go", time(left)));
        }
        if self.terminal {
            streams::tell(&format!("\r{line:78}"));
        } else {
            streams::tell(&format!("{line}\n"));
        }
    }
}

/// A time to wait for.
fn time(seconds: f64) -> String {
    if seconds < 120.0 {
        format!("{seconds:.0} s")
    } else if seconds < 7200.0 {
        format!("{:.0} min", seconds / 60.0)
    } else {
        format!("{:.1} h", seconds / 3600.0)
    }
}
