//! The grammar: small netlists, and what they state.

use pulsewright_circuit::circuit::LetValue;
use pulsewright_circuit::draft::{CaseValues, Method, Relation};
use pulsewright_circuit::parts::{Control, PartKind};
use pulsewright_circuit::phrase::{Measure, Window};
use pulsewright_circuit::schedule::TriggerKind;
use pulsewright_circuit::spread::SpreadKind;
use pulsewright_circuit::{Dimension, Draft, Expr, ExprKind};
use pulsewright_netlist::{LANGUAGE, neaten, parse, parse_value, read};

/// The draft of a text without mistakes.
fn draft(text: &str) -> Draft {
    let parsed = parse(text.as_bytes(), "netlist");
    let mistakes = parsed.source.mistakes(parsed.faults);
    assert!(mistakes.is_empty(), "{mistakes}");
    parsed.draft
}

/// The value of `let x = …`, which is one number.
fn number(text: &str) -> (f64, Dimension, bool) {
    match draft(&format!("let x = {text}"))
        .lets
        .remove(0)
        .value
        .nominal
        .kind
    {
        ExprKind::Number {
            value,
            dimension,
            share,
        } => (value, dimension, share),
        other => unreachable!("{text}: {other:?}"),
    }
}

/// A reading.
fn reading(text: &str) -> Expr {
    draft(&format!("reading x = {text}"))
        .readings
        .remove(0)
        .value
}

/// A reading that is one phrase.
fn phrase(text: &str) -> pulsewright_circuit::Phrase {
    match reading(text).kind {
        ExprKind::Reading(phrase) => *phrase,
        other => unreachable!("{text}: {other:?}"),
    }
}

#[test]
fn a_value_has_its_unit_with_or_without_a_blank() {
    let farad = Dimension::FARAD;
    for text in [
        "32 uF",
        "32uF",
        "32 µF",
        "32\u{a0}\u{3bc}F",
        "0.032 mF",
        "3_2 uF",
    ] {
        assert_eq!(number(text), (32e-6, farad, false), "{text}");
    }
}

#[test]
fn compound_units_are_one_value() {
    let slope = Dimension::VOLT.over(Dimension::SECOND).unwrap();
    for text in ["10 V/us", "10 V / us", "10e6 V/s"] {
        assert_eq!(number(text), (10e6, slope, false), "{text}");
    }
    assert_eq!(number("3 A²*s"), (3.0, Dimension::ACTION, false));
    assert_eq!(number("3 A*A*s"), (3.0, Dimension::ACTION, false));
    assert_eq!(number("3 A·A·s"), (3.0, Dimension::ACTION, false));
    assert_eq!(number("2 kV²").0, 2e6);
    assert_eq!(number("4.7 J/(mohm*us)").0, 4.7e9);
}

#[test]
fn percent_and_ppm_are_shares() {
    assert_eq!(number("5 %"), (0.05, Dimension::NONE, true));
    assert_eq!(number("5ppm"), (5e-6, Dimension::NONE, true));
    assert_eq!(
        number("180 deg"),
        (std::f64::consts::PI, Dimension::NONE, false)
    );
}

#[test]
fn a_sign_before_a_power_is_outside_it() {
    assert_eq!(draft("let x = -a^2"), draft("let x = -(a^2)"));
    assert_eq!(draft("let x = 2^-3^2"), draft("let x = 2^(-(3^2))"));
    assert_eq!(draft("let x = a - b - c"), draft("let x = (a - b) - c"));
    assert_eq!(draft("let x = a * -b"), draft("let x = a * (-b)"));
}

#[test]
fn a_unit_product_ends_where_an_expression_goes_on() {
    assert_eq!(draft("let x = 5 V * 2 A"), draft("let x = (5 V) * (2 A)"));
    assert_eq!(
        draft("let x = 5 V / r * 2"),
        draft("let x = ((5 V) / r) * 2")
    );
    assert_eq!(
        draft("current g from a to b = 1 kA * t / 1 us"),
        draft("current g from a to b = ((1 kA) * t) / (1 us)")
    );
}

#[test]
fn a_phrase_ends_where_its_slots_are_filled() {
    assert_eq!(
        reading("highest voltage at a - highest voltage at b"),
        reading("(highest voltage at a) - (highest voltage at b)")
    );
    assert_eq!(
        reading("energy into r / energy held by c just before 0 s"),
        reading("(energy into r) / (energy held by c just before 0 s)")
    );
    assert_eq!(
        reading("2 * voltage at a at 5 ms"),
        reading("2 * (voltage at a at 5 ms)")
    );
}

#[test]
fn a_word_of_a_phrase_is_a_name_unless_the_next_word_follows() {
    assert_eq!(
        reading("heat + width * rise"),
        Expr::binary(
            pulsewright_circuit::expr::Operator::Add,
            Expr::name("heat"),
            Expr::binary(
                pulsewright_circuit::expr::Operator::Multiply,
                Expr::name("width"),
                Expr::name("rise")
            ),
        )
    );
    assert!(matches!(phrase("heat in in").measure, Measure::Heat(part) if part.text == "in"));
    assert!(matches!(
        phrase("highest rise").measure,
        Measure::Highest(_)
    ));
    assert_eq!(draft("let x = 5 V, tolerance peak to 5 V").lets.len(), 1);
}

#[test]
fn a_window_belongs_to_the_phrase_before_it() {
    let outer = phrase("energy into r after time of highest voltage at a before 3 ms");
    let Some(Window::After(time)) = outer.window else {
        panic!("{outer:?}")
    };
    let ExprKind::Reading(inner) = time.kind else {
        panic!("{time:?}")
    };
    assert!(matches!(inner.window, Some(Window::Before(_))));
}

#[test]
fn while_takes_all_its_conditions_and_no_more() {
    let p = phrase("energy into r while ne is closed and relay is at pad");
    assert!(matches!(p.window, Some(Window::While(c)) if c.len() == 2));
    let d = draft("claim a: energy into r while s is closed is between 1 J and 2 J");
    assert!(matches!(d.claims[0].relation, Relation::Between(..)));
}

#[test]
fn steepest_between_jumps_may_have_a_window_between_times() {
    let p = phrase("steepest voltage at a between jumps between 1 ms and 2 ms");
    assert!(matches!(
        p.measure,
        Measure::Steepest {
            between_jumps: true,
            ..
        }
    ));
    assert!(matches!(p.window, Some(Window::Between(..))));
}

#[test]
fn a_voltage_between_nodes_leaves_the_fractions_to_the_phrase() {
    let p = phrase("rise of voltage from a to b from 10 % to 90 %");
    assert!(matches!(p.measure, Measure::Rise { .. }));
    let p = phrase("settling time of voltage from a to b to 60 V after closing of s");
    assert!(matches!(
        (p.measure, p.window),
        (Measure::Settling { .. }, Some(Window::After(_)))
    ));
    assert!(matches!(
        phrase("width of voltage at c at 50 %").measure,
        Measure::Width { .. }
    ));
}

#[test]
fn every_reading_of_the_reference_is_read() {
    for text in [
        "energy into r",
        "energy out of r",
        "charge through r",
        "gross charge through r",
        "action of r",
        "heat in r",
        "area of x",
        "highest x",
        "lowest x",
        "largest x",
        "peak to peak x",
        "steepest x",
        "mean x",
        "rms x",
        "final x",
        "time of highest x",
        "time of lowest x",
        "time of largest x",
        "time x first rises through 5 V",
        "time x last falls through 10 % of largest",
        "time x is above 5 V",
        "time x is below (2 * a)",
        "rise of x from 10 % to 90 %",
        "fall of x from 90 % to 10 %",
        "front time of x from 30 % to 90 %",
        "virtual origin of x from 30 % to 90 %",
        "time to half value of x with front from 30 % to 90 %",
        "width of x at 50 %",
        "undershoot of x",
        "overshoot of x over 5 V",
        "tilt of x",
        "settling time of x to 5 V",
        "period of x",
        "duration after 5 ms",
    ] {
        phrase(text);
    }
    for text in [
        "x at 5 ms",
        "x just before 5 ms",
        "energy stored at 5 ms",
        "energy stored just before closing of s",
    ] {
        phrase(text);
    }
}

#[test]
fn a_schedule_reads_its_triggers() {
    let text = "switch s from a to b : open, closes at 1 ms, tolerance 5 us or when x falls below 2 V, tolerance 1 V,\n\
        opens (opening of p - closing of p) after second closing of q, moves_ 1 ms";
    assert_eq!(parse(text.as_bytes(), "netlist").faults.len(), 1);
    let d = draft(text.strip_suffix(", moves_ 1 ms").unwrap());
    let PartKind::Switch(switch) = &d.parts[0].kind else {
        panic!()
    };
    let Control::Schedule {
        closed: false,
        actions,
    } = &switch.control
    else {
        panic!()
    };
    let triggers: Vec<_> = actions
        .iter()
        .flat_map(|a| &a.triggers)
        .map(|t| &t.kind)
        .collect();
    let [
        TriggerKind::At(at),
        TriggerKind::When { level, .. },
        TriggerKind::Delay { .. },
    ] = &triggers[..]
    else {
        panic!()
    };
    assert!(at.spread.is_some() && level.spread.is_some());
}

#[test]
fn a_zero_of_the_current_may_be_waited_for() {
    let d = draft(
        "switch s from a to b : closed, opens at zero current after 2 ms, closes at zero current",
    );
    let PartKind::Switch(switch) = &d.parts[0].kind else {
        panic!()
    };
    let Control::Schedule { actions, .. } = &switch.control else {
        panic!()
    };
    let kinds: Vec<bool> =
        actions.iter().map(|a| matches!(&a.triggers[0].kind, TriggerKind::ZeroCurrent { after } if after.is_some())).collect();
    assert_eq!(kinds, [true, false]);
}

#[test]
fn a_spread_belongs_to_the_value_before_it() {
    let d = draft(
        "capacitor c from a to b = 1 uF, charged to 5 V, tolerance 1 V, series 1 ohm, standard deviation 2 % lognormal",
    );
    let PartKind::Capacitor(c) = &d.parts[0].kind else {
        panic!()
    };
    assert!(c.value.spread.is_none());
    let kind = |v: &Option<pulsewright_circuit::spread::Value>| {
        v.clone().and_then(|v| v.spread).map(|s| s.kind)
    };
    assert!(matches!(kind(&c.charged), Some(SpreadKind::Tolerance(_))));
    assert!(matches!(kind(&c.series), Some(SpreadKind::Lognormal(_))));
}

#[test]
fn within_takes_its_allowances_in_either_order() {
    let a = draft("claim a: x is within 15 % or 3 J of 300 J");
    let b = draft("claim a: x is within 3 J or 15 % of 300 J");
    assert_eq!(a, b);
    let c = draft("let d = 3 J\nclaim a: x is within d of 300 J");
    assert!(matches!(
        &c.claims[0].relation,
        Relation::Within {
            share: None,
            amount: Some(_),
            ..
        }
    ));
}

#[test]
fn the_clauses_of_a_claim_may_repeat() {
    let d = draft(
        "claim a: x is at most 5 V, answers \"A\", when load >= 5 ohm, answers \"B\", when p is open circuit, allowing 1 V",
    );
    assert_eq!((d.claims[0].answers.len(), d.claims[0].when.len()), (2, 2));
}

#[test]
fn cases_come_as_lists_ranges_and_rows() {
    let d = draft(
        "cases a = 1 ohm, open circuit\ncases b = 1 V to 9 V, 3 values by equal ratio\ncases (c, d) = (1 V, 2 A), (3 V, 4 A)",
    );
    assert!(matches!(&d.cases[0].values, CaseValues::Rows(rows) if rows.len() == 2));
    assert!(matches!(
        &d.cases[1].values,
        CaseValues::Range {
            count: 3,
            by_ratio: true,
            ..
        }
    ));
    assert!(matches!(&d.cases[2].values, CaseValues::Rows(rows) if rows[1].len() == 2));
}

#[test]
fn the_run_is_read() {
    let d = draft(
        "span 1 ms\nstart steady\nintegrate by backward Euler\nerror at most 2 ppm\ntime step 1 us\nlimit steps 10_000\nchannels voltage at a, (x - y)",
    );
    assert!(d.run.span.is_some() && d.run.error.is_some() && d.run.step.is_some());
    assert_eq!(d.run.steady, Some(true));
    assert_eq!(d.run.method.map(|m| m.0), Some(Method::BackwardEuler));
    assert_eq!(d.run.limits[0].1, 10_000);
    assert_eq!(d.run.channels.map(|c| c.len()), Some(2));
}

#[test]
fn a_statement_goes_on_after_commas_operators_and_in_brackets() {
    let one = draft(
        "reading a = (energy into r + energy into s) * 2\nclaim b: a is at most 5 J, answers \"C\"",
    );
    let lines = "reading a = (energy into r\n + energy into s) *\n\n # why\n 2\nclaim b:\n a is at most 5 J,\n answers \"C\"";
    assert_eq!(one, draft(lines));
}

#[test]
fn a_line_that_begins_a_statement_by_its_first_word_only_goes_on() {
    let d = draft("channels voltage across a,\n voltage from a to b,\n current through r");
    assert_eq!(d.run.channels.map(|c| c.len()), Some(3));
    assert_eq!(
        draft("reading x = 5 *\n span").readings,
        draft("reading x = 5 * span").readings
    );
}

#[test]
fn ends_of_lines_blanks_and_marks_do_not_matter() {
    let plain = draft("let a = 5 V\nspan 1 ms\n");
    assert_eq!(plain, draft("\u{feff}let\ta\u{a0}=  5 V\r\n   span 1 ms"));
}

#[test]
fn a_text_keeps_its_quotes_and_its_hash() {
    assert_eq!(
        draft("title \"a \"\"b\"\" # c\" # d").title.as_deref(),
        Some("a \"b\" # c")
    );
}

#[test]
fn a_repeat_is_written_out() {
    let d = draft(
        "let n = 2\nrepeat k from 1 to n\n repeat j from k to 2\n resistor r[k][j] from n[k-1] to n[2*k+j] = k * 1 ohm\n channels voltage at n[k]\n end\nend",
    );
    let names: Vec<&str> = d.parts.iter().map(|p| p.name.text.as_str()).collect();
    assert_eq!(names, ["r[1][1]", "r[1][2]", "r[2][2]"]);
    let nodes: Vec<&str> = d.parts[2]
        .kind
        .nodes()
        .iter()
        .map(|n| n.text.as_str())
        .collect();
    assert_eq!(nodes, ["n[1]", "n[6]"]);
    assert_eq!(d.run.channels.map(|c| c.len()), Some(3));
}

#[test]
fn a_repeat_of_no_rounds_makes_nothing_but_is_read() {
    assert!(
        draft("repeat k from 1 to 0\n resistor r[k-5] from a to b = 5 ohm\nend")
            .parts
            .is_empty()
    );
    assert_eq!(
        parse(
            b"repeat k from 1 to 0\n resistor r[k] form a to b = 5 ohm\nend",
            "netlist"
        )
        .faults
        .len(),
        1
    );
}

#[test]
fn indices_are_printed_without_leading_zeros() {
    let d = draft("wire w[007] from n[03] to n[2+1]");
    let nodes: Vec<&str> = d.parts[0]
        .kind
        .nodes()
        .iter()
        .map(|n| n.text.as_str())
        .collect();
    assert_eq!(
        (d.parts[0].name.text.as_str(), nodes),
        ("w[7]", vec!["n[3]", "n[3]"])
    );
}

#[test]
fn a_hundred_thousand_parts_are_read() {
    let text = "voltage d from n[0] to ground = 1 V\nrepeat k from 1 to 50_000\n inductor l[k] from n[k-1] to n[k] = 10 uH\n \
        capacitor c[k] from n[k] to ground = 1 nF\nend\nspan 1 us\n";
    assert_eq!(draft(text).parts.len(), 100_001);
}

#[test]
fn the_limit_of_nesting_is_raised_by_the_file() {
    let deep = |n: usize| format!("let x = {}1{}", "(".repeat(n), ")".repeat(n));
    assert_eq!(
        parse(deep(65).as_bytes(), "netlist").faults[0].code,
        "P0306"
    );
    draft(&deep(64));
    draft(&format!("{}\nlimit nesting 200", deep(200)));
}

#[test]
fn the_deepest_text_of_any_kind_fits_the_stack_of_a_thread() {
    for (open, close, levels) in [
        ("highest (", ")", 127),
        ("sqrt(", ")", 255),
        ("(2 * ", ")", 255),
        ("points(t; 0 s: ", "; 1 s: 2)", 255),
        ("1 + 2^(-", ")", 127),
        ("time of highest x after ", "", 63),
    ] {
        let text = format!(
            "limit nesting 256\nspan 1 s\nreading x = {}t{}",
            open.repeat(levels),
            close.repeat(levels)
        );
        draft(&text);
        assert!(read(text.as_bytes(), "netlist").is_err());
        assert!(neaten(text.as_bytes(), "netlist").is_ok());
    }
}

#[test]
fn a_deep_text_of_any_kind_is_a_mistake() {
    let n = 200_000;
    for text in [
        format!("let x = {}", "(".repeat(n)),
        format!("let x = {}1", "-".repeat(n)),
        format!("let x = 1{}", "+1".repeat(n)),
        format!("let x = 2{}", "^2".repeat(n)),
        format!("let x = {}", "sqrt(".repeat(n)),
        format!("wire w{} from a to b", "[1".repeat(n)),
        format!(
            "reading x = highest a {}",
            "after time of highest a ".repeat(n)
        ),
        "repeat k from 1 to 2\n".repeat(n),
    ] {
        assert!(!parse(text.as_bytes(), "netlist").faults.is_empty());
    }
}

#[test]
fn a_setting_is_a_value_or_a_circuit_word() {
    assert_eq!(
        parse_value("75ohm").unwrap(),
        LetValue::Number {
            value: 75.0,
            dimension: Dimension::OHM
        }
    );
    assert_eq!(
        parse_value("2 * (3 V + 1 kV)").unwrap(),
        LetValue::Number {
            value: 2006.0,
            dimension: Dimension::VOLT
        }
    );
    assert_eq!(parse_value("open circuit").unwrap(), LetValue::Open);
    assert_eq!(parse_value("short circuit").unwrap(), LetValue::Short);
}

#[test]
fn a_setting_can_count() {
    let text =
        b"let n = 2\nrepeat k from 1 to n\nresistor r[k] from a to ground = 5 ohm\nend\nspan 1 ms";
    assert_eq!(read(text, "netlist").unwrap().counted, ["n"]);
    let set = [(
        "n".to_owned(),
        LetValue::Number {
            value: 5.0,
            dimension: Dimension::NONE,
        },
    )];
    assert_eq!(
        pulsewright_netlist::read_set(text, "netlist", &set)
            .unwrap()
            .circuit
            .draft()
            .parts
            .len(),
        5
    );
}

#[test]
fn what_the_circuit_writes_reads_back() {
    let examples = LANGUAGE
        .split("```shot\n")
        .skip(1)
        .filter_map(|part| part.split("```").next());
    for example in examples {
        let d = draft(example);
        for named in d.readings.iter().chain(&d.signals) {
            let text = format!("reading x = {}", named.value);
            assert_eq!(draft(&text).readings[0].value, named.value, "{text}");
        }
        for l in &d.lets {
            let text = format!("let x = {}", l.value);
            assert_eq!(draft(&text).lets[0].value, l.value, "{text}");
        }
    }
}

#[test]
fn results_can_be_sent_and_shared() {
    fn is<T: Send + Sync>() {}
    is::<pulsewright_netlist::Netlist>();
    is::<pulsewright_netlist::Mistakes>();
    is::<pulsewright_netlist::Parsed>();
}

#[test]
fn each_rating_is_a_claim_of_its_own() {
    let made = draft(
        "let most = 6 kV
         capacitor C from a to b = 1 uF, tolerance 5 %, rated most, 200 A, 5 W, rated (2 * 10 J), 3 A²*s
         switch fire from a to b : open, closes at 1 us, rated 40 A
         repeat k from 1 to 2
           resistor r[k] from a to b = 1 ohm, rated 2 W
         end",
    );
    let claims: Vec<String> = made
        .claims
        .iter()
        .map(|c| format!("{}: {} {}", c.name, c.reading, c.relation))
        .collect();
    assert_eq!(
        claims,
        [
            "C.voltage: largest voltage across C is at most most",
            "C.current: largest current through C is at most 200 A",
            "C.power: mean power into C is at most 5 W",
            "C.energy: energy into C is at most 2 * 10 J",
            "C.action: action of C is at most 3 A²*s",
            "fire.current: largest current through fire is at most 40 A",
            "r[1].power: mean power into r[1] is at most 2 W",
            "r[2].power: mean power into r[2] is at most 2 W",
        ]
    );
}

#[test]
fn a_part_called_by_a_unit_may_be_rated() {
    let text = "capacitor C from a to ground = 1 uF, rated 6 kV\nresistor V from a to ground = 5 ohm, rated 3 W\nspan 1 ms";
    assert_eq!(
        read(text.as_bytes(), "netlist")
            .unwrap()
            .circuit
            .draft()
            .claims
            .len(),
        2
    );
}
