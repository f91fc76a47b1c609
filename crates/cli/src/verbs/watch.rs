//! A run that a signal can stop, and how far it is.
//!
//! Where standard error is a terminal and the run takes longer than half a second, a line says how
//! far it is; it is taken back before anything else is said.

use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::Error;
use pulsewright::report::number::brief;
use pulsewright::study::{Hook, Progress};
use std::sync::Mutex;
use std::time::{Duration, Instant};

/// What is counted.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unit {
    /// Cases, whose instant is worth telling too.
    Case,
    /// Shots of a study, of which there are many.
    Shot,
}

/// Runs something under a hook that stops it when a signal comes.
pub fn watched<T>(
    shell: &Shell,
    run: impl FnOnce(Hook<'_>) -> Result<T, Error>,
) -> Result<T, Trouble> {
    watched_by(shell, Unit::Case, run)
}

/// The same, counting shots or cases.
pub fn watched_by<T>(
    shell: &Shell,
    unit: Unit,
    run: impl FnOnce(Hook<'_>) -> Result<T, Error>,
) -> Result<T, Trouble> {
    let far: Mutex<Far> = Mutex::new(Far::begin(shell, unit));
    let hook = |progress: Progress| {
        if let Ok(mut far) = far.lock() {
            far.reach(progress);
        }
        shell.stop.came().is_none()
    };
    let outcome = run(&hook);
    let last = far.into_inner().ok().and_then(Far::end);
    match outcome {
        Err(Error::Stopped { .. }) => Err(Trouble::Stopped(last.map(|far| in_words(far, unit)))),
        other => other.map_err(Trouble::from),
    }
}

/// How long a run may take before its progress is shown.
const PATIENCE: Duration = Duration::from_millis(500);
/// How often the line changes.
const EVERY: Duration = Duration::from_millis(100);

/// How far a run is, and what of it is on the terminal.
struct Far {
    unit: Unit,
    last: Option<Progress>,
    begun: Instant,
    shown: Option<Instant>,
    /// Columns of the terminal on standard error; none where there is no terminal.
    columns: Option<usize>,
}

impl Far {
    fn begin(shell: &Shell, unit: Unit) -> Self {
        Far {
            unit,
            last: None,
            begun: Instant::now(),
            shown: None,
            columns: say::terminal_columns(shell),
        }
    }

    /// Notes how far it is; now and then says so.
    fn reach(&mut self, progress: Progress) {
        // Shots of a study end out of order.
        let back = self.last.is_some_and(|last| progress.case < last.case);
        if self.unit == Unit::Shot && back {
            return;
        }
        self.last = Some(progress);
        let Some(columns) = self.columns else {
            return;
        };
        let due = match self.shown {
            None => self.begun.elapsed() >= PATIENCE,
            Some(shown) => shown.elapsed() >= EVERY,
        };
        if due {
            self.shown = Some(Instant::now());
            say::over(&self.line(progress), columns);
        }
    }

    fn line(&self, far: Progress) -> String {
        if self.unit == Unit::Case {
            return format!("firing {}", in_words(far, self.unit));
        }
        let done = far.case.saturating_sub(1);
        #[allow(clippy::cast_precision_loss, reason = "counts of shots")]
        let rest = far.of.saturating_sub(done) as f64 / done.max(1) as f64;
        let left = (self.begun.elapsed().as_secs_f64() * rest).ceil();
        format!("{done} of {} shots, {} left", far.of, brief(left, "s", 2))
    }

    /// Takes the line back.
    fn end(self) -> Option<Progress> {
        if let (Some(_), Some(columns)) = (self.shown, self.columns) {
            say::over("", columns);
        }
        self.last
    }
}

/// `in case 3 of 7, at 12 ms of 30 ms`
fn in_words(far: Progress, unit: Unit) -> String {
    if unit == Unit::Shot {
        return format!("in shot {} of {}", far.case, far.of);
    }
    let at = format!(
        "at {} of {}",
        brief(far.time, "s", 4),
        brief(far.span, "s", 4)
    );
    if far.of < 2 {
        at
    } else {
        format!("in case {} of {}, {at}", far.case, far.of)
    }
}
