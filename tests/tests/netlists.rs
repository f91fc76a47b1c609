//! Every netlist of the folder `netlists`: it reads, its canonical layout is a fixpoint that
//! says the same, every case is judged with the verdicts stated here, and the joules add up.

use std::fs;
use std::path::PathBuf;

use pulsewright_study::{Judged, Verdict};
use pulsewright_tests::{judge, read};

fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../netlists")
}

/// The netlists by name, with their text.
fn all() -> Vec<(String, String)> {
    let mut found: Vec<(String, String)> = fs::read_dir(folder())
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|e| e == "shot"))
        .map(|path| {
            (
                path.file_name().unwrap().to_string_lossy().into_owned(),
                fs::read_to_string(&path).unwrap(),
            )
        })
        .collect();
    found.sort();
    found
}

fn text(name: &str) -> String {
    fs::read_to_string(folder().join(name)).unwrap()
}

/// The verdicts of a netlist, as one word a claim and case: `h`olds, `f`ails, `u`ndecided, `-`
/// where the claim does not apply.
fn check(name: &str, expected: &[(&str, &str)]) {
    let judged = judge(&text(name));
    let letter = |v: Verdict| match v {
        Verdict::Holds => 'h',
        Verdict::Fails => 'f',
        Verdict::Undecided => 'u',
        Verdict::DoesNotApply => '-',
    };
    let found: Vec<(String, String)> = (0..judged.claims.len())
        .map(|k| {
            (
                judged.claims[k].name.clone(),
                judged
                    .cases
                    .iter()
                    .map(|case| letter(case.claims[k].verdict))
                    .collect(),
            )
        })
        .collect();
    let wanted: Vec<(String, String)> = expected
        .iter()
        .map(|(n, v)| ((*n).to_owned(), (*v).to_owned()))
        .collect();
    assert_eq!(found, wanted, "{name}: {}", values(&judged));
    balanced(name, &judged);
}

fn values(judged: &Judged) -> String {
    let of = |case: &pulsewright_study::Fired| {
        let claims = case
            .claims
            .iter()
            .map(|c| format!("{} {:?} {}", c.name, c.answer.found, c.relation));
        claims.collect::<Vec<_>>().join("\n  ")
    };
    judged
        .cases
        .iter()
        .map(|c| format!("\n{:?}\n  {}", c.set, of(c)))
        .collect()
}

/// The residual is inside its bound, and no more than a millionth of the energy at work.
fn balanced(name: &str, judged: &Judged) {
    for case in &judged.cases {
        let b = &case.balance;
        let supplied: f64 = b.supplied.iter().map(|s| s.1.abs()).sum();
        let at_work = b.stored_start.max(supplied);
        assert!(
            b.residual.abs() <= b.bound,
            "{name} {:?}: residual {:e}, bound {:e}",
            case.set,
            b.residual,
            b.bound
        );
        assert!(
            b.residual.abs() <= 1e-6 * at_work,
            "{name} {:?}: residual {:e} of {at_work}",
            case.set,
            b.residual
        );
    }
}

#[test]
fn damped_sine() {
    check(
        "damped-sine.shot",
        &[
            ("dose", "hhhhhhh"),
            ("crest", "hhhhhhh"),
            ("brief", "hhhhhhh"),
            ("reversal", "hhhhhhh"),
            ("empty", "hhhhhhh"),
        ],
    );
}

#[test]
fn two_phase() {
    check(
        "two-phase.shot",
        &[
            ("dose", "-hhhhhh"),
            ("dose_low", "h------"),
            ("length_1", "hhhhhhh"),
            ("alike", "hhhhhhh"),
            ("turn", "hhhhhhh"),
            ("no_short", "hhhhhhh"),
        ],
    );
}

#[test]
fn charge_and_fire() {
    check(
        "charge-and-fire.shot",
        &[
            ("ready", "h"),
            ("quick", "h"),
            ("dose", "h"),
            ("half", "h"),
            ("inrush", "h"),
            ("let_go", "h"),
        ],
    );
}

/// The one that shows a claim which fails: the second resistor is too slow.
#[test]
fn safe_discharge() {
    check(
        "safe-discharge.shot",
        &[("safe", "hf"), ("sink_hot", "hh"), ("to_sink", "hh")],
    );
}

#[test]
fn monitor_proof() {
    check(
        "monitor-proof.shot",
        &[
            ("bare", "h--"),
            ("patient", "hhh"),
            ("housing", "hhh"),
            ("strain", "hhh"),
            ("input_j", "hhh"),
        ],
    );
}

#[test]
fn surge_10_700() {
    check(
        "surge-10-700.shot",
        &[
            ("open_crest", "h-"),
            ("open_front", "h-"),
            ("open_width", "h-"),
            ("short_crest", "-h"),
            ("short_front", "-h"),
            ("short_width", "-h"),
        ],
    );
}

#[test]
fn combination_wave() {
    check(
        "combination-wave.shot",
        &[
            ("open_crest", "h---"),
            ("open_front", "h---"),
            ("open_width", "h---"),
            ("short_crest", "-h--"),
            ("short_front", "-h--"),
            ("short_width", "-h--"),
            ("short_dip", "-h--"),
            ("loaded_j", "--hh"),
        ],
    );
}

#[test]
fn pulse_forming_network() {
    check(
        "pulse-forming-network.shot",
        &[
            ("level", "h"),
            ("length", "h"),
            ("onset", "h"),
            ("ripple", "h"),
            ("emptied", "h"),
        ],
    );
}

#[test]
fn floating_bank() {
    check(
        "floating-bank.shot",
        &[("kept", "h"), ("dose", "h"), ("rest", "h"), ("clean", "h")],
    );
}

#[test]
fn coil_and_diode() {
    check(
        "coil-and-diode.shot",
        &[
            ("pull_in", "h"),
            ("hold", "h"),
            ("no_arc", "h"),
            ("stand_off", "h"),
            ("hand_over", "h"),
            ("drop", "h"),
        ],
    );
}

#[test]
fn stroke_counter() {
    check(
        "stroke-counter.shot",
        &[
            ("crest", "h"),
            ("early", "h"),
            ("action", "h"),
            ("rise_rate", "h"),
            ("spared", "h"),
        ],
    );
}

/// A netlist without a verdict above would show a newcomer something nobody watches.
#[test]
fn every_netlist_is_judged_here() {
    let source = include_str!("netlists.rs");
    for (name, _) in all() {
        assert!(
            source.contains(&format!("\"{name}\"")),
            "{name} is judged by no test"
        );
    }
}

#[test]
fn the_canonical_layout_is_a_fixpoint_that_says_the_same() {
    for (name, text) in all() {
        let neat =
            pulsewright_netlist::neaten(text.as_bytes(), &name).unwrap_or_else(|m| panic!("{m}"));
        let again =
            pulsewright_netlist::neaten(neat.as_bytes(), &name).unwrap_or_else(|m| panic!("{m}"));
        assert_eq!(neat, again, "{name}");
        assert_eq!(
            read(&text).circuit.draft(),
            read(&neat).circuit.draft(),
            "{name}"
        );
    }
}

/// A newcomer learns from files in the layout that `neaten` gives.
#[test]
fn the_netlists_stand_in_their_canonical_layout() {
    for (name, text) in all() {
        let neat =
            pulsewright_netlist::neaten(text.as_bytes(), &name).unwrap_or_else(|m| panic!("{m}"));
        assert_eq!(text, neat, "{name}");
    }
}

/// Nothing that stands in the examples is remarked upon.
#[test]
fn the_netlists_draw_no_remarks_when_read() {
    for (name, text) in all() {
        let remarks = read(&text).remarks;
        assert!(remarks.is_empty(), "{name}: {remarks:?}");
    }
}
