//! The service over HTTP against a bare echo of the same payload sizes, in one run on one machine.
//!
//! `cargo bench --bench http`. Service and echo are processes of their own; the client shares the cores with them, so only the ratios mean something.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use std::{
    net::SocketAddr,
    path::PathBuf,
    process::{Child, Command, Stdio},
    sync::{
        Arc,
        atomic::{AtomicBool, Ordering},
    },
    time::{Duration, Instant},
};

use axum::{Json, Router, routing::post};
use bytes::Bytes;
use tokio::{
    io::{AsyncReadExt, AsyncWriteExt},
    net::{TcpListener, TcpStream},
};

#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

const SPAN: Duration = Duration::from_secs(3);
const ROUNDS: usize = 3;
/// Environment variable that makes this program the echo: the size of its answers.
const ECHO: &str = "DRIBBLE_RISK_BENCH_ECHO";

fn main() {
    let runtime = tokio::runtime::Builder::new_multi_thread().enable_all().build().unwrap();
    match std::env::var(ECHO) {
        Ok(size) => runtime.block_on(echo(size.parse().unwrap())),
        Err(_) => runtime.block_on(compare()),
    }
}

/// A bare axum server that does no work: at `/` it takes a JSON body and answers JSON text of the size that the service would answer, as `axum::Json` does both; at
/// `/bytes` it reads nothing and answers as many bytes.
async fn echo(size: usize) {
    // A list of numbers and words in about the mixture of an answer.
    let item = r#"{"value":1.2345678901234567,"source":"from memory","within_range":true}"#;
    let count = (size / (item.len() + 1)).max(1);
    let answer: serde_json::Value =
        serde_json::from_str(&format!("[{}]", vec![item; count].join(","))).unwrap();
    let bytes = Bytes::from(vec![b' '; size]);
    let app = Router::new()
        .route(
            "/",
            post(move |Json(body): Json<serde_json::Value>| {
                let answer = answer.clone();
                async move {
                    std::hint::black_box(body);
                    Json(answer)
                }
            }),
        )
        .route(
            "/bytes",
            post(move |body: Bytes| {
                let bytes = bytes.clone();
                async move {
                    std::hint::black_box(body);
                    ([("content-type", "application/json")], bytes)
                }
            }),
        );
    let listener = TcpListener::bind("127.0.0.1:0").await.unwrap();
    std::fs::write(std::env::args().nth(1).unwrap(), listener.local_addr().unwrap().to_string()).unwrap();
    axum::serve(listener, app).await.unwrap();
}

async fn compare() {
    let started = Instant::now();
    let service = Server::start(
        "service",
        Command::new(env!("CARGO_BIN_EXE_dribble-risk")).args([
            "--listen",
            "127.0.0.1:0",
            "--log-format",
            "json",
            "--address-file",
        ]),
        None,
    );
    service.until_ready().await;
    println!(
        "start to ready: {:.1} ms; idle memory {:.1} MB",
        started.elapsed().as_secs_f64() * 1e3,
        service.memory_mb()
    );

    let lean = request(r#","include":[]"#);
    let full = request("");
    for (name, body, connections) in [
        ("include: []", &lean, 64),
        ("include: []", &lean, 8),
        ("everything", &full, 64),
        ("everything", &full, 8),
    ] {
        let asked = post_text("/v1/evaluations", body);
        let size = once(service.address, &asked).await.len();
        let echo = Server::start("echo", &mut Command::new(std::env::current_exe().unwrap()), Some(size));
        echo.until_ready().await;
        let (plain, bytes) = (post_text("/", body), post_text("/bytes", body));
        for round in 0..ROUNDS {
            let raw = measure(&echo, &bytes, connections).await;
            let bare = measure(&echo, &plain, connections).await;
            let ours = measure(&service, &asked, connections).await;
            println!("{name}, {connections} connections, {} B in, {size} B out, round {round}:", body.len());
            println!("  bytes echo {raw}\n  JSON echo  {bare}\n  service    {ours}");
            println!(
                "  service/JSON echo {:.2}, service/bytes echo {:.2}",
                ours.rate / bare.rate,
                ours.rate / raw.rate
            );
        }
    }
    batch(&service, &lean).await;
    println!("memory after the run: {:.1} MB", service.memory_mb());
}

/// A batch of 10 000 against as many single calls on one connection.
async fn batch(service: &Server, lean: &str) {
    const CASES: usize = 10_000;
    let together =
        post_text("/v1/evaluations/batch", &format!("{{\"cases\":[{}]}}", vec![lean; CASES].join(",")));
    let single = post_text("/v1/evaluations", lean);
    for round in 0..ROUNDS {
        let begun = Instant::now();
        let mut stream = TcpStream::connect(service.address).await.unwrap();
        stream.set_nodelay(true).unwrap();
        let mut buffer = vec![0; 64 * 1024];
        for _ in 0..CASES {
            exchange(&mut stream, &single, &mut buffer).await;
        }
        let one_by_one = begun.elapsed().as_secs_f64();
        let begun = Instant::now();
        let answer = once(service.address, &together).await;
        let at_once = begun.elapsed().as_secs_f64();
        println!(
            "batch of {CASES}, round {round}: {at_once:.3} s ({:.1} MB), one by one {one_by_one:.3} s, ratio {:.1}",
            answer.len() as f64 / 1e6,
            one_by_one / at_once
        );
    }
}

fn request(more: &str) -> String {
    format!(
        r#"{{"lip":{{"section":{{"sheet":{{"width_mm":24}}}},"edge":{{"rounded":{{"radius_mm":0.8,"turn_deg":110}}}}}},"surface":{{"measured":{{"contact_angle_deg":72,"advancing_deg":84,"receding_deg":41}}}},"liquid":{{"measured":{{"density_kg_m3":1030,"viscosity_mpa_s":2.1,"surface_tension_mn_m":46}}}},"pour":{{"flow_ml_s":25}}{more}}}"#
    )
}

fn post_text(path: &str, body: &str) -> Vec<u8> {
    let length = body.len();
    format!("POST {path} HTTP/1.1\r\nHost: lip\r\nContent-Type: application/json\r\nContent-Length: {length}\r\n\r\n{body}").into_bytes()
}

struct Server {
    child: Child,
    address: SocketAddr,
    place: PathBuf,
}

impl Server {
    fn start(name: &str, command: &mut Command, echo: Option<usize>) -> Self {
        let place = std::env::temp_dir().join(format!("dribble-risk-bench-{}-{name}", std::process::id()));
        let _stale = std::fs::remove_file(&place);
        if let Some(size) = echo {
            command.env(ECHO, size.to_string());
        }
        let child = command.arg(&place).stdout(Stdio::null()).spawn().unwrap();
        let address = loop {
            match std::fs::read_to_string(&place).ok().and_then(|text| text.trim().parse().ok()) {
                Some(address) => break address,
                None => std::thread::sleep(Duration::from_micros(200)),
            }
        };
        Self { child, address, place }
    }

    async fn until_ready(&self) {
        while TcpStream::connect(self.address).await.is_err() {
            tokio::time::sleep(Duration::from_micros(200)).await;
        }
    }

    /// Processor seconds so far, to the tick of 10 ms.
    fn cpu_seconds(&self) -> f64 {
        let stat = std::fs::read_to_string(format!("/proc/{}/stat", self.child.id())).unwrap();
        let fields: Vec<&str> = stat.rsplit(')').next().unwrap().split_whitespace().collect();
        (fields[11].parse::<f64>().unwrap() + fields[12].parse::<f64>().unwrap()) / 100.0
    }

    fn memory_mb(&self) -> f64 {
        let status = std::fs::read_to_string(format!("/proc/{}/status", self.child.id())).unwrap();
        let line = status.lines().find(|line| line.starts_with("VmRSS")).unwrap();
        line.split_whitespace().nth(1).unwrap().parse::<f64>().unwrap() / 1024.0
    }
}

impl Drop for Server {
    fn drop(&mut self) {
        let _gone = self.child.kill();
        let _reaped = self.child.wait();
        let _left = std::fs::remove_file(&self.place);
    }
}

struct Figures {
    rate: f64,
    cpu_us: f64,
    p99_ms: f64,
}

impl std::fmt::Display for Figures {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{:>7.0}/s {:>5.1} us CPU p99 {:.2} ms", self.rate, self.cpu_us, self.p99_ms)
    }
}

/// Sends the request over and over on each connection, one at a time.
async fn measure(server: &Server, request: &[u8], connections: usize) -> Figures {
    let done = Arc::new(AtomicBool::new(false));
    let request: Arc<[u8]> = request.into();
    let (begun, cpu) = (Instant::now(), server.cpu_seconds());
    let address = server.address;
    let callers: Vec<_> = (0..connections)
        .map(|_| {
            let (done, request) = (Arc::clone(&done), Arc::clone(&request));
            tokio::spawn(async move {
                let mut stream = TcpStream::connect(address).await.unwrap();
                stream.set_nodelay(true).unwrap();
                let mut buffer = vec![0; 64 * 1024];
                let mut latencies = Vec::new();
                while !done.load(Ordering::Relaxed) {
                    let sent = Instant::now();
                    exchange(&mut stream, &request, &mut buffer).await;
                    latencies.push(sent.elapsed().as_micros() as u32);
                }
                latencies
            })
        })
        .collect();
    tokio::time::sleep(SPAN).await;
    done.store(true, Ordering::Relaxed);
    let mut latencies = Vec::new();
    for caller in callers {
        latencies.extend(caller.await.unwrap());
    }
    let (elapsed, cpu) = (begun.elapsed().as_secs_f64(), server.cpu_seconds() - cpu);
    let count = latencies.len() as f64;
    latencies.sort_unstable();
    let p99 = latencies[latencies.len() * 99 / 100];
    Figures { rate: count / elapsed, cpu_us: cpu / count * 1e6, p99_ms: f64::from(p99) / 1e3 }
}

/// One request and its answer, which has a Content-Length.
async fn exchange(stream: &mut TcpStream, request: &[u8], buffer: &mut [u8]) {
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
    assert!(buffer.starts_with(b"HTTP/1.1 200"), "{}", String::from_utf8_lossy(&buffer[..filled]));
}

/// Whether the answer has come to its end, going by its Content-Length.
fn is_whole(answer: &[u8]) -> bool {
    let Some(head) = answer.windows(4).position(|four| four == b"\r\n\r\n") else { return false };
    let text = std::str::from_utf8(&answer[..head]).unwrap();
    let length = text.lines().find_map(|line| line.strip_prefix("content-length: ")).unwrap();
    answer.len() >= head + 4 + length.parse::<usize>().unwrap()
}

/// One request on a connection of its own; the whole answer's body, chunked or not.
async fn once(address: SocketAddr, request: &[u8]) -> Vec<u8> {
    let mut stream = TcpStream::connect(address).await.unwrap();
    let text = String::from_utf8_lossy(request).replacen("Host: lip", "Host: lip\r\nConnection: close", 1);
    stream.write_all(text.as_bytes()).await.unwrap();
    let mut answer = Vec::new();
    stream.read_to_end(&mut answer).await.unwrap();
    assert!(answer.starts_with(b"HTTP/1.1 200"), "{}", String::from_utf8_lossy(&answer[..200]));
    let head = answer.windows(4).position(|four| four == b"\r\n\r\n").unwrap();
    answer.split_off(head + 4)
}
