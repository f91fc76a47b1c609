//! A run that a signal can stop: how far it was then, and while it lasts, on a terminal.

use crate::shell::{Shell, Talk};
use crate::trouble::Trouble;
use pulsewright::Error;
use pulsewright::report::number::brief;
use pulsewright::study::{Hook, Progress};
use std::io::{self, IsTerminal, Write};
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

/// How long a run is silent, and then from one line to the next.
const SILENT: Duration = Duration::from_millis(500);
const BETWEEN: Duration = Duration::from_millis(200);

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
    let bar = Bar::new(unit == Unit::Shot && shell.talk >= Talk::Usual);
    let far: Mutex<Option<Progress>> = Mutex::new(None);
    let hook = |progress: Progress| {
        if let Ok(mut far) = far.lock() {
            let further = far.is_none_or(|f| unit == Unit::Case || f.case <= progress.case);
            if further {
                *far = Some(progress);
                bar.show(progress);
            }
        }
        shell.stop.came().is_none()
    };
    let outcome = run(&hook);
    bar.clear();
    match outcome {
        Err(Error::Stopped { .. }) => Err(Trouble::Stopped(
            far.into_inner()
                .ok()
                .flatten()
                .map(|far| in_words(far, unit)),
        )),
        other => other.map_err(Trouble::from),
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

/// A line on the terminal that is written over, and gone when done.
struct Bar {
    is_shown: bool,
    start: Instant,
    last: Mutex<Option<Instant>>,
}

impl Bar {
    fn new(wanted: bool) -> Self {
        Bar {
            is_shown: wanted && io::stderr().is_terminal(),
            start: Instant::now(),
            last: Mutex::new(None),
        }
    }

    fn show(&self, far: Progress) {
        let past = self.start.elapsed();
        if !self.is_shown || past < SILENT {
            return;
        }
        let Ok(mut last) = self.last.lock() else {
            return;
        };
        if last.is_some_and(|last| last.elapsed() < BETWEEN) {
            return;
        }
        *last = Some(Instant::now());
        let done = far.case.saturating_sub(1);
        #[allow(clippy::cast_precision_loss, reason = "counts of shots")]
        let left = past.as_secs_f64() * (far.of - done.min(far.of)) as f64 / done.max(1) as f64;
        let _ = write!(
            io::stderr(),
            "\r{done} of {} shots, {} left\u{1b}[K",
            far.of,
            brief(left.ceil(), "s", 2)
        );
    }

    fn clear(&self) {
        if self.last.lock().is_ok_and(|last| last.is_some()) {
            let _ = write!(io::stderr(), "\r\u{1b}[K");
        }
    }
}
