//! The graph of a circuit in one state of its switches and diodes.
//!
//! A *normal tree* is grown over the branches in the order: ideal connections and voltage
//! sources, capacitances, resistances, inductances, each joining two components that nothing
//! before has joined. Whatever closes a loop or cuts the circuit is then known by its names,
//! before any number is factored:
//!
//! - a voltage source or connection left out of the tree closes a loop of its like: either its
//!   voltages add up to zero identically and its current is not determined (the least sum of
//!   squares is taken), or there is no answer;
//! - a capacitance left out closes a loop of capacitances and voltage sources: its voltage is
//!   given by the others (index 2);
//! - an inductance in the tree belongs to a cut of inductances and current sources: its current
//!   is given by the others (index 2);
//! - a component that no branch joins to ground is an island: one of its nodes is held; a
//!   current source into it has no answer, unless the currents add up to zero identically.

use pulsewright_circuit::formula::Formula;
use pulsewright_circuit::setup::Setup;

use crate::failure::Failure;
use crate::network::{Law, Network, name};

/// What a branch is in one state.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Mode {
    /// No current.
    Open,
    /// A constant voltage `offset`, 0 for an ideal connection, V.
    Tie {
        /// V.
        offset: f64,
    },
    /// v = offset + i / siemens.
    Resistive {
        /// Conductance, S.
        siemens: f64,
        /// V.
        offset: f64,
    },
    /// A capacitance, by index.
    Capacitance(usize),
    /// An inductance, by index.
    Inductance(usize),
    /// A voltage source, by index.
    Voltage(usize),
    /// A current source, by index.
    Current(usize),
}

/// A loop or a cut: branches with the sign in which they are passed.
pub type Signed = Vec<(usize, f64)>;

/// The graph in one state.
#[derive(Debug)]
pub struct Topology {
    /// What each branch is.
    pub modes: Vec<Mode>,
    /// For ties and sources out of the tree, and capacitances out of it: the loop they close,
    /// themselves first, as passed from their first node to their second and back.
    pub loops: Vec<(usize, Signed)>,
    /// For inductances in the tree: the cut they belong to, and the node whose balance of
    /// currents it replaces; signs are of currents leaving that node's side.
    pub cuts: Vec<(usize, Signed)>,
    /// The component of each node; that of ground is 0.
    pub component: Vec<usize>,
    /// One node of each island.
    pub held: Vec<usize>,
    /// Whether any loop has an undetermined current.
    pub undetermined: Vec<usize>,
}

struct Tree {
    /// Branch towards the root, and its sign going up.
    up: Vec<Option<(usize, f64)>>,
    depth: Vec<u32>,
}

impl Topology {
    /// The graph in a state of the parts; `time` is for messages.
    ///
    /// # Errors
    ///
    /// [`Failure::SourceLoop`] and [`Failure::CurrentCut`].
    pub fn new(
        net: &Network,
        setup: &Setup,
        states: &[u8],
        time: f64,
    ) -> Result<Topology, Failure> {
        let modes: Vec<Mode> = net
            .branches
            .iter()
            .map(|b| mode(&b.law, states.get(b.part).copied().unwrap_or(0)))
            .collect();
        let mut groups = Groups::new(net.nodes);
        let mut in_tree = vec![false; modes.len()];
        for rank in 0..4 {
            for (k, m) in modes.iter().enumerate() {
                if rank_of(*m) == Some(rank) {
                    let b = &net.branches[k];
                    in_tree[k] = groups.join(b.a, b.b);
                }
            }
        }
        let tree = grow(net, &in_tree);
        let (component, held) = components(net, &mut groups);
        let mut topology = Topology {
            modes,
            loops: Vec::new(),
            cuts: Vec::new(),
            component,
            held,
            undetermined: Vec::new(),
        };
        topology.check_islands(net, setup, time)?;
        topology.find_loops(net, setup, &in_tree, &tree, time)?;
        topology.find_cuts(net, &in_tree, &tree);
        Ok(topology)
    }

    fn check_islands(&self, net: &Network, setup: &Setup, time: f64) -> Result<(), Failure> {
        let mut into: std::collections::BTreeMap<usize, Vec<(usize, f64)>> =
            std::collections::BTreeMap::new();
        for (k, m) in self.modes.iter().enumerate() {
            let Mode::Current(s) = m else { continue };
            let (a, b) = (
                self.component[net.branches[k].a],
                self.component[net.branches[k].b],
            );
            if a != b {
                into.entry(a).or_default().push((*s, -1.0));
                into.entry(b).or_default().push((*s, 1.0));
            }
        }
        into.remove(&0);
        for (island, sources) in into {
            let terms: Vec<(Formula, f64)> = sources
                .iter()
                .map(|&(s, sign)| (net.sources[s].whole.clone(), sign))
                .collect();
            if !sums_to_zero(&terms) {
                let mut parts: Vec<usize> = sources
                    .iter()
                    .map(|&(s, _)| net.branches[net.sources[s].branch].part)
                    .collect();
                parts.sort_unstable();
                parts.dedup();
                let nodes = (0..setup.nodes.len())
                    .filter(|&n| self.component[n] == island)
                    .map(|n| setup.nodes[n].clone())
                    .collect();
                return Err(Failure::CurrentCut {
                    names: parts.iter().map(|&p| name(setup, p)).collect(),
                    parts,
                    nodes,
                    time,
                });
            }
        }
        Ok(())
    }

    fn find_loops(
        &mut self,
        net: &Network,
        setup: &Setup,
        in_tree: &[bool],
        tree: &Tree,
        time: f64,
    ) -> Result<(), Failure> {
        for k in 0..self.modes.len() {
            let link = !in_tree[k]
                && matches!(
                    self.modes[k],
                    Mode::Tie { .. } | Mode::Voltage(_) | Mode::Capacitance(_)
                );
            if !link {
                continue;
            }
            let b = &net.branches[k];
            let mut around = vec![(k, 1.0)];
            around.extend(path(net, tree, b.b, b.a));
            if !matches!(self.modes[k], Mode::Capacitance(_)) {
                let parts = || {
                    let mut all: Vec<usize> =
                        around.iter().map(|&(j, _)| net.branches[j].part).collect();
                    all.sort_unstable();
                    all.dedup();
                    all
                };
                let terms: Vec<(Formula, f64)> = around
                    .iter()
                    .map(|&(j, sign)| match self.modes[j] {
                        Mode::Voltage(s) => (net.sources[s].whole.clone(), sign),
                        Mode::Tie { offset } => (Formula::Number(offset), sign),
                        _ => (Formula::Number(f64::NAN), sign),
                    })
                    .collect();
                if !sums_to_zero(&terms) {
                    let parts = parts();
                    return Err(Failure::SourceLoop {
                        names: parts.iter().map(|&p| name(setup, p)).collect(),
                        parts,
                        time,
                    });
                }
                self.undetermined.extend(parts());
            }
            self.loops.push((k, around));
        }
        self.undetermined.sort_unstable();
        self.undetermined.dedup();
        Ok(())
    }

    /// Every inductance or current source that runs along a tree inductance is in its cut.
    fn find_cuts(&mut self, net: &Network, in_tree: &[bool], tree: &Tree) {
        let mut cuts: std::collections::BTreeMap<usize, Signed> = std::collections::BTreeMap::new();
        for (k, m) in self.modes.iter().enumerate() {
            if in_tree[k] && matches!(m, Mode::Inductance(_)) {
                cuts.insert(k, Vec::new());
            }
        }
        if cuts.is_empty() {
            return;
        }
        let mut child = std::collections::BTreeMap::new();
        for (node, up) in tree.up.iter().enumerate() {
            if let Some((k, sign)) = up
                && let Some(cut) = cuts.get_mut(k)
            {
                cut.push((*k, *sign));
                child.insert(*k, node);
            }
        }
        for (k, m) in self.modes.iter().enumerate() {
            let crossing =
                matches!(m, Mode::Current(_)) || (!in_tree[k] && matches!(m, Mode::Inductance(_)));
            if !crossing {
                continue;
            }
            let b = &net.branches[k];
            if self.component[b.a] != self.component[b.b] {
                continue;
            }
            // The path from a to b passes tree branch j upwards where a is on the child's side.
            for (j, sign) in path(net, tree, b.a, b.b) {
                let Some(cut) = cuts.get_mut(&j) else {
                    continue;
                };
                let up = child
                    .get(&j)
                    .and_then(|&n| tree.up[n])
                    .map_or(1.0, |(_, s)| s);
                cut.push((k, if sign == up { 1.0 } else { -1.0 }));
            }
        }
        self.cuts = cuts
            .into_iter()
            .filter_map(|(k, cut)| child.get(&k).map(|&node| (node, cut)))
            .collect();
    }

    /// Whether a voltage between two nodes depends on the potential at which an island is held.
    #[must_use]
    pub fn floats(&self, a: usize, b: usize) -> bool {
        self.component[a] != self.component[b]
    }
}

/// What a law is in a state of its part.
#[must_use]
pub fn mode(law: &Law, state: u8) -> Mode {
    match law {
        Law::Resistance(r) => Mode::Resistive {
            siemens: 1.0 / r,
            offset: 0.0,
        },
        Law::Short => Mode::Tie { offset: 0.0 },
        Law::Capacitance(k) => Mode::Capacitance(*k),
        Law::Inductance(k) => Mode::Inductance(*k),
        Law::Voltage(k) => Mode::Voltage(*k),
        Law::Current(k) => Mode::Current(*k),
        Law::Contact {
            state: when,
            made,
            left,
        } => {
            let ohms = if state == *when { *made } else { *left };
            resistive(ohms, 0.0)
        }
        Law::Valve { threshold, slope } => {
            if state == 1 {
                resistive(*slope, *threshold)
            } else {
                Mode::Open
            }
        }
    }
}

fn resistive(ohms: f64, offset: f64) -> Mode {
    if ohms == 0.0 {
        Mode::Tie { offset }
    } else if ohms.is_infinite() {
        Mode::Open
    } else {
        Mode::Resistive {
            siemens: 1.0 / ohms,
            offset,
        }
    }
}

fn rank_of(m: Mode) -> Option<u8> {
    match m {
        Mode::Tie { .. } | Mode::Voltage(_) => Some(0),
        Mode::Capacitance(_) => Some(1),
        Mode::Resistive { .. } => Some(2),
        Mode::Inductance(_) => Some(3),
        Mode::Open | Mode::Current(_) => None,
    }
}

/// Whether a sum of formulas is zero whatever happens: constants that add up to zero, and equal
/// expressions that cancel.
fn sums_to_zero(terms: &[(Formula, f64)]) -> bool {
    let (mut constant, mut size) = (0.0, 0.0_f64);
    let mut counted: Vec<(&Formula, f64)> = Vec::new();
    for (f, sign) in terms {
        if f.is_constant() {
            let v = f.at(0.0);
            constant += sign * v;
            size = size.max(v.abs());
        } else if let Some(found) = counted.iter_mut().find(|(g, _)| *g == f) {
            found.1 += sign;
        } else {
            counted.push((f, *sign));
        }
    }
    constant.abs() <= 1e-12 * size && counted.iter().all(|(_, n)| *n == 0.0)
}

/// Union-find over nodes.
struct Groups {
    parent: Vec<usize>,
}

impl Groups {
    fn new(n: usize) -> Self {
        Groups {
            parent: (0..n).collect(),
        }
    }

    fn find(&mut self, mut k: usize) -> usize {
        while self.parent[k] != k {
            self.parent[k] = self.parent[self.parent[k]];
            k = self.parent[k];
        }
        k
    }

    /// Joins two groups; false where they were one already. The lower index leads.
    fn join(&mut self, a: usize, b: usize) -> bool {
        let (a, b) = (self.find(a), self.find(b));
        self.parent[a.max(b)] = a.min(b);
        a != b
    }
}

fn components(net: &Network, groups: &mut Groups) -> (Vec<usize>, Vec<usize>) {
    let component: Vec<usize> = (0..net.nodes).map(|n| groups.find(n)).collect();
    let held = (1..net.nodes).filter(|&n| component[n] == n).collect();
    (component, held)
}

/// Roots the tree at ground, and at the first node of each island.
fn grow(net: &Network, in_tree: &[bool]) -> Tree {
    let mut next: Vec<Vec<(usize, usize)>> = vec![Vec::new(); net.nodes];
    for (k, b) in net.branches.iter().enumerate() {
        if in_tree[k] {
            next[b.a].push((k, b.b));
            next[b.b].push((k, b.a));
        }
    }
    let mut tree = Tree {
        up: vec![None; net.nodes],
        depth: vec![u32::MAX; net.nodes],
    };
    let mut queue = Vec::new();
    for root in 0..net.nodes {
        if tree.depth[root] != u32::MAX {
            continue;
        }
        tree.depth[root] = 0;
        queue.push(root);
        while let Some(n) = queue.pop() {
            for &(k, m) in &next[n] {
                if tree.depth[m] == u32::MAX {
                    tree.depth[m] = tree.depth[n] + 1;
                    tree.up[m] = Some((k, if net.branches[k].a == m { 1.0 } else { -1.0 }));
                    queue.push(m);
                }
            }
        }
    }
    tree
}

/// The branches passed from one node to another in the tree; +1 where passed from their first
/// node to their second.
fn path(net: &Network, tree: &Tree, from: usize, to: usize) -> Signed {
    let (mut a, mut b) = (from, to);
    let (mut up, mut down) = (Vec::new(), Vec::new());
    while a != b {
        if tree.depth[a] >= tree.depth[b] {
            let Some((k, sign)) = tree.up[a] else { break };
            up.push((k, sign));
            a = other(net, k, a);
        } else {
            let Some((k, sign)) = tree.up[b] else { break };
            down.push((k, -sign));
            b = other(net, k, b);
        }
    }
    down.reverse();
    up.extend(down);
    up
}

fn other(net: &Network, branch: usize, node: usize) -> usize {
    let b = &net.branches[branch];
    if b.a == node { b.b } else { b.a }
}
