//! A netlist that was read: its circuit, its text, and the hash that a record names it by.

use crate::error::Error;
use crate::fault;
use pulsewright_circuit::fault::Fault;
use pulsewright_circuit::{Circuit, LetValue, Lets};
use pulsewright_netlist::{Mistakes, Source};
use pulsewright_report::Origin;
use pulsewright_study::outcome::{Fired, Judged, Set, SetValue};
use pulsewright_study::spread::{Draws, Tally};
use pulsewright_study::{Methods, Modes, Options, Rungs, StudyError, Worst};
use sha2::{Digest, Sha256};

/// Let-values given from outside, by name.
pub type Settings = Vec<(String, LetValue)>;

/// A netlist that was read.
///
/// # Example
///
/// ```
/// let netlist = pulsewright::Netlist::read(
///     "title \"a discharge\"
///      capacitor bank from top to ground = 32 uF, charged to 5 kV
///      resistor chest from top to ground = 50 ohm
///      span 10 ms
///      claim dose: energy into chest is at least 350 J",
/// )?;
/// assert_eq!(netlist.circuit().draft().title.as_deref(), Some("a discharge"));
/// # Ok::<(), pulsewright::Mistakes>(())
/// ```
#[derive(Clone, Debug)]
pub struct Netlist {
    read: pulsewright_netlist::Netlist,
    set: Settings,
    sha256: String,
}

impl Netlist {
    /// Reads a text.
    ///
    /// # Errors
    ///
    /// Every mistake in it.
    pub fn read(text: &str) -> Result<Self, Mistakes> {
        Netlist::read_named(text.as_bytes(), "netlist", Settings::new())
    }

    /// Reads bytes under the name that messages are to give them, with let-values held at
    /// other values than those written.
    ///
    /// # Errors
    ///
    /// Every mistake in it, of the text and of what is held.
    pub fn read_named(bytes: &[u8], name: &str, set: Settings) -> Result<Self, Mistakes> {
        let read = pulsewright_netlist::read_set(bytes, name, &set)?;
        Ok(Netlist {
            read,
            set,
            sha256: sha256(bytes),
        })
    }

    /// The circuit.
    #[must_use]
    pub fn circuit(&self) -> &Circuit {
        &self.read.circuit
    }

    /// The let-values that are held at other values than those written.
    #[must_use]
    pub fn settings(&self) -> &Settings {
        &self.set
    }

    /// The text and its lines.
    #[must_use]
    pub fn source(&self) -> &Source {
        &self.read.source
    }

    /// SHA-256 of the bytes that were read, in lower-case hexadecimal.
    #[must_use]
    pub fn sha256(&self) -> &str {
        &self.sha256
    }

    /// What was seen while reading that stops nothing, drawn in the text.
    #[must_use]
    pub fn remarks(&self) -> Mistakes {
        self.read.source.mistakes(self.read.remarks.clone())
    }

    /// What a record and a page say of the input.
    #[must_use]
    pub fn origin(&self) -> Origin<'_> {
        Origin {
            title: self.circuit().draft().title.as_deref(),
            sha256: &self.sha256,
            text: self.read.source.text(),
            set: in_words(&self.set),
        }
    }

    /// The let-values of every case in order: those held and those the cases vary.
    ///
    /// # Errors
    ///
    /// Mistakes in the values of a case.
    pub fn cases(&self) -> Result<Vec<Settings>, Mistakes> {
        self.circuit()
            .case_sets(&self.set)
            .map_err(|faults| self.mistakes(faults))
    }

    /// The numbers of all let-values in a case.
    ///
    /// # Errors
    ///
    /// Mistakes in its values.
    pub fn lets(&self, case: &[(String, LetValue)]) -> Result<Lets, Mistakes> {
        self.circuit()
            .lets(case)
            .map_err(|faults| self.mistakes(faults))
    }

    /// Puts numbers in for every case and looks for topologies without an answer, at the start
    /// and along the stated instants; fires nothing.
    ///
    /// # Errors
    ///
    /// Every mistake found, each once.
    pub fn check(&self) -> Result<(), Mistakes> {
        let mut faults: Vec<Fault> = Vec::new();
        for case in self.cases()? {
            let found = self.survey(&case);
            faults.extend(
                found
                    .into_iter()
                    .filter(|f| !faults.contains(f))
                    .collect::<Vec<_>>(),
            );
        }
        if faults.is_empty() {
            Ok(())
        } else {
            Err(self.mistakes(faults))
        }
    }

    /// The mistake of a netlist that is to be judged and makes no claim.
    #[must_use]
    pub fn nothing_to_judge(&self) -> Mistakes {
        self.mistakes(vec![fault::nothing_to_judge()])
    }

    fn survey(&self, case: &[(String, LetValue)]) -> Vec<Fault> {
        match self
            .circuit()
            .lets(case)
            .and_then(|lets| self.circuit().setup(&lets))
        {
            Err(faults) => faults,
            Ok(setup) => {
                let failures = pulsewright_engine::survey(&setup);
                failures
                    .iter()
                    .filter_map(|f| fault::of(f, self.circuit()))
                    .collect()
            }
        }
    }

    /// Fires one shot. The let-values that this netlist was read with are not held by themselves:
    /// [`Netlist::options`] holds them.
    ///
    /// # Errors
    ///
    /// [`Error`].
    pub fn fire(&self, options: &Options<'_>) -> Result<Fired, Error> {
        pulsewright_study::fire(self.circuit(), options).map_err(|e| self.error(e))
    }

    /// Fires every case at nominal values. What is held is said in `options`, as for
    /// [`Netlist::fire`].
    ///
    /// # Errors
    ///
    /// [`Error`].
    ///
    /// # Example
    ///
    /// ```
    /// let netlist = pulsewright::Netlist::read(
    ///     "let load = 50 ohm
    ///      voltage feed from top to ground = 10 V
    ///      resistor chest from top to ground = load
    ///      span 1 ms
    ///      cases load = 25 ohm, 50 ohm, open circuit
    ///      reading dose = energy into chest",
    /// )?;
    /// assert_eq!(netlist.fire_cases(&netlist.options())?.len(), 3);
    /// # Ok::<(), pulsewright::Error>(())
    /// ```
    pub fn fire_cases(&self, options: &Options<'_>) -> Result<Vec<Fired>, Error> {
        pulsewright_study::fire_cases(self.circuit(), options).map_err(|e| self.error(e))
    }

    /// Judges every case. What is held is said in `options`, as for [`Netlist::fire`].
    ///
    /// # Errors
    ///
    /// [`Error`].
    pub fn judge(&self, options: &Options<'_>) -> Result<Judged, Error> {
        pulsewright_study::judge(self.circuit(), options).map_err(|e| self.error(e))
    }

    /// Fires the draws of a study over spreads. What is held is said in `options`, as for
    /// [`Netlist::fire`].
    ///
    /// # Errors
    ///
    /// [`Error`].
    ///
    /// # Example
    ///
    /// ```
    /// use pulsewright::study::spread::{Draws, Spread};
    /// let netlist = pulsewright::Netlist::read(
    ///     "voltage feed from top to ground = 10 V, tolerance 10 %
    ///      resistor load from top to ground = 5 ohm
    ///      span 1 ms
    ///      claim low: highest voltage across load is at most 10.5 V, in at least 50 % of shots",
    /// )?;
    /// let draws = Draws { shots: 100, seed: 1, slice: [1, 1], threads: None };
    /// let spread = Spread::from(netlist.spread(&netlist.options(), draws)?);
    /// assert_eq!(spread.claims[0].1, pulsewright::Verdict::Holds);
    /// # Ok::<(), pulsewright::Error>(())
    /// ```
    pub fn spread(&self, options: &Options<'_>, draws: Draws) -> Result<Tally, Error> {
        pulsewright_study::spread(self.circuit(), options, draws).map_err(|e| self.error(e))
    }

    /// The worst corner of a claim over the tolerances with the let-values that `options` hold;
    /// none where it does not apply there, or nothing varies.
    ///
    /// # Errors
    ///
    /// [`Error`].
    ///
    /// # Example
    ///
    /// ```
    /// let netlist = pulsewright::Netlist::read(
    ///     "voltage feed from top to ground = 10 V, tolerance 10 %
    ///      resistor load from top to ground = 5 ohm
    ///      span 1 ms
    ///      claim low: highest voltage across load is at most 10.5 V",
    /// )?;
    /// let worst = netlist.corner(&netlist.options(), "low")?.expect("the feed varies");
    /// assert_eq!(worst.corner[0].name, "feed");
    /// assert!((worst.corner[0].value - 11.0).abs() < 1e-9);
    /// # Ok::<(), pulsewright::Error>(())
    /// ```
    pub fn corner(&self, options: &Options<'_>, claim: &str) -> Result<Option<Worst>, Error> {
        pulsewright_study::corner(self.circuit(), options, claim).map_err(|e| self.error(e))
    }

    /// Finds the natural frequencies in every topology that one case passes through. What is held
    /// is said in `options`, as for [`Netlist::fire`].
    ///
    /// # Errors
    ///
    /// [`Error`].
    ///
    /// # Example
    ///
    /// 50 ohm discharge 32 uF with a time constant of 1.6 ms:
    ///
    /// ```
    /// let netlist = pulsewright::Netlist::read(
    ///     "capacitor bank from top to ground = 32 uF, charged to 5 kV
    ///      resistor chest from top to ground = 50 ohm
    ///      span 10 ms",
    /// )?;
    /// let found = netlist.modes(&pulsewright::Options::default())?;
    /// let tau = found.topologies[0].modes[0].time_constant();
    /// assert!(tau.is_some_and(|tau| (tau - 1.6e-3).abs() < 1e-15));
    /// # Ok::<(), Box<dyn std::error::Error>>(())
    /// ```
    pub fn modes(&self, options: &Options<'_>) -> Result<Modes, Error> {
        pulsewright_study::modes(self.circuit(), options).map_err(|e| self.error(e))
    }

    /// Compares the integrators on one case over a ladder of steps. What is held is said in
    /// `options`, as for [`Netlist::fire`].
    ///
    /// # Errors
    ///
    /// [`Error`].
    pub fn methods(&self, options: &Options<'_>, rungs: &Rungs<'_>) -> Result<Methods, Error> {
        pulsewright_study::methods(self.circuit(), options, rungs).map_err(|e| self.error(e))
    }

    /// Options that hold the let-values that this netlist was read with.
    #[must_use]
    pub fn options(&self) -> Options<'static> {
        Options {
            held: self.set.clone(),
            ..Options::default()
        }
    }

    /// Draws faults in this text.
    fn mistakes(&self, faults: Vec<Fault>) -> Mistakes {
        self.read.source.mistakes(faults)
    }

    fn error(&self, error: StudyError) -> Error {
        let message = error.to_string();
        match error {
            StudyError::Faults(faults) => Error::Mistakes(self.mistakes(faults)),
            StudyError::Cancelled { time } => Error::Stopped { time },
            StudyError::InDraw { draw, seed, error } => match self.error(*error) {
                Error::Broke(why) => Error::Broke(format!("draw {draw} with seed {seed}: {why}")),
                other => other,
            },
            StudyError::Engine(failure) => match fault::of(&failure, self.circuit()) {
                Some(fault) => Error::Mistakes(self.mistakes(vec![fault])),
                None => Error::Broke(failure.to_string()),
            },
            StudyError::Floating { claim, .. } => Error::Mistakes(
                self.mistakes(vec![fault::floating(&claim, message, self.circuit())]),
            ),
            StudyError::NotAdjusted { .. } => {
                Error::Mistakes(self.mistakes(vec![fault::not_adjusted(message, self.circuit())]))
            }
            _ => Error::Broke(message),
        }
    }
}

/// SHA-256 of bytes, in lower-case hexadecimal.
///
/// # Example
///
/// ```
/// assert!(pulsewright::sha256(b"").starts_with("e3b0c44298fc1c14"));
/// ```
#[must_use]
pub fn sha256(bytes: &[u8]) -> String {
    Sha256::digest(bytes)
        .iter()
        .map(|byte| format!("{byte:02x}"))
        .collect()
}

/// Settings as results and records show them.
fn in_words(set: &Settings) -> Set {
    let word = |value: &LetValue| match value {
        LetValue::Number { value, dimension } => SetValue::Number {
            value: *value,
            unit: dimension.unit(),
        },
        LetValue::Open => SetValue::Circuit("open circuit".to_owned()),
        LetValue::Short => SetValue::Circuit("short circuit".to_owned()),
    };
    set.iter()
        .map(|(name, value)| (name.clone(), word(value)))
        .collect()
}
