//! The `pulsewright` command: reads the command line, runs a verb, ends with its exit code.
//!
//! ```text
//! args -> verbs -> (data)    -> output   standard output, or -o
//!                  (trouble) -> say      standard error; with --json a record as well
//!                  (ending)  -> exit     0, 1, 2, 3, 4, 130, 143
//! ```
//!
//! A verb computes first and writes last, so that a failed run leaves standard output empty
//! and the target of `-o` untouched. This is the only crate that knows files, the terminal,
//! signals and the environment.

mod args;
mod exit;
mod input;
mod output;
mod say;
mod shell;
mod stop;
mod trouble;
mod verbs;

use args::Arguments;
use clap::Parser;
use exit::Ending;
use shell::Shell;
use std::process::ExitCode;

fn main() -> ExitCode {
    let ending = match Arguments::try_parse() {
        Ok(arguments) => verbs::run(arguments.verb, &Shell::of(&arguments.common)),
        Err(error) => {
            // Help and versions are data; what is wrong with the command line is not.
            let _ = error.print();
            if error.use_stderr() {
                Ending::Input
            } else {
                Ending::Done
            }
        }
    };
    ExitCode::from(ending.code())
}
