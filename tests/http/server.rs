//! The built program as a process of its own, and a plain client of HTTP/1.1 over a socket.

use std::io::{BufRead, BufReader, Read, Write};
use std::net::{SocketAddr, TcpStream};
use std::path::{Path, PathBuf};
use std::process::{Child, Command, ExitStatus, Stdio};
use std::time::{Duration, Instant};

/// Longer than anything here takes on a slow machine; tests fail then instead of hanging.
const PATIENCE: Duration = Duration::from_secs(20);

pub fn program() -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_dribble-risk"));
    for (name, _) in std::env::vars().filter(|(name, _)| name.starts_with("DRIBBLE_RISK_")) {
        command.env_remove(name);
    }
    command
}

/// A directory of this test's own, gone with it.
pub struct Scratch(PathBuf);

impl Scratch {
    pub fn new(name: &str) -> Self {
        let path = std::env::temp_dir().join(format!("dribble-risk-{}-{name}", std::process::id()));
        std::fs::create_dir_all(&path).unwrap();
        Self(path)
    }

    pub fn file(&self, name: &str) -> PathBuf {
        self.0.join(name)
    }
}

impl Drop for Scratch {
    fn drop(&mut self) {
        let _left = std::fs::remove_dir_all(&self.0);
    }
}

/// A running server; killed if a test leaves it behind.
pub struct Server {
    child: Child,
    pub address: SocketAddr,
    pub ready_after: Duration,
    scratch: Scratch,
}

impl Server {
    pub fn start(name: &str, arguments: &[&str]) -> Self {
        let scratch = Scratch::new(name);
        let address_file = scratch.file("address");
        let started = Instant::now();
        let child = program()
            .args(["--listen", "127.0.0.1:0", "--log-format", "json", "--address-file"])
            .arg(&address_file)
            .args(arguments)
            .stdout(std::fs::File::create(scratch.file("log")).unwrap())
            .stderr(Stdio::inherit())
            .spawn()
            .unwrap();
        let address = loop {
            if let Ok(text) = std::fs::read_to_string(&address_file) {
                break text.parse().unwrap();
            }
            assert!(started.elapsed() < PATIENCE, "the server did not start");
            std::thread::sleep(Duration::from_millis(1));
        };
        Self { child, address, ready_after: started.elapsed(), scratch }
    }

    pub fn address_file(&self) -> PathBuf {
        self.scratch.file("address")
    }

    pub fn log(&self) -> String {
        std::fs::read_to_string(self.scratch.file("log")).unwrap()
    }

    pub fn signal(&self, name: &str) {
        let sent = Command::new("kill").args(["-s", name, &self.child.id().to_string()]).status().unwrap();
        assert!(sent.success());
    }

    /// A line of the process's memory, in MB.
    pub fn memory_mb(&self, what: &str) -> f64 {
        let status = std::fs::read_to_string(format!("/proc/{}/status", self.child.id())).unwrap();
        let line = status.lines().find(|line| line.starts_with(what)).unwrap();
        line.split_whitespace().nth(1).unwrap().parse::<f64>().unwrap() / 1024.0
    }

    pub fn wait(&mut self) -> (ExitStatus, Duration) {
        let started = Instant::now();
        loop {
            if let Some(status) = self.child.try_wait().unwrap() {
                return (status, started.elapsed());
            }
            assert!(started.elapsed() < PATIENCE, "the server did not stop");
            std::thread::sleep(Duration::from_millis(2));
        }
    }

    pub fn get(&self, path: &str, headers: &str) -> Reply {
        request(self.address, &format!("GET {path} HTTP/1.1\r\nHost: lip\r\n{headers}\r\n"), &[])
    }
}

impl Drop for Server {
    fn drop(&mut self) {
        let _gone = self.child.kill();
        let _reaped = self.child.wait();
    }
}

#[derive(Debug)]
pub struct Reply {
    pub status: u16,
    pub head: String,
    pub body: String,
}

pub fn connect(address: SocketAddr) -> TcpStream {
    let stream = TcpStream::connect(address).unwrap();
    stream.set_read_timeout(Some(PATIENCE)).unwrap();
    stream
}

/// Sends all of head and body, only then reads: as a simple client does that a broken pipe would fail.
#[track_caller]
pub fn request(address: SocketAddr, head: &str, body: &[u8]) -> Reply {
    let mut stream = connect(address);
    stream.write_all(head.as_bytes()).unwrap();
    stream.write_all(body).unwrap();
    read_reply(&stream)
}

#[track_caller]
pub fn read_reply(stream: &TcpStream) -> Reply {
    let mut reader = BufReader::new(stream);
    let mut head = String::new();
    while !head.ends_with("\r\n\r\n") {
        assert_ne!(reader.read_line(&mut head).unwrap(), 0, "the connection ended within the head: {head:?}");
    }
    let status = head.split(' ').nth(1).unwrap().parse().unwrap();
    let length = head.lines().find_map(|line| line.strip_prefix("content-length: ")).unwrap_or("0");
    let mut body = vec![0; length.parse().unwrap()];
    reader.read_exact(&mut body).unwrap();
    Reply { status, head, body: String::from_utf8(body).unwrap() }
}

pub fn write_file(path: &Path, text: &str) {
    std::fs::write(path, text).unwrap();
}
