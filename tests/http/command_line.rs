//! The program: starting, stopping, probing, and saying what is wrong.

use std::io::Write;
use std::time::Duration;

use crate::server::{Scratch, Server, connect, program, write_file};

#[test]
fn starts_quickly_logs_each_request_and_stops_on_sigterm() {
    let mut server = Server::start("start", &["--base-path", "/lips"]);
    println!("start to ready: {:.1} ms", server.ready_after.as_secs_f64() * 1e3);
    let trace = "traceparent: 00-4bf92f3577b34da6a3ce929d0e0e4736-00f067aa0ba902b7-01\r\n";
    let reply = server.get("/lips/problems/too-large?key=hidden", &format!("X-Request-Id: abc\r\n{trace}"));
    assert_eq!(reply.status, 200);
    assert!(reply.head.contains("x-request-id: abc\r\n"));
    server.signal("TERM");
    let (status, _) = server.wait();
    assert_eq!(status.code(), Some(0));

    let log = server.log();
    let lines: Vec<serde_json::Value> = log.lines().map(|line| serde_json::from_str(line).unwrap()).collect();
    let access: Vec<_> = lines.iter().filter(|line| line["target"] == "access").collect();
    assert_eq!(access.len(), 1, "{log}");
    assert_eq!(access[0]["request_id"], "abc");
    assert_eq!(access[0]["trace_id"], "4bf92f3577b34da6a3ce929d0e0e4736");
    assert_eq!(access[0]["route"], "/problems/{slug}");
    assert_eq!(access[0]["status"], 200);
    assert_eq!(access[0]["method"], "GET");
    assert_eq!(access[0]["bytes"], reply.body.len());
    assert!(access[0]["duration_us"].is_u64());
    assert!(!log.contains("hidden"), "queries may hold secrets");
    assert!(log.contains("\"stopped\""));
}

#[test]
fn half_a_head_and_an_idle_connection_do_not_outlive_the_deadline() {
    let mut server = Server::start("half", &["--shutdown-s", "0.5"]);
    let idle = connect(server.address);
    let mut half = connect(server.address);
    half.write_all(b"POST /v1/evaluations HTTP/1.1\r\nHost:").unwrap();
    std::thread::sleep(Duration::from_millis(100));
    server.signal("TERM");
    let (status, took) = server.wait();
    assert_eq!(status.code(), Some(0));
    assert!(took < Duration::from_secs(5), "{took:?}");
    drop((idle, half));
}

#[test]
fn a_probe_tells_by_its_exit_code() {
    let mut server = Server::start("probe", &["--base-path", "/lips"]);
    let listen = server.address.to_string();
    let probe = |arguments: &[&str]| program().arg("probe").args(arguments).output().unwrap();
    assert_eq!(probe(&["--listen", &listen, "--base-path", "/lips"]).status.code(), Some(0));
    let file = server.address_file();
    let by_file = ["--address-file", file.to_str().unwrap(), "--base-path", "/lips"];
    assert_eq!(probe(&by_file).status.code(), Some(0));
    let by_variable = program()
        .arg("probe")
        .env("DRIBBLE_RISK_LISTEN", &listen)
        .env("DRIBBLE_RISK_BASE_PATH", "/lips")
        .status()
        .unwrap();
    assert_eq!(by_variable.code(), Some(0));
    let elsewhere = probe(&["--listen", &listen]);
    assert_eq!(elsewhere.status.code(), Some(1));
    assert!(String::from_utf8_lossy(&elsewhere.stderr).contains("404"));
    server.signal("INT");
    assert_eq!(server.wait().0.code(), Some(0));
    let gone = probe(&by_file);
    assert_eq!(gone.status.code(), Some(1));
    assert!(String::from_utf8_lossy(&gone.stderr).contains("no answer"));
}

#[test]
fn bad_settings_are_named() {
    let scratch = Scratch::new("settings");
    let empty = scratch.file("empty");
    write_file(&empty, "");
    let taken = std::net::TcpListener::bind("127.0.0.1:0").unwrap();
    let taken = taken.local_addr().unwrap().to_string();
    for (arguments, code, told) in [
        (vec!["--workers", "none"], 2, "--workers"),
        (vec!["--no-such"], 2, "--no-such"),
        (vec!["--listen", &taken], 1, "cannot listen on"),
        (vec!["--bearer-token-file", "no-such-file"], 1, "no-such-file cannot be read"),
        (vec!["--bearer-token-file", empty.to_str().unwrap()], 1, "holds no token"),
        (vec!["--listen", "127.0.0.1:0", "--address-file", "no-such-dir/a"], 1, "cannot be written"),
    ] {
        let output = program().args(&arguments).output().unwrap();
        let message = String::from_utf8_lossy(&output.stderr).into_owned();
        assert_eq!(output.status.code(), Some(code), "{arguments:?}: {message}");
        assert!(message.contains(told), "{arguments:?}: {message}");
    }
}

#[test]
fn evaluate_decides_without_a_server() {
    let scratch = Scratch::new("evaluate");
    let file = scratch.file("request.json");
    let request = crate::evaluations::request().to_string();
    write_file(&file, &request);
    let from_file = program().arg("evaluate").arg(&file).output().unwrap();
    assert_eq!(from_file.status.code(), Some(0), "{}", String::from_utf8_lossy(&from_file.stderr));
    let answer: serde_json::Value = serde_json::from_slice(&from_file.stdout).unwrap();
    assert!(answer["safety_factor"]["value"].as_f64().unwrap() > 0.0);

    let mut child = program()
        .args(["evaluate", "-"])
        .stdin(std::process::Stdio::piped())
        .stdout(std::process::Stdio::piped())
        .spawn()
        .unwrap();
    child.stdin.take().unwrap().write_all(request.as_bytes()).unwrap();
    assert_eq!(child.wait_with_output().unwrap().stdout, from_file.stdout, "same request, same bytes");

    write_file(&file, "{\"lip\": 3}");
    let refused = program().arg("evaluate").arg(&file).output().unwrap();
    assert_eq!(refused.status.code(), Some(1));
    assert!(String::from_utf8_lossy(&refused.stderr).contains("/pour"));
    let nowhere = program().args(["evaluate", "no-such-file"]).output().unwrap();
    assert_eq!(nowhere.status.code(), Some(1));
}

#[test]
fn openapi_prints_the_document() {
    let output = program().arg("openapi").output().unwrap();
    assert!(output.status.success());
    let text = String::from_utf8(output.stdout).unwrap();
    assert_eq!(text, dribble_risk::service::openapi_json().unwrap());
}
