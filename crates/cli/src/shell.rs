//! The surroundings of a run: where data go, how wide and coloured, how much is said, and
//! whether a signal has come.

use crate::args::{Colour, Common};
use crate::output::Target;
use crate::stop::Stop;
use anstream::{AutoStream, ColorChoice};
use pulsewright::report::Look;
use pulsewright::report::plot::Ink;
use std::io::{self, IsTerminal};

/// The surroundings of a run.
#[derive(Debug)]
pub struct Shell {
    /// Where data go.
    pub target: Target,
    /// How a page is laid out there.
    pub look: Look,
    /// What a plot in the page is drawn with; none where no terminal shows it.
    pub ink: Option<Ink>,
    /// How messages on standard error are.
    pub messages: ColorChoice,
    /// How much is said beside errors.
    pub talk: Talk,
    /// Signals.
    pub stop: Stop,
}

/// How much is said beside errors.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Talk {
    /// Nothing.
    Quiet,
    /// Remarks.
    Usual,
    /// Remarks, methods, steps.
    Verbose,
}

impl Shell {
    /// The surroundings that the options ask for.
    pub fn of(common: &Common) -> Self {
        match common.color {
            Colour::Auto => ColorChoice::Auto,
            Colour::Always => ColorChoice::Always,
            Colour::Never => ColorChoice::Never,
        }
        .write_global();
        let target = Target::of(common.output.as_deref());
        let talk = match (common.quiet, common.verbose) {
            (true, _) => Talk::Quiet,
            (_, true) => Talk::Verbose,
            _ => Talk::Usual,
        };
        Shell {
            look: look(&target),
            ink: ink(&target),
            target,
            messages: AutoStream::choice(&io::stderr()),
            talk,
            stop: Stop::listen(),
        }
    }
}

/// The layout of a page: as wide as the terminal, 80 columns where there is none.
fn look(target: &Target) -> Look {
    if *target != Target::Standard {
        return Look::default();
    }
    let colour = AutoStream::choice(&io::stdout()) != ColorChoice::Never;
    let terminal = io::stdout()
        .is_terminal()
        .then(terminal_size::terminal_size)
        .flatten();
    let width = terminal.map_or(Look::default().width, |(width, _)| {
        usize::from(width.0).max(40)
    });
    Look { width, colour }
}

/// Dots where the terminal shows more than ASCII, letters and signs where it does not.
fn ink(target: &Target) -> Option<Ink> {
    if *target != Target::Standard || !io::stdout().is_terminal() {
        return None;
    }
    let set = |name: &str| std::env::var(name).ok().filter(|v| !v.is_empty());
    let locale = ["LC_ALL", "LC_CTYPE", "LANG"].into_iter().find_map(set);
    let term = set("TERM");
    let wide = locale.is_some_and(|l| {
        let l = l.to_ascii_lowercase();
        l.contains("utf-8") || l.contains("utf8")
    });
    let plain = term.is_none_or(|t| matches!(t.as_str(), "dumb" | "linux" | "vt100"));
    Some(if wide && !plain {
        Ink::Dots
    } else {
        Ink::Signs
    })
}
