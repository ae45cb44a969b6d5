//! What all requests share.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

use tokio::sync::Semaphore;

use super::layers::bearer::{TokenFileError, Tokens};
use super::settings::Settings;

/// What all requests share; handlers get it as `axum::extract::State<Shared>`.
pub type Shared = Arc<ServiceState>;

/// The settings, and the little that changes while the service runs.
#[derive(Debug)]
pub struct ServiceState {
    /// The operator's settings.
    pub settings: Settings,
    /// A permit for each long computation (sweeps and the like) that may run at a time.
    pub heavy: Arc<Semaphore>,
    pub(super) tokens: Option<Tokens>,
    pub(super) in_flight: Arc<AtomicUsize>,
    ready: AtomicBool,
}

impl ServiceState {
    /// The state of a service that has just been started; reads the token file, if one is set.
    ///
    /// # Errors
    /// When the token file cannot be read or holds no usable token.
    pub fn new(settings: Settings) -> Result<Shared, TokenFileError> {
        let tokens = settings.bearer_token_file.clone().map(Tokens::read).transpose()?;
        let heavy = Arc::new(Semaphore::new(settings.heavy_count()));
        Ok(Arc::new(Self {
            settings,
            heavy,
            tokens,
            in_flight: Arc::new(AtomicUsize::new(0)),
            ready: AtomicBool::new(true),
        }))
    }

    /// Requests being worked on.
    #[must_use]
    pub fn in_flight(&self) -> usize {
        self.in_flight.load(Ordering::Relaxed)
    }

    /// Whether new work is welcome: false once the service is shutting down.
    #[must_use]
    pub fn is_ready(&self) -> bool {
        self.ready.load(Ordering::Relaxed)
    }

    /// Tells the orchestrator's probe that no new work is welcome.
    pub(super) fn close(&self) {
        self.ready.store(false, Ordering::Relaxed);
    }

    /// Reads the token file again. The old tokens stay in force when that fails.
    ///
    /// # Errors
    /// When the token file cannot be read or holds no usable token.
    pub fn reload_tokens(&self) -> Result<(), TokenFileError> {
        self.tokens.as_ref().map_or(Ok(()), Tokens::reload)
    }
}
