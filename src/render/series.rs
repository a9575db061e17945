//! `series.csv`: the rows of the time series, written as they are made.

use super::number;
use crate::component::channel::Channel;
use crate::solve::RowSink;
use std::io::{self, Write};
use std::sync::atomic::{AtomicBool, Ordering};

/// Writes rows as they come, so that memory stays flat however long the run is.
///
/// A row cannot fail in the hands of the integrator: the first fault of the disk is kept,
/// the run is asked to stop, and [`SeriesWriter::finish`] tells it.
pub struct SeriesWriter<'a, W: Write> {
    out: W,
    line: Vec<u8>,
    fault: Option<io::Error>,
    stop: Option<&'a AtomicBool>,
}

impl<'a, W: Write> SeriesWriter<'a, W> {
    /// Writes the header; `out` should be buffered, `stop` ends the run when the disk is full.
    pub fn new(out: W, channels: &[Channel], stop: Option<&'a AtomicBool>) -> Self {
        let mut writer = Self { out, line: Vec::new(), fault: None, stop };
        writer.line.extend_from_slice(b"time [s]");
        for channel in channels {
            // Names and units hold no comma and no quote: nothing to escape.
            writer.line.push(b',');
            writer.line.extend_from_slice(channel.name.as_bytes());
            writer.line.extend_from_slice(b" [");
            writer.line.extend_from_slice(channel.unit.as_bytes());
            writer.line.push(b']');
        }
        writer.write_line();
        writer
    }

    fn write_line(&mut self) {
        self.line.push(b'\n');
        if self.fault.is_none()
            && let Err(fault) = self.out.write_all(&self.line)
        {
            self.fault = Some(fault);
            if let Some(stop) = self.stop {
                stop.store(true, Ordering::Relaxed);
            }
        }
        self.line.clear();
    }

    /// Writes what is still in memory.
    ///
    /// # Errors
    /// The first fault met, now or in an earlier row.
    pub fn finish(mut self) -> io::Result<()> {
        match self.fault.take() {
            Some(fault) => Err(fault),
            None => self.out.flush(),
        }
    }
}

impl<W: Write> RowSink for SeriesWriter<'_, W> {
    fn row(&mut self, time: f64, values: &[f64]) {
        number::append(&mut self.line, time);
        for value in values {
            self.line.push(b',');
            number::append(&mut self.line, *value);
        }
        self.write_line();
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::component::channel::ChannelKind;
    use crate::quantity::Dimension;

    fn channels() -> Vec<Channel> {
        vec![Channel {
            name: "rotor.speed".to_owned(),
            kind: ChannelKind::BodySpeed(0),
            dimension: Dimension::Speed,
            unit: "rad/s",
        }]
    }

    #[test]
    fn a_row_is_a_line_and_what_is_not_finite_is_empty() {
        let mut bytes = Vec::new();
        let mut writer = SeriesWriter::new(&mut bytes, &channels(), None);
        writer.row(0.0, &[-0.0]);
        writer.row(0.002, &[f64::NAN]);
        writer.finish().unwrap();
        assert_eq!(
            String::from_utf8(bytes).unwrap(),
            "time [s],rotor.speed [rad/s]\n0,0\n0.002,\n"
        );
    }

    struct FullDisk;

    impl Write for FullDisk {
        fn write(&mut self, _: &[u8]) -> io::Result<usize> {
            Err(io::ErrorKind::StorageFull.into())
        }
        fn flush(&mut self) -> io::Result<()> {
            Ok(())
        }
    }

    #[test]
    fn a_full_disk_stops_the_run_and_is_told_at_the_end() {
        let stop = AtomicBool::new(false);
        let mut writer = SeriesWriter::new(FullDisk, &channels(), Some(&stop));
        writer.row(0.0, &[1.0]);
        assert!(stop.load(Ordering::Relaxed));
        assert_eq!(writer.finish().unwrap_err().kind(), io::ErrorKind::StorageFull);
    }
}
