//! A run that a signal can stop, and how far it was then.

use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::Error;
use pulsewright::report::number::brief;
use pulsewright::study::{Hook, Progress};
use std::sync::Mutex;

/// Runs something under a hook that stops it when a signal comes.
pub fn watched<T>(
    shell: &Shell,
    run: impl FnOnce(Hook<'_>) -> Result<T, Error>,
) -> Result<T, Trouble> {
    let far: Mutex<Option<Progress>> = Mutex::new(None);
    let hook = |progress: Progress| {
        if let Ok(mut far) = far.lock() {
            *far = Some(progress);
        }
        shell.stop.came().is_none()
    };
    let outcome = run(&hook);
    match outcome {
        Err(Error::Stopped { .. }) => Err(Trouble::Stopped(
            far.into_inner().ok().flatten().map(in_words),
        )),
        other => other.map_err(Trouble::from),
    }
}

/// `in case 3 of 7, at 12 ms of 30 ms`
fn in_words(far: Progress) -> String {
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
