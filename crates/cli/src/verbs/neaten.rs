//! `neaten`: a netlist in its canonical layout.

use super::deliver;
use crate::exit::Ending;
use crate::input;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::language;
use std::path::{Path, PathBuf};

/// Prints a netlist anew, or says which files are not as it would print them.
pub fn neaten(files: &[PathBuf], check: bool, shell: &Shell) -> Result<Ending, Trouble> {
    if check {
        return Ok(files
            .iter()
            .map(|file| checked(file, shell))
            .max()
            .unwrap_or(Ending::Done));
    }
    let [file] = files else {
        return Err(Trouble::Usage(
            "neaten prints one file at a time; `--check` takes several".to_owned(),
        ));
    };
    let neat = language::neaten(&input::bytes(file, shell)?, &input::name(file))?;
    deliver(shell, neat.as_bytes())?;
    Ok(Ending::Done)
}

fn checked(file: &Path, shell: &Shell) -> Ending {
    match is_neat(file, shell) {
        Ok(true) => Ending::Done,
        Ok(false) => {
            say::note(
                shell,
                &format!("{}: not in the canonical layout", input::name(file)),
            );
            Ending::Fails
        }
        Err(trouble) => {
            say::trouble(shell, &trouble);
            trouble.ending(shell.stop.came())
        }
    }
}

fn is_neat(file: &Path, shell: &Shell) -> Result<bool, Trouble> {
    let bytes = input::bytes(file, shell)?;
    Ok(language::neaten(&bytes, &input::name(file))?.as_bytes() == bytes)
}
