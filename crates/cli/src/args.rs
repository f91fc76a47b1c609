//! What may be written on the command line.
//!
//! The words are the manual's: a verb, its files, and options that mean the same for every
//! verb that has them.

use clap::{ArgAction, Args, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;

/// The command.
#[derive(Debug, Parser)]
#[command(
    name = "pulsewright",
    version,
    about = "Judges the pulse of a capacitor-discharge circuit against its requirements",
    long_about = LONG_ABOUT,
    after_help = "example: pulsewright judge stage.shot    manual: pulsewright manual",
    after_long_help = EXIT_CODES_AND_CAUTIONS,
    disable_help_subcommand = true,
    subcommand_value_name = "VERB",
    subcommand_help_heading = "Verbs",
    disable_version_flag = true,
    arg_required_else_help = true,
    max_term_width = 100
)]
pub struct Arguments {
    /// The verb.
    #[command(subcommand)]
    pub verb: Verb,
    /// What every verb understands.
    #[command(flatten)]
    pub common: Common,
}

/// Options of every verb.
#[derive(Args, Debug)]
pub struct Common {
    /// Write to a file, whole or not at all; `-` is standard output
    #[arg(short = 'o', value_name = "PATH", global = true)]
    pub output: Option<PathBuf>,
    /// Say nothing but errors and what was asked for
    #[arg(short = 'q', global = true, conflicts_with = "verbose")]
    pub quiet: bool,
    /// Say more: methods, steps, shots
    #[arg(short = 'v', global = true)]
    pub verbose: bool,
    /// Colour what is printed
    #[arg(long, value_enum, value_name = "WHEN", default_value_t = Colour::Auto, global = true)]
    pub color: Colour,
    /// Print version
    #[arg(short = 'V', long, action = ArgAction::Version, hide_short_help = true)]
    pub version: Option<bool>,
}

/// When to colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum Colour {
    /// On a terminal that wants it
    Auto,
    /// Always
    Always,
    /// Never
    Never,
}

/// Let-values from outside.
#[derive(Args, Clone, Debug, Default)]
pub struct Settings {
    /// Give a let-value another value (`load=75ohm`, `load="open circuit"`); may repeat
    #[arg(long = "set", value_name = "NAME=VALUE")]
    pub set: Vec<String>,
}

/// One case in place of the nominal let-values.
#[derive(Args, Clone, Copy, Debug, Default)]
pub struct Case {
    /// Take the Nth case, from 1, in place of the let-values as written
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..))]
    pub case: Option<u32>,
}

/// One shot of many in place of the nominal one.
#[derive(Args, Clone, Debug, Default)]
pub struct Which {
    /// The case.
    #[command(flatten)]
    pub case: Case,
    /// Take the Kth draw of `spread`, from 1, in place of nominal values
    #[arg(long, value_name = "K", value_parser = clap::value_parser!(u64).range(1..), conflicts_with = "corner")]
    pub draw: Option<u64>,
    /// What it comes from.
    #[command(flatten)]
    pub seed: Seed,
    /// Take the worst corner of a claim over the tolerances
    #[arg(long, value_name = "CLAIM")]
    pub corner: Option<String>,
}

/// What draws come from.
#[derive(Args, Clone, Copy, Debug, Default)]
pub struct Seed {
    /// The seed of the draws
    #[arg(long, value_name = "S", default_value_t = 1)]
    pub seed: u64,
}

/// The verbs.
#[derive(Debug, Subcommand)]
pub enum Verb {
    /// Read files and say what is wrong with them; fire nothing
    #[command(after_help = "example:\n  pulsewright check stage.shot generator.shot")]
    Check {
        /// Netlists; `-` is standard input
        #[arg(required = true, value_name = "FILE")]
        files: Vec<PathBuf>,
        #[command(flatten)]
        settings: Settings,
        /// Print a record in place of text
        #[arg(long)]
        json: bool,
    },
    /// List the circuit as it was understood: parts, nodes, schedules, defaults taken
    #[command(after_help = "example:\n  pulsewright list stage.shot --set load=75ohm")]
    List {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
        #[command(flatten)]
        case: Case,
    },
    /// Fire one shot: readings with bounds, claims, events, balance, stress, hazards
    #[command(after_help = "example:\n  pulsewright fire stage.shot --case 3 --json -o shot.json")]
    Fire {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
        #[command(flatten)]
        which: Which,
        /// Print a record in place of tables
        #[arg(long)]
        json: bool,
        /// Let the exit code tell whether every claim holds
        #[arg(long)]
        strict: bool,
    },
    /// Judge every case: each claim holds, fails or is undecided
    #[command(after_help = "example:\n  pulsewright judge stage.shot")]
    Judge {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
        /// Print a record in place of tables
        #[arg(long)]
        json: bool,
    },
    /// Draw over the tolerances: in what share of the shots each claim holds, and what matters
    #[command(after_help = "examples:
  pulsewright spread stage.shot --shots 10000
  pulsewright spread stage.shot --shots 10000 --slice 3/7 -o part3.json
  pulsewright merge part*.json")]
    Spread {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
        /// How many draws each case is fired with
        #[arg(long, value_name = "N", value_parser = clap::value_parser!(u64).range(1..))]
        shots: u64,
        #[command(flatten)]
        seed: Seed,
        /// Fire the Ith of N parts of the draws, and print a record for `merge`
        #[arg(long, value_name = "I/N")]
        slice: Option<String>,
        /// On how many threads; changes nothing but the time
        #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..))]
        threads: Option<u32>,
        /// Print a record in place of tables
        #[arg(long)]
        json: bool,
    },
    /// Join the records of the slices of a study to that of the whole
    #[command(after_help = "example:\n  pulsewright merge part1.json part2.json part3.json --json")]
    Merge {
        /// Records that `spread --slice` wrote, each slice once, in any order
        #[arg(required = true, value_name = "FILE")]
        files: Vec<PathBuf>,
        /// Print a record in place of tables
        #[arg(long)]
        json: bool,
    },
    /// Print every case as CSV: its let-values and its readings
    #[command(after_help = "example:\n  pulsewright table stage.shot -o doses.csv")]
    Table {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
    },
    /// Print the channels as CSV, at the run's own steps or evenly
    #[command(
        after_help = "example:\n  pulsewright spread stage.shot --shots 10000 --seed 1
  pulsewright waveform stage.shot --every 10us -o pulse.csv"
    )]
    Waveform {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
        #[command(flatten)]
        which: Which,
        /// A row every so often (`1us`), in place of the run's own steps
        #[arg(long, value_name = "TIME")]
        every: Option<String>,
    },
    /// Print a netlist in its canonical layout
    #[command(after_help = "example:\n  pulsewright neaten stage.shot -o stage.shot")]
    Neaten {
        /// Netlists; `-` is standard input; several only with `--check`
        #[arg(required = true, value_name = "FILE")]
        files: Vec<PathBuf>,
        /// Print nothing; exit with 1 where a file is not in that layout
        #[arg(long)]
        check: bool,
    },
    /// Show the manual's page for a verb, a word of the language, or a message's code
    #[command(after_help = "example:\n  pulsewright manual P0107")]
    Manual {
        /// A verb, a word, or a code; without one, the list of pages
        #[arg(value_name = "WORD")]
        words: Vec<String>,
    },
}

/// What `--help` says first.
const LONG_ABOUT: &str = "Judges the pulse of a capacitor-discharge circuit against its requirements.

Reads a netlist: the circuit, its firing sequence, readings and claims, in one text file. Fires it, bounds the numerical \
error of every reading, and answers each claim with holds, fails or undecided.";

/// What `--help` says last.
const EXIT_CODES_AND_CAUTIONS: &str = "examples:
  pulsewright check stage.shot
  pulsewright fire stage.shot --set load=75ohm
  pulsewright judge stage.shot --json -o stage.json
  pulsewright waveform stage.shot --every 10us -o pulse.csv
  pulsewright manual claim

exit codes:
  0    done; under judge, spread, merge and fire --strict every claim holds
  1    some claim fails (neaten --check: some file is not in the canonical layout)
  2    the input is at fault: usage, netlist, a circuit without an answer, judge without claims
  3    the run broke: reading or writing, a limit, an internal error
  4    some claim is undecided and none fails
  130  interrupted (143 where it was asked to terminate)
  Where several apply: 3, 2, 1, 4.

cautions:
  A simulation is no safety approval and no conformity assessment. Circuits that store energy
  are built and tested by qualified people under the standards and local rules that apply. This
  program is no medical device; its use in a device's file is the manufacturer's responsibility.";
