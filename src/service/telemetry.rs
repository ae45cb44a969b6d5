//! Logs and metrics of the process.

use std::io::{self, Write};
use std::sync::{Arc, Condvar, Mutex, OnceLock, PoisonError};
use std::thread::JoinHandle;
use std::time::Duration;

use metrics::gauge;
use metrics_exporter_prometheus::{Matcher, PrometheusBuilder, PrometheusHandle};
use tracing::Level;
use tracing_subscriber::fmt::MakeWriter;

use super::settings::LogFormat;

/// Bucket bounds of the request durations, s: from a single evaluation to the default deadline.
const SECONDS: [f64; 16] =
    [1e-4, 2.5e-4, 5e-4, 1e-3, 2.5e-3, 5e-3, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1.0, 2.5, 10.0, 30.0];

/// The process's metrics. The first call sets them up.
pub fn metrics_handle() -> &'static PrometheusHandle {
    static HANDLE: OnceLock<PrometheusHandle> = OnceLock::new();
    HANDLE.get_or_init(|| {
        let builder = PrometheusBuilder::new();
        let builder = builder
            .set_buckets_for_metric(Matcher::Full("http_request_duration_seconds".into()), &SECONDS)
            .unwrap_or_else(|_| PrometheusBuilder::new());
        let recorder = builder.build_recorder();
        let handle = recorder.handle();
        // Refused only if the embedding program has a recorder of its own, which then gets the metrics.
        let _refused = metrics::set_global_recorder(recorder);
        metrics::describe_counter!("http_requests_total", "Requests answered.");
        metrics::describe_histogram!(
            "http_request_duration_seconds",
            "Seconds from a request's head to its answer's end."
        );
        metrics::describe_gauge!("http_requests_in_flight", "Requests being worked on.");
        metrics::describe_gauge!("dribble_risk_build_info", "Always 1; the label tells the version.");
        gauge!("dribble_risk_build_info", "version" => env!("CARGO_PKG_VERSION")).set(1.0);
        handle
    })
}

/// Starts logging to standard output. The lines still held are written when the guard is dropped.
#[must_use]
pub fn start_logging(format: LogFormat) -> LogGuard {
    let (lines, guard) = Lines::to(io::stdout());
    let builder = tracing_subscriber::fmt().with_max_level(Level::INFO).with_writer(lines);
    let already = match format {
        LogFormat::Text => builder.with_ansi(false).try_init().is_err(),
        LogFormat::Json => builder
            .json()
            .flatten_event(true)
            .with_current_span(false)
            .with_span_list(false)
            .try_init()
            .is_err(),
    };
    if !already {
        std::panic::set_hook(Box::new(|panic| {
            let place = panic.location().map(ToString::to_string).unwrap_or_default();
            let said = panic.payload_as_str().unwrap_or("no message");
            tracing::error!(target: "panic", place, message = said);
        }));
    }
    guard
}

/// Log lines are dropped, and counted, beyond this many bytes waiting to be written.
const MOST_WAITING: usize = 4 * 1024 * 1024;

/// Log lines on their way out: appended to a buffer by whoever logs, written by one thread, many at a time.
#[derive(Clone)]
struct Lines(Arc<Buffer>);

#[derive(Default)]
struct Buffer {
    waiting: Mutex<Waiting>,
    wake: Condvar,
}

#[derive(Default)]
struct Waiting {
    text: Vec<u8>,
    dropped: u64,
    closed: bool,
}

/// Writes the lines still held when dropped.
#[derive(Debug)]
pub struct LogGuard {
    buffer: std::sync::Weak<Buffer>,
    writer: Option<JoinHandle<()>>,
}

impl std::fmt::Debug for Buffer {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str("Buffer")
    }
}

impl Lines {
    fn to(target: impl Write + Send + 'static) -> (Self, LogGuard) {
        let buffer = Arc::new(Buffer::default());
        let guard_side = Arc::downgrade(&buffer);
        let writer_side = Arc::clone(&buffer);
        let writer = std::thread::Builder::new()
            .name("log".into())
            .spawn(move || write_out(&writer_side, target))
            .ok();
        (Self(buffer), LogGuard { buffer: guard_side, writer })
    }
}

/// Lines gather for this long before they are written: one system call for many.
const GATHER: Duration = Duration::from_millis(5);

fn write_out(buffer: &Buffer, mut target: impl Write) {
    let mut text = Vec::new();
    loop {
        let mut waiting = buffer.waiting.lock().unwrap_or_else(PoisonError::into_inner);
        while waiting.text.is_empty() && !waiting.closed {
            waiting = buffer.wake.wait(waiting).unwrap_or_else(PoisonError::into_inner);
        }
        if !waiting.closed {
            drop(waiting);
            std::thread::sleep(GATHER);
            waiting = buffer.waiting.lock().unwrap_or_else(PoisonError::into_inner);
        }
        std::mem::swap(&mut text, &mut waiting.text);
        let dropped = std::mem::take(&mut waiting.dropped);
        let closed = waiting.closed;
        drop(waiting);
        // A log that cannot be written has nowhere to say so.
        let _unsaid = target.write_all(&text);
        if dropped > 0 {
            let _unsaid = writeln!(target, "{{\"dropped_log_lines\":{dropped}}}");
        }
        let _unsaid = target.flush();
        text.clear();
        if closed {
            return;
        }
    }
}

impl Drop for LogGuard {
    fn drop(&mut self) {
        if let Some(buffer) = self.buffer.upgrade() {
            buffer.waiting.lock().unwrap_or_else(PoisonError::into_inner).closed = true;
            buffer.wake.notify_all();
        }
        if let Some(writer) = self.writer.take() {
            let _panicked = writer.join();
        }
    }
}

impl Write for Lines {
    fn write(&mut self, line: &[u8]) -> io::Result<usize> {
        let mut waiting = self.0.waiting.lock().unwrap_or_else(PoisonError::into_inner);
        if waiting.text.len() + line.len() > MOST_WAITING {
            waiting.dropped += 1;
        } else {
            let first = waiting.text.is_empty();
            waiting.text.extend_from_slice(line);
            if first {
                self.0.wake.notify_one();
            }
        }
        Ok(line.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

impl<'a> MakeWriter<'a> for Lines {
    type Writer = Self;

    fn make_writer(&'a self) -> Self {
        self.clone()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[derive(Clone, Default)]
    struct Kept(Arc<Mutex<Vec<u8>>>);

    impl Write for Kept {
        fn write(&mut self, text: &[u8]) -> io::Result<usize> {
            self.0.lock().unwrap().extend_from_slice(text);
            Ok(text.len())
        }

        fn flush(&mut self) -> io::Result<()> {
            Ok(())
        }
    }

    #[test]
    fn every_line_is_written_before_the_guard_is_gone() {
        let kept = Kept::default();
        let (lines, guard) = Lines::to(kept.clone());
        for number in 0..1000 {
            writeln!(lines.clone(), "{number}").unwrap();
        }
        drop(guard);
        let written = String::from_utf8(kept.0.lock().unwrap().clone()).unwrap();
        assert_eq!(written.lines().count(), 1000);
        assert_eq!(written.lines().last(), Some("999"));
    }

    #[test]
    fn lines_beyond_the_buffer_are_counted() {
        let kept = Kept::default();
        let (mut lines, guard) = Lines::to(kept.clone());
        lines.write_all(&vec![b'x'; MOST_WAITING + 1]).unwrap();
        lines.write_all(b"fits\n").unwrap();
        drop(guard);
        let written = String::from_utf8(kept.0.lock().unwrap().clone()).unwrap();
        assert_eq!(written, "fits\n{\"dropped_log_lines\":1}\n");
    }
}
