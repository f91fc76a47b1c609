//! `completions` and `pages`: what a package ships beside the command, made of its own arguments.

use super::deliver;
use crate::args::Arguments;
use crate::exit::Ending;
use crate::input::why;
use crate::output::Target;
use crate::shell::Shell;
use crate::trouble::Trouble;
use clap::CommandFactory;
use clap_complete::Shell as Dialect;
use std::path::Path;

/// Prints the completions for a shell.
pub fn completions(dialect: Dialect, shell: &Shell) -> Result<Ending, Trouble> {
    let mut script = Vec::new();
    clap_complete::generate(
        dialect,
        &mut Arguments::command(),
        "pulsewright",
        &mut script,
    );
    deliver(shell, &script)?;
    Ok(Ending::Done)
}

/// Writes a manual page for the command and for each of its verbs into a folder.
pub fn pages(folder: &Path) -> Result<Ending, Trouble> {
    let mut command = Arguments::command();
    command.build();
    page(folder, "pulsewright", command.clone())?;
    for verb in command.get_subcommands().filter(|v| !v.is_hide_set()) {
        let name = format!("pulsewright-{}", verb.get_name());
        page(folder, &name, verb.clone())?;
    }
    Ok(Ending::Done)
}

fn page(folder: &Path, name: &str, command: clap::Command) -> Result<(), Trouble> {
    let path = folder.join(format!("{name}.1"));
    let mut text = Vec::new();
    clap_mangen::Man::new(command)
        .date("")
        .render(&mut text)
        .and_then(|()| Target::File(path.clone()).write(&text))
        .map_err(|e| Trouble::Broke(format!("cannot write {}: {}", path.display(), why(&e))))
}
