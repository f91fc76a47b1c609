//! Closed forms of two-state circuits: a capacitor `c` (F), an inductor `l` (H) and a resistance
//! `r` (ohm), in series or in parallel, from any state.
//!
//! ```text
//!   a = r/2l (series), 1/2rc (parallel)     w0² = 1/lc
//!   S(t) = e^(-at) sin(wd t)/wd             C(t) = e^(-at) cos(wd t)       a < w0
//!   S(t) = t e^(-at)                        C(t) = e^(-at)                 a = w0
//!   S(t) = (e^(-pt) - e^(-qt))/(q - p)      C(t) = (e^(-pt) + e^(-qt))/2   a > w0,  p q = w0²
//!
//!   series    i = i0 (C - a S) + (v0/l) S   v = v0 (C + a S) - (i0/c) S
//!   parallel  v = v0 (C - a S) - (i0/c) S   i = i0 (C + a S) + (v0/l) S
//! ```
//!
//! `v` is the capacitor's voltage, `i` the inductor's current; they are written so that nothing
//! cancels, and are good to some 1e-15 of their largest values.

/// Which way the three are joined.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Joined {
    /// One after the other, the capacitor driving.
    Series,
    /// Side by side.
    Parallel,
}

/// A circuit of one capacitor, one inductor and one resistance.
#[derive(Clone, Copy, Debug)]
pub struct Rlc {
    /// Series or parallel.
    pub joined: Joined,
    /// Capacitance, F.
    pub c: f64,
    /// Inductance, H.
    pub l: f64,
    /// Resistance, ohm.
    pub r: f64,
}

/// A state: the capacitor's voltage, V, and the inductor's current, A.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    /// V
    pub v: f64,
    /// A
    pub i: f64,
}

impl Rlc {
    /// The damping a, 1/s.
    #[must_use]
    pub fn damping(&self) -> f64 {
        match self.joined {
            Joined::Series => self.r / (2.0 * self.l),
            Joined::Parallel => 1.0 / (2.0 * self.r * self.c),
        }
    }

    /// S(t) in s and C(t).
    fn modes(&self, t: f64) -> (f64, f64) {
        let (a, w2) = (self.damping(), 1.0 / (self.l * self.c));
        let d = w2 - a * a;
        if d.abs() <= 1e-12 * w2 {
            return (t * (-a * t).exp(), (-a * t).exp());
        }
        if d > 0.0 {
            let w = d.sqrt();
            return (
                (-a * t).exp() * (w * t).sin() / w,
                (-a * t).exp() * (w * t).cos(),
            );
        }
        let q = a + (-d).sqrt();
        let p = w2 / q;
        // e^(-pt) - e^(-qt) without cancellation for small t
        let difference = (-p * t).exp() * -(-(q - p) * t).exp_m1();
        (
            difference / (q - p),
            0.5 * ((-p * t).exp() + (-q * t).exp()),
        )
    }

    /// The state a time `t` (s) after `from`.
    #[must_use]
    pub fn after(&self, from: State, t: f64) -> State {
        let (s, c) = self.modes(t);
        let a = self.damping();
        let (plus, minus) = (c + a * s, c - a * s);
        match self.joined {
            Joined::Series => State {
                v: from.v * plus - from.i / self.c * s,
                i: from.i * minus + from.v / self.l * s,
            },
            Joined::Parallel => State {
                v: from.v * minus - from.i / self.c * s,
                i: from.i * plus + from.v / self.l * s,
            },
        }
    }

    /// What both store, J.
    #[must_use]
    pub fn stored(&self, x: State) -> f64 {
        0.5 * self.c * x.v * x.v + 0.5 * self.l * x.i * x.i
    }

    /// The time and the value of the first crest of the current, from a charged capacitor and no
    /// current: s and A.
    #[must_use]
    pub fn crest(&self, v0: f64) -> (f64, f64) {
        let (w0, z0) = ((self.l * self.c).sqrt().recip(), (self.l / self.c).sqrt());
        let zeta = self.damping() / w0;
        let ratio = if (zeta - 1.0).abs() < 1e-9 {
            1.0 + (1.0 - zeta) / 3.0
        } else if zeta < 1.0 {
            zeta.acos() / (1.0 - zeta * zeta).sqrt()
        } else {
            zeta.acosh() / (zeta * zeta - 1.0).sqrt()
        };
        (ratio / w0, v0 / z0 * (-zeta * ratio).exp())
    }
}
