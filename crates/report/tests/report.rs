//! The page of every case: what must be on it, that it is whole and inert, and that a page is told
//! from a changed one.

#![allow(clippy::unwrap_used, reason = "a test that cannot go on panics")]

#[allow(dead_code, reason = "one sample for several files")]
mod sample;

use pulsewright_report::page::{Difference, Extras, Section, page, verify};
use pulsewright_report::record::JudgeRecord;

fn written() -> String {
    page(&sample::judged(), &sample::origin(), &Extras::default()).unwrap()
}

#[test]
fn sections_stand_in_the_order_of_the_house() {
    let page = written();
    let mut last = 0;
    for id in [
        "claims", "inputs", "method", "cases", "plots", "balance", "stress", "events", "hazards",
        "remarks", "netlist", "record",
    ] {
        let at = page.find(&format!("<section id=\"{id}\"")).unwrap();
        assert!(at > last, "{id}");
        last = at;
    }
}

#[test]
fn others_find_their_place_between_them() {
    let section = |heading: &str| {
        Some(Section {
            heading: heading.to_owned(),
            paragraphs: vec!["a & b".to_owned()],
            table: None,
        })
    };
    let extras = Extras {
        stamp: Some("filed as <42>".to_owned()),
        second_opinion: section("Second opinion"),
        worst_corners: section("Worst corners"),
        modes: section("Modes"),
        sensitivities: section("Sensitivities"),
    };
    let page = self::page(&sample::judged(), &sample::origin(), &extras).unwrap();
    let place = |text: &str| page.find(text).unwrap();
    assert!(place("id=\"method\"") < place("<section id=\"second-opinion\""));
    assert!(place("<section id=\"worst-corners\"") < place("<section id=\"plots\""));
    assert!(place("<section id=\"events\"") < place("<section id=\"modes\""));
    assert!(page.contains("filed as &lt;42&gt;") && page.contains("<p>a &amp; b</p>"));
}

#[test]
fn the_same_result_gives_the_same_bytes() {
    assert_eq!(written(), written());
}

#[test]
fn the_page_reaches_for_nothing_outside() {
    let page = written();
    assert!(page.contains("default-src 'none'"));
    for reach in ["http://", "https://", "src=", "@import", "url("] {
        let outside: Vec<&str> = page
            .match_indices(reach)
            .map(|(k, _)| &page[k..k + 40])
            .filter(|t| !t.starts_with("http://www.w3.org/2000/svg") && !t.starts_with("url(#"))
            .collect();
        assert!(outside.is_empty(), "{outside:?}");
    }
}

#[test]
fn every_picture_and_table_has_a_name() {
    let page = written();
    let count = |text: &str| page.matches(text).count();
    assert_eq!(count("<table"), count("<caption"));
    assert_eq!(count("<svg"), count("role=\"img\""));
    assert_eq!(count("<svg"), count("</title>\n<desc"));
    assert!(page.contains(">Plot of case 1: load = 25 Ω</title>"));
}

#[test]
fn text_from_a_netlist_stays_text() {
    let evil = "</script><script>alert(1)</script>";
    let mut judged = sample::judged();
    judged.cases[0].claims[0].name = evil.to_owned();
    judged.claims[0].name = evil.to_owned();
    judged.cases[0].parts[1] = evil.to_owned();
    judged.cases[0].balance.dissipated[0].0 = evil.to_owned();
    let origin = pulsewright_report::Origin {
        title: Some(evil),
        text: evil,
        ..sample::origin()
    };
    let page = self::page(&judged, &origin, &Extras::default()).unwrap();
    assert!(!page.contains("<script>alert"));
    assert_eq!(
        page.matches("<script").count(),
        page.matches("</script>").count()
    );
}

#[test]
fn the_record_inside_is_that_of_judge() {
    let page = written();
    let (_, rest) = page.split_once("id=\"record-json\">").unwrap();
    let json = rest.split_once("</script>").unwrap().0;
    let record: JudgeRecord = serde_json::from_str(json).unwrap();
    let judged = pulsewright_report::record::judge(&sample::judged(), &sample::origin());
    assert_eq!(record, judged);
}

#[test]
fn a_changed_page_is_told_from_the_written_one() {
    let page = written();
    assert!(verify(&page, &page).is_empty());
    let changed = page.replace("Report on a simulated pulse", "Report on a measured pulse");
    assert_eq!(verify(&changed, &page), [Difference::Page]);
    assert_eq!(verify("<html></html>", &page), [Difference::NoRecord]);
    let mut other = sample::judged();
    other.cases[0].claims[0].answer.found = pulsewright_study::outcome::Found::Value {
        value: 270.0,
        bound: 1e-5,
    };
    let other = self::page(&other, &sample::origin(), &Extras::default()).unwrap();
    let found = verify(&page, &other);
    assert!(
        matches!(&found[..], [Difference::Record(text)] if text.contains("case 1, claim dose")),
        "{found:?}"
    );
}
