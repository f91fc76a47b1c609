//! The first SIGINT or SIGTERM asks the run to stop; the second ends the process at once.

use signal_hook::consts::{SIGINT, SIGTERM};
use signal_hook::flag;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

/// Which signal has come, if any.
#[derive(Clone, Debug, Default)]
pub struct Stop {
    number: Arc<AtomicUsize>,
}

impl Stop {
    /// Begins to listen. Where the system does not let us, signals keep their usual effect.
    pub fn listen() -> Self {
        let stop = Stop::default();
        let came = Arc::new(AtomicBool::new(false));
        for (signal, number) in [(SIGINT, 2), (SIGTERM, 15)] {
            // In this order: what the second does is decided before the first is noted.
            let armed = flag::register_conditional_default(signal, Arc::clone(&came))
                .and_then(|_| flag::register(signal, Arc::clone(&came)))
                .and_then(|_| flag::register_usize(signal, Arc::clone(&stop.number), number));
            if armed.is_err() {
                break;
            }
        }
        stop
    }

    /// The number of the signal that has come.
    pub fn came(&self) -> Option<u8> {
        u8::try_from(self.number.load(Ordering::Relaxed))
            .ok()
            .filter(|n| *n > 0)
    }
}
