//! Solves the equations: dense LU of our own for small matrices, simplicial sparse LU for
//! large ones, chosen by size, with the same results to rounding.
//!
//! A general library's overhead is many times the work of a 6 x 6 solve, so up to
//! [`DENSE_AT_MOST`] unknowns the factorisation is written out here (Gaussian elimination with
//! row scaling and partial pivoting). Above, faer's simplicial LU with a COLAMD ordering is used;
//! circuits have no dense blocks, so never the supernodal one. The library reports no zero
//! pivots, so the first solution is checked against the matrix.

use std::sync::Arc;

use faer::dyn_stack::{MemBuffer, MemStack};
use faer::linalg::lu::partial_pivoting::factor::PartialPivLuParams;
use faer::sparse::linalg::SupernodalThreshold;
use faer::sparse::linalg::lu::{
    LuRef, LuSymbolicParams, NumericLu, SymbolicLu, factorize_symbolic_lu,
};
use faer::sparse::{SparseColMatRef, SymbolicSparseColMatRef};
use faer::{Conj, MatMut, Par, Spec};
use sprs::{CsMat, TriMat};

/// Up to so many unknowns the dense code is used.
pub const DENSE_AT_MOST: usize = 40;

/// A matrix without a usable factorisation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Singular {
    /// The column at which elimination found nothing to divide by, where known.
    pub column: Option<usize>,
}

/// A factorised matrix.
pub enum Factor {
    /// Dense.
    Dense(Dense),
    /// Sparse.
    Sparse(Box<Sparse>),
}

/// Dense LU with row scaling, row major, `n x n`.
pub struct Dense {
    n: usize,
    lu: Vec<f64>,
    order: Vec<usize>,
    scale: Vec<f64>,
    /// Reciprocals of the pivots.
    inverse: Vec<f64>,
    work: Vec<f64>,
}

/// Sparse LU of faer with its scratch memory.
pub struct Sparse {
    pattern: Arc<Pattern>,
    numeric: NumericLu<usize, f64>,
    scale: Vec<f64>,
    scratch: MemBuffer,
}

/// Where a sparse matrix has entries, and the symbolic work that hangs on it alone.
struct Pattern {
    starts: Vec<usize>,
    rows: Vec<usize>,
    symbolic: SymbolicLu<usize>,
}

impl Factor {
    /// Factorises a square matrix given by triplets (duplicates add up).
    ///
    /// # Errors
    ///
    /// [`Singular`] where no pivot is left, or the solution does not satisfy the equations.
    pub fn new(matrix: &TriMat<f64>) -> Result<Factor, Singular> {
        Factor::like(None, matrix)
    }

    /// As [`Factor::new`], with the symbolic work of another factorisation where the pattern of
    /// entries is the same.
    ///
    /// # Errors
    ///
    /// As [`Factor::new`].
    pub fn like(other: Option<&Factor>, matrix: &TriMat<f64>) -> Result<Factor, Singular> {
        if matrix.rows() <= DENSE_AT_MOST {
            return Dense::new(matrix).map(Factor::Dense);
        }
        let known = match other {
            Some(Factor::Sparse(s)) => Some(&s.pattern),
            _ => None,
        };
        Sparse::new(known, &matrix.to_csc()).map(|s| Factor::Sparse(Box::new(s)))
    }

    /// Solves in place, without allocation.
    pub fn solve(&mut self, x: &mut [f64]) {
        match self {
            Factor::Dense(d) => d.solve(x),
            Factor::Sparse(s) => s.solve(x),
        }
    }
}

impl Dense {
    fn new(matrix: &TriMat<f64>) -> Result<Dense, Singular> {
        let n = matrix.rows();
        let mut lu = vec![0.0; n * n];
        for (v, (r, c)) in matrix.triplet_iter() {
            lu[r * n + c] += *v;
        }
        let scale = row_scales(n, lu.iter().enumerate().map(|(k, v)| (k / n.max(1), *v)));
        for (k, v) in lu.iter_mut().enumerate() {
            *v *= scale[k / n.max(1)];
        }
        let mut d = Dense {
            n,
            lu,
            order: (0..n).collect(),
            scale,
            inverse: vec![0.0; n],
            work: vec![0.0; n],
        };
        d.eliminate()?;
        for k in 0..n {
            d.inverse[k] = 1.0 / d.lu[k * n + k];
        }
        let scale: Vec<f64> = d.order.iter().map(|&r| d.scale[r]).collect();
        d.scale = scale;
        Ok(d)
    }

    fn eliminate(&mut self) -> Result<(), Singular> {
        let n = self.n;
        let mut largest = vec![0.0_f64; n];
        for (k, v) in self.lu.iter().enumerate() {
            largest[k % n] = largest[k % n].max(v.abs());
        }
        for k in 0..n {
            let pivot = (k..n).max_by(|&i, &j| {
                self.lu[i * n + k]
                    .abs()
                    .total_cmp(&self.lu[j * n + k].abs())
            });
            let p = pivot.unwrap_or(k);
            let size = self.lu[p * n + k].abs();
            if size.is_nan() || size.is_infinite() || size <= 64.0 * f64::EPSILON * largest[k] {
                return Err(Singular { column: Some(k) });
            }
            if p != k {
                for c in 0..n {
                    self.lu.swap(k * n + c, p * n + c);
                }
                self.order.swap(k, p);
            }
            let (above, below) = self.lu.split_at_mut((k + 1) * n);
            let top = &above[k * n..];
            let inverse = 1.0 / top[k];
            for row in below.chunks_exact_mut(n) {
                let f = row[k] * inverse;
                if f != 0.0 {
                    row[k] = f;
                    for (x, t) in row[k + 1..].iter_mut().zip(&top[k + 1..n]) {
                        *x -= f * t;
                    }
                }
            }
        }
        Ok(())
    }

    fn solve(&mut self, x: &mut [f64]) {
        let n = self.n;
        let work = self.work.as_mut_slice();
        for ((w, &r), s) in work.iter_mut().zip(&self.order).zip(&self.scale) {
            *w = x[r] * s;
        }
        for (k, row) in self.lu.chunks_exact(n.max(1)).enumerate() {
            let (done, rest) = work.split_at_mut(k);
            rest[0] -= dot(&row[..k], done);
        }
        for (k, row) in self.lu.chunks_exact(n.max(1)).enumerate().rev() {
            let (rest, known) = work.split_at_mut(k + 1);
            rest[k] = (rest[k] - dot(&row[k + 1..], known)) * self.inverse[k];
        }
        x.copy_from_slice(work);
    }
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

impl Pattern {
    fn new(starts: &[usize], rows: &[usize]) -> Result<Pattern, Singular> {
        let n = starts.len().saturating_sub(1);
        let view = SymbolicSparseColMatRef::new_checked(n, n, starts, None, rows);
        let params = LuSymbolicParams {
            supernodal_flop_ratio_threshold: SupernodalThreshold::FORCE_SIMPLICIAL,
            ..Default::default()
        };
        let symbolic =
            factorize_symbolic_lu(view, params).map_err(|_| Singular { column: None })?;
        Ok(Pattern {
            starts: starts.to_vec(),
            rows: rows.to_vec(),
            symbolic,
        })
    }
}

impl Sparse {
    fn new(known: Option<&Arc<Pattern>>, matrix: &CsMat<f64>) -> Result<Sparse, Singular> {
        let n = matrix.rows();
        let starts = matrix.indptr();
        let (starts, rows) = (starts.raw_storage(), matrix.indices());
        let pattern = match known.filter(|p| p.starts == starts && p.rows == rows) {
            Some(pattern) => Arc::clone(pattern),
            None => Arc::new(Pattern::new(starts, rows)?),
        };
        let scale = row_scales(n, rows.iter().copied().zip(matrix.data().iter().copied()));
        let values: Vec<f64> = matrix
            .data()
            .iter()
            .zip(rows)
            .map(|(v, &r)| v * scale[r])
            .collect();
        let view = SymbolicSparseColMatRef::new_checked(n, n, starts, None, rows);
        let symbolic = &pattern.symbolic;
        let mut numeric = NumericLu::new();
        let spec: Spec<PartialPivLuParams, f64> = Spec::default();
        let mut scratch =
            MemBuffer::new(symbolic.factorize_numeric_lu_scratch::<f64>(Par::Seq, Spec::default()));
        symbolic
            .factorize_numeric_lu(
                &mut numeric,
                SparseColMatRef::new(view, &values),
                Par::Seq,
                MemStack::new(&mut scratch),
                spec,
            )
            .map_err(|_| Singular { column: None })?;
        let scratch = MemBuffer::new(symbolic.solve_in_place_scratch::<f64>(1, Par::Seq));
        let mut sparse = Sparse {
            pattern,
            numeric,
            scale,
            scratch,
        };
        sparse.check(matrix)?;
        Ok(sparse)
    }

    /// Solves for a right side whose answer is known: all ones.
    fn check(&mut self, matrix: &CsMat<f64>) -> Result<(), Singular> {
        let n = matrix.rows();
        let mut x = vec![0.0; n];
        for column in matrix.outer_iterator() {
            for (r, v) in column.iter() {
                x[r] += v;
            }
        }
        self.solve(&mut x);
        let worst = x
            .iter()
            .map(|v| (v - 1.0).abs())
            .fold(0.0_f64, |a, b| if b > a || b.is_nan() { b } else { a });
        if worst < 1e-2 {
            Ok(())
        } else {
            Err(Singular { column: None })
        }
    }

    fn solve(&mut self, x: &mut [f64]) {
        for (v, s) in x.iter_mut().zip(&self.scale) {
            *v *= s;
        }
        let n = x.len();
        LuRef::new_unchecked(&self.pattern.symbolic, &self.numeric).solve_in_place_with_conj(
            Conj::No,
            MatMut::from_column_major_slice_mut(x, n, 1),
            Par::Seq,
            MemStack::new(&mut self.scratch),
        );
    }
}

/// Powers of two that bring each row's largest entry to between 1 and 2.
fn row_scales(n: usize, entries: impl Iterator<Item = (usize, f64)>) -> Vec<f64> {
    let mut largest = vec![0.0_f64; n];
    for (r, v) in entries {
        largest[r] = largest[r].max(v.abs());
    }
    largest
        .iter()
        .map(|&m| {
            if m > 0.0 && m.is_finite() {
                (-m.log2().floor()).exp2()
            } else {
                1.0
            }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn chain(n: usize) -> TriMat<f64> {
        let mut m = TriMat::new((n, n));
        for k in 0..n {
            m.add_triplet(k, k, 2.5 + (k % 3) as f64);
            if k > 0 {
                m.add_triplet(k, k - 1, -1.0);
                m.add_triplet(k - 1, k, -1e-3);
            }
        }
        m
    }

    #[test]
    fn dense_and_sparse_agree_with_the_known_answer() {
        for n in [3, DENSE_AT_MOST, DENSE_AT_MOST + 1, 300] {
            let m = chain(n);
            let want: Vec<f64> = (0..n).map(|k| (k as f64).sin() + 2.0).collect();
            let mut x = vec![0.0; n];
            for (v, (r, c)) in m.triplet_iter() {
                x[r] += v * want[c];
            }
            Factor::new(&m).unwrap().solve(&mut x);
            for (a, b) in x.iter().zip(&want) {
                assert!((a - b).abs() < 1e-13, "{n}: {a} for {b}");
            }
        }
    }

    #[test]
    fn a_singular_matrix_is_refused_dense_and_sparse() {
        for n in [4, 80] {
            let mut m = TriMat::new((n, n));
            for k in 0..n {
                m.add_triplet(k, k, 1.0);
                m.add_triplet(k, (k + 1) % n, -1.0);
            }
            assert!(Factor::new(&m).is_err());
        }
    }
}
