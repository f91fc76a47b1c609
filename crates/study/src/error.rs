//! Why a circuit could not be fired or judged.

use pulsewright_circuit::Fault;
use pulsewright_engine::Failure;

/// Why a circuit could not be fired or judged.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum StudyError {
    /// The engine found no answer, met a limit, or broke.
    #[error("{0}")]
    Engine(Failure),
    /// Values that are out of range in this case, or let-values that do not exist.
    #[error("{}", first(.0))]
    Faults(Vec<Fault>),
    /// A claim on a reading that depends on the potential at which an island was held.
    #[error("claim `{claim}` cannot be judged: {why}")]
    Floating {
        /// The claim.
        claim: String,
        /// Why, with what to write.
        why: String,
    },
    /// The joules of a shot do not add up within their bounds: a defect of the run.
    #[error(
        "the energy balance does not close: {residual} J are missing, with a bound of {bound} J"
    )]
    Balance {
        /// What does not add up, J.
        residual: f64,
        /// The bound on it, J.
        bound: f64,
    },
    /// Two methods disagree by more than their bounds: a defect of the run.
    #[error("two methods disagree on {reading}: {answers}")]
    Disagreement {
        /// The reading.
        reading: String,
        /// What each found, in words.
        answers: String,
    },
    /// An adjusted let-value for which a reading never reaches its value.
    #[error("`{name}` cannot be adjusted{case}: {why}")]
    NotAdjusted {
        /// The let-value.
        name: String,
        /// ` with ` the let-values of the case, or nothing.
        case: String,
        /// Why, with what the reading reaches.
        why: String,
    },
    /// A case that does not exist.
    #[error("there is no case {case}: the cases are numbered 1 to {of}")]
    NoCase {
        /// The number asked for.
        case: usize,
        /// How many there are.
        of: usize,
    },
    /// A draw of a study that could not be fired.
    #[error("draw {draw} with seed {seed}: {error}")]
    InDraw {
        /// The draw, from 1.
        draw: u64,
        /// The seed.
        seed: u64,
        /// Why.
        error: Box<StudyError>,
    },
    /// A claim that the netlist does not make.
    #[error("there is no claim `{claim}`")]
    NoClaim {
        /// The name asked for.
        claim: String,
    },
    /// The caller's hook asked to stop.
    #[error("stopped at {time} s")]
    Cancelled {
        /// How far the shot had come, s.
        time: f64,
    },
}

impl StudyError {
    /// The same with the draw that it came in.
    pub(crate) fn in_draw(self, draw: u64, seed: u64) -> Self {
        match self {
            StudyError::Cancelled { time } => StudyError::Cancelled { time },
            error => StudyError::InDraw {
                draw,
                seed,
                error: Box::new(error),
            },
        }
    }
}

fn first(faults: &[Fault]) -> String {
    match faults {
        [] => "the circuit has a mistake".to_owned(),
        [one] => one.to_string(),
        [one, rest @ ..] => format!("{one} (and {} more)", rest.len()),
    }
}

impl From<Failure> for StudyError {
    fn from(failure: Failure) -> Self {
        match failure {
            Failure::Cancelled { time } => StudyError::Cancelled { time },
            other => StudyError::Engine(other),
        }
    }
}

impl From<Vec<Fault>> for StudyError {
    fn from(faults: Vec<Fault>) -> Self {
        StudyError::Faults(faults)
    }
}
