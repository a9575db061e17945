//! `events.csv`: what happened during a run, in order of time.

use super::number;
use crate::results::Event;
use std::io::{self, Write};

/// Writes the events.
///
/// # Errors
/// The fault of the disk.
pub fn write(out: impl Write, events: &[Event]) -> io::Result<()> {
    let mut writer = csv::Writer::from_writer(out);
    writer.write_record(["time [s]", "kind", "of", "value", "unit", "text"])?;
    for event in events {
        let (time, value) = (number::plain(event.time), number::plain(event.value));
        let cells = [&time, event.kind.word(), &event.of, &value, event.unit, &event.text];
        writer.write_record(cells)?;
    }
    writer.flush()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::results::EventKind;

    #[test]
    fn a_text_with_commas_stays_one_cell() {
        let event = Event {
            time: 0.5,
            kind: EventKind::Slip,
            of: "gear".to_owned(),
            value: 12.0,
            unit: "rad/s",
            text: "slips forward, \"again\"".to_owned(),
        };
        let mut bytes = Vec::new();
        write(&mut bytes, &[event]).unwrap();
        assert_eq!(
            String::from_utf8(bytes).unwrap(),
            "time [s],kind,of,value,unit,text\n0.5,slip,gear,12,rad/s,\"slips forward, \"\"again\"\"\"\n"
        );
    }
}
