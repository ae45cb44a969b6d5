//! Sweeps: the core on one thread, the service end to end, its memory, what a hung-up caller leaves behind, and single evaluations beside a sweep.
//!
//! `cargo bench --bench sweeps`. With `DRIBBLE_RISK_PEER=1` the NumPy version of the same formulas (`benches/peer/run`) is checked against the same
//! service and timed in the same run.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use std::{
    hint::black_box,
    io::{Read, Write},
    net::{SocketAddr, TcpStream},
    path::PathBuf,
    process::{Child, Command, Stdio},
    sync::{
        Arc,
        atomic::{AtomicBool, Ordering},
    },
    time::{Duration, Instant},
};

use dribble_risk::{
    analysis::{
        field::Field,
        spec::{LiquidSpec, OuterFace, SectionSpec, Spec, SurfaceSpec, Uncertainties},
        sweep::{Axis, Column, Output, Sweep, Values},
    },
    physics::separation::closed_form::DEFAULT_SET,
};

#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

const ROUNDS: usize = 7;

fn main() {
    // `cargo test --benches` asks for nothing.
    if !std::env::args().any(|argument| argument == "--bench") {
        return;
    }
    core();
    memory();
    let server = Server::start();
    end_to_end(&server);
    hang_up(&server);
    beside_a_sweep(&server);
    if std::env::var_os("DRIBBLE_RISK_PEER").is_some() {
        let script = concat!(env!("CARGO_MANIFEST_DIR"), "/benches/peer/run");
        let ran = Command::new("sh").arg(script).arg(server.address.to_string()).status().unwrap();
        assert!(ran.success(), "the peer disagrees or did not run");
    }
}

/// A level sheet lip with measured liquid and angles.
fn level() -> Spec {
    Spec {
        section: SectionSpec::Sheet { width_mm: 24.0 },
        radius_mm: 0.8,
        turn_deg: 110.0,
        slope_deg: 0.0,
        length_mm: 0.0,
        surface: SurfaceSpec::Measured {
            contact_angle_deg: Some(72.0),
            advancing_deg: Some(84.0),
            receding_deg: Some(41.0),
        },
        liquid: LiquidSpec::Measured {
            density_kg_m3: 1030.0,
            viscosity_mpa_s: 2.1,
            surface_tension_mn_m: 46.0,
        },
        flow_ml_s: 25.0,
        outer_face: OuterFace::Dry,
        confidence: 0.95,
        uncertainty: Uncertainties::default(),
        coefficients: DEFAULT_SET,
        calibration: None,
    }
}

fn radius_by_flow(side: usize) -> Vec<Axis> {
    vec![
        Axis::new(Field::EdgeRadius, Values::Linear { from: 0.1, to: 3.0, count: side }),
        Axis::new(Field::Flow, Values::Linear { from: 5.0, to: 100.0, count: side }),
    ]
}

/// The core on one thread.
fn core() {
    let sloped = Spec { slope_deg: 15.0, length_mm: 20.0, ..level() };
    let vee = Spec { section: SectionSpec::Vee { included_angle_deg: 70.0 }, ..sloped };
    let flow_by_slope = |side: usize| {
        vec![
            Axis::new(Field::Flow, Values::Linear { from: 5.0, to: 100.0, count: side }),
            Axis::new(Field::Slope, Values::Linear { from: 5.0, to: 40.0, count: side }),
        ]
    };
    for (name, spec, axes) in [
        ("level sheet, radius x flow", level(), radius_by_flow(1000)),
        ("sloped sheet with friction, radius x flow", sloped, radius_by_flow(1000)),
        ("sloped sheet with friction, flow x slope", sloped, flow_by_slope(300)),
        ("sloped vee with friction, flow x slope", vee, flow_by_slope(100)),
    ] {
        let mut rates: Vec<f64> = (0..ROUNDS).map(|_| rate(spec, &axes)).collect();
        rates.sort_by(f64::total_cmp);
        println!(
            "core, one thread, {name}: median {:.2} M points/s, best {:.2}",
            rates[ROUNDS / 2] / 1e6,
            rates[ROUNDS - 1] / 1e6
        );
    }
}

fn rate(spec: Spec, axes: &[Axis]) -> f64 {
    let never = AtomicBool::new(false);
    let single = rayon::ThreadPoolBuilder::new().num_threads(1).build().unwrap();
    let begun = Instant::now();
    let rows = single.install(|| {
        let sweep = Sweep::new(spec, axes.to_vec(), &never).unwrap();
        let block = |rows| {
            let outputs = [Output::SafetyFactor, Output::DribbleProbability];
            let block = sweep.chunk(rows, &outputs, &never).unwrap();
            let Column::Numbers(numbers) = &block.columns[1] else { panic!() };
            black_box(numbers.iter().sum::<f64>());
        };
        let rows = sweep.rows();
        (0..rows).step_by(1 << 14).for_each(|from| block(from..(from + (1 << 14)).min(rows)));
        rows
    });
    rows as f64 / begun.elapsed().as_secs_f64()
}

fn request(side_1: usize, side_2: usize, slope: f64, path: &str, accept: &str) -> Vec<u8> {
    post(path, accept, &body(side_1, side_2, slope))
}

fn body(side_1: usize, side_2: usize, slope: f64) -> String {
    format!(
        r#"{{"base":{{"lip":{{"section":{{"sheet":{{"width_mm":24}}}},"edge":{{"rounded":{{"radius_mm":0.8,"turn_deg":110}}}},"run":{{"slope_deg":{slope},"length_mm":20}}}},"surface":{{"measured":{{"contact_angle_deg":72,"advancing_deg":84,"receding_deg":41}}}},"liquid":{{"measured":{{"density_kg_m3":1030,"viscosity_mpa_s":2.1,"surface_tension_mn_m":46}}}},"pour":{{"flow_ml_s":25}}}},"axes":[{{"pointer":"/lip/edge/rounded/radius_mm","from":0.1,"to":3,"count":{side_1}}},{{"pointer":"/pour/flow_ml_s","from":5,"to":100,"count":{side_2}}}],"outputs":["safety_factor","dribble_probability"]}}"#
    )
}

fn post(path: &str, accept: &str, body: &str) -> Vec<u8> {
    format!(
        "POST {path} HTTP/1.1\r\nHost: lip\r\nConnection: close\r\nContent-Type: application/json\r\nAccept: {accept}\r\nContent-Length: {}\r\n\r\n{body}",
        body.len()
    )
    .into_bytes()
}

const FORMS: [(&str, &str); 3] =
    [("Arrow", "application/vnd.apache.arrow.stream"), ("JSON", "application/json"), ("CSV", "text/csv")];

/// One million points over HTTP, from the first byte of the request to the last of the answer.
fn end_to_end(server: &Server) {
    for (slope, lip) in [(0.0, "level sheet"), (15.0, "sloped sheet with friction")] {
        for (name, accept) in FORMS {
            let request = request(1000, 1000, slope, "/v1/sweeps", accept);
            let mut seconds = Vec::new();
            let mut bytes = 0;
            for _ in 0..ROUNDS {
                let begun = Instant::now();
                bytes = fetch(server.address, &request);
                seconds.push(begun.elapsed().as_secs_f64());
            }
            seconds.sort_by(f64::total_cmp);
            println!(
                "over HTTP, 1 M points, {lip}, {name}: median {:.0} ms, {:.2} M points/s ({:.0} MB)",
                seconds[ROUNDS / 2] * 1e3,
                1.0 / seconds[ROUNDS / 2],
                bytes as f64 / 1e6
            );
        }
    }
}

/// Sends the request and reads the answer to its end; how many bytes it has.
fn fetch(address: SocketAddr, request: &[u8]) -> usize {
    let mut stream = TcpStream::connect(address).unwrap();
    stream.write_all(request).unwrap();
    let mut buffer = vec![0; 1 << 18];
    let mut total = 0;
    loop {
        match stream.read(&mut buffer).unwrap() {
            0 => break,
            read => {
                if total == 0 {
                    assert!(buffer.starts_with(b"HTTP/1.1 200"));
                }
                total += read;
            }
        }
    }
    total
}

/// Ten million points: memory above idle while they are streamed, by a server that has done nothing large before.
fn memory() {
    for (name, accept) in FORMS {
        let server = Server::start();
        let idle = server.memory("VmRSS");
        server.reset_peak();
        let begun = Instant::now();
        let bytes = fetch(server.address, &request(10_000, 1000, 0.0, "/v1/sweeps", accept));
        let seconds = begun.elapsed().as_secs_f64();
        let peak = server.memory("VmHWM");
        println!(
            "10 M points, {name}: {seconds:.2} s, {:.2} M points/s, {:.0} MB; idle {idle:.1} MB, peak {peak:.1} MB, {:.1} MB above",
            10.0 / seconds,
            bytes as f64 / 1e6,
            peak - idle
        );
    }
}

/// A caller that hangs up in the middle of a long sweep: processor time spent from 100 ms after that on.
fn hang_up(server: &Server) {
    let mut stream = TcpStream::connect(server.address).unwrap();
    // No table helps here: each point has a stream of its own.
    let body = body(10_000, 1000, 15.0).replace(
        r#""/lip/edge/rounded/radius_mm","from":0.1,"to":3"#,
        r#""/lip/run/slope_deg","from":1,"to":9"#,
    );
    stream.write_all(&post("/v1/sweeps", "text/csv", &body)).unwrap();
    let mut buffer = vec![0; 1 << 18];
    let begun = Instant::now();
    let (mut total, before) = (0, server.cpu_seconds());
    while begun.elapsed() < Duration::from_millis(500) {
        total += stream.read(&mut buffer).unwrap();
    }
    println!(
        "hang-up: {:.0} ms of processor time in 500 ms of work ({:.1} MB read)",
        (server.cpu_seconds() - before) * 1e3,
        total as f64 / 1e6
    );
    let working = server.cpu_seconds();
    drop(stream);
    std::thread::sleep(Duration::from_millis(100));
    let after = server.cpu_seconds();
    std::thread::sleep(Duration::from_millis(1000));
    println!(
        "hang-up: {:.0} ms of processor time in the first 100 ms, {:.0} ms in the second after them",
        (after - working) * 1e3,
        (server.cpu_seconds() - after) * 1e3
    );
}

/// Single evaluations on 8 connections, alone and beside a sweep.
fn beside_a_sweep(server: &Server) {
    let address = server.address;
    println!("evaluations on 8 connections, alone: {}", evaluations(address));
    let done = Arc::new(AtomicBool::new(false));
    let sweeping = {
        let done = done.clone();
        std::thread::spawn(move || {
            while !done.load(Ordering::Relaxed) {
                fetch(address, &request(10_000, 1000, 0.0, "/v1/sweeps", "text/csv"));
            }
        })
    };
    std::thread::sleep(Duration::from_millis(300));
    println!("evaluations on 8 connections, beside a sweep that is read: {}", evaluations(address));
    done.store(true, Ordering::Relaxed);
    sweeping.join().unwrap();
}

fn evaluations(address: SocketAddr) -> String {
    let body = include_str!("../src/service/api/evaluations/example.json");
    let text = post("/v1/evaluations", "application/json", body);
    let text = String::from_utf8(text).unwrap().replace("Connection: close\r\n", "");
    let until = Instant::now() + Duration::from_secs(4);
    let callers: Vec<_> = (0..8)
        .map(|_| {
            let text = text.clone();
            std::thread::spawn(move || {
                let mut stream = TcpStream::connect(address).unwrap();
                stream.set_nodelay(true).unwrap();
                let mut buffer = vec![0; 1 << 16];
                let mut latencies = Vec::new();
                while Instant::now() < until {
                    let sent = Instant::now();
                    stream.write_all(text.as_bytes()).unwrap();
                    let mut filled = 0;
                    while !is_whole(&buffer[..filled]) {
                        let read = stream.read(&mut buffer[filled..]).unwrap();
                        assert_ne!(read, 0);
                        filled += read;
                    }
                    latencies.push(sent.elapsed().as_secs_f64() * 1e3);
                }
                latencies
            })
        })
        .collect();
    let mut latencies: Vec<f64> = callers.into_iter().flat_map(|caller| caller.join().unwrap()).collect();
    latencies.sort_by(f64::total_cmp);
    let count = latencies.len();
    format!(
        "{:.0}/s, median {:.2} ms, p99 {:.2} ms",
        count as f64 / 4.0,
        latencies[count / 2],
        latencies[count * 99 / 100]
    )
}

/// Whether the answer has come to its end, going by its Content-Length.
fn is_whole(answer: &[u8]) -> bool {
    let Some(head) = answer.windows(4).position(|four| four == b"\r\n\r\n") else { return false };
    let text = std::str::from_utf8(&answer[..head]).unwrap();
    let length = text.lines().find_map(|line| line.strip_prefix("content-length: ")).unwrap();
    answer.len() >= head + 4 + length.parse::<usize>().unwrap()
}

struct Server {
    child: Child,
    address: SocketAddr,
    place: PathBuf,
}

impl Server {
    fn start() -> Self {
        let place = std::env::temp_dir().join(format!("dribble-risk-bench-{}-sweeps", std::process::id()));
        let child = Command::new(env!("CARGO_BIN_EXE_dribble-risk"))
            .args(["--listen", "127.0.0.1:0", "--address-file"])
            .arg(&place)
            .stdout(Stdio::null())
            .spawn()
            .unwrap();
        let address = loop {
            match std::fs::read_to_string(&place).ok().and_then(|text| text.trim().parse().ok()) {
                Some(address) => break address,
                None => std::thread::sleep(Duration::from_millis(1)),
            }
        };
        let server = Self { child, address, place };
        // Idle means started and used, if only a little.
        fetch(server.address, &request(10, 10, 0.0, "/v1/sweeps", "text/csv"));
        println!("idle after start: {:.1} MB", server.memory("VmRSS"));
        server
    }

    /// Processor seconds so far, to the tick of 10 ms.
    fn cpu_seconds(&self) -> f64 {
        let stat = std::fs::read_to_string(format!("/proc/{}/stat", self.child.id())).unwrap();
        let fields: Vec<&str> = stat.rsplit(')').next().unwrap().split_whitespace().collect();
        (fields[11].parse::<f64>().unwrap() + fields[12].parse::<f64>().unwrap()) / 100.0
    }

    fn memory(&self, what: &str) -> f64 {
        let status = std::fs::read_to_string(format!("/proc/{}/status", self.child.id())).unwrap();
        let line = status.lines().find(|line| line.starts_with(what)).unwrap();
        line.split_whitespace().nth(1).unwrap().parse::<f64>().unwrap() / 1024.0
    }

    fn reset_peak(&self) {
        std::fs::write(format!("/proc/{}/clear_refs", self.child.id()), "5").unwrap();
    }
}

impl Drop for Server {
    fn drop(&mut self) {
        let _gone = self.child.kill();
        let _reaped = self.child.wait();
        let _left = std::fs::remove_file(&self.place);
    }
}
