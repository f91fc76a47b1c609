//! Damaged netlists through the whole road: each ends in an answer or in a named error, in
//! reasonable time; never in a panic.
//!
//! The damage is drawn anew for each seed: words dropped, doubled, swapped with one from another
//! netlist, digits changed, signs and odd characters put in, lines moved. `PULSEWRIGHT_SHOTS=5000`
//! damages as many; the default is small. Limits are set so that a span of hours or a counter to a
//! billion ends early.

use std::fs;
use std::panic::catch_unwind;
use std::path::PathBuf;
use std::time::{Duration, Instant};

use pulsewright_study::{Options, StudyError};
use pulsewright_tests::random::Random;

const LIMITS: &str = "\nlimit steps 3000\nlimit events 100\nlimit parts 300\nlimit unknowns 300\n";
/// Far above what any of these takes; a hang is what it is to find.
const PATIENCE: Duration = Duration::from_secs(60);

fn shots() -> u64 {
    std::env::var("PULSEWRIGHT_SHOTS")
        .ok()
        .and_then(|n| n.parse().ok())
        .unwrap_or(150)
}

fn netlists() -> Vec<String> {
    let folder = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../netlists");
    let mut paths: Vec<PathBuf> = fs::read_dir(folder)
        .unwrap()
        .map(|e| e.unwrap().path())
        .collect();
    paths.retain(|p| p.extension().is_some_and(|e| e == "shot"));
    paths.sort();
    paths
        .iter()
        .map(|p| fs::read_to_string(p).unwrap())
        .collect()
}

/// The text in words, blanks and signs, so that damage falls between them.
fn words(text: &str) -> Vec<String> {
    let mut words: Vec<String> = Vec::new();
    let kind = |c: char| {
        if c.is_alphanumeric() || c == '_' || c == '.' {
            1
        } else if c == ' ' {
            2
        } else {
            0
        }
    };
    let mut last = 0;
    for c in text.chars() {
        let now = kind(c);
        match words.last_mut() {
            Some(word) if now == last && now != 0 => word.push(c),
            _ => words.push(c.to_string()),
        }
        last = now;
    }
    words
}

const ODD: &[&str] = &[
    "0",
    "-1",
    "1e308",
    "1e-308",
    "9e999",
    "-",
    "(",
    ")",
    "[",
    "]",
    ",",
    ":",
    "=",
    "^",
    "/",
    "\"",
    "\n",
    "#",
    "µ",
    "Ω",
    "\u{a0}",
    "\u{0}",
    "ohm",
    "s",
    "%",
    "ground",
    "open circuit",
    "short circuit",
    "closed",
    "at",
    "when",
    "or",
    "first",
    "last",
    "of",
    "span 1 s",
    "repeat k from 1 to 1000000000\n",
    "end\n",
    "start steady\n",
    "integrate by backward Euler\n",
    "time step 1 us\n",
    "pi",
    "t",
    "exp(",
    "tolerance 5 %",
    "charged to 1 MV",
    "carrying -3 A",
    "coupling m between a and b = 1\n",
    "wire w from a to ground\n",
];

fn damaged(r: &mut Random, netlists: &[String]) -> String {
    let mut text = words(&netlists[r.below(netlists.len())]);
    let donor = words(&netlists[r.below(netlists.len())]);
    for _ in 0..1 + r.below(4) {
        let at = r.below(text.len());
        match r.below(6) {
            0 => {
                text.remove(at);
            }
            1 => text.insert(at, text[at].clone()),
            2 => text[at].clone_from(&donor[r.below(donor.len())]),
            3 => text.insert(at, ODD[r.below(ODD.len())].to_owned()),
            4 => {
                let other = r.below(text.len());
                text.swap(at, other);
            }
            _ => change_a_digit(r, &mut text),
        }
        if text.is_empty() {
            break;
        }
    }
    text.concat() + LIMITS
}

fn change_a_digit(r: &mut Random, text: &mut [String]) {
    let numbers: Vec<usize> = (0..text.len())
        .filter(|k| text[*k].starts_with(|c: char| c.is_ascii_digit()))
        .collect();
    if let Some(word) = numbers
        .get(r.below(numbers.len()))
        .and_then(|k| text.get_mut(*k))
    {
        *word = format!(
            "{}{}",
            r.below(1000),
            ["", "0", "e3", "e-9", ".5"][r.below(5)]
        );
    }
}

/// What became of a netlist.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum End {
    Judged,
    Mistaken,
    Refused,
}

fn road(text: &str) -> End {
    let began = Instant::now();
    let stopped = |_: pulsewright_study::Progress| began.elapsed() < PATIENCE;
    let netlist = match pulsewright_netlist::read(text.as_bytes(), "damaged.shot") {
        Ok(netlist) => netlist,
        Err(mistakes) => {
            assert!(!mistakes.to_string().is_empty());
            let _ = pulsewright_netlist::neaten(text.as_bytes(), "damaged.shot");
            return End::Mistaken;
        }
    };
    let neat = pulsewright_netlist::neaten(text.as_bytes(), "damaged.shot").unwrap();
    assert_eq!(
        pulsewright_netlist::read(neat.as_bytes(), "neat")
            .unwrap()
            .circuit
            .draft(),
        netlist.circuit.draft()
    );
    let options = Options {
        hook: Some(&stopped),
        stress: true,
        ..Options::default()
    };
    match pulsewright_study::judge(&netlist.circuit, &options) {
        Ok(_) => End::Judged,
        Err(StudyError::Cancelled { .. }) => panic!("no end within {PATIENCE:?}"),
        Err(why) => {
            assert!(!why.to_string().is_empty());
            assert!(!matches!(why, StudyError::Balance { .. }), "{why}");
            End::Refused
        }
    }
}

#[test]
fn damage_ends_in_an_answer_or_a_named_error() {
    let netlists = netlists();
    let mut ends = [0_u32; 3];
    let mut bad = Vec::new();
    for seed in 1..=shots() {
        let text = damaged(&mut Random::new(seed), &netlists);
        let began = Instant::now();
        match catch_unwind(|| road(&text)) {
            Ok(end) => ends[end as usize] += 1,
            Err(_) => bad.push(format!("--- damage {seed}\n{text}")),
        }
        assert!(
            began.elapsed() < PATIENCE,
            "damage {seed} took {:?}:\n{text}",
            began.elapsed()
        );
    }
    println!(
        "{} judged, {} with mistakes, {} refused when fired",
        ends[0], ends[1], ends[2]
    );
    assert!(bad.is_empty(), "{} broke:\n{}", bad.len(), bad.join("\n"));
}

/// Any bytes at all.
#[test]
fn bytes_end_in_mistakes() {
    for seed in 1..=200 {
        let mut r = Random::new(seed);
        let n = r.below(300);
        let bytes: Vec<u8> = (0..n)
            .map(|_| u8::try_from(r.below(256)).unwrap())
            .collect();
        let _ = pulsewright_netlist::read(&bytes, "bytes");
        let _ = pulsewright_netlist::neaten(&bytes, "bytes");
    }
}
