//! How long does a turn at the desk take: one damped-sine stage fired, and seven cases judged, at
//! the default allowed error of 1 ppm?
//!
//! Five parts, three claims, trapezoidal rule, steps chosen by the tool; each answer comes with a
//! bound of at most a millionth of its scale, so the time is one at a known precision.

use criterion::{Criterion, criterion_group, criterion_main};
use pulsewright_benches::STAGE;
use pulsewright_study::{Options, fire, judge};

fn stage(c: &mut Criterion) {
    let netlist =
        pulsewright_netlist::read(STAGE.as_bytes(), "stage").unwrap_or_else(|m| panic!("{m}"));
    let options = Options::default();
    c.bench_function("a damped-sine stage, fired", |b| {
        b.iter(|| fire(&netlist.circuit, &options))
    });
    c.bench_function("a damped-sine stage, seven cases judged", |b| {
        b.iter(|| judge(&netlist.circuit, &options))
    });
}

criterion_group!(benches, stage);
criterion_main!(benches);
