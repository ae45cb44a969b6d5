//! What the operator may set: flags, each with an environment variable, parsed into types that cannot hold a bad
//! value.

use std::net::SocketAddr;
use std::num::NonZeroUsize;
use std::path::PathBuf;
use std::str::FromStr;
use std::time::Duration;

use clap::{Args, ValueEnum};
use http::HeaderValue;

/// The settings of the server.
#[derive(Debug, Clone, Args)]
#[command(next_help_heading = "Settings")]
pub struct Settings {
    /// Address and port to listen on; port 0 picks a free one
    #[arg(long, env = "DRIBBLE_RISK_LISTEN", default_value = "127.0.0.1:8080", global = true)]
    pub listen: SocketAddr,

    /// File to write the address to, once bound
    #[arg(long, env = "DRIBBLE_RISK_ADDRESS_FILE", value_name = "FILE", global = true)]
    pub address_file: Option<PathBuf>,

    /// Path under which a proxy exposes the service, e.g. /lips
    #[arg(long, env = "DRIBBLE_RISK_BASE_PATH", default_value = "", value_name = "PATH", global = true)]
    pub base_path: BasePath,

    /// Threads that answer requests [default: one per core]
    #[arg(long, env = "DRIBBLE_RISK_WORKERS", value_name = "N", value_parser = count::<1024>, global = true)]
    pub workers: Option<NonZeroUsize>,

    /// Largest request body taken, in bytes
    #[arg(long, env = "DRIBBLE_RISK_MAX_BODY_BYTES", default_value = "8388608", value_name = "N", value_parser = count::<1_073_741_824>, global = true)]
    pub max_body_bytes: NonZeroUsize,

    /// Seconds from the head of a request to the head of its answer
    #[arg(
        long,
        env = "DRIBBLE_RISK_REQUEST_TIMEOUT_S",
        default_value = "30",
        value_name = "S",
        global = true
    )]
    pub request_timeout_s: Seconds,

    /// Requests worked on at a time; more are turned away with 503
    #[arg(long, env = "DRIBBLE_RISK_MAX_IN_FLIGHT", default_value = "512", value_name = "N", value_parser = count::<1_000_000>, global = true)]
    pub max_in_flight: NonZeroUsize,

    /// Long computations (sweeps and the like) worked on at a time [default: one per core]
    #[arg(long, env = "DRIBBLE_RISK_MAX_HEAVY", value_name = "N", value_parser = count::<1_000_000>, global = true)]
    pub max_heavy: Option<NonZeroUsize>,

    /// Largest number of points that one request may ask for
    #[arg(long, env = "DRIBBLE_RISK_MAX_POINTS", default_value = "10000000", value_name = "N", value_parser = count::<1_000_000_000>, global = true)]
    pub max_points: NonZeroUsize,

    /// Seconds that requests in flight get to finish after SIGTERM
    #[arg(long, env = "DRIBBLE_RISK_SHUTDOWN_S", default_value = "10", value_name = "S", global = true)]
    pub shutdown_s: Seconds,

    /// Web origin that may call from a browser, scheme and host (and port); repeat for several, * for any
    #[arg(
        long,
        env = "DRIBBLE_RISK_CORS_ORIGIN",
        value_delimiter = ',',
        value_name = "ORIGIN",
        global = true
    )]
    pub cors_origin: Vec<Origin>,

    /// File of bearer tokens, one a line, re-read on SIGHUP; when set, every call under /v1 needs one
    #[arg(long, env = "DRIBBLE_RISK_BEARER_TOKEN_FILE", value_name = "FILE", global = true)]
    pub bearer_token_file: Option<PathBuf>,

    /// How log lines are written
    #[arg(long, env = "DRIBBLE_RISK_LOG_FORMAT", default_value = "text", value_enum, global = true)]
    pub log_format: LogFormat,
}

impl Settings {
    /// Threads that answer requests.
    #[must_use]
    pub fn worker_count(&self) -> usize {
        self.workers.map_or_else(cores, NonZeroUsize::get)
    }

    /// Long computations worked on at a time.
    #[must_use]
    pub fn heavy_count(&self) -> usize {
        self.max_heavy.map_or_else(cores, NonZeroUsize::get)
    }
}

impl Default for Settings {
    fn default() -> Self {
        Self {
            listen: SocketAddr::from(([127, 0, 0, 1], 8080)),
            address_file: None,
            base_path: BasePath(String::new()),
            workers: None,
            max_body_bytes: NonZeroUsize::MIN.saturating_add(8 * 1024 * 1024 - 1),
            request_timeout_s: Seconds(Duration::from_secs(30)),
            max_in_flight: NonZeroUsize::MIN.saturating_add(511),
            max_heavy: None,
            max_points: NonZeroUsize::MIN.saturating_add(10_000_000 - 1),
            shutdown_s: Seconds(Duration::from_secs(10)),
            cors_origin: Vec::new(),
            bearer_token_file: None,
            log_format: LogFormat::Text,
        }
    }
}

pub(crate) fn cores() -> usize {
    std::thread::available_parallelism().map_or(1, NonZeroUsize::get)
}

/// Lines for people, or one JSON object a line.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum LogFormat {
    /// Lines for people.
    Text,
    /// One JSON object a line.
    Json,
}

/// A path prefix: empty, or `/` and segments of unreserved characters without a slash at the end.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct BasePath(String);

impl BasePath {
    /// The prefix as it is put in front of paths; empty at the root.
    #[must_use]
    pub fn as_str(&self) -> &str {
        &self.0
    }
}

impl FromStr for BasePath {
    type Err = String;

    fn from_str(text: &str) -> Result<Self, String> {
        let path = text.trim_end_matches('/');
        let plain = |c: char| c.is_ascii_alphanumeric() || matches!(c, '-' | '.' | '_' | '~');
        let good = path.is_empty()
            || path.strip_prefix('/').is_some_and(|rest| {
                rest.split('/').all(|segment| {
                    !segment.is_empty() && segment != "." && segment != ".." && segment.chars().all(plain)
                })
            });
        if good {
            Ok(Self(path.into()))
        } else {
            Err("must start with / and have segments of letters, digits and - . _ ~ only, e.g. /lips".into())
        }
    }
}

/// A time span of 0.001 s to one day.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Seconds(Duration);

impl Seconds {
    /// The time span.
    #[must_use]
    pub const fn duration(self) -> Duration {
        self.0
    }
}

impl FromStr for Seconds {
    type Err = String;

    fn from_str(text: &str) -> Result<Self, String> {
        match text.parse::<f64>() {
            Ok(seconds) if (0.001..=86_400.0).contains(&seconds) => {
                Ok(Self(Duration::from_secs_f64(seconds)))
            }
            _ => Err("must be a number of seconds from 0.001 to 86400".into()),
        }
    }
}

/// A web origin as browsers send it, or `*` for any.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Origin(HeaderValue);

impl Origin {
    /// The origin as a header value.
    #[must_use]
    pub const fn value(&self) -> &HeaderValue {
        &self.0
    }

    /// Whether it stands for any origin.
    #[must_use]
    pub fn is_any(&self) -> bool {
        self.0.as_bytes() == b"*"
    }
}

impl FromStr for Origin {
    type Err = String;

    fn from_str(text: &str) -> Result<Self, String> {
        let host = text.strip_prefix("https://").or_else(|| text.strip_prefix("http://"));
        let bare = host.is_some_and(|host| {
            !host.is_empty()
                && host
                    .chars()
                    .all(|c| c.is_ascii_graphic() && !matches!(c, '/' | '?' | '#' | '@' | '*' | ','))
        });
        match HeaderValue::from_str(&text.to_ascii_lowercase()) {
            Ok(value) if bare || text == "*" => Ok(Self(value)),
            _ => Err(
                "must be scheme://host or scheme://host:port without a path, e.g. https://example.org, or *"
                    .into(),
            ),
        }
    }
}

/// Parses a whole number from 1 to `MOST`.
fn count<const MOST: usize>(text: &str) -> Result<NonZeroUsize, String> {
    match text.parse::<NonZeroUsize>() {
        Ok(number) if number.get() <= MOST => Ok(number),
        _ => Err(format!("must be a whole number from 1 to {MOST}")),
    }
}

#[cfg(test)]
mod tests {
    use clap::Parser;

    use super::*;

    #[derive(Parser)]
    struct Line {
        #[command(flatten)]
        settings: Settings,
    }

    fn parse(arguments: &[&str]) -> Result<Settings, String> {
        let line = std::iter::once("dribble-risk").chain(arguments.iter().copied());
        Line::try_parse_from(line).map(|line| line.settings).map_err(|error| error.to_string())
    }

    #[test]
    fn the_default_value_and_the_flags_agree() {
        let parsed = parse(&[]).unwrap();
        assert_eq!(format!("{parsed:?}"), format!("{:?}", Settings::default()));
    }

    #[test]
    fn bad_values_are_refused_with_what_is_accepted() {
        for (flag, value, told) in [
            ("--listen", "somewhere", "invalid socket address"),
            ("--base-path", "lips", "must start with /"),
            ("--base-path", "/a//b", "must start with /"),
            ("--base-path", "/a/../b", "must start with /"),
            ("--workers", "0", "from 1 to 1024"),
            ("--max-body-bytes", "-1", "from 1 to 1073741824"),
            ("--request-timeout-s", "0", "from 0.001 to 86400"),
            ("--request-timeout-s", "NaN", "from 0.001 to 86400"),
            ("--cors-origin", "https://example.org/path", "without a path"),
            ("--cors-origin", "example.org", "scheme://host"),
            ("--log-format", "xml", "text, json"),
        ] {
            let message = parse(&[&format!("{flag}={value}")]).unwrap_err();
            assert!(message.contains(told), "{flag} {value}: {message}");
        }
    }

    #[test]
    fn good_values() {
        let origins = ["--cors-origin", "https://example.org", "--cors-origin", "http://localhost:3000"];
        assert_eq!(parse(&origins).unwrap().cors_origin.len(), 2);
        assert_eq!(parse(&["--base-path", "/a/lips/"]).unwrap().base_path.as_str(), "/a/lips");
        assert_eq!(
            parse(&["--shutdown-s", "0.5"]).unwrap().shutdown_s.duration(),
            Duration::from_millis(500)
        );
    }
}
