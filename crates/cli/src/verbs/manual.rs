//! `manual`: a page for each verb, each word of the language, each code.

use super::deliver;
use crate::args::Arguments;
use crate::exit::Ending;
use crate::shell::Shell;
use crate::trouble::Trouble;
use clap::CommandFactory;
use pulsewright::report::look::{Tone, heading, paragraph};
use pulsewright::report::table::{Align, Grid};
use pulsewright::{circuit, fault, language, study};

/// A code: itself, its title, its explanation with an example.
type Code = (&'static str, &'static str, &'static str);

/// Codes of what only the command line can get wrong.
const CODES: &[Code] = &[(
    "P0901",
    "the command line asks for what cannot be",
    "An option's value or a combination of options has no meaning for this file: a case that is not there, a setting \
without `=`, an interval that is no time.

    pulsewright fire stage.shot --set load=75ohm --case 2

`pulsewright --help` lists what may be written.",
)];

/// Shows a page, or the list of pages.
pub fn manual(words: &[String], shell: &Shell) -> Result<Ending, Trouble> {
    let page = match words {
        [] => pages(shell),
        words => {
            let asked = words.join(" ");
            page(&asked, shell).ok_or_else(|| missing(&asked))?
        }
    };
    deliver(shell, page.as_bytes())?;
    Ok(Ending::Done)
}

fn missing(asked: &str) -> Trouble {
    Trouble::Usage(format!(
        "the manual has no page for `{asked}`; `pulsewright manual` lists its pages"
    ))
}

/// The page of a verb, a code or a word.
fn page(asked: &str, shell: &Shell) -> Option<String> {
    verb(asked)
        .or_else(|| code(asked, shell))
        .or_else(|| word(asked))
}

fn verb(asked: &str) -> Option<String> {
    let mut command = Arguments::command();
    command.build();
    let help = command.find_subcommand_mut(asked)?.render_long_help();
    Some(format!("{help}\n"))
}

fn code(asked: &str, shell: &Shell) -> Option<String> {
    let (code, title, text) = codes().find(|(code, ..)| code.eq_ignore_ascii_case(asked))?;
    let mut out = String::new();
    heading(
        &mut out,
        shell.look,
        &format!("{code}: {title}"),
        Tone::Heading,
    );
    out.push('\n');
    for block in text.split("\n\n") {
        if block.starts_with(' ') {
            out.push_str(block);
            out.push('\n');
        } else {
            paragraph(&mut out, shell.look, 0, block, Tone::Plain);
        }
        out.push('\n');
    }
    Some(out.trim_end().to_owned() + "\n")
}

fn word(asked: &str) -> Option<String> {
    language::explain(asked).map(|page| page.trim_end().to_owned() + "\n")
}

fn codes() -> impl Iterator<Item = Code> {
    language::CODES
        .iter()
        .chain(circuit::CODES)
        .chain(study::CODES)
        .chain(fault::CODES)
        .chain(CODES)
        .copied()
}

/// The list of pages: verbs, words, codes.
fn pages(shell: &Shell) -> String {
    let mut out = String::new();
    heading(&mut out, shell.look, "verbs", Tone::Heading);
    let mut grid = Grid::new([Align::Left, Align::Text]);
    for verb in Arguments::command()
        .get_subcommands()
        .filter(|v| !v.is_hide_set())
    {
        let about = verb
            .get_about()
            .map(ToString::to_string)
            .unwrap_or_default();
        grid.row([verb.get_name().into(), about.into()]);
    }
    grid.write(&mut out, shell.look);
    heading(&mut out, shell.look, "words of the language", Tone::Heading);
    paragraph(&mut out, shell.look, 2, &topics().join(", "), Tone::Plain);
    heading(&mut out, shell.look, "codes", Tone::Heading);
    let mut all: Vec<Code> = codes().collect();
    all.sort_unstable();
    let mut grid = Grid::new([Align::Left, Align::Text]);
    for (code, title, _) in all {
        grid.row([code.into(), title.into()]);
    }
    grid.write(&mut out, shell.look);
    out
}

/// The phrases of the language that have a page.
fn topics() -> Vec<&'static str> {
    language::topics()
        .iter()
        .map(|(phrase, _)| *phrase)
        .collect()
}
