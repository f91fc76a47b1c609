//! Every example runs.

#[path = "../examples/design.rs"]
mod design;
#[path = "../examples/exporter.rs"]
mod exporter;
#[path = "../examples/firmware.rs"]
mod firmware;
#[path = "../examples/from_code.rs"]
mod from_code;
#[path = "../examples/from_text.rs"]
mod from_text;
#[path = "../examples/over_a_let_value.rs"]
mod over_a_let_value;
#[path = "../examples/progress.rs"]
mod progress;

#[test]
fn a_circuit_is_built_in_code() {
    from_code::main().unwrap();
}

#[test]
fn a_netlist_is_read_from_text() {
    from_text::main().unwrap();
}

#[test]
fn a_let_value_is_varied() {
    over_a_let_value::main().unwrap();
}

#[test]
fn a_planted_timing_fault_is_found() {
    firmware::main().unwrap();
}

#[test]
fn a_choke_and_a_bank_are_picked() {
    design::main().unwrap();
}

#[test]
fn channels_are_exported_in_another_form() {
    exporter::main().unwrap();
}

#[test]
fn a_run_is_followed_and_stopped() {
    progress::main().unwrap();
}
