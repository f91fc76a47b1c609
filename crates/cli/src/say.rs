//! Messages on standard error, and the record of mistakes that goes with them.
//!
//! ```text
//! stage.shot:3:37: mistake P0107: `chest` needs a resistance, and 50 has no unit
//!     resistor chest from pad to ground = 50
//!                                         ~~ a value with a unit belongs here
//!     write: 50 ohm
//! ```
//!
//! What cannot be said because standard error is closed is not said.

use crate::shell::{Shell, Talk};
use crate::trouble::Trouble;
use anstream::AutoStream;
use pulsewright::language::{Drawn, Mistake};
use pulsewright::report::Look;
use pulsewright::report::look::Tone;
use pulsewright::report::record::{Bytes, MistakeRecord, MistakesRecord};
use pulsewright::study::outcome::Remark;
use pulsewright::{Mistakes, Netlist};
use std::io::{self, IsTerminal, Write};

/// Writes to standard error, coloured where it may be.
fn write(shell: &Shell, text: &str) {
    let mut out = AutoStream::new(io::stderr().lock(), shell.messages);
    let _ = out.write_all(text.as_bytes()).and_then(|()| out.flush());
}

/// Colours are always put on, and taken off by the stream where they are not wanted.
const LOOK: Look = Look {
    width: 80,
    colour: true,
};

/// A line for who looks on; nothing under `-q`.
pub fn note(shell: &Shell, text: &str) {
    if shell.talk >= Talk::Usual {
        write(shell, &format!("{text}\n"));
    }
}

/// The columns of the terminal that a passing line may be shown on; none where standard error is
/// no terminal, and under `-q`.
pub fn terminal_columns(shell: &Shell) -> Option<usize> {
    if shell.talk < Talk::Usual || !io::stderr().is_terminal() {
        return None;
    }
    let size = terminal_size::terminal_size_of(io::stderr());
    Some(size.map_or(80, |(width, _)| usize::from(width.0)))
}

/// Writes over the line that the cursor is in, and leaves the cursor at its start.
pub fn over(text: &str, columns: usize) {
    let room = columns.saturating_sub(1);
    let text: String = text.chars().take(room).collect();
    let mut out = io::stderr().lock();
    let _ = write!(out, "\r{text:room$}\r").and_then(|()| out.flush());
}

/// A line under `-v`.
pub fn detail(shell: &Shell, text: &str) {
    if shell.talk >= Talk::Verbose {
        write(shell, &format!("{text}\n"));
    }
}

/// What kept a verb from its end.
pub fn trouble(shell: &Shell, trouble: &Trouble) {
    match trouble {
        Trouble::Mistakes(list) => mistakes(shell, list),
        Trouble::Usage(text) => error(
            shell,
            &format!("{text}\n    `pulsewright --help` lists what may be written"),
        ),
        Trouble::Broke(text) => error(shell, text),
        Trouble::Stopped(Some(far)) => error(shell, &format!("interrupted {far}")),
        Trouble::Stopped(None) => error(shell, "interrupted"),
    }
}

fn error(shell: &Shell, text: &str) {
    write(
        shell,
        &format!("{} {text}\n", LOOK.tinted("pulsewright:", Tone::Bad)),
    );
}

/// Mistakes and remarks, drawn in their lines.
pub fn mistakes(shell: &Shell, mistakes: &Mistakes) {
    let mut text = String::new();
    for drawn in mistakes.drawn() {
        draw(&mut text, &drawn);
    }
    if let Some(more) = mistakes.undrawn() {
        text.push_str(&more);
        text.push('\n');
    }
    write(shell, &text);
}

fn draw(out: &mut String, drawn: &Drawn) {
    let tone = if drawn.kind == "remark" {
        Tone::Open
    } else {
        Tone::Bad
    };
    let kind = LOOK.tinted(&format!("{} {}", drawn.kind, drawn.code), tone);
    out.push_str(&format!(
        "{}: {kind}: {}\n",
        LOOK.tinted(&drawn.place, Tone::Heading),
        drawn.message
    ));
    if !drawn.line.is_empty() {
        let label = drawn
            .label
            .as_ref()
            .map(|l| format!(" {l}"))
            .unwrap_or_default();
        let under = LOOK.tinted(&format!("{}{label}", "~".repeat(drawn.width)), tone);
        out.push_str(&format!(
            "    {}\n    {}{under}\n",
            drawn.line,
            " ".repeat(drawn.blanks)
        ));
    }
    if let Some(write) = &drawn.write {
        out.push_str(&format!("    write: {write}\n"));
    }
}

/// Remarks of a run, where no page shows them; nothing under `-q`.
pub fn remarks<'a>(
    shell: &Shell,
    netlist: &Netlist,
    remarks: impl IntoIterator<Item = &'a Remark>,
) {
    if shell.talk < Talk::Usual {
        return;
    }
    let mut said: Vec<String> = Vec::new();
    for remark in remarks {
        let place = if remark.span.is_some() {
            let (line, column) = netlist.source().position(remark.span.start as usize);
            format!("{}:{line}:{column}", netlist.source().name())
        } else {
            netlist.source().name().to_owned()
        };
        let kind = LOOK.tinted(&format!("remark {}", remark.code), Tone::Open);
        let text = format!(
            "{}: {kind}: {}\n",
            LOOK.tinted(&place, Tone::Heading),
            remark.text
        );
        if !said.contains(&text) {
            said.push(text);
        }
    }
    write(shell, &said.concat());
}

/// The record of mistakes and remarks, of one file or of several.
pub fn record<'a>(lists: impl IntoIterator<Item = &'a Mistakes>) -> MistakesRecord {
    let (mut mistakes, mut remarks) = (Vec::new(), Vec::new());
    for list in lists {
        for one in list.list() {
            let into = if one.is_remark {
                &mut remarks
            } else {
                &mut mistakes
            };
            into.push(entry(one, list.source().name()));
        }
    }
    MistakesRecord::new(mistakes, remarks)
}

/// An entry without a place: what is wrong with the command line.
pub fn usage_record(text: &str) -> MistakesRecord {
    let entry = MistakeRecord {
        code: "P0901".to_owned(),
        file: "command line".to_owned(),
        line: None,
        column: None,
        span: None,
        message: text.to_owned(),
        label: None,
        replacement: None,
    };
    MistakesRecord::new(vec![entry], Vec::new())
}

fn entry(mistake: &Mistake, file: &str) -> MistakeRecord {
    let number = |n: usize| u64::try_from(n).unwrap_or(u64::MAX);
    MistakeRecord {
        code: mistake.code.to_owned(),
        file: file.to_owned(),
        line: Some(number(mistake.line)),
        column: Some(number(mistake.column)),
        span: Some(Bytes {
            start: number(mistake.start),
            end: number(mistake.end),
        }),
        message: mistake.message.clone(),
        label: mistake.label.clone(),
        replacement: mistake.write.clone(),
    }
}
