//! The verbs, one a file: from arguments to data and an ending.

mod chart;
mod check;
mod completions;
mod fire;
mod judge;
mod list;
mod manual;
mod merge;
mod methods;
mod modes;
mod neaten;
mod report;
mod spread;
mod table;
mod watch;
mod waveform;

use crate::args::Verb;
use crate::exit::Ending;
use crate::input::why;
use crate::output::Target;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::report::record;

/// Runs a verb: writes what it brings, or says why it brings nothing.
pub fn run(verb: Verb, shell: &Shell) -> Ending {
    let json = matches!(
        verb,
        Verb::Check { json: true, .. }
            | Verb::Fire { json: true, .. }
            | Verb::Judge { json: true, .. }
            | Verb::Modes { json: true, .. }
            | Verb::Methods { json: true, .. }
            | Verb::Spread { json: true, .. }
            | Verb::Merge { json: true, .. }
    );
    let done = match verb {
        Verb::Check {
            files,
            settings,
            json,
        } => check::check(&files, &settings.set, json, shell),
        Verb::List {
            file,
            settings,
            case,
        } => list::list(&file, &settings.set, case.case, shell),
        Verb::Fire {
            file,
            settings,
            which,
            json,
            strict,
        } => fire::fire(
            &file,
            &settings.set,
            &which,
            fire::Form { json, strict },
            shell,
        ),
        Verb::Judge {
            file,
            settings,
            json,
        } => judge::judge(&file, &settings.set, json, shell),
        Verb::Modes {
            file,
            settings,
            which,
            json,
        } => modes::modes(&file, &settings.set, &which, json, shell),
        Verb::Methods {
            file,
            settings,
            case,
            json,
            svg,
            step,
            halvings,
        } => methods::methods(
            &file,
            &settings.set,
            case.case,
            methods::Form {
                json,
                svg: svg.as_deref(),
                step: step.as_deref(),
                halvings,
            },
            shell,
        ),
        Verb::Spread {
            file,
            settings,
            shots,
            seed,
            slice,
            threads,
            json,
        } => spread::draws(shots, seed.seed, slice.as_deref(), threads)
            .and_then(|draws| spread::spread(&file, &settings.set, draws, json, shell)),
        Verb::Table { file, settings } => table::table(&file, &settings.set, shell),
        Verb::Merge { files, json } => merge::merge(&files, json, shell),
        Verb::Waveform {
            file,
            settings,
            which,
            every,
        } => waveform::waveform(&file, &settings.set, &which, every.as_deref(), shell),
        Verb::Chart {
            file,
            settings,
            which,
            between,
        } => chart::chart(&file, &settings.set, &which, between.as_deref(), shell),
        Verb::Report {
            file,
            settings,
            stamp,
            verify,
        } => report::report(&file, &settings.set, stamp, verify.as_deref(), shell),
        Verb::Neaten { files, check } => neaten::neaten(&files, check, shell),
        Verb::Manual { words } => manual::manual(&words, shell),
        Verb::Completions { dialect } => completions::completions(dialect, shell),
        Verb::Pages { folder } => completions::pages(&folder),
    };
    done.unwrap_or_else(|trouble| failed(shell, &trouble, json))
}

/// Hands data over.
fn deliver(shell: &Shell, bytes: &[u8]) -> Result<(), Trouble> {
    deliver_to(&shell.target, shell, bytes)
}

/// Hands data over to a target of their own.
fn deliver_to(target: &Target, shell: &Shell, bytes: &[u8]) -> Result<(), Trouble> {
    if shell.stop.came().is_some() {
        return Err(Trouble::Stopped(None));
    }
    target.write(bytes).map_err(|e| {
        let place = match target {
            Target::Standard => "standard output".to_owned(),
            Target::File(path) => path.display().to_string(),
        };
        Trouble::Broke(format!("cannot write {place}: {}", why(&e)))
    })
}

/// Says what went wrong; with `--json` the mistakes go to standard output as a record too.
fn failed(shell: &Shell, trouble: &Trouble, json: bool) -> Ending {
    say::trouble(shell, trouble);
    let record = match trouble {
        Trouble::Mistakes(mistakes) => Some(say::record([mistakes])),
        Trouble::Usage(text) => Some(say::usage_record(text)),
        _ => None,
    };
    let Some(record) = record.filter(|_| json) else {
        return trouble.ending(shell.stop.came());
    };
    if let Err(e) = Target::Standard.write(record::text(&record).as_bytes()) {
        say::trouble(
            shell,
            &Trouble::Broke(format!("cannot write standard output: {}", why(&e))),
        );
        return Ending::Broke;
    }
    trouble.ending(shell.stop.came())
}
