//! Every mistake and remark, provoked: one fact a test.

mod adjust;
mod cases;
mod claims;
mod names;
mod phrases;
mod places;
mod scale;
mod schedules;
mod values;

use crate::builder::*;
use crate::circuit::Circuit;
use crate::fault::Fault;

/// A circuit with one part of each kind and nothing wrong or worth a remark.
fn stage() -> Builder {
    Builder::new("a stage")
        .let_value("load", ohms(50.0))
        .let_value("bank_v", volts(1e3))
        .capacitor("bank", "top", "ground", farads(32e-6))
        .charged_to(name("bank_v"))
        .switch_open("fire", "top", "mid")
        .closes(at(seconds(1e-6)))
        .inductor("choke", "mid", "pad", henrys(25e-3))
        .inductor("far", "s", "ground", henrys(1e-3))
        .coupling("core", "choke", "far", 0.5)
        .resistor("chest", "pad", "ground", name("load"))
        .diode("steer", "pad", "s")
        .changeover("relay", "mid", "pad", "s")
        .moves_to("s", at(seconds(1e-3)))
        .span(seconds(30e-3))
}

fn sound(builder: Builder) -> Circuit {
    builder.build().unwrap()
}

fn faults(builder: Builder) -> Vec<Fault> {
    builder.build().unwrap_err()
}

/// The one fault: its code and message.
fn check(builder: Builder, code: &str, message: &str) {
    let faults = faults(builder);
    let all: Vec<String> = faults.iter().map(ToString::to_string).collect();
    assert_eq!(all, [format!("{code}: {message}")]);
}

/// The one remark.
fn check_remark(builder: Builder, code: &str, message: &str) {
    let circuit = sound(builder);
    let all: Vec<String> = circuit.remarks().iter().map(ToString::to_string).collect();
    assert_eq!(all, [format!("{code}: {message}")]);
}

#[test]
fn a_sound_stage_has_neither_faults_nor_remarks() {
    assert_eq!(sound(stage()).remarks(), []);
}

#[test]
fn a_circuit_can_cross_threads() {
    fn crosses<T: Send + Sync>(_: &T) {}
    crosses(&sound(stage()));
}

#[test]
fn every_code_stands_once_in_the_table() {
    let mut codes: Vec<&str> = crate::CODES.iter().map(|(code, ..)| *code).collect();
    let n = codes.len();
    codes.sort_unstable();
    codes.dedup();
    assert_eq!(codes.len(), n);
    assert!(
        crate::CODES
            .iter()
            .all(|(_, title, text)| !title.is_empty() && text.contains('`'))
    );
}
