//! `heat in PART`: what turns to heat in its resistances, and what it loses at jumps, J.

use pulsewright_circuit::Name;
use pulsewright_circuit::phrase::Window;
use pulsewright_engine::heat_ports;

use super::{Number, Reader, Sample};

impl Reader<'_> {
    pub(super) fn heat(&self, part: &Name, w: Option<&Window>) -> Sample {
        let extent = self.extent(w)?;
        let part = self.part(part)?;
        let mut sum = self.products(&heat_ports(self.case.setup, part), &extent.intervals);
        for jump in self.record.jumps_in(&extent.intervals) {
            jump.losses
                .iter()
                .filter(|l| l.0 == part)
                .for_each(|l| sum.add(l.1));
        }
        Ok(Number::new(sum.net, sum.gross))
    }
}
