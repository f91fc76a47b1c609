//! Every mistake of the text, as it is shown.

use std::fmt::Write as _;

use pulsewright_netlist::{CODES, Mistakes, parse, parse_value, read};

/// The mistakes of a text's form, as they are shown.
fn shown(text: &str) -> String {
    let parsed = parse(text.as_bytes(), "netlist");
    parsed.source.mistakes(parsed.faults).to_string()
}

/// All mistakes of a netlist, those of the circuit included.
fn all(text: &str) -> Mistakes {
    match read(text.as_bytes(), "netlist") {
        Ok(netlist) => unreachable!("no mistake in {}", netlist.source.text()),
        Err(mistakes) => mistakes,
    }
}

/// The places of all mistakes, as line and column.
fn places(text: &str) -> Vec<(usize, usize)> {
    all(text)
        .list()
        .iter()
        .map(|m| (m.line, m.column))
        .collect()
}

const CHARACTERS: &[&str] = &[
    "note \"a\u{7}b\"\n# \u{202e}\n",
    "let x = 5 V − 3 V\nlet y = 5 V × 2\ntitle “curly”\n",
    "let x = 5 V @ 3\n",
    "title \"open\nspan 1 ms\n",
    "let x = .5 V\nlet y = 5. V\nlet z = 1__0 V\n",
    "let x = 0,5 V\nlet y = min(1,2)\n",
];

const VALUES: &[&str] = &[
    "resistor r from a to b = 50 Ohm\nresistor q from a to b = 5 KV\ncapacitor c from a to b = 32 mf\n",
    "resistor r from a to b = 10 kohms\nlet x = 5 volts\nlet y = 15 percent\nlet z = 5 zorkmid\n",
    "let x = V\nlet y = (1/2) ohm\nlet z = 5 V A\n",
    "let e = 0.5 * 32 uF * 4.8 kV^2\nlet f = 3 A^2*s\nlet g = 2 V/us^3\n",
    "resistor r from a to b = 1/2 ohm\nlet x = 2 * (1 + 3)/4 %\nlet y = 5 V + 1 / 3 V\n",
    "let x = 5 J/ohm*s\nlet y = 5 V/s/s\n",
    "let x = 100 ohm + 5 %\nlet y = 5 V - 2 %\n",
    "let x = 1e400 V\nlet y = 1e-400 V\n",
    "let x = 1 V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V*V\n",
];

const NAMES: &[&str] = &[
    "resistor aö from a to b = 5 ohm\nlet _x = 5\n",
    "resistor r from a [3] to b = 5 ohm\n",
    "repeat k from 1 to 3\n  resistor r[k] from n[k-2] to b = 5 ohm\nend\n",
    "repeat k from 1 to 3.5\nend\nlet x = 5 V\nrepeat j from 1 to x\nend\nrepeat i from 1 to y\nend\n",
    "repeat k from 1 to 9223372036854775807 + 1\nend\nrepeat j from 1 to 9999999999999999999999\nend\n",
    "resistor r[1/2] from a to b = 5 ohm\n",
    "resistor s1.coil from a to b = 5 ohm\n",
    "resistor r from at to b = 5 ohm\n",
];

const STATEMENTS: &[&str] = &[
    "resistor r from a to b = (5 ohm\nresistor q from a to b = 5 ohm,\nspan 5 ms +\n",
    "capacitr bank from a to b = 1 uF\nzorkmid\n5 ohm\nlte x = 5\n",
    "resistor r form a to b = 5 ohm\nresistor q from a to = 5 ohm\nresistor p from a to b 5 ohm\nresistor\n",
    "switch s from a to b : opne\nswitch u from a to b = 5 ohm\nswitch v from a to b : open, closes 1 ms\n",
    "switch s from a to b : open, closes when voltage at a fell below 3 V\n",
    "switch s from a to b : open, closes when voltage at a + 1 V rises above 3 V\nchannels voltage at a * 2\n",
    "changeover r from a to b or c : b\nchangeover q from a to b : at b\n",
    "diode d from a to b threshold 5 V\ndiode e from a to b : threshld 5 V\n",
    "capacitor c from a to b = 1 uF, charged to 5 V, charged to 6 V\nresistor r from a to b = 1 ohm, tolerance 1 %, tolerance 2 %\n",
    "thyristor t from a to b\nmount s as x (a)\ntake in \"x\"\nmeasured x from \"a.csv\"\ninductor l from a to b = 1 mH, saturates at 3 A\n",
    "signal q = charge through c so far\nreading x = energy into r with load = open circuit\nswitch s from a to b : open, closes every 5 ms\n",
    "reading x = largest difference of a and b\nclaim y: x is at most 5 V, in at most 99 % of shots\n",
    "claim y: x is at most 5 V, in at least 99 % of cases\nclaim z: x is at most 5 V, in at least 9 % of shots, in at least 8 % of shots\n",
    "let x = sqrt(1, 2)\nlet y = max(1)\nlet z = sin 5\nlet w = points(t)\n",
    "let x = (5 + 3))\nlet y = 5]\n",
    "resistor r from a to b = 1 ohm, charged to 5 V\nclaim y: x is at most 5 V, answer \"x\"\n",
    "resistor r from a to b = 1 ohm, rated 5 W, 3 s\nresistor q from a to b = 1 ohm, ratd 5 W\ncoupling k between a and b = 0.5, rated 5 W\n",
    "span 1 ms\nspan 2 ms\ntitle \"a\"\ntitle \"b\"\nlimit steps 5\nlimit steps 6\n",
    "reading a = energy int r\nreading b = enrgy into r\nreading c = higest voltage at a\nreading d = energy into\n",
    "reading a = highest energy into r\nreading b = time of highst voltage at a\nreading c = voltage acros r\n",
    "reading a = energy into r while s is clsed\nreading b = width of voltage at a to 5 %\nreading c = first voltage at a\n",
    "claim a: x is at mst 5 V\nclaim b: x at most 5 V\nclaim c: x is 5 V\nclaim d: x is at most 5 V, answers x\n",
];

const RUN: &[&str] = &[
    "adjust v from 1 V so that x is 5 J\nadjust x form 1 V to 2 V so that y is 5 J\nadjust 5 V\n",
    "adjust v from 1 V to 6 so tht x is 5 J\n",
    "adjust v from 1 V to 6 so that x at least 5 J\n",
    "adjust v from 1 V to 6 V, r from 1 ohm to 2 ohm so that x is 5 J\n",
    "adjust v from 1 V to 6 V so that x is least\n",
    "adjust v from 1 V to 6 V so that x is 5 J in every draw\n",
    "adjust v from 1 V to 6 V so that x is 5 J, answers \"x\"\n",
    "adjst v from 1 V to 6 V so that x is 5 J\nadjust v from 1 V to 6 V so that x is 5 J\n",
    "let n = 3\nadjust n from 1 to 6 so that x is 5 J\nrepeat k from 1 to n\nend\nrepeat k from 1 to 2\nadjust v from 1 V to 6 V so that x is 5 J\nend\n",
    "integrate by trapezodal rule\nstart at res\ntime step\nerror at mots 1 ppm\n",
    "limit step 5\nlimit zorkmid 5\nlimit parts 1.5\nlimit nesting 1000\n",
    "cases load = 1 ohm to 2 ohm, 7 value\ncases x = 1 V to 2 V, many values\n",
    "claim a: x is within 5 % or 3 % of 5 V\nclaim b: x is within 5 V or 3 V of 5 V\n",
];

const REPEATS: &[&str] = &[
    "repeat k from 1 to 3\n  resistor r[k] from a to b = 5 ohm\n",
    "end\nrepeat k from 1 to 3\nend k\n",
    "repeat k from 1 to 3\n  span 5 ms\n  let x = 5\nend\n",
    "repeat k from 1 to 999999999999\n  resistor r[k] from a to b = 5 ohm\nend\n",
    "limit parts 10\nrepeat k from 1 to 4\n  repeat j from 1 to k\n    resistor r[k][j] from a to b = 5 ohm\n  end\nend\n",
    "repeat mA from 1 to 3\nend\nrepeat k from 1 to 3\n  repeat k from 1 to 3\n  end\nend\n",
    "let k = 5 V\nrepeat k from 1 to 3\nend\nrepeat m from 1 to 3\nend\nreading m = energy into r\n",
    "let n = 5\nrepeat k from 1 to n\nend\ncases n = 3, 4\n",
    "let n = m\nlet m = n\nrepeat k from 1 to n\nend\n",
];

fn snapshot(name: &str, netlists: &[&str]) {
    let mut text = String::new();
    for netlist in netlists {
        let _ = writeln!(text, "{}", shown(netlist));
    }
    insta::with_settings!({ prepend_module_to_snapshot => false, omit_expression => true }, {
        insta::assert_snapshot!(name, text);
    });
}

#[test]
fn mistakes_of_characters() {
    snapshot("characters", CHARACTERS);
}

#[test]
fn mistakes_of_values() {
    snapshot("values", VALUES);
}

#[test]
fn mistakes_of_names() {
    snapshot("names", NAMES);
}

#[test]
fn mistakes_of_statements() {
    snapshot("statements", STATEMENTS);
}

#[test]
fn mistakes_of_the_run() {
    snapshot("run", RUN);
}

#[test]
fn mistakes_of_repetition() {
    snapshot("repeats", REPEATS);
}

#[test]
fn every_code_is_provoked() {
    let deep = format!("let x = {}1{}\n", "(".repeat(100), ")".repeat(100));
    let long = format!("let x = 1{}\n", "+1".repeat(1000));
    let powers = format!("let x = 1 V{}\n", "*V".repeat(600));
    let stray = "~".repeat(10_001);
    let tables = [CHARACTERS, VALUES, NAMES, STATEMENTS, RUN, REPEATS];
    let texts = tables
        .into_iter()
        .flatten()
        .copied()
        .chain([&*deep, &*long, &*powers, &*stray]);
    let mut seen: Vec<&str> = texts
        .flat_map(|t| parse(t.as_bytes(), "netlist").faults)
        .map(|f| f.code)
        .collect();
    seen.extend(
        parse(&vec![0; (256 << 20) + 1], "netlist")
            .faults
            .first()
            .map(|f| f.code),
    );
    seen.extend(
        parse(b"note \"\xff\"", "netlist")
            .faults
            .first()
            .map(|f| f.code),
    );
    for (code, title, _) in CODES {
        assert!(
            seen.contains(code),
            "{code} ({title}) is provoked by no netlist here"
        );
    }
}

#[test]
fn a_byte_that_is_no_utf8_is_placed() {
    let faults = parse(b"# \xc3\xa4\n# \xe4\n", "netlist");
    let mistakes = faults.source.mistakes(faults.faults);
    let found: Vec<(usize, usize, usize)> = mistakes
        .list()
        .iter()
        .map(|m| (m.line, m.column, m.start))
        .collect();
    assert_eq!(found, [(2, 3, 7)]);
}

#[test]
fn columns_count_characters_and_not_bytes() {
    assert_eq!(
        places("title \"Ωµ\" zork\nresistor r from a to ground = 1 ohm\nspan 1 ms\n"),
        [(1, 12)]
    );
}

#[test]
fn the_example_of_the_reference_of_style() {
    let text = "capacitor bank from pad to ground = 1 uF\nspan 1 ms\nresistor chest from pad to ground = 50\n";
    insta::assert_snapshot!(all(text), @r"
    netlist:3:37: mistake P0107: `chest` needs a resistance, and 50 has no unit
        resistor chest from pad to ground = 50
                                            ~~
        write: 50 ohm
    ");
}

#[test]
fn a_long_line_is_cut_around_the_place() {
    let sum = "1 V + ".repeat(30);
    let text = format!("let x = {sum}2 Vv + {sum}1 V\n");
    let lines: Vec<String> = shown(&text).lines().map(str::to_owned).collect();
    assert!(lines[1].chars().count() <= 80 && lines[1].contains("2 Vv"));
    let under = lines[2].find('~').unwrap();
    let place: String = lines[1].chars().skip(under).take(2).collect();
    assert_eq!(place, "Vv");
}

#[test]
fn a_tab_and_a_wide_character_keep_the_place_underlined() {
    insta::assert_snapshot!(shown("title\t\"電\" zork\n"), @r#"
    netlist:1:11: mistake P0303: `title` needs the statement's end here, not `zork`
        title "電" zork
                   ~~~~ the statement's end belongs here
    "#);
}

#[test]
fn at_most_twenty_are_drawn() {
    let text = "zorkmid\n".repeat(25);
    assert!(shown(&text).ends_with("and 5 more mistakes\n"));
}

#[test]
fn a_broken_statement_still_declares_its_name() {
    let text = "resistor r from a to ground = 5 Ohm\nlet v = 5 Vv\ncapacitor c from a to ground = 1 uF, charged to v\n\
        reading e = energy into r\nspan 1 ms\n";
    assert_eq!(places(text), [(1, 33), (2, 11)]);
}

#[test]
fn what_follows_from_a_broken_statement_is_left_out() {
    let text = "resistor r form a to ground = 5 ohm\nreading v = highest voltage at a\nreading w = 2 * v\n";
    let found = all(text);
    let codes: Vec<&str> = found.list().iter().map(|m| m.code).collect();
    assert_eq!(codes, ["P0550", "P0303"], "{found}");
}

#[test]
fn mistakes_of_text_and_circuit_are_reported_together() {
    let text =
        "resistor r from a to ground = 5 Ohm\ncapacitor c from a to ground = 1 uH\nspan 1 kV\n";
    assert_eq!(places(text), [(1, 33), (2, 32), (3, 6)]);
}

#[test]
fn a_mistake_in_every_round_is_reported_once() {
    let text = "repeat k from 1 to 100\n  resistor r[k] from a to ground = 5\nend\nspan 1 ms\n";
    assert_eq!(places(text), [(2, 36)]);
}

#[test]
fn a_statement_left_open_costs_itself_only() {
    let text = "resistor r from a to ground = (5 ohm\nresistor q from a to ground = 5\nspan 1 ms\n";
    assert_eq!(places(text), [(1, 31), (2, 31)]);
}

#[test]
fn a_setting_is_placed_in_its_own_text() {
    let fault = parse_value("5 Ohm").unwrap_err();
    assert_eq!((fault.code, fault.span.start), ("P0103", 2));
    assert_eq!(parse_value("bank").unwrap_err().code, "P0255");
    assert_eq!(parse_value("").unwrap_err().code, "P0303");
}

/// What is written as the line of a netlist without another mistake: the mistakes of it, each as
/// its column and the word offered.
fn offers(line: &str) -> Vec<(usize, Option<String>)> {
    let text = format!(
        "{line}\nresistor r from d to ground = 5 ohm\nswitch sw from d to ground : open, closes at 1 us\nspan 1 ms\n"
    );
    all(&text)
        .list()
        .iter()
        .map(|m| (if m.line == 1 { m.column } else { 0 }, m.write.clone()))
        .collect()
}

fn offered(line: &str, column: usize, word: &str) {
    assert_eq!(offers(line), [(column, Some(word.to_owned()))], "{line}");
}

#[test]
fn a_misspelt_ordinal_is_placed_and_the_near_one_offered() {
    offered("reading c = frist closing of sw", 13, "first");
    offered("reading c = lst closing of sw", 13, "last");
    offered(
        "switch u from d to ground : open, closes 1 us after secnd closing of sw",
        53,
        "second",
    );
    offered(
        "reading c = energy into r after frist closing of sw",
        33,
        "first",
    );
}

#[test]
fn a_word_before_a_change_that_is_near_no_ordinal_is_the_mistake() {
    assert_eq!(offers("reading c = zorkmid closing of sw"), [(13, None)]);
}

#[test]
fn a_misspelt_function_is_placed_and_the_near_one_offered() {
    offered(
        "voltage k from d to ground = 5 V * sine(t / 1 s)",
        36,
        "sin",
    );
    offered("let x = 5 V + 1 V * sqr(4)", 21, "sqrt");
    offered("let x = expp(4)", 9, "exp");
    offered(
        "voltage k from d to ground = 5 V * stp(t - 1 us)",
        36,
        "step",
    );
    offered("reading c = highest sqr(4)", 21, "sqrt");
}

#[test]
fn misspelt_points_are_placed_and_offered() {
    offered(
        "voltage k from d to ground = pionts(t; 0 s: 0 V; 1 s: 5 V)",
        30,
        "points",
    );
}

#[test]
fn a_misspelt_window_is_placed_and_the_near_word_offered() {
    offered(
        "reading c = energy into r betwen 1 us and 2 us",
        27,
        "between",
    );
    offered("reading c = energy into r aftr 1 us", 27, "after");
    offered("reading c = energy into r befor 1 us", 27, "before");
    offered(
        "reading c = mean voltage across r durng phase 1 of voltage across r",
        35,
        "during",
    );
}

#[test]
fn a_misspelt_before_is_placed_after_just() {
    offered("reading c = voltage across r just befor 1 us", 35, "before");
}

#[test]
fn a_misspelt_clause_of_a_claim_is_offered_with_its_comma() {
    offered(
        "claim c: energy into r is at most 5 J allwing 1 J",
        39,
        ", allowing",
    );
}

#[test]
fn a_through_written_short_is_offered_in_full() {
    offered("reading c = charge thru r", 20, "through");
    offered("reading c = gross charge thru r", 26, "through");
}

/// `is` is nearer to `in` than `into` is, but the reading's own word decides.
#[test]
fn what_a_reading_needs_goes_before_what_a_claim_needs() {
    offered("claim c: energy in r is at most 5 J", 17, "into");
}

#[test]
fn a_misspelt_current_is_placed_after_zero() {
    offered(
        "switch u from d to ground : open, closes at zero curent",
        50,
        "current",
    );
}

#[test]
fn a_coupling_that_could_not_be_read_names_no_parts() {
    offered("coupling k betwen a and b = 0.5", 12, "between");
}

#[test]
fn a_changeover_that_could_not_be_read_joins_no_nodes() {
    let found = offers("changeover k from a to b and ground : at b");
    assert_eq!(found, [(26, None)]);
}

#[test]
fn a_repeat_without_end_is_closed_before_what_may_not_stand_in_it() {
    let text = "repeat k from 1 to 2\n  resistor r[k] from a to ground = 5 ohm\nspan 1 ms\n";
    assert_eq!(places(text), [(1, 1)]);
}

#[test]
fn a_repeat_without_end_is_closed_before_a_name_without_an_index() {
    let text = "repeat k from 1 to 2\n  resistor r[k] from a to ground = 5 ohm\n\
        capacitor c from a to ground = 1 uF\nspan 1 ms\n";
    assert_eq!(places(text), [(1, 1)]);
}
