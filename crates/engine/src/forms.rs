//! Quantities of the circuit as linear forms in what a solution holds.
//!
//! Voltages, currents, charges and fluxes are linear in the unknowns, the inductances' currents
//! and the sources; powers and energies are not, and are put together where they are read.

use pulsewright_circuit::formula::Probe;

use crate::equations::{Point, potential};
use crate::network::{Law, Network};
use crate::topology::Mode;

/// A quantity as a linear form in what a solution holds.
#[derive(Clone, Debug, Default)]
pub struct Form {
    /// Of the unknowns.
    pub y: Vec<(usize, f64)>,
    /// Of the inductances' currents.
    pub il: Vec<(usize, f64)>,
    /// Of the sources' known values.
    pub source: Vec<(usize, f64)>,
    /// A constant.
    pub constant: f64,
}

impl Form {
    /// Its value at a point.
    #[must_use]
    pub fn value(&self, p: &Point) -> f64 {
        let mut sum = self.constant;
        for &(k, c) in &self.y {
            sum += c * p.y[k];
        }
        for &(k, c) in &self.il {
            sum += c * p.il[k];
        }
        for &(k, c) in &self.source {
            sum += c * p.sources.jets[k][0];
        }
        sum
    }

    /// Its rate of change at a point.
    #[must_use]
    pub fn rate(&self, p: &Point) -> f64 {
        let mut sum = 0.0;
        for &(k, c) in &self.y {
            sum += c * p.dy[k];
        }
        for &(k, c) in &self.il {
            sum += c * p.dil[k];
        }
        for &(k, c) in &self.source {
            sum += c * p.sources.jets[k][1];
        }
        sum
    }

    /// Adds `k` times another form.
    pub fn add(&mut self, other: &Form, k: f64) {
        self.y.extend(other.y.iter().map(|&(i, c)| (i, k * c)));
        self.il.extend(other.il.iter().map(|&(i, c)| (i, k * c)));
        self.source
            .extend(other.source.iter().map(|&(i, c)| (i, k * c)));
        self.constant += k * other.constant;
    }
}

/// A voltage between two nodes as a form, V.
#[must_use]
pub fn voltage_form(a: usize, b: usize) -> Form {
    let mut form = Form::default();
    if a != b {
        form.y.extend(potential(a).map(|k| (k, 1.0)));
        form.y.extend(potential(b).map(|k| (k, -1.0)));
    }
    form
}

/// A branch's current as a form, A.
#[must_use]
pub fn current_form(net: &Network, modes: &[Mode], branch: usize) -> Form {
    let b = &net.branches[branch];
    if let Some(c) = b.current {
        return Form {
            y: vec![(net.nodes - 1 + c, 1.0)],
            ..Form::default()
        };
    }
    match modes[branch] {
        Mode::Resistive { siemens, offset } => {
            let mut f = voltage_form(b.a, b.b);
            f.y.iter_mut().for_each(|t| t.1 *= siemens);
            f.constant = -siemens * offset;
            f
        }
        Mode::Inductance(j) => Form {
            il: vec![(j, 1.0)],
            ..Form::default()
        },
        Mode::Current(s) => Form {
            source: vec![(s, 1.0)],
            ..Form::default()
        },
        _ => Form::default(),
    }
}

/// A probe as a form; `None` for powers and energies, which are not linear.
#[must_use]
pub fn probe_form(net: &Network, modes: &[Mode], probe: Probe) -> Option<Form> {
    let branch = |part: usize, k: usize| {
        net.of_part
            .get(part)
            .map(|r| r.start + k)
            .filter(|&b| b < net.branches.len())
    };
    match probe {
        Probe::VoltageAcross(part) => net.ends.get(part).map(|&(a, b)| voltage_form(a, b)),
        Probe::Voltage(a, b) => Some(voltage_form(a, b)),
        Probe::CurrentThrough(part) => {
            let mut form = Form::default();
            for (k, sign) in net.terminal(part) {
                form.add(&current_form(net, modes, k), sign);
            }
            Some(form)
        }
        Probe::BranchVoltage(part, k) => {
            branch(part, k).map(|b| voltage_form(net.branches[b].a, net.branches[b].b))
        }
        Probe::BranchCurrent(part, k) => branch(part, k).map(|b| current_form(net, modes, b)),
        Probe::ChargeHeld(part) => {
            let b = branch(part, 0)?;
            let Law::Capacitance(c) = net.branches[b].law else {
                return None;
            };
            let mut form = voltage_form(net.branches[b].a, net.branches[b].b);
            form.y
                .iter_mut()
                .for_each(|t| t.1 *= net.capacitances[c].farads);
            Some(form)
        }
        Probe::FluxHeld(part) => {
            let b = branch(part, 0)?;
            let Law::Inductance(l) = net.branches[b].law else {
                return None;
            };
            Some(Form {
                il: net.inductances[l].henrys.clone(),
                ..Form::default()
            })
        }
        _ => None,
    }
}
