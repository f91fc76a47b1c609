//! The equations of one topology, and their solution for one step or one instant.
//!
//! Modified nodal analysis: the unknowns `y` are the potential of every node but ground, then
//! the current of every capacitance, voltage source, ideal connection and ideal contact. With a
//! capacitance's voltage and an inductance's current written as
//!
//! ```text
//!   v_C = base + θ i_C / C        i_L = base + θ L⁻¹ v_L
//! ```
//!
//! one family of matrices M(θ) serves everything: θ = h/2 and base = x + θ x' is a trapezoidal
//! step, θ = h and base = x a backward-Euler step, θ = 0 and base = x the consistent solution of
//! all other quantities at an instant, and θ = 0 with base = x' their rates of change. The rows:
//!
//! | row | reads |
//! |---|---|
//! | node | currents leaving add up to 0 |
//! | capacitance in the tree | v - θ i / C = base |
//! | capacitance out of it | Σ ± i/C round its loop = Σ ± e' (its loop, differentiated) |
//! | voltage source | v = e |
//! | connection, closed contact | v = 0, or Σ ± i = 0 round a loop of them |
//! | open contact | i = 0 |
//! | node of an inductance in the tree | Σ ± L⁻¹ v over its cut = -Σ ± j' (its cut, differentiated) |
//! | one node of an island | v = the potential it had |
//!
//! With the differentiated rows the slopes of every quantity come out of the same solution, and
//! the currents and voltages of index 2 do not ring. Nothing is singular that the graph has not
//! named; M(θ) is assembled by sprs and factored once for each θ.

use pulsewright_circuit::formula::{Leaves, NoLeaves, Side};
use pulsewright_circuit::setup::Setup;
use sprs::TriMat;

use crate::exact::System;
use crate::failure::Failure;
use crate::forms::{Form, probe_form};
use crate::linear::Factor;
use crate::network::{Network, name};
use crate::topology::{Mode, Topology};

/// How many factorisations a topology keeps.
const FACTORS_KEPT: usize = 48;
/// The same for more unknowns than [`LARGE`], where each takes memory.
const FACTORS_KEPT_LARGE: usize = 6;
/// Unknowns from which on a circuit is large.
const LARGE: usize = 2000;

/// The circuit at an instant.
#[derive(Clone, Debug, Default)]
pub struct Point {
    /// s
    pub time: f64,
    /// Potentials and currents.
    pub y: Vec<f64>,
    /// Their rates of change.
    pub dy: Vec<f64>,
    /// Voltage of each capacitance, V.
    pub vc: Vec<f64>,
    /// Its rate, V/s.
    pub dvc: Vec<f64>,
    /// Current of each inductance, A.
    pub il: Vec<f64>,
    /// Its rate, A/s.
    pub dil: Vec<f64>,
    /// Value, rate and second derivative of what is known of each source.
    pub sources: Drive,
}

/// What is known of the sources at an instant.
#[derive(Clone, Debug, Default)]
pub struct Drive {
    /// `[value, rate, second]` of each source.
    pub jets: Vec<[f64; 3]>,
}

impl Drive {
    /// Takes all sources at an instant.
    pub fn take(&mut self, net: &Network, time: f64, side: Side, leaves: &dyn Leaves) {
        if self.jets.len() == net.sources.len() {
            for (jet, s) in self.jets.iter_mut().zip(&net.sources) {
                if !s.constant {
                    let j = s.known.jet(time, side, leaves);
                    *jet = [j.value, j.rate, j.second];
                }
            }
        } else {
            self.jets.clear();
            self.jets.extend(net.sources.iter().map(|s| {
                let j = s.known.jet(time, side, leaves);
                [j.value, j.rate, j.second]
            }));
        }
    }

    /// Takes all sources, which depend on time alone.
    pub fn at(&mut self, net: &Network, time: f64, side: Side) {
        self.take(net, time, side, &NoLeaves);
    }
}

/// The equations of one topology.
pub struct Equations {
    /// The graph.
    pub topology: Topology,
    /// Which node balances are replaced: 1 by a cut, 2 by a held potential.
    replaced: Vec<u8>,
    /// The loop of each branch that closes one.
    loop_of: Vec<Option<usize>>,
    /// Forms of the controlling quantities of each source.
    control: Vec<Form>,
    factors: Vec<(u64, Factor)>,
    /// How often M(θ) was factorised.
    pub factorisations: u64,
    /// Potential at which each island's node is held, V.
    pub held: Vec<f64>,
    /// Magnitudes of the natural frequencies, 1/s, once asked for.
    pub rates: Option<Vec<f64>>,
    /// Whether what is remarkable about the graph has been noted.
    pub noted: bool,
    /// The same as `X' = A X`, where exact propagation runs.
    exact: Option<Box<System>>,
}

/// Unknown number of a node's potential; `None` for ground.
#[must_use]
pub fn potential(node: usize) -> Option<usize> {
    node.checked_sub(1)
}

impl Equations {
    /// The equations of a state.
    ///
    /// # Errors
    ///
    /// As [`Topology::new`], and [`Failure::NotYet`] for a controlled source whose controlling
    /// quantity's rate of change would be needed and is not at hand.
    pub fn new(
        net: &Network,
        setup: &Setup,
        states: &[u8],
        time: f64,
    ) -> Result<Equations, Failure> {
        let topology = Topology::new(net, setup, states, time)?;
        let mut replaced = vec![0; net.nodes];
        for (node, _) in &topology.cuts {
            replaced[*node] = 1;
        }
        for &node in &topology.held {
            replaced[node] = 2;
        }
        let mut loop_of = vec![None; net.branches.len()];
        for (i, (k, _)) in topology.loops.iter().enumerate() {
            loop_of[*k] = Some(i);
        }
        let mut control = Vec::new();
        for s in &net.sources {
            let mut form = Form::default();
            for (probe, k) in &s.terms {
                let Some(f) = probe_form(net, &topology.modes, *probe) else {
                    return Err(Failure::NotYet(format!(
                        "`{}` is controlled by a quantity that is not linear in voltages and currents",
                        name(setup, net.branches[s.branch].part)
                    )));
                };
                form.add(&f, *k);
            }
            control.push(form);
        }
        let held = vec![0.0; topology.held.len()];
        let equations = Equations {
            topology,
            replaced,
            loop_of,
            control,
            factors: Vec::new(),
            factorisations: 0,
            held,
            rates: None,
            noted: false,
            exact: None,
        };
        equations.refuse_controlled_index_2(net, setup)?;
        Ok(equations)
    }

    fn refuse_controlled_index_2(&self, net: &Network, setup: &Setup) -> Result<(), Failure> {
        let capacitive = self
            .topology
            .loops
            .iter()
            .filter(|(k, _)| matches!(self.topology.modes[*k], Mode::Capacitance(_)));
        let sides = capacitive
            .map(|(_, s)| s)
            .chain(self.topology.cuts.iter().map(|(_, s)| s));
        for &(k, _) in sides.flatten() {
            if let Mode::Voltage(s) | Mode::Current(s) = self.topology.modes[k]
                && !net.sources[s].terms.is_empty()
            {
                return Err(Failure::NotYet(format!(
                    "`{}` is controlled and drives capacitors in a loop, or inductors in a cut, with nothing between; put the resistance there that the real circuit has",
                    name(setup, net.branches[k].part)
                )));
            }
        }
        Ok(())
    }

    /// Whether a capacitance's voltage is given by its loop.
    fn dependent(&self, branch: usize) -> bool {
        self.loop_of[branch].is_some()
    }

    fn assemble(&self, net: &Network, theta: f64) -> TriMat<f64> {
        let n = net.unknowns();
        let base = net.nodes - 1;
        let mut m = TriMat::with_capacity((n, n), 6 * net.branches.len() + net.nodes);
        let balanced = |node: usize| potential(node).filter(|_| self.replaced[node] == 0);
        for (k, b) in net.branches.iter().enumerate() {
            let rows = [(balanced(b.a), 1.0), (balanced(b.b), -1.0)];
            match (b.current, self.topology.modes[k]) {
                (Some(c), _) => {
                    for (row, sign) in rows {
                        if let Some(r) = row {
                            m.add_triplet(r, base + c, sign);
                        }
                    }
                }
                (None, Mode::Resistive { siemens, .. }) => {
                    for (row, sign) in rows {
                        if let Some(r) = row {
                            add_voltage(&mut m, r, b.a, b.b, sign * siemens);
                        }
                    }
                }
                (None, Mode::Inductance(j)) => {
                    for &(i, w) in &net.inductances[j].inverse {
                        let of = &net.branches[net.inductances[i].branch];
                        for (row, sign) in rows {
                            if let Some(r) = row {
                                add_voltage(&mut m, r, of.a, of.b, sign * theta * w);
                            }
                        }
                    }
                }
                _ => {}
            }
        }
        for (node, cut) in &self.topology.cuts {
            let Some(row) = potential(*node) else {
                continue;
            };
            for &(k, sign) in cut {
                if let Mode::Inductance(j) = self.topology.modes[k] {
                    for &(i, w) in &net.inductances[j].inverse {
                        let of = &net.branches[net.inductances[i].branch];
                        add_voltage(&mut m, row, of.a, of.b, sign * w);
                    }
                }
            }
        }
        for &node in &self.topology.held {
            if let Some(row) = potential(node) {
                m.add_triplet(row, row, 1.0);
            }
        }
        for (k, b) in net.branches.iter().enumerate() {
            if let Some(c) = b.current {
                self.current_row(net, &mut m, k, base + c, theta);
            }
        }
        m
    }

    fn current_row(&self, net: &Network, m: &mut TriMat<f64>, k: usize, row: usize, theta: f64) {
        let b = &net.branches[k];
        let base = net.nodes - 1;
        let own = |j: usize| net.branches[j].current.map(|c| base + c);
        match self.topology.modes[k] {
            Mode::Open => m.add_triplet(row, row, 1.0),
            Mode::Resistive { siemens, .. } => {
                add_voltage(m, row, b.a, b.b, siemens);
                m.add_triplet(row, row, -1.0);
            }
            Mode::Capacitance(c) => match self.loop_of[k] {
                None => {
                    add_voltage(m, row, b.a, b.b, 1.0);
                    m.add_triplet(row, row, -theta / net.capacitances[c].farads);
                }
                Some(l) => {
                    for &(j, sign) in &self.topology.loops[l].1 {
                        if let (Mode::Capacitance(c), Some(col)) = (self.topology.modes[j], own(j))
                        {
                            m.add_triplet(row, col, sign / net.capacitances[c].farads);
                        }
                    }
                }
            },
            Mode::Tie { .. } | Mode::Voltage(_) if self.loop_of[k].is_some() => {
                if let Some(l) = self.loop_of[k] {
                    for &(j, sign) in &self.topology.loops[l].1 {
                        if let Some(col) = own(j) {
                            m.add_triplet(row, col, sign);
                        }
                    }
                }
            }
            Mode::Tie { .. } => add_voltage(m, row, b.a, b.b, 1.0),
            Mode::Voltage(s) => {
                add_voltage(m, row, b.a, b.b, 1.0);
                self.control_terms(net, m, s, row, theta);
            }
            Mode::Current(s) => {
                m.add_triplet(row, row, 1.0);
                self.control_terms(net, m, s, row, theta);
            }
            Mode::Inductance(_) => {}
        }
    }

    fn control_terms(&self, net: &Network, m: &mut TriMat<f64>, s: usize, row: usize, theta: f64) {
        for &(col, c) in &self.control[s].y {
            m.add_triplet(row, col, -c);
        }
        for &(j, c) in &self.control[s].il {
            for &(i, w) in &net.inductances[j].inverse {
                let of = &net.branches[net.inductances[i].branch];
                add_voltage(m, row, of.a, of.b, -c * theta * w);
            }
        }
    }

    /// Right side for bases, sources and derivative `order` (0: values, 1: rates).
    fn right_side(
        &self,
        net: &Network,
        vc: &[f64],
        il: &[f64],
        drive: &Drive,
        order: usize,
        out: &mut [f64],
    ) {
        out.fill(0.0);
        let base = net.nodes - 1;
        let constant = if order == 0 { 1.0 } else { 0.0 };
        let leaving = |out: &mut [f64], k: usize, current: f64| {
            let b = &net.branches[k];
            if let Some(r) = potential(b.a).filter(|_| self.replaced[b.a] == 0) {
                out[r] -= current;
            }
            if let Some(r) = potential(b.b).filter(|_| self.replaced[b.b] == 0) {
                out[r] += current;
            }
        };
        for (k, b) in net.branches.iter().enumerate() {
            match (b.current, self.topology.modes[k]) {
                (None, Mode::Resistive { siemens, offset }) => {
                    if offset != 0.0 {
                        leaving(out, k, -siemens * offset * constant);
                    }
                }
                (None, Mode::Inductance(j)) => leaving(out, k, il[j]),
                (None, Mode::Current(s)) => leaving(out, k, drive.jets[s][order]),
                (None, _) => {}
                (Some(c), mode) => {
                    let row = base + c;
                    out[row] = match (mode, self.loop_of[k]) {
                        (Mode::Capacitance(_), Some(l)) => -self.loop_drive(l, drive, order + 1),
                        (Mode::Capacitance(c), None) => vc[c],
                        (Mode::Tie { offset }, None) => offset * constant,
                        (Mode::Resistive { siemens, offset }, _) => siemens * offset * constant,
                        (Mode::Voltage(s), None) | (Mode::Current(s), _) => {
                            let f = &self.control[s];
                            drive.jets[s][order]
                                + f.constant * constant
                                + f.il.iter().map(|&(j, c)| c * il[j]).sum::<f64>()
                                + f.source
                                    .iter()
                                    .map(|&(j, c)| c * drive.jets[j][order])
                                    .sum::<f64>()
                        }
                        _ => 0.0,
                    };
                }
            }
        }
        for (node, cut) in &self.topology.cuts {
            if let Some(row) = potential(*node) {
                out[row] = -self.cut_drive(cut, drive, order + 1);
            }
        }
        for (&node, &v) in self.topology.held.iter().zip(&self.held) {
            if let Some(row) = potential(node) {
                out[row] = v * constant;
            }
        }
    }

    fn loop_drive(&self, l: usize, drive: &Drive, order: usize) -> f64 {
        let around = &self.topology.loops[l].1;
        around
            .iter()
            .map(|&(j, sign)| {
                if let Mode::Voltage(s) = self.topology.modes[j] {
                    sign * drive.jets[s][order]
                } else {
                    0.0
                }
            })
            .sum()
    }

    fn cut_drive(&self, cut: &[(usize, f64)], drive: &Drive, order: usize) -> f64 {
        cut.iter()
            .map(|&(j, sign)| {
                if let Mode::Current(s) = self.topology.modes[j] {
                    sign * drive.jets[s][order]
                } else {
                    0.0
                }
            })
            .sum()
    }

    /// Factorises M(θ) unless that is at hand, and returns its index.
    fn factor(&mut self, net: &Network, theta: f64) -> Result<usize, usize> {
        let bits = theta.to_bits();
        if let Some(i) = self.factors.iter().position(|(b, _)| *b == bits) {
            return Ok(i);
        }
        let f = Factor::like(
            self.factors.last().map(|(_, f)| f),
            &self.assemble(net, theta),
        )
        .map_err(|s| s.column.unwrap_or(usize::MAX))?;
        self.factorisations += 1;
        let kept = if net.unknowns() > LARGE {
            FACTORS_KEPT_LARGE
        } else {
            FACTORS_KEPT
        };
        if self.factors.len() >= kept {
            self.factors.remove(0);
        }
        self.factors.push((bits, f));
        Ok(self.factors.len() - 1)
    }

    /// Solves for the point at `point.time`, whose sources are taken, from bases in `point.vc`
    /// and `point.il`; both are brought up to date, and the rates `dvc`, `dil` with them.
    ///
    /// # Errors
    ///
    /// [`Failure::Singular`].
    pub fn solve(
        &mut self,
        net: &Network,
        setup: &Setup,
        theta: f64,
        point: &mut Point,
    ) -> Result<(), Failure> {
        point.y.resize(net.unknowns(), 0.0);
        let mut y = std::mem::take(&mut point.y);
        self.right_side(net, &point.vc, &point.il, &point.sources, 0, &mut y);
        let i = self
            .factor(net, theta)
            .map_err(|column| self.singular(net, setup, column, point.time))?;
        self.factors[i].1.solve(&mut y);
        point.y = y;
        let base = net.nodes - 1;
        for (c, cap) in net.capacitances.iter().enumerate() {
            let b = &net.branches[cap.branch];
            let current = b.current.map_or(0.0, |k| point.y[base + k]);
            point.dvc[c] = current / cap.farads;
            if self.dependent(cap.branch) {
                point.vc[c] = volts(&point.y, b.a, b.b);
            } else {
                point.vc[c] += theta * point.dvc[c];
            }
        }
        for (j, l) in net.inductances.iter().enumerate() {
            point.dil[j] = l
                .inverse
                .iter()
                .map(|&(i, w)| {
                    let of = &net.branches[net.inductances[i].branch];
                    w * volts(&point.y, of.a, of.b)
                })
                .sum();
            point.il[j] += theta * point.dil[j];
        }
        self.close_cuts(&point.sources, &mut point.il);
        Ok(())
    }

    /// Sets the currents that cuts give from the others and the sources.
    pub(crate) fn close_cuts(&self, drive: &Drive, il: &mut [f64]) {
        for (_, cut) in &self.topology.cuts {
            self.close_cut(cut, drive, il);
        }
    }

    /// The capacitances that no loop gives and the inductances that no cut gives.
    pub(crate) fn independent(&self, net: &Network) -> (Vec<usize>, Vec<usize>) {
        let mut given = vec![false; net.inductances.len()];
        for (_, cut) in &self.topology.cuts {
            if let Some(&(k, _)) = cut.first()
                && let Mode::Inductance(j) = self.topology.modes[k]
            {
                given[j] = true;
            }
        }
        (
            (0..net.capacitances.len())
                .filter(|&c| !self.dependent(net.capacitances[c].branch))
                .collect(),
            (0..net.inductances.len()).filter(|&j| !given[j]).collect(),
        )
    }

    /// Makes ready for exact propagation over a stretch: where it starts, and an instant inside it.
    ///
    /// # Errors
    ///
    /// [`Failure::NotExact`], [`Failure::Singular`].
    pub(crate) fn prepare(
        &mut self,
        net: &Network,
        setup: &Setup,
        stretch: (f64, f64),
    ) -> Result<(), Failure> {
        if let Some(system) = &mut self.exact
            && system.moved(net, setup, stretch)?
        {
            return Ok(());
        }
        self.exact = Some(Box::new(System::new(self, net, setup, stretch)?));
        Ok(())
    }

    /// Norm of the matrix of exact propagation, 1/s; 0 where it is not made ready.
    pub(crate) fn exact_norm(&self) -> f64 {
        self.exact.as_ref().map_or(0.0, |s| s.propagator.norm())
    }

    /// Propagates a point by `h` exactly, into `to`, whose time and sources are taken; the matrix of
    /// the step is kept unless it is for `once`.
    ///
    /// # Errors
    ///
    /// [`Failure::Singular`].
    pub(crate) fn propagate(
        &mut self,
        net: &Network,
        setup: &Setup,
        from: &Point,
        (h, once): (f64, bool),
        to: &mut Point,
    ) -> Result<(), Failure> {
        if let Some(system) = &mut self.exact {
            let mut x = system.states(from);
            if once {
                system.propagator.advance_once(h, &mut x);
            } else {
                system.propagator.advance(h, &mut x);
            }
            system.write(&x, to);
        }
        self.close_cuts(&to.sources, &mut to.il);
        self.solve(net, setup, 0.0, to)
    }

    /// Sets the current of a cut's own inductance, its first entry, from the others.
    fn close_cut(&self, cut: &[(usize, f64)], drive: &Drive, il: &mut [f64]) {
        let Some((&(own, sign), others)) = cut.split_first() else {
            return;
        };
        let sum: f64 = others
            .iter()
            .map(|&(k, s)| match self.topology.modes[k] {
                Mode::Inductance(j) => s * il[j],
                Mode::Current(c) => s * drive.jets[c][0],
                _ => 0.0,
            })
            .sum();
        if let Mode::Inductance(j) = self.topology.modes[own] {
            il[j] = -sum * sign;
        }
    }

    /// Fills in the rates of change of all unknowns at a solved point.
    ///
    /// # Errors
    ///
    /// [`Failure::Singular`].
    pub fn slopes(
        &mut self,
        net: &Network,
        setup: &Setup,
        point: &mut Point,
    ) -> Result<(), Failure> {
        point.dy.resize(net.unknowns(), 0.0);
        let mut dy = std::mem::take(&mut point.dy);
        self.right_side(net, &point.dvc, &point.dil, &point.sources, 1, &mut dy);
        let i = self
            .factor(net, 0.0)
            .map_err(|column| self.singular(net, setup, column, point.time))?;
        self.factors[i].1.solve(&mut dy);
        point.dy = dy;
        Ok(())
    }

    fn singular(&self, net: &Network, setup: &Setup, column: usize, time: f64) -> Failure {
        let touching = |n: usize| {
            if n + 1 < net.nodes {
                net.branches
                    .iter()
                    .filter(|b| b.a == n + 1 || b.b == n + 1)
                    .map(|b| b.part)
                    .collect()
            } else {
                net.branches
                    .iter()
                    .filter(|b| b.current == Some(n + 1 - net.nodes))
                    .map(|b| b.part)
                    .collect::<Vec<_>>()
            }
        };
        let mut parts = if column == usize::MAX {
            Vec::new()
        } else {
            touching(column)
        };
        parts.extend(
            net.sources
                .iter()
                .filter(|s| !s.terms.is_empty())
                .map(|s| net.branches[s.branch].part),
        );
        parts.sort_unstable();
        parts.dedup();
        Failure::Singular {
            names: parts.iter().take(8).map(|&p| name(setup, p)).collect(),
            time,
        }
    }

    /// The rate of change of the dynamic state by the circuit alone, sources silent: the product
    /// of the state matrix with (`vc`, `il`), into (`dvc`, `dil`).
    ///
    /// # Errors
    ///
    /// [`Failure::Singular`].
    pub fn homogeneous(
        &mut self,
        net: &Network,
        setup: &Setup,
        vc: &[f64],
        il: &[f64],
    ) -> Result<(Vec<f64>, Vec<f64>), Failure> {
        let silent = Drive {
            jets: vec![[0.0; 3]; net.sources.len()],
        };
        self.response(net, setup, vc, il, &silent, 1)
    }

    /// Rates of change of the states at (`vc`, `il`), whose cuts are closed: with constants and
    /// sources as they are (`order` 0), or of derivatives (`order` 1: `[_, value, rate]` of each source).
    pub(crate) fn response(
        &mut self,
        net: &Network,
        setup: &Setup,
        vc: &[f64],
        il: &[f64],
        drive: &Drive,
        order: usize,
    ) -> Result<(Vec<f64>, Vec<f64>), Failure> {
        let mut y = vec![0.0; net.unknowns()];
        self.right_side(net, vc, il, drive, order, &mut y);
        let i = self
            .factor(net, 0.0)
            .map_err(|column| self.singular(net, setup, column, 0.0))?;
        self.factors[i].1.solve(&mut y);
        let base = net.nodes - 1;
        let dvc = net
            .capacitances
            .iter()
            .map(|c| net.branches[c.branch].current.map_or(0.0, |k| y[base + k]) / c.farads)
            .collect();
        let dil = net
            .inductances
            .iter()
            .map(|l| {
                l.inverse
                    .iter()
                    .map(|&(i, w)| {
                        let of = &net.branches[net.inductances[i].branch];
                        w * volts(&y, of.a, of.b)
                    })
                    .sum()
            })
            .collect();
        Ok((dvc, dil))
    }
}

/// A voltage between two nodes among the unknowns, V.
#[must_use]
pub fn volts(y: &[f64], a: usize, b: usize) -> f64 {
    let of = |n: usize| potential(n).map_or(0.0, |k| y[k]);
    of(a) - of(b)
}

fn add_voltage(m: &mut TriMat<f64>, row: usize, a: usize, b: usize, k: f64) {
    if a == b {
        return;
    }
    if let Some(c) = potential(a) {
        m.add_triplet(row, c, k);
    }
    if let Some(c) = potential(b) {
        m.add_triplet(row, c, -k);
    }
}
