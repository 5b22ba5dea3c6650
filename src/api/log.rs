//! The log: one JSON object a line on standard output, written by a thread of its own so that a
//! reader who stops reading never stops the service. Bodies and query values are never logged.

use std::io::{self, Write};
use std::iter;
use std::sync::Arc;
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::mpsc::{Receiver, SyncSender, TrySendError, sync_channel};
use std::thread;
use std::time::{Duration, Instant, SystemTime, UNIX_EPOCH};

use serde::ser::SerializeMap;
use serde::{Serialize, Serializer};
use serde_json::Value;

/// Lines that may wait for the writer; beyond it they are dropped and counted.
const WAITING: usize = 4096;
/// How long the writer lets further lines gather after it has written: a wake-up for each line
/// would cost more than the line.
const GATHERING: Duration = Duration::from_millis(20);

/// A handle on the log; cheap to clone.
#[derive(Clone)]
pub struct Log {
    lines: Option<SyncSender<Line>>,
    dropped: Arc<AtomicU64>,
}

/// One line.
struct Entry<'a> {
    time: &'a str,
    level: &'a str,
    event: &'a str,
    members: &'a [(&'a str, Value)],
}

impl Serialize for Entry<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        for (name, text) in [("time", self.time), ("level", self.level), ("event", self.event)] {
            map.serialize_entry(name, text)?;
        }
        for (name, value) in self.members {
            map.serialize_entry(name, value)?;
        }
        map.end()
    }
}

/// What the writer is told.
enum Line {
    Text(String),
    /// Write out what has come before, and say so.
    Flush(SyncSender<()>),
}

/// How long the end of the process waits for its last lines to be written.
const CLOSING: Duration = Duration::from_secs(1);

impl Log {
    /// A log that writes nothing.
    pub fn silent() -> Log {
        Log { lines: None, dropped: Arc::default() }
    }

    /// A log over any writer.
    pub fn to(sink: impl Write + Send + 'static) -> io::Result<Log> {
        let (lines, waiting) = sync_channel(WAITING);
        let dropped = Arc::new(AtomicU64::new(0));
        let counter = Arc::clone(&dropped);
        thread::Builder::new().name("log".into()).spawn(move || write(&waiting, sink, &counter))?;
        Ok(Log { lines: Some(lines), dropped })
    }

    /// Writes one line with the given members after the time and the level.
    pub fn event(&self, level: &str, event: &str, members: &[(&str, Value)]) {
        let Some(lines) = &self.lines else { return };
        let time = timestamp(SystemTime::now());
        let entry = Entry { time: &time, level, event, members };
        // Text keys only: this cannot fail.
        let text = serde_json::to_string(&entry).unwrap_or_default();
        if lines.try_send(Line::Text(text)).is_err() {
            self.dropped.fetch_add(1, Ordering::Relaxed);
        }
    }

    /// Waits shortly until what was logged so far is written.
    pub fn close(&self) {
        let Some(lines) = &self.lines else { return };
        let (done, is_done) = sync_channel(1);
        // A writer that is stuck must not keep the process from ending.
        let end = Instant::now() + CLOSING;
        while let Err(TrySendError::Full(_)) = lines.try_send(Line::Flush(done.clone())) {
            if Instant::now() > end {
                return;
            }
            thread::sleep(GATHERING);
        }
        let _ = is_done.recv_timeout(end.saturating_duration_since(Instant::now()));
    }
}

fn write(waiting: &Receiver<Line>, sink: impl Write, dropped: &AtomicU64) {
    let mut sink = io::BufWriter::new(sink);
    while let Ok(first) = waiting.recv() {
        let mut flushed = Vec::new();
        for line in iter::once(first).chain(waiting.try_iter()) {
            match line {
                // A log that cannot be written is no reason to stop serving.
                Line::Text(text) => drop(writeln!(sink, "{text}")),
                Line::Flush(done) => flushed.push(done),
            }
        }
        let lost = dropped.swap(0, Ordering::Relaxed);
        if lost > 0 {
            drop(writeln!(sink, "{{\"level\":\"warn\",\"event\":\"log lines dropped\",\"count\":{lost}}}"));
        }
        drop(sink.flush());
        for done in flushed {
            // Whoever asked may have stopped waiting.
            let _ = done.send(());
        }
        thread::sleep(GATHERING);
    }
}

/// RFC 3339 in UTC with milliseconds. The calendar follows from counting days in eras of 400 years.
pub fn timestamp(time: SystemTime) -> String {
    let since = time.duration_since(UNIX_EPOCH).unwrap_or_default();
    let (seconds, millis) = (since.as_secs(), since.subsec_millis());
    let (days, second) = (seconds / 86_400, seconds % 86_400);
    let shifted = days + 719_468;
    let (era, day_of_era) = (shifted / 146_097, shifted % 146_097);
    let year_of_era = (day_of_era - day_of_era / 1_460 + day_of_era / 36_524 - day_of_era / 146_096) / 365;
    let day_of_year = day_of_era - (365 * year_of_era + year_of_era / 4 - year_of_era / 100);
    let month_index = (5 * day_of_year + 2) / 153;
    let day = day_of_year - (153 * month_index + 2) / 5 + 1;
    let month = if month_index < 10 { month_index + 3 } else { month_index - 9 };
    let year = year_of_era + era * 400 + u64::from(month <= 2);
    let (hour, minute, second) = (second / 3_600, second / 60 % 60, second % 60);
    format!("{year:04}-{month:02}-{day:02}T{hour:02}:{minute:02}:{second:02}.{millis:03}Z")
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::time::Duration;

    #[test]
    fn times_are_written_as_rfc_3339() {
        for (seconds, text) in [
            (0, "1970-01-01T00:00:00.000Z"),
            (951_782_400, "2000-02-29T00:00:00.000Z"),
            (4_107_542_399, "2100-02-28T23:59:59.000Z"),
            (4_107_542_400, "2100-03-01T00:00:00.000Z"),
            (1_924_991_999, "2030-12-31T23:59:59.000Z"),
        ] {
            assert_eq!(timestamp(UNIX_EPOCH + Duration::from_secs(seconds)), text);
        }
    }
}
