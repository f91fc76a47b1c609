//! The records, whole, from one small result; that they read back, and fit their schemas.

mod sample;
mod schema;

use pulsewright_report::record::{
    self, Bytes, FireRecord, JudgeRecord, MethodsRecord, MistakeRecord, MistakesRecord,
    ModesRecord, SliceError, SpreadRecord, fire, joined, judge, methods, modes, read_slice, slice,
    slice_text, spread,
};

fn mistakes() -> MistakesRecord {
    let mistake = MistakeRecord {
        code: "P0107".to_owned(),
        file: "stage.shot".to_owned(),
        line: Some(3),
        column: Some(37),
        span: Some(Bytes { start: 76, end: 78 }),
        message: "`chest` needs a resistance, and 50 has no unit".to_owned(),
        label: None,
        replacement: Some("50 ohm".to_owned()),
    };
    MistakesRecord::new(vec![mistake], Vec::new())
}

#[test]
fn the_record_of_a_shot() {
    insta::assert_snapshot!(record::text(&fire(&sample::fired(), &sample::origin())));
}

#[test]
fn the_record_of_all_cases() {
    insta::assert_snapshot!(record::text(&judge(&sample::judged(), &sample::origin())));
}

#[test]
fn the_record_of_a_study() {
    insta::assert_snapshot!(record::text(&spread(&sample::spread(), &sample::origin())));
}

#[test]
fn slices_that_were_written_and_read_join_to_the_record_of_the_whole() {
    let read = |at| {
        let text = slice_text(&slice(&sample::tally([at, 2]), &sample::origin()));
        schema::check("pulsewright.slice-1.json", &text);
        read_slice(text.as_bytes()).unwrap()
    };
    let (study, input) = joined(vec![read(2), read(1)]).unwrap();
    assert_eq!(
        record::text(&spread(&study, &input.origin())),
        record::text(&spread(&sample::spread(), &sample::origin()))
    );
    let mut other = read(2);
    other.input.sha256 = None;
    assert_eq!(
        joined(vec![read(1), other]).unwrap_err(),
        SliceError::OfAnother(1)
    );
}

#[test]
fn what_is_no_slice_is_refused() {
    let whole = record::text(&spread(&sample::spread(), &sample::origin()));
    for text in [whole.as_bytes(), b"{}", b"\xff", b""] {
        assert!(matches!(read_slice(text), Err(SliceError::NotASlice(_))));
    }
}

#[test]
fn the_record_of_all_cases_at_their_worst_corners() {
    let text = record::text(&judge(&sample::judged_at_corners(), &sample::origin()));
    schema::check("pulsewright.judge-1.json", &text);
    let back: JudgeRecord = serde_json::from_str(&text).unwrap();
    assert_eq!(record::text(&back), text);
    let value: serde_json::Value = serde_json::from_str(&text).unwrap();
    insta::assert_json_snapshot!((&value["cases"][0]["worst"], &value["claims"][0]));
}

#[test]
fn what_was_adjusted_stands_in_the_records() {
    let judged = sample::adjusted();
    let stands = r#""adjusted": {"bank_v": {"value": 3500.0, "unit": "V", "bound": 0.000012}}"#;
    let blanks = |text: &str| text.split_whitespace().collect::<String>();
    let text = record::text(&judge(&judged, &sample::origin()));
    assert!(blanks(&text).contains(&blanks(stands)), "{text}");
    schema::check("pulsewright.judge-1.json", &text);
    let read: JudgeRecord = serde_json::from_str(&text).unwrap();
    assert_eq!(record::text(&read), text);
    let text = record::text(&fire(&judged.cases[0], &sample::origin()));
    assert!(blanks(&text).contains(&blanks(stands)), "{text}");
    schema::check("pulsewright.fire-1.json", &text);
}

#[test]
fn the_record_of_mistakes() {
    insta::assert_snapshot!(record::text(&mistakes()));
}

#[test]
fn the_record_of_modes() {
    insta::assert_snapshot!(record::text(&modes(&sample::modes(), &sample::origin())));
}

#[test]
fn the_record_of_methods() {
    insta::assert_snapshot!(record::text(&methods(
        &sample::methods(),
        &sample::origin()
    )));
}

/// Times differ from run to run, and a record must not.
#[test]
fn the_record_of_methods_holds_no_times() {
    let timed = methods(&sample::methods(), &sample::origin());
    let mut untimed = sample::methods();
    for run in untimed.work.iter_mut().flat_map(|w| &mut w.runs) {
        run.seconds = None;
    }
    assert_eq!(methods(&untimed, &sample::origin()), timed);
}

#[test]
fn records_read_back_to_the_same() {
    let shot = fire(&sample::fired(), &sample::origin());
    assert_eq!(
        serde_json::from_str::<FireRecord>(&record::text(&shot)).unwrap(),
        shot
    );
    let cases = judge(&sample::judged(), &sample::origin());
    assert_eq!(
        serde_json::from_str::<JudgeRecord>(&record::text(&cases)).unwrap(),
        cases
    );
    let study = spread(&sample::spread(), &sample::origin());
    assert_eq!(
        serde_json::from_str::<SpreadRecord>(&record::text(&study)).unwrap(),
        study
    );
    assert_eq!(
        serde_json::from_str::<MistakesRecord>(&record::text(&mistakes())).unwrap(),
        mistakes()
    );
    let found = modes(&sample::modes(), &sample::origin());
    assert_eq!(
        serde_json::from_str::<ModesRecord>(&record::text(&found)).unwrap(),
        found
    );
    let found = methods(&sample::methods(), &sample::origin());
    assert_eq!(
        serde_json::from_str::<MethodsRecord>(&record::text(&found)).unwrap(),
        found
    );
}

#[test]
fn records_fit_their_schemas() {
    schema::check(
        "pulsewright.fire-1.json",
        &record::text(&fire(&sample::fired(), &sample::origin())),
    );
    schema::check(
        "pulsewright.judge-1.json",
        &record::text(&judge(&sample::judged(), &sample::origin())),
    );
    schema::check(
        "pulsewright.spread-1.json",
        &record::text(&spread(&sample::spread(), &sample::origin())),
    );
    schema::check("pulsewright.mistakes-1.json", &record::text(&mistakes()));
    schema::check(
        "pulsewright.modes-1.json",
        &record::text(&modes(&sample::modes(), &sample::origin())),
    );
    schema::check(
        "pulsewright.methods-1.json",
        &record::text(&methods(&sample::methods(), &sample::origin())),
    );
}

#[test]
fn a_schema_rules_something_out() {
    let text = record::text(&mistakes()).replace("\"line\": 3", "\"line\": \"three\"");
    assert!(
        schema::faults("pulsewright.mistakes-1.json", &text)
            .iter()
            .any(|f| f.contains("line"))
    );
}

#[test]
fn what_is_not_finite_is_null_with_a_reason() {
    let mut fired = sample::fired();
    fired.readings[0].answer.found = pulsewright_study::Found::Value {
        value: f64::NAN,
        bound: 0.0,
    };
    fired.balance.residual = f64::INFINITY;
    let text = record::text(&fire(&fired, &sample::origin()));
    let back: FireRecord = serde_json::from_str(&text).unwrap();
    assert_eq!(back.readings[0].answer.value, None);
    assert!(back.readings[0].answer.unbounded.is_some());
    assert_eq!(back.balance.residual, None);
}
