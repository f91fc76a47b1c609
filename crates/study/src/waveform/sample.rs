//! Shots made by hand from closed forms, for tests.

use pulsewright_circuit::Probe;
use pulsewright_engine::{Jump, Shot, Stretch};

/// Values and slopes of several probes at an instant, s.
pub type Form<'f> = &'f dyn Fn(f64) -> Vec<(f64, f64)>;

/// A shot of one probe, `voltage across` part 0, over `span` s in `n` equal steps.
pub fn smooth(span: f64, n: u32, f: impl Fn(f64) -> (f64, f64)) -> Shot {
    pieces(
        &[Probe::VoltageAcross(0)],
        &[0.0, span],
        n,
        &[&|t| vec![f(t)]],
    )
}

/// A shot with a jump at each of the `edges` but the last, `n` steps in each stretch.
pub fn pieces(probes: &[Probe], edges: &[f64], n: u32, forms: &[Form<'_>]) -> Shot {
    let mut shot = Shot {
        probes: probes.to_vec(),
        steps: u64::from(n),
        ..Shot::default()
    };
    for (ends, form) in edges.windows(2).zip(forms) {
        shot.jumps.push(Jump {
            time: ends[0],
            impulses: vec![0.0; probes.len()],
            abrupt: true,
            ..Jump::default()
        });
        shot.stretches
            .push(stretch(probes.len(), ends[0], ends[1], n, *form));
    }
    shot.stated = forms[0](0.0).iter().map(|v| v.0).collect();
    shot
}

fn stretch(probes: usize, start: f64, end: f64, n: u32, form: Form<'_>) -> Stretch {
    let mut made = Stretch::default();
    made.values = vec![Vec::new(); probes];
    made.slopes = vec![Vec::new(); probes];
    made.floating = vec![false; probes];
    for k in 0..=n {
        let t = if k == n {
            end
        } else {
            start + (end - start) * f64::from(k) / f64::from(n)
        };
        made.times.push(t);
        for (p, (value, slope)) in form(t).into_iter().enumerate() {
            made.values[p].push(value);
            made.slopes[p].push(slope);
        }
    }
    made
}
