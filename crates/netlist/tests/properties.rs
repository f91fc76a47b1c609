//! What holds for every text: no panic, and a layout that reads back as the same draft.
//!
//! `PROPTEST_CASES` raises the number of cases.

use proptest::prelude::*;
use pulsewright_netlist::{LANGUAGE, neaten, parse, parse_value, read};

fn config() -> ProptestConfig {
    let cases = std::env::var("PROPTEST_CASES")
        .ok()
        .and_then(|n| n.parse().ok())
        .unwrap_or(96);
    ProptestConfig {
        cases,
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

/// The examples of the reference, as texts to start from.
fn examples() -> Vec<String> {
    let parts = LANGUAGE
        .split("```shot\n")
        .skip(1)
        .filter_map(|part| part.split("```").next());
    parts.map(str::to_owned).collect()
}

/// Everything this crate does with a text.
fn exercise(bytes: &[u8]) {
    match read(bytes, "netlist") {
        Ok(netlist) => drop(netlist.source.mistakes(netlist.remarks).to_string()),
        Err(mistakes) => {
            let text = mistakes.to_string();
            assert!(!text.is_empty());
        }
    }
    if let Ok(neat) = neaten(bytes, "netlist") {
        assert_eq!(parse(bytes, "a").draft, parse(neat.as_bytes(), "b").draft);
        assert_eq!(neaten(neat.as_bytes(), "neat").as_ref(), Ok(&neat));
    }
    let _ = parse_value(&String::from_utf8_lossy(bytes));
}

fn name() -> impl Strategy<Value = String> {
    prop_oneof![
        Just("bank".to_owned()),
        Just("x".to_owned()),
        Just("n[0]".to_owned()),
        Just("n[ 1 + 2*k ]".to_owned()),
        Just("heat".to_owned()),
        "[a-z]{1,6}_",
    ]
}

fn value() -> impl Strategy<Value = String> {
    let unit = prop_oneof![
        Just(""),
        Just(" V"),
        Just("kΩ"),
        Just(" A²*s"),
        Just(" V / us"),
        Just("%"),
        Just(" J/(ohm * s)"),
        Just("µF")
    ];
    ("[1-9][0-9]{0,3}(\\.[0-9]{1,3})?(e-?[1-9])?", unit).prop_map(|(n, u)| format!("{n}{u}"))
}

fn expression() -> impl Strategy<Value = String> {
    let leaf = prop_oneof![value(), name(), Just("pi".to_owned()), Just("t".to_owned())];
    leaf.prop_recursive(4, 24, 3, |inner| {
        prop_oneof![
            (inner.clone(), "[-+*/]", inner.clone())
                .prop_map(|(a, o, b)| format!("({a}) {o} ({b})")),
            (inner.clone(), inner.clone()).prop_map(|(a, b)| format!("max({a} , -{b})")),
            inner.clone().prop_map(|a| format!("( {a} )^-2")),
            inner.clone().prop_map(|a| format!("- -sqrt({a})")),
            inner
                .clone()
                .prop_map(|a| format!("points(t;0 s:{a};1ms : 2)")),
        ]
    })
}

fn reading() -> impl Strategy<Value = String> {
    let signal = prop_oneof![
        name().prop_map(|n| format!("voltage across {n}")),
        name().prop_map(|n| format!("voltage from {n} to ground")),
        expression().prop_map(|e| format!("({e})")),
    ];
    let window = prop_oneof![
        Just(String::new()),
        Just(" while s is closed and r is at pad".to_owned()),
        (value(), name()).prop_map(|(v, n)| format!(" between {v} and second opening of {n}")),
        name().prop_map(|n| format!(" after time of highest voltage at {n} before {n}")),
    ];
    (signal, window, expression()).prop_flat_map(|(s, w, e)| {
        prop_oneof![
            Just(format!("highest {s}{w} * 2")),
            Just(format!("{s} just before 1ms + {e}")),
            Just(format!("rise of {s} from 10% to 90 %{w}")),
            Just(format!("time {s} first falls through 5 % of largest{w}")),
            Just(format!("energy into bank{w} / {e}")),
        ]
    })
}

fn statement() -> impl Strategy<Value = String> {
    prop_oneof![
        (name(), expression()).prop_map(|(n, e)| format!("let {n}={e}, tolerance -5 % to 7%")),
        (name(), name(), expression())
            .prop_map(|(a, n, e)| format!("resistor {a} from {n} to ground={e},\n\n tolerance 5%")),
        (name(), value()).prop_map(|(n, v)| format!(
            "capacitor {n} from a to b = {v} , # why\n  charged to {v}, series {v}"
        )),
        (name(), value()).prop_map(|(n, v)| format!(
            "switch {n} from a to b:open,closes at {v}, tolerance 1 us or {v} after closing of q"
        )),
        (name(), reading()).prop_map(|(n, r)| format!("reading   {n}   = {r}")),
        (name(), reading(), value()).prop_map(|(n, r, v)| format!(
            "claim {n} :{r} is within 5 % or {v} of {v}, when {n} >= {v}, answers \"a # \"\"b\"\"\""
        )),
        reading().prop_map(|r| format!(
            "repeat k from 1 to 2*3-4\n\n\n # in\nreading q[k] = {r}\nend # out"
        )),
        Just("# alone".to_owned()),
        Just(String::new()),
    ]
}

fn netlist() -> impl Strategy<Value = String> {
    let ends = prop_oneof![
        Just("\n"),
        Just("\r\n"),
        Just("  # comment\n"),
        Just("\n\n\n")
    ];
    prop::collection::vec((statement(), ends), 0..12).prop_map(|all| {
        let lines: Vec<String> = all.into_iter().map(|(s, e)| format!("{s}{e}")).collect();
        lines.concat().replace("[ 1 + 2*k ]", "[ 1 + 2*3 ]")
    })
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn a_layout_reads_back_and_is_its_own_layout(text in netlist()) {
        let parsed = parse(text.as_bytes(), "netlist");
        let mistakes = parsed.source.mistakes(parsed.faults);
        prop_assume!(mistakes.list().iter().all(|m| m.code == "P0105" || m.code == "P0106" || m.code == "P0109"));
        if mistakes.is_empty() {
            let neat = neaten(text.as_bytes(), "netlist").unwrap();
            prop_assert_eq!(&parsed.draft, &parse(neat.as_bytes(), "neat").draft);
            prop_assert_eq!(&neaten(neat.as_bytes(), "neat").unwrap(), &neat);
        }
    }

    #[test]
    fn no_bytes_are_a_panic(bytes in prop::collection::vec(any::<u8>(), 0..400)) {
        exercise(&bytes);
    }

    #[test]
    fn no_text_of_words_is_a_panic(words in prop::collection::vec(word(), 0..60)) {
        exercise(words.join(" ").as_bytes());
    }

    #[test]
    fn no_mutated_netlist_is_a_panic(
        example in prop::sample::select(examples()),
        cuts in prop::collection::vec((any::<prop::sample::Index>(), any::<prop::sample::Index>(), 0..4_u8, word()), 1..6),
    ) {
        let mut text: Vec<char> = example.chars().collect();
        for (at, to, how, word) in cuts {
            let (a, b) = (at.index(text.len() + 1), to.index(text.len() + 1));
            let (from, until) = (a.min(b), a.max(b).min(a.min(b) + 12));
            match how {
                0 => drop(text.drain(from..until)),
                1 => drop(text.splice(from..from, word.chars())),
                2 => drop(text.splice(from..until, word.chars())),
                _ => {
                    let piece: Vec<char> = text.get(from..until).unwrap_or_default().to_vec();
                    text.splice(b.min(text.len())..b.min(text.len()), piece);
                }
            }
        }
        exercise(text.into_iter().collect::<String>().as_bytes());
    }
}

/// A word, a sign or a number of the language, or a character that is none of it.
fn word() -> impl Strategy<Value = String> {
    let words = "resistor capacitor switch changeover diode coupling let signal reading claim cases repeat end span \
        title limit channels from to or and of is at in while between after before during phase with by when highest \
        time first falls rises through voltage across energy into held stored just closing opening moving tolerance \
        standard deviation charged closes opens moves zero current ganged open closed circuit short at most within \
        percentage points k n[k-1] a b ground t pi step max points ( ) [ ] , : ; = + - * / ^ < <= >= % ² . V kV us \
        ohm µF 5 0.5 1e9 1e400 999999999999 \"x\" \" # \n \r \t − “ é 電 \u{0} \u{feff}";
    let all: Vec<String> = words
        .split(' ')
        .filter(|w| !w.is_empty())
        .map(str::to_owned)
        .collect();
    prop::sample::select(all)
}
