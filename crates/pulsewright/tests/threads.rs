//! Every public result and input may be sent to and shared between threads.

use pulsewright::{
    Circuit, Draft, Error, Fired, Judged, LetValue, Methods, Mistakes, Modes, Netlist,
};

fn shared<T: Send + Sync>() {}

#[test]
fn results_and_inputs_are_send_and_sync() {
    shared::<Circuit>();
    shared::<Draft>();
    shared::<Error>();
    shared::<Fired>();
    shared::<Judged>();
    shared::<LetValue>();
    shared::<Methods>();
    shared::<Mistakes>();
    shared::<Modes>();
    shared::<Netlist>();
    shared::<pulsewright::StudyError>();
    shared::<pulsewright::Options<'static>>();
    shared::<pulsewright::circuit::Setup>();
    shared::<pulsewright::engine::Shot>();
    shared::<pulsewright::engine::Failure>();
    shared::<pulsewright::report::record::FireRecord>();
    shared::<pulsewright::report::record::JudgeRecord>();
    shared::<pulsewright::report::record::MethodsRecord>();
    shared::<pulsewright::report::record::MistakesRecord>();
    shared::<pulsewright::report::record::ModesRecord>();
}
