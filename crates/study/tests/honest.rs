//! Bounds are honest and tight: the promise that at most 1 in 1,000 true errors lies outside its
//! bound and that the bound is at most 20 times the true error in the median, over random series
//! circuits with closed forms (the same ones every time).
//!
//! Energies are exact by what is held: what leaves bank and choke between two instants is heat in
//! the loop's resistances, shared in proportion.

#![allow(clippy::unwrap_used, clippy::panic, reason = "helpers of tests")]

use pulsewright_study::{Found, Options, fire};

/// A loop of `c`, `l` and `r + w`, charged to `v`, closed at `t0`.
struct Loop {
    c: f64,
    l: f64,
    r: f64,
    w: f64,
    v: f64,
    t0: f64,
    span: f64,
}

impl Loop {
    fn damping(&self) -> (f64, f64) {
        let a = (self.r + self.w) / (2.0 * self.l);
        (a, 1.0 / (self.l * self.c) - a * a)
    }

    /// Current, A, and bank voltage, V, at `t`, s.
    fn at(&self, t: f64) -> (f64, f64) {
        let (x, (a, w2)) = ((t - self.t0).max(0.0), self.damping());
        let w = w2.abs().sqrt();
        if w2 > 0.0 {
            let e = (-a * x).exp();
            let i = self.v / (w * self.l) * e * (w * x).sin();
            (i, self.v * e * ((w * x).cos() + a / w * (w * x).sin()))
        } else {
            let (slow, fast) = (1.0 / (self.l * self.c) / (a + w), a + w);
            let (p, q) = ((-slow * x).exp(), (-fast * x).exp());
            let i = self.v / (2.0 * w * self.l) * (p - q);
            (i, self.v * (fast * p - slow * q) / (2.0 * w))
        }
    }

    fn crest(&self) -> f64 {
        let (a, w2) = self.damping();
        let w = w2.abs().sqrt();
        self.t0
            + if w2 > 0.0 {
                (w / a).atan() / w
            } else {
                (w / a).atanh() / w
            }
    }

    fn held(&self, t: f64) -> f64 {
        let (i, v) = self.at(t);
        0.5 * self.c * v * v + 0.5 * self.l * i * i
    }

    fn text(&self, ta: f64, tb: f64) -> String {
        let Loop {
            c,
            l,
            r,
            w,
            v,
            t0,
            span,
        } = self;
        format!(
            "capacitor bank from top to ground = {c:e} F, charged to {v:e} V\n\
             switch fire from top to mid : open, closes at {t0:e} s\n\
             inductor choke from mid to pad = {l:e} H, winding {w:e} ohm\n\
             resistor load from pad to ground = {r:e} ohm\n\
             span {span:e} s\n\
             reading dose  = energy into load\n\
             reading piece = energy into load between {ta:e} s and {tb:e} s\n\
             reading rest  = energy into load after time of highest current through load\n\
             reading crest = highest current through load\n\
             reading when_ = time of highest current through load\n\
             reading left  = final voltage across bank\n\
             reading moved = charge through load\n\
             reading front = rise of current through load from 10 % to 90 %\n\
             reading at_a  = voltage across bank at {ta:e} s\n\
             reading yield = energy into load / energy held by bank just before 0 s\n"
        )
    }

    fn truths(&self, ta: f64, tb: f64) -> Vec<(&'static str, f64, f64)> {
        let share = self.r / (self.r + self.w);
        let heat = |a: f64, b: f64| share * (self.held(a) - self.held(b));
        let (start, tc) = (self.held(self.t0), self.crest());
        let up = |k: f64| root(&|t| self.at(t).0 - k * self.at(tc).0, self.t0, tc);
        let end = self.at(self.span).1;
        vec![
            ("dose", heat(self.t0, self.span), start),
            ("piece", heat(ta, tb), start),
            ("rest", heat(tc, self.span), start),
            ("crest", self.at(tc).0, self.at(tc).0),
            ("when_", tc, tc),
            ("left", end, self.v),
            ("moved", self.c * (self.v - end), self.c * self.v),
            ("front", up(0.9) - up(0.1), tc),
            ("at_a", self.at(ta).1, self.v),
            ("yield", heat(self.t0, self.span) / start, 1.0),
        ]
    }
}

fn root(f: &dyn Fn(f64) -> f64, mut a: f64, mut b: f64) -> f64 {
    for _ in 0..100 {
        let m = 0.5 * (a + b);
        if f(m) > 0.0 { b = m } else { a = m }
    }
    0.5 * (a + b)
}

struct Random(u64);

impl Random {
    fn unit(&mut self) -> f64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        f64::from((self.0 >> 32) as u32) / f64::from(u32::MAX)
    }

    fn between(&mut self, a: f64, b: f64) -> f64 {
        a * (b / a).powf(self.unit())
    }

    fn circuit(&mut self) -> Loop {
        let (c, l) = (self.between(1e-6, 1e-4), self.between(1e-4, 1e-1));
        let all = (l / c).sqrt() * self.between(0.2, 15.0);
        let w = 0.2 * all * self.unit();
        let (v, t0) = (self.between(100.0, 5000.0), self.between(1e-6, 1e-4));
        let mut made = Loop {
            c,
            l,
            r: all - w,
            w,
            v,
            t0,
            span: 0.0,
        };
        made.span = t0 + (made.crest() - t0) * (3.0 + 5.0 * self.unit());
        made
    }
}

#[test]
fn bounds_are_honest_and_tight_over_random_circuits() {
    let mut random = Random(20_261_201);
    let (mut outside, mut ratios) = (Vec::new(), Vec::new());
    for case in 0..60 {
        let made = random.circuit();
        let ta = made.t0 + (made.span - made.t0) * 0.4 * random.unit();
        let tb = ta + (made.span - ta) * (0.2 + 0.7 * random.unit());
        let text = made.text(ta, tb);
        let netlist =
            pulsewright_netlist::read(text.as_bytes(), "test").unwrap_or_else(|m| panic!("{m}"));
        let fired =
            fire(&netlist.circuit, &Options::default()).unwrap_or_else(|e| panic!("{e}\n{text}"));
        for (name, exact, scale) in made.truths(ta, tb) {
            let answer = &fired
                .readings
                .iter()
                .find(|r| r.name == name)
                .unwrap()
                .answer
                .found;
            let Found::Value { value, bound } = answer else {
                panic!("{name}: {answer:?}\n{text}")
            };
            let error = (value - exact).abs();
            assert!(
                *bound <= 1.01e-6 * scale,
                "case {case}, {name}: a bound of {bound:e} on {exact}"
            );
            if error > bound + 1e-12 * scale {
                outside.push(format!(
                    "case {case}, {name}: off by {error:e}, bound {bound:e}"
                ));
            }
            ratios.push(bound / error.max(1e-16 * scale));
        }
    }
    ratios.sort_by(f64::total_cmp);
    let median = ratios[ratios.len() / 2];
    assert!(
        outside.len() * 1000 <= ratios.len().next_multiple_of(1000),
        "{outside:?}"
    );
    assert!(
        median <= 20.0,
        "the bound is {median} times the error in the median"
    );
}
