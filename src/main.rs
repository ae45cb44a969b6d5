//! The command line, nothing else.

use std::io::{self, Read, Write};
use std::net::{IpAddr, Ipv4Addr, Ipv6Addr, SocketAddr, TcpStream};
use std::path::{Path, PathBuf};
use std::process::ExitCode;
use std::time::Duration;

use clap::{Parser, Subcommand};
use dribble_risk::service::api::evaluations::evaluate_json;
use dribble_risk::service::settings::Settings;
use dribble_risk::service::{openapi_json, run, telemetry};

/// The platform's allocator, above all musl's, halves the throughput.
#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

/// Tells whether a lip will dribble, how surely, and what to change
#[derive(Debug, Parser)]
#[command(version)]
struct Line {
    #[command(subcommand)]
    command: Option<Command>,
    #[command(flatten)]
    settings: Settings,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Answer over HTTP (the default)
    Serve,
    /// Decide one evaluation request, without a server
    Evaluate {
        /// File with the request as JSON; - for standard input
        file: PathBuf,
    },
    /// Print the OpenAPI document
    Openapi,
    /// Ask a running service whether it is ready; exit code 0 if so, 1 if not
    Probe,
}

fn main() -> ExitCode {
    let line = Line::parse();
    let outcome = match line.command.unwrap_or(Command::Serve) {
        Command::Serve => serve(line.settings),
        Command::Evaluate { file } => evaluate(&file),
        Command::Openapi => openapi(),
        Command::Probe => probe(&line.settings),
    };
    match outcome {
        Ok(()) => ExitCode::SUCCESS,
        Err(message) => {
            eprintln!("dribble-risk: {message}");
            ExitCode::FAILURE
        }
    }
}

fn serve(settings: Settings) -> Result<(), String> {
    let _logging = telemetry::start_logging(settings.log_format);
    run::serve(settings).map_err(|error| error.to_string())
}

fn evaluate(file: &Path) -> Result<(), String> {
    let request = if file == Path::new("-") {
        let mut bytes = Vec::new();
        io::stdin().read_to_end(&mut bytes).map(|_| bytes)
    } else {
        std::fs::read(file)
    };
    let request = request.map_err(|error| format!("cannot read {}: {error}", file.display()))?;
    match evaluate_json(&request) {
        Ok(answer) => print(&answer),
        Err(problem) => {
            let document = problem.into_document("", "/v1/evaluations");
            Err(serde_json::to_string_pretty(&document).unwrap_or(document.detail))
        }
    }
}

fn openapi() -> Result<(), String> {
    let document = openapi_json().map_err(|error| error.to_string())?;
    print(document.trim_end().as_bytes())
}

fn print(text: &[u8]) -> Result<(), String> {
    let mut out = io::stdout().lock();
    out.write_all(text)
        .and_then(|()| out.write_all(b"\n"))
        .and_then(|()| out.flush())
        .map_err(|error| format!("cannot write the answer: {error}"))
}

/// A probe waits this long for each step.
const PROBE_PATIENCE: Duration = Duration::from_secs(2);

fn probe(settings: &Settings) -> Result<(), String> {
    let address = probed_address(settings)?;
    let path = format!("{}/health/ready", settings.base_path.as_str());
    let status = ask(address, &path).map_err(|error| format!("no answer from {address}: {error}"))?;
    if status == "200" { Ok(()) } else { Err(format!("{address}{path} answered {status}")) }
}

/// The address to connect to: what is written in the address file if there is one; the loopback address where the
/// service listens on all.
fn probed_address(settings: &Settings) -> Result<SocketAddr, String> {
    let mut address = match &settings.address_file {
        Some(file) => std::fs::read_to_string(file)
            .map_err(|error| format!("cannot read {}: {error}", file.display()))?
            .trim()
            .parse()
            .map_err(|_| format!("{} holds no address", file.display()))?,
        None => settings.listen,
    };
    match address.ip() {
        IpAddr::V4(ip) if ip.is_unspecified() => address.set_ip(Ipv4Addr::LOCALHOST.into()),
        IpAddr::V6(ip) if ip.is_unspecified() => address.set_ip(Ipv6Addr::LOCALHOST.into()),
        IpAddr::V4(_) | IpAddr::V6(_) => {}
    }
    Ok(address)
}

/// The status of a GET, as three digits.
fn ask(address: SocketAddr, path: &str) -> io::Result<String> {
    let mut stream = TcpStream::connect_timeout(&address, PROBE_PATIENCE)?;
    stream.set_read_timeout(Some(PROBE_PATIENCE))?;
    stream.set_write_timeout(Some(PROBE_PATIENCE))?;
    write!(stream, "GET {path} HTTP/1.1\r\nHost: {address}\r\nConnection: close\r\n\r\n")?;
    let mut head = [0_u8; 12];
    stream.read_exact(&mut head)?;
    match head.strip_prefix(b"HTTP/1.1 ") {
        Some(status) => Ok(String::from_utf8_lossy(status).into_owned()),
        None => Err(io::Error::new(io::ErrorKind::InvalidData, "not an HTTP/1.1 answer")),
    }
}
