//! From eigenvalues and eigenvectors to modes, each called by its kind.
//!
//! A complex pair rings. Whether two real modes are a pair is seen from their vectors. Capacitor
//! voltages and inductor currents of a circuit without controlled sources obey `Σ A` symmetric,
//! with Σ = +1 for capacitances and -1 for inductances, so that a real mode is either mostly
//! electric or mostly magnetic, and only an electric and a magnetic one can meet and begin to ring
//! when the damping is made less. Of a pair `λ₁, λ₂` out of one resonance
//!
//! ```text
//!   ζ = -(λ₁ + λ₂) / (2 √(λ₁ λ₂))        u₁ · u₂ = 1/ζ        (unit vectors, one L and one C)
//! ```
//!
//! and the vectors of modes that have nothing to do with each other are at right angles: so each
//! magnetic mode is paired with the electric one nearest in direction, if any is near at all. At
//! ζ = 1 both vectors coincide; rounding then moves the eigenvalues by the root of what it moves
//! the matrix by, to either side.

use faer::{Mat, MatRef, c64};

use super::matrix::Reduced;
use super::{Kind, NaturalMode};
use crate::network::Network;

/// The least share of energy that is told.
const LEAST_SHARE: f64 = 1e-9;
/// Two modes nearer to a right angle than this belong to no pair: a damping ratio of a million.
const APART: f64 = 1e-6;
/// Two vectors as near as this in cosine are one.
const PARALLEL: f64 = 1.0 - 1e-6;
/// Rounding of the state matrix, in units of its norm, for each state.
const ROUNDING: f64 = 16.0 * f64::EPSILON;

/// A complex number.
#[derive(Clone, Copy)]
struct Complex {
    re: f64,
    im: f64,
}

/// An eigenvalue with its vector in the energy coordinates of all capacitances and inductances.
struct Root {
    value: Complex,
    vector: Vec<Complex>,
}

/// The modes of a topology, slowest first; `None` where the eigenvalues cannot be found.
pub(super) fn modes(reduced: &Reduced, net: &Network) -> Option<Vec<NaturalMode>> {
    let n = reduced.matrix.nrows();
    if n == 0 {
        return Some(Vec::new());
    }
    let norm = reduced.matrix.norm_l2();
    #[allow(clippy::cast_precision_loss, reason = "a count of states")]
    let rounding = ROUNDING * n as f64 * norm;
    let teller = Teller {
        net,
        rounding,
        passive: !reduced.controlled,
    };
    let eigen = reduced.matrix.eigen().ok()?;
    let values = eigen.S().column_vector();
    let mut order: Vec<(usize, Complex)> = (0..n)
        .map(|k| (k, values[k]))
        .map(|(k, c)| (k, Complex { re: c.re, im: c.im }))
        .collect();
    if !order.iter().all(|(_, value)| value.size().is_finite()) {
        return None;
    }
    order.sort_by(|a, b| a.1.size().total_cmp(&b.1.size()));
    // Rounding may make a pair of two zeros: they are taken out before pairs are.
    let held = if reduced.controlled {
        order.partition_point(|(_, value)| value.size() <= rounding)
    } else {
        reduced.held.min(n)
    };
    let upper = order.split_off(held).into_iter().filter(|r| r.1.im >= 0.0);
    let moving: Vec<Root> = upper
        .map(|(k, value)| root(reduced, eigen.U(), k, value))
        .collect::<Option<_>>()?;
    let mut all: Vec<NaturalMode> = kernel(reduced, held)?
        .iter()
        .map(|v| teller.holding(v))
        .collect();
    all.extend(teller.moving(moving));
    all.sort_by(|a, b| a.speed().total_cmp(&b.speed()));
    Some(all)
}

impl NaturalMode {
    fn speed(&self) -> f64 {
        self.real.hypot(self.imaginary)
    }
}

impl Complex {
    fn size(self) -> f64 {
        self.re.hypot(self.im)
    }
}

impl Root {
    /// Cosine of the angle to another vector.
    fn along(&self, other: &[Complex]) -> f64 {
        let (mut re, mut im) = (0.0, 0.0);
        for (a, b) in self.vector.iter().zip(other) {
            re += a.re * b.re + a.im * b.im;
            im += a.re * b.im - a.im * b.re;
        }
        re.hypot(im)
    }

    /// Cosine of the angle to the conjugate vector.
    fn along_conjugate(&self) -> f64 {
        let conjugate = self.vector.iter().map(|c| Complex { im: -c.im, ..*c });
        self.along(&conjugate.collect::<Vec<_>>())
    }
}

/// An eigenvalue with its unit vector, column `k` of `u` where that could be found.
fn root(reduced: &Reduced, u: MatRef<'_, c64>, k: usize, value: Complex) -> Option<Root> {
    let mut vector: Vec<c64> = (0..u.nrows()).map(|i| u[(i, k)]).collect();
    let square: f64 = vector.iter().map(|c| c.re * c.re + c.im * c.im).sum();
    if !square.is_normal() {
        vector = null_vector(&reduced.matrix, value)?;
    }
    Some(Root {
        value,
        vector: spread(&reduced.basis, &vector),
    })
}

/// The vector that `A - λ` shortens most: back substitution divides by zero where an eigenvalue
/// is double to the last bit.
fn null_vector(a: &Mat<f64>, value: Complex) -> Option<Vec<c64>> {
    let n = a.nrows();
    let shifted = Mat::from_fn(n, n, |i, j| {
        if i == j {
            c64::new(a[(i, j)] - value.re, -value.im)
        } else {
            c64::new(a[(i, j)], 0.0)
        }
    });
    let svd = shifted.svd().ok()?;
    Some((0..n).map(|i| svd.V()[(i, n - 1)]).collect())
}

/// A vector of independent states, as a unit vector of all capacitances and inductances.
fn spread(basis: &Mat<f64>, vector: &[c64]) -> Vec<Complex> {
    let of = |i: usize| {
        let terms = vector.iter().enumerate();
        terms.fold(Complex { re: 0.0, im: 0.0 }, |sum, (j, c)| Complex {
            re: sum.re + basis[(i, j)] * c.re,
            im: sum.im + basis[(i, j)] * c.im,
        })
    };
    let mut all: Vec<Complex> = (0..basis.nrows()).map(of).collect();
    let norm = all.iter().map(|c| c.size().powi(2)).sum::<f64>().sqrt();
    for c in &mut all {
        (c.re, c.im) = (c.re / norm, c.im / norm);
    }
    all
}

/// Vectors that span what is held, each with as few parts in it as the others allow.
fn kernel(reduced: &Reduced, held: usize) -> Option<Vec<Vec<f64>>> {
    if held == 0 {
        return Some(Vec::new());
    }
    let svd = reduced.matrix.svd().ok()?;
    let (v, n) = (svd.V(), reduced.matrix.nrows());
    let mut span = &reduced.basis * v.subcols(n - held, held);
    single_out(&mut span);
    Some(
        (0..held)
            .map(|k| (0..span.nrows()).map(|i| span[(i, k)]).collect())
            .collect(),
    )
}

/// Clears each column's largest entry out of all the others.
fn single_out(span: &mut Mat<f64>) {
    for k in 0..span.ncols() {
        let entries = (k..span.ncols()).flat_map(|c| (0..span.nrows()).map(move |r| (r, c)));
        let largest = entries.max_by(|a, b| span[*a].abs().total_cmp(&span[*b].abs()));
        let Some((row, column)) = largest.filter(|e| span[*e] != 0.0) else {
            return;
        };
        for r in 0..span.nrows() {
            let kept = span[(r, k)];
            span[(r, k)] = span[(r, column)];
            span[(r, column)] = kept;
        }
        for c in (0..span.ncols()).filter(|&c| c != k) {
            let factor = span[(row, c)] / span[(row, k)];
            for r in 0..span.nrows() {
                let taken = factor * span[(r, k)];
                span[(r, c)] -= taken;
            }
        }
    }
}

/// Tells modes from eigenvalues.
struct Teller<'a> {
    net: &'a Network,
    /// What rounding moves an eigenvalue by, 1/s.
    rounding: f64,
    /// Whether nothing in the circuit can make a mode grow.
    passive: bool,
}

impl Teller<'_> {
    fn holding(&self, vector: &[f64]) -> NaturalMode {
        let squares: Vec<f64> = vector.iter().map(|x| x * x).collect();
        self.mode(Complex { re: 0.0, im: 0.0 }, 1, Kind::Holds, None, &squares)
    }

    /// Modes of eigenvalues that are not zero.
    fn moving(&self, roots: Vec<Root>) -> Vec<NaturalMode> {
        let (ringing, mut real): (Vec<Root>, Vec<Root>) =
            roots.into_iter().partition(|r| r.value.im > 0.0);
        let mut all: Vec<NaturalMode> = ringing.iter().map(|r| self.ringing(r)).collect();
        real.sort_by(|a, b| a.value.re.total_cmp(&b.value.re));
        let mut single: Vec<Root> = Vec::new();
        for root in real {
            match single.pop_if(|before| self.is_double(before, &root)) {
                Some(before) => {
                    let re = 0.5 * (before.value.re + root.value.re);
                    all.push(self.double(Complex { re, im: 0.0 }, &root));
                }
                None => single.push(root),
            }
        }
        let ratios = self.pairs(&single);
        for (root, ratio) in single.iter().zip(ratios) {
            let mut value = root.value;
            let kind = match ratio {
                Some(_) => Kind::Overdamped,
                None if value.re > 0.0 && !self.passive => Kind::Grows,
                None => Kind::Decays,
            };
            if kind == Kind::Decays {
                // Slower than rounding of the fastest mode lets tell.
                value.re = value.re.min(0.0);
            }
            all.push(self.mode(value, 1, kind, ratio, &squares(root)));
        }
        all
    }

    /// A complex pair.
    fn ringing(&self, root: &Root) -> NaturalMode {
        let Complex { re, im } = root.value;
        let size = root.value.size();
        if im <= self.split(size) * size && root.along_conjugate() > PARALLEL {
            let double = Complex { re, im: 0.0 };
            return self.double(double, root);
        }
        let (value, kind) = if re.abs() <= self.rounding {
            (Complex { re: 0.0, im }, Kind::Undamped)
        } else if re > 0.0 {
            (root.value, Kind::Grows)
        } else {
            (root.value, Kind::Underdamped)
        };
        let ratio = -value.re / value.size();
        self.mode(value, 2, kind, Some(ratio), &squares(root))
    }

    /// How far rounding parts a double eigenvalue of this size, relative to it.
    fn split(&self, size: f64) -> f64 {
        (self.rounding / size).sqrt()
    }

    /// Whether two real modes are the double one of a critically damped pair.
    fn is_double(&self, a: &Root, b: &Root) -> bool {
        let (sum, difference) = (a.value.re + b.value.re, a.value.re - b.value.re);
        difference.abs() <= self.split(0.5 * sum.abs()) * sum.abs() && a.along(&b.vector) > PARALLEL
    }

    /// Two equal eigenvalues with one vector.
    fn double(&self, value: Complex, root: &Root) -> NaturalMode {
        let kind = if value.re > 0.0 {
            Kind::Grows
        } else {
            Kind::CriticallyDamped
        };
        let ratio = 1.0_f64.copysign(-value.re);
        self.mode(value, 2, kind, Some(ratio), &squares(root))
    }

    /// The damping ratio of each real mode that belongs to a pair.
    fn pairs(&self, roots: &[Root]) -> Vec<Option<f64>> {
        let electric: Vec<bool> = roots
            .iter()
            .map(|r| self.electric(&squares(r)) > 0.5)
            .collect();
        let mut near: Vec<(f64, usize, usize)> = Vec::new();
        for (i, a) in roots.iter().enumerate() {
            for (j, b) in roots.iter().enumerate() {
                let along = a.along(&b.vector);
                let both_decay = a.value.re < 0.0 && b.value.re < 0.0;
                if electric[i] && !electric[j] && both_decay && along > APART {
                    near.push((along, i, j));
                }
            }
        }
        near.sort_by(|a, b| b.0.total_cmp(&a.0));
        let mut ratios = vec![None; roots.len()];
        for (_, i, j) in near {
            if ratios[i].is_none() && ratios[j].is_none() {
                let (a, b) = (-roots[i].value.re, -roots[j].value.re);
                let ratio = 0.5 * (a + b) / (a.sqrt() * b.sqrt());
                (ratios[i], ratios[j]) = (Some(ratio), Some(ratio));
            }
        }
        ratios
    }

    /// Share of the squares that is in capacitances.
    fn electric(&self, squares: &[f64]) -> f64 {
        let n = self.net.capacitances.len();
        squares.iter().take(n).sum::<f64>() / squares.iter().sum::<f64>()
    }

    fn mode(
        &self,
        value: Complex,
        count: u32,
        kind: Kind,
        damping_ratio: Option<f64>,
        squares: &[f64],
    ) -> NaturalMode {
        let total: f64 = squares.iter().sum();
        let capacitances = self.net.capacitances.iter().map(|c| c.branch);
        let branches = capacitances.chain(self.net.inductances.iter().map(|l| l.branch));
        let mut energy: std::collections::BTreeMap<usize, f64> = std::collections::BTreeMap::new();
        for (branch, square) in branches.zip(squares) {
            *energy.entry(self.net.branches[branch].part).or_default() += square / total;
        }
        NaturalMode {
            real: value.re,
            imaginary: value.im,
            count,
            damping_ratio,
            kind,
            energy: energy
                .into_iter()
                .filter(|(_, share)| *share >= LEAST_SHARE)
                .collect(),
            electric: self.electric(squares),
        }
    }
}

fn squares(root: &Root) -> Vec<f64> {
    root.vector.iter().map(|c| c.size().powi(2)).collect()
}
