//! What a circuit's own rounding amounts to, where nothing else flows.
//!
//! A voltage of V taken as a difference of solved potentials is uncertain by some eps V, and
//! drives a current of that through whatever it lies across. What is smaller than the least of
//! these currents carries no information: it must neither turn a diode nor ask for steps.

use crate::network::{Law, Network};

/// Rounding of a solved voltage or current over the largest there is.
const SHARE: f64 = 1e-14;

/// How voltages' rounding turns into currents', and the reverse.
#[derive(Clone, Copy, Debug, Default)]
pub struct Rounding {
    /// Least admittance of a branch, S.
    siemens: f64,
    /// Least impedance of a branch, ohm.
    ohms: f64,
}

impl Rounding {
    /// Looks at the branches; storage counts by what it does in `span`, s.
    #[must_use]
    pub fn new(net: &Network, span: f64) -> Rounding {
        let ohms = |law: &Law| match law {
            Law::Resistance(r) => Some(*r),
            Law::Capacitance(c) => net.capacitances.get(*c).map(|c| span / c.farads),
            Law::Inductance(j) => net
                .inductances
                .get(*j)
                .and_then(|l| l.henrys.first())
                .map(|h| h.1 / span),
            _ => None,
        };
        let all = || net.branches.iter().filter_map(|b| ohms(&b.law));
        let (least, most) = (
            all().fold(f64::INFINITY, f64::min),
            all().fold(0.0_f64, f64::max),
        );
        let finite = |x: f64| if x.is_finite() { x } else { 0.0 };
        Rounding {
            siemens: finite(1.0 / most),
            ohms: finite(least),
        }
    }

    /// The current that rounding of `volts` drives, A.
    #[must_use]
    pub fn amperes(&self, volts: f64) -> f64 {
        SHARE * volts * self.siemens
    }

    /// The voltage that rounding of `amperes` drops, V.
    #[must_use]
    pub fn volts(&self, amperes: f64) -> f64 {
        SHARE * amperes * self.ohms
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_empty_network_has_no_rounding() {
        let r = Rounding::new(&Network::default(), 1.0);
        assert!(r.amperes(100.0) == 0.0 && r.volts(100.0) == 0.0);
    }
}
