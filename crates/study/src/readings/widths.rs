//! The width of a pulse: from the first to the last crossing of a fraction of its largest value.
//!
//! ```text
//!            crest ......... _
//!                          /   \
//!  fraction * crest ..... /.....\ ...
//!                       t0       t1      width = t1 - t0
//! ```
//!
//! A pulse that rings counts as one pulse. One that is above the level at the window's start
//! begins there; one that is still above at its end has no width.

use pulsewright_circuit::Expr;
use pulsewright_circuit::phrase::Window;

use super::{Number, Reader, Sample, absent};
use crate::waveform::{falls, rises};

impl Reader<'_> {
    pub(super) fn width(&self, signal: &Expr, fraction: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        extent.unbroken()?;
        let share = self.value(fraction)?.value;
        let crested = self.crested(signal, &extent)?;
        let (signal, runs) = (&crested.signal, crested.runs(&extent, share));
        match (rises(&runs).first(), falls(&runs).last()) {
            (Some(start), Some(end)) if runs.last().is_some_and(|r| r.sign <= 0) => Ok(
                Number::between(self.rise_at(signal, *start), self.crossing_at(signal, *end)),
            ),
            _ => absent(format!(
                "{} is still above {} at the end of {}",
                signal.text,
                crested.said(share),
                extent.end_words
            )),
        }
    }
}
