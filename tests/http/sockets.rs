//! What only shows over a real socket: refusals of large and slow bodies, and stopping in good order.

use std::io::Write;
use std::net::SocketAddr;
use std::time::{Duration, Instant};

use dribble_risk::service::run::serve_on;
use dribble_risk::service::settings::Settings;
use dribble_risk::service::state::Shared;
use tokio::sync::oneshot;

use crate::ask;
use crate::server::{Reply, connect, read_reply, request};

/// The service with the test routes on a socket of its own, until told to stop.
struct Running {
    address: SocketAddr,
    state: Shared,
    stop: oneshot::Sender<()>,
    served: tokio::task::JoinHandle<()>,
}

async fn start(set: impl FnOnce(&mut Settings)) -> Running {
    let state = ask::state(set);
    let listener = tokio::net::TcpListener::bind("127.0.0.1:0").await.unwrap();
    let address = listener.local_addr().unwrap();
    let (stop, stopped) = oneshot::channel::<()>();
    let serving = state.clone();
    let served = tokio::spawn(async move {
        let until = async { stopped.await.unwrap_or_default() };
        serve_on(listener, ask::service(&serving), &serving, until).await;
    });
    Running { address, state, stop, served }
}

async fn blocking<T: Send + 'static>(work: impl FnOnce() -> T + Send + 'static) -> T {
    tokio::task::spawn_blocking(work).await.unwrap()
}

#[track_caller]
fn is_problem(reply: &Reply, status: u16) {
    assert_eq!(reply.status, status, "{reply:?}");
    assert!(reply.head.contains("content-type: application/problem+json"), "{}", reply.head);
    let document: serde_json::Value = serde_json::from_str(&reply.body).unwrap();
    assert_eq!(document["status"], status);
}

#[tokio::test(flavor = "multi_thread")]
async fn a_caller_that_sends_too_much_sees_the_413() {
    let running = start(|settings| settings.max_body_bytes = 1_000_000.try_into().unwrap()).await;
    let address = running.address;
    blocking(move || {
        let body = vec![b' '; 3_900_000];
        let head = format!(
            "POST /test/count HTTP/1.1\r\nHost: lip\r\nContent-Type: application/json\r\nContent-Length: {}\r\n\r\n",
            body.len()
        );
        is_problem(&request(address, &head, &body), 413);

        let mut chunked = Vec::new();
        for _ in 0..30 {
            chunked.extend_from_slice(b"1e848\r\n");
            chunked.extend_from_slice(&[b' '; 125_000]);
            chunked.extend_from_slice(b"\r\n");
        }
        chunked.extend_from_slice(b"0\r\n\r\n");
        let head = "POST /test/count HTTP/1.1\r\nHost: lip\r\nTransfer-Encoding: chunked\r\n\r\n";
        is_problem(&request(address, head, &chunked), 413);

        // Refused for another reason, with a large body on its way.
        let head = format!(
            "POST /test/count HTTP/1.1\r\nHost: lip\r\nContent-Type: text/plain\r\nContent-Length: {}\r\n\r\n",
            900_000
        );
        is_problem(&request(address, &head, &body[..900_000]), 415);

        // One who asks first is told at once and need not send anything.
        let head = "POST /test/count HTTP/1.1\r\nHost: lip\r\nExpect: 100-continue\r\nContent-Length: 3000000\r\n\r\n";
        is_problem(&request(address, head, &[]), 413);
    })
    .await;
}

#[tokio::test(flavor = "multi_thread")]
async fn a_body_that_does_not_come_is_408() {
    let running = start(|settings| settings.request_timeout_s = "0.2".parse().unwrap()).await;
    let address = running.address;
    blocking(move || {
        let head = "POST /test/count HTTP/1.1\r\nHost: lip\r\nContent-Length: 100\r\n\r\n";
        let begun = Instant::now();
        is_problem(&request(address, head, b"{\"half\":"), 408);
        let waited = begun.elapsed();
        assert!(waited >= Duration::from_millis(200) && waited < Duration::from_secs(4), "{waited:?}");
    })
    .await;
}

#[tokio::test(flavor = "multi_thread")]
async fn a_panic_does_not_end_the_connection() {
    let running = start(|_| {}).await;
    let address = running.address;
    blocking(move || {
        let mut stream = connect(address);
        for (path, status) in [("/test/panic", 500), ("/health/live", 200), ("/test/later-panic", 500)] {
            write!(stream, "GET {path} HTTP/1.1\r\nHost: lip\r\n\r\n").unwrap();
            assert_eq!(read_reply(&stream).status, status, "{path}");
        }
    })
    .await;
}

#[tokio::test(flavor = "multi_thread")]
async fn stopping_finishes_what_is_in_flight() {
    let Running { address, stop, served, .. } = start(|_| {}).await;
    let mut stream = connect(address);
    stream.write_all(b"GET /test/pause HTTP/1.1\r\nHost: lip\r\n\r\n").unwrap();
    tokio::time::sleep(Duration::from_millis(100)).await;
    stop.send(()).unwrap();
    let reply = blocking(move || read_reply(&stream)).await;
    assert_eq!((reply.status, reply.body.as_str()), (200, "rested"));
    served.await.unwrap();
    assert!(std::net::TcpStream::connect(address).is_err(), "nobody listens any more");
}

#[tokio::test(flavor = "multi_thread")]
async fn half_a_head_does_not_hold_up_the_stop() {
    let Running { address, stop, served, .. } =
        start(|settings| settings.shutdown_s = "0.3".parse().unwrap()).await;
    let mut half = connect(address);
    half.write_all(b"GET /health/live HT").unwrap();
    tokio::time::sleep(Duration::from_millis(100)).await;
    let begun = Instant::now();
    stop.send(()).unwrap();
    tokio::time::timeout(Duration::from_secs(10), served).await.unwrap().unwrap();
    assert!(begun.elapsed() >= Duration::from_millis(290), "it was waited for until the deadline");
    drop(half);
}

#[tokio::test(flavor = "multi_thread")]
async fn a_caller_that_hangs_up_ends_the_work_and_is_noted() {
    let running = start(|_| {}).await;
    let mut stream = connect(running.address);
    stream.write_all(b"GET /test/never HTTP/1.1\r\nHost: lip\r\n\r\n").unwrap();
    let wait_for = async |count: usize| {
        let begun = Instant::now();
        while running.state.in_flight() != count {
            assert!(begun.elapsed() < Duration::from_secs(10));
            tokio::time::sleep(Duration::from_millis(2)).await;
        }
    };
    wait_for(1).await;
    drop(stream);
    wait_for(0).await;
    let address = running.address;
    let metrics = blocking(move || request(address, "GET /metrics HTTP/1.1\r\nHost: lip\r\n\r\n", &[])).await;
    let line = r#"http_requests_total{route="/test/never",method="GET",status="499"} 1"#;
    assert!(metrics.body.contains(line), "{}", metrics.body);
}
