//! What does one step cost, and how does it grow with the circuit?
//!
//! A ladder of 1, 7, 75, 750 and 7,500 sections (about four unknowns a section: a node, the
//! winding's inner node, and the currents of coil and capacitor) is followed for 100 us by the
//! trapezoidal rule in fixed steps of 100 ns: 1,000 steps and one event, one factorisation a
//! topology. The time stated is for the whole shot; by throughput, for a step. Accuracy is no part
//! of the question: the same step is taken at every size.

use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};
use pulsewright_benches::{ladder, setup};
use pulsewright_circuit::Probe;
use pulsewright_engine::{Mesh, Request, fire};

fn steps(c: &mut Criterion) {
    let mut group = c.benchmark_group("a step of a ladder");
    group.sample_size(10);
    for sections in [1, 7, 75, 750, 7_500] {
        let setup = setup(&ladder(sections));
        let request = || Request::new(vec![Probe::VoltageAcross(0)], Mesh::Fixed(100e-9));
        let shot = fire(&setup, &request()).unwrap_or_else(|why| panic!("{why}"));
        group.throughput(Throughput::Elements(shot.steps));
        group.bench_function(BenchmarkId::new("unknowns", shot.unknowns), |b| {
            b.iter(|| fire(&setup, &request()))
        });
    }
    group.finish();
}

criterion_group!(benches, steps);
criterion_main!(benches);
