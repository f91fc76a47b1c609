//! Linear equations x' = A x in 128 bits: the reference that the program's readings are held to.
//!
//! Written for the tests alone: it shares no line with the program, neither the equations nor
//! the arithmetic. A constant source is a state that stays 1.
//!
//! ```text
//!   Φ(h) = Σ (A h)^k / k!                       h = t / 2^s so that |A h| <= 1/2
//!   W(h) = Σ M_k h^(k+1) / (k+1)!               M_0 = Q,  M_(k+1) = Aᵀ M_k + M_k A
//!   Φ(2h) = Φ²      W(2h) = W + Φᵀ W Φ          then  ∫ xᵀ Q x dt = x0ᵀ W(t) x0
//!   V(h) = Σ A^k h^(k+1) / (k+1)!               V(2h) = V + Φ V,  ∫ x dt = V(t) x0
//! ```
//!
//! 128 bits leave 25 digits after the squarings of any circuit drawn here, so that the reference
//! is exact for the purpose.

use dashu_float::FBig;
use dashu_float::round::mode::HalfEven;

/// A number of 128 bits.
pub type Big = FBig<HalfEven, 2>;

const BITS: usize = 128;
const TERMS: u32 = 40;

/// A double as a number of 128 bits; 0 for what is no finite number.
#[must_use]
pub fn big(x: f64) -> Big {
    Big::try_from(x)
        .unwrap_or(Big::ZERO)
        .with_precision(BITS)
        .value()
}

/// The nearest double.
#[must_use]
pub fn double(x: &Big) -> f64 {
    x.to_f64().value()
}

/// A square matrix.
#[derive(Clone, Debug)]
pub struct Matrix {
    n: usize,
    entries: Vec<Big>,
}

impl Matrix {
    /// All zeros, `n` by `n`.
    #[must_use]
    pub fn zeros(n: usize) -> Self {
        Matrix {
            n,
            entries: vec![big(0.0); n * n],
        }
    }

    /// Ones on the diagonal.
    #[must_use]
    pub fn identity(n: usize) -> Self {
        let mut m = Matrix::zeros(n);
        for k in 0..n {
            m.set(k, k, big(1.0));
        }
        m
    }

    /// c cᵀ.
    #[must_use]
    pub fn square_of(c: &[Big]) -> Self {
        let mut m = Matrix::zeros(c.len());
        for (i, a) in c.iter().enumerate() {
            for (j, b) in c.iter().enumerate() {
                m.set(i, j, a * b);
            }
        }
        m
    }

    /// How many rows.
    #[must_use]
    pub fn size(&self) -> usize {
        self.n
    }

    /// An entry.
    #[must_use]
    pub fn at(&self, i: usize, j: usize) -> &Big {
        &self.entries[i * self.n + j]
    }

    /// Sets an entry.
    pub fn set(&mut self, i: usize, j: usize, x: Big) {
        self.entries[i * self.n + j] = x;
    }

    /// Adds to an entry.
    pub fn add(&mut self, i: usize, j: usize, x: &Big) {
        self.entries[i * self.n + j] += x;
    }

    fn plus(&self, b: &Matrix) -> Matrix {
        Matrix {
            n: self.n,
            entries: self
                .entries
                .iter()
                .zip(&b.entries)
                .map(|(x, y)| x + y)
                .collect(),
        }
    }

    fn scaled(&self, f: &Big) -> Matrix {
        Matrix {
            n: self.n,
            entries: self.entries.iter().map(|x| x * f).collect(),
        }
    }

    /// The product.
    #[must_use]
    pub fn times(&self, b: &Matrix) -> Matrix {
        let mut m = Matrix::zeros(self.n);
        for i in 0..self.n {
            for k in 0..self.n {
                let x = self.at(i, k);
                if *x != Big::ZERO {
                    for j in 0..self.n {
                        m.add(i, j, &(x * b.at(k, j)));
                    }
                }
            }
        }
        m
    }

    fn transposed(&self) -> Matrix {
        let mut m = Matrix::zeros(self.n);
        for i in 0..self.n {
            for j in 0..self.n {
                m.set(j, i, self.at(i, j).clone());
            }
        }
        m
    }

    /// The product with a column.
    #[must_use]
    pub fn apply(&self, x: &[Big]) -> Vec<Big> {
        (0..self.n)
            .map(|i| dot(&self.entries[i * self.n..(i + 1) * self.n], x))
            .collect()
    }

    /// xᵀ M x.
    #[must_use]
    pub fn form(&self, x: &[Big]) -> Big {
        dot(&self.apply(x), x)
    }

    /// The largest sum of absolute values of a row.
    #[must_use]
    pub fn norm(&self) -> f64 {
        let row = |i: usize| {
            (0..self.n)
                .map(|j| double(self.at(i, j)).abs())
                .sum::<f64>()
        };
        (0..self.n).map(row).fold(0.0, f64::max)
    }
}

/// The product of a row and a column.
#[must_use]
pub fn dot(a: &[Big], b: &[Big]) -> Big {
    a.iter().zip(b).fold(big(0.0), |sum, (x, y)| sum + x * y)
}

/// What a stretch of time does to a state.
#[derive(Clone, Debug)]
pub struct Passage {
    /// Φ(t): the state after it.
    pub phi: Matrix,
    /// V(t): the integral of the state.
    pub area: Matrix,
    /// W(t) of each form asked for.
    pub squares: Vec<Matrix>,
}

/// How often `a` times `t` must be halved until its norm is at most a half.
fn halvings(a: &Matrix, t: &Big) -> i32 {
    let mut s = 0;
    let mut size = a.norm() * double(t);
    while size > 0.5 {
        size *= 0.5;
        s += 1;
    }
    s
}

/// The passage over `t` seconds of x' = A x with the integrals of the forms in `squares`.
#[must_use]
pub fn passage(a: &Matrix, t: &Big, squares: &[Matrix]) -> Passage {
    let s = halvings(a, t);
    let mut now = short(a, &(t / big(2.0_f64.powi(s))), squares);
    for _ in 0..s {
        now = doubled(&now);
    }
    now
}

/// The passage over a short `h` by Taylor's series.
fn short(a: &Matrix, h: &Big, squares: &[Matrix]) -> Passage {
    let n = a.size();
    let (ah, at) = (a.scaled(h), a.transposed());
    let mut power = Matrix::identity(n);
    let mut phi = power.clone();
    let mut area = power.scaled(h);
    for k in 1..=TERMS {
        power = power.times(&ah).scaled(&(big(1.0) / big(f64::from(k))));
        phi = phi.plus(&power);
        area = area.plus(&power.scaled(&(h / big(f64::from(k + 1)))));
    }
    let gramian = |q: &Matrix| {
        let mut term = q.scaled(h);
        let mut w = term.clone();
        for k in 1..=TERMS {
            term = at
                .times(&term)
                .plus(&term.times(a))
                .scaled(&(h / big(f64::from(k + 1))));
            w = w.plus(&term);
        }
        w
    };
    Passage {
        phi,
        area,
        squares: squares.iter().map(gramian).collect(),
    }
}

fn doubled(p: &Passage) -> Passage {
    let phi_t = p.phi.transposed();
    let square = |w: &Matrix| w.plus(&phi_t.times(w).times(&p.phi));
    Passage {
        phi: p.phi.times(&p.phi),
        area: p.area.plus(&p.area.times(&p.phi)),
        squares: p.squares.iter().map(square).collect(),
    }
}

/// The largest value of c x over `t` seconds of x' = A x from `x0`, ends included.
///
/// The time is cut so that |A h| <= 1/2 on each piece; there c x is a Taylor polynomial whose
/// crest is found by halving, which lets no oscillation hide. The pieces are walked in doubles:
/// good to some 1e-13 of the largest state.
#[must_use]
pub fn highest(a: &Matrix, t: &Big, x0: &[Big], c: &[Big]) -> f64 {
    let s = halvings(a, t);
    let h = t / big(2.0_f64.powi(s));
    let step = rows(&short(a, &h, &[]).phi);
    let (a, c) = (rows(a), c.iter().map(double).collect::<Vec<f64>>());
    let mut x: Vec<f64> = x0.iter().map(double).collect();
    let mut best = dot64(&c, &x);
    for _ in 0..1_u64 << s {
        best = best.max(crest_within(&taylor(&a, &x, &c), double(&h)));
        x = step.iter().map(|row| dot64(row, &x)).collect();
        best = best.max(dot64(&c, &x));
    }
    best
}

/// The first time in `t` seconds of x' = A x from `x0` at which c x falls through `level`: s after
/// the start, by the same pieces, each looked at in eight places.
#[must_use]
pub fn first_fall(a: &Matrix, t: &Big, x0: &[Big], c: &[Big], level: f64) -> Option<f64> {
    const LOOKS: u32 = 8;
    let s = halvings(a, t);
    let h = t / big(2.0_f64.powi(s));
    let width = double(&h);
    let step = rows(&short(a, &h, &[]).phi);
    let (a, c) = (rows(a), c.iter().map(double).collect::<Vec<f64>>());
    let mut x: Vec<f64> = x0.iter().map(double).collect();
    for piece in 0..1_u64 << s {
        let series = taylor(&a, &x, &c);
        let above = |t: f64| polynomial(&series, t) > level;
        let look = |k: u32| width * f64::from(k) / f64::from(LOOKS);
        if let Some(k) = (0..LOOKS).find(|k| above(look(*k)) && !above(look(*k + 1))) {
            let (mut low, mut high) = (look(k), look(k + 1));
            for _ in 0..60 {
                let middle = 0.5 * (low + high);
                if above(middle) {
                    low = middle
                } else {
                    high = middle
                }
            }
            #[allow(clippy::cast_precision_loss, reason = "at most some 2^30 pieces")]
            return Some(piece as f64 * width + low);
        }
        x = step.iter().map(|row| dot64(row, &x)).collect();
    }
    None
}

fn polynomial(series: &[f64], t: f64) -> f64 {
    series.iter().rev().fold(0.0, |sum, c| sum * t + c)
}

fn rows(m: &Matrix) -> Vec<Vec<f64>> {
    m.entries
        .chunks(m.n)
        .map(|row| row.iter().map(double).collect())
        .collect()
}

fn dot64(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

/// Coefficients of c x(τ) about a state.
fn taylor(a: &[Vec<f64>], x: &[f64], c: &[f64]) -> Vec<f64> {
    let mut term = x.to_vec();
    let mut series = vec![dot64(c, &term)];
    for k in 1..=16_u32 {
        term = a
            .iter()
            .map(|row| dot64(row, &term) / f64::from(k))
            .collect();
        series.push(dot64(c, &term));
    }
    series
}

fn crest_within(series: &[f64], width: f64) -> f64 {
    let slope = |t: f64| {
        let mut sum = 0.0;
        for (k, c) in (1..series.len()).zip(series.iter().skip(1)).rev() {
            #[allow(clippy::cast_precision_loss, reason = "at most 16")]
            let k = k as f64;
            sum = sum * t + k * c;
        }
        sum
    };
    let (mut low, mut high) = (0.0, width);
    if slope(low) <= 0.0 || slope(high) >= 0.0 {
        return f64::NEG_INFINITY;
    }
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if slope(middle) > 0.0 {
            low = middle
        } else {
            high = middle
        }
    }
    polynomial(series, low)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A decay of rate 3 /s: the state, its integral and the integral of its square.
    #[test]
    fn a_decay_is_known() {
        let mut a = Matrix::zeros(1);
        a.set(0, 0, big(-3.0));
        let p = passage(&a, &big(2.0), &[Matrix::identity(1)]);
        assert!((double(p.phi.at(0, 0)) - (-6.0_f64).exp()).abs() < 1e-17);
        assert!((double(p.area.at(0, 0)) - (1.0 - (-6.0_f64).exp()) / 3.0).abs() < 1e-16);
        assert!((double(p.squares[0].at(0, 0)) - (1.0 - (-12.0_f64).exp()) / 6.0).abs() < 1e-16);
    }

    #[test]
    fn the_highest_of_a_sine_is_its_amplitude() {
        let mut a = Matrix::zeros(2);
        a.set(0, 1, big(7.0));
        a.set(1, 0, big(-7.0));
        let got = highest(&a, &big(0.9), &[big(0.0), big(2.0)], &[big(1.0), big(0.0)]);
        assert!((got - 2.0).abs() < 1e-14, "{got}");
    }
}
