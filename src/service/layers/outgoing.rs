//! The answer on its way out: once its last byte is handed over (or the caller hung up), the request is counted,
//! logged, and no longer in flight.

use std::pin::Pin;
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::task::{Context, Poll};

use axum::body::Body;
use bytes::Bytes;
use http_body::{Body as HttpBody, Frame, SizeHint};

use super::access::Record;

/// A place among the requests in flight, given back on drop.
#[derive(Debug)]
pub(super) struct Place(Arc<AtomicUsize>);

impl Place {
    /// Takes a place, unless all are taken.
    pub(super) fn take(in_flight: &Arc<AtomicUsize>, most: usize) -> Option<Self> {
        let before = in_flight.fetch_add(1, Ordering::AcqRel);
        let place = Self(Arc::clone(in_flight));
        (before < most).then_some(place)
    }
}

impl Drop for Place {
    fn drop(&mut self) {
        self.0.fetch_sub(1, Ordering::AcqRel);
    }
}

/// Ends the request now if the answer's size is known, else when its body is through.
pub(super) fn finish(body: Body, mut record: Record, place: Option<Place>) -> Body {
    if let Some(bytes) = body.size_hint().exact() {
        record.close(bytes);
        body
    } else {
        Body::new(Streaming { body, sent: 0, record, _place: place })
    }
}

struct Streaming {
    body: Body,
    sent: u64,
    record: Record,
    _place: Option<Place>,
}

impl HttpBody for Streaming {
    type Data = Bytes;
    type Error = axum::Error;

    fn poll_frame(
        mut self: Pin<&mut Self>,
        context: &mut Context<'_>,
    ) -> Poll<Option<Result<Frame<Bytes>, axum::Error>>> {
        let polled = Pin::new(&mut self.body).poll_frame(context);
        if let Poll::Ready(Some(Ok(frame))) = &polled {
            self.sent += frame.data_ref().map_or(0, |data| data.len() as u64);
        }
        polled
    }

    fn is_end_stream(&self) -> bool {
        self.body.is_end_stream()
    }

    fn size_hint(&self) -> SizeHint {
        self.body.size_hint()
    }
}

impl Drop for Streaming {
    fn drop(&mut self) {
        let sent = self.sent;
        self.record.close(sent);
    }
}
