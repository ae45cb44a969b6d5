//! The request body on its way in: counted against the limit, watched for whether it came to its end, and drained
//! when the request is refused, so that the caller sees the refusal and not a broken pipe.

use std::pin::Pin;
use std::sync::atomic::{AtomicU8, Ordering};
use std::sync::{Arc, Mutex, PoisonError};
use std::task::{Context, Poll};
use std::time::Duration;

use axum::body::Body;
use bytes::Bytes;
use http_body::{Body as HttpBody, Frame, SizeHint};
use http_body_util::BodyExt;

const READING: u8 = 0;
const COMPLETE: u8 = 1;
const TOO_LARGE: u8 = 2;

/// Why a body could not be read to its end.
#[derive(Debug, thiserror::Error)]
pub(in crate::service) enum BodyFault {
    /// It is larger than the limit.
    #[error("the body is larger than {limit} bytes")]
    TooLarge {
        /// The limit in bytes.
        limit: usize,
    },
    /// The connection failed.
    #[error("the body broke off")]
    BrokeOff(#[source] axum::Error),
}

/// A request body that the layer and the handler both hold.
#[derive(Debug, Clone)]
pub(super) struct Incoming(Arc<Shared>);

#[derive(Debug)]
struct Shared {
    body: Mutex<Body>,
    condition: AtomicU8,
}

impl Incoming {
    pub(super) fn new(body: Body) -> Self {
        Self(Arc::new(Shared { body: Mutex::new(body), condition: AtomicU8::new(READING) }))
    }

    /// The body as the handler gets it.
    pub(super) fn guarded(&self, limit: usize) -> Body {
        Body::new(Guarded { incoming: self.clone(), limit, seen: 0 })
    }

    /// Whether the body came to its end.
    pub(super) fn is_complete(&self) -> bool {
        self.0.condition.load(Ordering::Relaxed) == COMPLETE
    }

    /// Whether the body was cut off at the limit.
    pub(super) fn is_too_large(&self) -> bool {
        self.0.condition.load(Ordering::Relaxed) == TOO_LARGE
    }

    /// Reads on and throws away, up to `cap` bytes and for as long as `patience`.
    pub(super) async fn drain(&self, cap: usize, patience: Duration) {
        let body = std::mem::take(&mut *self.0.body.lock().unwrap_or_else(PoisonError::into_inner));
        let mut body = std::pin::pin!(body);
        let mut seen = 0_usize;
        let reading = async {
            while let Some(Ok(frame)) = body.as_mut().frame().await {
                seen = seen.saturating_add(frame.data_ref().map_or(0, Bytes::len));
                if seen > cap {
                    break;
                }
            }
        };
        // Whether it came to its end or not, the refusal is sent next.
        let _ended = tokio::time::timeout(patience, reading).await;
    }
}

struct Guarded {
    incoming: Incoming,
    limit: usize,
    seen: usize,
}

impl HttpBody for Guarded {
    type Data = Bytes;
    type Error = BodyFault;

    fn poll_frame(
        mut self: Pin<&mut Self>,
        context: &mut Context<'_>,
    ) -> Poll<Option<Result<Frame<Bytes>, BodyFault>>> {
        let polled = {
            let mut body = self.incoming.0.body.lock().unwrap_or_else(PoisonError::into_inner);
            Pin::new(&mut *body).poll_frame(context)
        };
        match polled {
            Poll::Pending => Poll::Pending,
            Poll::Ready(None) => {
                self.incoming.0.condition.store(COMPLETE, Ordering::Relaxed);
                Poll::Ready(None)
            }
            Poll::Ready(Some(Err(error))) => Poll::Ready(Some(Err(BodyFault::BrokeOff(error)))),
            Poll::Ready(Some(Ok(frame))) => {
                self.seen = self.seen.saturating_add(frame.data_ref().map_or(0, Bytes::len));
                if self.seen > self.limit {
                    self.incoming.0.condition.store(TOO_LARGE, Ordering::Relaxed);
                    return Poll::Ready(Some(Err(BodyFault::TooLarge { limit: self.limit })));
                }
                if self.is_end_stream() {
                    self.incoming.0.condition.store(COMPLETE, Ordering::Relaxed);
                }
                Poll::Ready(Some(Ok(frame)))
            }
        }
    }

    fn is_end_stream(&self) -> bool {
        self.incoming.0.body.lock().unwrap_or_else(PoisonError::into_inner).is_end_stream()
    }

    fn size_hint(&self) -> SizeHint {
        self.incoming.0.body.lock().unwrap_or_else(PoisonError::into_inner).size_hint()
    }
}
