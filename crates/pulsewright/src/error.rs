//! Why there is no result.

use pulsewright_netlist::Mistakes;

/// Why there is no result.
#[derive(Clone, Debug, thiserror::Error)]
#[non_exhaustive]
pub enum Error {
    /// The input is at fault: each mistake with its place.
    #[error("{0}")]
    Mistakes(Mistakes),
    /// The caller's hook asked to stop.
    #[error("stopped at {time} s of the shot")]
    Stopped {
        /// How far the shot had come, s.
        time: f64,
    },
    /// The run broke: a limit, a balance that does not close, an internal error, in words.
    #[error("{0}")]
    Broke(String),
}

impl From<Mistakes> for Error {
    fn from(mistakes: Mistakes) -> Self {
        Error::Mistakes(mistakes)
    }
}
