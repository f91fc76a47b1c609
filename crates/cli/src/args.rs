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
    /// List the circuit as understood: parts, nodes, schedules, defaults
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
    /// Fire one shot: readings, claims, events, balance, stress, hazards
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
    /// Draw over the tolerances: how often each claim holds, and what matters
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
    /// Find the natural frequencies in each topology of a shot
    #[command(
        long_about = MODES,
        after_help = "example:\n  pulsewright modes stage.shot --set load=150ohm"
    )]
    Modes {
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
    },
    /// Compare the integrators: error of each reading against the step
    #[command(
        long_about = METHODS,
        after_help = "example:\n  pulsewright methods stage.shot --svg work.svg"
    )]
    Methods {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
        #[command(flatten)]
        case: Case,
        /// Print a record in place of tables
        #[arg(long)]
        json: bool,
        /// Draw the errors against the steps into a file; `-` is standard output, in place of tables
        #[arg(long, value_name = "PATH")]
        svg: Option<PathBuf>,
        /// The largest step (`100us`); about a hundredth of the span where none is given
        #[arg(long, value_name = "TIME")]
        step: Option<String>,
        /// How often the step is halved
        #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..=20))]
        halvings: Option<u32>,
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
    /// Draw the channels as SVG: crests, events, windows, limits of claims
    #[command(
        after_help = "example:\n  pulsewright chart stage.shot -o stage.svg\n  \
                      pulsewright chart stage.shot --case 2 --between 0s 2ms -o front.svg",
        after_long_help = CHART
    )]
    Chart {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
        #[command(flatten)]
        which: Which,
        /// Show only the time from T1 to T2 (`--between 0s 20us`)
        #[arg(long, num_args = 2, value_names = ["T1", "T2"])]
        between: Option<Vec<String>>,
    },
    /// Write one HTML page: claims, cases, plots, balance, stress, the record
    #[command(
        after_help = "example:\n  pulsewright report stage.shot -o stage.html\n  \
                      pulsewright report --verify stage.html stage.shot",
        after_long_help = REPORT
    )]
    Report {
        /// A netlist; `-` is standard input
        #[arg(value_name = "FILE")]
        file: PathBuf,
        #[command(flatten)]
        settings: Settings,
        /// Put a line of your own on the page (a date, a name, a document's number)
        #[arg(long, value_name = "TEXT")]
        stamp: Option<String>,
        /// Compare a page with a fresh run of FILE in place of writing one
        #[arg(long, value_name = "PAGE")]
        verify: Option<PathBuf>,
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
    /// Show the page for a verb, a word of the language, or a code
    #[command(after_help = "example:\n  pulsewright manual P0107")]
    Manual {
        /// A verb, a word, or a code; without one, the list of pages
        #[arg(value_name = "WORD")]
        words: Vec<String>,
    },
    /// Print the completions for a shell, for whoever packages the command
    #[command(
        hide = true,
        after_help = "example:\n  pulsewright completions bash -o /etc/bash_completion.d/pulsewright"
    )]
    Completions {
        /// The shell
        #[arg(value_name = "SHELL")]
        dialect: clap_complete::Shell,
    },
    /// Write a manual page for each verb into a folder, for whoever packages the command
    #[command(hide = true, after_help = "example:\n  pulsewright pages man1")]
    Pages {
        /// The folder, which is there already
        #[arg(value_name = "DIR")]
        folder: PathBuf,
    },
}

/// What `chart --help` says last.
const CHART: &str = "\
The channels stand in panels by quantity over one time axis, each with a colour, dashes and a marker
of its own. Marked are:
  the crest of each channel with value and instant
  events, as dashed verticals with the part and what it did
  windows of readings and claims, shaded and named under the axis
  limits of claims on the highest, lowest or largest value of a channel, the forbidden side hatched
The picture follows the viewer's light or dark setting, and has a description in words. The same
input gives the same bytes.

examples:
  pulsewright chart stage.shot -o stage.svg
  pulsewright chart stage.shot --case 2 --between 0s 2ms -o front.svg";

/// What `report --help` says last.
const REPORT: &str = "\
Every case is judged. The page shows the claims with their verdicts, the inputs with their SHA-256,
settings and defaults, program and method, the cases, plots with cursors and zoom, where the joules
went, stress, the event log, hazards, remarks, the netlist, and holds the record as JSON. It asks for
no network, is whole without scripts and in print, and holds no date and no name unless --stamp gives
one: the same input gives the same bytes. It ends with 0 whatever the verdicts; judge tells those.

--verify ends with 0 where the page is what this program writes of FILE with the same --set and
--stamp, and with 1 where it is not, saying what differs.

examples:
  pulsewright report stage.shot -o stage.html
  pulsewright report --verify stage.html stage.shot";

/// What `--help` says first.
const LONG_ABOUT: &str = "Judges the pulse of a capacitor-discharge circuit against its requirements.

Reads a netlist: the circuit, its firing sequence, readings and claims, in one text file. Fires it, bounds the numerical \
error of every reading, and answers each claim with holds, fails or undecided.";

/// The page of `modes`.
const MODES: &str = "Find the natural frequencies in each topology that a shot passes through

Fires one shot. For each state of the switches and diodes on its way, from one instant to another, it lists how the \
circuit moves when it is left to itself, slowest first:

  underdamped        a pair that rings and dies away
  critically damped  a pair on the edge of ringing
  overdamped         one of the two decays of a pair that is damped more than that
  decays             dies away by itself, as a capacitor into a resistor does
  undamped           rings for ever: nothing in it takes energy
  holds              stays: a charge that has no way to flow off, a current that nothing brakes
  grows              which takes a controlled source

The time constant is for a factor of e, the frequency is that of the damped ringing, and the damping is the ratio to \
critical. The last column tells which parts hold the energy of the mode, in the mean over a cycle; inductors that are \
coupled share what they hold in common evenly. A capacitor whose voltage the others of its loop give, and an inductor \
whose current the others of its cut give, bring no mode.

The natural frequency itself is minus one over the time constant, plus and minus j times 2 pi times the frequency; the \
record (--json) has both parts, in 1/s and rad/s.";

/// The page of `methods`.
const METHODS: &str = "Compare the integrators: error of each reading against the size of the step

Runs backward Euler and the trapezoidal rule with steps of one size, cut short only at events, and halves the step \
again and again (6 times, or --halvings). For every named reading and every claim's reading it lists how far each run \
is off the reference, and the order that is observed: how many powers of two the error falls by when the step is \
halved. `<` stands before an error that the reference is too uncertain to tell. The reference is the netlist's own \
answer on ever finer meshes of chosen steps, with its bound.

The table ends with the steps, factorisations and the time of each run; the record (--json) has no times, since they \
differ from run to run. The largest step is a round one of about a hundredth of the span, or eight times the \
netlist's `time step`, or --step. The plot (--svg) shows error over scale against steps, both in logarithms.";

/// What `--help` says last.
const EXIT_CODES_AND_CAUTIONS: &str = "examples:
  pulsewright check stage.shot
  pulsewright fire stage.shot --set load=75ohm
  pulsewright judge stage.shot --json -o stage.json
  pulsewright waveform stage.shot --every 10us -o pulse.csv
  pulsewright chart stage.shot -o pulse.svg
  pulsewright report stage.shot -o stage.html
  pulsewright manual claim

exit codes:
  0    done; under judge, spread, merge and fire --strict every claim holds
  1    some claim fails (neaten --check: some file is not in the canonical layout;
       report --verify: the page is not what the netlist gives)
  2    the input is at fault: usage, netlist, a circuit without an answer, judge without claims
  3    the run broke: reading or writing, a limit, an internal error
  4    some claim is undecided and none fails
  130  interrupted (143 where it was asked to terminate)
  Where several apply: 3, 2, 1, 4.

cautions:
  A simulation is no safety approval and no conformity assessment. Circuits that store energy
  are built and tested by qualified people under the standards and local rules that apply. This
  program is no medical device; its use in a device's file is the manufacturer's responsibility.";
