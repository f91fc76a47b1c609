//! Why a shot could not be fired.

/// Why a shot could not be fired. Parts are given by their indices in the setup.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
#[non_exhaustive]
pub enum Failure {
    /// Voltage sources, wires and closed switches form a loop whose voltages do not add up to
    /// zero.
    #[error(
        "{} form a loop of ideal sources whose voltages do not add up to zero",
        listed(names)
    )]
    SourceLoop {
        /// The parts of the loop, sources included.
        parts: Vec<usize>,
        /// Their names.
        names: Vec<String>,
        /// When it forms, s.
        time: f64,
    },
    /// Current sources push a current into nodes that nothing else reaches.
    #[error(
        "the current of {} has no way to flow: nothing else reaches {}",
        listed(names),
        listed(nodes)
    )]
    CurrentCut {
        /// The current sources of the cut.
        parts: Vec<usize>,
        /// Their names.
        names: Vec<String>,
        /// The nodes that they alone reach.
        nodes: Vec<String>,
        /// When it forms, s.
        time: f64,
    },
    /// No state of the diodes and switches is consistent at an instant.
    #[error("at {} no state of {} is consistent", seconds(*time), listed(names))]
    NoState {
        /// The parts whose states contradict each other.
        names: Vec<String>,
        /// The instant, s.
        time: f64,
    },
    /// The equations have no single solution although the graph allows one (controlled sources
    /// can do that).
    #[error(
        "at {} the equations have no single solution; look at {}",
        seconds(*time),
        listed(names)
    )]
    Singular {
        /// Parts that may be at fault.
        names: Vec<String>,
        /// The instant, s.
        time: f64,
    },
    /// Events follow each other without end.
    #[error(
        "at {} events of {} follow each other without end ({count} within {})",
        seconds(*time),
        listed(names),
        seconds(*within)
    )]
    Chatter {
        /// The parts that keep changing.
        names: Vec<String>,
        /// The instant, s.
        time: f64,
        /// How many.
        count: u64,
        /// Within how long, s.
        within: f64,
    },
    /// A limit is reached.
    #[error("the limit of {allowed} {limit} is reached at {}; `limit {limit} {}` would raise it", seconds(*time), allowed.saturating_mul(10))]
    Limit {
        /// The word of the limit.
        limit: &'static str,
        /// What it allows.
        allowed: u64,
        /// How far the shot had come, s.
        time: f64,
    },
    /// A value that is no finite number.
    #[error("{what} is no finite number at {}", seconds(*time))]
    NotFinite {
        /// The part, or what it is of.
        what: String,
        /// The instant, s.
        time: f64,
    },
    /// `start steady` finds no steady state.
    #[error(
        "the circuit has no steady state to start in; look at {}",
        listed(names)
    )]
    NoSteadyState {
        /// Parts that may be at fault.
        names: Vec<String>,
    },
    /// Exact propagation does not apply, and why.
    #[error("exact propagation does not apply: {why}; `integrate by trapezoidal rule` does")]
    NotExact {
        /// Why, naming the part.
        why: String,
    },
    /// What this version cannot do, in words.
    #[error("{0}")]
    NotYet(String),
    /// The caller's hook asked to stop.
    #[error("stopped at {}", seconds(*time))]
    Cancelled {
        /// How far the shot had come, s.
        time: f64,
    },
}

/// An instant in seconds; small ones by a power of ten.
fn seconds(t: f64) -> String {
    if t == 0.0 || t.abs() >= 1e-6 {
        format!("{t} s")
    } else {
        format!("{t:e} s")
    }
}

fn listed(names: &[String]) -> String {
    let quoted: Vec<String> = names.iter().map(|n| format!("`{n}`")).collect();
    match quoted.as_slice() {
        [] => "the circuit".to_owned(),
        [one] => one.clone(),
        [init @ .., last] => format!("{} and {last}", init.join(", ")),
    }
}
