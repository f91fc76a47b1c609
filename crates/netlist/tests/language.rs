//! Every example of the language reference is read, and every word of the language has a page.

use pulsewright_netlist::{CODES, LANGUAGE, explain, neaten, parse, read, topics};

/// The examples of the reference.
fn examples() -> Vec<&'static str> {
    LANGUAGE
        .split("```shot\n")
        .skip(1)
        .filter_map(|part| part.split("```").next())
        .collect()
}

#[test]
fn every_example_is_read() {
    assert!(examples().len() > 50);
    for example in examples() {
        let parsed = parse(example.as_bytes(), "example");
        let mistakes = parsed.source.mistakes(parsed.faults);
        assert!(mistakes.is_empty(), "{mistakes}");
    }
}

#[test]
fn every_whole_example_is_a_circuit() {
    let whole = examples().into_iter().filter(|e| e.contains("\nspan "));
    assert!(whole.clone().count() >= 2);
    for example in whole {
        read(example.as_bytes(), "example")
            .map_err(|m| m.to_string())
            .unwrap();
    }
}

#[test]
fn every_example_reads_back_from_its_layout() {
    for example in examples() {
        let neat = neaten(example.as_bytes(), "example").unwrap();
        assert_eq!(
            parse(example.as_bytes(), "a").draft,
            parse(neat.as_bytes(), "b").draft
        );
        assert_eq!(neaten(neat.as_bytes(), "neat").unwrap(), neat);
    }
}

#[test]
fn every_statement_has_a_page() {
    let words = "resistor capacitor inductor coupling wire voltage current switch changeover diode title note let \
        signal reading claim cases adjust span start integrate error time channels limit repeat end tolerance standard \
        closes opens moves when at after before between while during charged carrying winding series leakage contact \
        insulation threshold slope ganged energy charge gross action heat area highest lowest largest peak steepest \
        mean rms final rise fall front virtual width undershoot overshoot tilt settling period duration closing \
        opening moving conducting blocking answers allowing within points step ramp sqrt";
    for word in words.split_whitespace() {
        assert!(explain(word).is_some(), "`{word}` has no page");
    }
}

#[test]
fn every_code_is_explained() {
    for (code, title, _) in CODES.iter().chain(pulsewright_circuit::fault::CODES) {
        let page = explain(code).unwrap();
        assert!(page.starts_with(&format!("{code}: {title}")));
    }
}

#[test]
fn a_page_ends_where_the_next_begins() {
    let (_, page) = topics()
        .iter()
        .find(|(phrase, _)| *phrase == "wire")
        .unwrap();
    assert!(
        page.starts_with("### `wire`") && page.ends_with("joins an end to a name."),
        "{page}"
    );
}

#[test]
fn examples_of_codes_are_read() {
    for (code, _, text) in CODES {
        let example: Vec<&str> = text
            .lines()
            .filter_map(|l| l.strip_prefix("    "))
            .collect();
        let example = example.join("\n");
        let mistakes = parse(example.as_bytes(), code).faults;
        assert!(mistakes.is_empty(), "{code}: {mistakes:?}");
    }
}
