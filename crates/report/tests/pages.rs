//! The pages for people, whole, from one small result; and that they fit their width.

mod sample;

use pulsewright_report::{Look, table};

fn look(width: usize) -> Look {
    Look {
        width,
        colour: false,
    }
}

#[test]
fn the_page_of_a_shot() {
    insta::assert_snapshot!(table::fire(&sample::fired(), &sample::origin(), look(80)));
}

#[test]
fn the_page_of_all_cases() {
    insta::assert_snapshot!(table::judge(&sample::judged(), &sample::origin(), look(80)));
}

#[test]
fn the_page_of_all_cases_at_their_worst_corners() {
    let judged = sample::judged_at_corners();
    insta::assert_snapshot!(table::judge(&judged, &sample::origin(), look(80)));
}

#[test]
fn the_page_of_a_study() {
    insta::assert_snapshot!(table::spread(
        &sample::spread(),
        &sample::origin(),
        look(80)
    ));
}

#[test]
fn what_was_adjusted_is_a_line_and_a_column() {
    let judged = sample::adjusted();
    let fired = &judged.cases[0];
    let page = table::judge(&judged, &sample::origin(), look(80));
    assert!(
        page.contains("adjusted: bank_v = 3.500000000 kV ± 12 µV with load = 25 Ω\n"),
        "{page}"
    );
    let page = table::fire(fired, &sample::origin(), look(80));
    assert!(
        page.contains("adjusted: bank_v = 3.500000000 kV ± 12 µV\n"),
        "{page}"
    );
    let mut out = Vec::new();
    pulsewright_report::cases::cases(&judged.cases, &mut out).unwrap();
    let text = String::from_utf8(out).unwrap();
    assert!(text.starts_with("load (ohm),bank_v (V),"), "{text}");
    assert!(text.contains("\n25.0,3500.0,"), "{text}");
}

#[test]
fn cases_by_readings() {
    let mut out = Vec::new();
    pulsewright_report::cases::cases(&sample::judged().cases, &mut out).unwrap();
    insta::assert_snapshot!(String::from_utf8(out).unwrap());
}

#[test]
fn the_page_of_modes() {
    insta::assert_snapshot!(table::modes(&sample::modes(), &sample::origin(), look(80)));
}

#[test]
fn the_page_of_methods() {
    insta::assert_snapshot!(table::methods(
        &sample::methods(),
        &sample::origin(),
        look(80)
    ));
}

#[test]
fn without_readings_there_is_nothing_to_compare() {
    let mut methods = sample::methods();
    methods.readings.clear();
    let page = table::methods(&methods, &sample::origin(), look(80));
    assert!(page.contains("nothing to compare"), "{page}");
}

#[test]
fn pages_fit_their_width() {
    for width in [48, 60, 80, 120] {
        let pages = [
            table::fire(&sample::fired(), &sample::origin(), look(width)),
            table::judge(&sample::judged(), &sample::origin(), look(width)),
            table::modes(&sample::modes(), &sample::origin(), look(width)),
            table::methods(&sample::methods(), &sample::origin(), look(width)),
            table::judge(&sample::judged_at_corners(), &sample::origin(), look(width)),
            table::spread(&sample::spread(), &sample::origin(), look(width)),
        ];
        for line in pages.iter().flat_map(|p| p.lines()) {
            assert!(line.chars().count() <= width, "{width}: {line}");
        }
    }
}

#[test]
fn colour_adds_nothing_but_colour() {
    let plain = table::judge(&sample::judged(), &sample::origin(), look(80));
    let coloured = table::judge(
        &sample::judged(),
        &sample::origin(),
        Look {
            width: 80,
            colour: true,
        },
    );
    assert_ne!(plain, coloured);
    assert_eq!(without_escapes(&coloured), plain);
}

fn without_escapes(text: &str) -> String {
    let mut out = String::new();
    let mut inside = false;
    for c in text.chars() {
        match (inside, c) {
            (false, '\u{1b}') => inside = true,
            (true, 'm') => inside = false,
            (false, c) => out.push(c),
            (true, _) => {}
        }
    }
    out
}
