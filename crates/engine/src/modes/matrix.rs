//! The state matrix of one topology in energy coordinates, without dependent states.
//!
//! With `x` the independent capacitor voltages and inductor currents, `z = S x` all of them (the
//! dependent ones out of their loops and cuts) and `E = T z` with |E|²/2 the stored energy,
//!
//! ```text
//!   T S = Q R          Q has orthonormal columns, R is upper triangular
//!   w = R x            |w|²/2 is the stored energy; E = Q w
//!   A = R A_x R⁻¹      with x' = A_x x, a column of A_x being one solution of the equations
//! ```
//!
//! `T` is √C for a capacitance. For the windings of a coupled group with inductance matrix
//! `D^½ K D^½` (D its diagonal, K of ones and coupling factors) it is `K^½ D^½`.

use faer::{Mat, Side};
use pulsewright_circuit::setup::Setup;

use crate::equations::Equations;
use crate::failure::Failure;
use crate::network::Network;
use crate::topology::{Mode, Topology};

/// States at most; the eigenvalues are found densely.
const AT_MOST: usize = 1000;

/// The dynamics of one topology.
pub(super) struct Reduced {
    /// The state matrix `A`, 1/s.
    pub(super) matrix: Mat<f64>,
    /// `Q`: from energy coordinates of the independent states to those of every capacitance, then
    /// every inductance.
    pub(super) basis: Mat<f64>,
    /// How many modes hold for ever, counted in the graph.
    pub(super) held: usize,
    /// Whether a controlled source may make the count of the graph untrue.
    pub(super) controlled: bool,
}

impl Reduced {
    /// Whether all its entries, and their squares, are finite.
    pub(super) fn is_finite(&self) -> bool {
        self.matrix.squared_norm_l2().is_finite() && self.basis.squared_norm_l2().is_finite()
    }
}

/// The state matrix of a topology.
pub(super) fn reduced(
    equations: &mut Equations,
    net: &Network,
    setup: &Setup,
) -> Result<Reduced, Failure> {
    let (n, m) = (net.capacitances.len(), net.inductances.len());
    if n + m > AT_MOST {
        return Err(Failure::NotYet(format!(
            "the modes of more than {AT_MOST} capacitances and inductances, here {}",
            n + m
        )));
    }
    let held = held(net, &equations.topology);
    let free = independent(net, &equations.topology);
    let root = energy_root(net)?;
    let mut slope = Mat::<f64>::zeros(free.len(), free.len());
    let mut energy = Mat::<f64>::zeros(n + m, free.len());
    for (k, &state) in free.iter().enumerate() {
        let (vc, il) = consistent(net, &equations.topology, state);
        let (dvc, dil) = equations.homogeneous(net, setup, &vc, &il)?;
        for (j, &of) in free.iter().enumerate() {
            slope[(j, k)] = if of < n { dvc[of] } else { dil[of - n] };
        }
        for (j, v) in vc.iter().enumerate() {
            energy[(j, k)] = v * net.capacitances[j].farads.sqrt();
        }
        for (j, row) in root.iter().enumerate() {
            energy[(n + j, k)] = row.iter().map(|&(i, t)| t * il[i]).sum();
        }
    }
    let qr = energy.qr();
    let (basis, r) = (qr.compute_thin_Q(), qr.thin_R());
    let mut matrix = r * &slope;
    over_triangle(&mut matrix, &r.to_owned());
    Ok(Reduced {
        matrix,
        basis,
        held,
        controlled: net.sources.iter().any(|s| !s.terms.is_empty()),
    })
}

/// Divides `b` by an upper triangle from the right, column after column.
fn over_triangle(b: &mut Mat<f64>, r: &Mat<f64>) {
    let n = b.ncols();
    for j in 0..n {
        for i in 0..b.nrows() {
            let known: f64 = (0..j).map(|k| b[(i, k)] * r[(k, j)]).sum();
            b[(i, j)] = (b[(i, j)] - known) / r[(j, j)];
        }
    }
}

/// The independent states: capacitances by index, then inductances after them.
fn independent(net: &Network, topology: &Topology) -> Vec<usize> {
    let n = net.capacitances.len();
    let given = |branch: usize| {
        topology.loops.iter().any(|(k, _)| *k == branch)
            || topology
                .cuts
                .iter()
                .any(|(_, cut)| cut.first().is_some_and(|own| own.0 == branch))
    };
    let capacitances = net.capacitances.iter().map(|c| c.branch);
    let inductances = net.inductances.iter().map(|l| l.branch);
    (0..n + net.inductances.len())
        .zip(capacitances.chain(inductances))
        .filter(|(_, branch)| !given(*branch))
        .map(|(k, _)| k)
        .collect()
}

/// All voltages and currents where one independent state is 1 and the others 0.
fn consistent(net: &Network, topology: &Topology, state: usize) -> (Vec<f64>, Vec<f64>) {
    let (n, m) = (net.capacitances.len(), net.inductances.len());
    let unit = |j: usize| if j == state { 1.0 } else { 0.0 };
    let mut vc: Vec<f64> = (0..n).map(unit).collect();
    let mut il: Vec<f64> = (n..n + m).map(unit).collect();
    for (own, around) in &topology.loops {
        let others = around.iter().skip(1);
        let sum: f64 = others
            .map(|&(k, sign)| match topology.modes[k] {
                Mode::Capacitance(c) => sign * vc[c],
                _ => 0.0,
            })
            .sum();
        if let Mode::Capacitance(c) = topology.modes[*own] {
            vc[c] = -sum;
        }
    }
    for (_, cut) in &topology.cuts {
        let Some((&(own, sign), others)) = cut.split_first() else {
            continue;
        };
        let sum: f64 = others
            .iter()
            .map(|&(k, s)| match topology.modes[k] {
                Mode::Inductance(j) => s * il[j],
                _ => 0.0,
            })
            .sum();
        if let Mode::Inductance(j) = topology.modes[own] {
            il[j] = -sum * sign;
        }
    }
    (vc, il)
}

/// Rows of `K^½ D^½`, each as (inductance, √H).
fn energy_root(net: &Network) -> Result<Vec<Vec<(usize, f64)>>, Failure> {
    let own = |k: usize| net.inductances[k].henrys[0].1.sqrt();
    let mut rows: Vec<Vec<(usize, f64)>> = (0..net.inductances.len())
        .map(|k| vec![(k, own(k))])
        .collect();
    for (k, l) in net.inductances.iter().enumerate() {
        // A coupled group stands in the row of each of its windings; the first one does the work.
        let group: Vec<usize> = l.inverse.iter().map(|w| w.0).collect();
        if group.len() < 2 || group.iter().min() != Some(&k) {
            continue;
        }
        let factor = |i: usize, j: usize| {
            let row = &net.inductances[group[i]].henrys;
            let henrys: f64 = row.iter().filter(|h| h.0 == group[j]).map(|h| h.1).sum();
            henrys / (own(group[i]) * own(group[j]))
        };
        let root =
            square_root(&Mat::from_fn(group.len(), group.len(), factor)).ok_or_else(|| {
                Failure::Singular {
                    names: Vec::new(),
                    time: 0.0,
                }
            })?;
        for (i, &of) in group.iter().enumerate() {
            rows[of] = group
                .iter()
                .enumerate()
                .map(|(j, &winding)| (winding, root[(i, j)] * own(winding)))
                .collect();
        }
    }
    Ok(rows)
}

/// The symmetric square root of a positive definite matrix.
fn square_root(k: &Mat<f64>) -> Option<Mat<f64>> {
    let eigen = k.self_adjoint_eigen(Side::Lower).ok()?;
    let (u, s) = (eigen.U(), eigen.S().column_vector());
    Some(Mat::from_fn(k.nrows(), k.ncols(), |i, j| {
        (0..k.nrows())
            .map(|e| u[(i, e)] * s[e].max(0.0).sqrt() * u[(j, e)])
            .sum()
    }))
}

/// How many charges and currents nothing changes: a charge for each piece into which the circuit
/// falls when its capacitances are taken out, a current for each loop of inductances and ideal
/// connections.
fn held(net: &Network, topology: &Topology) -> usize {
    let rank = |m: Mode| match m {
        Mode::Tie { .. } | Mode::Voltage(_) => Some(0),
        Mode::Inductance(_) => Some(1),
        Mode::Resistive { .. } => Some(2),
        Mode::Capacitance(_) => Some(3),
        Mode::Open | Mode::Current(_) => None,
    };
    let mut parent: Vec<usize> = (0..net.nodes).collect();
    let mut joined = [0; 4];
    for of in 0..4 {
        for (branch, mode) in net.branches.iter().zip(&topology.modes) {
            if rank(*mode) == Some(of) && join(&mut parent, branch.a, branch.b) {
                joined[of] += 1;
            }
        }
    }
    joined[3] + net.inductances.len().saturating_sub(joined[1])
}

/// Joins two groups of nodes; false where they were one already.
fn join(parent: &mut [usize], a: usize, b: usize) -> bool {
    let find = |parent: &mut [usize], mut k: usize| {
        while parent[k] != k {
            parent[k] = parent[parent[k]];
            k = parent[k];
        }
        k
    };
    let (a, b) = (find(parent, a), find(parent, b));
    parent[a.max(b)] = a.min(b);
    a != b
}
