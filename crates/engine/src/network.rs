//! A circuit taken apart into branches of one law each.
//!
//! A capacitor with leakage and series resistance becomes three branches with an inner node,
//! a winding becomes a resistance behind its inductance, a changeover two contacts:
//!
//! ```text
//!   bank from a to b, series, leakage      a --series-- m --C-- b
//!                                                       m --leak-- b
//! ```
//!
//! The order of the branches of a part is fixed: the ideal element first. Nodes of the setup keep
//! their numbers (0 is ground), inner ones follow.

use std::ops::Range;

use pulsewright_circuit::formula::{Formula, Probe};
use pulsewright_circuit::setup::{Element, Ohms, SetControl, Setup};

use crate::failure::Failure;

/// Below so many ohms a resistance's current is an unknown of its own: as a difference of two
/// large voltages over a small resistance it would lose its digits.
const OWN_CURRENT_BELOW: f64 = 10.0;

/// One branch, from node `a` to node `b`.
#[derive(Clone, Debug)]
pub struct Branch {
    /// The part it belongs to.
    pub part: usize,
    /// First node.
    pub a: usize,
    /// Second node.
    pub b: usize,
    /// Its law.
    pub law: Law,
    /// Index of its own current among the unknowns, where it has one.
    pub current: Option<usize>,
}

/// The law of a branch. Indices are into [`Network::capacitances`] and the like.
#[derive(Clone, Debug)]
pub enum Law {
    /// v = R i, R above 0 ohm.
    Resistance(f64),
    /// v = 0.
    Short,
    /// i = C v'.
    Capacitance(usize),
    /// v = L i', mutual inductances included.
    Inductance(usize),
    /// v = e(t).
    Voltage(usize),
    /// i = j(t).
    Current(usize),
    /// A contact, made while its part is in state `state`.
    Contact {
        /// The state that makes it.
        state: u8,
        /// Resistance when made, ohm; 0 is ideal.
        made: f64,
        /// Resistance when left, ohm; infinite is ideal.
        left: f64,
    },
    /// A valve: conducts from `a` to `b` in state 1.
    Valve {
        /// Voltage at which it begins to conduct, V.
        threshold: f64,
        /// Resistance while conducting, ohm.
        slope: f64,
    },
}

/// A capacitance.
#[derive(Clone, Debug)]
pub struct Capacitance {
    /// Its branch.
    pub branch: usize,
    /// F.
    pub farads: f64,
    /// Stated voltage, V.
    pub charged: Option<f64>,
}

/// An inductance.
#[derive(Clone, Debug)]
pub struct Inductance {
    /// Its branch.
    pub branch: usize,
    /// Stated current, A.
    pub carrying: Option<f64>,
    /// Row of the inductance matrix, H: own and mutual.
    pub henrys: Vec<(usize, f64)>,
    /// Row of its inverse, 1/H.
    pub inverse: Vec<(usize, f64)>,
}

/// A source: what time alone gives, and terms in signals with constant coefficients.
#[derive(Clone, Debug)]
pub struct Source {
    /// Its branch.
    pub branch: usize,
    /// The part of it that is known at any time, V or A.
    pub known: Formula,
    /// Whether `known` is constant.
    pub constant: bool,
    /// Controlling quantities and their coefficients.
    pub terms: Vec<(Probe, f64)>,
    /// The whole formula, for comparisons.
    pub whole: Formula,
}

/// The branches of a circuit.
#[derive(Clone, Debug, Default)]
pub struct Network {
    /// Number of nodes, ground and inner ones included.
    pub nodes: usize,
    /// The branches.
    pub branches: Vec<Branch>,
    /// The branches of each part.
    pub of_part: Vec<Range<usize>>,
    /// First and second node of each part (common contact and ground for a changeover).
    pub ends: Vec<(usize, usize)>,
    /// The capacitances.
    pub capacitances: Vec<Capacitance>,
    /// The inductances.
    pub inductances: Vec<Inductance>,
    /// The sources.
    pub sources: Vec<Source>,
    /// How many branches have a current of their own among the unknowns.
    pub currents: usize,
    /// Parts with states, and the states they start in.
    pub start: Vec<u8>,
    /// Mutual inductance of each coupling part: (inductance, inductance, H).
    pub mutual: Vec<Option<(usize, usize, f64)>>,
}

impl Network {
    /// Takes a setup apart.
    ///
    /// # Errors
    ///
    /// [`Failure::Limit`] past the limit of unknowns, [`Failure::NotYet`] for a source that is
    /// not linear in signals, [`Failure::Singular`] for windings that are not positive definite.
    pub fn new(setup: &Setup) -> Result<Network, Failure> {
        let mut net = Network {
            nodes: setup.nodes.len(),
            ..Network::default()
        };
        for (part, p) in setup.parts.iter().enumerate() {
            let first = net.branches.len();
            net.add(part, &p.element, setup)?;
            net.of_part.push(first..net.branches.len());
        }
        net.couple(setup)?;
        net.number(setup)?;
        Ok(net)
    }

    fn add(&mut self, part: usize, element: &Element, setup: &Setup) -> Result<(), Failure> {
        let mut ends = (0, 0);
        let mut start = 0;
        let mut mutual = None;
        match element {
            Element::Resistor { a, b, ohms } => {
                ends = (*a, *b);
                match ohms {
                    Ohms::Finite(r) => self.push(part, ends, Law::Resistance(*r)),
                    Ohms::Short => self.push(part, ends, Law::Short),
                    Ohms::Open => {}
                }
            }
            Element::Capacitor {
                a,
                b,
                farads,
                charged,
                series,
                leakage,
            } => {
                ends = (*a, *b);
                let inner = if *series > 0.0 { self.inner() } else { *a };
                let k = self.capacitances.len();
                let branch = self.branches.len();
                self.capacitances.push(Capacitance {
                    branch,
                    farads: *farads,
                    charged: *charged,
                });
                self.push(part, (inner, *b), Law::Capacitance(k));
                if let Some(r) = leakage {
                    self.push(part, (inner, *b), Law::Resistance(*r));
                }
                if *series > 0.0 {
                    self.push(part, (*a, inner), Law::Resistance(*series));
                }
            }
            Element::Inductor {
                a,
                b,
                henrys,
                carrying,
                winding,
            } => {
                ends = (*a, *b);
                let inner = if *winding > 0.0 { self.inner() } else { *b };
                let k = self.inductances.len();
                let branch = self.branches.len();
                self.inductances.push(Inductance {
                    branch,
                    carrying: *carrying,
                    henrys: vec![(k, *henrys)],
                    inverse: vec![(k, 1.0 / henrys)],
                });
                self.push(part, (*a, inner), Law::Inductance(k));
                if *winding > 0.0 {
                    self.push(part, (inner, *b), Law::Resistance(*winding));
                }
            }
            Element::Coupling {
                first,
                second,
                factor,
            } => mutual = Some((*first, *second, *factor)),
            Element::Wire { a, b } => {
                ends = (*a, *b);
                self.push(part, ends, Law::Short);
            }
            Element::Voltage { a, b, source } | Element::Current { a, b, source } => {
                ends = (*a, *b);
                let k = self.sources.len();
                let Some((known, terms)) = split(source) else {
                    return Err(Failure::NotYet(format!(
                        "the value of `{}` is not linear in signals with constant factors",
                        name(setup, part)
                    )));
                };
                let constant = known.is_constant();
                self.sources.push(Source {
                    branch: self.branches.len(),
                    known,
                    constant,
                    terms,
                    whole: source.clone(),
                });
                let law = if matches!(element, Element::Voltage { .. }) {
                    Law::Voltage(k)
                } else {
                    Law::Current(k)
                };
                self.push(part, ends, law);
            }
            Element::Switch {
                a,
                b,
                control,
                contact,
                insulation,
            } => {
                ends = (*a, *b);
                start = initial(setup, control);
                let law = contact_law(1, *contact, *insulation);
                self.push(part, ends, law);
            }
            Element::Changeover {
                common,
                contacts,
                at,
                contact,
                insulation,
                ..
            } => {
                ends = (*common, 0);
                start = u8::try_from(*at).unwrap_or(0);
                for (state, node) in (0..).zip(contacts) {
                    self.push(
                        part,
                        (*common, *node),
                        contact_law(state, *contact, *insulation),
                    );
                }
            }
            Element::Diode {
                a,
                b,
                threshold,
                slope,
            } => {
                ends = (*a, *b);
                self.push(
                    part,
                    ends,
                    Law::Valve {
                        threshold: *threshold,
                        slope: *slope,
                    },
                );
            }
            other => return Err(Failure::NotYet(format!("no equations yet for {other:?}"))),
        }
        self.ends.push(ends);
        self.start.push(start);
        self.mutual.push(mutual);
        Ok(())
    }

    fn push(&mut self, part: usize, (a, b): (usize, usize), law: Law) {
        self.branches.push(Branch {
            part,
            a,
            b,
            law,
            current: None,
        });
    }

    fn inner(&mut self) -> usize {
        self.nodes += 1;
        self.nodes - 1
    }

    /// Turns couplings of parts into rows of the inductance matrix and of its inverse.
    fn couple(&mut self, setup: &Setup) -> Result<(), Failure> {
        let of_part = |net: &Network, part: usize| {
            net.of_part
                .get(part)
                .and_then(|r| net.branches.get(r.start))
                .and_then(|b| match b.law {
                    Law::Inductance(k) => Some(k),
                    _ => None,
                })
        };
        let mut group: Vec<usize> = (0..self.inductances.len()).collect();
        for part in 0..self.mutual.len() {
            let Some((p, q, factor)) = self.mutual[part] else {
                continue;
            };
            let (Some(j), Some(k)) = (of_part(self, p), of_part(self, q)) else {
                continue;
            };
            let own = |i: usize| self.inductances[i].henrys[0].1;
            let m = factor * (own(j) * own(k)).sqrt();
            self.inductances[j].henrys.push((k, m));
            self.inductances[k].henrys.push((j, m));
            self.mutual[part] = Some((j, k, m));
            let (from, to) = (find(&mut group, j), find(&mut group, k));
            group[from] = to;
        }
        let mut members: std::collections::BTreeMap<usize, Vec<usize>> =
            std::collections::BTreeMap::new();
        for k in 0..group.len() {
            if self.inductances[k].henrys.len() > 1 {
                members.entry(find(&mut group, k)).or_default().push(k);
            }
        }
        for windings in members.values() {
            self.invert(windings, setup)?;
        }
        Ok(())
    }

    /// Inverts the inductance matrix of one group of coupled windings by Cholesky.
    fn invert(&mut self, windings: &[usize], setup: &Setup) -> Result<(), Failure> {
        let n = windings.len();
        let place = |k: usize| windings.iter().position(|&w| w == k);
        let mut l = vec![0.0; n * n];
        for (i, &k) in windings.iter().enumerate() {
            for &(j, h) in &self.inductances[k].henrys {
                if let Some(j) = place(j) {
                    l[i * n + j] += h;
                }
            }
        }
        for i in 0..n {
            for j in 0..=i {
                let sum: f64 = (0..j).map(|k| l[i * n + k] * l[j * n + k]).sum();
                let rest = l[i * n + j] - sum;
                if i == j {
                    if rest.is_nan() || rest <= 1e-14 * l[i * n + i].abs() {
                        let names = windings
                            .iter()
                            .map(|&k| name(setup, self.branches[self.inductances[k].branch].part))
                            .collect();
                        return Err(Failure::Singular { names, time: 0.0 });
                    }
                    l[i * n + i] = rest.sqrt();
                } else {
                    l[i * n + j] = rest / l[j * n + j];
                }
            }
        }
        for (c, &k) in windings.iter().enumerate() {
            let mut x = vec![0.0; n];
            for i in c..n {
                let sum: f64 = (c..i).map(|j| l[i * n + j] * x[j]).sum();
                x[i] = (if i == c { 1.0 } else { 0.0 } - sum) / l[i * n + i];
            }
            for i in (0..n).rev() {
                let sum: f64 = (i + 1..n).map(|j| l[j * n + i] * x[j]).sum();
                x[i] = (x[i] - sum) / l[i * n + i];
            }
            self.inductances[k].inverse = windings.iter().copied().zip(x).collect();
        }
        Ok(())
    }

    /// Gives every branch that needs one a current among the unknowns.
    fn number(&mut self, setup: &Setup) -> Result<(), Failure> {
        let sensed: Vec<usize> = self
            .sources
            .iter()
            .flat_map(|s| s.terms.iter())
            .filter_map(|(p, _)| match p {
                Probe::CurrentThrough(part) | Probe::BranchCurrent(part, _) => Some(*part),
                _ => None,
            })
            .collect();
        let mut next = 0;
        for branch in &mut self.branches {
            let own = match &branch.law {
                Law::Resistance(ohms) => *ohms < OWN_CURRENT_BELOW,
                Law::Inductance(_) => false,
                Law::Short | Law::Capacitance(_) | Law::Voltage(_) => true,
                Law::Current(k) => {
                    !self.sources[*k].terms.is_empty() || sensed.contains(&branch.part)
                }
                Law::Contact { made, .. } => *made < OWN_CURRENT_BELOW,
                Law::Valve { slope, .. } => *slope < OWN_CURRENT_BELOW,
            };
            if own {
                branch.current = Some(next);
                next += 1;
            }
        }
        self.currents = next;
        let unknowns = self.unknowns() as u64;
        if unknowns > setup.limits.unknowns {
            return Err(Failure::Limit {
                limit: "unknowns",
                allowed: setup.limits.unknowns,
                time: 0.0,
            });
        }
        Ok(())
    }

    /// Number of unknowns: node potentials but ground's, then currents.
    #[must_use]
    pub fn unknowns(&self) -> usize {
        self.nodes - 1 + self.currents
    }

    /// The (branch, sign) pairs whose currents add up to the current through a part.
    #[must_use]
    pub fn terminal(&self, part: usize) -> Vec<(usize, f64)> {
        let Some(range) = self.of_part.get(part).cloned() else {
            return Vec::new();
        };
        let Some(first) = self.branches.get(range.start) else {
            return Vec::new();
        };
        if range.is_empty() {
            return Vec::new();
        }
        match first.law {
            Law::Capacitance(_) => {
                let (a, _) = self.ends[part];
                range
                    .filter(|&k| self.branches[k].a == a)
                    .map(|k| (k, 1.0))
                    .collect()
            }
            Law::Inductance(_) => vec![(range.start, 1.0)],
            _ => range.map(|k| (k, 1.0)).collect(),
        }
    }
}

/// A part's name.
#[must_use]
pub fn name(setup: &Setup, part: usize) -> String {
    setup
        .parts
        .get(part)
        .map_or_else(String::new, |p| p.name.clone())
}

fn contact_law(state: u8, contact: Option<f64>, insulation: Option<f64>) -> Law {
    Law::Contact {
        state,
        made: contact.unwrap_or(0.0),
        left: insulation.unwrap_or(f64::INFINITY),
    }
}

/// The state a switch starts in, through any chain of gangs.
fn initial(setup: &Setup, control: &SetControl) -> u8 {
    let mut control = control;
    for _ in 0..=setup.parts.len() {
        match control {
            SetControl::Schedule { closed, .. } => return u8::from(*closed),
            SetControl::Ganged(other) => match setup.parts.get(*other).map(|p| &p.element) {
                Some(Element::Switch { control: c, .. }) => control = c,
                _ => return 0,
            },
        }
    }
    0
}

fn find(group: &mut [usize], mut k: usize) -> usize {
    while group[k] != k {
        group[k] = group[group[k]];
        k = group[k];
    }
    k
}

/// A formula as what is known plus terms in probes with constant coefficients; `None` where it
/// is not of that form.
fn split(f: &Formula) -> Option<(Formula, Vec<(Probe, f64)>)> {
    if f.probes().is_empty() {
        return Some((f.clone(), Vec::new()));
    }
    let zero = || Formula::Number(0.0);
    match f {
        Formula::Probe(p) => Some((zero(), vec![(*p, 1.0)])),
        Formula::Negative(a) => {
            let (k, t) = split(a)?;
            Some((Formula::Negative(Box::new(k)), scaled(t, -1.0)))
        }
        Formula::Add(a, b) | Formula::Subtract(a, b) => {
            let ((ka, mut ta), (kb, tb)) = (split(a)?, split(b)?);
            let minus = matches!(f, Formula::Subtract(..));
            ta.extend(scaled(tb, if minus { -1.0 } else { 1.0 }));
            let (ka, kb) = (Box::new(ka), Box::new(kb));
            Some((
                if minus {
                    Formula::Subtract(ka, kb)
                } else {
                    Formula::Add(ka, kb)
                },
                ta,
            ))
        }
        Formula::Multiply(a, b) => {
            let (factor, other) = if a.is_constant() { (a, b) } else { (b, a) };
            if !factor.is_constant() {
                return None;
            }
            let (k, t) = split(other)?;
            Some((
                Formula::Multiply(factor.clone(), Box::new(k)),
                scaled(t, factor.at(0.0)),
            ))
        }
        Formula::Divide(a, b) if b.is_constant() => {
            let (k, t) = split(a)?;
            Some((
                Formula::Divide(Box::new(k), b.clone()),
                scaled(t, 1.0 / b.at(0.0)),
            ))
        }
        _ => None,
    }
}

fn scaled(terms: Vec<(Probe, f64)>, k: f64) -> Vec<(Probe, f64)> {
    terms.into_iter().map(|(p, c)| (p, k * c)).collect()
}
