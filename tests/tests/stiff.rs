//! Nine decades between the fastest and the slowest time constant, in one shot at the default
//! allowed error.
//!
//! ```text
//!   big ─┬─[ head ]─┬─ small          C1 = 1 mF at 1 kV     head 1 kohm
//!        │          ├─[ load ]        C2 = 1.5 pF           load 2 kohm
//! ```
//!
//! Closed at 1 ms, `small` follows in 1 ns (1.5 pF times 1 kohm beside 2 kohm), then both decay in
//! 3 s (1 mF times 3 kohm). The two rates are those of
//! s² - s (1/(R1 C1) + 1/(R1 C2) + 1/(R2 C2)) + 1/(R1 R2 C1 C2) = 0.

use pulsewright_tests::{fire, reading};

const TEXT: &str = "capacitor big from top to ground = 1 mF, charged to 1 kV
    switch gate from top to x : open, closes at 1 ms
    resistor head from x to y = 1 kohm
    capacitor small from y to ground = 1.5 pF
    resistor load from y to ground = 2 kohm
    span 6.001 s
    reading dose = energy into load
    reading crest = highest voltage across load
    reading edge_t = rise of voltage across load from 10 % to 90 %
    reading level = voltage across load at 3.001 s
    reading rest_v = final voltage across load
    reading early = voltage across load at 1.000001 ms";

#[test]
fn nine_decades_are_right_and_cheap() {
    let (c1, c2, r1, r2, v0) = (1e-3_f64, 1.5e-12, 1e3, 2e3, 1e3);
    let sum = 1.0 / (r1 * c1) + 1.0 / (r1 * c2) + 1.0 / (r2 * c2);
    let product = 1.0 / (r1 * r2 * c1 * c2);
    let fast = 0.5 * (sum + (sum * sum - 4.0 * product).sqrt());
    let slow = product / fast;
    assert!(fast / slow > 1e9);
    // v = k (e^-slow t - e^-fast t), from v' (0) = v0 / (r1 c2)
    let k = v0 / (r1 * c2) / (fast - slow);
    let v = |t: f64| k * ((-slow * t).exp() - (-fast * t).exp());
    let t_crest = (fast / slow).ln() / (fast - slow);
    let dose = |t: f64| {
        let part = |s: f64| -(-s * t).exp_m1() / s;
        k * k / r2 * (part(2.0 * slow) - 2.0 * part(slow + fast) + part(2.0 * fast))
    };
    let crest = v(t_crest);
    let reach = |share: f64| {
        (0..60).fold(-(1.0 - share).ln() / fast, |t, _| {
            let rate = k * (fast * (-fast * t).exp() - slow * (-slow * t).exp());
            t - (v(t) - share * crest) / rate
        })
    };

    let fired = fire(TEXT);
    let wanted = [
        ("dose", dose(6.0), dose(6.0)),
        ("crest", crest, crest),
        ("edge_t", reach(0.9) - reach(0.1), 2.2 / fast),
        ("level", v(3.0), crest),
        ("rest_v", v(6.0), crest),
        ("early", v(1e-9), crest),
    ];
    for (name, value, scale) in wanted {
        let got = reading(&fired, name);
        let error = (got.value - value).abs();
        // An instant near 1 ms is a double with a spacing of 2e-19 s, 2e-10 of the rise: as much is
        // allowed for in what depends on it.
        let spacing = if matches!(name, "edge_t" | "early") {
            1e-9
        } else {
            1e-12
        };
        assert!(
            error <= got.bound + spacing * scale,
            "{name}: {got:?}, exact {value}, off by {error:.2e}"
        );
        assert!(
            got.bound <= 1.1e-6 * scale,
            "{name}: {got:?} is looser than 1 ppm of {scale}"
        );
    }
    println!(
        "{} accepted steps, from {:.2e} s to {:.2e} s",
        fired.shot.steps, fired.shot.smallest_step, fired.shot.largest_step
    );
    assert!(
        fired.shot.steps < 10_000,
        "{} accepted steps",
        fired.shot.steps
    );
}
