//! How long does it take to read a file of 100,000 parts, and to print it in canonical layout?
//!
//! Every part on a line of its own, 5 MB of text: the time of the reader and of the circuit's
//! checks, without firing.

use criterion::{Criterion, Throughput, criterion_group, criterion_main};
use pulsewright_benches::long_file;

fn reading(c: &mut Criterion) {
    let text = long_file(100_000);
    let mut group = c.benchmark_group("100,000 parts");
    group.sample_size(10);
    group.throughput(Throughput::Bytes(text.len() as u64));
    group.bench_function("read", |b| {
        b.iter(|| pulsewright_netlist::read(text.as_bytes(), "long"))
    });
    group.bench_function("neaten", |b| {
        b.iter(|| pulsewright_netlist::neaten(text.as_bytes(), "long"))
    });
    group.finish();
}

criterion_group!(benches, reading);
criterion_main!(benches);
