//! The consistent restart after an event: what impulses do.
//!
//! Charge and flux decide. Capacitance voltages make the least weighted change that meets the
//! loops which capacitances close with each other and with sources,
//!
//! ```text
//!   min Σ C (v⁺ - v⁻)² / 2   with   Σ ± v⁺ = 0 round every loop,
//! ```
//!
//! the multipliers being the charges that pass; inductance currents make the least change
//! weighted by L that meets the cuts, the multipliers being the fluxes across them. Capacitances
//! come first, inductances second; the two do not meet. Only loops and cuts take part, so an
//! event without them changes nothing. (Frasca, Camlibel, Goknar, Iannelli and Vasca, IEEE Trans.
//! Circuits and Systems I 57(12), 2010, prove the minimum equal to charge and flux conservation.)

use std::collections::{BTreeMap, BTreeSet};

use pulsewright_circuit::setup::Setup;
use sprs::TriMat;

use crate::equations::{Drive, Equations};
use crate::failure::Failure;
use crate::linear::Factor;
use crate::network::{Network, name};
use crate::topology::Mode;

/// The impulses of an event.
#[derive(Clone, Debug, Default)]
pub struct Impulses {
    /// Charge through each branch, C.
    pub charge: Vec<f64>,
    /// Flux of each node against ground, V s; empty where there is none.
    pub flux: Vec<f64>,
}

impl Impulses {
    /// Flux across a branch, V s.
    #[must_use]
    pub fn flux_across(&self, a: usize, b: usize) -> f64 {
        let of = |n: usize| self.flux.get(n).copied().unwrap_or(0.0);
        of(a) - of(b)
    }
}

/// Changes so small that they are rounding, not impulses.
#[derive(Clone, Copy, Debug, Default)]
pub struct Small {
    /// V
    pub volts: f64,
    /// A
    pub amperes: f64,
}

/// The circuit in which an event happens.
#[derive(Clone, Copy)]
pub struct Scene<'a> {
    /// Its branches.
    pub net: &'a Network,
    /// Its numbers.
    pub setup: &'a Setup,
    /// The equations just after.
    pub equations: &'a Equations,
    /// The sources' values just after.
    pub drive: &'a Drive,
    /// What counts as rounding.
    pub small: Small,
    /// The instant, s.
    pub time: f64,
}

/// Brings `vc` and `il` from just before an event to just after it, in the topology of
/// the scene, and returns the impulses.
///
/// # Errors
///
/// [`Failure::Singular`] where rounding leaves no solution.
pub fn restart(scene: Scene<'_>, vc: &mut [f64], il: &mut [f64]) -> Result<Impulses, Failure> {
    let net = scene.net;
    let mut impulses = Impulses {
        charge: vec![0.0; net.branches.len()],
        flux: Vec::new(),
    };
    share_charge(scene, vc, &mut impulses.charge)?;
    share_flux(scene, il, &mut impulses.flux)?;
    Ok(impulses)
}

/// Charge conservation at the nodes of the loops, the voltages of sources given.
fn share_charge(scene: Scene<'_>, vc: &mut [f64], charge: &mut [f64]) -> Result<(), Failure> {
    let Scene {
        net,
        setup,
        equations,
        drive,
        small,
        time,
    } = scene;
    let small = small.volts;
    let modes = &equations.topology.modes;
    let mut edges: BTreeSet<usize> = BTreeSet::new();
    for (k, around) in &equations.topology.loops {
        if matches!(modes[*k], Mode::Capacitance(_)) {
            edges.extend(around.iter().map(|&(j, _)| j));
        }
    }
    if edges.is_empty() {
        return Ok(());
    }
    let rows = local_nodes(net, &edges);
    let ties: Vec<usize> = edges
        .iter()
        .copied()
        .filter(|&k| !matches!(modes[k], Mode::Capacitance(_)))
        .collect();
    let n_nodes = rows.values().flatten().count();
    let n = n_nodes + ties.len();
    let mut m = TriMat::new((n, n));
    let mut x = vec![0.0; n];
    let capacitance = |k: usize| match modes[k] {
        Mode::Capacitance(c) => Some(c),
        _ => None,
    };
    let size = edges
        .iter()
        .filter_map(|&k| capacitance(k))
        .map(|c| net.capacitances[c].farads)
        .fold(0.0, f64::max);
    for &k in &edges {
        let Some(c) = capacitance(k) else { continue };
        let (b, farads) = (&net.branches[k], net.capacitances[c].farads / size);
        for (node, sign) in [(b.a, 1.0), (b.b, -1.0)] {
            let Some(Some(r)) = rows.get(&node).copied() else {
                continue;
            };
            x[r] += sign * farads * vc[c];
            for (other, s) in [(b.a, 1.0), (b.b, -1.0)] {
                if let Some(Some(col)) = rows.get(&other).copied() {
                    m.add_triplet(r, col, sign * s * farads);
                }
            }
        }
    }
    for (i, &k) in ties.iter().enumerate() {
        let b = &net.branches[k];
        for (node, sign) in [(b.a, 1.0), (b.b, -1.0)] {
            if let Some(Some(r)) = rows.get(&node).copied() {
                m.add_triplet(r, n_nodes + i, sign);
                m.add_triplet(n_nodes + i, r, sign);
            }
        }
        x[n_nodes + i] = match modes[k] {
            Mode::Voltage(s) => drive.jets[s][0],
            Mode::Tie { offset } => offset,
            _ => 0.0,
        };
    }
    let mut factor =
        Factor::new(&m).map_err(|_| singular(net, setup, edges.iter().copied(), time))?;
    factor.solve(&mut x);
    let at = |node: usize| rows.get(&node).copied().flatten().map_or(0.0, |r| x[r]);
    let mut largest = 0.0_f64;
    for &k in &edges {
        let Some(c) = capacitance(k) else { continue };
        let b = &net.branches[k];
        let after = at(b.a) - at(b.b);
        largest = largest.max((after - vc[c]).abs());
        charge[k] = net.capacitances[c].farads * (after - vc[c]);
        vc[c] = after;
    }
    for (i, &k) in ties.iter().enumerate() {
        charge[k] = x[n_nodes + i] * size;
    }
    if largest <= small {
        edges.iter().for_each(|&k| charge[k] = 0.0);
    }
    Ok(())
}

/// Numbers the nodes of the edges; one node of each component has none and is the reference.
fn local_nodes(net: &Network, edges: &BTreeSet<usize>) -> BTreeMap<usize, Option<usize>> {
    let mut near: BTreeMap<usize, Vec<usize>> = BTreeMap::new();
    for &k in edges {
        let b = &net.branches[k];
        near.entry(b.a).or_default().push(b.b);
        near.entry(b.b).or_default().push(b.a);
    }
    let mut rows = BTreeMap::new();
    let mut next = 0;
    for &root in near.keys() {
        if rows.contains_key(&root) {
            continue;
        }
        rows.insert(root, None);
        let mut queue = vec![root];
        while let Some(n) = queue.pop() {
            for &m in near.get(&n).into_iter().flatten() {
                if let std::collections::btree_map::Entry::Vacant(e) = rows.entry(m) {
                    e.insert(Some(next));
                    next += 1;
                    queue.push(m);
                }
            }
        }
    }
    rows
}

/// Flux conservation round the loops, the currents of sources given.
fn share_flux(scene: Scene<'_>, il: &mut [f64], flux: &mut Vec<f64>) -> Result<(), Failure> {
    let Scene {
        net,
        setup,
        equations,
        drive,
        small,
        time,
    } = scene;
    let small = small.amperes;
    let topology = &equations.topology;
    if topology.cuts.is_empty() {
        return Ok(());
    }
    let island = contract(net, &topology.modes);
    let ends: BTreeSet<usize> = topology
        .modes
        .iter()
        .enumerate()
        .filter(|(_, m)| matches!(m, Mode::Inductance(_)))
        .flat_map(|(k, _)| [island[net.branches[k].a], island[net.branches[k].b]])
        .collect();
    let fixed: BTreeSet<usize> = references(net, topology, &island);
    let number: BTreeMap<usize, usize> = ends
        .iter()
        .filter(|e| !fixed.contains(e))
        .enumerate()
        .map(|(i, &e)| (e, i))
        .collect();
    let n = number.len();
    if n == 0 {
        return Ok(());
    }
    let mut m = TriMat::new((n, n));
    let mut x = vec![0.0; n];
    let size = net
        .inductances
        .iter()
        .flat_map(|l| l.inverse.iter().map(|w| w.1.abs()))
        .fold(0.0, f64::max);
    for (k, mode) in topology.modes.iter().enumerate() {
        let b = &net.branches[k];
        let sides = [(island[b.a], 1.0), (island[b.b], -1.0)];
        if island[b.a] == island[b.b] {
            continue;
        }
        let leaving = match mode {
            Mode::Inductance(j) => {
                for &(i, w) in &net.inductances[*j].inverse {
                    let of = &net.branches[net.inductances[i].branch];
                    for (side, sign) in sides {
                        let Some(&r) = number.get(&side) else {
                            continue;
                        };
                        for (other, s) in [(island[of.a], 1.0), (island[of.b], -1.0)] {
                            if let Some(&c) = number.get(&other) {
                                m.add_triplet(r, c, sign * s * w / size);
                            }
                        }
                    }
                }
                il[*j]
            }
            Mode::Current(s) => drive.jets[*s][0],
            _ => continue,
        };
        for (side, sign) in sides {
            if let Some(&r) = number.get(&side) {
                x[r] -= sign * leaving;
            }
        }
    }
    let largest = x.iter().fold(0.0_f64, |a, b| a.max(b.abs()));
    if largest == 0.0 {
        return Ok(());
    }
    let links = topology
        .cuts
        .iter()
        .flat_map(|(_, c)| c.iter().map(|&(k, _)| k));
    let mut factor = Factor::new(&m).map_err(|_| singular(net, setup, links, time))?;
    factor.solve(&mut x);
    *flux = (0..net.nodes)
        .map(|node| number.get(&island[node]).map_or(0.0, |&r| x[r] / size))
        .collect();
    let across: Vec<f64> = net
        .inductances
        .iter()
        .map(|l| {
            let b = &net.branches[l.branch];
            flux[b.a] - flux[b.b]
        })
        .collect();
    for (j, l) in net.inductances.iter().enumerate() {
        il[j] += l.inverse.iter().map(|&(i, w)| w * across[i]).sum::<f64>();
    }
    if largest <= small {
        flux.clear();
    }
    Ok(())
}

/// Nodes joined by anything but inductances and current sources, as one.
fn contract(net: &Network, modes: &[Mode]) -> Vec<usize> {
    let mut parent: Vec<usize> = (0..net.nodes).collect();
    fn find(parent: &mut [usize], mut k: usize) -> usize {
        while parent[k] != k {
            parent[k] = parent[parent[k]];
            k = parent[k];
        }
        k
    }
    for (k, m) in modes.iter().enumerate() {
        if !matches!(m, Mode::Inductance(_) | Mode::Current(_) | Mode::Open) {
            let (a, b) = (
                find(&mut parent, net.branches[k].a),
                find(&mut parent, net.branches[k].b),
            );
            parent[a.max(b)] = a.min(b);
        }
    }
    (0..net.nodes).map(|n| find(&mut parent, n)).collect()
}

/// One contracted node of each component that inductances join: ground's, or the first.
fn references(
    net: &Network,
    topology: &crate::topology::Topology,
    island: &[usize],
) -> BTreeSet<usize> {
    let mut first: BTreeMap<usize, usize> = BTreeMap::new();
    for node in 0..net.nodes {
        first
            .entry(topology.component[node])
            .or_insert(island[node]);
    }
    first.into_values().collect()
}

fn singular(
    net: &Network,
    setup: &Setup,
    branches: impl Iterator<Item = usize>,
    time: f64,
) -> Failure {
    let parts: BTreeSet<usize> = branches.map(|k| net.branches[k].part).collect();
    Failure::Singular {
        names: parts.into_iter().take(8).map(|p| name(setup, p)).collect(),
        time,
    }
}
