//! The run of a shot: from jump to jump.
//!
//! ```text
//!   start: stated values, equalised
//!   loop:  march to the next known instant, or until a condition is met on the way   (march.rs)
//!          jump: actions due, source corners, restart with impulses, diodes          (jump.rs)
//! ```
//!
//! Here are the state that both share, and the loop. Times are never sums of steps: a stretch
//! knows where it starts and where its plan ends, and its mesh points are shares of that.

use std::collections::HashMap;

use pulsewright_circuit::draft::Method;
use pulsewright_circuit::formula::{Formula, Side};
use pulsewright_circuit::setup::Setup;

use crate::equations::{Equations, Point};
use crate::failure::Failure;
use crate::meter::Meter;
use crate::network::{Law, Network, name};
use crate::record::{Reader, floats, stored};
use crate::restart::Small;
use crate::rounding::Rounding;
use crate::schedule::Schedules;
use crate::shot::{Balance, Request, Shot, Stretch};
use crate::step::Rule;
use crate::topology::Mode;

/// Rounding of voltages and currents over the largest of them.
const NOISE: f64 = 1e-13;
/// Instants closer than this share of their size are one.
const SAME: f64 = 4.0 * f64::EPSILON;

/// Everything that changes during a run.
pub struct Run<'a> {
    pub(crate) setup: &'a Setup,
    pub(crate) request: &'a Request<'a>,
    pub(crate) net: Network,
    /// Equations by the states of the parts; the one in force is taken out as `now`.
    pub(crate) shelf: HashMap<Vec<u8>, Equations>,
    pub(crate) states: Vec<u8>,
    pub(crate) point: Point,
    /// A point's memory to be used again.
    pub(crate) spare: Point,
    pub(crate) schedules: Schedules,
    /// Known instants: corners of sources, landings, the span; ascending.
    pub(crate) instants: Vec<f64>,
    pub(crate) corners: Vec<f64>,
    /// Largest voltage and current so far.
    pub(crate) volts: f64,
    pub(crate) amperes: f64,
    /// What rounding alone amounts to.
    pub(crate) rounding: Rounding,
    /// Largest value of each state so far, for the step's tolerance.
    pub(crate) largest: Vec<f64>,
    pub(crate) shot: Shot,
    pub(crate) readers: Vec<Reader>,
    pub(crate) meters: Vec<Meter>,
    /// Instants of the latest events, for chatter.
    pub(crate) recent: std::collections::VecDeque<f64>,
}

impl<'a> Run<'a> {
    /// Sets a run up; nothing is fired yet.
    ///
    /// # Errors
    ///
    /// As [`Network::new`].
    pub fn new(setup: &'a Setup, request: &'a Request<'a>) -> Result<Run<'a>, Failure> {
        if setup.parts.len() as u64 > setup.limits.parts {
            return Err(Failure::Limit {
                limit: "parts",
                allowed: setup.limits.parts,
                time: 0.0,
            });
        }
        let net = Network::new(setup)?;
        let corners = corners(&net, setup.span);
        let landings = request
            .landings
            .iter()
            .copied()
            .filter(|t| *t > 0.0 && *t < setup.span);
        let mut instants: Vec<f64> = corners
            .iter()
            .copied()
            .chain(landings)
            .chain([setup.span])
            .collect();
        instants.sort_by(f64::total_cmp);
        instants.dedup_by(|a, b| same(*a, *b));
        let parts = setup.parts.len();
        let shot = Shot {
            probes: request.probes.clone(),
            balance: Balance {
                supplied: vec![0.0; parts],
                dissipated: vec![0.0; parts],
                ..Balance::default()
            },
            exact: setup.method == Method::Exact,
            smallest_step: f64::INFINITY,
            unknowns: net.unknowns(),
            ..Shot::default()
        };
        let meters = net
            .branches
            .iter()
            .enumerate()
            .filter_map(|(branch, b)| {
                let supplies = matches!(b.law, Law::Voltage(_) | Law::Current(_));
                let heats = matches!(
                    b.law,
                    Law::Resistance(_) | Law::Contact { .. } | Law::Valve { .. }
                );
                (supplies || heats).then_some(Meter {
                    branch,
                    part: b.part,
                    supplies,
                    before: crate::meter::Reading::default(),
                })
            })
            .collect();
        let states = net.start.clone();
        let largest = vec![0.0; net.capacitances.len() + net.inductances.len()];
        Ok(Run {
            setup,
            request,
            shelf: HashMap::new(),
            states,
            point: Point::default(),
            spare: Point::default(),
            schedules: Schedules::new(setup),
            instants,
            corners,
            volts: 0.0,
            amperes: 0.0,
            rounding: Rounding::new(&net, setup.span),
            largest,
            shot,
            readers: Vec::new(),
            meters,
            recent: std::collections::VecDeque::new(),
            net,
        })
    }

    /// Fires the shot.
    ///
    /// # Errors
    ///
    /// Any [`Failure`].
    pub fn fire(mut self) -> Result<Shot, Failure> {
        self.start()?;
        loop {
            let end = self.next_instant();
            let cause = self.march(end)?;
            if cause.is_none() && end >= self.setup.span {
                break;
            }
            self.jump(cause)?;
        }
        self.shot.balance.stored_end = stored(&self.net, &self.point.vc, &self.point.il);
        self.shot.largest = [self.volts, self.amperes];
        self.shot.noise = [
            (NOISE * self.volts).max(self.rounding.volts(self.amperes)),
            (NOISE * self.amperes).max(self.rounding.amperes(self.volts)),
        ];
        self.shot.factorisations = self.shelf.values().map(|e| e.factorisations).sum();
        if !self.shot.smallest_step.is_finite() {
            self.shot.smallest_step = 0.0;
        }
        Ok(self.shot)
    }

    /// The next known instant after the present one; the span at the latest.
    fn next_instant(&self) -> f64 {
        let t = self.point.time;
        let later = |x: f64| x > t && !same(x, t);
        let k = self.instants.partition_point(|x| !later(*x));
        let known = self.instants.get(k).copied().unwrap_or(self.setup.span);
        let mut from = t;
        let mut found = known;
        while let Some(x) = self.schedules.next_instant(from) {
            if later(x) {
                found = found.min(x);
                break;
            }
            from = x;
        }
        found
    }

    /// Takes the equations of the present states off the shelf.
    pub(crate) fn take_equations(
        &mut self,
        states: &[u8],
        time: f64,
    ) -> Result<Equations, Failure> {
        match self.shelf.remove(states) {
            Some(e) => Ok(e),
            None => Equations::new(&self.net, self.setup, states, time),
        }
    }

    /// Renews how the probes are read, in the topology of `equations`.
    pub(crate) fn renew_readers(&mut self, equations: &Equations) {
        let modes: &[Mode] = &equations.topology.modes;
        self.readers = self
            .request
            .probes
            .iter()
            .map(|p| Reader::new(&self.net, self.setup, modes, *p))
            .collect();
    }

    /// An empty stretch in the present states.
    pub(crate) fn stretch(&self, equations: &Equations) -> Stretch {
        let n = self.request.probes.len();
        Stretch {
            values: vec![Vec::new(); n],
            slopes: vec![Vec::new(); n],
            floating: self
                .request
                .probes
                .iter()
                .map(|p| floats(&self.net, &equations.topology, *p))
                .collect(),
            states: self.states.clone(),
            ..Stretch::default()
        }
    }

    /// Writes the probes at a point into a stretch.
    pub(crate) fn write(&self, stretch: &mut Stretch, p: &Point, share: f64) {
        stretch.times.push(p.time);
        stretch.shares.push(share);
        for (k, r) in self.readers.iter().enumerate() {
            let (value, slope) = r.read(p);
            stretch.values[k].push(value);
            stretch.slopes[k].push(slope);
        }
    }

    /// Keeps the largest values seen.
    pub(crate) fn keep_largest(&mut self, p: &Point) {
        for (m, x) in self.largest.iter_mut().zip(p.vc.iter().chain(&p.il)) {
            *m = m.max(x.abs());
        }
        let n = self.net.nodes - 1;
        let (v, i) = p.y.split_at(n.min(p.y.len()));
        self.volts = v.iter().fold(self.volts, |a, x| a.max(x.abs()));
        self.amperes = i
            .iter()
            .chain(&p.il)
            .fold(self.amperes, |a, x| a.max(x.abs()));
    }

    /// What counts as rounding in voltages and currents.
    pub(crate) fn small(&self) -> Small {
        Small {
            volts: (1e-10 * self.volts).max(self.rounding.volts(self.amperes)),
            amperes: (1e-10 * self.amperes).max(self.rounding.amperes(self.volts)),
        }
    }

    /// The rule of the run's method.
    pub(crate) fn rule(&self) -> Rule {
        match self.setup.method {
            Method::BackwardEuler => Rule::BackwardEuler,
            Method::Exact => Rule::Exact,
            _ => Rule::Trapezoidal,
        }
    }

    /// Calls the hook.
    pub(crate) fn ask(&self, time: f64) -> Result<(), Failure> {
        match self.request.hook {
            Some(hook) if !hook(time) => Err(Failure::Cancelled { time }),
            _ => Ok(()),
        }
    }

    /// Names of the parts of the latest events, for messages.
    pub(crate) fn latest(&self) -> Vec<String> {
        let mut parts: Vec<usize> = self
            .shot
            .events
            .iter()
            .rev()
            .take(20)
            .map(|e| e.part)
            .collect();
        parts.sort_unstable();
        parts.dedup();
        parts
            .into_iter()
            .take(6)
            .map(|p| name(self.setup, p))
            .collect()
    }
}

/// Whether two instants are one but for rounding.
#[must_use]
pub fn same(a: f64, b: f64) -> bool {
    (a - b).abs() <= SAME * a.abs().max(b.abs())
}

/// Zeros of the corner functions of all sources within the span, ascending, s.
fn corners(net: &Network, span: f64) -> Vec<f64> {
    let mut found = Vec::new();
    for s in &net.sources {
        for c in s.known.corners() {
            zeros(&c, span, &mut found);
        }
    }
    found.retain(|t| *t > 0.0 && *t < span);
    found.sort_by(f64::total_cmp);
    found.dedup_by(|a, b| same(*a, *b));
    found
}

/// Zeros of a function of time: exact where it is linear, else by scanning and halving.
fn zeros(f: &Formula, span: f64, found: &mut Vec<f64>) {
    const SCAN: u32 = 4096;
    let at = |t: f64| f.jet(t, Side::After, &pulsewright_circuit::formula::NoLeaves);
    let (a, b) = (at(0.0), at(span));
    if a.second == 0.0 && b.second == 0.0 && a.rate == b.rate && at(0.37 * span).rate == a.rate {
        if a.rate != 0.0 {
            found.push(-a.value / a.rate);
        }
        return;
    }
    let mut before = (0.0, a.value);
    for k in 1..=SCAN {
        let t = span * f64::from(k) / f64::from(SCAN);
        let v = at(t).value;
        if (v > 0.0) != (before.1 > 0.0) {
            let (mut lo, mut hi) = (before.0, t);
            for _ in 0..80 {
                let m = 0.5 * (lo + hi);
                if (at(m).value > 0.0) == (before.1 > 0.0) {
                    lo = m;
                } else {
                    hi = m;
                }
            }
            found.push(hi);
        }
        before = (t, v);
    }
}
