//! How fast a topology can move: the magnitudes of its natural frequencies.

use pulsewright_circuit::setup::Setup;

use crate::equations::Equations;
use crate::failure::Failure;
use crate::network::Network;

/// Up to so many states all natural frequencies are found; above, the fastest is estimated.
const ALL_AT_MOST: usize = 60;

/// Magnitudes of the natural frequencies, 1/s: all for small circuits, an estimate of the largest
/// for large ones. Kept with the equations.
///
/// # Errors
///
/// [`Failure::Singular`].
pub fn rates<'a>(
    equations: &'a mut Equations,
    net: &Network,
    setup: &Setup,
) -> Result<&'a [f64], Failure> {
    if equations.rates.is_none() {
        let (n, m) = (net.capacitances.len(), net.inductances.len());
        let found = if n + m <= ALL_AT_MOST {
            all(equations, net, setup, n, m)?
        } else {
            fastest(equations, net, setup, n, m)?
        };
        equations.rates = Some(found);
    }
    Ok(equations.rates.as_deref().unwrap_or_default())
}

fn all(
    equations: &mut Equations,
    net: &Network,
    setup: &Setup,
    n: usize,
    m: usize,
) -> Result<Vec<f64>, Failure> {
    let size = n + m;
    let mut a = faer::Mat::<f64>::zeros(size, size);
    for k in 0..size {
        let unit = |j: usize| if j == k { 1.0 } else { 0.0 };
        let vc: Vec<f64> = (0..n).map(unit).collect();
        let il: Vec<f64> = (0..m).map(|j| unit(n + j)).collect();
        let (dvc, dil) = equations.homogeneous(net, setup, &vc, &il)?;
        // Energy coordinates, so that the entries are comparable.
        let weight = |j: usize| {
            if j < n {
                net.capacitances[j].farads.sqrt()
            } else {
                net.inductances[j - n].henrys[0].1.sqrt()
            }
        };
        for (j, d) in dvc.iter().chain(&dil).enumerate() {
            a[(j, k)] = d * weight(j) / weight(k);
        }
    }
    if size == 0 {
        return Ok(Vec::new());
    }
    Ok(a.eigenvalues()
        .map(|e| {
            e.into_iter()
                .map(|z| z.re.hypot(z.im))
                .filter(|r| r.is_finite())
                .collect()
        })
        .unwrap_or_default())
}

fn fastest(
    equations: &mut Equations,
    net: &Network,
    setup: &Setup,
    n: usize,
    m: usize,
) -> Result<Vec<f64>, Failure> {
    let mut vc: Vec<f64> = (0..n)
        .map(|k| if k % 2 == 0 { 1.0 } else { -0.7 })
        .collect();
    let mut il: Vec<f64> = (0..m)
        .map(|k| if k % 2 == 0 { -0.3 } else { 0.9 })
        .collect();
    let mut rate = 0.0;
    for _ in 0..12 {
        let (dvc, dil) = equations.homogeneous(net, setup, &vc, &il)?;
        let norm = |v: &[f64], i: &[f64]| {
            let c: f64 = v
                .iter()
                .zip(&net.capacitances)
                .map(|(x, c)| c.farads * x * x)
                .sum();
            let l: f64 = i
                .iter()
                .zip(&net.inductances)
                .map(|(x, l)| l.henrys[0].1 * x * x)
                .sum();
            (c + l).sqrt()
        };
        let (before, after) = (norm(&vc, &il), norm(&dvc, &dil));
        if !(before > 0.0 && after > 0.0) {
            break;
        }
        rate = after / before;
        vc = dvc.iter().map(|x| x / after).collect();
        il = dil.iter().map(|x| x / after).collect();
    }
    Ok(vec![rate])
}
