//! What a caller asks of `fire` and `judge`.

use pulsewright_circuit::{Expr, LetValue, Positions};

/// How far a run has come.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Progress {
    /// The case that is fired, counted from 1.
    pub case: usize,
    /// How many cases there are.
    pub of: usize,
    /// How often the steps of the first mesh have been halved.
    pub halvings: u32,
    /// The instant reached, s.
    pub time: f64,
    /// The span, s.
    pub span: f64,
}

/// Called now and then, from any thread; `false` stops the run.
pub type Hook<'a> = &'a (dyn Fn(Progress) -> bool + Sync);

/// What a caller asks for beside what the netlist states.
#[derive(Clone, Default)]
pub struct Options<'a> {
    /// Let-values held at other than their stated value.
    pub held: Vec<(String, LetValue)>,
    /// The case to fire in place of the nominal let-values, counted from 1; `fire` only.
    pub case: Option<usize>,
    /// Where values stand within their spreads; nominal by default, `fire` only.
    pub at: Positions,
    /// Whether what each part had to stand is read as well.
    pub stress: bool,
    /// The channels in place of those that the netlist states.
    pub channels: Option<Vec<Expr>>,
    /// Whether the run goes without its second opinion.
    pub alone: bool,
    /// Told how far the run has come; may stop it.
    pub hook: Option<Hook<'a>>,
}
