//! What varies in a study: each value with a spread, by name, and where it stands within it.
//!
//! A position `p` runs from -1 at a spread's lower end to 1 at its upper one. With `x` for the
//! nominal value, an amount `a`, a share `s`:
//!
//! ```text
//! tolerance a, s                  x + a p           x (1 + s p)
//! tolerance a to b                x + a (1 - p)/2 + b (1 + p)/2, shares likewise
//! standard deviation a, s         x + 3 a p         x (1 + 3 s p)
//! standard deviation s lognormal                    x exp(3 s p)
//! ```
//!
//! so that a box of positions from -1 to 1 is the box of tolerances, a normal's ending at three
//! deviations. All are affine in `x`, which lets a source's whole expression be moved. How a
//! position is drawn is left to the study.

use std::collections::HashMap;

use crate::dimension::Dimension;
use crate::draft::Draft;
use crate::formula::Formula;
use crate::parts::{Control, Part, PartKind};
use crate::schedule::{Action, Change, TriggerKind};
use crate::slots::slots;
use crate::spread::{SpreadKind, Value};

/// How a value is distributed within its spread.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[non_exhaustive]
pub enum Law {
    /// Evenly between the ends.
    Even,
    /// Normal, or of the logarithm normal, cut at three deviations, where the ends are.
    Normal,
}

/// A value that varies in a study.
#[derive(Clone, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub struct Varying {
    /// What it is called: a part's own value and a let-value by name, another by part and
    /// qualifier (`choke winding`, `fire closes at`).
    pub name: String,
    /// How it is distributed.
    pub law: Law,
}

/// Where each value that varies stands within its spread, in the order of
/// [`Circuit::varying`](crate::Circuit::varying); beyond its end all are nominal.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Positions(Vec<Option<f64>>);

impl Positions {
    /// Every value at its nominal one.
    #[must_use]
    pub const fn nominal() -> Self {
        Positions(Vec::new())
    }

    /// Each value at a position from -1 to 1, or (`None`) nominal.
    #[must_use]
    pub const fn new(positions: Vec<Option<f64>>) -> Self {
        Positions(positions)
    }

    /// The positions.
    #[must_use]
    pub fn as_slice(&self) -> &[Option<f64>] {
        &self.0
    }
}

impl FromIterator<f64> for Positions {
    fn from_iter<I: IntoIterator<Item = f64>>(positions: I) -> Self {
        Positions(positions.into_iter().map(Some).collect())
    }
}

/// A value as it stands in a study.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub struct Stand {
    /// Its name, as in [`Varying`].
    pub name: String,
    /// The number, in coherent SI units; of what changes with time the factor it is taken by.
    pub value: f64,
    /// Its dimension.
    pub dimension: Dimension,
}

impl Stand {
    /// A value as it stands.
    #[must_use]
    pub fn new(name: &str, value: f64, dimension: Dimension) -> Self {
        Stand {
            name: name.to_owned(),
            value,
            dimension,
        }
    }
}

/// A value with a spread, where it stands in the draft.
pub(crate) struct Site<'a> {
    pub name: String,
    pub value: &'a Value,
    /// `None` for a let-value and a level, whose dimension is that of their expression.
    pub dimension: Option<Dimension>,
    pub is_let: bool,
}

/// The values with a spread in the order of the text: let-values, then parts.
pub(crate) fn sites(draft: &Draft) -> Vec<Site<'_>> {
    let mut found = Sites::default();
    for l in &draft.lets {
        found.add(l.name.text.clone(), &l.value, None, true);
    }
    for part in &draft.parts {
        found.part(part);
    }
    found.sites
}

#[derive(Default)]
struct Sites<'a> {
    sites: Vec<Site<'a>>,
    named: HashMap<String, usize>,
}

impl<'a> Sites<'a> {
    /// Adds a value where it has a spread; a name that is taken gets a number.
    fn add(&mut self, name: String, value: &'a Value, dimension: Option<Dimension>, is_let: bool) {
        if value.spread.is_none() {
            return;
        }
        let count = self.named.entry(name.clone()).or_insert(0);
        *count += 1;
        let name = if *count == 1 {
            name
        } else {
            format!("{name} {count}")
        };
        self.sites.push(Site {
            name,
            value,
            dimension,
            is_let,
        });
    }

    fn part(&mut self, part: &'a Part) {
        for slot in slots(&part.kind) {
            let name = match qualifier(slot.word) {
                "" => part.name.text.clone(),
                word => format!("{} {word}", part.name),
            };
            self.add(name, slot.value, Some(slot.dimension), false);
        }
        match &part.kind {
            PartKind::Switch(p) => {
                if let Control::Schedule { actions, .. } = &p.control {
                    self.actions(part, actions);
                }
            }
            PartKind::Changeover(p) => self.actions(part, &p.actions),
            _ => {}
        }
    }

    fn actions(&mut self, part: &Part, actions: &'a [Action]) {
        for action in actions {
            let does = match &action.change {
                Change::Closes => "closes".to_owned(),
                Change::Opens => "opens".to_owned(),
                Change::MovesTo(node) => format!("moves to {node}"),
            };
            for trigger in &action.triggers {
                let (word, value, dimension) = match &trigger.kind {
                    TriggerKind::At(value) => ("at", value, Some(Dimension::SECOND)),
                    TriggerKind::When { level, .. } => ("when", level, None),
                    TriggerKind::Delay { delay, .. } => ("after", delay, Some(Dimension::SECOND)),
                    TriggerKind::ZeroCurrent { .. } => continue,
                };
                self.add(
                    format!("{} {does} {word}", part.name),
                    value,
                    dimension,
                    false,
                );
            }
        }
    }
}

/// The word of the language for a value of a part.
fn qualifier(word: &'static str) -> &'static str {
    match word {
        "starting voltage" => "charged",
        "starting current" => "carrying",
        "series resistance" => "series",
        "winding resistance" => "winding",
        "contact resistance" => "contact",
        other => other,
    }
}

/// How a spread is distributed.
pub(crate) const fn law(kind: &SpreadKind) -> Law {
    match kind {
        SpreadKind::Tolerance(_) | SpreadKind::Limits(..) => Law::Even,
        SpreadKind::Deviation(_) | SpreadKind::Lognormal(_) => Law::Normal,
    }
}

/// The positions by the value's place in the draft.
#[derive(Clone, Debug, Default)]
pub(crate) struct Moves(HashMap<*const Value, f64>);

impl Moves {
    pub fn new(draft: &Draft, positions: &Positions) -> Self {
        if positions.0.is_empty() {
            return Moves::default();
        }
        let found = sites(draft).into_iter().zip(&positions.0);
        Moves(
            found
                .filter_map(|(site, p)| Some((std::ptr::from_ref(site.value), (*p)?)))
                .collect(),
        )
    }

    pub fn of(&self, value: &Value) -> Option<f64> {
        self.0.get(&std::ptr::from_ref(value)).copied()
    }
}

/// What a value becomes: `scale x + add`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Shift {
    pub scale: f64,
    pub add: f64,
}

impl Shift {
    const NONE: Shift = Shift {
        scale: 1.0,
        add: 0.0,
    };

    /// The shift of a spread at a position; `amount` gives each of its expressions as a number,
    /// and whether it is a share.
    pub fn at(
        kind: &SpreadKind,
        p: f64,
        amount: &dyn Fn(&crate::Expr) -> Option<(f64, bool)>,
    ) -> Self {
        let even = |e: &crate::Expr, by: f64| match amount(e) {
            Some((a, true)) => Shift {
                scale: 1.0 + a * by,
                add: 0.0,
            },
            Some((a, false)) => Shift {
                scale: 1.0,
                add: a * by,
            },
            None => Shift::NONE,
        };
        match kind {
            SpreadKind::Tolerance(e) => even(e, p),
            SpreadKind::Deviation(e) => even(e, 3.0 * p),
            SpreadKind::Lognormal(e) => Shift {
                scale: amount(e).map_or(1.0, |(a, _)| (3.0 * a * p).exp()),
                add: 0.0,
            },
            SpreadKind::Limits(low, high) => {
                let (low, high, m) = (even(low, 1.0), even(high, 1.0), f64::midpoint(1.0, p));
                Shift {
                    scale: low.scale * (1.0 - m) + high.scale * m,
                    add: low.add * (1.0 - m) + high.add * m,
                }
            }
        }
    }

    pub fn of(self, x: f64) -> f64 {
        self.scale * x + self.add
    }

    /// The same of a formula.
    pub fn of_formula(self, f: Formula) -> Formula {
        if let Formula::Number(x) = f {
            return Formula::Number(self.of(x));
        }
        let scaled = Formula::Multiply(Box::new(Formula::Number(self.scale)), Box::new(f));
        if self.add == 0.0 {
            scaled
        } else {
            Formula::Add(Box::new(scaled), Box::new(Formula::Number(self.add)))
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::builder::*;
    use crate::setup::Element;
    use crate::{Circuit, Expr};

    fn amount(e: &Expr) -> Option<(f64, bool)> {
        match e.kind {
            crate::ExprKind::Number {
                value, dimension, ..
            } => Some((value, dimension.is_none())),
            _ => None,
        }
    }

    fn check(kind: &SpreadKind, nominal: f64, ends: [f64; 2]) {
        for (p, end) in [(-1.0, ends[0]), (1.0, ends[1])] {
            assert_eq!(Shift::at(kind, p, &amount).of(nominal), end);
        }
    }

    #[test]
    fn the_ends_of_each_form() {
        let volts = |x| Expr::number(x, Dimension::VOLT);
        check(&SpreadKind::Tolerance(Expr::share(0.5)), 4.0, [2.0, 6.0]);
        check(&SpreadKind::Tolerance(volts(1.0)), 4.0, [3.0, 5.0]);
        check(
            &SpreadKind::Limits(volts(-1.0), volts(3.0)),
            4.0,
            [3.0, 7.0],
        );
        check(
            &SpreadKind::Limits(Expr::share(-0.25), Expr::share(0.5)),
            4.0,
            [3.0, 6.0],
        );
        check(&SpreadKind::Deviation(Expr::share(0.125)), 4.0, [2.5, 5.5]);
        let e = 3.0_f64.exp();
        check(
            &SpreadKind::Lognormal(Expr::share(1.0)),
            4.0,
            [4.0 * (-3.0_f64).exp(), 4.0 * e],
        );
    }

    fn divider() -> Circuit {
        let built = Builder::new("a divider")
            .let_value("load", ohms(50.0))
            .capacitor("bank", "top", "ground", farads(1e-6))
            .tolerance(percent(5.0))
            .resistor("chest", "top", "ground", name("load"))
            .tolerance(ohms(1.0))
            .span(seconds(1e-3));
        let mut draft = built.draft().clone();
        draft.lets[0].value.spread = Some(crate::spread::Spread {
            kind: SpreadKind::Tolerance(Expr::share(0.1)),
            span: crate::Span::NONE,
        });
        draft.check().unwrap()
    }

    #[test]
    fn values_vary_by_their_own_names_and_in_their_own_spreads() {
        let circuit = divider();
        let names: Vec<String> = circuit.varying().into_iter().map(|v| v.name).collect();
        assert_eq!(names, ["load", "bank", "chest"]);
        let at: Positions = [1.0, -1.0, 1.0].into_iter().collect();
        let lets = circuit.lets_at(&[], &at).unwrap();
        let setup = circuit.setup_at(&lets, &at).unwrap();
        let stands = circuit.stands(&lets, &at);
        for (stand, value) in stands.iter().zip([55.0, 0.95e-6, 56.0]) {
            assert!((stand.value - value).abs() < 1e-14 * value, "{stand:?}");
        }
        let Element::Resistor { ohms, .. } = setup.parts[1].element else {
            panic!()
        };
        assert_eq!(ohms, crate::setup::Ohms::Finite(stands[2].value));
    }
}
