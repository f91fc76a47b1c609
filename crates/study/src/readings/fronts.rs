//! Fronts: rise, fall, front time, virtual origin, time to half value.
//!
//! ```text
//!   1   .............___
//!   f2  .........../    \
//!   f1  ......../        \____ 1/2
//!           o  t1  t2        th
//!
//!   rise t2 - t1      front time (t2 - t1) / (f2 - f1)
//!   virtual origin o = t1 - f1 (t2 - t1) / (f2 - f1)      time to half value th - o
//! ```
//!
//! All are of the signal turned so that its largest value in the window is positive. `t1` and
//! `t2` are the first crossings of the two fractions, before the largest value.

use pulsewright_circuit::Expr;
use pulsewright_circuit::phrase::Window;

use super::crossings::Crested;
use super::{Extent, Lack, Number, Reader, Sample, absent};
use crate::waveform::{Interval, falls, rises};

/// The two crossings of a front with their fractions.
struct Front<'a> {
    crested: Crested<'a>,
    extent: Extent,
    fractions: (f64, f64),
    times: (Number, Number),
}

impl Front<'_> {
    fn rise(&self) -> Number {
        Number::between(self.times.0, self.times.1)
    }

    fn front_time(&self) -> Number {
        let k = 1.0 / (self.fractions.1 - self.fractions.0);
        let rise = self.rise();
        Number {
            value: k * rise.value,
            scale: k * rise.scale,
            size: k * rise.size,
        }
    }

    fn origin(&self) -> Number {
        let (front, f) = (self.front_time(), self.fractions.0);
        let value = self.times.0.value - f * front.value;
        Number {
            value,
            scale: self.times.0.scale,
            size: self.times.0.size + f * front.size,
        }
    }
}

impl<'a> Reader<'a> {
    fn front(
        &self,
        signal: &Expr,
        from: &Expr,
        to: &Expr,
        w: Option<&Window>,
    ) -> Result<Front<'a>, Lack> {
        let extent = self.filled(w)?;
        extent.unbroken()?;
        let fractions = (self.value(from)?.value, self.value(to)?.value);
        let crested = self.crested(signal, &extent)?;
        let first = |share: f64| {
            let runs = crested.runs(&extent, share);
            match rises(&runs).first() {
                Some(found) => Ok(self.rise_at(&crested.signal, *found)),
                None => absent(format!(
                    "{} never rises through {}",
                    crested.signal.text,
                    crested.said(share)
                )),
            }
        };
        let times = (first(fractions.0)?, first(fractions.1)?);
        Ok(Front {
            crested,
            extent,
            fractions,
            times,
        })
    }

    /// `rise of SIGNAL from 10 % to 90 %`, s.
    pub(super) fn rise(&self, signal: &Expr, from: &Expr, to: &Expr, w: Option<&Window>) -> Sample {
        Ok(self.front(signal, from, to, w)?.rise())
    }

    /// `front time of SIGNAL from 30 % to 90 %`, s.
    pub(super) fn front_time(
        &self,
        signal: &Expr,
        from: &Expr,
        to: &Expr,
        w: Option<&Window>,
    ) -> Sample {
        Ok(self.front(signal, from, to, w)?.front_time())
    }

    /// `virtual origin of SIGNAL from 30 % to 90 %`, s.
    pub(super) fn virtual_origin(
        &self,
        signal: &Expr,
        from: &Expr,
        to: &Expr,
        w: Option<&Window>,
    ) -> Sample {
        Ok(self.front(signal, from, to, w)?.origin())
    }

    /// `time to half value of SIGNAL with front from 30 % to 90 %`, s.
    pub(super) fn time_to_half(
        &self,
        signal: &Expr,
        from: &Expr,
        to: &Expr,
        w: Option<&Window>,
    ) -> Sample {
        let front = self.front(signal, from, to, w)?;
        let crested = &front.crested;
        let after = self.part_of(&front.extent, crested.at.time);
        match falls(&crested.runs(&after, 0.5)).first() {
            Some(t) => Ok(Number::between(
                front.origin(),
                self.crossing_at(&crested.signal, *t),
            )),
            None => absent(format!(
                "{} is still above {} at the end of {}",
                crested.signal.text,
                crested.said(0.5),
                front.extent.end_words
            )),
        }
    }

    /// `fall of SIGNAL from 90 % to 10 %`, s: from the last crossing of the upper to the first
    /// crossing of the lower after it.
    pub(super) fn fall(&self, signal: &Expr, from: &Expr, to: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        extent.unbroken()?;
        let (upper, lower) = (self.value(from)?.value, self.value(to)?.value);
        let crested = self.crested(signal, &extent)?;
        let still = |share: f64| {
            absent(format!(
                "{} is still above {} at the end of {}",
                crested.signal.text,
                crested.said(share),
                extent.end_words
            ))
        };
        let runs = crested.runs(&extent, upper);
        let Some(start) = falls(&runs)
            .last()
            .copied()
            .filter(|_| runs.last().is_some_and(|r| r.sign <= 0))
        else {
            return still(upper);
        };
        match falls(&crested.runs(&extent, lower))
            .into_iter()
            .find(|t| *t >= start)
        {
            Some(end) => Ok(Number::between(
                self.crossing_at(&crested.signal, start),
                self.crossing_at(&crested.signal, end),
            )),
            None => still(lower),
        }
    }

    /// What of a window follows an instant.
    pub(super) fn part_of(&self, extent: &Extent, start: f64) -> Extent {
        let cut = |i: &Interval| Interval {
            start: i.start.max(start),
            ..*i
        };
        let intervals = extent
            .intervals
            .iter()
            .filter(|i| i.end > start)
            .map(cut)
            .collect();
        Extent {
            intervals,
            end_words: extent.end_words.clone(),
        }
    }
}
