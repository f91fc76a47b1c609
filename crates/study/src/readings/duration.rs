//! `duration WINDOW`: how long a window is, s.

use pulsewright_circuit::phrase::Window;

use super::{Number, Reader, Sample};

impl Reader<'_> {
    pub(super) fn duration(&self, w: Option<&Window>) -> Sample {
        let extent = self.extent(w)?;
        let ends = extent.intervals.iter().flat_map(|i| [i.start, i.end]);
        let (scales, size) = ends.fold((0.0, 0.0), |(a, b), t| (a + self.since_event(t), b + t));
        Ok(Number::itself(extent.length(), scales, size))
    }
}
