//! Every example runs.

#[path = "../examples/from_code.rs"]
mod from_code;
#[path = "../examples/from_text.rs"]
mod from_text;
#[path = "../examples/over_a_let_value.rs"]
mod over_a_let_value;

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
