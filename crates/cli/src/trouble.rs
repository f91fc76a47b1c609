//! Why a verb has nothing to hand over.

use crate::exit::Ending;
use pulsewright::{Error, Mistakes};

/// Why a verb has nothing to hand over.
#[derive(Debug)]
pub enum Trouble {
    /// The command line asks for what cannot be, in words.
    Usage(String),
    /// The input is at fault.
    Mistakes(Mistakes),
    /// The run broke, in words.
    Broke(String),
    /// A signal came; how far the run had come, in words, where one was on its way.
    Stopped(Option<String>),
}

impl Trouble {
    /// How a run with this trouble ends; `signal` is the one that came.
    pub fn ending(&self, signal: Option<u8>) -> Ending {
        match self {
            Trouble::Usage(_) | Trouble::Mistakes(_) => Ending::Input,
            Trouble::Broke(_) => Ending::Broke,
            Trouble::Stopped(_) => signal.map_or(Ending::Broke, Ending::Signal),
        }
    }
}

impl From<Mistakes> for Trouble {
    fn from(mistakes: Mistakes) -> Self {
        Trouble::Mistakes(mistakes)
    }
}

impl From<Error> for Trouble {
    fn from(error: Error) -> Self {
        match error {
            Error::Mistakes(mistakes) => Trouble::Mistakes(mistakes),
            Error::Stopped { .. } => Trouble::Stopped(None),
            other => Trouble::Broke(other.to_string()),
        }
    }
}
