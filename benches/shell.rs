//! What the shell costs: the full layer stack against a bare route, in one run, over sockets.
//!
//! `cargo bench --bench shell > /dev/null`: log lines go to standard output as in service, figures to standard error.
//! Client and servers share the cores of this machine, so only the ratios and differences mean something.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use std::net::SocketAddr;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};
use std::time::{Duration, Instant};

use axum::Router;
use axum::routing::{get, post};
use bytes::Bytes;
use dribble_risk::service::body::JsonBytes;
use dribble_risk::service::router::app_with;
use dribble_risk::service::run::serve_on;
use dribble_risk::service::settings::{LogFormat, Settings};
use dribble_risk::service::state::ServiceState;
use dribble_risk::service::telemetry::start_logging;
use tokio::io::{AsyncReadExt, AsyncWriteExt};
use tokio::net::{TcpListener, TcpStream};

#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

const CONNECTIONS: usize = 64;
const SPAN: Duration = Duration::from_secs(3);
const ROUNDS: usize = 3;

#[tokio::main(flavor = "multi_thread", worker_threads = 2)]
async fn main() {
    let _logging = start_logging(LogFormat::Json);
    let state = ServiceState::new(Settings::default()).unwrap();
    let echo = post(async |JsonBytes(body): JsonBytes| body);
    let housed = app_with(&state, Router::new().route("/test/echo", echo));
    let bare = Router::new()
        .route("/health/live", get(async || r#"{"status":"live"}"#))
        .route("/test/echo", post(async |body: Bytes| body));
    let housed = start(housed, &state).await;
    let bare = start(bare, &state).await;

    let body = format!("{{\"lip\":\"{}\"}}", "x".repeat(600));
    let posted = format!(
        "POST /test/echo HTTP/1.1\r\nHost: lip\r\nContent-Type: application/json\r\nContent-Length: {}\r\n\r\n{body}",
        body.len()
    );
    let requests = [
        ("GET /health/live", "GET /health/live HTTP/1.1\r\nHost: lip\r\n\r\n".to_owned()),
        ("POST echo", posted),
    ];
    for (name, request) in requests {
        for round in 0..ROUNDS {
            let plain = measure(bare, &request).await;
            let full = measure(housed, &request).await;
            eprintln!(
                "{name} round {round}: bare {:.0}/s {:.1} us CPU; full {:.0}/s {:.1} us CPU, p99 {:.2} ms; ratio {:.2}, {:+.1} us CPU a request",
                plain.rate,
                plain.cpu_us,
                full.rate,
                full.cpu_us,
                full.p99_ms,
                full.rate / plain.rate,
                full.cpu_us - plain.cpu_us,
            );
        }
    }
}

async fn start(app: Router, state: &Arc<ServiceState>) -> SocketAddr {
    let listener = TcpListener::bind("127.0.0.1:0").await.unwrap();
    let address = listener.local_addr().unwrap();
    let state = Arc::clone(state);
    tokio::spawn(async move { serve_on(listener, app, &state, std::future::pending()).await });
    address
}

struct Figures {
    rate: f64,
    cpu_us: f64,
    p99_ms: f64,
}

/// Sends the request over and over on each connection, one at a time.
async fn measure(address: SocketAddr, request: &str) -> Figures {
    let done = Arc::new(AtomicBool::new(false));
    let count = Arc::new(AtomicU64::new(0));
    let request: Arc<[u8]> = request.as_bytes().into();
    let (begun, cpu) = (Instant::now(), cpu_seconds());
    let callers: Vec<_> = (0..CONNECTIONS)
        .map(|_| {
            let (done, count, request) = (Arc::clone(&done), Arc::clone(&count), Arc::clone(&request));
            tokio::spawn(async move { call(address, &request, &done, &count).await })
        })
        .collect();
    tokio::time::sleep(SPAN).await;
    done.store(true, Ordering::Relaxed);
    let mut latencies = Vec::new();
    for caller in callers {
        latencies.extend(caller.await.unwrap());
    }
    let (elapsed, cpu) = (begun.elapsed().as_secs_f64(), cpu_seconds() - cpu);
    let count = count.load(Ordering::Relaxed) as f64;
    latencies.sort_unstable();
    let p99 = latencies[latencies.len() * 99 / 100];
    Figures { rate: count / elapsed, cpu_us: cpu / count * 1e6, p99_ms: f64::from(p99) / 1e3 }
}

async fn call(address: SocketAddr, request: &[u8], done: &AtomicBool, count: &AtomicU64) -> Vec<u32> {
    let mut stream = TcpStream::connect(address).await.unwrap();
    stream.set_nodelay(true).unwrap();
    let mut buffer = vec![0; 16 * 1024];
    let mut latencies = Vec::new();
    while !done.load(Ordering::Relaxed) {
        let sent = Instant::now();
        stream.write_all(request).await.unwrap();
        let mut filled = 0;
        loop {
            let read = stream.read(&mut buffer[filled..]).await.unwrap();
            assert_ne!(read, 0, "the connection ended");
            filled += read;
            if is_whole(&buffer[..filled]) {
                break;
            }
        }
        assert!(buffer.starts_with(b"HTTP/1.1 200"));
        latencies.push(sent.elapsed().as_micros() as u32);
        count.fetch_add(1, Ordering::Relaxed);
    }
    latencies
}

/// Whether the answer has come to its end, going by its Content-Length.
fn is_whole(answer: &[u8]) -> bool {
    let Some(head) = answer.windows(4).position(|four| four == b"\r\n\r\n") else { return false };
    let text = std::str::from_utf8(&answer[..head]).unwrap();
    let length = text.lines().find_map(|line| line.strip_prefix("content-length: ")).unwrap();
    answer.len() >= head + 4 + length.parse::<usize>().unwrap()
}

/// Processor seconds of this process so far, to the tick of 10 ms.
fn cpu_seconds() -> f64 {
    let stat = std::fs::read_to_string("/proc/self/stat").unwrap();
    let fields: Vec<&str> = stat.rsplit(')').next().unwrap().split_whitespace().collect();
    (fields[11].parse::<f64>().unwrap() + fields[12].parse::<f64>().unwrap()) / 100.0
}
