//! The run and its cases.

use super::{Builder, named};
use crate::draft::{Adjust, CaseValues, Cases, Limit, Method};
use crate::expr::Expr;
use crate::span::Span;

impl Builder {
    /// `span TIME`: how long the shot is followed.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert!(Builder::new("").span(seconds(30e-3)).draft().run.span.is_some());
    /// ```
    #[must_use]
    pub fn span(mut self, span: impl Into<Expr>) -> Self {
        self.draft.run.span = Some(span.into());
        self
    }

    /// `start steady`, in place of at rest.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(Builder::new("").start_steady().draft().run.steady, Some(true));
    /// ```
    #[must_use]
    pub fn start_steady(mut self) -> Self {
        self.draft.run.steady = Some(true);
        self
    }

    /// `integrate by METHOD`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// use pulsewright_circuit::draft::Method;
    /// let built = Builder::new("").integrate_by(Method::BackwardEuler);
    /// assert!(built.draft().run.method.is_some());
    /// ```
    #[must_use]
    pub fn integrate_by(mut self, method: Method) -> Self {
        self.draft.run.method = Some((method, Span::NONE));
        self
    }

    /// `error at most SHARE`: the error allowed in each reading.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert!(Builder::new("").error_at_most(ppm(1.0)).draft().run.error.is_some());
    /// ```
    #[must_use]
    pub fn error_at_most(mut self, share: impl Into<Expr>) -> Self {
        self.draft.run.error = Some(share.into());
        self
    }

    /// `time step TIME`: fixed steps.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert!(Builder::new("").time_step(seconds(1e-6)).draft().run.step.is_some());
    /// ```
    #[must_use]
    pub fn time_step(mut self, step: impl Into<Expr>) -> Self {
        self.draft.run.step = Some(step.into());
        self
    }

    /// `channels SIGNAL`; may repeat.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").channel(voltage_across("chest")).channel(current_through("choke"));
    /// assert_eq!(built.draft().run.channels.as_ref().map(Vec::len), Some(2));
    /// ```
    #[must_use]
    pub fn channel(mut self, signal: impl Into<Expr>) -> Self {
        self.draft
            .run
            .channels
            .get_or_insert_with(Vec::new)
            .push(signal.into());
        self
    }

    /// `limit WORD COUNT`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// use pulsewright_circuit::draft::Limit;
    /// assert_eq!(Builder::new("").limit(Limit::Steps, 1_000).draft().run.limits.len(), 1);
    /// ```
    #[must_use]
    pub fn limit(mut self, limit: Limit, count: u64) -> Self {
        self.draft.run.limits.push((limit, count, Span::NONE));
        self
    }

    /// `note "TEXT"`; may repeat.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(Builder::new("").note("measured at 20 degrees").draft().notes.len(), 1);
    /// ```
    #[must_use]
    pub fn note(mut self, text: &str) -> Self {
        self.draft.notes.push(text.to_owned());
        self
    }

    /// `cases NAME = VALUE, VALUE, …`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").cases("load", [ohms(25.0), ohms(50.0), open_circuit()]);
    /// # assert_eq!(built.draft().cases.len(), 1);
    /// ```
    #[must_use]
    pub fn cases(self, name: &str, values: impl Into<Vec<Expr>>) -> Self {
        let rows = values.into().into_iter().map(|value| vec![value]).collect();
        self.vary(&[name], CaseValues::Rows(rows))
    }

    /// `cases (NAME, NAME) = (VALUE, VALUE), …`: they move together.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let rows = [vec![joules(150.0), volts(3.4e3)], vec![joules(200.0), volts(3.9e3)]];
    /// let built = Builder::new("").cases_together(&["rated_j", "bank_v"], rows);
    /// # assert_eq!(built.draft().cases.len(), 1);
    /// ```
    #[must_use]
    pub fn cases_together(self, names: &[&str], rows: impl Into<Vec<Vec<Expr>>>) -> Self {
        self.vary(names, CaseValues::Rows(rows.into()))
    }

    /// `cases NAME = FROM to TO, COUNT values`, by equal difference.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").cases_from("load", ohms(25.0), ohms(175.0), 7);
    /// # assert_eq!(built.draft().cases.len(), 1);
    /// ```
    #[must_use]
    pub fn cases_from(
        self,
        name: &str,
        from: impl Into<Expr>,
        to: impl Into<Expr>,
        count: u32,
    ) -> Self {
        self.range(name, from.into(), to.into(), count, false)
    }

    /// `cases NAME = FROM to TO, COUNT values by equal ratio`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").cases_by_ratio("load", ohms(1.0), ohms(1e3), 4);
    /// # assert_eq!(built.draft().cases.len(), 1);
    /// ```
    #[must_use]
    pub fn cases_by_ratio(
        self,
        name: &str,
        from: impl Into<Expr>,
        to: impl Into<Expr>,
        count: u32,
    ) -> Self {
        self.range(name, from.into(), to.into(), count, true)
    }

    /// `adjust NAME from X to Y so that READING is Z`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let dose = energy_into("chest");
    /// let built = Builder::new("").adjust("bank_v", volts(1e3), volts(6e3), dose, joules(150.0));
    /// # assert!(built.draft().adjust.is_some());
    /// ```
    #[must_use]
    pub fn adjust(
        mut self,
        name: &str,
        from: impl Into<Expr>,
        to: impl Into<Expr>,
        reading: impl Into<Expr>,
        value: impl Into<Expr>,
    ) -> Self {
        self.draft.adjust = Some(Adjust {
            name: named(name),
            from: from.into(),
            to: to.into(),
            reading: reading.into(),
            value: value.into(),
            span: Span::NONE,
        });
        self
    }

    fn range(self, name: &str, from: Expr, to: Expr, count: u32, by_ratio: bool) -> Self {
        self.vary(
            &[name],
            CaseValues::Range {
                from,
                to,
                count,
                by_ratio,
                count_span: Span::NONE,
            },
        )
    }

    fn vary(mut self, names: &[&str], values: CaseValues) -> Self {
        let names = names.iter().map(|n| named(n)).collect();
        self.draft.cases.push(Cases {
            names,
            values,
            span: Span::NONE,
        });
        self
    }
}
