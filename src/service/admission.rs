//! Who computes, who waits, and who is sent away.
//!
//! There are a few places. Who finds one free takes it; who does not waits in the order of arrival, but only a bounded
//! number may wait, and only for a bounded time. All others get a `Busy` problem at once, so that a person sees a
//! sentence instead of a spreadsheet that hangs.

use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::Duration;

use actix_web::rt::time::timeout;
use tokio::sync::{OwnedSemaphorePermit, Semaphore};

use crate::problem::{Problem, ProblemKind};

/// A bounded number of places and a bounded queue before them.
pub struct Admission {
    places: Arc<Semaphore>,
    waiting: AtomicUsize,
    most_waiting: usize,
    patience: Duration,
}

/// A place; it is free again when this is dropped.
pub type Place = OwnedSemaphorePermit;

impl Admission {
    pub fn new(places: usize, most_waiting: usize, patience: Duration) -> Self {
        Admission { places: Arc::new(Semaphore::new(places)), waiting: AtomicUsize::new(0), most_waiting, patience }
    }

    /// Waits for a place.
    ///
    /// # Errors
    /// The queue is full, or the wait was too long.
    pub async fn enter(&self) -> Result<Place, Problem> {
        if let Ok(place) = self.places.clone().try_acquire_owned() {
            return Ok(place);
        }
        let _seat = Seat::take(&self.waiting, self.most_waiting).ok_or_else(busy)?;
        match timeout(self.patience, self.places.clone().acquire_owned()).await {
            Ok(Ok(place)) => Ok(place),
            _ => Err(busy()),
        }
    }

    /// How many wait.
    pub fn waiting(&self) -> usize {
        self.waiting.load(Ordering::Relaxed)
    }

    /// How many places are free.
    pub fn free(&self) -> usize {
        self.places.available_permits()
    }
}

/// A seat in the queue, left when it is dropped, also because the client went away.
struct Seat<'a>(&'a AtomicUsize);

impl<'a> Seat<'a> {
    fn take(waiting: &'a AtomicUsize, most: usize) -> Option<Self> {
        let take = |seats: usize| (seats < most).then_some(seats + 1);
        waiting.fetch_update(Ordering::Relaxed, Ordering::Relaxed, take).ok().map(|_| Seat(waiting))
    }
}

impl Drop for Seat<'_> {
    fn drop(&mut self) {
        self.0.fetch_sub(1, Ordering::Relaxed);
    }
}

fn busy() -> Problem {
    Problem::new(ProblemKind::Busy, "busy", "all places for computing are taken and others are waiting already")
        .help("Try again in a moment.")
}
