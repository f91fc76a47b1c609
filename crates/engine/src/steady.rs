//! The steady state that `start steady` begins in.
//!
//! Sources are held at their value at 0 s and switches as they start. In the steady state no
//! capacitance carries a current and no inductance a voltage; stated values are held. What these
//! leave open is chosen for the least stored energy. With `w` for node potentials, currents of
//! ties and inductances, that is
//!
//! ```text
//!   min wᵀ Q w / 2   with   E w = r,      Q w + Eᵀ m = 0
//! ```
//!
//! solved by the pseudo-inverse, since neither `w` nor the multipliers `m` need be unique.

use pulsewright_circuit::formula::Side;
use pulsewright_circuit::setup::Setup;

use crate::equations::{Drive, potential, volts};
use crate::failure::Failure;
use crate::network::{Network, name};
use crate::topology::{Mode, mode};

/// Rows and columns at most; the pseudo-inverse is dense.
const AT_MOST: usize = 1500;

/// Voltages of the capacitances and currents of the inductances in the steady state.
///
/// # Errors
///
/// [`Failure::NoSteadyState`]; [`Failure::NotYet`] for circuits too large for it.
pub fn steady(
    net: &Network,
    setup: &Setup,
    states: &[u8],
) -> Result<(Vec<f64>, Vec<f64>), Failure> {
    let mut drive = Drive::default();
    drive.at(net, 0.0, Side::After);
    let modes: Vec<Mode> = net
        .branches
        .iter()
        .map(|b| mode(&b.law, states[b.part]))
        .collect();
    let nodes = net.nodes - 1;
    // Unknowns: potentials, then a current for every branch that is no plain resistance.
    let mut current = vec![None; modes.len()];
    let mut n = nodes;
    for (k, m) in modes.iter().enumerate() {
        if !matches!(m, Mode::Resistive { .. } | Mode::Open) {
            current[k] = Some(n);
            n += 1;
        }
    }
    let mut rows: Vec<(Vec<(usize, f64)>, f64)> = vec![(Vec::new(), 0.0); nodes];
    for (k, m) in modes.iter().enumerate() {
        let b = &net.branches[k];
        for (node, sign) in [(b.a, 1.0), (b.b, -1.0)] {
            let Some(r) = potential(node) else { continue };
            match (current[k], m) {
                (Some(c), _) => rows[r].0.push((c, sign)),
                (None, Mode::Resistive { siemens, offset }) => {
                    rows[r].0.extend(across(b.a, b.b, sign * siemens));
                    rows[r].1 += sign * siemens * offset;
                }
                _ => {}
            }
        }
        if let Some(c) = current[k] {
            rows.push(law_row(net, &drive, &modes, &current, k, c)?);
        }
    }
    let size = n + rows.len();
    if size > AT_MOST {
        return Err(Failure::NotYet(format!(
            "`start steady` takes circuits of up to {AT_MOST} rows, this one has {size}"
        )));
    }
    let w = least(net, n, &rows, &current).ok_or_else(|| no_answer(net, setup))?;
    let scale: f64 = rows
        .iter()
        .map(|r| r.1.abs())
        .fold(0.0, f64::max)
        .max(w.iter().fold(0.0, |a, x| a.max(x.abs())));
    for (row, r) in &rows {
        let left: f64 = row.iter().map(|&(c, k)| k * w[c]).sum();
        let size: f64 = row.iter().map(|&(c, k)| (k * w[c]).abs()).sum::<f64>() + r.abs();
        if (left - r).abs() > 1e-8 * size.max(1e-6 * scale) {
            return Err(no_answer(net, setup));
        }
    }
    let vc = net
        .capacitances
        .iter()
        .map(|c| {
            let b = &net.branches[c.branch];
            c.charged.unwrap_or_else(|| volts(&w, b.a, b.b))
        })
        .collect();
    let il = net
        .inductances
        .iter()
        .map(|l| {
            l.carrying
                .unwrap_or_else(|| current[l.branch].map_or(0.0, |c| w[c]))
        })
        .collect();
    Ok((vc, il))
}

/// The law of a branch with a current of its own: coefficients and right side.
fn law_row(
    net: &Network,
    drive: &Drive,
    modes: &[Mode],
    current: &[Option<usize>],
    k: usize,
    own: usize,
) -> Result<(Vec<(usize, f64)>, f64), Failure> {
    let b = &net.branches[k];
    let voltage = across(b.a, b.b, 1.0);
    Ok(match modes[k] {
        Mode::Capacitance(c) => match net.capacitances[c].charged {
            Some(v) => (voltage, v),
            None => (vec![(own, 1.0)], 0.0),
        },
        Mode::Inductance(l) => match net.inductances[l].carrying {
            Some(i) => (vec![(own, 1.0)], i),
            None => (voltage, 0.0),
        },
        Mode::Tie { offset } => (voltage, offset),
        Mode::Voltage(s) | Mode::Current(s) => {
            let mut row = if matches!(modes[k], Mode::Voltage(_)) {
                voltage
            } else {
                vec![(own, 1.0)]
            };
            let mut value = drive.jets[s][0];
            for (probe, factor) in &net.sources[s].terms {
                let Some(form) = crate::forms::probe_form(net, modes, *probe) else {
                    return Err(Failure::NotYet(
                        "a steady start with this controlled source".to_owned(),
                    ));
                };
                value += factor * form.constant;
                for &(y, c) in &form.y {
                    // A current among the unknowns of the equations is another column here.
                    let column = match y.checked_sub(net.nodes - 1) {
                        None => Some(y),
                        Some(i) => net
                            .branches
                            .iter()
                            .position(|b| b.current == Some(i))
                            .and_then(|k| current[k]),
                    };
                    row.extend(column.map(|y| (y, -factor * c)));
                }
                for &(j, c) in &form.il {
                    row.extend(current[net.inductances[j].branch].map(|y| (y, -factor * c)));
                }
            }
            (row, value)
        }
        _ => (vec![(own, 1.0)], 0.0),
    })
}

fn across(a: usize, b: usize, k: f64) -> Vec<(usize, f64)> {
    potential(a)
        .map(|c| (c, k))
        .into_iter()
        .chain(potential(b).map(|c| (c, -k)))
        .collect()
}

/// The solution of least energy, by the pseudo-inverse of the bordered matrix.
fn least(
    net: &Network,
    n: usize,
    rows: &[(Vec<(usize, f64)>, f64)],
    current: &[Option<usize>],
) -> Option<Vec<f64>> {
    let size = n + rows.len();
    let mut m = faer::Mat::<f64>::zeros(size, size);
    let mut r = vec![0.0; size];
    let largest_c = net
        .capacitances
        .iter()
        .map(|c| c.farads)
        .fold(0.0, f64::max);
    let largest_l = net
        .inductances
        .iter()
        .map(|l| l.henrys[0].1)
        .fold(0.0, f64::max);
    let most = largest_c.max(largest_l).max(f64::MIN_POSITIVE);
    for c in &net.capacitances {
        let b = &net.branches[c.branch];
        for (i, x) in across(b.a, b.b, 1.0) {
            for (j, y) in across(b.a, b.b, 1.0) {
                m[(i, j)] += x * y * c.farads / most;
            }
        }
    }
    for l in &net.inductances {
        for &(k, h) in &l.henrys {
            if let (Some(i), Some(j)) = (current[l.branch], current[net.inductances[k].branch]) {
                m[(i, j)] += h / most;
            }
        }
    }
    for (k, (row, right)) in rows.iter().enumerate() {
        let top = row.iter().map(|t| t.1.abs()).fold(0.0, f64::max);
        let scale = if top > 0.0 { 1.0 / top } else { 1.0 };
        for &(c, x) in row {
            m[(n + k, c)] += scale * x;
            m[(c, n + k)] += scale * x;
        }
        r[n + k] = scale * right;
    }
    let svd = m.svd().ok()?;
    let (u, s, v) = (svd.U(), svd.S(), svd.V());
    let cut = 1e-12 * (0..size).map(|k| s[k]).fold(0.0, f64::max);
    let mut w = vec![0.0; n];
    for k in 0..size {
        if s[k] > cut {
            let part: f64 = (0..size).map(|i| u[(i, k)] * r[i]).sum::<f64>() / s[k];
            for (i, x) in w.iter_mut().enumerate() {
                *x += part * v[(i, k)];
            }
        }
    }
    Some(w)
}

fn no_answer(net: &Network, setup: &Setup) -> Failure {
    let sources = net.sources.iter().map(|s| net.branches[s.branch].part);
    let stated = net
        .capacitances
        .iter()
        .filter(|c| c.charged.is_some())
        .map(|c| c.branch)
        .chain(
            net.inductances
                .iter()
                .filter(|l| l.carrying.is_some())
                .map(|l| l.branch),
        )
        .map(|b| net.branches[b].part);
    Failure::NoSteadyState {
        names: sources
            .chain(stated)
            .take(8)
            .map(|p| name(setup, p))
            .collect(),
    }
}
