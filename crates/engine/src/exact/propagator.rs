//! The matrix exponential, less one, of a step.
//!
//! `E(h) = exp(A h) - 1` is a Taylor polynomial where |A h| is at most 1/2, and is doubled from there:
//! `E(2h) = 2 E(h) + E(h)²`. Less one, because a slow state's change in a step so short would drown
//! in the rounding of 1. Every size on the way is kept: the steps of a shot are its planned length
//! over powers of two.

use std::collections::HashMap;

/// Degree of the Taylor polynomial: 0.5^18 / 18! is 6e-22.
const DEGREE: u32 = 17;
/// From so many states on products go through a library.
const LARGE: usize = 48;
/// How many doublings are made at most.
const DOUBLINGS: u32 = 70;

/// `X' = A X`, advanced.
#[derive(Clone, Debug)]
pub(crate) struct Propagator {
    n: usize,
    /// Row by row.
    a: Vec<f64>,
    /// Largest sum of a row's absolute values, 1/s.
    norm: f64,
    kept: HashMap<u64, Vec<f64>>,
    /// The sizes that are kept, s.
    sizes: Vec<f64>,
}

impl Propagator {
    /// For an `n` by `n` matrix, row by row.
    pub(crate) fn new(n: usize, a: Vec<f64>) -> Propagator {
        let sum = |row: &[f64]| row.iter().map(|x| x.abs()).sum::<f64>();
        let norm = a.chunks(n.max(1)).map(sum).fold(0.0, f64::max);
        Propagator {
            n,
            a,
            norm,
            kept: HashMap::new(),
            sizes: Vec::new(),
        }
    }

    /// Norm of the matrix, 1/s.
    pub(crate) fn norm(&self) -> f64 {
        self.norm
    }

    /// Advances `x` by `h`, whose matrix is made and kept.
    pub(crate) fn advance(&mut self, h: f64, x: &mut [f64]) {
        self.make(h);
        if let Some(e) = self.kept.get(&h.to_bits()) {
            add_product(self.n, e, x);
        }
    }

    /// Advances `x` by any `h`, with the matrices at hand and a Taylor polynomial for the rest.
    pub(crate) fn advance_once(&self, h: f64, x: &mut [f64]) {
        let mut rest = h;
        for size in &self.sizes {
            while *size <= rest && self.norm * rest > 0.5 {
                if let Some(e) = self.kept.get(&size.to_bits()) {
                    add_product(self.n, e, x);
                }
                rest -= size;
            }
        }
        let parts = (2.0 * self.norm * rest).ceil().max(1.0);
        let mut k = 0.0;
        while k < parts {
            self.taylor(rest / parts, x);
            k += 1.0;
        }
    }

    fn taylor(&self, h: f64, x: &mut [f64]) {
        let mut term = x.to_vec();
        for k in 1..=DEGREE {
            let scale = h / f64::from(k);
            let next: Vec<f64> = self
                .a
                .chunks_exact(self.n.max(1))
                .map(|row| scale * dot(row, &term))
                .collect();
            x.iter_mut().zip(&next).for_each(|(x, t)| *x += t);
            term = next;
        }
    }

    fn make(&mut self, h: f64) {
        if self.kept.contains_key(&h.to_bits()) {
            return;
        }
        let mut size = h;
        let mut doublings = 0;
        while self.norm * size > 0.5
            && doublings < DOUBLINGS
            && !self.kept.contains_key(&size.to_bits())
        {
            size *= 0.5;
            doublings += 1;
        }
        let mut e = match self.kept.get(&size.to_bits()) {
            Some(e) => e.clone(),
            None => self.series(size),
        };
        self.keep(size, &e);
        for _ in 0..doublings {
            let squared = product(self.n, &e, &e);
            e.iter_mut()
                .zip(&squared)
                .for_each(|(x, s)| *x = 2.0 * *x + s);
            size *= 2.0;
            self.keep(size, &e);
        }
        if doublings > 0 && size != h {
            self.keep(h, &e);
        }
    }

    fn keep(&mut self, size: f64, e: &[f64]) {
        if self.kept.insert(size.to_bits(), e.to_vec()).is_none() {
            let at = self.sizes.partition_point(|s| *s > size);
            self.sizes.insert(at, size);
        }
    }

    /// `E = A h (1 + A h / 2 (1 + A h / 3 (…)))`
    fn series(&self, h: f64) -> Vec<f64> {
        let n = self.n;
        let step: Vec<f64> = self.a.iter().map(|x| x * h).collect();
        let mut e = step
            .iter()
            .map(|x| x / f64::from(DEGREE))
            .collect::<Vec<f64>>();
        for k in (1..DEGREE).rev() {
            let mut next = product(n, &step, &e);
            next.iter_mut()
                .zip(&step)
                .for_each(|(x, s)| *x = (*x + s) / f64::from(k));
            e = next;
        }
        e
    }
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

/// `x + E x`, the change added up before it is added.
fn add_product(n: usize, e: &[f64], x: &mut [f64]) {
    let change: Vec<f64> = e.chunks_exact(n.max(1)).map(|row| dot(row, x)).collect();
    x.iter_mut().zip(&change).for_each(|(x, c)| *x += c);
}

fn product(n: usize, a: &[f64], b: &[f64]) -> Vec<f64> {
    if n >= LARGE {
        let of =
            |m: &[f64]| faer::Mat::from_fn(n, n, |i, j| m.get(i * n + j).copied().unwrap_or(0.0));
        let c = of(a) * of(b);
        return (0..n * n).map(|k| c[(k / n, k % n)]).collect();
    }
    let mut c = vec![0.0; n * n];
    for (row, out) in a.chunks_exact(n.max(1)).zip(c.chunks_exact_mut(n.max(1))) {
        for (x, other) in row.iter().zip(b.chunks_exact(n.max(1))) {
            if *x != 0.0 {
                out.iter_mut().zip(other).for_each(|(o, y)| *o += x * y);
            }
        }
    }
    c
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_rotation_turns() {
        let mut p = Propagator::new(2, vec![0.0, -3.0, 3.0, 0.0]);
        let mut x = [1.0, 0.0];
        p.advance(2.0, &mut x);
        assert!((x[0] - 6.0_f64.cos()).abs() < 1e-14 && (x[1] - 6.0_f64.sin()).abs() < 1e-14);
        let mut x = [1.0, 0.0];
        p.advance_once(1.2345, &mut x);
        let a = 3.0 * 1.2345_f64;
        assert!((x[0] - a.cos()).abs() < 1e-14 && (x[1] - a.sin()).abs() < 1e-14);
    }

    #[test]
    fn a_slow_state_keeps_its_digits_beside_a_fast_one() {
        let mut p = Propagator::new(2, vec![-1e9, 0.0, 0.0, -1.0]);
        let mut x = [1.0, 1.0];
        p.advance(1.0, &mut x);
        assert!(x[0].abs() < 1e-300 && (x[1] - (-1.0_f64).exp()).abs() < 1e-15);
    }

    #[test]
    fn nothing_moves_nothing() {
        let mut p = Propagator::new(0, Vec::new());
        p.advance(1.0, &mut []);
        p.advance_once(1.0, &mut []);
    }
}
