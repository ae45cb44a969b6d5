//! Listening, serving, and stopping in good order.

use std::future::Future;
use std::io;
use std::net::SocketAddr;
use std::path::Path;
use std::pin::pin;
use std::time::Duration;

use axum::Router;
use hyper::server::conn::http1;
use hyper_util::rt::{TokioIo, TokioTimer};
use hyper_util::server::graceful::GracefulShutdown;
use hyper_util::service::TowerToHyperService;
use tokio::net::{TcpListener, TcpSocket, TcpStream};
use tokio::signal::unix::{SignalKind, signal};

use super::layers::bearer::TokenFileError;
use super::settings::Settings;
use super::state::{ServiceState, Shared};
use super::{app, telemetry};

/// Why the service did not start or went down.
#[derive(Debug, thiserror::Error)]
pub enum RunError {
    /// The token file is of no use.
    #[error(transparent)]
    Tokens(#[from] TokenFileError),
    /// The threads could not be started.
    #[error("the worker threads cannot be started: {0}")]
    Runtime(#[source] io::Error),
    /// The address cannot be listened on.
    #[error("cannot listen on {address}: {source}")]
    Listen {
        /// The address.
        address: SocketAddr,
        /// Why.
        source: io::Error,
    },
    /// The address cannot be written down.
    #[error("the address cannot be written to {file}: {source}")]
    AddressFile {
        /// The file.
        file: String,
        /// Why.
        source: io::Error,
    },
    /// Signals cannot be waited for.
    #[error("cannot wait for signals: {0}")]
    Signals(#[source] io::Error),
}

/// A connection may be silent for this long before, within or between request heads.
const HEAD_PATIENCE: Duration = Duration::from_secs(30);

/// Durations are folded into their buckets this often, so that they do not pile up when nobody asks for metrics.
const FOLD_METRICS_EVERY: Duration = Duration::from_secs(1);

/// Serves until SIGTERM or SIGINT, then finishes what is in flight, up to the deadline.
///
/// # Errors
/// When the service cannot be started.
pub fn serve(settings: Settings) -> Result<(), RunError> {
    let runtime = tokio::runtime::Builder::new_multi_thread()
        .worker_threads(settings.worker_count())
        .enable_all()
        .build()
        .map_err(RunError::Runtime)?;
    let ended = runtime.block_on(async {
        let state = ServiceState::new(settings)?;
        // Signals are taken before the address is known to anyone.
        let stop = stop_signal().map_err(RunError::Signals)?;
        watch_token_file(&state).map_err(RunError::Signals)?;
        let listener = listen(state.settings.listen)?;
        let address = announce(&listener, &state.settings)?;
        tracing::info!(address = %address, version = env!("CARGO_PKG_VERSION"), "listening");
        serve_on(listener, app(&state), &state, stop).await;
        Ok(())
    });
    // Work that ignored its deadline must not hold the process.
    runtime.shutdown_background();
    ended
}

fn listen(address: SocketAddr) -> Result<TcpListener, RunError> {
    let bound = || {
        let socket = if address.is_ipv4() { TcpSocket::new_v4()? } else { TcpSocket::new_v6()? };
        socket.set_reuseaddr(true)?;
        socket.bind(address)?;
        socket.listen(1024)
    };
    bound().map_err(|source| RunError::Listen { address, source })
}

/// Finds out the real address and writes it down if asked to: first beside the file, then renamed, so that a reader
/// never sees half of it.
fn announce(listener: &TcpListener, settings: &Settings) -> Result<SocketAddr, RunError> {
    let address =
        listener.local_addr().map_err(|source| RunError::Listen { address: settings.listen, source })?;
    if let Some(file) = &settings.address_file {
        write_whole(file, &address.to_string())
            .map_err(|source| RunError::AddressFile { file: file.display().to_string(), source })?;
    }
    Ok(address)
}

fn write_whole(file: &Path, text: &str) -> io::Result<()> {
    let mut beside = file.as_os_str().to_owned();
    beside.push(".new");
    std::fs::write(&beside, text)?;
    std::fs::rename(&beside, file)
}

fn stop_signal() -> io::Result<impl Future<Output = ()>> {
    let mut terminate = signal(SignalKind::terminate())?;
    let mut interrupt = signal(SignalKind::interrupt())?;
    Ok(async move {
        tokio::select! {
            _ = terminate.recv() => {}
            _ = interrupt.recv() => {}
        }
    })
}

fn watch_token_file(state: &Shared) -> io::Result<()> {
    let mut hang_up = signal(SignalKind::hangup())?;
    let state = state.clone();
    tokio::spawn(async move {
        while hang_up.recv().await.is_some() {
            match state.reload_tokens() {
                Ok(()) => tracing::info!("bearer tokens read again"),
                Err(error) => tracing::error!(%error, "bearer tokens kept as they were"),
            }
        }
    });
    Ok(())
}

/// Serves `app` on `listener` until `stop` resolves; then stops listening, lets the connections finish, and gives
/// up on those left at the deadline.
pub async fn serve_on(listener: TcpListener, app: Router, state: &Shared, stop: impl Future<Output = ()>) {
    let connections = GracefulShutdown::new();
    let mut protocol = http1::Builder::new();
    protocol.timer(TokioTimer::new()).header_read_timeout(HEAD_PATIENCE);
    let folding = tokio::spawn(async {
        let metrics = telemetry::metrics_handle();
        loop {
            tokio::time::sleep(FOLD_METRICS_EVERY).await;
            metrics.run_upkeep();
        }
    });
    let mut stop = pin!(stop);
    loop {
        let accepted = tokio::select! {
            accepted = listener.accept() => accepted,
            () = &mut stop => break,
        };
        match accepted {
            Ok((stream, _)) => handle(stream, &app, &protocol, &connections),
            Err(error) if is_connection_error(&error) => {}
            Err(error) => {
                tracing::warn!(%error, "cannot accept connections for now");
                tokio::time::sleep(Duration::from_millis(100)).await;
            }
        }
    }
    drop(listener);
    state.close();
    let deadline = state.settings.shutdown_s.duration();
    tracing::info!(in_flight = state.in_flight(), connections = connections.count(), "shutting down");
    if tokio::time::timeout(deadline, connections.shutdown()).await.is_err() {
        tracing::warn!(in_flight = state.in_flight(), "the deadline came before the last connection ended");
    }
    folding.abort();
    tracing::info!("stopped");
}

fn handle(stream: TcpStream, app: &Router, protocol: &http1::Builder, connections: &GracefulShutdown) {
    // Answers are written whole; waiting for more to send along would only delay them.
    if let Err(error) = stream.set_nodelay(true) {
        tracing::debug!(%error, "no TCP_NODELAY");
    }
    let service = TowerToHyperService::new(app.clone());
    let connection = connections.watch(protocol.serve_connection(TokioIo::new(stream), service));
    tokio::spawn(async move {
        // Callers that hang up or send nonsense are theirs to explain.
        if let Err(error) = connection.await {
            tracing::debug!(%error, "connection ended early");
        }
    });
}

/// Errors of one connection, not of the listener.
fn is_connection_error(error: &io::Error) -> bool {
    matches!(
        error.kind(),
        io::ErrorKind::ConnectionRefused | io::ErrorKind::ConnectionAborted | io::ErrorKind::ConnectionReset
    )
}
