//! One topology's equations as `X' = A X`, sources included.
//!
//! The states are, in this order: the voltages of the capacitances that no loop gives, times √C; the
//! currents of the inductances that no cut gives, times √L (half the squared norm of these is, but
//! for coupling, the stored energy); for each varying source and exponential of it the complex
//! states of `terms.rs`, `c_j' = (a + i ω) c_j + c_(j+1)`, of which the real part of `c_0` is the source's value;
//! and 1, which all constants hang on. The columns of A are asked of the equations at an instant (θ = 0), one
//! unit at a time, so that loops, cuts, islands and controlled sources need no case of their own.

use pulsewright_circuit::setup::Setup;

use super::propagator::Propagator;
use super::terms::{Term, decompose};
use crate::equations::{Drive, Equations, Point};
use crate::failure::Failure;
use crate::network::{Network, name};

/// How many states are propagated at most.
const STATES: usize = 400;

/// The states of one exponential of a source.
#[derive(Clone, Debug)]
struct Chain {
    source: usize,
    term: Term,
    /// What its states are divided by: `first · growth^j`.
    first: f64,
}

/// A topology over a stretch.
#[derive(Clone, Debug)]
pub(crate) struct System {
    capacitances: Vec<usize>,
    inductances: Vec<usize>,
    /// Root of C or L of each of these.
    weights: Vec<f64>,
    chains: Vec<Chain>,
    /// Ratio of the scales of neighbouring states of a chain, 1/s.
    growth: f64,
    /// The constant part of each source.
    constants: Vec<f64>,
    /// What the state 1 is multiplied by.
    one: f64,
    /// Where the chains' time begins, s.
    origin: f64,
    pub(crate) propagator: Propagator,
}

/// What the sources are over a stretch: constant parts, and the rest.
struct Split {
    constants: Vec<f64>,
    chains: Vec<(usize, Term)>,
}

impl System {
    /// Reduces a topology over a stretch that starts at `origin` and holds the instant `inside`.
    ///
    /// # Errors
    ///
    /// [`Failure::NotExact`] for a source of another form or too many states.
    pub(crate) fn new(
        equations: &mut Equations,
        net: &Network,
        setup: &Setup,
        (origin, inside): (f64, f64),
    ) -> Result<System, Failure> {
        let split = split(net, setup, origin, inside)?;
        let (capacitances, inductances) = equations.independent(net);
        let n = capacitances.len() + inductances.len();
        let extra: usize = split.chains.iter().map(|(_, t)| width(t)).sum();
        if n + extra + 1 > STATES {
            return Err(Failure::NotExact {
                why: format!("the circuit has {n} states, and it goes up to {STATES}"),
            });
        }
        let henrys = |j: usize| net.inductances[j].henrys.first().map_or(1.0, |h| h.1);
        let weights: Vec<f64> = capacitances
            .iter()
            .map(|&c| net.capacitances[c].farads.sqrt())
            .chain(inductances.iter().map(|&j| henrys(j).sqrt()))
            .collect();
        let mut system = System {
            capacitances,
            inductances,
            weights,
            chains: Vec::new(),
            growth: 1.0 / setup.span,
            constants: split.constants,
            one: 1.0,
            origin,
            propagator: Propagator::new(0, Vec::new()),
        };
        let size = n + extra + 1;
        let mut a = vec![0.0; size * size];
        system.own_columns(equations, net, setup, size, &mut a)?;
        let mut at = n;
        for (source, term) in split.chains {
            let width = width(&term);
            let chain = system.chain(equations, net, setup, (source, term, at), (size, &mut a))?;
            system.chains.push(chain);
            at += width;
        }
        let drive = Drive {
            jets: system.constants.iter().map(|c| [*c, 0.0, 0.0]).collect(),
        };
        let column = system.response(equations, net, setup, None, &drive, 0)?;
        system.one = system.scale(&column);
        fill(&mut a, size, at, &column, system.one);
        system.propagator = Propagator::new(size, a);
        Ok(system)
    }

    /// Takes another stretch of the same topology if its sources are of the same kind; whether so.
    pub(crate) fn moved(
        &mut self,
        net: &Network,
        setup: &Setup,
        (origin, inside): (f64, f64),
    ) -> Result<bool, Failure> {
        let split = split(net, setup, origin, inside)?;
        let same = split.constants == self.constants
            && split.chains.len() == self.chains.len()
            && split.chains.iter().zip(&self.chains).all(|((s, t), c)| {
                *s == c.source
                    && t.rate == c.term.rate
                    && t.turn == c.term.turn
                    && t.poly.len() == c.term.poly.len()
            });
        if same {
            self.origin = origin;
            for ((_, term), chain) in split.chains.into_iter().zip(&mut self.chains) {
                chain.term = term;
            }
        }
        Ok(same)
    }

    /// The columns of the circuit's own states.
    fn own_columns(
        &mut self,
        equations: &mut Equations,
        net: &Network,
        setup: &Setup,
        size: usize,
        a: &mut [f64],
    ) -> Result<(), Failure> {
        let silent = Drive {
            jets: vec![[0.0; 3]; net.sources.len()],
        };
        let n = self.weights.len();
        for k in 0..n {
            let column = self.response(equations, net, setup, Some(k), &silent, 1)?;
            fill(a, size, k, &column, 1.0);
        }
        let sum = |row: &[f64]| row.iter().map(|x| x.abs()).sum::<f64>();
        let norm = a.chunks(size.max(1)).map(sum).fold(0.0, f64::max);
        self.growth = norm.max(1.0 / setup.span);
        Ok(())
    }

    /// The columns of a source's exponential: with value s and rate s' of the source,
    /// `s = Re c_0` and `s' = Re (a + i ω) c_0 + Re c_1`.
    fn chain(
        &self,
        equations: &mut Equations,
        net: &Network,
        setup: &Setup,
        (source, term, at): (usize, Term, usize),
        (size, a): (usize, &mut [f64]),
    ) -> Result<Chain, Failure> {
        let mut by = |value: f64, rate: f64| {
            let mut jets = vec![[0.0; 3]; net.sources.len()];
            if let Some(jet) = jets.get_mut(source) {
                *jet = [value, value, rate];
            }
            self.response(equations, net, setup, None, &Drive { jets }, 1)
        };
        let (value, rate) = (by(1.0, term.rate)?, by(0.0, 1.0)?);
        let turned: Vec<f64> = rate.iter().map(|x| -term.turn * x).collect();
        let first = self.scale(&value).min(self.scale(&turned));
        let parts = if term.turn == 0.0 { 1 } else { 2 };
        for j in 0..term.poly.len() {
            let real = at + parts * j;
            let scale = first * self.growth.powi(i32::try_from(j).unwrap_or(i32::MAX));
            match j {
                0 => fill(a, size, real, &value, scale),
                1 => fill(a, size, real, &rate, scale),
                _ => {}
            }
            if parts == 2 && j == 0 {
                fill(a, size, real + 1, &turned, scale);
            }
            let mut set = |r: usize, c: usize, x: f64| {
                if let Some(slot) = a.get_mut(r * size + c) {
                    *slot = x;
                }
            };
            for part in 0..parts {
                set(real + part, real + part, term.rate);
                if j + 1 < term.poly.len() {
                    set(real + part, real + parts + part, self.growth);
                }
            }
            if parts == 2 {
                set(real, real + 1, -term.turn);
                set(real + 1, real, term.turn);
            }
        }
        Ok(Chain {
            source,
            term,
            first,
        })
    }

    /// A state's scale that makes its column no larger than the circuit's own.
    fn scale(&self, column: &[f64]) -> f64 {
        let most = column.iter().fold(0.0_f64, |m, x| m.max(x.abs()));
        if most > 0.0 { self.growth / most } else { 1.0 }
    }

    /// Rates of change of the own states, in their coordinates: of one of them at 1, or of sources.
    fn response(
        &self,
        equations: &mut Equations,
        net: &Network,
        setup: &Setup,
        unit: Option<usize>,
        drive: &Drive,
        order: usize,
    ) -> Result<Vec<f64>, Failure> {
        let mut vc = vec![0.0; net.capacitances.len()];
        let mut il = vec![0.0; net.inductances.len()];
        if let Some(k) = unit {
            let inverse = 1.0 / self.weights[k];
            match k.checked_sub(self.capacitances.len()) {
                None => vc[self.capacitances[k]] = inverse,
                Some(j) => il[self.inductances[j]] = inverse,
            }
        }
        equations.close_cuts(drive, &mut il);
        let (dvc, dil) = equations.response(net, setup, &vc, &il, drive, order)?;
        let rates = self
            .capacitances
            .iter()
            .map(|&c| dvc[c])
            .chain(self.inductances.iter().map(|&j| dil[j]));
        Ok(rates.zip(&self.weights).map(|(d, w)| d * w).collect())
    }

    /// The states at a point.
    pub(crate) fn states(&self, p: &Point) -> Vec<f64> {
        let own = self
            .capacitances
            .iter()
            .map(|&c| p.vc[c])
            .chain(self.inductances.iter().map(|&j| p.il[j]));
        let mut x: Vec<f64> = own.zip(&self.weights).map(|(v, w)| v * w).collect();
        for chain in &self.chains {
            let mut scale = 1.0 / chain.first;
            for c in chain.term.states(p.time - self.origin) {
                x.push(c.re * scale);
                if chain.term.turn != 0.0 {
                    x.push(c.im * scale);
                }
                scale /= self.growth;
            }
        }
        x.push(1.0 / self.one);
        x
    }

    /// Writes the own states to a point.
    pub(crate) fn write(&self, x: &[f64], to: &mut Point) {
        let mut own = x.iter().zip(&self.weights).map(|(x, w)| x / w);
        for &c in &self.capacitances {
            to.vc[c] = own.next().unwrap_or(0.0);
        }
        for &j in &self.inductances {
            to.il[j] = own.next().unwrap_or(0.0);
        }
    }
}

/// How many states a term has.
fn width(t: &Term) -> usize {
    t.poly.len() * if t.turn == 0.0 { 1 } else { 2 }
}

fn fill(a: &mut [f64], size: usize, at: usize, column: &[f64], scale: f64) {
    for (row, x) in column.iter().enumerate() {
        if let Some(slot) = a.get_mut(row * size + at) {
            *slot = scale * x;
        }
    }
}

fn split(net: &Network, setup: &Setup, origin: f64, inside: f64) -> Result<Split, Failure> {
    let mut found = Split {
        constants: vec![0.0; net.sources.len()],
        chains: Vec::new(),
    };
    for (k, s) in net.sources.iter().enumerate() {
        let Some(terms) = decompose(&s.known, origin, inside) else {
            let part = name(setup, net.branches[s.branch].part);
            return Err(Failure::NotExact {
                why: format!(
                    "`{part}` is no sum of whole powers of t times exponentials and sines"
                ),
            });
        };
        for term in terms {
            match term.constant() {
                Some(c) => found.constants[k] += c,
                None => found.chains.push((k, term)),
            }
        }
    }
    Ok(found)
}
