//! A signal of the language along the shot, made once for all readings that use it.

use std::rc::Rc;

use pulsewright_circuit::formula::Side;
use pulsewright_circuit::{Dimension, Expr};

use super::{Extent, Lack, Reader, absent, said, said_time};
use crate::waveform::{Interval, Wave};

/// A signal with its words.
pub struct Signal<'a> {
    /// As the language writes it.
    pub text: String,
    /// Its dimension.
    pub dimension: Dimension,
    /// Its values along the shot.
    pub wave: Wave<'a>,
}

impl Signal<'_> {
    /// A value of it in words.
    #[must_use]
    pub fn said(&self, value: f64) -> String {
        said(value, self.dimension)
    }

    /// Nothing where no impulse lies in the intervals.
    ///
    /// # Errors
    ///
    /// [`Lack::Unbounded`] with the instant of the first impulse.
    pub fn without_impulse(&self, window: &[Interval]) -> Result<(), Lack> {
        match window
            .iter()
            .find_map(|i| self.wave.impulses_in(*i).first().copied())
        {
            Some((t, _)) => Err(Lack::Unbounded(format!(
                "{} has an impulse at {}",
                self.text,
                said_time(t)
            ))),
            None => Ok(()),
        }
    }

    /// Nothing where the signal has a meaning of its own throughout the intervals.
    ///
    /// # Errors
    ///
    /// [`Lack::Floating`] where it depends on the potential at which an island was held.
    pub fn grounded(&self, window: &[Interval]) -> Result<(), Lack> {
        if window.iter().any(|i| self.wave.is_floating(*i)) {
            Err(self.floating())
        } else {
            Ok(())
        }
    }

    /// Likewise at an instant.
    ///
    /// # Errors
    ///
    /// As for [`Signal::grounded`].
    pub fn grounded_at(&self, t: f64, side: Side) -> Result<(), Lack> {
        if self.wave.is_floating_at(t, side) {
            Err(self.floating())
        } else {
            Ok(())
        }
    }

    fn floating(&self) -> Lack {
        Lack::Floating(format!(
            "{} depends on the potential at which a part of the circuit floats; name its reference: \
             write `voltage from A to B` with both nodes in that part",
            self.text
        ))
    }
}

impl<'a> Reader<'a> {
    /// The signal that an expression makes.
    ///
    /// # Errors
    ///
    /// [`Lack::Absent`] where the expression is no signal.
    pub fn signal(&self, expr: &Expr) -> Result<Rc<Signal<'a>>, Lack> {
        if let Some((_, s)) = self.signals.borrow().iter().find(|(e, _)| e == expr) {
            return Ok(Rc::clone(s));
        }
        let case = &self.case;
        let Ok(formula) = case.circuit.formula(case.setup, case.lets, expr) else {
            return absent(format!("{expr} is no signal in this case"));
        };
        let wave = Wave::of(&formula, &self.record);
        let made = Rc::new(Signal {
            text: expr.to_string(),
            dimension: case.circuit.dimension(expr),
            wave,
        });
        self.signals
            .borrow_mut()
            .push((expr.clone(), Rc::clone(&made)));
        Ok(made)
    }

    /// The signal, which must float nowhere in the window.
    pub(super) fn signal_in(&self, expr: &Expr, extent: &Extent) -> Result<Rc<Signal<'a>>, Lack> {
        let signal = self.signal(expr)?;
        signal.grounded(&extent.intervals)?;
        Ok(signal)
    }
}
